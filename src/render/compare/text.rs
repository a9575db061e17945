//! A comparison for people at a terminal.

use super::{Side, figures};
use crate::render::table::{Table, wrap};
use crate::render::text::WIDTH;
use std::fmt::Write as _;

/// Inputs told; a comparison of unlike trains has many.
const MOST_INPUTS: usize = 40;

/// The comparison as text.
pub fn text(side: &Side<'_>) -> String {
    let mut text = String::new();
    let _ = writeln!(text, "Comparison of {} runs", side.origins.len());
    let mut table = Table::new("<<<");
    for origin in side.origins {
        let sets: Vec<String> =
            origin.sets.iter().map(|(path, value)| format!("{path}={value}")).collect();
        let from =
            if origin.kept { format!("results in {}", origin.from) } else { origin.from.clone() };
        table.cells(vec![origin.name.clone(), from, sets.join("; ")]);
    }
    text.push_str(&table.text(2));
    text.push_str(&inputs(side));
    text.push_str(&answers(side));
    for note in side.notes {
        text.push('\n');
        text.push_str(&wrap("Note: ", note, WIDTH));
    }
    let last = format!("Results in {}: {}", side.output_folder, side.files.join(", "));
    text.push('\n');
    text.push_str(&wrap("", &last, WIDTH));
    text
}

fn head(side: &Side<'_>, first: &[&str]) -> Vec<String> {
    first
        .iter()
        .map(|cell| (*cell).to_owned())
        .chain(side.origins.iter().map(|origin| origin.name.clone()))
        .collect()
}

fn inputs(side: &Side<'_>) -> String {
    let inputs = &side.comparison.inputs;
    if inputs.is_empty() {
        return "\nThe inputs are the same.\n".to_owned();
    }
    let mut table = Table::new(&format!("<{}", ">".repeat(side.origins.len())));
    table.cells(head(side, &["input"]));
    for input in inputs.iter().take(MOST_INPUTS) {
        let values = input.values.iter().map(|value| match value {
            Some(value) => value.clone(),
            None => "\u{2013}".to_owned(),
        });
        table.cells(std::iter::once(input.path.clone()).chain(values).collect());
    }
    let mut text = format!("\nInputs that differ\n{}", table.text(2));
    if inputs.len() > MOST_INPUTS {
        let more = inputs.len() - MOST_INPUTS;
        let _ = writeln!(text, "  and {more} more, in compare.json");
    }
    text
}

fn answers(side: &Side<'_>) -> String {
    let told = figures::told(side.comparison);
    let rest = figures::rest_sentence(side.comparison, "compare.csv");
    if told.is_empty() {
        return format!("\nNo answer differs notably.\n{}", wrap("  ", &rest, WIDTH));
    }
    let shown = side.shown();
    let mut table = Table::new(&format!("<<{}", ">".repeat(2 * side.origins.len())));
    let mut cells = vec!["answer".to_owned(), String::new()];
    for origin in side.origins {
        cells.extend([origin.name.clone(), String::new()]);
    }
    table.cells(cells);
    let mut before = "";
    for figure in told {
        let of = if figure.of == before { String::new() } else { figure.of.clone() };
        before = &figure.of;
        let mut cells = vec![of, figure.what.to_owned()];
        for (value, change) in figure.values.iter().zip(figure.changes()) {
            cells.push(figures::value(figure, value.as_ref(), shown));
            cells.push(figures::change(change));
        }
        table.cells(cells);
    }
    format!("\nAnswers that differ\n{}{}", table.text(2), wrap("  ", &rest, WIDTH))
}
