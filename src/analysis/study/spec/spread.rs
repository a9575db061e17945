//! `PATH: { normal: { relative: 4 % } }`: how a number of the file scatters.

use super::axis::path_in;
use super::context::Context;
use super::varied::Varied;
use crate::diagnostic::Spot;
use crate::quantity::Dimension;
use crate::tree::{Fields, Range, Shape, chosen};

/// Normal spreads are cut at so many standard deviations.
pub const CUT: f64 = 4.0;

/// The kinds of spread.
const KINDS: [&str; 4] = ["normal", "uniform", "triangular", "lognormal"];

/// How values scatter about the design value.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Distribution {
    /// Standard deviation; cut at four of them.
    Normal,
    /// Half-width.
    Uniform,
    /// Half-width.
    Triangular,
    /// Standard deviation of the logarithm; cut at four of them.
    Lognormal,
}

impl Distribution {
    /// Its word.
    pub fn word(self) -> &'static str {
        match self {
            Self::Normal => "normal",
            Self::Uniform => "uniform",
            Self::Triangular => "triangular",
            Self::Lognormal => "lognormal",
        }
    }
}

/// A number that scatters about its design value.
#[derive(Clone, Debug, PartialEq)]
pub struct Spread {
    /// The number.
    pub varied: Varied,
    /// Its middle, SI.
    pub middle: f64,
    /// How it scatters.
    pub distribution: Distribution,
    /// Standard deviation or half-width, SI; of a lognormal spread that of the logarithm.
    pub width: f64,
}

impl Spread {
    /// Reads the map under a path; the map stands in the section at `section`.
    pub fn read(
        fields: &mut Fields<'_>,
        section: &str,
        context: Option<&Context<'_>>,
    ) -> Option<Self> {
        if fields.describing() {
            describe(fields);
        }
        let context = context?;
        let at = fields.path().to_owned();
        let path = path_in(fields, section).to_owned();
        if fields.is_no_map() {
            return None;
        }
        let varied = context.varied(&at, Spot::Key, &path);
        for kind in KINDS {
            let _ = fields.raw(kind, Shape::Free, false, "");
        }
        let known: Vec<&str> = fields.entries().iter().map(|(key, _)| key.as_str()).collect();
        if known.iter().any(|key| !KINDS.contains(key)) {
            return None;
        }
        let tree = crate::tree::Node::Map(fields.entries().to_vec());
        let (kind, inside) = chosen(&at, &tree, context.faults, &KINDS)?;
        let varied = varied?;
        let distribution = match kind {
            "uniform" => Distribution::Uniform,
            "triangular" => Distribution::Triangular,
            "lognormal" => Distribution::Lognormal,
            _ => Distribution::Normal,
        };
        let inner = format!("{at}.{kind}");
        let (middle, width) = Fields::read(inner, inside, context.faults, |inside| {
            read_width(inside, &varied, distribution)
        })?;
        if varied.whole {
            fields.fault_here(format!("`{path}` takes whole values only; a spread makes others"));
            return None;
        }
        let spread = Self { varied, middle, distribution, width };
        spread.try_extremes(&at, context);
        Some(spread)
    }

    /// The smallest and the largest value that can be drawn.
    pub fn ends(&self) -> [f64; 2] {
        let [low, high] = match self.distribution {
            Distribution::Normal => {
                [self.middle - CUT * self.width, self.middle + CUT * self.width]
            }
            Distribution::Uniform | Distribution::Triangular => {
                [self.middle - self.width, self.middle + self.width]
            }
            Distribution::Lognormal => {
                [self.middle * (-CUT * self.width).exp(), self.middle * (CUT * self.width).exp()]
            }
        };
        [low.min(high), low.max(high)]
    }

    fn try_extremes(&self, at: &str, context: &Context<'_>) {
        for (value, which) in self.ends().into_iter().zip(["smallest", "largest"]) {
            let words = format!("the {which} draw, {},", self.varied.shown(value));
            if !context.try_values(at, Spot::Key, &words, &[(&self.varied, value)]) {
                return;
            }
        }
    }
}

fn describe(fields: &mut Fields<'_>) {
    for (kind, doc) in [
        ("normal", "Standard deviation; cut at four of them."),
        ("uniform", "Half-width of a uniform spread."),
        ("triangular", "Half-width of a triangular spread."),
        ("lognormal", "Standard deviation of the logarithm (relative only); cut at four of them."),
    ] {
        let _ = fields.group_optional(kind, doc, |inside| {
            let _ = inside.quantity_optional("relative", Dimension::One, Range::Positive, RELATIVE);
            let _ = inside.raw("absolute", Shape::Free, false, ABSOLUTE);
        });
    }
}

const RELATIVE: &str = "As a share of the design value.";
const ABSOLUTE: &str = "In the unit of the value.";

/// The middle and the width in SI.
fn read_width(
    fields: &mut Fields<'_>,
    varied: &Varied,
    distribution: Distribution,
) -> Option<(f64, f64)> {
    let relative = fields.quantity_optional("relative", Dimension::One, Range::Positive, RELATIVE);
    let absolute =
        fields.quantity_optional("absolute", varied.dimension, Range::Positive, ABSOLUTE);
    if fields.is_no_map() {
        return None;
    }
    let Some(middle) = varied.design else {
        fields.fault_here_hint(
            format!("`{}` has no value to scatter about", varied.path),
            "state it in the file",
        );
        return None;
    };
    let width = match (relative, absolute, distribution) {
        (None, Some(_), Distribution::Lognormal) => {
            fields.fault_hint(
                "absolute",
                "the deviation of a logarithm has no unit",
                "give `relative`, for example 5 %",
            );
            return None;
        }
        (Some(share), None, Distribution::Lognormal) => share,
        (Some(share), None, _) => share * middle.abs(),
        (None, Some(width), _) => width,
        (given, ..) => {
            let message = match given {
                Some(_) => "the width of the spread is given twice",
                None => "the width of the spread is not given",
            };
            fields.fault_here_hint(message, "give exactly one of relative and absolute");
            return None;
        }
    };
    if middle == 0.0 && relative.is_some() {
        fields.fault_hint(
            "relative",
            format!("`{}` is zero, and a share of zero is no spread", varied.path),
            "give `absolute`",
        );
        return None;
    }
    (width > 0.0).then_some((middle, width))
}
