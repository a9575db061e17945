//! Many runs with numbers drawn at random: how often the gear slips, and what matters.

use super::draws;
use super::outcome::{Layout, Outcome};
use super::results::{MonteCarloAnswer, Quantiles, SHARES, Sensitivity};
use super::spec::MonteCarlo;
use super::statistics::{draws_for_width, draws_to_tell, quantile, rank_correlation, wilson};
use super::work::{Row, Stop, Task, Work};

/// Runs the study.
///
/// # Errors
/// [`Stop`] when not all runs could be made.
pub fn run(study: &MonteCarlo, work: &mut Work<'_, '_>) -> Result<MonteCarloAnswer, Stop> {
    let tasks: Vec<Task<'_>> = draws::draw(&study.spreads, study.draws, study.seed)
        .into_iter()
        .map(|values| Task::at("", values))
        .collect();
    let first = work.batch(&tasks)?;
    Ok(answer(study, &work.layout, work.rows.get(first..).unwrap_or_default()))
}

fn answer(study: &MonteCarlo, layout: &Layout, rows: &[Row]) -> MonteCarloAnswer {
    let known: Vec<&Row> = rows.iter().filter(|row| row.outcome.failure.is_none()).collect();
    let slipped = known.iter().filter(|row| row.outcome.slips() > 0).count();
    let share = (!known.is_empty()).then(|| slipped as f64 / known.len() as f64);
    let interval = wilson(slipped, known.len());
    let measures = measures(layout);
    let has_requirements = !layout.requirements.is_empty();
    let needed = |share: f64, [low, high]: [f64; 2]| draws_for_width(share, 0.5 * (high - low));
    let limit = study.slipping_at_most;
    let met = limit.zip(interval).and_then(|(limit, [low, high])| {
        let told = if high <= limit {
            Some(true)
        } else if low > limit {
            Some(false)
        } else {
            None
        };
        // What is not known could all have slipped, or not.
        told.filter(|met| !met || known.len() == rows.len())
    });
    MonteCarloAnswer {
        spreads: study.spreads.clone(),
        draws: rows.len(),
        seed: study.seed,
        slipped,
        came_back: known
            .iter()
            .filter(|row| row.outcome.slips() > 0 && !row.outcome.still_slipping())
            .count(),
        failed: rows.len() - known.len(),
        share,
        interval,
        not_met: if has_requirements {
            rows.iter().filter(|row| row.outcome.met() != Some(true)).count()
        } else {
            0
        },
        quantiles: measures.iter().map(|measure| scatter(measure, &known)).collect(),
        sensitivity: measures
            .iter()
            .map(|measure| {
                sensitivity(&measure.of, study, &known, &|outcome| measure.value(outcome))
            })
            .chain([sensitivity("slips", study, &known, &|outcome| {
                Some(f64::from(outcome.slips()))
            })])
            .collect(),
        draws_for_half: share.zip(interval).and_then(|(share, interval)| needed(share, interval)),
        draws_to_tell: share
            .zip(limit)
            .filter(|_| met.is_none())
            .and_then(|(share, limit)| draws_to_tell(share, limit)),
        slipping_at_most: limit,
        met,
    }
}

/// A value that every run has.
struct Measure {
    of: String,
    unit: &'static str,
    place: Place,
}

/// Where it stands in an outcome.
enum Place {
    Requirement(usize),
    PeakShare(usize),
}

impl Measure {
    /// The value in a run; infinite where a value was never reached.
    fn value(&self, outcome: &Outcome) -> Option<f64> {
        match self.place {
            Place::Requirement(place) => {
                let verdict = outcome.requirements.get(place)?.as_ref()?;
                match verdict.value {
                    None if self.unit == "s" => Some(f64::INFINITY),
                    value => value,
                }
            }
            Place::PeakShare(place) => {
                outcome.gears.get(place)?.map(|gear| gear.peak_pull_out_share)
            }
        }
    }
}

fn measures(layout: &Layout) -> Vec<Measure> {
    let requirements = layout.requirements.iter().enumerate().map(|(place, (name, unit))| {
        Measure { of: name.clone(), unit, place: Place::Requirement(place) }
    });
    let gears = layout.gears.iter().enumerate().map(|(place, name)| Measure {
        of: format!("{name}.peak_pull_out_share"),
        unit: "1",
        place: Place::PeakShare(place),
    });
    requirements.chain(gears).collect()
}

fn scatter(measure: &Measure, rows: &[&Row]) -> Quantiles {
    let mut values: Vec<f64> = rows.iter().filter_map(|row| measure.value(&row.outcome)).collect();
    values.sort_by(f64::total_cmp);
    let finite = |value: Option<&f64>| value.copied().filter(|value| value.is_finite());
    Quantiles {
        of: measure.of.clone(),
        unit: measure.unit,
        count: values.len(),
        never: values.iter().filter(|value| value.is_infinite()).count(),
        min: finite(values.first()),
        max: finite(values.last()),
        values: SHARES.iter().filter_map(|share| quantile(&values, *share)).collect(),
    }
}

fn sensitivity(
    of: &str,
    study: &MonteCarlo,
    rows: &[&Row],
    value: &dyn Fn(&Outcome) -> Option<f64>,
) -> Sensitivity {
    let valued: Vec<(&Row, f64)> =
        rows.iter().filter_map(|row| Some((*row, value(&row.outcome)?))).collect();
    let found: Vec<f64> = valued.iter().map(|(_, value)| *value).collect();
    let mut correlations: Vec<(String, Option<f64>)> = study
        .spreads
        .iter()
        .enumerate()
        .map(|(place, spread)| {
            let drawn: Vec<f64> =
                valued.iter().filter_map(|(row, _)| row.values.get(place).copied()).collect();
            (spread.varied.path.clone(), rank_correlation(&drawn, &found))
        })
        .collect();
    // Strongest first; a stable sort keeps ties in the order of the file.
    let strength = |correlation: &Option<f64>| correlation.map_or(-1.0, f64::abs);
    correlations.sort_by(|(_, a), (_, b)| strength(b).total_cmp(&strength(a)));
    Sensitivity { of: of.to_owned(), correlations }
}
