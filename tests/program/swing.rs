//! The smallest train that can slip: one rotor held to ground by a magnetic coupling.
//!
//! ```text
//! phase      d = pole_pairs * angle of the rotor
//! equation   d'' + beta d' + sin d = torque / pull_out,   time in units of 1/frequency
//! frequency  w = sqrt(pole_pairs * pull_out / inertia),   beta = damping / (inertia * w)
//! ```
//!
//! Pole pairs, pull-out torque and inertia are chosen so that d and t can be scaled at will:
//! the tests state everything without dimension, the scenario is written with it.

use std::fmt::Write;

/// A dimensionless pendulum and the real train that stands for it.
#[derive(Clone)]
pub struct Swing {
    /// Pole pairs of the coupling.
    pub pole_pairs: u32,
    /// Pull-out torque, N*m.
    pub pull_out: f64,
    /// Inertia of the rotor, kg*m2.
    pub inertia: f64,
    /// Damping without dimension.
    pub beta: f64,
    /// Phase at the start, rad; none is written when `steady`.
    pub phase: f64,
    /// Phase rate at the start in units of the frequency.
    pub rate: f64,
    /// Starts at the steady point.
    pub steady: bool,
    /// Torque over pull-out torque: value from the start on, then changes `(time, value)` without dimension.
    pub torque: (f64, Vec<(f64, f64)>),
    /// Length of the run without dimension.
    pub duration: f64,
    /// Rows of the series in the run.
    pub rows: u32,
    /// Method of the solver.
    pub method: &'static str,
    /// Tolerance of the solver.
    pub tolerance: f64,
    /// Further sections.
    pub more: String,
}

impl Default for Swing {
    /// Everything is 1: times in s and torques in N*m are those without dimension.
    fn default() -> Self {
        Self {
            pole_pairs: 1,
            pull_out: 1.0,
            inertia: 1.0,
            beta: 0.0,
            phase: 0.0,
            rate: 0.0,
            steady: false,
            torque: (0.0, Vec::new()),
            duration: 10.0,
            rows: 10,
            method: "dop853",
            tolerance: 1e-9,
            more: String::new(),
        }
    }
}

impl Swing {
    /// A train in real sizes: frequency 100 rad/s.
    pub fn workshop() -> Self {
        Self { pole_pairs: 5, pull_out: 40.0, inertia: 0.02, ..Self::default() }
    }

    /// Zero-load frequency, rad/s.
    pub fn frequency(&self) -> f64 {
        (f64::from(self.pole_pairs) * self.pull_out / self.inertia).sqrt()
    }

    /// A time without dimension in s.
    pub fn seconds(&self, time: f64) -> f64 {
        time / self.frequency()
    }

    /// The torque signal in words of the scenario.
    fn signal(&self) -> String {
        let (start, changes) = &self.torque;
        let newton_metres = |share: f64| share * self.pull_out;
        if changes.is_empty() {
            return format!("{}", newton_metres(*start));
        }
        let mut points = String::new();
        let mut before = *start;
        write!(points, "[0, {}]", newton_metres(before)).expect("text can grow");
        for (time, value) in changes {
            let at = self.seconds(*time);
            write!(
                points,
                ", [{at}, {}], [{at}, {}]",
                newton_metres(before),
                newton_metres(*value)
            )
            .expect("text can grow");
            before = *value;
        }
        format!("{{ points: [{points}] }}")
    }

    /// The scenario.
    pub fn yaml(&self) -> String {
        let frequency = self.frequency();
        let phase = if self.steady {
            String::new()
        } else {
            format!("initial_load_angle: {} rad, ", self.phase)
        };
        format!(
            "lodeshaft: 1\n\
             title: One rotor on a magnetic coupling\n\
             duration: {duration}\n\
             output_step: {step}\n\
             start: {start}\n\
             solver: {{ method: {method}, tolerance: {tolerance} }}\n\
             bodies:\n  rotor: {{ inertia: {inertia}, speed: {speed} rad/s }}\n\
             magnetic_couplings:\n  coupling: {{ between: [rotor, ground], pole_pairs: {pairs}, \
             pull_out: {pull_out}, {phase}damping: {damping} }}\n\
             motors:\n  drive: {{ body: rotor, law: {{ prescribed: {{ torque: {torque} }} }} }}\n\
             {more}\n",
            duration = self.seconds(self.duration),
            step = self.seconds(self.duration) / f64::from(self.rows),
            start = if self.steady { "steady" } else { "as_given" },
            method = self.method,
            tolerance = self.tolerance,
            inertia = self.inertia,
            speed = self.rate * frequency / f64::from(self.pole_pairs),
            pairs = self.pole_pairs,
            pull_out = self.pull_out,
            damping = self.beta * self.inertia * frequency,
            torque = self.signal(),
            more = self.more,
        )
    }
}
