//! The study `modes` as typed.

use crate::analysis::linear_point::Point;
use crate::component::channel::{ChannelKind, Known};
use crate::quantity::{self, Dimension};
use crate::tree::{Fields, Node, Range, Shape};

/// The study as typed, SI.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct ModesSpec {
    /// Where to linearise.
    pub point: Point,
    /// Separation asked for, as a share of the excitation's frequency.
    pub separation: Option<f64>,
    /// The interference diagram, when asked for.
    pub range: Option<SpeedRange>,
    /// Excitations of the user's.
    pub excitations: Vec<ExcitationSpec>,
}

/// What runs across the interference diagram.
#[derive(Clone, Debug, PartialEq)]
pub struct SpeedRange {
    /// The body whose speed it is.
    pub of: String,
    /// From and to, rad/s.
    pub speeds: [f64; 2],
    /// Speeds at which the train runs for long, rad/s; `None`: the speed at the point.
    pub operating: Option<[f64; 2]>,
}

/// An excitation as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct ExcitationSpec {
    /// Its name.
    pub name: String,
    /// What it follows.
    pub follows: Follows,
}

/// What the frequency of an excitation follows.
#[derive(Clone, Debug, PartialEq)]
pub enum Follows {
    /// So many times a turn of a body, against another one when given.
    Turns {
        /// The body.
        body: String,
        /// Against which it turns; `None` is ground.
        against: Option<String>,
        /// Times a turn.
        order: f64,
    },
    /// Nothing: Hz.
    Frequency(f64),
}

impl ModesSpec {
    /// Reads the inside of `modes:`.
    pub fn read(fields: &mut Fields<'_>, known: Known<'_>) -> Self {
        let point = Point::read(fields);
        let separation = fields.quantity_optional(
            "separation",
            Dimension::One,
            Range::Between(0.0, 1.0),
            "Least distance of modes from excitations at the operating speed, as a share of the excitation's frequency; gives a verdict.",
        );
        let speeds = pair(
            fields,
            "speed_range",
            Dimension::Speed,
            "Speeds of `of` across the interference diagram, from and to.",
        );
        let of = fields.name_optional("of", "The body whose speed runs across the diagram.");
        let operating = pair(
            fields,
            "operating",
            Dimension::Speed,
            "Lowest and highest speed of `of` in long running; default the speed at the point.",
        );
        let excitations = fields.section(
            "excitations",
            "Excitations beside those that the train has by itself.",
            |inside| read_excitation(inside, known),
        );
        if let Some(of) = &of {
            known_body(fields, "of", of, known);
        }
        let range = match (speeds, of) {
            (Some(speeds), Some(of)) => Some(SpeedRange { of, speeds, operating }),
            (Some(_), None) => {
                fields.miss("of", "the body whose speed `speed_range` gives");
                None
            }
            (None, Some(_)) if !fields.has("speed_range") => {
                fields.miss("speed_range", "for example speed_range: [0 rpm, 1500 rpm]");
                None
            }
            _ => None,
        };
        if separation.is_some()
            && range.is_none()
            && !fields.has("speed_range")
            && !fields.has("of")
        {
            fields.fault_hint(
                "separation",
                "`separation` needs the interference diagram",
                "give `speed_range` and `of`",
            );
        }
        Self { point, separation, range, excitations }
    }
}

fn read_excitation(fields: &mut Fields<'_>, known: Known<'_>) -> ExcitationSpec {
    let name = fields.own_name().to_owned();
    let body = fields.name_optional("body", "The body whose turns it follows.");
    let against =
        fields.name_optional("against", "The body against which it turns; default ground.");
    let order = fields.quantity_optional(
        "order",
        Dimension::One,
        Range::Positive,
        "How many times a turn.",
    );
    let frequency = fields.quantity_optional(
        "frequency",
        Dimension::Frequency,
        Range::Positive,
        "A frequency that follows no speed.",
    );
    let turns = body.is_some() || against.is_some();
    // `ground` typed out is the default.
    let against = against.filter(|other| other != "ground");
    for (key, name) in [("body", &body), ("against", &against)] {
        if let Some(name) = name {
            known_body(fields, key, name, known);
        }
    }
    let follows = match (body, order, frequency) {
        (None, None, Some(frequency)) if !turns => Follows::Frequency(frequency),
        (Some(body), Some(order), None) => Follows::Turns { body, against, order },
        _ => {
            if !fields.describing() {
                fields.fault_here_hint(
                    "an excitation follows a body or has a frequency of its own",
                    "give body and order, or frequency alone",
                );
            }
            Follows::Frequency(f64::NAN)
        }
    };
    ExcitationSpec { name, follows }
}

/// Tells a body that the file does not have.
fn known_body(fields: &Fields<'_>, key: &'static str, name: &str, known: Known<'_>) {
    let bodies: Vec<&str> = known
        .channels
        .iter()
        .filter(|channel| matches!(channel.kind, ChannelKind::BodySpeed(_)))
        .filter_map(|channel| channel.name.strip_suffix(".speed"))
        .collect();
    if name.is_empty() || bodies.contains(&name) || !known.complete {
        return;
    }
    let message = format!("no body is named `{name}`");
    match crate::diagnostic::closest(name, bodies.iter().copied()) {
        Some(near) => fields.fault_hint(key, message, format!("did you mean `{near}`?")),
        None => fields.fault_hint(key, message, format!("there are {}", bodies.join(", "))),
    }
}

/// Two quantities, the first below the second; `None` when absent or faulty.
pub fn pair(
    fields: &mut Fields<'_>,
    key: &'static str,
    dimension: Dimension,
    doc: &'static str,
) -> Option<[f64; 2]> {
    let node = fields.raw(key, Shape::Free, false, doc)?;
    let Node::List(items) = node else {
        fields.fault(key, format!("`{key}` must be a list of two values, not {}", node.kind()));
        return None;
    };
    let [from, to] = items.as_slice() else {
        fields.fault(key, format!("`{key}` must be a list of two values, not {}", items.len()));
        return None;
    };
    let read = |place: usize, node: &Node| {
        let path = fields.path_of(&format!("{key}.{place}"));
        quantity::read(&path, node, dimension, &mut fields.faults().borrow_mut())
    };
    let values = [read(0, from), read(1, to)];
    if values[0] >= values[1] {
        fields.fault(key, format!("`{key}` must go from a lower to a higher value"));
        return None;
    }
    (values[0] < values[1]).then_some(values)
}
