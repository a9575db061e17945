//! Induction motor by its equivalent circuit, per phase, star connected.
//!
//! ```text
//! V = line_voltage/sqrt(3)*voltage,  ws = 2 pi frequency/pole_pairs,  s = 1 - speed/ws
//! Vth = V jXm/(R1 + j(X1 + Xm)),     Zth = jXm (R1 + jX1)/(R1 + j(X1 + Xm)) = Rth + jXth
//! torque = 3 |Vth|^2 (R2/s)/(ws [(Rth + R2/s)^2 + (Xth + X2)^2])                      N*m
//!        = 3 |Vth|^2 R2 s/(ws [(Rth s + R2)^2 + (Xth + X2)^2 s^2])     the same, defined at s = 0
//! X1, X2, Xm reactances at the line frequency, rotor figures referred to the stator, ohm
//! ```
//!
//! Textbook form (Chapman, Electric Machinery Fundamentals, chapter 7; from memory). It holds for
//! driving (0 < s < 1), generating (s < 0) and plugging (s > 1) at a constant or slowly changing
//! speed; the pulses of the first periods after switching need the flux equations (`transient`).
//! Skin effect, saturation and iron loss are not in it.

use nalgebra::Complex;
use std::f64::consts::TAU;

/// The figures of an equivalent circuit as typed, in SI.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CircuitFigures {
    /// Line-to-line voltage, V, root mean square.
    pub line_voltage: f64,
    /// Hz.
    pub frequency: f64,
    /// Pole pairs.
    pub pole_pairs: u32,
    /// R1, ohm.
    pub stator_resistance: f64,
    /// X1, ohm.
    pub stator_reactance: f64,
    /// R2, ohm.
    pub rotor_resistance: f64,
    /// X2, ohm.
    pub rotor_reactance: f64,
    /// Xm, ohm.
    pub magnetising_reactance: f64,
}

/// An equivalent circuit, closed on its line.
#[derive(Clone, Debug, PartialEq)]
pub struct Circuit {
    /// What was typed.
    pub figures: CircuitFigures,
    synchronous_speed: f64,
    /// 3 |Vth|^2 R2/ws.
    scale: f64,
    thevenin_resistance: f64,
    /// Xth + X2.
    reactance: f64,
}

/// Places at which the circuit's formula changes: the contactor is open below, closed from here on.
pub const CONNECTED: [f64; 1] = [0.5];

impl Circuit {
    /// From figures with a positive voltage, frequency, R2 and Xm.
    pub fn new(figures: CircuitFigures) -> Self {
        let synchronous_speed = TAU * figures.frequency / f64::from(figures.pole_pairs);
        let stator = Complex::new(figures.stator_resistance, figures.stator_reactance);
        let magnetising = Complex::new(0.0, figures.magnetising_reactance);
        let share = magnetising / (stator + magnetising);
        let impedance = share * stator;
        let voltage = figures.line_voltage / 3.0_f64.sqrt() * share.norm();
        Self {
            figures,
            synchronous_speed,
            scale: 3.0 * voltage * voltage * figures.rotor_resistance / synchronous_speed,
            thevenin_resistance: impedance.re,
            reactance: impedance.im + figures.rotor_reactance,
        }
    }

    /// Speed without load, rad/s.
    pub fn synchronous_speed(&self) -> f64 {
        self.synchronous_speed
    }

    /// Voltage of a phase at the rated line voltage, V.
    pub fn phase_voltage(&self) -> f64 {
        self.figures.line_voltage / 3.0_f64.sqrt()
    }

    /// Slip at a speed in rad/s.
    #[inline]
    pub fn slip(&self, speed: f64) -> f64 {
        1.0 - speed / self.synchronous_speed
    }

    /// Torque at a speed in rad/s and full voltage.
    #[inline]
    pub fn torque(&self, speed: f64) -> f64 {
        let slip = self.slip(speed);
        self.scale * slip / self.square(slip)
    }

    /// Derivative of the torque with respect to the speed.
    #[inline]
    pub fn slope(&self, speed: f64) -> f64 {
        let slip = self.slip(speed);
        let square = self.square(slip);
        let resistance = self.thevenin_resistance * slip + self.figures.rotor_resistance;
        let change =
            2.0 * (self.thevenin_resistance * resistance + self.reactance * self.reactance * slip);
        -self.scale / self.synchronous_speed * (square - slip * change) / (square * square)
    }

    #[inline]
    fn square(&self, slip: f64) -> f64 {
        let resistance = self.thevenin_resistance * slip + self.figures.rotor_resistance;
        let reactance = self.reactance * slip;
        resistance * resistance + reactance * reactance
    }

    /// Slip at the largest driving torque.
    pub fn breakdown_slip(&self) -> f64 {
        self.figures.rotor_resistance / self.thevenin_resistance.hypot(self.reactance)
    }

    /// The largest driving torque at full voltage, N*m.
    pub fn breakdown_torque(&self) -> f64 {
        self.torque(self.synchronous_speed * (1.0 - self.breakdown_slip()))
    }

    /// Stator current at a slip and full voltage, A, root mean square, against the phase voltage.
    pub fn stator_current(&self, slip: f64) -> Complex<f64> {
        let f = self.figures;
        let branch = Complex::new(f.rotor_resistance, slip * f.rotor_reactance);
        let whole = branch + Complex::new(0.0, slip * f.magnetising_reactance);
        let parallel = Complex::new(0.0, f.magnetising_reactance) * branch / whole;
        let stator = Complex::new(f.stator_resistance, f.stator_reactance);
        Complex::new(self.phase_voltage(), 0.0) / (stator + parallel)
    }

    /// Rotor flux linkage at a slip and full voltage, as a voltage at the line frequency, V.
    pub fn rotor_flux(&self, slip: f64) -> Complex<f64> {
        let f = self.figures;
        let own = f.rotor_reactance + f.magnetising_reactance;
        self.stator_current(slip) * f.magnetising_reactance * f.rotor_resistance
            / Complex::new(f.rotor_resistance, slip * own)
    }
}

#[cfg(test)]
#[path = "circuit_tests.rs"]
mod tests;
