//! How far a number can go: a coarse scan, bisection of the first change, and a second look.
//!
//! Outcomes near slipping are sensitive and need not be monotone: the scan sees islands, and
//! both ends of the last bracket are run again at a tenth of the tolerance.

use super::results::{MarginAnswer, Sharper};
use super::spec::{Margin, axis_steps};
use super::work::{Stop, Task, Work};

/// Runs of the search at a tenth of the tolerance before it is given up.
const MOST_STEPS: u32 = 200;

/// Rows of the table by their part in the study.
const SCAN: &str = "scan";
const BISECTION: &str = "bisection";
const DESIGN: &str = "design";
const SHARPER: &str = "a tenth of the tolerance";

/// About how many runs the study makes.
pub fn expected(margin: &Margin) -> usize {
    let spacing = (margin.to - margin.from).abs() / (margin.points.max(2) - 1) as f64;
    let halvings = (spacing / margin.accuracy).log2().ceil().max(0.0) as usize;
    margin.points + 3 + halvings
}

/// Two neighbouring values: the first meets all requirements, the second does not.
#[derive(Clone, Copy, Debug)]
struct Bracket {
    good: f64,
    bad: f64,
    good_row: usize,
    bad_row: usize,
}

/// Runs the study.
///
/// # Errors
/// [`Stop`] when not all runs could be made.
pub fn run(margin: &Margin, work: &mut Work<'_, '_>) -> Result<MarginAnswer, Stop> {
    let values = axis_steps(margin.from, margin.to, margin.points, &margin.varied);
    let mut tasks: Vec<Task<'_>> =
        values.iter().map(|value| Task::at(SCAN, vec![*value])).collect();
    let design = margin.varied.design.filter(|design| !values.contains(design));
    tasks.extend(design.map(|design| Task::at(DESIGN, vec![design])));
    let first = work.batch(&tasks)?;
    let good: Vec<bool> = (0..values.len()).map(|place| is_good(work, first + place)).collect();
    let design_met = margin.varied.design.map(|design| {
        let place = values.iter().position(|value| *value == design).unwrap_or(values.len());
        is_good(work, first + place)
    });

    let first_bad = good.iter().position(|good| !good);
    let flips = match first_bad {
        None => Vec::new(),
        Some(bad) => (bad + 1..values.len())
            .filter(|place| good.get(*place) != good.get(place - 1))
            .filter_map(|place| values.get(place).copied())
            .collect(),
    };
    let bracket = match first_bad {
        Some(bad) if bad > 0 => values.get(bad - 1).zip(values.get(bad)).map(|(before, at)| {
            Bracket { good: *before, bad: *at, good_row: first + bad - 1, bad_row: first + bad }
        }),
        _ => None,
    };
    let bracket = match bracket {
        Some(bracket) => Some(narrow(bracket, margin, false, work)?),
        None => None,
    };
    let sharper = match &bracket {
        Some(bracket) => Some(look_again(bracket, margin, work)?),
        None => None,
    };

    let value = match (first_bad, &bracket) {
        (None, _) => values.last().copied(),
        (Some(_), Some(bracket)) => Some(bracket.good),
        (Some(_), None) => None,
    };
    let bad_row = bracket.map(|bracket| bracket.bad_row).or(first_bad.map(|bad| first + bad));
    let bad_run = bad_row.and_then(|row| work.rows.get(row));
    let failing = bad_run.and_then(|row| row.outcome.first_to_fail());
    let margin_share = value.and_then(|value| share(margin, value, design_met));
    let reached = first_bad.is_some();
    let answer = MarginAnswer {
        varied: margin.varied.clone(),
        range: [margin.from, margin.to],
        accuracy: margin.accuracy,
        value,
        first_bad: bad_run.and_then(|row| row.values.first().copied()),
        last_good_row: bracket.map(|bracket| bracket.good_row),
        first_bad_row: bad_row,
        reached,
        flips,
        first_to_fail: failing
            .and_then(|place| work.layout.requirements.get(place))
            .map(|(name, _)| name.clone()),
        failure: bad_run.and_then(|row| row.outcome.failure.clone()),
        design_met,
        margin_share,
        at_least: margin.at_least,
        met: margin.at_least.and_then(|asked| match margin_share {
            Some(found) if found >= asked => Some(true),
            // The range may only have ended too early.
            Some(_) if !reached => None,
            Some(_) => Some(false),
            None if value.is_none() => Some(false),
            None => None,
        }),
        sharper,
    };
    Ok(answer)
}

fn is_good(work: &Work<'_, '_>, row: usize) -> bool {
    work.rows.get(row).is_some_and(|row| row.outcome.is_good())
}

/// Margin of the design: its distance to a value, negative where the design itself fails.
fn share(margin: &Margin, value: f64, design_met: Option<bool>) -> Option<f64> {
    let share = margin.share(value)?;
    Some(if design_met == Some(false) { -share.abs() } else { share })
}

/// Halves a bracket until it is as narrow as asked for.
fn narrow(
    mut bracket: Bracket,
    margin: &Margin,
    sharper: bool,
    work: &mut Work<'_, '_>,
) -> Result<Bracket, Stop> {
    let finest = if margin.varied.whole { 1.0 } else { 0.0 };
    while (bracket.bad - bracket.good).abs() > margin.accuracy.max(finest) {
        let middle = margin.varied.allowed(0.5 * (bracket.good + bracket.bad));
        if middle == bracket.good || middle == bracket.bad {
            break;
        }
        let label = if sharper { SHARPER } else { BISECTION };
        let row = work.batch(&[Task { sharper, ..Task::at(label, vec![middle]) }])?;
        if is_good(work, row) {
            (bracket.good, bracket.good_row) = (middle, row);
        } else {
            (bracket.bad, bracket.bad_row) = (middle, row);
        }
    }
    Ok(bracket)
}

/// Runs both ends of the bracket at a tenth of the tolerance; where they tell otherwise, the
/// limit is sought on that side with growing steps.
fn look_again(
    bracket: &Bracket,
    margin: &Margin,
    work: &mut Work<'_, '_>,
) -> Result<Sharper, Stop> {
    let setting = work.sharper_setting();
    let at = |value: f64| Task { sharper: true, ..Task::at(SHARPER, vec![value]) };
    let row = work.batch(&[at(bracket.good), at(bracket.bad)])?;
    let (good, bad) = (is_good(work, row), !is_good(work, row + 1));
    if good && bad {
        return Ok(Sharper { setting, held: true, value: Some(bracket.good) });
    }
    // Towards the end of the range while it stays good, towards its begin while it stays bad.
    let outwards = good;
    let direction = (margin.to - margin.from).signum() * if outwards { 1.0 } else { -1.0 };
    let mut here = if outwards { bracket.bad } else { bracket.good };
    let mut here_row = if outwards { row + 1 } else { row };
    let mut step = margin.accuracy.max(if margin.varied.whole { 1.0 } else { 0.0 });
    for _ in 0..MOST_STEPS {
        let next = margin.varied.allowed(here + direction * step);
        let [low, high] = [margin.from.min(margin.to), margin.from.max(margin.to)];
        if !(low..=high).contains(&next) {
            break;
        }
        let next_row = work.batch(&[at(next)])?;
        if is_good(work, next_row) != outwards {
            let found = if outwards {
                Bracket { good: here, bad: next, good_row: here_row, bad_row: next_row }
            } else {
                Bracket { good: next, bad: here, good_row: next_row, bad_row: here_row }
            };
            let found = narrow(found, margin, true, work)?;
            return Ok(Sharper { setting, held: false, value: Some(found.good) });
        }
        (here, here_row) = (next, next_row);
        step *= 2.0;
    }
    Ok(Sharper { setting, held: false, value: None })
}
