//! The folder of studies: tables and answers of finished ones, journals of unfinished ones.
//!
//! Studies may take long, so that each is kept by itself: a new answer of one replaces the old
//! one, and the others stay.

use super::journal::{self, Found, Journal};
use super::rows::Columns;
use crate::analysis::study::outcome::Outcome;
use crate::analysis::study::work::Row;
use crate::render::folder::{FolderFault, settle};
use crate::render::lock::{self, Asked, Lock};
use serde_json::Value;
use std::collections::BTreeMap;
use std::fs;
use std::io::{BufWriter, Write};
use std::path::{Path, PathBuf};

/// Name of the folder below that of the results.
pub const NAME: &str = "studies";

/// The key of an answer under which the mark of its work stands.
pub const MARK: &str = "work";

/// The folder of a file's studies.
#[derive(Debug)]
pub struct StudyFolder {
    path: PathBuf,
    /// Held until the studies are done.
    _lock: Option<Lock>,
}

/// A study that may begin or go on.
#[derive(Debug)]
pub struct Begun {
    /// Runs known from before.
    pub known: BTreeMap<usize, Outcome>,
    /// Where finished runs go.
    pub journal: Journal,
    /// True when an unfinished study was thrown away.
    pub restarted: bool,
}

impl StudyFolder {
    /// Opens the folder of studies below a folder of results, for this process alone.
    ///
    /// # Errors
    /// A place that is taken by something else or by another process, or a fault of the disk.
    pub fn open(results: &Path) -> Result<Self, FolderFault> {
        let path = settle(results)?.join(NAME);
        let asked = fs::create_dir_all(&path)
            .and_then(|()| lock::take(&path))
            .map_err(|error| FolderFault::disk("the folder of studies", &error))?;
        match asked {
            Asked::Ours(lock) => Ok(Self { path, _lock: lock }),
            Asked::Taken(process) => Err(FolderFault::in_use(results, process)),
        }
    }

    fn table(&self, name: &str) -> PathBuf {
        self.path.join(format!("{name}.csv"))
    }

    fn answer(&self, name: &str) -> PathBuf {
        self.path.join(format!("{name}.json"))
    }

    fn journal(&self, name: &str) -> PathBuf {
        self.path.join(format!("{name}.unfinished.csv"))
    }

    /// Begins a study, or goes on with what was left of it.
    ///
    /// `None`: it is to go on, but what was left is other work.
    ///
    /// # Errors
    /// The fault of the disk.
    pub fn begin(
        &self,
        name: &str,
        mark: &str,
        columns: &Columns,
        resume: bool,
    ) -> Result<Option<Begun>, FolderFault> {
        let path = self.journal(name);
        let found = journal::read(&path, mark, columns)?;
        let restarted = !resume && !matches!(found, Found::Nothing);
        if !resume {
            let journal = Journal::begin(&path, name, mark, columns.clone())?;
            return Ok(Some(Begun { known: BTreeMap::new(), journal, restarted }));
        }
        let (mut known, same) = self.finished(name, mark, columns)?;
        let journal = match found {
            Found::Runs(runs, length) => {
                known.extend(runs);
                Journal::go_on(&path, name, length, columns.clone())?
            }
            Found::Other => return Ok(None),
            Found::Nothing if !same => return Ok(None),
            Found::Nothing => Journal::begin(&path, name, mark, columns.clone())?,
        };
        Ok(Some(Begun { known, journal, restarted }))
    }

    /// The runs of a finished study of this work, and false when it is of other work.
    fn finished(
        &self,
        name: &str,
        mark: &str,
        columns: &Columns,
    ) -> Result<(BTreeMap<usize, Outcome>, bool), FolderFault> {
        let Ok(text) = fs::read_to_string(self.answer(name)) else {
            return Ok((BTreeMap::new(), true));
        };
        let answer: Value = serde_json::from_str(&text).unwrap_or(Value::Null);
        match answer.get(MARK).and_then(Value::as_str) {
            Some(known) if known == mark => {
                Ok((journal::read_table(&self.table(name), columns)?, true))
            }
            _ => Ok((BTreeMap::new(), false)),
        }
    }

    /// Writes the table and the answer of a finished study of many runs; its journal goes.
    ///
    /// # Errors
    /// The fault of the disk.
    pub fn finish(
        &self,
        name: &str,
        columns: &Columns,
        rows: &[Row],
        answer: &str,
    ) -> Result<(), FolderFault> {
        let told =
            |error: std::io::Error| FolderFault::disk(&format!("the study `{name}`"), &error);
        self.replace(&self.table(name), |out| {
            out.write_all(journal::line(&columns.head()).as_bytes())?;
            for (number, row) in rows.iter().enumerate() {
                out.write_all(journal::line(&columns.cells(number, row)).as_bytes())?;
            }
            Ok(())
        })
        .and_then(|()| self.replace(&self.answer(name), |out| out.write_all(answer.as_bytes())))
        .map_err(told)?;
        match fs::remove_file(self.journal(name)) {
            Err(error) if error.kind() != std::io::ErrorKind::NotFound => Err(told(error)),
            _ => Ok(()),
        }
    }

    /// Writes the answer of a study without runs of its own, and its table when it has one.
    ///
    /// # Errors
    /// The fault of the disk.
    pub fn write(&self, name: &str, table: Option<&str>, answer: &str) -> Result<(), FolderFault> {
        let write = |path: PathBuf, text: &str| {
            self.replace(&path, |out| out.write_all(text.as_bytes()))
                .map_err(|error| FolderFault::disk(&format!("the study `{name}`"), &error))
        };
        if let Some(table) = table {
            write(self.table(name), table)?;
        }
        write(self.answer(name), answer)
    }

    /// Writes a file beside its place and puts it there as a whole.
    fn replace(
        &self,
        path: &Path,
        fill: impl FnOnce(&mut BufWriter<fs::File>) -> std::io::Result<()>,
    ) -> std::io::Result<()> {
        let beside = path.with_extension("new");
        let mut out = BufWriter::new(fs::File::create(&beside)?);
        fill(&mut out)?;
        out.flush()?;
        drop(out);
        fs::rename(&beside, path)
    }
}
