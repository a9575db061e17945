//! The CSV files that signals of a scenario name, each read once.

use super::Scenario;
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
}

impl Tables {
    /// No tables yet; relative names start from the folder `base`.
    pub fn new(base: &Path) -> Self {
        Self { base: base.to_path_buf(), read: Vec::new() }
    }

    /// Gives every table signal of a scenario its rows.
    pub(super) fn fill(&mut self, scenario: &mut Scenario, faults: &mut Diagnostics) {
        let mut load =
            |path: &str, file: &str, columns: &TableColumns| match self.rows(file, columns) {
                Ok(rows) => rows,
                Err(message) => {
                    faults.error(path, message);
                    Vec::new()
                }
            };
        let mut fill = |path: &str, signal: &mut Signal| signal.load_tables(path, &mut load);
        super::signals::each_with_table(scenario, &mut fill);
    }

    /// Shows every row read so far.
    pub fn each_row(&self, take: &mut dyn FnMut(&[f64; 2])) {
        for row in self.read.iter().filter_map(|table| table.rows.as_ref().ok()).flatten() {
            take(row);
        }
    }

    fn rows(&mut self, file: &str, columns: &TableColumns) -> Result<Vec<[f64; 2]>, String> {
        if let Some(known) =
            self.read.iter().find(|table| table.file == file && table.columns == *columns)
        {
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
