//! Section 4: the inputs as given, with units and where they come from.

use super::Material;
use super::html::{HtmlTable, escape, paragraph};
use crate::quantity::Dimension;
use crate::render::chart::number::{capital, unit_text, words};
use crate::scenario::patch;
use crate::tree::Node;

/// Keys at the top of the file that are no inputs of the physics, or stand elsewhere on the page.
const ELSEWHERE: [&str; 7] =
    ["lodeshaft", "title", "about", "document", "display", "studies", "requirements"];

/// Longest list that is shown value by value.
const MOST_POINTS: usize = 12;

/// The section's content.
pub fn section(material: &Material<'_>) -> String {
    let Node::Map(entries) = material.node else { return String::new() };
    let mut html = paragraph(
        "All values as given in the file; a bare number is in SI and its unit is added here. \
         What is not listed has its default.",
    );
    let mut settings = HtmlTable::new("<<", &["Setting", "Given"]);
    let mut sections = String::new();
    for (key, node) in entries {
        if ELSEWHERE.contains(&key.as_str()) {
            continue;
        }
        let things = match node {
            Node::Map(things) if things.iter().all(|(_, thing)| matches!(thing, Node::Map(_))) => {
                things
            }
            Node::Null => continue,
            _ if key == "signals" => {
                sections.push_str(&section_table(material, key, named(node)));
                continue;
            }
            _ => {
                let mut lines = Vec::new();
                flatten(material, key, key, node, &mut lines);
                for (name, value) in lines {
                    settings.row([escape(&capital(&name)), escape(&value)]);
                }
                continue;
            }
        };
        sections.push_str(&section_table(material, key, things));
    }
    html.push_str(&settings.html());
    html.push_str(&sections);
    html.push_str(&sources(entries));
    html
}

fn named(node: &Node) -> &[(String, Node)] {
    match node {
        Node::Map(entries) => entries,
        _ => &[],
    }
}

/// One table for a section: a thing, its values, their source.
fn section_table(material: &Material<'_>, section: &str, things: &[(String, Node)]) -> String {
    let mut table = HtmlTable::new("<<<", &["Name", "Given", "Source"]).class("inputs");
    for (name, thing) in things {
        let mut lines = Vec::new();
        let path = format!("{section}.{name}");
        match thing {
            Node::Map(entries) => {
                for (key, node) in entries.iter().filter(|(key, _)| key != "source") {
                    flatten(material, key, &format!("{path}.{key}"), node, &mut lines);
                }
            }
            other => flatten(material, "", &path, other, &mut lines),
        }
        let given: Vec<String> = lines
            .iter()
            .map(|(key, value)| {
                let key = if key.is_empty() {
                    String::new()
                } else {
                    format!("<span class=\"key-name\">{}</span> ", escape(key))
                };
                format!("{key}{}", escape(value))
            })
            .collect();
        let source = match thing.get("source") {
            Some(Node::Text(text)) => escape(text),
            _ => "<small>not stated</small>".to_owned(),
        };
        table.row([format!("<b>{}</b>", escape(name)), given.join("<br>"), source]);
    }
    if table.is_empty() {
        return String::new();
    }
    format!("<h3>{}</h3>\n{}", escape(&capital(&words(section))), table.html())
}

/// A value in lines of key and text; maps are taken apart.
fn flatten(
    material: &Material<'_>,
    label: &str,
    path: &str,
    node: &Node,
    lines: &mut Vec<(String, String)>,
) {
    match node {
        Node::Map(entries) => {
            for (key, inside) in entries {
                let label =
                    if label.is_empty() { words(key) } else { format!("{label}, {}", words(key)) };
                flatten(material, &label, &format!("{path}.{key}"), inside, lines);
            }
        }
        Node::Number(value) => {
            let unit =
                patch::value_at(material.node, path).map_or("", |found| unit_of(found.dimension));
            lines.push((words(label), pretty(&join(&value.to_string(), unit))));
        }
        other => lines.push((words(label), text(other))),
    }
}

fn unit_of(dimension: Dimension) -> &'static str {
    match dimension {
        Dimension::One => "",
        other => other.si_unit(),
    }
}

fn join(figure: &str, unit: &str) -> String {
    if unit.is_empty() { figure.to_owned() } else { format!("{figure} {unit}") }
}

/// A value on one line, as typed.
fn text(node: &Node) -> String {
    match node {
        Node::Null => "–".to_owned(),
        Node::Bool(true) => "yes".to_owned(),
        Node::Bool(false) => "no".to_owned(),
        Node::Number(value) => value.to_string(),
        Node::Text(text) => pretty(text),
        Node::List(items) => {
            let mut list: Vec<String> = items.iter().take(MOST_POINTS).map(text).collect();
            if items.len() > MOST_POINTS {
                list.push(format!("… {} in all", items.len()));
            }
            let nested = items.iter().any(|item| matches!(item, Node::List(_) | Node::Map(_)));
            list.join(if nested { "; " } else { ", " })
        }
        Node::Map(entries) => {
            let list: Vec<String> = entries
                .iter()
                .map(|(key, value)| format!("{} {}", words(key), text(value)))
                .collect();
            list.join(", ")
        }
    }
}

/// A quantity as typed with its unit as printed; other text stays.
fn pretty(text: &str) -> String {
    match text.split_once(' ') {
        Some((figure, unit)) if figure.parse::<f64>().is_ok() && !unit.contains(' ') => {
            format!("{}\u{a0}{}", figure.replace('-', "\u{2212}"), unit_text(unit))
        }
        _ => text.to_owned(),
    }
}

/// How many things say where their figures come from.
fn sources(entries: &[(String, Node)]) -> String {
    let counted =
        ["bodies", "shafts", "magnetic_gears", "magnetic_couplings", "motors", "loads", "brakes"];
    let things: Vec<&Node> = entries
        .iter()
        .filter(|(key, _)| counted.contains(&key.as_str()))
        .flat_map(|(_, section)| named(section))
        .map(|(_, thing)| thing)
        .collect();
    let told = things.iter().filter(|thing| thing.get("source").is_some()).count();
    let all = things.len();
    if all == 0 {
        return String::new();
    }
    paragraph(&match told {
        0 => format!("None of the {all} parts of the train says where its figures come from."),
        _ if told == all => "Every part of the train says where its figures come from.".to_owned(),
        _ => format!(
            "{told} of the {all} parts of the train say where their figures come from; the others do not."
        ),
    })
}
