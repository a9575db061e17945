//! Reads the sections of a file into their typed things.

use super::describe::signal_dimension_at;
use super::{Display, Method, Scenario, Solver, Start};
use crate::component::body::Body;
use crate::component::brake::Brake;
use crate::component::channel::{self, Known, Section, Train};
use crate::component::clutch::Clutch;
use crate::component::fluid_coupling::FluidCoupling;
use crate::component::gear_pair::GearPair;
use crate::component::load::Load;
use crate::component::magnetic_gear::{MagneticCoupling, MagneticGear};
use crate::component::measured::Measured;
use crate::component::motor::Motor;
use crate::component::planetary::PlanetaryGear;
use crate::component::protection::{Protection, Surroundings};
use crate::component::requirement::Requirement;
use crate::component::shaft::Shaft;
use crate::diagnostic::Diagnostics;
use crate::quantity::{self, Dimension};
use crate::signal::NamedSignal;
use crate::signal::read::read_named_signal;
use crate::tree::{Fields, Node, Range, Shape};
use std::cell::{OnceCell, RefCell};

/// Rows of the series beyond this are a mistake.
const MOST_ROWS: f64 = 1e7;

/// Rows of the series when `output_step` is absent.
const USUAL_ROWS: f64 = 2000.0;

/// The default of `solver.tolerance`.
const USUAL_TOLERANCE: f64 = 1e-7;

/// Reads a whole file; `root` is its tree, for questions that reach across sections.
pub(super) fn read(fields: &mut Fields<'_>, root: &Node) -> Scenario {
    read_version(fields);
    let title = fields.text("title", "Title of the case.").unwrap_or_default();
    let about = fields.text("about", "Free text that opens the report.").unwrap_or_default();
    let document = read_document(fields);
    let display = fields.group_optional("display", "Units for people.", read_display);
    let duration =
        fields.quantity("duration", Dimension::Time, Range::Positive, "Length of the run.");
    let output_step = read_output_step(fields, duration);
    let start = fields.one_of(
        "start",
        &["as_given", "steady"],
        false,
        "Speeds as given and shafts unloaded (as_given), or the operating point near them (steady).",
    );
    let solver = fields.group_optional("solver", "The integrator.", read_solver);

    let bodies = fields.section("bodies", "Rotating inertias.", Body::read);
    let shafts = fields.section("shafts", "Shafts between two bodies.", Shaft::read);
    let magnetic_gears =
        fields.section("magnetic_gears", "Magnetic gears of three members.", MagneticGear::read);
    let magnetic_couplings = fields.section(
        "magnetic_couplings",
        "Magnetic couplings of two members with equal pole pairs.",
        MagneticCoupling::read,
    );
    let gear_pairs = fields.section("gear_pairs", "Rigid gear pairs.", GearPair::read);
    let planetary_gears =
        fields.section("planetary_gears", "Rigid planetary sets.", PlanetaryGear::read);
    let mut clutches = fields.section(
        "overrunning_clutches",
        "Clutches that lock one way and run free the other way.",
        Clutch::read_overrunning,
    );
    let limiters = fields.section(
        "torque_limiters",
        "Slip clutches: they slip beyond their torque.",
        Clutch::read_limiter,
    );
    clutches.extend(limiters);
    let fluid_couplings = fields.section(
        "fluid_couplings",
        "Fluid couplings of a pump wheel and a turbine wheel.",
        FluidCoupling::read,
    );
    let motors = fields.section("motors", "Motors and generators.", |motor| {
        let name = motor.own_name().to_owned();
        Motor::read(&name, motor)
    });
    let loads = fields.section("loads", "Loads.", |load| {
        let name = load.own_name().to_owned();
        Load::read(&name, load)
    });
    let brakes = fields.section("brakes", "Brakes pressed by a signal.", Brake::read);
    let signals = read_signals(fields);
    let train = Train {
        bodies: &bodies,
        shafts: &shafts,
        magnetic_gears: &magnetic_gears,
        magnetic_couplings: &magnetic_couplings,
        gear_pairs: &gear_pairs,
        planetary_gears: &planetary_gears,
        clutches: &clutches,
        fluid_couplings: &fluid_couplings,
        motors: &motors,
        loads: &loads,
        brakes: &brakes,
    };
    let channels = channel::list(&train, &section_order(fields));
    let sound = !fields.faults().borrow().has_errors();
    let known = Known {
        channels: &channels,
        complete: sound
            && !fields.has_unknown(&["protections", "requirements", "measured", "studies"]),
    };
    let faults = fields.faults();
    let protections = {
        let description = OnceCell::new();
        let around = Surroundings {
            channels: known,
            signal_at: &|path| {
                // What could not be read is not missed here as well.
                if !known.complete && !is_readable(path, root, faults) {
                    return Ok(None);
                }
                let description = description.get_or_init(super::describe::root);
                signal_dimension_at(description, root, &signals, path)
            },
        };
        fields.section("protections", "Logic that acts once during the run.", |protection| {
            Protection::read(protection, &around)
        })
    };
    let requirements =
        fields.section("requirements", "What the run is judged by.", |requirement| {
            Requirement::read(requirement, known)
        });
    let measured = fields.section(
        "measured",
        "Measured records, laid over the computed curves; no result depends on them.",
        |record| Measured::read(record, known),
    );
    let studies = read_studies(fields);
    Scenario {
        title,
        about,
        document,
        display: display.unwrap_or_default(),
        duration,
        output_step,
        start: if start == "steady" { Start::Steady } else { Start::AsGiven },
        solver: solver.unwrap_or_else(usual_solver),
        bodies,
        shafts,
        magnetic_gears,
        magnetic_couplings,
        gear_pairs,
        planetary_gears,
        clutches,
        fluid_couplings,
        motors,
        loads,
        brakes,
        protections,
        signals,
        requirements,
        measured,
        studies,
        channels,
    }
}

fn read_version(fields: &mut Fields<'_>) {
    let version =
        fields.raw("lodeshaft", Shape::Whole(1, 1), true, "Version of the file format: 1.");
    match version {
        None => {}
        Some(Node::Number(1.0)) => {}
        Some(Node::Number(other)) => fields.fault(
            "lodeshaft",
            format!("this program reads version 1 of the file format, not version {other}"),
        ),
        Some(_) => fields.fault("lodeshaft", "the version of the file format is a number: 1"),
    }
}

/// True when the section of a path stands in the file and its thing has no fault.
fn is_readable(path: &str, root: &Node, faults: &RefCell<Diagnostics>) -> bool {
    let mut steps = path.split('.');
    let (section, thing) = (steps.next().unwrap_or_default(), steps.next());
    root.get(section).is_some()
        && !faults.borrow().iter().any(|fault| {
            let mut steps = fault.path.split('.');
            fault.severity.is_error() && steps.next() == Some(section) && steps.next() == thing
        })
}

/// The sections with channels as they follow each other in the file.
fn section_order(fields: &Fields<'_>) -> Vec<Section> {
    fields
        .entries()
        .iter()
        .filter_map(|(key, _)| Section::ALL.into_iter().find(|section| section.key() == key))
        .collect()
}

fn read_document(fields: &mut Fields<'_>) -> Vec<(String, String)> {
    let doc = "Project, revision, author and the like; printed in the report.";
    match fields.raw("document", Shape::Free, false, doc) {
        None | Some(Node::Null) => Vec::new(),
        Some(Node::Map(entries)) => entries
            .iter()
            .filter_map(|(key, node)| match node {
                Node::Text(text) => Some((key.clone(), text.clone())),
                Node::Number(number) => Some((key.clone(), number.to_string())),
                Node::Bool(value) => Some((key.clone(), value.to_string())),
                Node::Null => None,
                other => {
                    let message = format!("text is needed here, not {}", other.kind());
                    fields.fault(&format!("document.{key}"), message);
                    None
                }
            })
            .collect(),
        Some(other) => {
            fields
                .fault("document", format!("a map of texts is needed here, not {}", other.kind()));
            Vec::new()
        }
    }
}

fn read_display(fields: &mut Fields<'_>) -> Display {
    let usual = Display::default();
    let mut unit = |key, dimension: Dimension, usual: String, doc| {
        let Some(text) = fields.text(key, doc) else { return usual };
        match quantity::find_unit(&text).filter(|unit| unit.dimension == dimension) {
            Some(unit) => unit.symbol.to_owned(),
            None => {
                fields.fault_hint(
                    key,
                    format!("`{text}` is no unit of {}", dimension.with_article()),
                    format!("it may be {}", quantity::units(dimension).join(", ")),
                );
                usual
            }
        }
    };
    Display {
        speed: unit("speed", Dimension::Speed, usual.speed, "Unit of speeds; default rpm."),
        torque: unit("torque", Dimension::Torque, usual.torque, "Unit of torques; default N*m."),
        angle: unit("angle", Dimension::Angle, usual.angle, "Unit of angles; default deg."),
    }
}

fn read_output_step(fields: &mut Fields<'_>, duration: f64) -> f64 {
    let step = fields.quantity_optional(
        "output_step",
        Dimension::Time,
        Range::Positive,
        "Time between rows of the series; default duration/2000.",
    );
    if let Some(step) = step
        && duration / step > MOST_ROWS
    {
        fields.fault_hint(
            "output_step",
            format!(
                "{} rows would be written; 10 million are the limit",
                quantity::format_number(duration / step, 4)
            ),
            format!(
                "extremes and events do not depend on it; use {} s or more",
                quantity::format_number(duration / MOST_ROWS, 4)
            ),
        );
    }
    step.unwrap_or(duration / USUAL_ROWS)
}

fn usual_solver() -> Solver {
    Solver { method: Method::Dopri5, tolerance: USUAL_TOLERANCE, max_step: None, step: None }
}

fn read_solver(fields: &mut Fields<'_>) -> Solver {
    let method = fields.one_of(
        "method",
        &["dopri5", "dop853", "rk4"],
        false,
        "Method: dopri5, dop853, or rk4 with a fixed step.",
    );
    let tolerance = fields.quantity_or(
        "tolerance",
        Dimension::One,
        Range::Between(1e-13, 1e-2),
        USUAL_TOLERANCE,
        "Relative and absolute tolerance on the scaled state.",
    );
    let max_step =
        fields.quantity_optional("max_step", Dimension::Time, Range::Positive, "Largest step.");
    let step = fields.quantity_optional("step", Dimension::Time, Range::Positive, "Step of rk4.");
    match (method, step) {
        ("rk4", None) if !fields.has("step") => {
            fields.miss("step", "rk4 has a fixed step, for example step: 0.1 ms");
        }
        ("rk4", _) | (_, None) => {}
        (method, Some(_)) => fields.fault_hint(
            "step",
            format!("`step` goes with rk4 only; {method} chooses its own"),
            "max_step limits it",
        ),
    }
    let method = match method {
        "dop853" => Method::Dop853,
        "rk4" => Method::Rk4,
        _ => Method::Dopri5,
    };
    Solver { method, tolerance, max_step, step }
}

/// Named signals; each is a quantity, a name or a one-key map.
fn read_signals(fields: &mut Fields<'_>) -> Vec<NamedSignal> {
    let doc = "Named signals; a name may stand wherever a signal may.";
    match fields.raw("signals", Shape::Signals, false, doc) {
        None | Some(Node::Null) => Vec::new(),
        Some(Node::Map(entries)) => entries
            .iter()
            .map(|(name, node)| {
                let path = fields.path_of(&format!("signals.{name}"));
                read_named_signal(name, &path, node, fields.faults())
            })
            .collect(),
        Some(other) => {
            fields.fault("signals", format!("a map of keys is needed here, not {}", other.kind()));
            Vec::new()
        }
    }
}

fn read_studies(fields: &mut Fields<'_>) -> Vec<(String, Node)> {
    match fields.raw("studies", Shape::Free, false, "Studies of this case, by name.") {
        None | Some(Node::Null) => Vec::new(),
        Some(Node::Map(entries)) => entries.clone(),
        Some(other) => {
            fields.fault("studies", format!("a map of keys is needed here, not {}", other.kind()));
            Vec::new()
        }
    }
}
