//! What stands below each thing.

use super::order::{Node, is_member_only};
use super::view::{Link, Port, Schematic};
use crate::render::chart::drawing::{Anchor, TextStyle};
use crate::render::chart::font;
use crate::render::chart::palette::{Ink, Side};
use crate::render::chart::pen::{self, Pen};

/// Distance of two lines, px.
pub const PITCH: f64 = 13.5;

/// Runs of text with their styles: one line.
pub type Words = Vec<(String, TextStyle)>;

/// Names of a magnetic gear's members and their sides.
pub const MEMBERS: [(&str, Side); 3] =
    [("inner", Side::Inner), ("modulator", Side::Modulator), ("outer", Side::Outer)];

fn grey(text: &str) -> Words {
    vec![(text.to_owned(), pen::label(Ink::Sub, Anchor::Start))]
}

fn strong(text: &str) -> Words {
    vec![(text.to_owned(), pen::bold(Ink::Ink, Anchor::Start))]
}

/// The lines below a node.
pub fn lines(train: &Schematic, node: Node) -> Vec<Words> {
    let mut lines = match node {
        Node::Disc(body) => train.bodies.get(body).map_or_else(Vec::new, |body| {
            vec![strong(&body.name), grey(&body.inertia_text), grey(&body.referred_text)]
        }),
        Node::Device(link) => {
            train.links.get(link).map_or_else(Vec::new, |link| device(train, link))
        }
    };
    lines.retain(|line| line.iter().any(|(text, _)| !text.is_empty()));
    lines
}

fn device(train: &Schematic, link: &Link) -> Vec<Words> {
    let mut lines = match link {
        Link::MagneticGear { name, members, counts, text } => {
            let counted =
                MEMBERS.iter().zip(members).zip(counts).map(|(((member, side), port), count)| {
                    let held = if *port == Port::Ground { ", held" } else { "" };
                    (format!("{member} {count}{held}"), pen::bold(side.text(), Anchor::Start))
                });
            vec![strong(name), counted.collect(), grey(text)]
        }
        Link::Coupling { name, text, .. }
        | Link::GearPair { name, text, .. }
        | Link::Planetary { name, text, .. } => vec![strong(name), grey(text)],
        Link::Shaft { .. } => Vec::new(),
    };
    let members = link.ports().iter().filter_map(|port| match port {
        Port::Body(body) if is_member_only(train, *body) => train.bodies.get(*body),
        _ => None,
    });
    let grey = pen::label(Ink::Sub, Anchor::Start);
    lines
        .push(members.map(|body| (format!("{} {}", body.name, body.inertia_text), grey)).collect());
    lines
}

/// Gap between the runs of a line, px.
const GAP: f64 = 9.0;

fn line_width(line: &Words) -> f64 {
    let runs: f64 =
        line.iter().map(|(text, style)| font::width(text, style.size, style.bold)).sum();
    runs + GAP * line.len().saturating_sub(1) as f64
}

/// Width of the widest line below a node.
pub fn width(train: &Schematic, node: Node) -> f64 {
    lines(train, node).iter().map(line_width).fold(0.0, f64::max)
}

/// Sets lines one below another, centred at `x`; a connector that runs down at `clear` is left
/// free.
pub fn draw(pen: &mut Pen, lines: &[Words], x: f64, top: f64, clear: Option<f64>, sheet: f64) {
    let widest = lines.iter().map(line_width).fold(0.0, f64::max);
    for (place, line) in lines.iter().enumerate() {
        let wide = line_width(line);
        let left = match clear {
            Some(clear) if clear < x - 1.0 => (clear + 9.0).max(x - widest / 2.0),
            Some(clear) => (clear - 9.0 - wide).min(x + widest / 2.0 - wide),
            None => x - wide / 2.0,
        };
        let left = left.min(sheet - 4.0 - wide).max(4.0);
        let runs: Vec<(&str, TextStyle)> =
            line.iter().map(|(text, style)| (text.as_str(), *style)).collect();
        pen.run_of_text([left, top + PITCH * place as f64], GAP, &runs);
    }
}
