//! What was measured, beside the run.

use super::Material;
use super::figures::tidy;
use super::html::{HtmlTable, escape, paragraph};
use crate::render::chart::number::capital;
use crate::render::measured;

/// The table of errors; nothing without records.
pub fn section(material: &Material<'_>) -> String {
    if material.records.is_empty() {
        return String::new();
    }
    let heads = measured::HEADS.map(capital);
    let heads: Vec<&str> = heads.iter().map(String::as_str).collect();
    let mut table = HtmlTable::new("<<>>>>>>>", &heads).class("small");
    for one in material.records {
        let cells = measured::cells(one, material.written.shown());
        table.row(cells.iter().map(|cell| {
            let parts: Vec<String> = cell.split(" / ").map(|part| escape(&signed(part))).collect();
            parts.join(" / ")
        }));
    }
    format!(
        "<h3>Measured and computed</h3>\n{}{}",
        paragraph(
            "Errors are computed less measured, over the rows of the record that lie within the run; between \
             rows of the series the run is taken as straight lines. A lag above zero means that the run does the \
             same later than the record. No figure of this page was fitted to the records."
        ),
        table.html()
    )
}

/// A figure with true minus and its unit held to it; a sign before it stays.
fn signed(text: &str) -> String {
    match text.strip_prefix('+') {
        Some(rest) => format!("+{}", tidy(rest)),
        None => tidy(text),
    }
}
