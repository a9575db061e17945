//! The report: one page that holds the verdict, the run, the studies and what they stand on.

pub mod carry;
pub(in crate::render) mod figures;
pub(in crate::render) mod html;
mod inputs;
mod limits;
mod one_run;
mod records;
mod reproduction;
mod requirements;
mod run_section;
mod sha;
mod sides;
mod studies;
mod study_charts;
pub(in crate::render) mod style;
pub mod train;
mod trust;
mod verdict;

pub use figures::Written;
pub(in crate::render) use run_section::samples;

use crate::analysis::records::RecordComparison;
use crate::analysis::study::results::StudyResult;
use crate::analysis::train::Train as TrainFigures;
use crate::render::chart::palette::Side;
use crate::render::chart::schematic::schematic;
use crate::render::chart::train::Train;
use crate::render::pictures::Picture;
use crate::results::RunResult;
use crate::scenario::{Scenario, Source};
use crate::tree::Node;
use html::{Figures, escape};

/// Values under the pointer; nothing on the page depends on it.
pub(in crate::render) const SCRIPT: &str = include_str!("script.js");

/// What a report is made of.
pub struct Material<'a> {
    /// The scenario.
    pub scenario: &'a Scenario,
    /// Its text.
    pub source: &'a Source,
    /// Its values as given.
    pub node: &'a Node,
    /// Figures of the train at rest.
    pub figures: &'a TrainFigures,
    /// The run, with its traces.
    pub result: &'a RunResult,
    /// Measured records against it.
    pub records: &'a [RecordComparison],
    /// The train as charts see it.
    pub train: Train,
    /// The drawings of the run in the order of the page.
    pub drawings: Vec<Picture>,
    /// The same run at a tenth of the tolerance.
    pub sharper: Option<RunResult>,
    /// Finished studies in the order of the file.
    pub studies: &'a [StudyResult],
    /// Studies without an answer, and why.
    pub unfinished: &'a [(String, String)],
    /// Writes figures in the units of the file.
    pub written: Written<'a>,
}

/// The page.
pub fn page(material: &Material<'_>) -> String {
    let mut figures = Figures::default();
    let title = verdict::title(material);
    let mut body = String::from("<header>\n");
    body.push_str(&verdict::head(material));
    body.push_str(&diagram(material, &mut figures));
    body.push_str(&verdict::rest_of_about(material));
    body.push_str("</header>\n");
    let sections = [
        ("Requirements", "", requirements::section(material)),
        ("The run", "", run_section::section(material, &mut figures)),
        ("Studies", "page", studies::section(material, &mut figures)),
        ("Inputs", "", inputs::section(material)),
        ("How far to trust it", "", trust::section(material)),
        ("Reproduction", "", reproduction::section(material)),
    ];
    for (place, (name, class, html)) in sections.into_iter().enumerate() {
        let number = place + 1;
        body.push_str(&format!(
            "<section class=\"{class}\" id=\"section-{number}\" aria-labelledby=\"heading-{number}\">\n\
             <h2 id=\"heading-{number}\"><span class=\"number\">{number}</span>{name}</h2>\n{html}</section>\n"
        ));
    }
    format!(
        "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n\
         <meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n\
         <meta name=\"color-scheme\" content=\"light dark\">\n<title>{}</title>\n<style>\n{}</style>\n</head>\n\
         <body>\n<main>\n{body}<p class=\"foot\">{} · a calculation, not a certificate</p>\n</main>\n<script>\n{SCRIPT}</script>\n</body>\n</html>\n",
        escape(title),
        style::css(&running_head(material, title)),
        concat!("lodeshaft ", env!("CARGO_PKG_VERSION")),
    )
}

/// The head of each printed page: title and revision.
fn running_head(material: &Material<'_>, title: &str) -> String {
    let revision = material.scenario.document.iter().find(|(key, _)| key == "revision");
    match revision {
        Some((_, revision)) if revision != "..." && !revision.is_empty() => {
            format!("{title}, revision {revision}")
        }
        _ => title.to_owned(),
    }
}

fn diagram(material: &Material<'_>, figures: &mut Figures) -> String {
    let view =
        train::schematic(material.scenario, material.figures, material.result, material.written);
    let mut caption = "The train. The size of a disc follows its inertia".to_owned();
    let gear = !material.scenario.magnetic_gears.is_empty();
    let words = if gear {
        [
            (Side::Inner, "blue turns with the inner member of the gear"),
            (Side::Outer, "amber with the outer"),
            (Side::Modulator, "green with the modulator"),
        ]
    } else {
        [
            (Side::Inner, "blue turns with the first half of the coupling"),
            (Side::Outer, "amber with the second"),
            (Side::Modulator, ""),
        ]
    };
    for (side, text) in words {
        if train::has_side(material.scenario, side) && !text.is_empty() {
            caption.push_str(if caption.contains(';') { ", " } else { "; " });
            caption.push_str(text);
        }
    }
    caption.push_str("; hatching is held fast. Speeds are those at the end of the run.");
    figures.figure(&schematic(&view), &caption, "")
}
