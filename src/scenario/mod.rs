//! The scenario as typed: sections of named things, values in SI, names checked.
//!
//! [`load()`] reads a file with all its faults; [`read_node`] reads a patched tree again,
//! quickly, for studies. The tree ([`crate::tree::Node`]) is the handle by which every
//! value is reached with its dotted path ([`patch::set`], [`patch::value_at`]).

mod check;
pub mod describe;
mod load;
mod locate;
pub mod patch;
mod records;
mod sections;
pub mod signals;
mod source;
mod table_places;
mod tables;
mod yaml;

pub use check::is_name;
pub use load::{Failure, Loaded, load, load_text, read_node};
pub use source::Source;
pub use tables::Tables;

use crate::component::{
    body::Body,
    brake::Brake,
    channel::Channel,
    clutch::Clutch,
    fluid_coupling::FluidCoupling,
    gear_pair::GearPair,
    load::Load,
    magnetic_gear::{MagneticCoupling, MagneticGear},
    measured::Measured,
    motor::Motor,
    planetary::PlanetaryGear,
    protection::Protection,
    requirement::Requirement,
    shaft::Shaft,
};
use crate::signal::NamedSignal;
use crate::tree::Node;

/// A whole scenario file, read and checked value by value.
#[derive(Clone, Debug, PartialEq)]
pub struct Scenario {
    /// Title of the case.
    pub title: String,
    /// Free text that opens the report.
    pub about: String,
    /// Project, revision, author and the like, as typed.
    pub document: Vec<(String, String)>,
    /// Units for people.
    pub display: Display,
    /// Length of the run, s.
    pub duration: f64,
    /// Time between rows of the series, s.
    pub output_step: f64,
    /// How the run starts.
    pub start: Start,
    /// The integrator.
    pub solver: Solver,
    /// Sections in the order of the file.
    pub bodies: Vec<Body>,
    /// Shafts.
    pub shafts: Vec<Shaft>,
    /// Magnetic gears.
    pub magnetic_gears: Vec<MagneticGear>,
    /// Magnetic couplings.
    pub magnetic_couplings: Vec<MagneticCoupling>,
    /// Rigid gear pairs.
    pub gear_pairs: Vec<GearPair>,
    /// Rigid planetary sets.
    pub planetary_gears: Vec<PlanetaryGear>,
    /// Overrunning clutches, then torque limiters.
    pub clutches: Vec<Clutch>,
    /// Fluid couplings.
    pub fluid_couplings: Vec<FluidCoupling>,
    /// Motors.
    pub motors: Vec<Motor>,
    /// Loads.
    pub loads: Vec<Load>,
    /// Brakes.
    pub brakes: Vec<Brake>,
    /// Protections.
    pub protections: Vec<Protection>,
    /// Named signals.
    pub signals: Vec<NamedSignal>,
    /// Requirements.
    pub requirements: Vec<Requirement>,
    /// Measured records.
    pub measured: Vec<Measured>,
    /// Studies as they stand in the file: name and tree.
    pub studies: Vec<(String, Node)>,
    /// All channels of the train, in file order.
    pub channels: Vec<Channel>,
}

/// Units of the summary, the charts and the report.
#[derive(Clone, Debug, PartialEq)]
pub struct Display {
    /// Unit of speeds, for example `rpm`.
    pub speed: String,
    /// Unit of torques.
    pub torque: String,
    /// Unit of angles.
    pub angle: String,
}

impl Default for Display {
    fn default() -> Self {
        Self { speed: "rpm".to_owned(), torque: "N*m".to_owned(), angle: "deg".to_owned() }
    }
}

/// How the run starts.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Start {
    /// Speeds as given, shafts unloaded.
    AsGiven,
    /// At the stable operating point nearest to the given speeds.
    Steady,
}

/// Integration methods.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Method {
    /// Dormand and Prince 5(4).
    Dopri5,
    /// Dormand and Prince 8(5,3).
    Dop853,
    /// Classical Runge-Kutta with a fixed step.
    Rk4,
}

/// Settings of the integrator.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Solver {
    /// Method.
    pub method: Method,
    /// Relative and absolute tolerance on the scaled state.
    pub tolerance: f64,
    /// Largest step, s.
    pub max_step: Option<f64>,
    /// Step of `rk4`, s.
    pub step: Option<f64>,
}
