//! Protections: logic that acts once during the run.

use super::channel::Known;
use super::requirement::{channel_dimension, limit};
use crate::quantity::{self, Dimension};
use crate::tree::{Fields, Range, Shape};

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

/// What the reader of protections asks about the rest of the file.
pub struct Surroundings<'a> {
    /// All channels of the train.
    pub channels: Known<'a>,
    /// The dimension of the signal at a path (`None`: any), or the fault and a hint.
    pub signal_at: &'a SignalAt<'a>,
}

/// Finds the dimension of the signal at a path.
pub type SignalAt<'a> = dyn Fn(&str) -> Result<Option<Dimension>, PathFault> + 'a;

/// A fault at a path: what is wrong, and what to type instead.
pub type PathFault = (String, Option<String>);

impl Protection {
    /// Reads a protection.
    pub fn read(fields: &mut Fields<'_>, around: &Surroundings<'_>) -> Self {
        let when =
            fields.group("when", "The condition: a time, or a channel and a limit.", |when| {
                read_condition(when, around.channels)
            });
        let (when, hold) = when.unwrap_or((Condition::Time(f64::NAN), 0.0));
        let delay = fields.quantity_or(
            "delay",
            Dimension::Time,
            Range::NotNegative,
            0.0,
            "From then to the action; not cancelled when the condition goes.",
        );
        let then: Vec<_> = fields
            .list("then", "What it does.", |action| read_action(action, around))
            .into_iter()
            .flatten()
            .collect();
        if !fields.has("then") {
            fields.miss("then", "for example then: [ { set: motors.NAME.scale, to: 0 } ]");
        }
        Self {
            name: fields.own_name().to_owned(),
            when,
            hold,
            delay,
            then,
            source: fields.source(),
        }
    }
}

fn read_condition(fields: &mut Fields<'_>, channels: Known<'_>) -> (Condition, f64) {
    let time = fields.quantity_optional(
        "time",
        Dimension::Time,
        Range::NotNegative,
        "At this time of the run.",
    );
    let of = fields.name_optional("of", "The channel it looks at.");
    let dimension = of.as_deref().and_then(|of| channel_dimension(fields, of, channels));
    let signed = fields.flag("signed", false, "Compares the value itself, not its magnitude.");
    let at_least =
        limit(fields, "at_least", dimension, signed, "True when the value is at least this.");
    let at_most =
        limit(fields, "at_most", dimension, signed, "True when the value is at most this.");
    let hold = fields.quantity_or(
        "for",
        Dimension::Time,
        Range::NotNegative,
        0.0,
        "The condition must hold without a break for this long.",
    );
    let limits = ["at_least", "at_most"].iter().filter(|key| fields.has(key)).count();
    let whole = match (fields.has("time"), fields.has("of")) {
        (true, false) => limits == 0 && !fields.has("signed"),
        (false, true) => limits == 1,
        _ => false,
    };
    if !whole && !fields.is_no_map() {
        fields.fault_here_hint(
            "the condition is not complete or says two things",
            "write { time: 5 s }, or { of: CHANNEL, at_least: LIMIT } or at_most, with for: and signed: if wanted",
        );
    }
    let of = of.unwrap_or_default();
    let condition = match (time, at_least, at_most) {
        (Some(time), ..) => Condition::Time(time),
        (None, Some(limit), _) => Condition::AtLeast { of, limit, signed },
        (None, None, limit) => Condition::AtMost { of, limit: limit.unwrap_or(f64::NAN), signed },
    };
    (condition, hold)
}

fn read_action(fields: &mut Fields<'_>, around: &Surroundings<'_>) -> Option<Action> {
    let end_run = fields.flag("end_run", false, "The run ends.");
    let set = fields.name_optional("set", "Path of a signal, for example motors.NAME.scale.");
    let to = fields.raw("to", Shape::Free, false, "The value it goes to.");
    let over = fields.quantity_or(
        "over",
        Dimension::Time,
        Range::NotNegative,
        0.0,
        "In this time; 0 is a step.",
    );
    let complete = match (end_run, &set, to) {
        (true, None, None) => !fields.has("over"),
        (false, Some(_), Some(_)) => true,
        _ => false,
    };
    if !complete && !fields.is_no_map() {
        fields.fault_here_hint(
            "an action either sets a signal or ends the run",
            "write { set: PATH, to: VALUE, over: TIME } or { end_run: true }",
        );
    }
    if end_run {
        return Some(Action::EndRun);
    }
    let signal = set?;
    let dimension = match (around.signal_at)(&signal) {
        Ok(dimension) => dimension,
        Err((message, Some(hint))) => {
            fields.fault_hint("set", message, hint);
            return None;
        }
        Err((message, None)) => {
            fields.fault("set", message);
            return None;
        }
    };
    let path = fields.path_of("to");
    let mut faults = fields.faults().borrow_mut();
    let to = match dimension {
        Some(dimension) => quantity::read(&path, to?, dimension, &mut faults),
        None => quantity::read_any(&path, to?, &mut faults).0,
    };
    Some(Action::Set { signal, to, over })
}
