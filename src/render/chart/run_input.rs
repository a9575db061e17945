//! What a chart over time shows, as plain data in display units.

use super::axes::Sheet;
use super::curve::Pieces;
use super::drawing::Dash;
use super::marks::Forbidden;
use super::palette::{Ink, Side};
use super::train::SignalBar;

/// A stack of panels over one time axis, with the events strip below.
#[derive(Clone, Debug, PartialEq)]
pub struct RunChart {
    /// Name of the file and head of the ids.
    pub id: String,
    /// What it shows, in words.
    pub title: String,
    /// Start and end of the time axis, s.
    pub window: [f64; 2],
    /// Panels from above.
    pub panels: Vec<Panel>,
    /// Rows of the strip from above.
    pub rows: Vec<Row>,
    /// Times at which a signal jumps, s.
    pub steps: Vec<f64>,
    /// Times of protections, s: dashed through all panels.
    pub acts: Vec<f64>,
    /// Size.
    pub sheet: Sheet,
}

/// One panel.
#[derive(Clone, Debug, PartialEq)]
pub struct Panel {
    /// Id within the chart, for example `speed`.
    pub id: String,
    /// Bold part of the heading.
    pub name: String,
    /// Grey part: the unit and what values are referred to.
    pub unit: String,
    /// What is special about it.
    pub kind: PanelKind,
    /// Curves; the first is drawn last, on top.
    pub curves: Vec<Curve>,
    /// Allowed band, for example of the pull-out torque.
    pub allowed: Option<[f64; 2]>,
    /// Limit lines.
    pub limits: Vec<Limit>,
    /// Measured records, under the curves.
    pub dots: Vec<Dots>,
}

/// A measured record within a panel.
#[derive(Clone, Debug, PartialEq)]
pub struct Dots {
    /// Name of the record.
    pub label: String,
    /// `[time s, value]` in the unit of the panel, in order of time.
    pub points: Vec<[f64; 2]>,
}

/// What is special about a panel.
#[derive(Clone, Debug, PartialEq)]
pub enum PanelKind {
    /// Values with an axis that fits them.
    Values,
    /// A load angle from -180 to 180 degrees with its slips.
    LoadAngle {
        /// The law's peaks, electrical degrees: backward and forward.
        peaks: [f64; 2],
        /// Time in s and direction of each slip.
        slips: Vec<(f64, i32)>,
    },
}

/// One curve.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    /// Channel it shows, for scripts.
    pub channel: String,
    /// Factor from the channel's SI value to the value shown, for scripts.
    pub factor: f64,
    /// Words at its right end.
    pub label: String,
    /// Colour.
    pub hue: Hue,
    /// Weight of the stroke.
    pub weight: Weight,
    /// Line style; only compared runs are broken.
    pub dash: Dash,
    /// `[time s, value]`, broken where the run was not computed.
    pub pieces: Pieces,
}

/// What gives a curve its colour.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Hue {
    /// The member it turns with.
    Side(Side),
    /// Ink: angles, modes.
    Ink,
    /// Grey: second curves.
    Grey,
}

impl Hue {
    /// For strokes.
    pub fn ink(self) -> Ink {
        match self {
            Self::Side(side) => side.ink(),
            Self::Ink => Ink::Ink,
            Self::Grey => Ink::Axis,
        }
    }

    /// For text.
    pub fn text(self) -> Ink {
        match self {
            Self::Side(side) => side.text(),
            Self::Ink => Ink::Ink,
            Self::Grey => Ink::Sub,
        }
    }
}

/// Weight of a curve.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Weight {
    /// 1.7 px.
    Main,
    /// 1.1 px.
    Second,
}

/// A limit line over the whole width.
#[derive(Clone, Debug, PartialEq)]
pub struct Limit {
    /// Value, display unit.
    pub value: f64,
    /// The side on which one must not be.
    pub forbidden: Forbidden,
    /// Words at the right end; empty for none.
    pub label: String,
    /// Whether the axis is widened so that it is seen.
    pub always_seen: bool,
}

/// A row of the strip.
#[derive(Clone, Debug, PartialEq)]
pub enum Row {
    /// Slips of a gear.
    Slips {
        /// Words at the left.
        label: String,
        /// Time in s and direction.
        slips: Vec<(f64, i32)>,
        /// Time of falling into step for good, s.
        in_step: Option<f64>,
        /// Words beside the marks, longest first; the first that has room is set.
        notes: Vec<String>,
    },
    /// Spans of time.
    Bars {
        /// Words at the left.
        label: String,
        /// What they mean.
        kind: BarKind,
        /// The spans.
        bars: Vec<SignalBar>,
    },
    /// Moments with a name.
    Flags {
        /// Words at the left.
        label: String,
        /// Time in s and name.
        flags: Vec<(f64, String)>,
    },
}

/// What spans of time mean.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum BarKind {
    /// Past the peak: crimson.
    PastPeak,
    /// Stuck, in play: grey ink.
    State,
    /// A signal: light grey with words.
    Signal,
}
