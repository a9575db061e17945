//! Section 6: what it takes to run the same again.

use super::Material;
use super::html::{HtmlTable, escape, folded, paragraph};
use super::sha::sha256;
use crate::signal::Signal;

/// Licence of the font inside the page.
const FONT_LICENCE: &str = include_str!("../fonts/OFL.txt");

/// The section's content.
pub fn section(material: &Material<'_>) -> String {
    let source = material.source;
    let mut table = HtmlTable::new("<<", &["What", "Which"]);
    let mut row = |name: &str, html: String| table.row([name.to_owned(), html]);
    row("Program", concat!("lodeshaft ", env!("CARGO_PKG_VERSION")).to_owned());
    row("Scenario", format!("<code>{}</code>", escape(&source.name)));
    row(
        "SHA-256 of its text",
        format!("<code class=\"hash\">{}</code>", sha256(source.text.as_bytes())),
    );
    for (path, value) in &source.sets {
        row("Set from outside", format!("<code>{} = {}</code>", escape(path), escape(value)));
    }
    for (name, file, rows) in tables(material) {
        row(
            "Table of a signal",
            format!(
                "<code>{}</code> in <code>{}</code>, {rows} rows",
                escape(&file),
                escape(&name)
            ),
        );
    }
    let command = command(&source.name, &source.sets);
    row("Command", format!("<code>{}</code>", escape(&command)));
    let mut html = paragraph(
        "The same file with the same version of the program gives the same figures. The hash tells whether a file \
         is this one.",
    );
    html.push_str(&table.html());
    let text = format!("<pre>{}</pre>\n", escape(&source.text));
    html.push_str(&folded("The scenario as it was read", &text));
    let licence = format!("<pre class=\"licence\">{}</pre>\n", escape(FONT_LICENCE));
    html.push_str(&folded(
        "Licence of the font in this page (SIL Open Font License 1.1)",
        &licence,
    ));
    html
}

/// The command that makes this page, values set from outside included.
fn command(file: &str, sets: &[(String, String)]) -> String {
    let mut command = format!("lodeshaft report {}", quoted(file));
    for (path, value) in sets {
        command.push_str(&format!(" --set {}", quoted(&format!("{path}={value}"))));
    }
    command
}

/// A word for a shell, in quotes where it holds more than plain letters.
fn quoted(word: &str) -> String {
    let plain = |c: char| c.is_ascii_alphanumeric() || "_-./=,:+".contains(c);
    if !word.is_empty() && word.chars().all(plain) {
        word.to_owned()
    } else {
        format!("'{}'", word.replace('\'', "'\\''"))
    }
}

/// Tables that named signals read: name of the signal, file, rows.
fn tables(material: &Material<'_>) -> Vec<(String, String, usize)> {
    let mut found = Vec::new();
    for named in &material.scenario.signals {
        named.signal.visit("", &mut |_, signal| {
            if let Signal::Table { file, rows, .. } = signal {
                found.push((named.name.clone(), file.clone(), rows.len()));
            }
        });
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_command_can_be_pasted_into_a_shell() {
        let sets = [("bodies.hub.inertia".to_owned(), "2 kg*m2".to_owned())];
        let told = command("a file.yaml", &sets);
        assert_eq!(told, "lodeshaft report 'a file.yaml' --set 'bodies.hub.inertia=2 kg*m2'");
        assert_eq!(quoted("it's"), "'it'\\''s'");
        assert_eq!(command("pump.yaml", &[]), "lodeshaft report pump.yaml");
    }
}
