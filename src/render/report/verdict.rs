//! The first screen: document line, title, question, verdict, key figures.

use super::Material;
use super::figures::{percent, plain, time};
use super::html::{escape, rich, verdict_mark};
use crate::analysis::study::results::{Answer, MarginAnswer, StudyResult};
use crate::render::chart::number::words;
use crate::render::story;
use crate::results::{GearResult, GearState, RequirementResult};

/// Everything above the drawing of the train.
pub fn head(material: &Material<'_>) -> String {
    let scenario = material.scenario;
    let mut html = document_line(material);
    html.push_str(&format!("<h1>{}</h1>\n", escape(title(material))));
    let (question, _) = first_sentence(&scenario.about);
    if !question.is_empty() {
        html.push_str(&format!("<p class=\"question\">{}</p>\n", escape(question)));
    }
    html.push_str(&bar(material));
    html.push_str(&key_figures(material));
    html
}

/// What the file says of the case after its first sentence.
pub fn rest_of_about(material: &Material<'_>) -> String {
    let (_, rest) = first_sentence(&material.scenario.about);
    if rest.is_empty() {
        String::new()
    } else {
        format!("<p class=\"about\">{}</p>\n", escape(rest))
    }
}

/// The title, also of the window.
pub fn title<'a>(material: &Material<'a>) -> &'a str {
    let title = material.result.title.trim();
    if title.is_empty() { "A drivetrain without a title" } else { title }
}

fn document_line(material: &Material<'_>) -> String {
    let parts: Vec<String> = material
        .scenario
        .document
        .iter()
        .filter(|(_, value)| !value.trim().is_empty() && value != "...")
        .map(|(key, value)| {
            if key == "project" {
                escape(value)
            } else {
                format!("{} {}", escape(&words(key)), escape(value))
            }
        })
        .collect();
    let line = if parts.is_empty() { "Drivetrain report".to_owned() } else { parts.join(" · ") };
    format!("<p class=\"document\">{line}</p>\n")
}

/// The first sentence of a text, and what follows it.
pub fn first_sentence(text: &str) -> (&str, &str) {
    let text = text.trim();
    let end = text
        .char_indices()
        .filter(|(_, letter)| matches!(letter, '.' | '?' | '!'))
        .map(|(place, letter)| place + letter.len_utf8())
        .find(|place| text.get(*place..).is_some_and(|rest| rest.starts_with(char::is_whitespace)));
    match end.and_then(|end| Some((text.get(..end)?, text.get(end..)?))) {
        Some((first, rest)) => (first, rest.trim()),
        None => (text, ""),
    }
}

/// Whether everything asked for is met; `None` when nothing is asked or it cannot be told.
pub fn overall(material: &Material<'_>) -> Option<bool> {
    let mut all: Vec<Option<bool>> =
        material.result.requirements.iter().map(|one| one.met).collect();
    all.extend(material.studies.iter().filter_map(|study| study.answer.verdict()));
    if !material.result.completed {
        return None;
    }
    if all.contains(&Some(false)) {
        return Some(false);
    }
    (!all.is_empty() && all.iter().all(|met| *met == Some(true))).then_some(true)
}

fn bar(material: &Material<'_>) -> String {
    let met = overall(material);
    let class = match met {
        Some(true) => "met",
        Some(false) => "fails",
        None => "unknown",
    };
    format!(
        "<div class=\"bar {class}\"><span class=\"ring\">{}</span><div><p class=\"words\">{}</p><p>{}</p></div></div>\n",
        verdict_mark(met),
        rich(&headline(material, met)),
        story_line(material)
    )
}

fn headline(material: &Material<'_>, met: Option<bool>) -> String {
    let result = material.result;
    if !result.completed {
        return "Not completed: nothing is judged.".to_owned();
    }
    let slips = result.gears.iter().any(|gear| gear.slips > 0);
    let failing: Vec<&RequirementResult> =
        result.requirements.iter().filter(|one| one.met == Some(false)).collect();
    match met {
        Some(true) if result.requirements.is_empty() => {
            "Met: every limit of the studies.".to_owned()
        }
        Some(true) => "Met: every requirement.".to_owned(),
        Some(false) if slips && !failing.is_empty() => {
            "Not met: the magnetic gear slips.".to_owned()
        }
        Some(false) => match failing.as_slice() {
            [] => "Not met: a limit of the studies.".to_owned(),
            [one] => format!("Not met: `{}`.", one.name),
            many => format!("Not met: {} requirements.", many.len()),
        },
        None if result.requirements.is_empty() => {
            "Not judged: no requirements are stated.".to_owned()
        }
        None => "Not judged in full.".to_owned(),
    }
}

/// One or two sentences below the headline.
fn story_line(material: &Material<'_>) -> String {
    let result = material.result;
    if let Some(failure) = &result.failure {
        return rich(failure);
    }
    let mut parts = Vec::new();
    let all = result.requirements.len();
    let met = result.requirements.iter().filter(|one| one.met == Some(true)).count();
    if all > 0 && met < all {
        parts.push(format!("{met} of {all} requirements are met."));
    }
    if let Some(gear) = worst(&result.gears) {
        parts.push(told(gear));
    }
    let limits = material
        .studies
        .iter()
        .filter(|study| matches!(study.answer.verdict(), Some(verdict) if verdict != Some(true)));
    let names: Vec<String> = limits.map(|study| format!("`{}`", study.name)).collect();
    if !names.is_empty() {
        parts.push(format!("Studies that are not met: {}.", names.join(", ")));
    }
    rich(&parts.join(" "))
}

/// The gear of which the first screen tells: the one that slipped most or came nearest to it.
pub fn worst(gears: &[GearResult]) -> Option<&GearResult> {
    gears.iter().max_by(|a, b| {
        a.slips.cmp(&b.slips).then(a.peak_pull_out_share.total_cmp(&b.peak_pull_out_share))
    })
}

fn told(gear: &GearResult) -> String {
    if gear.slips == 0 {
        return format!(
            "`{}` stays in step; at most {} of its pull-out torque is used, at {}.",
            gear.name,
            percent(gear.peak_pull_out_share),
            time(gear.peak_pull_out_share_time)
        );
    }
    let word = if gear.slips == 1 { "once" } else { "times" };
    let count = if gear.slips == 1 { String::new() } else { format!("{} ", gear.slips) };
    let end = match (gear.state_at_end, gear.resynchronised_at) {
        (GearState::Synchronous, Some(again)) => {
            format!("falls back into step at {} and stays there", time(again))
        }
        (GearState::Slipping, _) => "is still slipping at the end".to_owned(),
        _ => "whether it is back in step at the end cannot be told yet".to_owned(),
    };
    format!("`{}` slips {count}{word} and {end}.", gear.name)
}

fn key_figures(material: &Material<'_>) -> String {
    let mut cells: Vec<(String, String, String)> = Vec::new();
    let result = material.result;
    if let Some(gear) = worst(&result.gears) {
        let ways = match gear.net_slips {
            _ if gear.slips == 0 => String::new(),
            net if net.unsigned_abs() == gear.slips && net > 0 => "forward".to_owned(),
            net if net.unsigned_abs() == gear.slips => "backward".to_owned(),
            net => format!("net {net}"),
        };
        cells.push(("Slips".to_owned(), gear.slips.to_string(), ways));
        if gear.slips > 0 {
            let (figure, unit) = match gear.resynchronised_at {
                Some(again) => (plain(again), "s"),
                None => ("no".to_owned(), ""),
            };
            cells.push(("In step again".to_owned(), figure, unit.to_owned()));
        }
        cells.push((
            "Share of pull-out, peak".to_owned(),
            plain((100.0 * gear.peak_pull_out_share * 10.0).round() / 10.0),
            "%".to_owned(),
        ));
        if gear.slips == 0 {
            let degrees = gear.peak_load_angle.to_degrees();
            let figure = plain((degrees * 10.0).round() / 10.0);
            cells.push(("Load angle, peak".to_owned(), figure, "° electrical".to_owned()));
        }
    }
    if let Some((study, answer)) = margin(material.studies) {
        let figure = match answer.margin_share {
            Some(share) => plain((1000.0 * share).round() / 10.0),
            None => "none".to_owned(),
        };
        cells.push((format!("Margin, {}", words(&study.name)), figure, "%".to_owned()));
    }
    let motor = result.motors.iter().find_map(|motor| motor.run_up_time);
    if let Some(at) = motor {
        cells.push(("Run-up to 95 %".to_owned(), plain(at), "s".to_owned()));
    }
    cells.push(("Simulated".to_owned(), plain(result.end_time), "s".to_owned()));
    cells.push((
        "Energy unaccounted for".to_owned(),
        small(result.energy.residual_share),
        String::new(),
    ));
    cells.push(("Events".to_owned(), result.events.len().to_string(), String::new()));
    let cells: String = cells
        .into_iter()
        .take(4)
        .map(|(name, figure, unit)| {
            format!(
                "<div><dt>{}</dt><dd><b>{}</b> {}</dd></div>\n",
                escape(&name),
                if figure.contains('<') { figure } else { escape(&figure) },
                escape(&unit)
            )
        })
        .collect();
    format!("<dl class=\"key\">\n{cells}</dl>\n")
}

/// The first margin study, whose margin is a key figure.
fn margin(studies: &[StudyResult]) -> Option<(&StudyResult, &MarginAnswer)> {
    studies.iter().find_map(|study| match &study.answer {
        Answer::Margin(answer) => Some((study, answer)),
        _ => None,
    })
}

/// A small number as a power of ten.
pub fn small(value: f64) -> String {
    if value == 0.0 || value.abs() >= 1e-3 {
        return plain(value);
    }
    let text = format!("{value:.0e}");
    match text.split_once('e') {
        Some((mantissa, exponent)) => {
            format!("{mantissa} × 10<sup>{}</sup>", exponent.replace('-', "\u{2212}"))
        }
        None => text,
    }
}

/// The story of a gear as the text summary has it.
pub fn told_in_full(gear: &GearResult, material: &Material<'_>) -> String {
    rich(&story::told(gear, material.written.shown()))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_question_is_the_first_sentence() {
        let text = "Does it hold? It was built in 1.5 years. End.";
        assert_eq!(first_sentence(text), ("Does it hold?", "It was built in 1.5 years. End."));
        assert_eq!(first_sentence(" no end "), ("no end", ""));
        assert_eq!(first_sentence(""), ("", ""));
    }

    #[test]
    fn small_numbers_are_powers_of_ten() {
        assert_eq!(small(3.2e-9), "3 × 10<sup>\u{2212}9</sup>");
        assert_eq!(small(0.25), "0.25");
    }
}
