//! The CSV files that signals and records of a scenario name, each read once.

use super::Scenario;
use crate::component::load::LoadLaw;
use crate::component::load::coefficient_file::CoefficientFile;
use crate::component::load::power_coefficient::{PowerCoefficient, Rows};
use crate::component::torque_table::shape;
use crate::diagnostic::Diagnostics;
use crate::signal::Signal;
use crate::signal::sampling::{Sampling, Told};
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
    coefficients: Vec<(CoefficientFile, Result<Rows, String>)>,
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
        Self { base: base.to_path_buf(), read: Vec::new(), coefficients: Vec::new() }
    }

    /// Gives every table signal of a scenario its rows.
    pub(super) fn fill(&mut self, scenario: &mut Scenario, faults: &mut Diagnostics) {
        let until = scenario.duration;
        let mut load = |path: &str, file: &str, columns: &TableColumns, sampling: &Sampling| {
            let rows = match self.rows(file, columns, true) {
                Ok(rows) => rows,
                Err(message) => {
                    faults.error(format!("{path}.file"), message);
                    return Vec::new();
                }
            };
            let (rows, told) = sampling.take(rows, until);
            match told {
                Some(Told::Fault(key, text)) => faults.error(format!("{path}.{key}"), text),
                Some(Told::Warning(text)) => faults.warning(format!("{path}.file"), text),
                None => {}
            }
            rows
        };
        let mut fill = |path: &str, signal: &mut Signal| signal.load_tables(path, &mut load);
        super::table_places::each_with_table(scenario, &mut fill);
        self.fill_torques(scenario, faults);
        self.fill_coefficients(scenario, faults);
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

    /// Gives every rotor with a table of power coefficients in a file its rows.
    fn fill_coefficients(&mut self, scenario: &mut Scenario, faults: &mut Diagnostics) {
        for load in &mut scenario.loads {
            let LoadLaw::AxialRotor { coefficient, .. } = &mut load.law else { continue };
            let PowerCoefficient::Rows(rows) = &mut **coefficient else { continue };
            let Some(asked) = rows.file().cloned() else { continue };
            match self.coefficients(&asked) {
                Ok(found) => *rows = found,
                Err(message) => faults.error(
                    format!("loads.{}.law.axial_rotor.power_coefficient.table.file", load.name),
                    message,
                ),
            }
        }
    }

    fn coefficients(&mut self, asked: &CoefficientFile) -> Result<Rows, String> {
        if let Some((_, known)) = self.coefficients.iter().find(|(known, _)| known == asked) {
            return known.clone();
        }
        let file = &asked.file;
        let rows = read_text(&self.base.join(file))
            .map_err(|fault| format!("cannot read the table `{file}`: {fault}"))
            .and_then(|text| {
                asked
                    .parse(&text)
                    .map_err(|fault| format!("line {} of `{file}`: {}", fault.line, fault.message))
            });
        self.coefficients.push((asked.clone(), rows.clone()));
        rows
    }

    /// Shows every row read so far that results depend on.
    pub fn each_row(&self, take: &mut dyn FnMut(&[f64; 2])) {
        let followed = self.read.iter().filter(|table| table.followed);
        for row in followed.filter_map(|table| table.rows.as_ref().ok()).flatten() {
            take(row);
        }
        for rows in self.coefficients.iter().filter_map(|(_, rows)| rows.as_ref().ok()) {
            rows.each(take);
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
