//! Finished runs of a study on disk, so that a killed study can go on.
//!
//! The first line tells which work it is, the second names the columns, then comes one row a
//! run in the order in which they were finished, each written out before the next. A row cut
//! short by a kill is dropped.

use super::rows::Columns;
use crate::analysis::study::outcome::Outcome;
use crate::analysis::study::work::{Keep, Row};
use crate::render::folder::FolderFault;
use std::collections::BTreeMap;
use std::fs::{self, File, OpenOptions};
use std::io::{self, Write};
use std::path::Path;

/// Begin of the first line; the mark of the work follows.
const FIRST: &str = "# unfinished study, to be continued with --resume: ";

/// An open journal.
#[derive(Debug)]
pub struct Journal {
    file: File,
    columns: Columns,
    name: String,
}

/// What a journal on disk holds.
#[derive(Debug)]
pub enum Found {
    /// No journal.
    Nothing,
    /// Runs of this work, by number, and the length of the text they stand in.
    Runs(BTreeMap<usize, Outcome>, u64),
    /// Runs of other work: the file or the study has changed.
    Other,
}

/// Reads a journal.
///
/// # Errors
/// The fault of the disk.
pub fn read(path: &Path, mark: &str, columns: &Columns) -> Result<Found, FolderFault> {
    let bytes = match fs::read(path) {
        Ok(bytes) => bytes,
        Err(error) if error.kind() == io::ErrorKind::NotFound => return Ok(Found::Nothing),
        Err(error) => return Err(unread(path, &error)),
    };
    let whole = bytes.iter().rposition(|byte| *byte == b'\n').map_or(0, |end| end + 1);
    let text = String::from_utf8_lossy(bytes.get(..whole).unwrap_or_default());
    let Some((first, rest)) = text.split_once('\n') else { return Ok(Found::Nothing) };
    let Some((head, _)) = rest.split_once('\n') else { return Ok(Found::Nothing) };
    if first.strip_prefix(FIRST) != Some(mark) || head != line(&columns.head()).trim_end() {
        return Ok(Found::Other);
    }
    Ok(Found::Runs(runs(rest, columns), whole as u64))
}

/// The runs of a finished table.
///
/// # Errors
/// The fault of the disk.
pub fn read_table(path: &Path, columns: &Columns) -> Result<BTreeMap<usize, Outcome>, FolderFault> {
    let text = fs::read_to_string(path).map_err(|error| unread(path, &error))?;
    Ok(runs(&text, columns))
}

/// The runs of a text of rows whose first line is the head.
fn runs(text: &str, columns: &Columns) -> BTreeMap<usize, Outcome> {
    let mut reader = csv::ReaderBuilder::new().flexible(true).from_reader(text.as_bytes());
    reader.records().flatten().filter_map(|record| columns.read(record.iter())).collect()
}

impl Journal {
    /// Begins a journal.
    ///
    /// # Errors
    /// The fault of the disk.
    pub fn begin(
        path: &Path,
        name: &str,
        mark: &str,
        columns: Columns,
    ) -> Result<Self, FolderFault> {
        let head = format!("{FIRST}{mark}\n{}", line(&columns.head()));
        let file = File::create(path)
            .and_then(|mut file| file.write_all(head.as_bytes()).map(|()| file))
            .map_err(|error| fault(name, &error))?;
        Ok(Self { file, columns, name: name.to_owned() })
    }

    /// Goes on with a journal whose good part has this length.
    ///
    /// # Errors
    /// The fault of the disk.
    pub fn go_on(
        path: &Path,
        name: &str,
        length: u64,
        columns: Columns,
    ) -> Result<Self, FolderFault> {
        let file = OpenOptions::new()
            .append(true)
            .open(path)
            .and_then(|file| file.set_len(length).map(|()| file))
            .map_err(|error| fault(name, &error))?;
        Ok(Self { file, columns, name: name.to_owned() })
    }
}

impl Keep for Journal {
    fn keep(&mut self, number: usize, row: &Row) -> Result<(), String> {
        let text = line(&self.columns.cells(number, row));
        self.file.write_all(text.as_bytes()).map_err(|error| fault(&self.name, &error).message)
    }
}

/// A line of a table with its line break.
pub fn line(cells: &[String]) -> String {
    let mut writer = csv::WriterBuilder::new().from_writer(Vec::new());
    // Writing to memory cannot fail.
    let _ = writer.write_record(cells);
    String::from_utf8(writer.into_inner().unwrap_or_default()).unwrap_or_default()
}

fn fault(name: &str, error: &io::Error) -> FolderFault {
    FolderFault::disk(&format!("the finished runs of `{name}`"), error)
}

fn unread(path: &Path, error: &io::Error) -> FolderFault {
    FolderFault {
        message: format!("cannot read `{}`: {error}", path.display()),
        hint: Some("without --resume the study begins anew".to_owned()),
    }
}
