//! The answer of a study in one sentence, and what a reader must know beside it.

use super::steady;
use crate::analysis::estimates::EstimatesResult;
use crate::analysis::modes::ModesResult;
use crate::analysis::rainflow::RainflowResult;
use crate::analysis::study::results::{
    Answer, LoadCasesAnswer, MarginAnswer, MonteCarloAnswer, StudyResult, SweepAnswer,
};
use crate::quantity::format_number;
use crate::render::shown::percent;

/// The answer in one sentence.
pub fn sentence(result: &StudyResult) -> String {
    match &result.answer {
        Answer::Margin(answer) => margin(answer),
        Answer::LoadCases(answer) => load_cases(answer),
        Answer::Sweep(answer) => sweep(answer, result.rows.len()),
        Answer::MonteCarlo(answer) => monte_carlo(answer),
        Answer::Modes(answer) => modes(answer),
        Answer::Rainflow(answer) => rainflow(answer),
        Answer::Estimates(answer) => estimates(answer),
        Answer::Steady(answer) => steady::sentence(answer),
    }
}

/// The verdict on a limit that the study states, in words; `None` without a limit.
pub fn verdict(answer: &Answer) -> Option<String> {
    let told = |met: Option<bool>, limit: String, unknown: &str| match met {
        Some(true) => format!("met: {limit}"),
        Some(false) => format!("NOT MET: {limit}"),
        None => format!("CANNOT BE TOLD: {limit}; {unknown}"),
    };
    match answer {
        Answer::Margin(answer) => {
            let limit = format!("a margin of at least {}", percent(answer.at_least?));
            Some(told(
                answer.met,
                limit,
                "no requirement fails up to the end of the range, which comes too early",
            ))
        }
        Answer::MonteCarlo(answer) => {
            let limit = format!("slipping in at most {}", percent(answer.slipping_at_most?));
            let unknown = match (answer.failed, answer.draws_to_tell) {
                (0, Some(draws)) => {
                    format!("the interval holds the limit: about {draws} draws would tell")
                }
                (0, None) => "the interval holds the limit".to_owned(),
                (failed, _) => format!("{failed} draws came to nothing and may have slipped"),
            };
            Some(told(answer.met, limit, &unknown))
        }
        Answer::Modes(answer) => {
            let limit = format!("excitations at least {} from modes", percent(answer.separation?));
            Some(told(answer.met, limit, "the train stands still at the point"))
        }
        Answer::Rainflow(answer) => {
            let limit = format!("a range of at most {}", unit_of(answer, answer.limit?));
            Some(told(answer.met, limit, "nothing was counted"))
        }
        Answer::LoadCases(_) | Answer::Sweep(_) | Answer::Estimates(_) | Answer::Steady(_) => None,
    }
}

/// What a reader must know beside the answer.
pub fn notes(result: &StudyResult) -> Vec<String> {
    let mut notes = Vec::new();
    match &result.answer {
        Answer::Margin(answer) => margin_notes(answer, &mut notes),
        Answer::MonteCarlo(answer) => {
            if let Some(draws) = answer.draws_for_half {
                notes.push(format!("an interval half as wide needs about {draws} draws"));
            }
        }
        Answer::Modes(answer) => notes.extend(answer.notes.iter().cloned()),
        Answer::Estimates(answer) => {
            notes.extend(answer.notes.iter().cloned());
            for gear in &answer.gears {
                let why =
                    gear.comparisons.iter().filter(|one| !one.why.is_empty()).map(|one| {
                        format!("`{}`, {}: {}", gear.gear, one.figure, one.why.join("; "))
                    });
                notes.extend(why);
                notes.extend(gear.notes.iter().map(|note| format!("`{}`: {note}", gear.gear)));
            }
        }
        Answer::LoadCases(_) | Answer::Sweep(_) | Answer::Rainflow(_) | Answer::Steady(_) => {}
    }
    let failed: Vec<&str> =
        result.outcomes().filter_map(|outcome| outcome.failure.as_deref()).collect();
    if let (Some(first), false) = (failed.first(), matches!(result.answer, Answer::LoadCases(_))) {
        notes.push(format!("{} came to nothing, the first because {first}", runs(failed.len())));
    }
    notes
}

fn margin(answer: &MarginAnswer) -> String {
    let shown = |value: f64| answer.varied.shown(value);
    let path = &answer.varied.path;
    let [from, to] = answer.range;
    let moves = if to > from { "rise" } else { "fall" };
    let fails = match (&answer.first_to_fail, &answer.failure) {
        (Some(name), _) => format!("`{name}` fails"),
        (None, Some(_)) => "the run comes to nothing".to_owned(),
        (None, None) => "a requirement fails".to_owned(),
    };
    let share = answer.margin_share.map(|share| format!(" (margin {})", percent(share)));
    let share = share.unwrap_or_default();
    let Some(value) = answer.value else {
        return format!(
            "`{path}`: {fails} at {} already, where the range begins; no value before the first failure meets all requirements.",
            shown(from)
        );
    };
    if !answer.reached {
        let at_least = share.replace("margin ", "margin at least ");
        return format!(
            "No requirement fails while `{path}` goes from {} to {}, the end of the range{at_least}.",
            shown(from),
            shown(to)
        );
    }
    match answer.varied.design {
        Some(design) if answer.design_met == Some(false) => format!(
            "The design fails: `{path}` is {}, but all requirements are met only up to {}, where {fails}{share}.",
            shown(design),
            precise(answer, value)
        ),
        Some(design) => format!(
            "`{path}` can {moves} from {} to {} before {fails}{share}.",
            shown(design),
            precise(answer, value)
        ),
        None => format!("`{path}` can {moves} to {} before {fails}.", precise(answer, value)),
    }
}

/// A value with as many digits as the accuracy gives.
fn precise(answer: &MarginAnswer, value: f64) -> String {
    let digits = (value.abs() / answer.accuracy).log10().ceil().clamp(3.0, 15.0);
    let unit = answer.varied.unit;
    let shown = crate::quantity::to_unit(value, answer.varied.dimension, unit).unwrap_or(value);
    let figure = format_number(shown, digits as usize + 1);
    if unit == "1" { figure } else { format!("{figure} {unit}") }
}

fn margin_notes(answer: &MarginAnswer, notes: &mut Vec<String>) {
    if let (Some(good), Some(bad)) = (answer.value, answer.first_bad)
        && answer.reached
    {
        notes.push(format!(
            "last good run at {}, first bad one at {}",
            precise(answer, good),
            precise(answer, bad)
        ));
    }
    if !answer.flips.is_empty() {
        let list: Vec<String> =
            answer.flips.iter().take(12).map(|value| answer.varied.shown(*value)).collect();
        let more = if answer.flips.len() > 12 { ", ..." } else { "" };
        notes.push(format!(
            "the outcome changes again at {}{more}: beyond the first failure a run that meets its requirements is luck, not margin",
            list.join(", ")
        ));
    }
    match &answer.sharper {
        Some(sharper) if sharper.held => {
            notes.push(format!("a tenth of the {} gives the same bracket", sharper.setting));
        }
        Some(sharper) => notes.push(match sharper.value {
            Some(value) => format!(
                "a tenth of the {0} moves the limit to {1}: give a smaller solver.{0}",
                sharper.setting,
                precise(answer, value)
            ),
            None => format!(
                "a tenth of the {0} moves the limit out of the range: give a smaller solver.{0}",
                sharper.setting
            ),
        }),
        None => {}
    }
}

fn load_cases(answer: &LoadCasesAnswer) -> String {
    let all = answer.cases.len();
    let failing: Vec<String> = answer
        .cases
        .iter()
        .filter(|case| case.met != Some(true))
        .map(|case| format!("`{}`", case.name))
        .collect();
    if failing.is_empty() {
        return match all {
            1 => "The case meets its requirements.".to_owned(),
            _ => format!("All {all} cases meet their requirements."),
        };
    }
    format!(
        "{} of {all} cases meet their requirements; not met: {}.",
        all - failing.len(),
        failing.join(", ")
    )
}

fn sweep(answer: &SweepAnswer, rows: usize) -> String {
    let met = match answer.met {
        Some(met) => format!("{met} of {} meet all requirements; ", runs(rows)),
        None => format!("{}; ", runs(rows)),
    };
    let failed = match answer.failed {
        0 => String::new(),
        failed => format!(", {failed} came to nothing"),
    };
    let slip = match answer.slipped {
        0 => "no run slips".to_owned(),
        1 => "1 run slips".to_owned(),
        many => format!("{many} runs slip"),
    };
    format!("{met}{slip}{failed}.")
}

fn monte_carlo(answer: &MonteCarloAnswer) -> String {
    let known = answer.draws - answer.failed;
    match (answer.share, answer.interval) {
        (Some(share), Some([low, high])) => format!(
            "{} of {known} draws slip: {} (95 % interval {} to {}); {} of {} do not meet all requirements.",
            answer.slipped,
            percent(share),
            percent(low),
            percent(high),
            answer.not_met,
            answer.draws
        ),
        _ => format!("All {} draws came to nothing.", answer.draws),
    }
}

fn modes(answer: &ModesResult) -> String {
    let list = match answer.modes.first() {
        None => "The train does not oscillate".to_owned(),
        Some(first) => {
            let count = match answer.modes.len() {
                1 => "One mode".to_owned(),
                count => format!("{count} modes"),
            };
            format!(
                "{count}; the lowest, {}, at {} Hz with a damping ratio of {}",
                first.label,
                format_number(first.frequency_hz, 4),
                percent(first.damping_ratio)
            )
        }
    };
    format!("{list} ({}).", answer.point)
}

fn unit_of(answer: &RainflowResult, value: f64) -> String {
    let unit = if answer.unit == "1" { "" } else { answer.unit };
    format!("{} {unit}", format_number(value, 4)).trim_end().to_owned()
}

fn rainflow(answer: &RainflowResult) -> String {
    format!(
        "`{}` makes {} cycles; a range of {} does the same damage in {} (slope {}).",
        answer.of,
        format_number(answer.count, 7),
        unit_of(answer, answer.damage_equivalent),
        match answer.equivalent_cycles {
            1.0 => "one cycle".to_owned(),
            cycles => format!("{} cycles", format_number(cycles, 7)),
        },
        format_number(answer.slope, 4)
    )
}

fn estimates(answer: &EstimatesResult) -> String {
    let gears: Vec<String> = answer
        .gears
        .iter()
        .map(|gear| {
            let step = gear.given().map_or_else(String::new, |given| {
                format!(
                    ", holds a step of load up to {} of its pull-out and falls into step again below {}",
                    percent(given.critical_step_share),
                    percent(given.resynchronisation_share)
                )
            });
            format!(
                "`{}` swings at {} Hz without load{step}",
                gear.gear,
                format_number(gear.natural_frequency_hz, 4)
            )
        })
        .collect();
    if gears.is_empty() {
        return "The train has no magnetic gear or coupling to estimate.".to_owned();
    }
    format!("By hand: {}.", gears.join("; "))
}

/// `1 run`, `2 runs`.
fn runs(count: usize) -> String {
    if count == 1 { "1 run".to_owned() } else { format!("{count} runs") }
}
