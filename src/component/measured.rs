//! Measured records: what an instrument wrote of one channel, to be laid over the computed curve.

use super::channel::Known;
use super::requirement::channel_dimension;
use crate::quantity::{self, Dimension};
use crate::signal::table::{Across, TableColumns};
use crate::tree::{Fields, Range};

/// A record as typed; no result of the run depends on it.
#[derive(Clone, Debug, PartialEq)]
pub struct Measured {
    /// Its name.
    pub name: String,
    /// The channel it was measured at.
    pub of: String,
    /// CSV file, relative to the scenario.
    pub file: String,
    /// Its columns and their units.
    pub columns: TableColumns,
    /// Time of the run at which the record's clock shows 0, s.
    pub offset: f64,
    /// Factor on what the instrument wrote: -1 for one mounted the other way round.
    pub scale: f64,
    /// Rows `[time of the run, value]` in SI, filled when the file is read.
    pub rows: Vec<[f64; 2]>,
    /// Where it comes from.
    pub source: Option<String>,
}

impl Measured {
    /// Reads a record's description.
    pub fn read(fields: &mut Fields<'_>, known: Known<'_>) -> Self {
        let of = fields.name("of", "The channel that was measured.");
        let dimension = channel_dimension(fields, &of, known);
        let file = fields.name("file", "CSV file with a heading line, relative to the scenario.");
        let time = fields.name("time", "Heading of the time column.");
        let value = fields.name("value", "Heading of the value column.");
        let unit = fields.text("unit", "Unit of the values, one of the channel's; SI when absent.");
        let time_unit = fields.text("time_unit", "Unit of the times; s when absent.");
        let doc = "Time of the run at which the record's clock shows 0.";
        let offset = fields.quantity_or("offset", Dimension::Time, Range::Any, 0.0, doc);
        let doc =
            "Factor on the values, for example -1 for an instrument mounted the other way round.";
        let scale = fields.quantity_or("scale", Dimension::One, Range::NotZero, 1.0, doc);
        check_units(fields, dimension, unit.as_deref(), time_unit.as_deref());
        Self {
            name: fields.own_name().to_owned(),
            of,
            file,
            columns: TableColumns { time, value, time_unit, unit, across: Across::Time },
            offset,
            scale,
            rows: Vec::new(),
            source: fields.source(),
        }
    }

    /// Takes the rows of the file: times become times of the run.
    pub fn fill(&mut self, rows: &[[f64; 2]]) {
        self.rows = rows.iter().map(|row| [row[0] + self.offset, row[1] * self.scale]).collect();
    }
}

fn check_units(
    fields: &Fields<'_>,
    dimension: Option<Dimension>,
    unit: Option<&str>,
    time_unit: Option<&str>,
) {
    let mut faults = fields.faults().borrow_mut();
    if let Some(unit) = time_unit
        && let Err(fault) = quantity::parse(&format!("1 {unit}"), Dimension::Time)
    {
        fault.report(&fields.path_of("time_unit"), &mut faults);
    }
    let Some(dimension) = dimension else { return };
    match unit {
        Some(unit) => {
            if let Err(fault) = quantity::parse(&format!("1 {unit}"), dimension) {
                fault.report(&fields.path_of("unit"), &mut faults);
            }
        }
        None if matches!(dimension, Dimension::Speed | Dimension::Angle) => {
            faults.warning(
                fields.path().to_owned(),
                "the record has no unit, so its values are read in SI (rad, rad/s)",
            );
        }
        None => {}
    }
}
