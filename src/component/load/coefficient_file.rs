//! Power coefficients from a CSV file: tip speed ratios down, pitches across.
//!
//! ```text
//! ratio, 0 deg, 2.5 deg, 5 deg
//! 0,     0,     0,       0
//! 2,     0.04,  0.05,    0.06
//! ```
//!
//! This module parses text; the file itself is read by the scenario, which knows its folder.

use super::power_coefficient::Rows;
use crate::quantity::{self, Dimension};
use crate::signal::table::TableFault;

/// A file of power coefficients as typed.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct CoefficientFile {
    /// CSV file, relative to the scenario.
    pub file: String,
    /// Unit of pitches in the heading that stand without one.
    pub pitch_unit: Option<String>,
}

fn fault(line: u64, message: impl Into<String>) -> TableFault {
    TableFault { line, message: message.into() }
}

impl CoefficientFile {
    /// Reads the rows from the text of the file.
    ///
    /// # Errors
    /// The line of the file and what is wrong with it, with its column.
    pub fn parse(&self, text: &str) -> Result<Rows, TableFault> {
        let text = text.strip_prefix('\u{feff}').unwrap_or(text);
        let mut reader = csv::ReaderBuilder::new()
            .trim(csv::Trim::All)
            .comment(Some(b'#'))
            .flexible(true)
            .from_reader(text.as_bytes());
        let headings = reader.headers().map_err(|_| fault(1, "this line is not CSV"))?.clone();
        let heading_line = headings.position().map_or(1, csv::Position::line);
        let pitches = self.pitches(&headings, heading_line)?;
        let (mut ratios, mut values): (Vec<f64>, Vec<Vec<f64>>) = (Vec::new(), Vec::new());
        for record in reader.records() {
            let record = record.map_err(|error| {
                fault(error.position().map_or(1, csv::Position::line), "this line is not CSV")
            })?;
            let line = record.position().map_or(0, csv::Position::line);
            if record.len() != headings.len() {
                let message =
                    format!("this row has {} fields, the heading {}", record.len(), headings.len());
                return Err(fault(line, message));
            }
            let mut cells = headings.iter().zip(&record).map(|(heading, cell)| {
                cell.parse::<f64>().ok().filter(|value| value.is_finite()).ok_or_else(|| {
                    fault(
                        line,
                        format!("`{cell}` in the column `{heading}` is not a finite number"),
                    )
                })
            });
            let ratio = cells.next().transpose()?.unwrap_or(f64::NAN);
            let row: Vec<f64> = cells.collect::<Result<_, _>>()?;
            check_row(ratio, &row, ratios.last().copied())
                .map_err(|message| fault(line, message))?;
            ratios.push(ratio);
            values.push(row);
        }
        if ratios.len() < 2 {
            return Err(fault(heading_line, "a table needs at least two rows below its heading"));
        }
        Ok(Rows::new(ratios, pitches, values).from_file(self.clone()))
    }

    /// The pitches of the heading, rad.
    fn pitches(&self, headings: &csv::StringRecord, line: u64) -> Result<Vec<f64>, TableFault> {
        let mut pitches: Vec<f64> = Vec::new();
        for heading in headings.iter().skip(1) {
            let pitch = self.pitch(heading).map_err(|message| fault(line, message))?;
            if pitches.last().is_some_and(|before| *before >= pitch) {
                let message = format!(
                    "the pitches must rise, but the column `{heading}` stands behind a larger one"
                );
                return Err(fault(line, message));
            }
            pitches.push(pitch);
        }
        if pitches.is_empty() {
            let message = "the heading holds no pitch: behind the tip speed ratio each column is headed by one, such as `5 deg`";
            return Err(fault(line, message));
        }
        Ok(pitches)
    }

    fn pitch(&self, heading: &str) -> Result<f64, String> {
        let read = |text: &str| quantity::parse(text, Dimension::Angle).map(|(pitch, _)| pitch);
        match (heading.parse::<f64>(), &self.pitch_unit) {
            (Ok(0.0), _) => Ok(0.0),
            (Ok(_), None) => Err(format!(
                "the column `{heading}` has a pitch without a unit: write `{heading} deg`, or name `pitch_unit`"
            )),
            (Ok(_), Some(unit)) => read(&format!("{heading} {unit}"))
                .map_err(|_| format!("the column `{heading}` is not headed by a pitch")),
            (Err(_), _) => read(heading).map_err(|_| {
                format!("the column `{heading}` is not headed by a pitch such as `5 deg`")
            }),
        }
    }
}

/// What is wrong with a row behind one of the ratio `before`.
fn check_row(ratio: f64, values: &[f64], before: Option<f64>) -> Result<(), String> {
    if ratio < 0.0 {
        return Err("a tip speed ratio must not be negative".to_owned());
    }
    if let Some(before) = before.filter(|before| ratio <= *before) {
        return Err(format!("the tip speed ratios must rise, but {ratio} stands after {before}"));
    }
    if ratio == 0.0 && values.iter().any(|value| *value != 0.0) {
        return Err(
            "at a tip speed ratio of 0 the power coefficient must be 0: a rotor at rest has no power"
                .to_owned(),
        );
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn file(pitch_unit: Option<&str>) -> CoefficientFile {
        CoefficientFile { file: "cp.csv".to_owned(), pitch_unit: pitch_unit.map(str::to_owned) }
    }

    #[test]
    fn a_file_is_the_table_that_it_shows() {
        let values = vec![vec![0.0, 0.0], vec![0.42, 0.35], vec![0.2, 0.05]];
        let expected = Rows::new(vec![0.0, 6.0, 10.0], vec![0.0, 5_f64.to_radians()], values);
        for (text, unit) in [
            ("# invented\nratio, 0 deg, 5 deg\n0, 0, 0\n6, 0.42, 0.35\n10, 0.2, 0.05\n", None),
            ("\u{feff}tsr,0,5\n0,0,0\n6,0.42,0.35\n10,0.2,0.05\n", Some("deg")),
        ] {
            let rows = file(unit).parse(text).unwrap();
            assert_eq!(rows, expected.clone().from_file(file(unit)));
        }
    }

    #[test]
    fn each_fault_names_its_line_and_column() {
        for (text, line, words) in [
            ("", 1, "no pitch"),
            ("tsr\n1\n2\n", 1, "no pitch"),
            ("tsr,0,5\n1,0.1,0.1\n2,0.2,0.2\n", 1, "`5` has a pitch without a unit"),
            ("tsr,0 deg,5 m\n1,0.1,0.1\n2,0.2,0.2\n", 1, "`5 m` is not headed by a pitch"),
            ("tsr,5 deg,2 deg\n1,0.1,0.1\n2,0.2,0.2\n", 1, "`2 deg` stands behind a larger"),
            ("tsr,0 deg,5 deg\n1,0.1,0.1\n2,0.2,x\n", 3, "`x` in the column `5 deg`"),
            ("tsr,0 deg,5 deg\n1,0.1,0.1\n2,0.2\n", 3, "this row has 2 fields, the heading 3"),
            ("tsr,0 deg\n2,0.1\n1,0.1\n", 3, "must rise, but 1 stands after 2"),
            ("tsr,0 deg\n-1,0.1\n1,0.1\n", 2, "must not be negative"),
            ("tsr,0 deg\n0,0.1\n1,0.1\n", 2, "must be 0"),
            ("tsr,0 deg\n1,0.1\n", 1, "at least two rows"),
        ] {
            let found = file(None).parse(text).unwrap_err();
            assert!(found.message.contains(words), "{text:?}: {found:?}");
            assert_eq!(found.line, line, "{text:?}: {found:?}");
        }
    }
}
