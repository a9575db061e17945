//! From the answers of studies to their charts.

use super::Material;
use super::html::HtmlTable;
use super::one_run;
use super::requirements::use_of_limit;
use crate::analysis::study::results::{
    Answer, LoadCasesAnswer, MarginAnswer, MonteCarloAnswer, StudyResult, SweepAnswer,
};
use crate::analysis::study::spec::{Axis, Varied};
use crate::analysis::study::work::Row;
use crate::quantity::to_unit;
use crate::render::chart::axes::Sheet;
use crate::render::chart::drawing::Drawing;
use crate::render::chart::load_cases::{CaseBar, LoadCases, load_cases_chart};
use crate::render::chart::map::{Cell, MapChart, Parameter, map_chart};
use crate::render::chart::margin::{MarginChart, MarginPoint, margin_chart};
use crate::render::chart::marks::Forbidden;
use crate::render::chart::number::{NBSP, capital, fixed, number, percent, unit_text, words};
use crate::render::chart::tolerance::{Tolerance, tolerance_chart};
use crate::results::{GearState, RequirementResult};

/// Share of the pull-out torque from which a met cell of a map counts as near.
const NEAR: f64 = 0.9;

/// The chart of a study with its caption; `None` where a picture would say nothing.
pub fn chart(material: &Material<'_>, study: &StudyResult) -> Option<(Drawing, String)> {
    match &study.answer {
        Answer::Margin(answer) => Some(margin(material, study, answer)),
        Answer::LoadCases(answer) => load_cases(study, answer),
        Answer::Sweep(answer) => sweep(study, answer),
        Answer::MonteCarlo(answer) => tolerance(material, study, answer),
        Answer::Modes(answer) => one_run::diagram(material, &study.name, answer),
        Answer::Rainflow(answer) => one_run::histogram(&study.name, answer),
        Answer::Estimates(_) | Answer::Steady(_) => None,
    }
}

/// A number of the file in words: the last steps of its path that tell it apart.
fn parameter(varied: &Varied) -> String {
    let steps: Vec<&str> = varied.path.split('.').collect();
    let thing = steps.get(1).copied().unwrap_or_default();
    let last = steps.last().copied().unwrap_or_default();
    if thing == last || thing.is_empty() {
        return words(last);
    }
    format!("{}, {}", words(thing), words(last))
}

/// A channel in words, for the heading of an axis.
fn measured(channel: &str) -> String {
    match channel.split_once('.') {
        Some((_, "pull_out_share")) => "Peak pull-out share".to_owned(),
        Some((thing, quantity)) => capital(&format!("{} of {}", words(quantity), words(thing))),
        None => capital(&words(channel)),
    }
}

fn shown(varied: &Varied, value: f64) -> f64 {
    to_unit(value, varied.dimension, varied.unit).unwrap_or(value)
}

fn margin(
    material: &Material<'_>,
    study: &StudyResult,
    answer: &MarginAnswer,
) -> (Drawing, String) {
    let varied = &answer.varied;
    // The reading of the requirement that fails first; a count of slips shows no approach.
    let driver = answer
        .first_to_fail
        .as_ref()
        .and_then(|name| study.layout.requirements.iter().position(|(known, _)| known == name))
        .and_then(|place| {
            let (name, unit) = study.layout.requirements.get(place)?;
            let one = material.result.requirements.iter().find(|one| one.name == *name)?;
            (!one.of.ends_with("slips") && *unit != "s").then_some((place, one))
        });
    let (measure, unit, limit) = match driver {
        Some((_, one)) => {
            let unit = material.written.unit(&one.of, one.unit);
            let side = if one.at_least { Forbidden::Below } else { Forbidden::Above };
            let limit = one.limit.map(|limit| (unit.of(limit), side));
            (measured(&one.of), unit.text, limit)
        }
        None => ("Peak pull-out share".to_owned(), "%".to_owned(), None),
    };
    let value = |row: &Row| match driver {
        Some((place, one)) => {
            let found = row.outcome.requirements.get(place).copied().flatten()?.value?;
            Some(material.written.unit(&one.of, one.unit).of(found.abs()))
        }
        None => row.outcome.peak_share().map(|share| 100.0 * share),
    };
    let points = study.rows.iter().filter(|row| !row.sharper).filter_map(|row| {
        Some(MarginPoint {
            parameter: shown(varied, *row.values.first()?),
            value: value(row),
            met: row.outcome.is_good(),
        })
    });
    let mut points: Vec<MarginPoint> = points.collect();
    points.sort_by(|a, b| a.parameter.total_cmp(&b.parameter));
    let design = varied.design.or(answer.value).unwrap_or(answer.range[0]);
    let name = parameter(varied);
    let chart = MarginChart {
        id: "margin".to_owned(),
        title: format!("{}: how far {name} can go", words(&study.name)),
        parameter: name,
        parameter_unit: unit_text(varied.unit),
        measure,
        measure_unit: unit,
        limit,
        points,
        design: shown(varied, design),
        found: answer.value.map(|value| shown(varied, value)),
        reached: answer.reached,
        margin_share: answer.margin_share,
        sheet: Sheet::PAGE,
    };
    let caption = format!(
        "Every run of the search over <{}>: filled where all requirements are met, crossed where one fails.",
        varied.path
    );
    (margin_chart(&chart), caption.replace(['<', '>'], "`"))
}

fn load_cases(study: &StudyResult, answer: &LoadCasesAnswer) -> Option<(Drawing, String)> {
    let cases: Vec<CaseBar> = answer
        .cases
        .iter()
        .zip(&study.rows)
        .map(|(case, row)| {
            let closest = |one: &&RequirementResult| {
                use_of_limit(one).filter(|share| share.is_finite()).unwrap_or(0.0)
            };
            let one = case.requirements.iter().max_by(|a, b| closest(a).total_cmp(&closest(b)));
            let share = one.map(|one| closest(&one)).filter(|share| *share > 0.0);
            let text = one.zip(share).map_or_else(String::new, |(one, share)| {
                format!("{} uses {} of its limit", words(&one.name), percent(share))
            });
            CaseBar {
                name: words(&case.name),
                met: case.met,
                use_of_limit: share,
                text,
                slips: row.outcome.slips(),
            }
        })
        .collect();
    if cases.is_empty() {
        return None;
    }
    let chart = LoadCases {
        id: "cases".to_owned(),
        title: format!("{}: use of the nearest limit in each case", words(&study.name)),
        cases,
        sheet: Sheet::PAGE,
    };
    let caption =
        "Use of the nearest limit in each case; beyond the hatched line a limit is exceeded.";
    Some((load_cases_chart(&chart), caption.to_owned()))
}

fn axis_parameter(axis: &Axis) -> Parameter {
    Parameter {
        name: parameter(&axis.varied),
        unit: unit_text(axis.varied.unit),
        values: axis.values.iter().map(|value| shown(&axis.varied, *value)).collect(),
    }
}

/// Places of an axis' values in rising order.
fn rising(axis: &Axis) -> Vec<usize> {
    let mut order: Vec<usize> = (0..axis.values.len()).collect();
    let value = |place: &usize| axis.values.get(*place).copied().unwrap_or(0.0);
    order.sort_by(|a, b| value(a).total_cmp(&value(b)));
    order
}

fn sweep(study: &StudyResult, answer: &SweepAnswer) -> Option<(Drawing, String)> {
    let first = answer.axes.first()?;
    let second = answer.axes.get(1);
    let width = second.map_or(1, |axis| axis.values.len());
    let across = rising(first);
    let up = second.map_or_else(|| vec![0], rising);
    let mut cells = Vec::new();
    for j in &up {
        for i in &across {
            let row = study.rows.get(i * width + j)?;
            let slipping = row.outcome.gears.iter().flatten();
            let still = slipping.clone().any(|gear| gear.state_at_end == GearState::Slipping);
            cells.push(Cell {
                met: row.outcome.met(),
                peak_share: row.outcome.peak_share(),
                slips: row.outcome.slips(),
                still_slipping: still,
            });
        }
    }
    let sorted = |axis: &Axis| {
        let mut parameter = axis_parameter(axis);
        parameter.values.sort_by(f64::total_cmp);
        parameter
    };
    let at_design = |axis: &Axis, order: &[usize]| {
        let design = axis.varied.design?;
        order.iter().position(|place| {
            axis.values
                .get(*place)
                .is_some_and(|value| (value - design).abs() <= 1e-9 * design.abs().max(1e-12))
        })
    };
    let design = at_design(first, &across).zip(match second {
        Some(axis) => at_design(axis, &up),
        None => Some(0),
    });
    let up = second.map_or_else(
        || Parameter { name: String::new(), unit: String::new(), values: vec![0.0] },
        sorted,
    );
    let chart = MapChart {
        id: "map".to_owned(),
        title: format!("{}: outcome over the varied numbers", words(&study.name)),
        name: "Outcome of each run".to_owned(),
        across: sorted(first),
        up,
        cells,
        design: design.map(|(i, j)| [i, j]),
        near: NEAR,
        sheet: Sheet::PAGE,
    };
    let caption = "Each cell is one run: the peak share of the pull-out torque in percent where it is met, \
        the number of slips where not. The thick line is the border; the design is framed where it is one of the values.";
    Some((map_chart(&chart), caption.to_owned()))
}

fn tolerance(
    material: &Material<'_>,
    study: &StudyResult,
    answer: &MonteCarloAnswer,
) -> Option<(Drawing, String)> {
    let (chart, name) = scatter(material, study, answer)?;
    let caption = format!(
        "Largest share of the pull-out torque of `{name}` in {} draws (seed {}). The hatched wall is the pull-out torque; \
         draws beyond it stand behind the wall. The bar above is from 5 % over the median to 95 %.",
        answer.draws, answer.seed
    );
    Some((tolerance_chart(&chart), caption))
}

/// The bars of the chart of a tolerance study as a table.
pub fn tolerance_table(
    material: &Material<'_>,
    study: &StudyResult,
    answer: &MonteCarloAnswer,
) -> String {
    let Some((chart, _)) = scatter(material, study, answer) else { return String::new() };
    let (bins, draws) = (chart.bins(), chart.draws());
    let head = ["Peak pull-out share", "Draws", "Of all", "Up to here"];
    let mut table = HtmlTable::new("<>>>", &head).class("small");
    let mut so_far = 0;
    let mut row = |name: String, count: u64| {
        so_far += count;
        let share =
            |part: u64| format!("{}{NBSP}%", fixed(100.0 * part as f64 / draws.max(1) as f64, 1));
        table.row([name, count.to_string(), share(count), share(so_far)]);
    };
    for (place, count) in bins.counts.iter().enumerate().filter(|(_, count)| **count > 0) {
        let from = bins.low + bins.width * place as f64;
        row(format!("{} to {}{NBSP}%", number(from, 4), number(from + bins.width, 4)), *count);
    }
    row("past the peak, came back".to_owned(), u64::from(chart.came_back));
    row("slipped".to_owned(), u64::from(chart.slipped));
    table.html()
}

/// How the largest share of the gear nearest to its limit scatters, and that gear.
fn scatter<'s>(
    material: &Material<'_>,
    study: &StudyResult,
    answer: &'s MonteCarloAnswer,
) -> Option<(Tolerance, &'s str)> {
    const END: &str = ".peak_pull_out_share";
    let median = |values: &[f64]| values.get(3).copied().unwrap_or(0.0);
    let scatter = answer
        .quantiles
        .iter()
        .filter(|scatter| scatter.of.ends_with(END))
        .max_by(|a, b| median(&a.values).total_cmp(&median(&b.values)))?;
    let name = scatter.of.strip_suffix(END)?;
    let place = study.layout.gears.iter().position(|gear| gear == name)?;
    let [low, high] =
        material.result.gears.iter().find(|gear| gear.name == name).map(|gear| gear.law_peaks)?;
    let mut chart = Tolerance {
        id: "tolerance".to_owned(),
        title: format!("{}: spread of the peak pull-out share", words(&study.name)),
        name: "Peak pull-out share".to_owned(),
        shares: Vec::new(),
        came_back: 0,
        slipped: 0,
        interval: answer.interval?,
        quantiles: [*scatter.values.get(1)?, *scatter.values.get(3)?, *scatter.values.get(5)?],
        sheet: Sheet::PAGE,
    };
    for row in &study.rows {
        let Some(found) = row.outcome.gears.get(place).copied().flatten() else { continue };
        if found.slips > 0 {
            chart.slipped += 1;
        } else if found.peak_load_angle > high || found.peak_load_angle < low {
            chart.came_back += 1;
        } else {
            chart.shares.push(found.peak_pull_out_share);
        }
    }
    Some((chart, name))
}
