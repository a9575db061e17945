//! A comparison as a table for spreadsheets: every figure, one a row, SI.

use super::Side;
use crate::analysis::comparison::Found;
use crate::render::number;

/// Every figure of every run: `figure,unit,<run>,...`.
pub fn table(side: &Side<'_>) -> String {
    let mut writer = csv::WriterBuilder::new().from_writer(Vec::new());
    let names = side.origins.iter().map(|origin| origin.name.as_str());
    // Writing to memory cannot fail.
    let _ = writer.write_record(["figure", "unit"].into_iter().chain(names));
    for figure in &side.comparison.figures {
        let values = figure.values.iter().map(|value| match value {
            None => String::new(),
            Some(Found::Number(value)) => number::plain(*value),
            Some(Found::Count(count)) => count.to_string(),
            Some(Found::Word(word)) => (*word).to_owned(),
        });
        let head = [figure.path.clone(), figure.unit.to_owned()];
        let _ = writer.write_record(head.into_iter().chain(values));
    }
    String::from_utf8(writer.into_inner().unwrap_or_default()).unwrap_or_default()
}
