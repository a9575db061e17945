//! Figures for the page: units of the file, true minus, thousands marks, units held to numbers.

use crate::quantity::{Dimension, to_unit};
use crate::render::chart::number::{NBSP, number, unit_text};
use crate::render::chart::units::{Display as ChartDisplay, Unit};
use crate::render::shown::{self, Shown};
use crate::scenario::Display;

/// Significant digits of figures for people.
const DIGITS: usize = 4;

/// Writes figures in the units of a scenario.
#[derive(Clone, Copy, Debug)]
pub struct Written<'a> {
    display: &'a Display,
    shown: Shown<'a>,
}

impl<'a> Written<'a> {
    /// For the units of a scenario.
    pub fn new(display: &'a Display) -> Self {
        Self { display, shown: Shown::new(display) }
    }

    /// The same for texts without page rules.
    pub fn shown(&self) -> Shown<'a> {
        self.shown
    }

    /// A torque given in N*m.
    pub fn torque(&self, value: f64) -> String {
        tidy(&self.shown.torque(value))
    }

    /// A speed given in rad/s.
    pub fn speed(&self, value: f64) -> String {
        tidy(&self.shown.speed(value))
    }

    /// The value of a channel with its unit.
    pub fn value(&self, channel: &str, unit: &str, value: f64) -> String {
        tidy(&self.shown.value(channel, unit, value))
    }

    /// Figure and unit of a channel's value.
    pub fn parts(&self, channel: &str, unit: &str, value: f64) -> (String, String) {
        if unit == "s" {
            return (number(value, DIGITS), "s".to_owned());
        }
        let (figure, unit) = self.shown.channel(channel, unit, value);
        (tidy(&figure), unit_text(&unit))
    }

    /// The unit in which a channel is shown and how many of it make one SI unit.
    pub fn unit(&self, channel: &str, unit: &str) -> Unit {
        let of = |dimension, wanted: &str| {
            let size = to_unit(1.0, dimension, wanted).unwrap_or(1.0);
            Unit::new(&unit_text(wanted), size)
        };
        match unit {
            "rad/s" if channel.ends_with(".slip_speed") => Unit::new("rad/s", 1.0),
            "rad/s" => of(Dimension::Speed, &self.display.speed),
            "rad" => of(Dimension::Angle, &self.display.angle),
            "N*m" => of(Dimension::Torque, &self.display.torque),
            "1" if channel.ends_with("pull_out_share") => Unit::new("%", 100.0),
            _ => Unit::new(&unit_text(unit), 1.0),
        }
    }

    /// The units of charts.
    pub fn chart_display(&self) -> ChartDisplay {
        ChartDisplay {
            speed: self.unit("", "rad/s"),
            torque: self.unit("", "N*m"),
            angle: self.unit("", "rad"),
        }
    }
}

/// A time with its unit.
pub fn time(value: f64) -> String {
    tidy(&shown::time(value))
}

/// A share as percent.
pub fn percent(share: f64) -> String {
    tidy(&shown::percent(share))
}

/// A plain number.
pub fn plain(value: f64) -> String {
    number(value, DIGITS)
}

/// `1500 N*m` as the page has it: each number with true minus and marks, each unit held to it.
pub fn tidy(text: &str) -> String {
    let (figure, unit) = match text.split_once(' ') {
        Some((figure, unit)) => (figure, unit),
        None => (text, ""),
    };
    let Ok(value) = figure.parse::<f64>() else { return unit_text(text) };
    if unit.is_empty() {
        return number(value, DIGITS);
    }
    format!("{}{NBSP}{}", number(value, DIGITS), unit_text(unit))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn figures_have_true_minus_marks_and_units() {
        assert_eq!(tidy("-1500 N*m"), "\u{2212}1500\u{a0}N·m");
        assert_eq!(tidy("14320 rpm"), "14\u{a0}320\u{a0}rpm");
        assert_eq!(tidy("never"), "never");
        let display = Display { speed: "rpm".into(), torque: "N*m".into(), angle: "deg".into() };
        let written = Written::new(&display);
        assert_eq!(written.value("g.pull_out_share", "1", 0.722), "72.2\u{a0}%");
        // 30/pi revolutions a minute make one radian a second.
        let factor = written.unit("a.speed", "rad/s").per_si;
        assert!((factor - 30.0 / std::f64::consts::PI).abs() < 1e-12);
    }
}
