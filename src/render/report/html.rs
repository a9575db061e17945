//! Pieces of the page: text made safe, tables, figures with numbers, folded parts.

use crate::render::chart::drawing::Drawing;
pub use crate::render::chart::svg::escape;
use serde_json::Value;

/// Text made safe, with names between backticks as code.
pub fn rich(text: &str) -> String {
    let mut html = String::new();
    for (place, part) in text.split('`').enumerate() {
        if place % 2 == 1 {
            html.push_str(&format!("<code>{}</code>", escape(part)));
        } else {
            html.push_str(&units(&escape(part)));
        }
    }
    html
}

/// Units within a sentence as they are printed.
fn units(text: &str) -> String {
    text.replace("N*m", "N·m").replace("kg*m2", "kg·m²").replace("*s/rad", "·s/rad")
}

/// A paragraph of safe text.
pub fn paragraph(html: &str) -> String {
    format!("<p>{html}</p>\n")
}

/// A list of safe texts.
pub fn list(items: &[String]) -> String {
    if items.is_empty() {
        return String::new();
    }
    let items: String = items.iter().map(|item| format!("<li>{item}</li>\n")).collect();
    format!("<ul>\n{items}</ul>\n")
}

/// A part that opens on demand.
pub fn folded(summary: &str, html: &str) -> String {
    format!("<details><summary>{}</summary>\n{html}</details>\n", escape(summary))
}

/// The drawn tick, cross or dash of a verdict; the word stands beside it.
pub fn verdict_mark(met: Option<bool>) -> &'static str {
    match met {
        Some(true) => {
            "<svg class=\"mark\" viewBox=\"0 0 12 12\" aria-hidden=\"true\"><path d=\"M2 6.5 5 9.5 10.5 2.5\" \
             fill=\"none\" stroke=\"currentColor\" stroke-width=\"2\"/></svg>"
        }
        Some(false) => {
            "<svg class=\"mark\" viewBox=\"0 0 12 12\" aria-hidden=\"true\"><path d=\"M2 2 10 10M10 2 2 10\" \
             fill=\"none\" stroke=\"currentColor\" stroke-width=\"2\"/></svg>"
        }
        None => {
            "<svg class=\"mark\" viewBox=\"0 0 12 12\" aria-hidden=\"true\"><path d=\"M1.5 6H10.5\" \
             fill=\"none\" stroke=\"currentColor\" stroke-width=\"2\"/></svg>"
        }
    }
}

/// A verdict: shape, word, colour.
pub fn verdict(met: Option<bool>) -> String {
    let (class, word) = match met {
        Some(true) => ("met", "met"),
        Some(false) => ("fails", "not met"),
        None => ("unknown", "not judged"),
    };
    format!("<span class=\"verdict {class}\">{}{word}</span>", verdict_mark(met))
}

/// A table whose cells are safe HTML.
#[derive(Clone, Debug, Default)]
pub struct HtmlTable {
    /// One letter a column: `<` text, `>` number.
    sides: String,
    head: Vec<String>,
    rows: Vec<Vec<String>>,
    class: &'static str,
}

impl HtmlTable {
    /// A table with columns aligned as `sides` says and these heads (plain text).
    pub fn new(sides: &str, head: &[&str]) -> Self {
        Self {
            sides: sides.to_owned(),
            head: head.iter().map(|text| escape(text)).collect(),
            rows: Vec::new(),
            class: "",
        }
    }

    /// The same with a class for the style sheet.
    pub fn class(mut self, class: &'static str) -> Self {
        self.class = class;
        self
    }

    /// Adds a row of safe cells.
    pub fn row(&mut self, cells: impl IntoIterator<Item = String>) {
        self.rows.push(cells.into_iter().collect());
    }

    /// True without rows.
    pub fn is_empty(&self) -> bool {
        self.rows.is_empty()
    }

    /// The table as HTML; nothing without rows.
    pub fn html(&self) -> String {
        if self.rows.is_empty() {
            return String::new();
        }
        let side = |place: usize| match self.sides.chars().nth(place) {
            Some('>') => " class=\"n\"",
            _ => "",
        };
        let mut html = String::from("<div class=\"scroll\"><table");
        if !self.class.is_empty() {
            html.push_str(&format!(" class=\"{}\"", self.class));
        }
        html.push_str(">\n<thead><tr>");
        for (place, text) in self.head.iter().enumerate() {
            html.push_str(&format!("<th scope=\"col\"{}>{text}</th>", side(place)));
        }
        html.push_str("</tr></thead>\n<tbody>\n");
        for row in &self.rows {
            html.push_str("<tr>");
            for (place, cell) in row.iter().enumerate() {
                html.push_str(&format!("<td{}>{cell}</td>", side(place)));
            }
            html.push_str("</tr>\n");
        }
        html.push_str("</tbody></table></div>\n");
        html
    }
}

/// Numbers figures and gives each drawing ids of its own.
#[derive(Clone, Debug, Default)]
pub struct Figures {
    count: usize,
}

impl Figures {
    /// A figure with its number, caption (safe HTML) and what stands behind it, folded.
    pub fn figure(&mut self, drawing: &Drawing, caption: &str, behind: &str) -> String {
        self.with_data(drawing, caption, behind, None)
    }

    /// The same with the data of its curves, which the script reads.
    pub fn with_data(
        &mut self,
        drawing: &Drawing,
        caption: &str,
        behind: &str,
        data: Option<&Value>,
    ) -> String {
        self.count += 1;
        let number = self.count;
        // Within a script element only `<` could end the data early.
        let data = data.map_or_else(String::new, |data| {
            let text = data.to_string().replace('<', "\\u003c");
            format!("<script type=\"application/json\" class=\"data\">{text}</script>\n")
        });
        let svg = drawing.to_inline_svg(&format!("fig{number}"));
        let behind =
            if behind.is_empty() { String::new() } else { folded("Values as a table", behind) };
        format!(
            "<figure id=\"figure-{number}\" class=\"chart\">\n<div class=\"sheet\" tabindex=\"0\">{svg}</div>\n\
             <figcaption><b>Figure {number}.</b> {caption}</figcaption>\n{data}</figure>\n{behind}"
        )
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_become_code_and_nothing_stays_unsafe() {
        assert_eq!(rich("`a<b` & c"), "<code>a&lt;b</code> &amp; c");
    }

    #[test]
    fn units_in_sentences_are_printed_ones() {
        assert_eq!(rich("from 700 N*m to `a.N*m`"), "from 700 N·m to <code>a.N*m</code>");
    }

    #[test]
    fn numbers_stand_right() {
        let mut table = HtmlTable::new("<>", &["name", "value"]);
        assert!(table.html().is_empty() && table.is_empty());
        table.row(["a".to_owned(), "1".to_owned()]);
        assert!(table.html().contains("<td>a</td><td class=\"n\">1</td>"));
    }
}
