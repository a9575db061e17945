//! The reference of the scenario file in the README is what the reading code says of itself.
//!
//! After a change of the file, run the tests with `LODESHAFT_WRITE_REFERENCE=1` once: the part
//! between the marks is then written anew.

use crate::{path, text};
use lodeshaft::analysis::study::spec;
use lodeshaft::quantity::{Dimension, format_number, units};
use lodeshaft::scenario::describe::root;
use lodeshaft::signal::read::describe_forms;
use lodeshaft::tree::{FieldDescription, Range, Shape};
use std::fmt::Write as _;
use std::fs;

const BEGIN: &str = "<!-- reference: made by tests/readme/reference.rs -->\n";
const END: &str = "<!-- end of the reference -->\n";

/// Rows of one table.
#[derive(Default)]
struct Rows {
    text: String,
}

impl Rows {
    fn of(fields: &[FieldDescription]) -> String {
        let mut rows = Self { text: "| key | holds | meaning |\n| --- | --- | --- |\n".to_owned() };
        rows.add("", fields, true);
        rows.text
    }

    /// Adds the keys below a path; keys of a choice are not required one by one.
    fn add(&mut self, path: &str, fields: &[FieldDescription], counted: bool) {
        for field in fields {
            let key = if path.is_empty() {
                field.key.to_owned()
            } else {
                format!("{path}.{}", field.key)
            };
            let holds = self::holds(field, counted);
            // A bar would end the cell.
            let doc = field.doc.replace('|', "\\|");
            let _ = writeln!(self.text, "| `{key}` | {holds} | {doc} |");
            match &field.shape {
                Shape::Group(inside) | Shape::QuantityOrGroup(_, _, inside) => {
                    self.add(&key, inside, true);
                }
                Shape::List(inside) => self.add(&format!("{key}.0"), inside, true),
                Shape::Choice(inside) => self.add(&key, inside, false),
                // Those of the file itself have tables of their own.
                Shape::Section(inside) if !path.is_empty() => {
                    self.add(&format!("{key}.NAME"), inside, true);
                }
                Shape::Paths(inside) => self.add(&format!("{key}.PATH"), inside, true),
                _ => {}
            }
        }
    }
}

/// What a key holds, in a few words.
fn holds(field: &FieldDescription, counted: bool) -> String {
    let mut words = match (field.key, &field.shape) {
        ("sum" | "product", Shape::Free) => "list of SIGNALs".to_owned(),
        ("document", Shape::Free) => "map of text".to_owned(),
        ("point", Shape::Free) => "`steady` or a time".to_owned(),
        ("between" | "speed_range" | "operating", Shape::Free) => "list of two values".to_owned(),
        ("accuracy", Shape::Free) => "share or value".to_owned(),
        ("changes" | "vary" | "spread", Shape::Free) => "map of dotted paths".to_owned(),
        ("requirements", Shape::Free) => "map of requirements".to_owned(),
        ("channels", Shape::Free) => "list of channels".to_owned(),
        ("studies", Shape::Free) => "map of named studies".to_owned(),
        (_, other) => shape(other),
    };
    if !counted {
        return words;
    }
    if field.required {
        words.push_str(", required");
    } else if let Some(default) = field.default {
        let unit = match &field.shape {
            Shape::Quantity(dimension, _)
            | Shape::Signal(dimension)
            | Shape::QuantityOrGroup(dimension, _, _) => match dimension.si_unit() {
                "1" => String::new(),
                unit => format!(" {unit}"),
            },
            _ => String::new(),
        };
        let _ = write!(words, ", default {}{unit}", format_number(default, 6));
    }
    words
}

fn shape(shape: &Shape) -> String {
    match shape {
        Shape::Quantity(dimension, range) => quantity(*dimension, *range),
        Shape::Whole(low, high) if *high >= i64::MAX / 2 => format!("whole number from {low}"),
        Shape::Whole(low, high) => format!("whole number, {low} to {high}"),
        Shape::Text => "text".to_owned(),
        Shape::Name => "name".to_owned(),
        Shape::Flag => "`true` or `false`".to_owned(),
        Shape::Word(words) => {
            let words: Vec<String> = words.iter().map(|word| format!("`{word}`")).collect();
            words.join(", ")
        }
        Shape::Signal(dimension) => format!("SIGNAL of {}", dimension.with_article()),
        Shape::Rows(columns) => {
            let names: Vec<&str> = columns.iter().map(|column| column.name()).collect();
            format!("list of [{}]", names.join(", "))
        }
        Shape::Names(count) => format!("list of {count} names"),
        Shape::Group(_) => "map".to_owned(),
        Shape::List(_) => "list of maps".to_owned(),
        Shape::Section(_) => "map of named things".to_owned(),
        Shape::Paths(_) => "map of dotted paths".to_owned(),
        Shape::Choice(_) => "map with exactly one of".to_owned(),
        Shape::QuantityOrGroup(dimension, range, _) => {
            format!("{}, or a map", quantity(*dimension, *range))
        }
        Shape::Signals => "map of named signals".to_owned(),
        Shape::OfChannel => "quantity like the channel's".to_owned(),
        Shape::Free => "any value".to_owned(),
    }
}

fn quantity(dimension: Dimension, range: Range) -> String {
    let range = match range {
        Range::Any => String::new(),
        Range::Positive => ", above 0".to_owned(),
        Range::NotNegative => ", 0 or above".to_owned(),
        Range::NotZero => ", not 0".to_owned(),
        Range::Between(low, high) => {
            format!(", {} to {}", format_number(low, 6), format_number(high, 6))
        }
    };
    format!("{}{range}", dimension.name())
}

/// The whole reference.
fn reference() -> String {
    let root = root();
    let mut text = String::from("#### Keys of the file itself\n\n");
    text.push_str(&Rows::of(&root));
    for field in &root {
        if let Shape::Section(inside) = &field.shape {
            let _ = write!(text, "\n#### Things of `{}`\n\n", field.key);
            text.push_str(&Rows::of(inside));
        }
    }
    text.push_str("\n#### Things of `studies`\n\n");
    let mut rows = Rows { text: "| key | holds | meaning |\n| --- | --- | --- |\n".to_owned() };
    rows.add("", &spec::describe(), false);
    text.push_str(&rows.text);
    text.push_str("\n#### Forms of a SIGNAL (here of a torque)\n\n");
    let mut rows = Rows { text: "| key | holds | meaning |\n| --- | --- | --- |\n".to_owned() };
    rows.add("", &describe_forms(Dimension::Torque), false);
    text.push_str(&rows.text);
    text.push_str("\n#### Units\n\n| measures | units |\n| --- | --- |\n");
    for dimension in DIMENSIONS {
        let names: Vec<String> = units(dimension).iter().map(|unit| format!("`{unit}`")).collect();
        let _ = writeln!(text, "| {} | {} |", dimension.name(), names.join(" "));
    }
    text
}

/// Every dimension, in the order of the program.
const DIMENSIONS: [Dimension; 27] = [
    Dimension::One,
    Dimension::Time,
    Dimension::Angle,
    Dimension::Speed,
    Dimension::Acceleration,
    Dimension::Torque,
    Dimension::Inertia,
    Dimension::Stiffness,
    Dimension::Damping,
    Dimension::TorqueRate,
    Dimension::TorquePerSpeedSquared,
    Dimension::Power,
    Dimension::Energy,
    Dimension::Temperature,
    Dimension::HeatCapacity,
    Dimension::ThermalResistance,
    Dimension::PerKelvin,
    Dimension::Voltage,
    Dimension::Current,
    Dimension::Resistance,
    Dimension::Length,
    Dimension::LinearSpeed,
    Dimension::Mass,
    Dimension::Force,
    Dimension::Pressure,
    Dimension::Density,
    Dimension::Frequency,
];

#[test]
fn the_reference_is_what_the_program_reads() {
    let readme = text();
    let (before, rest) = readme.split_once(BEGIN).expect("the README marks the reference's begin");
    let (written, after) = rest.split_once(END).expect("the README marks the reference's end");
    let made = reference();
    if std::env::var_os("LODESHAFT_WRITE_REFERENCE").is_some() {
        fs::write(path(), format!("{before}{BEGIN}{made}{END}{after}"))
            .expect("the README can be written");
        return;
    }
    let differs = made.lines().zip(written.lines()).find(|(made, written)| made != written);
    assert!(
        written == made,
        "the reference in README.md is out of date: {differs:?}; \
         LODESHAFT_WRITE_REFERENCE=1 cargo test --test readme writes it anew"
    );
}

/// Keys at every depth that carry documentation.
fn count(fields: &[FieldDescription]) -> usize {
    fields
        .iter()
        .filter(|field| !field.doc.is_empty())
        .map(|field| {
            1 + match &field.shape {
                Shape::Group(inside)
                | Shape::List(inside)
                | Shape::Section(inside)
                | Shape::Paths(inside)
                | Shape::Choice(inside)
                | Shape::QuantityOrGroup(_, _, inside) => count(inside),
                _ => 0,
            }
        })
        .sum()
}

#[test]
fn no_key_is_left_out() {
    let made = reference();
    let rows = made.lines().filter(|line| line.starts_with("| `")).count();
    let others = count(&describe_forms(Dimension::Torque)) + count(&spec::describe());
    assert_eq!(rows, count(&root()) + others, "each key has a row of its own");
    // The reference is read by eye too: a few keys at every depth.
    for key in ["| `inertia` |", "| `law.rating_plate.power` |", "| `harmonics.0.order` |"] {
        assert!(made.contains(key), "{key}");
    }
}
