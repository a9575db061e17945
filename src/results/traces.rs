//! What charts are drawn from.

/// Minimum and maximum of chosen channels in each pixel column of a time window.
#[derive(Clone, Debug, PartialEq)]
pub struct Traces {
    /// Start of the window, s.
    pub start: f64,
    /// End of the window, s.
    pub end: f64,
    /// One trace a channel; each has the same number of columns.
    pub traces: Vec<Trace>,
    /// The path of load angle and slip speed of each gear, for the swing chart.
    pub swings: Vec<Swing>,
}

/// One channel over the window.
#[derive(Clone, Debug, PartialEq)]
pub struct Trace {
    /// Channel name.
    pub channel: String,
    /// Its SI unit.
    pub unit: &'static str,
    /// One entry a column; `None` where the run did not go.
    pub columns: Vec<Option<Column>>,
}

/// A channel within one pixel column, from the continuous solution.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Column {
    /// Value at the left end.
    pub first: f64,
    /// Smallest.
    pub min: f64,
    /// Largest.
    pub max: f64,
    /// Value at the right end.
    pub last: f64,
    /// True when the minimum comes before the maximum.
    pub min_first: bool,
}

impl Column {
    /// Takes a value into a column, which begins with its first one.
    pub fn take(column: &mut Option<Self>, value: f64) {
        let Some(column) = column else {
            *column =
                Some(Self { first: value, min: value, max: value, last: value, min_first: true });
            return;
        };
        column.last = value;
        if value < column.min {
            column.min = value;
            column.min_first = false;
        }
        if value > column.max {
            column.max = value;
            column.min_first = true;
        }
    }
}

/// The path of one gear in the plane of load angle and slip speed.
#[derive(Clone, Debug, PartialEq)]
pub struct Swing {
    /// Gear.
    pub gear: String,
    /// `[time s, phase electrical rad (not wrapped), slip speed electrical rad/s]` in order of time.
    pub path: Vec<[f64; 3]>,
    /// The region from which the gear is caught, for the load at the end; drawn by the swing chart.
    pub separatrix: Option<Separatrix>,
}

/// Borders of the region in which a gear falls back into step, for a constant load.
#[derive(Clone, Debug, PartialEq)]
pub struct Separatrix {
    /// For which load, in words, for example `load at the end of the run`.
    pub load: String,
    /// Saddle (unstable point), electrical rad.
    pub saddle: f64,
    /// Stable point, electrical rad.
    pub rest: f64,
    /// Upper border `[load angle, slip speed]` from -pi to the saddle, or further where it wraps.
    pub upper: Vec<[f64; 2]>,
    /// Lower border.
    pub lower: Vec<[f64; 2]>,
}
