//! How far each run is from measured records, side by side.

use super::answers::{Figure, Found};
use crate::analysis::records::RecordComparison;

/// What is asked of a record: key in `summary.json`, words, unit, size of what is no rounding.
struct Question {
    key: &'static str,
    what: &'static str,
    unit: Unit,
    ask: fn(&RecordComparison) -> Option<f64>,
}

/// Unit of a figure and what it is small against.
#[derive(Clone, Copy)]
enum Unit {
    /// That of the channel; against the measured peak.
    Channel,
    /// A share; against the whole.
    Share,
    /// s; against the common time.
    Time,
}

const QUESTIONS: [Question; 6] = [
    Question { key: "rms", what: "rms error", unit: Unit::Channel, ask: |one| Some(one.rms) },
    Question {
        key: "rms_share",
        what: "rms error over the measured span",
        unit: Unit::Share,
        ask: |one| one.rms_share,
    },
    Question { key: "bias", what: "mean error", unit: Unit::Channel, ask: |one| Some(one.bias) },
    Question {
        key: "peak_error",
        what: "peak off the measured one",
        unit: Unit::Share,
        ask: |one| one.peak_error,
    },
    Question { key: "lag", what: "lag behind the record", unit: Unit::Time, ask: |one| one.lag },
    Question {
        key: "rms_without_lag",
        what: "rms error less lag",
        unit: Unit::Channel,
        ask: |one| one.rms_without_lag,
    },
];

/// Every figure of every record in any run.
pub(super) fn figures(runs: &[&[RecordComparison]]) -> Vec<Figure> {
    let mut names: Vec<&str> = Vec::new();
    for one in runs.iter().copied().flatten() {
        if !names.contains(&one.name.as_str()) {
            names.push(&one.name);
        }
    }
    let mut figures = Vec::new();
    for name in names {
        let found: Vec<Option<&RecordComparison>> =
            runs.iter().map(|records| records.iter().find(|one| one.name == name)).collect();
        let Some(known) = found.iter().copied().flatten().next() else { continue };
        for question in &QUESTIONS {
            let values: Vec<Option<Found>> =
                found.iter().map(|one| (question.ask)((*one)?).map(Found::Number)).collect();
            if values.iter().all(Option::is_none) {
                continue;
            }
            let (unit, channel, size) = match question.unit {
                Unit::Channel => (known.unit, known.of.clone(), known.peak_measured.abs()),
                Unit::Share => ("1", format!("{name}.pull_out_share"), 1.0),
                Unit::Time => ("s", String::new(), known.window[1] - known.window[0]),
            };
            figures.push(Figure {
                path: format!("measured.{name}.{}", question.key),
                of: name.to_owned(),
                what: question.what,
                channel,
                unit,
                size,
                values,
            });
        }
    }
    figures
}

#[cfg(test)]
mod tests {
    use super::*;

    fn record(rms: f64, lag: Option<f64>) -> RecordComparison {
        RecordComparison {
            name: "meter".to_owned(),
            of: "hub.speed".to_owned(),
            unit: "rad/s",
            window: [0.0, 2.0],
            rows: 5,
            rms,
            rms_share: Some(rms / 20.0),
            bias: 0.0,
            peak_measured: 20.0,
            peak_measured_time: 1.0,
            peak_computed: 21.0,
            peak_computed_time: 1.0,
            peak_error: Some(0.05),
            lag,
            rms_without_lag: None,
        }
    }

    #[test]
    fn errors_of_records_stand_side_by_side() {
        let (one, two) = ([record(1.0, Some(0.1))], [record(3.0, None)]);
        let figures = figures(&[&one, &two, &[]]);
        let find = |key: &str| figures.iter().find(|it| it.path == format!("measured.meter.{key}"));
        let rms = find("rms").unwrap();
        assert_eq!(rms.values, [Some(Found::Number(1.0)), Some(Found::Number(3.0)), None]);
        assert!(rms.differs(0.05), "2 rad/s of 20 rad/s");
        assert_eq!(find("lag").unwrap().values[1], None);
        assert!(find("rms_without_lag").is_none(), "no run has one");
    }
}
