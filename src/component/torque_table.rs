//! Torque over load angle as measured or computed by a field program: a table turned into harmonics.
//!
//! ```text
//! T(x) = sum over m of A_m cos(m x) + B_m sin(m x),    least squares over the rows
//! x is then counted from the fundamental's zero; amplitude and phase of order m are relative to it
//! ```
//!
//! A sum of sines is smooth and periodic, so the integrator meets no corner and the energy returns
//! after a pole. Only the shape counts: the pull-out torque scales it. Least squares of
//! trigonometric sums: Lanczos, *Applied Analysis* (1956), chapter 4 (from memory).

use super::magnetic_gear::Harmonic;
use crate::quantity::{self, Dimension, format_number};
use crate::signal::table::{Across, TableColumns};
use crate::tree::Fields;
use nalgebra::{DMatrix, DVector};
use std::f64::consts::{FRAC_PI_2, TAU};

/// The highest order that is looked for.
const HIGHEST: usize = 15;

/// A table needs this many rows.
const LEAST: usize = 12;

/// Orders below this share of the fundamental are left out: tables are not better than that.
const SMALLEST: f64 = 5e-4;

/// Largest mean, gap at the ends and root mean square of what is left, over the fundamental.
const ROOM: f64 = 0.02;

/// A table as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct TorqueTable {
    /// CSV file, relative to the scenario.
    pub file: String,
    /// Its columns: the angle in place of a time.
    pub columns: TableColumns,
    /// The member whose mechanical angle is tabulated, or `electrical`.
    pub at: &'static str,
}

/// What a table comes to.
#[derive(Clone, Debug, PartialEq)]
pub struct Shape {
    /// Harmonics relative to the fundamental.
    pub harmonics: Vec<Harmonic>,
    /// What a reader should know.
    pub warnings: Vec<String>,
}

impl TorqueTable {
    /// Reads the inside of `torque_table:`; `words` are `electrical` and the members.
    pub fn read(fields: &mut Fields<'_>, words: &[&'static str]) -> Self {
        let file = fields.name("file", "CSV file with a heading line, relative to the scenario.");
        let time = fields.name("angle", "Heading of the column of angles, one pole pitch in all.");
        let value = fields.name("torque", "Heading of the column of torques; their shape counts.");
        let time_unit = fields.text("angle_unit", "Unit of the angles; rad when absent.");
        let unit = fields.text("unit", "Unit of the torques; N*m when absent.");
        let at = fields.one_of(
            "at",
            words,
            false,
            "Whose angle it is: the electrical one, or that of a member alone.",
        );
        for (key, text, dimension) in
            [("angle_unit", &time_unit, Dimension::Angle), ("unit", &unit, Dimension::Torque)]
        {
            if let Some(unit) = text
                && let Err(fault) = quantity::parse(&format!("1 {unit}"), dimension)
            {
                fault.report(&fields.path_of(key), &mut fields.faults().borrow_mut());
            }
        }
        let columns = TableColumns { time, value, time_unit, unit, across: Across::Angle };
        Self { file, columns, at }
    }
}

/// The harmonics of rows `[angle, torque]`; `count` electrical radians a radian of the table.
///
/// # Errors
/// One sentence on what keeps the rows from being a periodic torque.
pub fn shape(rows: &[[f64; 2]], count: f64) -> Result<Shape, String> {
    let rows: Vec<[f64; 2]> = rows.iter().map(|row| [row[0] * count, row[1]]).collect();
    check_span(&rows)?;
    let closed = rows[rows.len() - 1][0] - rows[0][0] > TAU * (1.0 - 1e-6);
    // The last row of a closed table stands for the first one too.
    let fitted = if closed { &rows[..rows.len() - 1] } else { &rows[..] };
    let orders = ((fitted.len() - 1) / 3).min(HIGHEST);
    let form = DMatrix::from_fn(fitted.len(), 2 * orders + 1, |row, column| {
        let angle = fitted[row][0];
        match column {
            0 => 1.0,
            _ if column % 2 == 1 => (column.div_ceil(2) as f64 * angle).cos(),
            _ => ((column / 2) as f64 * angle).sin(),
        }
    });
    let torque = DVector::from_iterator(fitted.len(), fitted.iter().map(|row| row[1]));
    let solved = form.clone().svd(true, true).solve(&torque, 1e-12)?;
    let term = |order: usize| (solved[2 * order - 1], solved[2 * order]);
    let (cosine, sine) = term(1);
    let fundamental = cosine.hypot(sine);
    let percent = |value: f64| format!("{} %", format_number(100.0 * value / fundamental, 3));
    let left = (&torque - form * &solved).norm() / (fitted.len() as f64).sqrt();
    if !fundamental.is_finite() || fundamental <= left || fundamental == 0.0 {
        return Err("the torques do not follow the angle over one pole pitch".to_owned());
    }
    if solved[0].abs() > ROOM * fundamental {
        return Err(format!(
            "the torques have a mean of {} of the fundamental; over a pole the magnets do no work, so it must be 0",
            percent(solved[0].abs())
        ));
    }
    if closed {
        let gap = (rows[rows.len() - 1][1] - rows[0][1]).abs();
        if gap > ROOM * fundamental {
            return Err(format!(
                "the table does not close: its first and last torques, one pole pitch apart, differ by {} of the fundamental",
                percent(gap)
            ));
        }
    }
    if left > ROOM * fundamental {
        return Err(format!(
            "{orders} harmonics leave {} of the fundamental (root mean square); smoother or more rows are needed",
            percent(left)
        ));
    }
    let mut warnings = Vec::new();
    let mut lead = cosine.atan2(sine);
    let mut sign = 1.0;
    if lead.abs() > FRAC_PI_2 {
        sign = -1.0;
        lead = (-cosine).atan2(-sine);
        warnings.push(
            "the torque falls through angle 0: it is taken with the opposite sign".to_owned(),
        );
    }
    if lead.abs() > 5_f64.to_radians() {
        let degrees = format_number(lead.to_degrees(), 3);
        warnings.push(format!(
            "the fundamental leads by {degrees} electrical degrees: load angles are counted from its zero"
        ));
    }
    let harmonics = (2..=orders)
        .map(|order| {
            let (cosine, sine) = term(order);
            Harmonic {
                order: order as u32,
                amplitude: cosine.hypot(sine) / fundamental,
                phase: (sign * cosine).atan2(sign * sine) - order as f64 * lead,
            }
        })
        .filter(|harmonic| harmonic.amplitude >= SMALLEST)
        .collect();
    Ok(Shape { harmonics, warnings })
}

/// The rows must cover one pole pitch once, without a gap.
fn check_span(rows: &[[f64; 2]]) -> Result<(), String> {
    if rows.len() < LEAST {
        return Err(format!("the table has {} rows; at least {LEAST} are needed", rows.len()));
    }
    let span = rows[rows.len() - 1][0] - rows[0][0];
    let degrees = |angle: f64| format!("{} degrees", format_number(angle.to_degrees(), 5));
    if span > TAU * 1.001 {
        return Err(format!(
            "the table covers {} electrical; one pole pitch, 360, is wanted once",
            degrees(span)
        ));
    }
    let widest = rows.windows(2).map(|pair| pair[1][0] - pair[0][0]).fold(0.0, f64::max);
    let gap = (TAU - span).max(widest);
    let usual = TAU / rows.len() as f64;
    if gap > 4.0 * usual {
        return Err(format!(
            "the table leaves {} electrical without a row; it must cover one pole pitch, 360, evenly",
            degrees(gap)
        ));
    }
    if rows.windows(2).any(|pair| pair[1][0] == pair[0][0]) {
        return Err("two rows have the same angle".to_owned());
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn sampled(count: usize, torque: impl Fn(f64) -> f64) -> Vec<[f64; 2]> {
        (0..=count)
            .map(|place| TAU * place as f64 / count as f64)
            .map(|angle| [angle, torque(angle)])
            .collect()
    }

    // Closed form: a sum of sines is its own expansion, wherever its zero lies.
    #[test]
    fn a_sum_of_sines_is_found_again() {
        for (shift, sign) in [(0.0, 1.0), (0.4, 1.0), (-0.3, -1.0)] {
            let law = |x: f64| {
                let x = x + shift;
                sign * 70.0 * (x.sin() + 0.1 * (3.0 * x + 0.2).sin() - 0.02 * (5.0 * x).sin())
            };
            let found = shape(&sampled(72, law), 1.0).unwrap();
            assert_eq!(found.harmonics.len(), 2, "{:?}", found.harmonics);
            let [third, fifth] = [found.harmonics[0], found.harmonics[1]];
            assert_eq!((third.order, fifth.order), (3, 5));
            assert!(
                (third.amplitude - 0.1).abs() < 1e-12 && (fifth.amplitude - 0.02).abs() < 1e-12
            );
            assert!(
                (third.phase - 0.2).rem_euclid(TAU).min(TAU - (third.phase - 0.2).rem_euclid(TAU))
                    < 1e-10
            );
            assert_eq!(found.warnings.len(), usize::from(shift != 0.0) + usize::from(sign < 0.0));
        }
    }

    // The angle of a member of 22 pole pairs runs 22 times slower.
    #[test]
    fn the_angle_of_a_member_counts_by_its_pole_pairs() {
        let rows: Vec<[f64; 2]> = sampled(40, |x| 5.0 * x.sin() + 0.5 * (2.0 * x).sin());
        let slow: Vec<[f64; 2]> = rows.iter().map(|row| [row[0] / 22.0, row[1]]).collect();
        let found = shape(&slow, 22.0).unwrap();
        assert_eq!(found.harmonics.len(), 1);
        assert!((found.harmonics[0].amplitude - 0.1).abs() < 1e-12);
    }

    #[test]
    fn what_is_no_periodic_torque_is_refused() {
        let told = |rows: &[[f64; 2]]| shape(rows, 1.0).unwrap_err();
        assert!(told(&sampled(72, |x| 1.0 + x.sin())).contains("a mean of 100 %"));
        assert!(told(&sampled(8, f64::sin)).contains("at least 12"));
        assert!(told(&sampled(72, |x| x.sin() + 0.01 * x)).contains("mean"));
        let half: Vec<[f64; 2]> = sampled(72, f64::sin)[..37].to_vec();
        assert!(told(&half).contains("leaves 180 degrees"), "{}", told(&half));
        let twice: Vec<[f64; 2]> =
            sampled(72, f64::sin).iter().map(|r| [2.0 * r[0], r[1]]).collect();
        assert!(told(&twice).contains("covers 720 degrees"));
        let rough = sampled(72, |x| x.sin() + 0.2 * (41.0 * x).sin());
        assert!(told(&rough).contains("harmonics leave"), "{}", told(&rough));
    }
}
