//! Section 3: the studies, load cases first, each opening with its answer in one sentence.

use super::Material;
use super::figures::{percent, plain, tidy};
use super::html::{Figures, HtmlTable, escape, list, paragraph, rich, verdict};
use super::{one_run, study_charts};
use crate::analysis::study::results::{
    Answer, LoadCasesAnswer, MonteCarloAnswer, SHARES, StudyResult, SweepAnswer,
};
use crate::render::chart::number::{capital, words};
use crate::render::study::{answer, json};

/// Rows of a table of runs; the file on disk has all.
const MOST_ROWS: usize = 60;

/// Strongest inputs shown for each value.
const MOST_INPUTS: usize = 5;

/// The section's content.
pub fn section(material: &Material<'_>, figures: &mut Figures) -> String {
    if material.studies.is_empty() && material.unfinished.is_empty() {
        return paragraph(
            "The file states no studies: this report knows one run and not how far it is from its limits.",
        );
    }
    let mut order: Vec<&StudyResult> = material.studies.iter().collect();
    order.sort_by_key(|study| !matches!(study.answer, Answer::LoadCases(_)));
    let mut html: String = order.iter().map(|study| one(material, study, figures)).collect();
    for (name, reason) in material.unfinished {
        html.push_str(&format!("<h3>{}</h3>\n", escape(&capital(&words(name)))));
        html.push_str(&paragraph(&format!("Without an answer: {}.", escape(reason))));
    }
    html
}

fn one(material: &Material<'_>, study: &StudyResult, figures: &mut Figures) -> String {
    let kind = words(json::kind(&study.answer));
    let mut html = format!(
        "<h3>{} <span class=\"kind\">{}</span></h3>\n",
        escape(&capital(&words(&study.name))),
        escape(&kind)
    );
    html.push_str(&format!("<p class=\"answer\">{}</p>\n", rich(&answer::sentence(study))));
    if let Some(words) = answer::verdict(&study.answer) {
        let met = study.answer.verdict().flatten();
        html.push_str(&paragraph(&format!("{} {}", verdict(met), rich(&lower(&words)))));
    }
    let (shown, behind) = tables(material, study);
    match study_charts::chart(material, study) {
        Some((drawing, caption)) => {
            html.push_str(&figures.figure(&drawing, &rich(&caption), &behind));
        }
        None => html.push_str(&behind),
    }
    html.push_str(&shown);
    let notes: Vec<String> = answer::notes(study).iter().map(|note| rich(&capital(note))).collect();
    html.push_str(&list(&notes));
    html
}

/// The limit behind the verdict's words: the verdict itself stands before it as a mark.
fn lower(words: &str) -> String {
    words.split_once(": ").map_or(words, |(_, limit)| limit).to_owned()
}

/// What is shown below the chart, and what stands folded behind it.
fn tables(material: &Material<'_>, study: &StudyResult) -> (String, String) {
    match &study.answer {
        Answer::LoadCases(answer) => (load_cases(material, answer, study), String::new()),
        Answer::Margin(_) => (String::new(), runs(study)),
        Answer::Sweep(answer) => (sweep_words(answer), runs(study)),
        Answer::MonteCarlo(answer) => {
            (monte_carlo(material, answer), study_charts::tolerance_table(material, study, answer))
        }
        Answer::Modes(answer) => (one_run::modes(material, answer), String::new()),
        Answer::Rainflow(answer) => (String::new(), one_run::rainflow(answer)),
        Answer::Estimates(answer) => (one_run::estimates(material, answer), String::new()),
        Answer::Steady(answer) => (one_run::steady(material, answer), String::new()),
    }
}

fn load_cases(material: &Material<'_>, answer: &LoadCasesAnswer, study: &StudyResult) -> String {
    let head = ["Case", "Closest requirement", "Found", "Limit", "Slips", "Verdict"];
    let mut table = HtmlTable::new("<<>>><", &head);
    for (case, row) in answer.cases.iter().zip(&study.rows) {
        let changes: Vec<String> =
            case.changes.iter().map(|(path, value)| format!("{path} = {value}")).collect();
        let mut name = format!("<b>{}</b>", escape(&words(&case.name)));
        for line in case.about.iter().chain(&changes) {
            name.push_str(&format!("<br><small>{}</small>", escape(line)));
        }
        if let Some(reason) = &row.outcome.failure {
            table.row([
                name,
                rich(reason),
                String::new(),
                String::new(),
                String::new(),
                verdict(None),
            ]);
            continue;
        }
        let told = case.told();
        let figure = |value: Option<f64>| {
            told.zip(value).map_or_else(
                || "–".to_owned(),
                |(one, value)| escape(&material.written.value(&one.of, one.unit, value)),
            )
        };
        table.row([
            name,
            told.map_or_else(String::new, |one| escape(&one.name)),
            figure(told.and_then(|one| one.value)),
            figure(told.and_then(|one| one.limit)),
            row.outcome.slips().to_string(),
            verdict(case.met),
        ]);
    }
    table.html()
}

/// Every run of a study that varies numbers.
fn runs(study: &StudyResult) -> String {
    let mut heads: Vec<String> = study.varied.iter().map(|varied| varied.path.clone()).collect();
    heads.extend(["Peak share", "Slips", "Verdict"].map(str::to_owned));
    let heads: Vec<&str> = heads.iter().map(String::as_str).collect();
    let sides = format!("{}><", ">".repeat(study.varied.len() + 1));
    let mut table = HtmlTable::new(&sides, &heads).class("small");
    for row in study.rows.iter().take(MOST_ROWS) {
        let values = study
            .varied
            .iter()
            .zip(&row.values)
            .map(|(varied, value)| escape(&tidy(&varied.shown(*value))));
        let mut cells: Vec<String> = values.collect();
        cells.push(row.outcome.peak_share().map_or_else(|| "–".to_owned(), percent));
        cells.push(row.outcome.slips().to_string());
        cells.push(verdict(row.outcome.met()));
        table.row(cells);
    }
    let mut html = table.html();
    if study.rows.len() > MOST_ROWS {
        html.push_str(&paragraph(&format!(
            "And {} more runs, in <code>studies/{}.csv</code> beside this page.",
            study.rows.len() - MOST_ROWS,
            escape(&study.name)
        )));
    }
    html
}

fn sweep_words(answer: &SweepAnswer) -> String {
    let axes: Vec<String> = answer
        .axes
        .iter()
        .map(|axis| {
            let ends = match (axis.values.first(), axis.values.last()) {
                (Some(first), Some(last)) => format!(
                    "{} to {}",
                    tidy(&axis.varied.shown(*first)),
                    tidy(&axis.varied.shown(*last))
                ),
                _ => String::new(),
            };
            format!(
                "<code>{}</code>: {} values, {}",
                escape(&axis.varied.path),
                axis.values.len(),
                escape(&ends)
            )
        })
        .collect();
    list(&axes)
}

fn monte_carlo(material: &Material<'_>, answer: &MonteCarloAnswer) -> String {
    let mut html = spreads(answer);
    let head = ["Value", "Smallest", "5 %", "Median", "95 %", "Largest"];
    let mut table = HtmlTable::new("<>>>>>", &head);
    for scatter in &answer.quantiles {
        let of = if scatter.of.ends_with("pull_out_share") {
            "gear.pull_out_share".to_owned()
        } else {
            let found = material.scenario.requirements.iter().find(|one| one.name == scatter.of);
            found.map_or_else(String::new, |one| one.of.clone())
        };
        let figure = |value: f64| {
            if value.is_finite() {
                escape(&material.written.value(&of, scatter.unit, value))
            } else {
                "never".to_owned()
            }
        };
        let at = |share: f64| {
            let place = SHARES.iter().position(|known| (known - share).abs() < 1e-9);
            place
                .and_then(|place| scatter.values.get(place))
                .map_or_else(|| "–".to_owned(), |value| figure(*value))
        };
        let end = |value: Option<f64>| value.map_or_else(|| "never".to_owned(), figure);
        let largest = if scatter.never > 0 { "never".to_owned() } else { end(scatter.max) };
        table.row([escape(&scatter.of), end(scatter.min), at(0.05), at(0.5), at(0.95), largest]);
    }
    html.push_str(&table.html());
    html.push_str(&sensitivities(answer));
    html
}

fn spreads(answer: &MonteCarloAnswer) -> String {
    let mut table =
        HtmlTable::new("<<>>>", &["What scatters", "Distribution", "Design", "From", "To"]);
    for spread in &answer.spreads {
        let shown = |value: f64| escape(&tidy(&spread.varied.shown(value)));
        let [low, high] = spread.ends();
        table.row([
            format!("<code>{}</code>", escape(&spread.varied.path)),
            spread.distribution.word().to_owned(),
            shown(spread.middle),
            shown(low),
            shown(high),
        ]);
    }
    table.html()
}

fn sensitivities(answer: &MonteCarloAnswer) -> String {
    let mut table = HtmlTable::new("<<>", &["Value", "Goes most with", "Rank correlation"]);
    for found in &answer.sensitivity {
        let strongest = found
            .correlations
            .iter()
            .filter_map(|(path, it)| Some((path, (*it)?)))
            .take(MOST_INPUTS);
        for (place, (path, correlation)) in strongest.enumerate() {
            let of = if place == 0 { escape(&found.of) } else { String::new() };
            let rounded = (correlation * 100.0).round() / 100.0;
            table.row([of, format!("<code>{}</code>", escape(path)), plain(rounded)]);
        }
    }
    table.html()
}
