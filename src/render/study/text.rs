//! Studies for people: the answer in one sentence, then what it stands on.

use super::{answer, by_hand, json, steady};
use crate::analysis::estimates::EstimatesResult;
use crate::analysis::modes::ModesResult;
use crate::analysis::modes::interference::Crossing;
use crate::analysis::rainflow::RainflowResult;
use crate::analysis::study::results::{
    Answer, LoadCasesAnswer, MonteCarloAnswer, SHARES, StudyResult, SweepAnswer,
};
use crate::quantity::format_number;
use crate::render::shown::{Shown, percent};
use crate::render::table::{Table, wrap};
use crate::render::text::WIDTH;
use crate::scenario::Scenario;

/// Rows of a sweep that are shown; the table on disk has all.
const MOST_ROWS: usize = 30;

/// Crossings of a diagram that are shown; the answer on disk has all.
const MOST_CROSSINGS: usize = 12;

/// Numbers of one list of strongest inputs.
const MOST_INPUTS: usize = 5;

/// The summary of a study.
pub fn summary(result: &StudyResult, scenario: &Scenario) -> String {
    let shown = Shown::new(&scenario.display);
    let mut text = format!("{} ({})\n", result.name, json::kind(&result.answer));
    text.push_str(&wrap("  ", &answer::sentence(result), WIDTH));
    if let Some(verdict) = answer::verdict(&result.answer) {
        text.push_str(&wrap("  ", &verdict, WIDTH));
    }
    let table = match &result.answer {
        Answer::Margin(_) => Table::new("<"),
        Answer::LoadCases(cases) => load_cases(cases, result, shown),
        Answer::Sweep(sweep) => sweep_rows(sweep, result),
        Answer::MonteCarlo(monte_carlo) => quantiles(monte_carlo, scenario, shown),
        Answer::Modes(answer) => modes(answer),
        Answer::Rainflow(answer) => cycles(answer),
        Answer::Estimates(answer) => estimates(answer),
        Answer::Steady(answer) => steady::text(answer, shown),
    };
    if table.len() > 1 {
        text.push('\n');
        text.push_str(&table.text(2));
    }
    let more = match &result.answer {
        Answer::MonteCarlo(answer) => vec![sensitivities(answer)],
        Answer::Modes(answer) => vec![crossings(answer, shown)],
        Answer::Estimates(answer) => {
            vec![by_hand::members(answer, shown).table(), by_hand::damping(answer, shown).table()]
        }
        _ => Vec::new(),
    };
    for table in more.iter().filter(|table| table.len() > 1) {
        text.push('\n');
        text.push_str(&table.text(2));
    }
    if matches!(&result.answer, Answer::Estimates(answer) if !answer.gears.is_empty()) {
        text.push('\n');
        text.push_str(&wrap("  ", by_hand::MEMBERS, WIDTH));
    }
    let notes = answer::notes(result);
    if !notes.is_empty() {
        text.push('\n');
    }
    for note in notes {
        text.push_str(&wrap("  - ", &note, WIDTH));
    }
    text
}

/// A channel's name as far as its unit for people depends on it.
fn channel_of(requirement: &str, scenario: &Scenario) -> String {
    if requirement.ends_with(".peak_pull_out_share") {
        return "gear.pull_out_share".to_owned();
    }
    let found = scenario.requirements.iter().find(|one| one.name == requirement);
    found.map_or_else(String::new, |one| one.of.clone())
}

fn load_cases(answer: &LoadCasesAnswer, result: &StudyResult, shown: Shown<'_>) -> Table {
    let mut table = Table::new("<<<>>>>");
    table.row(["case", "verdict", "closest requirement", "found", "limit", "use", "slips"]);
    for (case, row) in answer.cases.iter().zip(&result.rows) {
        let verdict = match case.met {
            Some(true) => "met",
            Some(false) => "NOT MET",
            None => "no result",
        };
        if let Some(reason) = &row.outcome.failure {
            table.row([case.name.as_str(), verdict, reason.as_str(), "", "", "", ""]);
            continue;
        }
        let told = case.told();
        let (name, found, limit) = match told {
            Some(one) => {
                let figure = |value: Option<f64>| {
                    value.map_or_else(|| "-".to_owned(), |it| shown.value(&one.of, one.unit, it))
                };
                (one.name.clone(), figure(one.value), figure(one.limit))
            }
            None => (String::new(), String::new(), String::new()),
        };
        let used = told
            .zip(case.use_of_limit.as_ref())
            .filter(|(one, (_, name))| one.name == *name)
            .map_or_else(String::new, |(_, (share, _))| percent(*share));
        let slips = row.outcome.slips().to_string();
        table.row([&case.name, verdict, &name, &found, &limit, &used, &slips]);
    }
    table
}

fn sweep_rows(answer: &SweepAnswer, result: &StudyResult) -> Table {
    let mut table = Table::new(">><>>");
    if result.rows.len() > MOST_ROWS {
        return table;
    }
    let path = |place: usize| answer.axes.get(place).map_or("", |axis| axis.varied.path.as_str());
    table.row([path(0), path(1), "verdict", "peak share", "slips"]);
    for row in &result.rows {
        let value = |place: usize| {
            let axis = answer.axes.get(place);
            axis.zip(row.values.get(place))
                .map_or_else(String::new, |(axis, value)| axis.varied.shown(*value))
        };
        let verdict = match (row.outcome.met(), &row.outcome.failure) {
            (_, Some(_)) => "no result",
            (Some(true), None) => "met",
            (Some(false), None) => "NOT MET",
            (None, None) => "",
        };
        let share = row.outcome.peak_share().map_or_else(String::new, percent);
        table.row([&value(0), &value(1), verdict, &share, &row.outcome.slips().to_string()]);
    }
    table
}

fn quantiles(answer: &MonteCarloAnswer, scenario: &Scenario, shown: Shown<'_>) -> Table {
    let mut table = Table::new("<>>>>>");
    table.row(["value", "smallest", "5 %", "median", "95 %", "largest"]);
    for scatter in &answer.quantiles {
        let of = channel_of(&scatter.of, scenario);
        let figure = |value: f64| {
            if value.is_finite() {
                shown.value(&of, scatter.unit, value)
            } else {
                "never".to_owned()
            }
        };
        let at = |share: f64| {
            let place = SHARES.iter().position(|known| *known == share);
            place
                .and_then(|place| scatter.values.get(place))
                .map_or("-".to_owned(), |it| figure(*it))
        };
        let end = |value: Option<f64>| value.map_or_else(|| "never".to_owned(), figure);
        let largest = if scatter.never > 0 { "never".to_owned() } else { end(scatter.max) };
        table.row([&scatter.of, &end(scatter.min), &at(0.05), &at(0.5), &at(0.95), &largest]);
    }
    table
}

fn sensitivities(answer: &MonteCarloAnswer) -> Table {
    let mut table = Table::new("<<>");
    table.row(["value", "goes most with", "rank correlation"]);
    for found in &answer.sensitivity {
        let strongest = found
            .correlations
            .iter()
            .filter_map(|(path, it)| Some((path, (*it)?)))
            .take(MOST_INPUTS);
        for (place, (path, correlation)) in strongest.enumerate() {
            let of = if place == 0 { found.of.as_str() } else { "" };
            table.row([of, path.as_str(), &format_number(correlation, 2)]);
        }
    }
    table
}

fn modes(answer: &ModesResult) -> Table {
    let mut table = Table::new("<>>>");
    table.row(["mode", "frequency", "damped", "damping ratio"]);
    for mode in &answer.modes {
        table.row([
            &mode.label,
            &format!("{} Hz", format_number(mode.frequency_hz, 5)),
            &format!("{} Hz", format_number(mode.damped_hz, 5)),
            &percent(mode.damping_ratio),
        ]);
    }
    table
}

fn crossings(answer: &ModesResult, shown: Shown<'_>) -> Table {
    let mut table = Table::new("<<>>>");
    table.row(["excitation", "mode", "frequency", "at", "separation"]);
    let all = answer.interference.as_ref().map_or(&[][..], |diagram| &diagram.crossings);
    // The nearest first; what lies far off needs no line of its own here.
    let mut list: Vec<_> = all.iter().collect();
    list.sort_by(|a, b| {
        let share = |it: &Crossing| it.separation.unwrap_or(f64::INFINITY);
        share(a).total_cmp(&share(b))
    });
    for crossing in list.into_iter().take(MOST_CROSSINGS) {
        table.row([
            &crossing.order,
            &crossing.label,
            &format!("{} Hz", format_number(crossing.frequency_hz, 5)),
            &crossing.speed.map_or_else(|| "any speed".to_owned(), |speed| shown.speed(speed)),
            &crossing.separation.map_or_else(|| "-".to_owned(), percent),
        ]);
    }
    table
}

fn cycles(answer: &RainflowResult) -> Table {
    let mut table = Table::new(">>>");
    table.row(["range from", "to", "cycles"]);
    for bin in answer.histogram.bins.iter().filter(|bin| bin.count > 0.0) {
        let figure = |value: f64| {
            let unit = if answer.unit == "1" { "" } else { answer.unit };
            format!("{} {unit}", format_number(value, 4)).trim_end().to_owned()
        };
        table.row([&figure(bin.from), &figure(bin.to), &format_number(bin.count, 7)]);
    }
    table
}

fn estimates(answer: &EstimatesResult) -> Table {
    let mut table = Table::new("<<>><");
    table.row(["gear", "figure", "by hand", "run", ""]);
    for gear in &answer.gears {
        for (place, one) in gear.comparisons.iter().enumerate() {
            let figure = |value: f64| {
                let unit = if one.unit == "1" { "" } else { one.unit };
                format!("{} {unit}", format_number(value, 4)).trim_end().to_owned()
            };
            let verdict = match one.agree {
                Some(true) => "agrees",
                Some(false) => "differs",
                None => "",
            };
            table.row([
                if place == 0 { gear.gear.as_str() } else { "" },
                one.figure,
                &figure(one.hand),
                &one.found.map_or_else(|| "-".to_owned(), figure),
                verdict,
            ]);
        }
    }
    table
}
