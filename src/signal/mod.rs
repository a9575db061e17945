//! Signals: quantities as functions of time, as typed and as evaluated.

use crate::quantity::Dimension;

/// A signal as typed, in SI.
#[derive(Clone, Debug, PartialEq)]
pub enum Signal {
    /// The same value at all times.
    Constant(f64),
    /// The signal of this name in `signals`.
    Named(String),
    /// `from` before `at`, `to` from `at` on.
    Step { at: f64, from: f64, to: f64 },
    /// `from` until `start`, straight to `to` at `end`.
    Ramp { start: f64, end: f64, from: f64, to: f64 },
    /// `peak` for start <= t < end, else `base`.
    Pulse { start: f64, end: f64, base: f64, peak: f64 },
    /// Straight lines between `[time, value]`; end values held; two equal times are a jump.
    Points(Vec<[f64; 2]>),
    /// `mean + amplitude sin(2 pi frequency t + phase)`.
    Sine { mean: f64, amplitude: f64, frequency: f64, phase: f64 },
    /// Rows read from a CSV file, as points.
    Table { file: String, rows: Vec<[f64; 2]> },
    /// IEC 61400-1 extreme operating gust: hub wind, m/s; gust magnitude, m/s; 10.5 s from `start`.
    ExtremeGust { start: f64, hub_wind: f64, magnitude: f64 },
    /// Sum of signals of one dimension.
    Sum(Vec<Signal>),
    /// Product, at most one member with a dimension.
    Product(Vec<Signal>),
}

/// A named signal of the file.
#[derive(Clone, Debug, PartialEq)]
pub struct NamedSignal {
    /// Its name.
    pub name: String,
    /// Its dimension where its own values fix one (a bare number may serve as any).
    pub dimension: Option<Dimension>,
    /// Its course.
    pub signal: Signal,
}
