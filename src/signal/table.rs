//! Signals from CSV files: which columns, in which units, and what is wrong with them.
//!
//! This module parses text; the file itself is read by the scenario, which knows its folder.

use crate::quantity::find_unit;

/// Which columns of a table make a signal, and their units.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct TableColumns {
    /// Heading of the time column.
    pub time: String,
    /// Heading of the value column.
    pub value: String,
    /// Unit of the times; `None` is s.
    pub time_unit: Option<String>,
    /// Unit of the values; `None` is SI.
    pub unit: Option<String>,
    /// What the first column is.
    pub across: Across,
}

/// What the first column of a table is.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Across {
    /// A time, s.
    #[default]
    Time,
    /// An angle, rad.
    Angle,
}

impl Across {
    /// Word and unit.
    fn words(self) -> (&'static str, &'static str) {
        match self {
            Self::Time => ("time", "s"),
            Self::Angle => ("angle", "rad"),
        }
    }
}

/// What is wrong with a table, and on which line of its file (from 1).
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct TableFault {
    /// Line of the file, from 1.
    pub line: u64,
    /// One sentence, lower case at the start, without a full stop.
    pub message: String,
}

impl TableFault {
    fn new(line: u64, message: impl Into<String>) -> Self {
        Self { line, message: message.into() }
    }
}

/// Reads the rows `[time, value]` in SI from the text of a CSV file with a heading line.
///
/// Times must not fall; two equal times are a jump, three equal ones a fault.
pub fn parse_table(text: &str, columns: &TableColumns) -> Result<Vec<[f64; 2]>, TableFault> {
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    let mut reader = csv::ReaderBuilder::new()
        .trim(csv::Trim::All)
        .comment(Some(b'#'))
        .from_reader(text.as_bytes());
    let headings = reader.headers().map_err(|error| csv_fault(&error))?.clone();
    let time_column = column(&headings, &columns.time)?;
    let value_column = column(&headings, &columns.value)?;
    let mut rows: Vec<[f64; 2]> = Vec::new();
    for record in reader.records() {
        let record = record.map_err(|error| csv_fault(&error))?;
        let line = record.position().map_or(0, csv::Position::line);
        let time = number(&record, time_column, &columns.time, &columns.time_unit, line)?;
        let value = number(&record, value_column, &columns.value, &columns.unit, line)?;
        rows.push([time, value]);
        if let Some(fault) = order_fault(&rows, columns.across) {
            return Err(TableFault::new(line, fault));
        }
    }
    if rows.is_empty() {
        return Err(TableFault::new(1, "the table has a heading but no rows"));
    }
    Ok(rows)
}

/// What is wrong with the last of some rows: its time falls, or is the third of its kind.
pub fn order_fault(rows: &[[f64; 2]], across: Across) -> Option<String> {
    let (word, unit) = across.words();
    let time = rows.last()?[0];
    let before = rows.len().checked_sub(2).and_then(|index| rows.get(index))?[0];
    if time < before {
        return Some(format!("{word}s must rise, but {time} {unit} stands after {before} {unit}"));
    }
    let earlier = rows.len().checked_sub(3).and_then(|index| rows.get(index))?[0];
    (time <= earlier).then(|| {
        format!("the {word} {time} {unit} stands here for the third time; two make a jump")
    })
}

fn column(headings: &csv::StringRecord, wanted: &str) -> Result<usize, TableFault> {
    headings.iter().position(|heading| heading == wanted).ok_or_else(|| {
        let known: Vec<_> = headings.iter().map(|heading| format!("`{heading}`")).collect();
        TableFault::new(
            1,
            if known.iter().all(|heading| heading == "``") {
                "the table is empty".to_owned()
            } else {
                format!("no column is headed `{wanted}`; there are {}", known.join(", "))
            },
        )
    })
}

fn number(
    record: &csv::StringRecord,
    column: usize,
    heading: &str,
    unit: &Option<String>,
    line: u64,
) -> Result<f64, TableFault> {
    let text = record.get(column).unwrap_or_default();
    let typed = text.parse::<f64>().ok().filter(|value| value.is_finite()).ok_or_else(|| {
        TableFault::new(line, format!("`{text}` in the column `{heading}` is not a finite number"))
    })?;
    let value = match unit.as_deref().and_then(find_unit) {
        Some(unit) => unit.to_si(typed),
        None => typed,
    };
    if value.is_finite() {
        Ok(value)
    } else {
        Err(TableFault::new(line, format!("`{text}` in the column `{heading}` is too large")))
    }
}

fn csv_fault(error: &csv::Error) -> TableFault {
    let line = error.position().map_or(1, csv::Position::line);
    let message = match error.kind() {
        csv::ErrorKind::UnequalLengths { expected_len, len, .. } => {
            format!("this line has {len} fields, the heading {expected_len}")
        }
        csv::ErrorKind::Utf8 { .. } => "this line is not UTF-8 text".to_owned(),
        _ => "this line is not CSV".to_owned(),
    };
    TableFault::new(line, message)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn columns() -> TableColumns {
        TableColumns {
            time: "t".into(),
            value: "speed [rpm]".into(),
            time_unit: Some("ms".into()),
            unit: Some("rpm".into()),
            across: Across::Time,
        }
    }

    #[test]
    fn rows_are_read_in_si() {
        let text =
            "\u{feff}# measured\nt, note, speed [rpm]\n0, a, 30\n500,\"b, c\", 60\n500,d,1e2\n";
        let rows = parse_table(text, &columns()).unwrap();
        let radians = std::f64::consts::PI;
        let expected = [[0.0, radians], [0.5, 2.0 * radians], [0.5, 100.0 / 30.0 * radians]];
        assert_eq!(rows.len(), 3);
        for (row, wanted) in rows.iter().zip(expected) {
            assert!((row[0] - wanted[0]).abs() < 1e-15 && (row[1] - wanted[1]).abs() < 1e-12);
        }
    }

    #[test]
    fn each_fault_names_its_line() {
        for (text, line, words) in [
            ("", 1, "empty"),
            ("a,b\n1,2\n", 1, "no column is headed `t`; there are `a`, `b`"),
            ("t,speed [rpm]\n", 1, "no rows"),
            ("t,speed [rpm]\n0,1\n2,fast\n", 3, "`fast` in the column `speed [rpm]`"),
            ("t,speed [rpm]\n0,1\n2,\n", 3, "`` in the column"),
            ("t,speed [rpm]\n0,1\nnan,3\n", 3, "`nan`"),
            ("t,speed [rpm]\n0,1\n2,3\n1,3\n", 4, "times must rise"),
            ("t,speed [rpm]\n0,1\n1,3\n1,3\n1,4\n", 5, "third time"),
            ("t,speed [rpm]\n0,1\n1\n", 3, "this line has 1 fields, the heading 2"),
        ] {
            let fault = parse_table(text, &columns()).unwrap_err();
            assert!(fault.message.contains(words), "{text:?}: {fault:?}");
            assert_eq!(fault.line, line, "{text:?}: {fault:?}");
        }
    }
}
