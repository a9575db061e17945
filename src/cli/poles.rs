//! `lodeshaft poles`: pole-pair choices for a ratio.

use super::status::Status;
use super::{Common, Format, streams};
use crate::analysis::poles::{self, Held};
use crate::diagnostic::Severity;
use crate::quantity::{self, Dimension};
use crate::render::json;
use crate::render::poles::{Wish, text, to_json};
use clap::{Args, ValueEnum};

/// What `poles` takes.
#[derive(Debug, Args)]
pub struct PolesArguments {
    /// Speed of the faster over the slower turning member.
    #[arg(long, allow_hyphen_values = true, value_parser = number)]
    pub ratio: f64,
    /// The member that is held.
    #[arg(long, value_enum, default_value_t = HeldMember::Modulator)]
    pub held: HeldMember,
    /// How far the ratio may be off, for example "2 %".
    #[arg(long, default_value = "2 %", value_parser = number)]
    pub tolerance: f64,
    /// Most pole pairs of the outer rotor.
    #[arg(long, default_value_t = 40, value_name = "N", value_parser = clap::value_parser!(u32).range(2..=500))]
    pub most: u32,
}

/// The member that is held.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub enum HeldMember {
    /// Outer rotor against modulator.
    Inner,
    /// Inner against outer rotor, in opposite senses.
    Modulator,
    /// Inner rotor against modulator.
    Outer,
}

fn number(text: &str) -> Result<f64, String> {
    quantity::parse(text, Dimension::One).map(|(value, _)| value).map_err(|fault| fault.message)
}

/// Runs the command.
pub fn run(arguments: &PolesArguments, common: &Common) -> Status {
    let held = match arguments.held {
        HeldMember::Inner => Held::Inner,
        HeldMember::Modulator => Held::Modulator,
        HeldMember::Outer => Held::Outer,
    };
    let fault = |message: &str, hint: &str| {
        streams::complain(Severity::Error, message, Some(hint));
        Status::Fault
    };
    if arguments.ratio < 0.0 && held != Held::Modulator {
        return fault(
            "a negative ratio needs the modulator held: only then the others turn against each other",
            "leave the sign out, or take --held modulator",
        );
    }
    if arguments.ratio.abs() <= 1.0 {
        return fault(
            "the ratio must be above 1: the speed of the faster over that of the slower member",
            "type its reciprocal",
        );
    }
    if !(0.0..1.0).contains(&arguments.tolerance) {
        return fault("the tolerance must lie between 0 and 1", "for example --tolerance \"2 %\"");
    }
    let wish = Wish {
        ratio: arguments.ratio.abs(),
        held,
        tolerance: arguments.tolerance,
        most: arguments.most,
    };
    let choices = poles::choices(wish.ratio, held, wish.tolerance, wish.most);
    let status = if choices.is_empty() { Status::NotMet } else { Status::Done };
    if choices.is_empty() {
        let nearest = poles::nearest(wish.ratio, held, wish.most).map(|choice| {
            let ratio = quantity::format_number(choice.ratio(held).abs(), 6);
            format!("the nearest is {} and {}: ratio {ratio}", choice.inner, choice.outer)
        });
        let message = "no choice of pole pairs comes that near to the ratio";
        streams::complain(Severity::Warning, message, nearest.as_deref());
    }
    match common.format {
        Format::Json => streams::print(&json::pretty(&to_json(&wish, &choices)), status),
        Format::Text if choices.is_empty() => status,
        Format::Text => streams::print(&text(&wish, &choices), status),
    }
}
