//! The CSV files that signals and records of a scenario name, each read once.

use super::Scenario;
use crate::component::torque_table::shape;
use crate::diagnostic::Diagnostics;
use crate::signal::Signal;
use crate::signal::table::{TableColumns, parse_table};
use std::io::Read as _;
use std::path::{Path, PathBuf};

/// The largest table that is read, in bytes.
const LARGEST: u64 = 256 * 1024 * 1024;

/// Tables read so far; a study that reads a scenario many times reads each file once.
#[derive(Clone, Debug, Default)]
pub struct Tables {
    base: PathBuf,
    read: Vec<Table>,
}

#[derive(Clone, Debug)]
struct Table {
    file: String,
    columns: TableColumns,
    rows: Result<Vec<[f64; 2]>, String>,
    /// True when a signal follows it: results depend on it.
    followed: bool,
}

impl Tables {
    /// No tables yet; relative names start from the folder `base`.
    pub fn new(base: &Path) -> Self {
        Self { base: base.to_path_buf(), read: Vec::new() }
    }

    /// Gives every table signal of a scenario its rows.
    pub(super) fn fill(&mut self, scenario: &mut Scenario, faults: &mut Diagnostics) {
        let mut load =
            |path: &str, file: &str, columns: &TableColumns| match self.rows(file, columns, true) {
                Ok(rows) => rows,
                Err(message) => {
                    faults.error(path, message);
                    Vec::new()
                }
            };
        let mut fill = |path: &str, signal: &mut Signal| signal.load_tables(path, &mut load);
        super::table_places::each_with_table(scenario, &mut fill);
        self.fill_torques(scenario, faults);
        for record in &mut scenario.measured {
            let named = [&record.file, &record.columns.time, &record.columns.value];
            if named.iter().any(|text| text.is_empty()) {
                continue;
            }
            match self.rows(&record.file, &record.columns, false) {
                Ok(rows) => record.fill(&rows),
                Err(message) => faults.error(format!("measured.{}.file", record.name), message),
            }
        }
    }

    /// Gives every magnet with a table of torques its harmonics.
    fn fill_torques(&mut self, scenario: &mut Scenario, faults: &mut Diagnostics) {
        let gears = scenario.magnetic_gears.iter_mut().map(|gear| {
            let counts = [gear.inner_pole_pairs, gear.outer_pole_pairs].map(f64::from);
            let count = match gear.field.torque_table.as_ref().map(|table| table.at) {
                Some("inner") => counts[0],
                Some("outer") => counts[1],
                Some("modulator") => counts[0] + counts[1],
                _ => 1.0,
            };
            (format!("magnetic_gears.{}", gear.name), count, &mut gear.field)
        });
        let couplings = scenario.magnetic_couplings.iter_mut().map(|coupling| {
            let count = match coupling.field.torque_table.as_ref().map(|table| table.at) {
                Some("mechanical") => f64::from(coupling.pole_pairs),
                _ => 1.0,
            };
            (format!("magnetic_couplings.{}", coupling.name), count, &mut coupling.field)
        });
        for (path, count, field) in gears.chain(couplings) {
            let Some(table) = &field.torque_table else { continue };
            if table.file.is_empty() {
                continue;
            }
            let path = format!("{path}.torque_table.file");
            let found = self.rows(&table.file, &table.columns, true).and_then(|rows| {
                shape(&rows, count).map_err(|fault| format!("`{}`: {fault}", table.file))
            });
            match found {
                Ok(found) => {
                    for warning in found.warnings {
                        faults.warning(path.clone(), warning);
                    }
                    field.harmonics = found.harmonics;
                }
                Err(message) => faults.error(path, message),
            }
        }
    }

    /// Shows every row read so far that results depend on.
    pub fn each_row(&self, take: &mut dyn FnMut(&[f64; 2])) {
        let followed = self.read.iter().filter(|table| table.followed);
        for row in followed.filter_map(|table| table.rows.as_ref().ok()).flatten() {
            take(row);
        }
    }

    fn rows(
        &mut self,
        file: &str,
        columns: &TableColumns,
        followed: bool,
    ) -> Result<Vec<[f64; 2]>, String> {
        if let Some(known) =
            self.read.iter_mut().find(|table| table.file == file && table.columns == *columns)
        {
            known.followed |= followed;
            return known.rows.clone();
        }
        let rows = read_text(&self.base.join(file))
            .map_err(|fault| format!("cannot read the table `{file}`: {fault}"))
            .and_then(|text| {
                parse_table(&text, columns)
                    .map_err(|fault| format!("line {} of `{file}`: {}", fault.line, fault.message))
            });
        self.read.push(Table {
            file: file.to_owned(),
            columns: columns.clone(),
            rows: rows.clone(),
            followed,
        });
        rows
    }
}

fn read_text(path: &Path) -> Result<String, String> {
    if path.is_dir() {
        return Err("it is a folder".to_owned());
    }
    let mut bytes = Vec::new();
    std::fs::File::open(path)
        .and_then(|file| file.take(LARGEST + 1).read_to_end(&mut bytes))
        .map_err(|error| match error.kind() {
            std::io::ErrorKind::NotFound => {
                format!("no such file ({})", path.display())
            }
            _ => error.to_string(),
        })?;
    if bytes.len() as u64 > LARGEST {
        return Err(format!("it is larger than {} MB", LARGEST / (1024 * 1024)));
    }
    String::from_utf8(bytes).map_err(|_| "it is not UTF-8 text".to_owned())
}
