//! Protections: logic that acts once during the run.

/// A protection as typed, values in SI.
#[derive(Clone, Debug, PartialEq)]
pub struct Protection {
    /// Its name.
    pub name: String,
    /// The condition.
    pub when: Condition,
    /// The condition must hold without a break for this long, s.
    pub hold: f64,
    /// From then to the action, s.
    pub delay: f64,
    /// What it does.
    pub then: Vec<Action>,
    /// Where its figures come from.
    pub source: Option<String>,
}

/// When a protection starts to count.
#[derive(Clone, Debug, PartialEq)]
pub enum Condition {
    /// At this time of the run, s.
    Time(f64),
    /// A channel's value (its magnitude unless `signed`) is at least `limit`.
    AtLeast {
        /// Channel.
        of: String,
        /// In the channel's unit.
        limit: f64,
        /// The value itself instead of its magnitude.
        signed: bool,
    },
    /// A channel's value (its magnitude unless `signed`) is at most `limit`.
    AtMost {
        /// Channel.
        of: String,
        /// In the channel's unit.
        limit: f64,
        /// The value itself instead of its magnitude.
        signed: bool,
    },
}

/// One action of a protection.
#[derive(Clone, Debug, PartialEq)]
pub enum Action {
    /// A signal by path runs straight to a value.
    Set {
        /// Path of a signal, for example `motors.line_motor.scale`.
        signal: String,
        /// The value it goes to, SI.
        to: f64,
        /// In this time, s; 0 is a step.
        over: f64,
    },
    /// The run ends.
    EndRun,
}
