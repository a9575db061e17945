//! The answer of a study for machines: SI and rad.

use super::{answer, of_one_run, steady};
use crate::analysis::study::outcome::Outcome;
use crate::analysis::study::results::{
    Answer, CaseAnswer, MarginAnswer, MonteCarloAnswer, SHARES, Sensitivity, StudyResult,
    SweepAnswer,
};
use crate::render::json::{extremes, gear_found, named, requirements};
use crate::render::number::{json, json_optional};
use serde_json::{Map, Value};

/// The answer of a finished study; `work` is the mark of its work.
pub fn study(result: &StudyResult, work: &str) -> Value {
    let mut map = Map::new();
    let mut put = |key: &str, value: Value| {
        map.insert(key.to_owned(), value);
    };
    put("kind", Value::from(kind(&result.answer)));
    put("completed", Value::from(true));
    put("answer", Value::from(answer::sentence(result)));
    put("verdict", result.answer.verdict().flatten().map_or(Value::Null, Value::from));
    let inside = match &result.answer {
        Answer::Margin(margin) => margin_answer(margin, result),
        Answer::LoadCases(cases) => {
            vec![("cases", load_cases(&cases.cases, result)), ("met", Value::from(cases.met))]
        }
        Answer::Sweep(sweep) => sweep_answer(sweep, result),
        Answer::MonteCarlo(monte_carlo) => monte_carlo_answer(monte_carlo),
        Answer::Modes(modes) => of_one_run::modes(modes),
        Answer::Rainflow(rainflow) => of_one_run::rainflow(rainflow),
        Answer::Estimates(estimates) => of_one_run::estimates(estimates),
        Answer::Steady(points) => steady::entries(points),
    };
    for (key, value) in inside {
        put(key, value);
    }
    put("notes", answer::notes(result).into_iter().map(Value::from).collect());
    if !matches!(result.answer, Answer::Estimates(_)) {
        put("file", Value::from(format!("{}.csv", result.name)));
    }
    put(super::folder::MARK, Value::from(work));
    Value::Object(map)
}

/// What is told of a study without an answer.
pub fn unfinished(runs: usize, reason: &str) -> Value {
    named([
        ("completed", Value::from(false)),
        ("failure", Value::from(reason)),
        ("runs", Value::from(runs)),
    ])
}

/// The word for the kind of study.
pub fn kind(answer: &Answer) -> &'static str {
    match answer {
        Answer::Margin(_) => "margin",
        Answer::LoadCases(_) => "load_cases",
        Answer::Sweep(_) => "sweep",
        Answer::MonteCarlo(_) => "monte_carlo",
        Answer::Modes(_) => "modes",
        Answer::Rainflow(_) => "rainflow",
        Answer::Estimates(_) => "estimates",
        Answer::Steady(_) => "steady",
    }
}

type Entries = Vec<(&'static str, Value)>;

fn truth(value: Option<bool>) -> Value {
    value.map_or(Value::Null, Value::from)
}

fn numbers(values: impl IntoIterator<Item = f64>) -> Value {
    values.into_iter().map(json).collect()
}

fn margin_answer(answer: &MarginAnswer, result: &StudyResult) -> Entries {
    let run = |row: Option<usize>| {
        let Some(row) = row.and_then(|row| result.rows.get(row)) else { return Value::Null };
        named([
            ("value", json_optional(row.values.first().copied())),
            ("requirements", verdicts(&row.outcome, result)),
        ])
    };
    vec![
        ("vary", Value::from(answer.varied.path.as_str())),
        ("value", json_optional(answer.value)),
        ("unit", Value::from(answer.varied.dimension.si_unit())),
        ("design", json_optional(answer.varied.design)),
        ("design_met", truth(answer.design_met)),
        ("margin_share", json_optional(answer.margin_share)),
        ("at_least", json_optional(answer.at_least)),
        ("met", truth(answer.met)),
        ("reached", Value::from(answer.reached)),
        ("between", numbers(answer.range)),
        ("accuracy", json(answer.accuracy)),
        ("first_bad", json_optional(answer.first_bad)),
        ("flips", numbers(answer.flips.iter().copied())),
        ("first_to_fail", answer.first_to_fail.as_deref().map_or(Value::Null, Value::from)),
        ("failure", answer.failure.as_deref().map_or(Value::Null, Value::from)),
        ("runs", Value::from(result.rows.len())),
        ("last_good_run", run(answer.last_good_row)),
        ("first_bad_run", run(answer.first_bad_row)),
        (
            "tenth_of_tolerance",
            answer.sharper.map_or(Value::Null, |sharper| {
                named([
                    ("setting", Value::from(sharper.setting)),
                    ("held", Value::from(sharper.held)),
                    ("value", json_optional(sharper.value)),
                ])
            }),
        ),
    ]
}

/// What a run of the file's own requirements found.
fn verdicts(outcome: &Outcome, result: &StudyResult) -> Value {
    let all = result.layout.requirements.iter().zip(&outcome.requirements);
    named(all.filter_map(|((name, unit), verdict)| {
        let verdict = verdict.as_ref()?;
        let figures = named([
            ("met", truth(verdict.met)),
            ("value", json_optional(verdict.value)),
            ("unit", Value::from(*unit)),
            ("time", json_optional(verdict.time)),
        ]);
        Some((name.as_str(), figures))
    }))
}

fn load_cases(cases: &[CaseAnswer], result: &StudyResult) -> Value {
    named(cases.iter().zip(&result.rows).map(|(case, row)| {
        let (use_of_limit, by) = match &case.use_of_limit {
            Some((share, name)) => (json(*share), Value::from(name.as_str())),
            None => (Value::Null, Value::Null),
        };
        let figures = named([
            ("met", truth(case.met)),
            ("failure", row.outcome.failure.as_deref().map_or(Value::Null, Value::from)),
            ("about", case.about.as_deref().map_or(Value::Null, Value::from)),
            (
                "changes",
                named(
                    case.changes
                        .iter()
                        .map(|(path, text)| (path.as_str(), Value::from(text.as_str()))),
                ),
            ),
            ("requirements", requirements(&case.requirements)),
            ("use_of_limit", use_of_limit),
            ("closest_requirement", by),
            ("gears", gears(&row.outcome, result)),
            ("channels", channels(&row.outcome, result)),
            ("end_time", json(row.outcome.end_time)),
        ]);
        (case.name.as_str(), figures)
    }))
}

fn gears(outcome: &Outcome, result: &StudyResult) -> Value {
    let all = result.layout.gears.iter().zip(&outcome.gears);
    named(all.filter_map(|(name, found)| Some((name.as_str(), named(gear_found(found.as_ref()?))))))
}

fn channels(outcome: &Outcome, result: &StudyResult) -> Value {
    let all = result.layout.channels.iter().zip(&outcome.channels);
    named(
        all.filter_map(|((name, unit), found)| {
            Some((name.as_str(), extremes(unit, found.as_ref()?)))
        }),
    )
}

fn sweep_answer(answer: &SweepAnswer, result: &StudyResult) -> Entries {
    let axes = answer.axes.iter().map(|axis| {
        named([
            ("path", Value::from(axis.varied.path.as_str())),
            ("unit", Value::from(axis.varied.dimension.si_unit())),
            ("design", json_optional(axis.varied.design)),
            ("values", numbers(axis.values.iter().copied())),
        ])
    });
    vec![
        ("rows", Value::from(result.rows.len())),
        ("met", answer.met.map_or(Value::Null, Value::from)),
        ("slipped", Value::from(answer.slipped)),
        ("failed", Value::from(answer.failed)),
        ("axes", axes.collect()),
    ]
}

fn monte_carlo_answer(answer: &MonteCarloAnswer) -> Entries {
    let spread = answer.spreads.iter().map(|spread| {
        let [low, high] = spread.ends();
        let figures = named([
            ("distribution", Value::from(spread.distribution.word())),
            ("design", json(spread.middle)),
            ("width", json(spread.width)),
            ("unit", Value::from(spread.varied.dimension.si_unit())),
            ("smallest", json(low)),
            ("largest", json(high)),
        ]);
        (spread.varied.path.as_str(), figures)
    });
    let quantiles = answer.quantiles.iter().map(|scatter| {
        let mut map = Map::new();
        map.insert("unit".to_owned(), Value::from(scatter.unit));
        map.insert("count".to_owned(), Value::from(scatter.count));
        map.insert("never".to_owned(), Value::from(scatter.never));
        map.insert("min".to_owned(), json_optional(scatter.min));
        for (share, value) in SHARES.iter().zip(&scatter.values) {
            map.insert(share.to_string(), json(*value));
        }
        map.insert("max".to_owned(), json_optional(scatter.max));
        (scatter.of.as_str(), Value::Object(map))
    });
    vec![
        ("draws", Value::from(answer.draws)),
        ("seed", Value::from(answer.seed)),
        ("slipped", Value::from(answer.slipped)),
        ("came_back", Value::from(answer.came_back)),
        ("failed", Value::from(answer.failed)),
        ("share", json_optional(answer.share)),
        ("interval", answer.interval.map_or(Value::Null, numbers)),
        ("slipping_at_most", json_optional(answer.slipping_at_most)),
        ("met", truth(answer.met)),
        ("not_met", Value::from(answer.not_met)),
        ("spread", named(spread)),
        ("quantiles", named(quantiles)),
        (
            "sensitivity",
            named(answer.sensitivity.iter().map(|it| (it.of.as_str(), sensitivity(it)))),
        ),
        ("draws_for_half_the_interval", count(answer.draws_for_half)),
        ("draws_to_tell", count(answer.draws_to_tell)),
    ]
}

fn sensitivity(found: &Sensitivity) -> Value {
    named(
        found
            .correlations
            .iter()
            .map(|(path, correlation)| (path.as_str(), json_optional(*correlation))),
    )
}

fn count(draws: Option<u64>) -> Value {
    draws.map_or(Value::Null, Value::from)
}
