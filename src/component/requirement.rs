//! Requirements: one channel, one comparison, one window.

use super::channel::Known;
use crate::diagnostic::closest;
use crate::quantity::{self, Dimension};
use crate::tree::{Fields, Node, Range, Shape};

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
    /// Where its figures come from.
    pub source: Option<String>,
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

impl Requirement {
    /// Reads a requirement; its limits are quantities of the channel's dimension.
    pub fn read(fields: &mut Fields<'_>, known: Known<'_>) -> Self {
        let of = fields.name("of", "The channel it looks at.");
        let dimension = channel_dimension(fields, &of, known);
        let signed =
            fields.flag("signed", false, "Compares the value itself instead of its magnitude.");
        let limits = [
            ("at_most", "The largest value in the window is at most this."),
            ("at_least", "The smallest value in the window is at least this."),
            ("reaches", "The value first equals this."),
        ]
        .map(|(key, doc)| (key, limit(fields, key, dimension, signed, doc)));
        let given: Vec<_> = limits.iter().filter(|(key, _)| fields.has(key)).collect();
        if given.len() != 1 {
            fields.fault_here_hint(
                match given.len() {
                    0 => "no limit is given".to_owned(),
                    _ => format!("{} limits are given", given.len()),
                },
                "give exactly one of at_most, at_least and reaches",
            );
        }
        let within = fields.quantity_optional(
            "within",
            Dimension::Time,
            Range::NotNegative,
            "No later than this after `after`; any time in the window when absent.",
        );
        let reached = limits[2].1.unwrap_or(f64::NAN);
        let band = read_band(fields, reached, dimension);
        let after = time(fields, "after", "Start of the window; default 0.");
        let before = time(fields, "before", "End of the window; default the end of the run.");
        if let (Some(after), Some(before)) = (after, before)
            && before <= after
        {
            fields.fault("before", "`before` must lie after `after`");
        }
        if !fields.has("reaches") {
            for key in ["within", "stays_within"] {
                if fields.has(key) {
                    fields.fault(key, format!("`{key}` goes with `reaches` only"));
                }
            }
        }
        let counts = of.ends_with(".slips") || of.ends_with(".net_slips");
        if counts && limits[1].1.is_some_and(|least| least > 0.0) {
            fields.warn(
                "at_least",
                "no run can meet this: slips are counted from the start of the window, so the \
                 smallest count in it is 0; `reaches: 1` asks that it slips",
            );
        }
        let value = |index: usize| limits.get(index).and_then(|(_, value)| *value);
        let test = match given.first().map(|(key, _)| *key) {
            Some("at_most") => Test::AtMost(value(0).unwrap_or(f64::NAN)),
            Some("at_least") => Test::AtLeast(value(1).unwrap_or(f64::NAN)),
            _ => Test::Reaches { value: reached, within, band },
        };
        Self {
            name: fields.own_name().to_owned(),
            text: in_words(fields, &of, signed),
            of,
            test,
            signed,
            after,
            before,
            source: fields.source(),
        }
    }
}

/// The dimension of a channel by its name; an unknown one is a fault at `of`.
pub fn channel_dimension(fields: &Fields<'_>, of: &str, known: Known<'_>) -> Option<Dimension> {
    if let Some(channel) = known.channels.iter().find(|channel| channel.name == of) {
        return Some(channel.dimension);
    }
    let thing = of.split_once('.').map_or(of, |(thing, _)| thing);
    let of_thing: Vec<&str> = known
        .channels
        .iter()
        .filter_map(|channel| channel.name.split_once('.'))
        .filter(|(name, _)| *name == thing)
        .map(|(_, channel)| channel)
        .collect();
    let near = closest(of, known.channels.iter().map(|channel| channel.name.as_str()));
    if of.is_empty() || !known.complete && (of_thing.is_empty() || is_at_fault(fields, thing)) {
        return None;
    }
    let hint = match near {
        Some(near) => format!("did you mean `{near}`?"),
        None if of_thing.is_empty() => "a channel is a thing of the train, a dot and one of its \
            quantities, for example rotor.speed"
            .to_owned(),
        None => format!("`{thing}` has {}", of_thing.join(", ")),
    };
    fields.fault_hint("of", format!("no channel is named `{of}`"), hint);
    None
}

/// True when something of this name could not be read.
fn is_at_fault(fields: &Fields<'_>, thing: &str) -> bool {
    fields
        .faults()
        .borrow()
        .iter()
        .any(|fault| fault.severity.is_error() && fault.path.split('.').nth(1) == Some(thing))
}

/// A limit in the channel's dimension; nothing is read when the channel is unknown.
pub fn limit(
    fields: &mut Fields<'_>,
    key: &'static str,
    dimension: Option<Dimension>,
    signed: bool,
    doc: &'static str,
) -> Option<f64> {
    let node = fields.raw(key, Shape::OfChannel, false, doc)?;
    let path = fields.path_of(key);
    let value = quantity::read(&path, node, dimension?, &mut fields.faults().borrow_mut());
    if value < 0.0 && !signed {
        fields.fault_hint(
            key,
            "a negative limit is never met: magnitudes are compared",
            "add `signed: true` to compare the value itself",
        );
    }
    Some(value)
}

fn time(fields: &mut Fields<'_>, key: &'static str, doc: &'static str) -> Option<f64> {
    fields.quantity_optional(key, Dimension::Time, Range::NotNegative, doc)
}

/// The half-width of the band in the channel's unit: a share of the value, or a quantity like it.
fn read_band(fields: &mut Fields<'_>, reached: f64, dimension: Option<Dimension>) -> Option<f64> {
    let node = fields.raw(
        "stays_within",
        Shape::OfChannel,
        false,
        "Half-width of the band to be entered for good: a share of the value, or in its unit.",
    )?;
    let path = fields.path_of("stays_within");
    let is_share = match node {
        Node::Number(_) => true,
        Node::Text(text) => {
            matches!(quantity::parse_any(text), Ok((_, None | Some(Dimension::One))))
        }
        _ => false,
    };
    let kind = if is_share { Dimension::One } else { dimension? };
    let width = quantity::read(&path, node, kind, &mut fields.faults().borrow_mut());
    if width < 0.0 {
        fields.fault("stays_within", "`stays_within` must not be negative");
    }
    if is_share && reached == 0.0 {
        fields.fault_hint(
            "stays_within",
            "a share of zero is no band",
            "give the half-width in the unit of the value",
        );
    }
    Some(if is_share { width * reached.abs() } else { width })
}

/// The requirement as one sentence, quantities as typed.
fn in_words(fields: &Fields<'_>, of: &str, signed: bool) -> String {
    let typed = |key: &str| {
        fields.entries().iter().find(|(name, _)| name == key).map(|(_, node)| match node {
            Node::Text(text) => text.clone(),
            Node::Number(number) => number.to_string(),
            other => other.kind().to_owned(),
        })
    };
    let mut text = if signed { format!("signed {of}") } else { of.to_owned() };
    for (key, words) in [
        ("at_most", " at most "),
        ("at_least", " at least "),
        ("reaches", " reaches "),
        ("within", " within "),
        ("stays_within", ", stays within "),
        ("after", ", after "),
        ("before", ", before "),
    ] {
        if let Some(value) = typed(key) {
            text.push_str(words);
            text.push_str(&value);
        }
    }
    text
}
