//! Requirements: one channel, one comparison, one window.

/// A requirement as typed, values in SI.
#[derive(Clone, Debug, PartialEq)]
pub struct Requirement {
    /// Its name.
    pub name: String,
    /// The channel it looks at.
    pub of: String,
    /// The comparison.
    pub test: Test,
    /// Compares the value itself instead of its magnitude.
    pub signed: bool,
    /// Start of the window, s; `None` is 0.
    pub after: Option<f64>,
    /// End of the window, s; `None` is the end of the run.
    pub before: Option<f64>,
    /// The requirement in words as typed, for example `gear.slips at most 0`.
    pub text: String,
}

/// What is asked of the channel.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Test {
    /// The largest value is at most this.
    AtMost(f64),
    /// The smallest value is at least this.
    AtLeast(f64),
    /// The value first equals `value`.
    Reaches {
        /// The value.
        value: f64,
        /// No later than this after `after`, s; `None`: any time.
        within: Option<f64>,
        /// Half-width of the band to be entered for good, in the channel's unit.
        band: Option<f64>,
    },
}
