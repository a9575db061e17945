//! `lodeshaft new`: commented files to start from.

use super::status::Status;
use super::streams;
use clap::{Args, ValueEnum};

/// What `new` takes.
#[derive(Debug, Args)]
pub struct NewArguments {
    /// The kind of train.
    #[arg(value_enum)]
    pub kind: Kind,
}

/// The kinds of trains there are starting files for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
#[value(rename_all = "snake_case")]
pub enum Kind {
    /// Pump with a cage motor started direct on line.
    Pump,
    /// Fan with large inertia, started by a ramped drive.
    Fan,
    /// Wind turbine in a gust.
    WindTurbine,
    /// Tidal turbine in turbulent flow.
    TidalTurbine,
    /// Conveyor with breakaway friction.
    Conveyor,
    /// Hoist with a brake and an emergency stop.
    Hoist,
    /// Ship's propeller that meets ice.
    Propeller,
    /// Test bench with two machines.
    TestBench,
    /// Magnetic coupling between motor and pump.
    Coupling,
}

/// The starting file of a kind.
pub fn template(kind: Kind) -> &'static str {
    match kind {
        Kind::Pump => include_str!("templates/pump.yaml"),
        Kind::Fan => include_str!("templates/fan.yaml"),
        Kind::WindTurbine => include_str!("templates/wind_turbine.yaml"),
        Kind::TidalTurbine => include_str!("templates/tidal_turbine.yaml"),
        Kind::Conveyor => include_str!("templates/conveyor.yaml"),
        Kind::Hoist => include_str!("templates/hoist.yaml"),
        Kind::Propeller => include_str!("templates/propeller.yaml"),
        Kind::TestBench => include_str!("templates/test_bench.yaml"),
        Kind::Coupling => include_str!("templates/coupling.yaml"),
    }
}

/// Runs the command.
pub fn run(arguments: &NewArguments) -> Status {
    streams::print(template(arguments.kind), Status::Done)
}
