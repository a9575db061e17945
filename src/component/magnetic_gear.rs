//! Magnetic gears and couplings as typed, and their law.

use super::magnet_losses::Losses;
use super::magnet_temperature::Warmth;
use super::torque_table::TorqueTable;

/// Which member of a magnetic gear.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Member {
    /// Inner rotor.
    Inner,
    /// Modulator: the ring of iron pieces.
    Modulator,
    /// Outer rotor.
    Outer,
}

/// A magnetic gear as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct MagneticGear {
    /// Its name.
    pub name: String,
    /// Body at the inner rotor, or `ground`.
    pub inner: String,
    /// Body at the modulator, or `ground`.
    pub modulator: String,
    /// Body at the outer rotor, or `ground`.
    pub outer: String,
    /// Pole pairs of the inner rotor.
    pub inner_pole_pairs: u32,
    /// Pole pairs of the outer rotor.
    pub outer_pole_pairs: u32,
    /// Member at which the pull-out torque is stated.
    pub pull_out_at: Member,
    /// Pull-out torque there, N*m, at the rated temperature.
    pub pull_out_torque: f64,
    /// Damping, if any.
    pub damping: Option<GearDamping>,
    /// What is common with couplings.
    pub field: Field,
    /// Cogging torques against the modulator.
    pub cogging: Vec<Cogging>,
    /// Drag torques.
    pub drag: Vec<Drag>,
    /// Losses in magnets, pieces and yokes.
    pub losses: Option<Losses>,
    /// Where its figures come from.
    pub source: Option<String>,
}

/// A magnetic coupling as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct MagneticCoupling {
    /// Its name.
    pub name: String,
    /// The bodies a and b (one may be `ground`).
    pub between: [String; 2],
    /// Pole pairs of each half.
    pub pole_pairs: u32,
    /// Pull-out torque, N*m.
    pub pull_out: f64,
    /// Damping on the mechanical slip speed, N*m*s/rad.
    pub damping: f64,
    /// Slip speed at which the damper's torque is largest, rad/s; `None` for a straight line.
    pub damping_peak_at: Option<f64>,
    /// What is common with gears.
    pub field: Field,
    /// Where its figures come from.
    pub source: Option<String>,
}

/// What gears and couplings have in common.
#[derive(Clone, Debug, PartialEq)]
pub struct Field {
    /// Load angle at the start, electrical rad; `None` is 0 and may be combined with a steady start.
    pub initial_load_angle: Option<f64>,
    /// Harmonics of the torque law, relative to the fundamental; of the table, when there is one.
    pub harmonics: Vec<Harmonic>,
    /// The table of which the harmonics come.
    pub torque_table: Option<TorqueTable>,
    /// Temperature of the magnets and what they stand.
    pub warmth: Warmth,
    /// Longest time at a stretch that it may slip, s.
    pub slip_time_limit: Option<f64>,
}

/// One harmonic of the torque law.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Harmonic {
    /// Multiple of the electrical angle, 2 or more.
    pub order: u32,
    /// Amplitude relative to the fundamental.
    pub amplitude: f64,
    /// Phase, rad.
    pub phase: f64,
}

/// Damping of a magnetic gear.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct GearDamping {
    /// Member at which it is stated.
    pub at: Member,
    /// N*m*s/rad on the mechanical slip speed at that member.
    pub coefficient: f64,
    /// Mechanical slip speed at that member where the damper's torque is largest, rad/s.
    pub peak_at: Option<f64>,
}

/// A cogging torque between a rotor and the modulator.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cogging {
    /// Inner or outer.
    pub at: Member,
    /// Order per relative turn.
    pub order: u32,
    /// Amplitude, N*m.
    pub torque: f64,
    /// Phase, rad.
    pub phase: f64,
}

/// A drag torque on a member.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Drag {
    /// The member it brakes.
    pub at: Member,
    /// Against the modulator (else against ground).
    pub against_modulator: bool,
    /// Constant part, N*m: sticks and slips.
    pub constant: f64,
    /// Part per relative speed, N*m*s/rad.
    pub per_speed: f64,
}
