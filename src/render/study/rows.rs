//! The table of a study: one row a run, written so that it reads back exactly.

use crate::analysis::study::outcome::{Extremes, GearFound, Layout, Outcome, Verdict};
use crate::analysis::study::spec::Varied;
use crate::analysis::study::work::Row;
use crate::render::number::plain;
use crate::results::GearState;

/// The columns of a study's table.
#[derive(Clone, Debug)]
pub struct Columns {
    varied: Vec<Varied>,
    layout: Layout,
    /// What the label of a row is called; `None`: rows have none.
    label: Option<&'static str>,
}

/// A verdict that cannot be told.
const UNKNOWN: &str = "unknown";

const GEAR: [&str; 9] = [
    "slips [1]",
    "net_slips [1]",
    "state_at_end",
    "resynchronised_at [s]",
    "peak_pull_out_share [1]",
    "peak_pull_out_share_time [s]",
    "peak_load_angle [rad]",
    "peak_load_angle_time [s]",
    "final_load_angle [rad]",
];

impl Columns {
    /// The columns of a study that varies these numbers.
    pub fn new(varied: Vec<Varied>, layout: Layout, label: Option<&'static str>) -> Self {
        Self { varied, layout, label }
    }

    /// Heads of the columns.
    pub fn head(&self) -> Vec<String> {
        let mut head = vec!["run".to_owned()];
        head.extend(self.label.map(str::to_owned));
        head.extend(self.varied.iter().map(Varied::column));
        head.push("met".to_owned());
        for (name, unit) in &self.layout.requirements {
            let unit = if unit.is_empty() { String::new() } else { format!(" [{unit}]") };
            head.push(format!("{name}.met"));
            head.push(format!("{name}.value{unit}"));
            head.push(format!("{name}.time [s]"));
            head.push(format!("{name}.passed [s]"));
        }
        for gear in &self.layout.gears {
            head.extend(GEAR.iter().map(|figure| format!("{gear}.{figure}")));
        }
        for (name, unit) in &self.layout.channels {
            head.push(format!("{name}.min [{unit}]"));
            head.push(format!("{name}.min_time [s]"));
            head.push(format!("{name}.max [{unit}]"));
            head.push(format!("{name}.max_time [s]"));
            head.push(format!("{name}.final [{unit}]"));
        }
        head.push("end_time [s]".to_owned());
        head.push("failure".to_owned());
        head
    }

    /// The cells of a run.
    pub fn cells(&self, number: usize, row: &Row) -> Vec<String> {
        let outcome = &row.outcome;
        let mut cells = vec![number.to_string()];
        cells.extend(self.label.map(|_| row.label.clone()));
        cells.extend(row.values.iter().map(|value| plain(*value)));
        cells.push(outcome.met().map_or_else(String::new, told));
        for verdict in &outcome.requirements {
            match verdict {
                None => cells.extend(std::iter::repeat_n(String::new(), 4)),
                Some(verdict) => {
                    // An empty cell is a requirement that this run does not have.
                    cells.push(verdict.met.map_or_else(|| UNKNOWN.to_owned(), told));
                    let figures = [verdict.value, verdict.time, verdict.passed];
                    cells.extend(figures.map(optional));
                }
            }
        }
        for gear in &outcome.gears {
            match gear {
                None => cells.extend(std::iter::repeat_n(String::new(), GEAR.len())),
                Some(gear) => cells.extend(gear_cells(gear)),
            }
        }
        for channel in &outcome.channels {
            match channel {
                None => cells.extend(std::iter::repeat_n(String::new(), 5)),
                Some(it) => {
                    cells.extend([it.min, it.min_time, it.max, it.max_time, it.last].map(plain));
                }
            }
        }
        cells.push(plain(outcome.end_time));
        // One line a run, whatever a reason holds.
        cells.push(outcome.failure.clone().unwrap_or_default().replace(['\n', '\r'], " "));
        cells
    }

    /// The number and outcome of a run from its cells; `None` when they are not of this table.
    pub fn read<'c>(&self, cells: impl Iterator<Item = &'c str>) -> Option<(usize, Outcome)> {
        let mut cells = Cells(cells);
        let number = cells.next()?.parse().ok()?;
        for _ in 0..usize::from(self.label.is_some()) + self.varied.len() + 1 {
            cells.next()?;
        }
        let mut requirements = Vec::with_capacity(self.layout.requirements.len());
        for _ in &self.layout.requirements {
            requirements.push(cells.verdict()?);
        }
        let mut gears = Vec::with_capacity(self.layout.gears.len());
        for _ in &self.layout.gears {
            gears.push(cells.gear()?);
        }
        let mut channels = Vec::with_capacity(self.layout.channels.len());
        for _ in &self.layout.channels {
            channels.push(cells.extremes()?);
        }
        let end_time = cells.number()??;
        let failure = Some(cells.next()?.to_owned()).filter(|reason| !reason.is_empty());
        let whole = cells.next().is_none();
        let outcome = Outcome { failure, end_time, requirements, gears, channels };
        whole.then_some((number, outcome))
    }
}

fn told(met: bool) -> String {
    met.to_string()
}

fn optional(value: Option<f64>) -> String {
    value.map_or_else(String::new, plain)
}

fn gear_cells(gear: &GearFound) -> [String; 9] {
    [
        gear.slips.to_string(),
        gear.net_slips.to_string(),
        gear.state_at_end.word().to_owned(),
        optional(gear.resynchronised_at),
        plain(gear.peak_pull_out_share),
        plain(gear.peak_pull_out_share_time),
        plain(gear.peak_load_angle),
        plain(gear.peak_load_angle_time),
        plain(gear.final_load_angle),
    ]
}

/// Cells read one after the other; the outer `None` is a cell that cannot be read.
struct Cells<I>(I);

impl<'c, I: Iterator<Item = &'c str>> Cells<I> {
    fn next(&mut self) -> Option<&'c str> {
        self.0.next()
    }

    fn number(&mut self) -> Option<Option<f64>> {
        match self.next()? {
            "" => Some(None),
            text => text.parse().ok().map(Some),
        }
    }

    fn verdict(&mut self) -> Option<Option<Verdict>> {
        let met = self.next()?;
        let (value, time, passed) = (self.number()?, self.number()?, self.number()?);
        let met = match met {
            "" => return Some(None),
            UNKNOWN => None,
            text => Some(text.parse().ok()?),
        };
        Some(Some(Verdict { met, value, time, passed }))
    }

    fn gear(&mut self) -> Option<Option<GearFound>> {
        let slips = self.next()?;
        if slips.is_empty() {
            for _ in 1..GEAR.len() {
                self.next()?;
            }
            return Some(None);
        }
        let mut gear = GearFound {
            slips: slips.parse().ok()?,
            net_slips: self.next()?.parse().ok()?,
            state_at_end: state(self.next()?)?,
            resynchronised_at: self.number()?,
            peak_pull_out_share: 0.0,
            peak_pull_out_share_time: 0.0,
            peak_load_angle: 0.0,
            peak_load_angle_time: 0.0,
            final_load_angle: 0.0,
        };
        for figure in [
            &mut gear.peak_pull_out_share,
            &mut gear.peak_pull_out_share_time,
            &mut gear.peak_load_angle,
            &mut gear.peak_load_angle_time,
            &mut gear.final_load_angle,
        ] {
            *figure = self.number()?.unwrap_or(f64::NAN);
        }
        Some(Some(gear))
    }

    fn extremes(&mut self) -> Option<Option<Extremes>> {
        let mut figures = [None; 5];
        for figure in &mut figures {
            *figure = self.number()?;
        }
        let [Some(min), Some(min_time), Some(max), Some(max_time), Some(last)] = figures else {
            return Some(None);
        };
        Some(Some(Extremes { min, min_time, max, max_time, last }))
    }
}

fn state(word: &str) -> Option<GearState> {
    [GearState::Synchronous, GearState::Slipping, GearState::Undecided]
        .into_iter()
        .find(|state| state.word() == word)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn layout() -> Layout {
        Layout {
            requirements: ["no_slip", "share", "other"].map(|name| (name.to_owned(), "1")).to_vec(),
            gears: vec!["gear".to_owned()],
            channels: vec![("shaft.torque".to_owned(), "N*m")],
        }
    }

    fn back(columns: &Columns, row: &Row) -> (usize, Outcome) {
        let cells = columns.cells(7, row);
        assert_eq!(cells.len(), columns.head().len());
        columns.read(cells.iter().map(String::as_str)).unwrap()
    }

    #[test]
    fn a_row_reads_back_to_the_last_bit() {
        let columns = Columns::new(Vec::new(), layout(), Some("case"));
        let outcome = Outcome {
            failure: None,
            end_time: 0.1 + 0.2,
            requirements: vec![
                Some(Verdict {
                    met: Some(false),
                    value: Some(1.0 / 3.0),
                    time: Some(1e-7),
                    passed: None,
                }),
                Some(Verdict::default()),
                None,
            ],
            gears: vec![Some(GearFound {
                slips: 3,
                net_slips: -1,
                state_at_end: GearState::Undecided,
                resynchronised_at: None,
                peak_pull_out_share: 0.1,
                peak_pull_out_share_time: 2e9 / 7.0,
                peak_load_angle: -std::f64::consts::PI,
                peak_load_angle_time: 5e-324,
                final_load_angle: 1.0,
            })],
            channels: vec![Some(Extremes {
                min: -0.3,
                min_time: 1.0,
                max: 1e300,
                max_time: 2.0,
                last: 0.7,
            })],
        };
        let row = Row { label: "hot, dry".to_owned(), values: Vec::new(), sharper: false, outcome };
        assert_eq!(back(&columns, &row), (7, row.outcome.clone()));
    }

    #[test]
    fn a_run_that_came_to_nothing_keeps_its_reason() {
        let columns = Columns::new(Vec::new(), layout(), None);
        let outcome = Outcome::failed(&layout(), 0.25, "the step, too small".to_owned());
        let row = Row { label: String::new(), values: Vec::new(), sharper: false, outcome };
        assert_eq!(back(&columns, &row), (7, row.outcome.clone()));
        assert_eq!(columns.read(["7", "true"].into_iter()), None);
    }
}
