//! Axes: from values to places, with grid, ticks and heading.

use super::clip::{self, Frame};
use super::drawing::{Anchor, Dash, Group, Point, TextStyle};
use super::number;
use super::palette::Ink;
use super::pen::{self, Pen};
use super::ticks::Ticks;

/// How big a chart is, CSS px.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sheet {
    /// Width.
    pub width: f64,
    /// Height; `None` leaves it to the chart.
    pub height: Option<f64>,
}

impl Sheet {
    /// For a page.
    pub const PAGE: Self = Self { width: 720.0, height: None };
    /// For slides; written at a scale of 1.35 it is 960 by 540 px.
    pub const SLIDE: Self = Self { width: 960.0 / 1.35, height: Some(400.0) };

    /// The sheet, or the nearest one that leaves room for margins and a panel.
    pub fn sound(self) -> Self {
        let within = |length: f64, least: f64, usual: f64| {
            if length.is_finite() { length.clamp(least, 2400.0) } else { usual }
        };
        Self {
            width: within(self.width, 480.0, Self::PAGE.width),
            height: self.height.map(|height| within(height, 150.0, 400.0)),
        }
    }
}

impl Default for Sheet {
    fn default() -> Self {
        Self::PAGE
    }
}

/// Left margin of all charts, px.
pub const LEFT: f64 = 62.0;
/// Right margin of all charts, px; wider where labels need it.
pub const RIGHT: f64 = 112.0;

/// A rectangle with a linear scale each way.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Axes {
    /// Where it stands.
    pub frame: Frame,
    /// Values at the left and right edge.
    pub across: [f64; 2],
    /// Values at the lower and upper edge.
    pub up: [f64; 2],
}

impl Axes {
    /// Place of a value across.
    pub fn x(&self, value: f64) -> f64 {
        let [low, high] = self.across;
        self.frame.left + self.frame.width * (value - low) / (high - low)
    }

    /// Place of a value upwards.
    pub fn y(&self, value: f64) -> f64 {
        let [low, high] = self.up;
        self.frame.bottom() - self.frame.height * (value - low) / (high - low)
    }

    /// Place of a pair of values.
    pub fn at(&self, [across, up]: [f64; 2]) -> Point {
        [self.x(across), self.y(up)]
    }

    /// The visible parts of a curve, thinned.
    pub fn curve(&self, values: &[[f64; 2]]) -> Vec<Vec<Point>> {
        let places: Vec<Point> = values.iter().map(|pair| self.at(*pair)).collect();
        clip::line(&places, &self.frame).iter().map(|piece| clip::thin(piece, 0.06)).collect()
    }

    /// Draws the visible parts of a curve.
    pub fn draw(&self, pen: &mut Pen, values: &[[f64; 2]], ink: Ink, width: f64, dash: Dash) {
        for piece in self.curve(values) {
            pen.path(&piece, ink, width, dash);
        }
    }

    /// Fills the visible part of an area.
    pub fn area(&self, pen: &mut Pen, values: &[[f64; 2]], ink: Ink, alpha: f64) {
        let places: Vec<Point> = values.iter().map(|pair| self.at(*pair)).collect();
        pen.fill(&clip::area(&places, &self.frame), ink, alpha);
    }

    /// A band between two values upwards, over the whole width.
    pub fn band(&self, pen: &mut Pen, [low, high]: [f64; 2], ink: Ink, alpha: f64) {
        let top = self.y(high).clamp(self.frame.top, self.frame.bottom());
        let bottom = self.y(low).clamp(self.frame.top, self.frame.bottom());
        pen.rectangle([self.frame.left, top], [self.frame.width, bottom - top], ink, alpha);
    }

    /// Upright grid lines.
    pub fn upright_grid(&self, pen: &mut Pen, ticks: &Ticks) {
        for value in &ticks.values {
            let x = self.x(*value);
            pen.line([x, self.frame.top], [x, self.frame.bottom()], Ink::Grid, pen::HAIR);
        }
    }

    /// Level grid lines.
    pub fn level_grid(&self, pen: &mut Pen, ticks: &Ticks) {
        for value in &ticks.values {
            let y = self.y(*value);
            pen.line([self.frame.left, y], [self.frame.right(), y], Ink::Grid, pen::HAIR);
        }
    }

    /// The line at zero where zero is inside, and the line along the lower edge.
    pub fn base_lines(&self, pen: &mut Pen) {
        if self.up[0] < 0.0 && self.up[1] > 0.0 {
            let y = self.y(0.0);
            pen.line([self.frame.left, y], [self.frame.right(), y], Ink::Axis, pen::HAIR);
        }
        self.floor(pen);
    }

    /// The line along the lower edge.
    pub fn floor(&self, pen: &mut Pen) {
        let bottom = self.frame.bottom();
        pen.line([self.frame.left, bottom], [self.frame.right(), bottom], Ink::Axis, pen::SECOND);
    }

    /// Numbers left of the frame.
    pub fn numbers_left(&self, pen: &mut Pen, ticks: &Ticks) {
        for value in &ticks.values {
            let text = number::tick(*value, ticks.step);
            let place = [self.frame.left - 7.0, self.y(*value) + 3.9];
            pen.text(place, &text, pen::label(Ink::Sub, Anchor::End));
        }
    }

    /// Ticks and numbers below the frame, and the name of the axis below its right end.
    pub fn numbers_below(&self, pen: &mut Pen, ticks: &Ticks, name: &str) {
        let bottom = self.frame.bottom();
        for value in &ticks.values {
            let x = self.x(*value);
            pen.line([x, bottom], [x, bottom + 4.0], Ink::Axis, pen::HAIR);
            let text = number::tick(*value, ticks.step);
            pen.text([x, bottom + 16.0], &text, pen::label(Ink::Sub, Anchor::Middle));
        }
        let place = [self.frame.right(), bottom + 31.0];
        pen.text(place, name, pen::label(Ink::Sub, Anchor::End));
    }

    /// Bold name and grey unit above the frame.
    pub fn heading(&self, pen: &mut Pen, name: &str, unit: &str) {
        heading(pen, [self.frame.left, self.frame.top - 8.5], name, unit);
    }

    /// A group that tells scripts the frame (canvas units) and what its edges stand for.
    pub fn group(&self, id: &str) -> Group {
        let units = |length: f64| format!("{}", (length * super::svg::UNITS).round());
        let Frame { left, top, width, height } = self.frame;
        let frame = [left, top, width, height].map(units).join(" ");
        let mut group = Group::class("p").id(id).with("frame", frame);
        for (name, [low, high]) in [("across", self.across), ("up", self.up)] {
            if low.is_finite() && high.is_finite() {
                group = group.with(name, format!("{low} {high}"));
            }
        }
        group
    }
}

/// Bold name and grey unit at a place.
pub fn heading(pen: &mut Pen, at: Point, name: &str, unit: &str) {
    let bold = TextStyle { size: pen::HEADING, ..pen::bold(Ink::Ink, Anchor::Start) };
    pen.run_of_text(at, 8.0, &[(name, bold), (unit, pen::label(Ink::Sub, Anchor::Start))]);
}
