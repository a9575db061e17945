//! The one-degree swing of a magnetic gear: critical steps, kicks, pulses, and falling into step again.
//!
//! ```text
//! x'' + beta x' + f(x) = T        x load angle, f torque law over K, T equivalent load over K
//! unit of time 1/wp, wp = sqrt(K/J_e);  beta = D/(J_e wp);  zeta = beta/2
//! fading damper: beta x' / (1 + (x'/v_peak)^2)
//! ```
//! Without damping the equal-area criterion of power-system stability decides (textbook; from
//! memory); with damping the way into the saddle is followed backward from there. Once slipping, a
//! gear falls into step below the torque at which the way out of one saddle leads into the next:
//! 4 beta/pi for weak damping (retrapping of the resistively shunted junction: Tinkham,
//! *Introduction to Superconductivity*, 6.3, from memory).

use super::march::{Curve, Field, march};
use crate::component::magnetic_law::MagnetLaw;
use crate::solve::locate;

/// Start distance from a saddle, rad.
const NEAR: f64 = 1e-6;

/// Steps in speed from where a swing turns.
const TURN_STEPS: u32 = 100;

/// Torques closer to the peak than this share are taken as the peak.
const AT_PEAK: f64 = 1e-8;

/// The swing of one gear in its own units.
#[derive(Clone, Copy, Debug)]
pub struct Swing<'a> {
    law: &'a MagnetLaw,
    /// Damping in units of `J_e wp`.
    beta: f64,
    /// One over the phase rate of the largest damping torque, in units of wp; 0 without fading.
    fade: f64,
    /// The load pulls backward: everything is mirrored.
    mirrored: bool,
}

impl<'a> Swing<'a> {
    /// A swing with linear damping (`fade` 0) or damping that is largest at `1/fade`.
    pub fn new(law: &'a MagnetLaw, beta: f64, fade: f64, mirrored: bool) -> Self {
        Self { law, beta, fade, mirrored }
    }

    /// The same with another damping.
    pub fn with_damping(self, beta: f64) -> Self {
        Self { beta, ..self }
    }

    fn sign(self) -> f64 {
        if self.mirrored { -1.0 } else { 1.0 }
    }

    /// The torque law over K.
    pub fn torque(self, x: f64) -> f64 {
        self.sign() * self.law.share(self.sign() * x)
    }

    fn slope(self, x: f64) -> f64 {
        self.law.slope(self.sign() * x) / self.law.amplitude()
    }

    fn energy(self, x: f64) -> f64 {
        self.law.energy(self.sign() * x) / self.law.amplitude()
    }

    fn damper(self, v: f64) -> f64 {
        let share = v * self.fade;
        self.beta * v / (1.0 + share * share)
    }

    /// The largest torque over K that can be held.
    pub fn peak(self) -> f64 {
        let [low, high] = self.law.peak_values();
        if self.mirrored { -low } else { high }
    }

    /// Load angle at rest under a load.
    pub fn rest(self, load: f64) -> Option<f64> {
        self.law.stable_angle_for(self.sign() * load).map(|angle| self.sign() * angle)
    }

    /// The saddle beyond the peak under a load, ahead of the rest.
    pub fn saddle(self, load: f64) -> Option<f64> {
        let found = self.law.unstable_angle_for(self.sign() * load)?;
        let angle = self.sign() * found;
        let rest = self.rest(load)?;
        Some(if angle < rest { angle + std::f64::consts::TAU } else { angle })
    }

    /// Speed with which the way into the saddle passes `x`, from behind.
    pub fn arrival_speed(self, load: f64, x: f64) -> Option<f64> {
        let saddle = self.saddle(load)?;
        if x >= saddle {
            return Some(0.0);
        }
        if self.beta == 0.0 {
            let square = 2.0 * (self.energy(saddle) - self.energy(x) - load * (saddle - x));
            return Some(square.max(0.0).sqrt());
        }
        let steep = -self.slope(saddle);
        let into = 0.5 * (self.beta + (self.beta * self.beta + 4.0 * steep.max(0.0)).sqrt());
        let start = Curve { x: saddle - NEAR.min(saddle - x), v: 0.0 };
        let start = Curve { v: into * (saddle - start.x), ..start };
        Some(self.along(load, start, x, saddle).v)
    }

    /// Speed at `x` on the way out of the saddle one turn behind.
    fn departure_speed(self, load: f64, x: f64) -> Option<f64> {
        let saddle = self.saddle(load)? - std::f64::consts::TAU;
        let steep = -self.slope(saddle);
        let out = 0.5 * ((self.beta * self.beta + 4.0 * steep.max(0.0)).sqrt() - self.beta);
        let start = Curve { x: saddle + NEAR, v: out * NEAR };
        Some(self.along(load, start, x, saddle).v)
    }

    /// Follows `dv/dx = (T - f)/v - damping/v` from a point near a saddle to `x`.
    fn along(self, load: f64, start: Curve, x: f64, saddle: f64) -> Curve {
        let rate = |x: f64, v: f64| (load - self.torque(x) - self.damper(v)) / v;
        let closing = |x: f64, v: f64| (load - self.torque(x)).abs() / (v * v);
        march(start, x, saddle, &Field { rate: &rate, closing: &closing })
    }

    /// How far ahead of `from` a swing from rest must begin to end on the saddle, rad; negative
    /// when it must begin behind, which only a push replaces.
    fn ahead_of(self, load: f64, from: f64) -> Option<f64> {
        let (saddle, rest) = (self.saddle(load)?, self.rest(load)?);
        if self.beta == 0.0 {
            let missing = |x: f64| self.energy(saddle) - self.energy(x) - load * (saddle - x);
            // Energy that is missing at `from`, as a distance: the drive there is never zero.
            let here = missing(from);
            if here > 0.0 {
                return Some(-here);
            }
            return Some(locate::root(from, rest, missing, 0.0) - from);
        }
        let mut here = Curve { x: rest, v: self.arrival_speed(load, rest)? };
        loop {
            let drive = load - self.torque(here.x) - self.damper(here.v);
            if drive * (rest - here.x) > 0.5 * here.v * here.v {
                return Some(self.down_to_rest(load, here, from));
            }
            if here.x <= from || here.v.is_nan() {
                return Some(-here.v * here.v);
            }
            let step = (rest - here.x).clamp(1e-3 * (saddle - rest), 0.02);
            here = self.along(load, here, (here.x - step).max(from), f64::INFINITY);
        }
    }

    /// Behind the rest the torque drives: there x is a smooth function of v down to v = 0.
    fn down_to_rest(self, load: f64, start: Curve, from: f64) -> f64 {
        let rate = |v: f64, x: f64| v / (load - self.torque(x) - self.damper(v));
        let field = Field { rate: &rate, closing: &|_, _| 1.0 };
        let mut turned = Curve { x: start.v, v: start.x };
        for left in (0..TURN_STEPS).rev() {
            let v = start.v * f64::from(left) / f64::from(TURN_STEPS);
            turned = march(turned, v, f64::INFINITY, &field);
            let passed = turned.v < from || turned.v.is_nan();
            if left > 0 && passed {
                return -v * v;
            }
        }
        turned.v - from
    }

    /// The largest torque step from rest under `preload` that is survived: total over K.
    pub fn critical_step(self, preload: f64) -> Option<f64> {
        let rest = self.rest(preload)?;
        let peak = self.peak();
        let miss = |load: f64| self.ahead_of(load, rest).unwrap_or(-1.0);
        let highest = peak * (1.0 - AT_PEAK);
        if miss(highest) <= 0.0 {
            return Some(peak);
        }
        // At the preload itself the swing would have to begin far behind its rest.
        let low = preload + 1e-9 * (highest - preload).max(1e-9);
        Some(locate::root(low, highest, miss, 1e-13))
    }

    /// The largest speed (in units of wp) at rest under `load` that is survived.
    pub fn critical_kick(self, load: f64) -> Option<f64> {
        self.arrival_speed(load, self.rest(load)?)
    }

    /// How long (in units of 1/wp) a load `overload` may act from rest under `preload`; `None`: for ever.
    pub fn critical_pulse(self, preload: f64, overload: f64) -> Option<f64> {
        let (rest, saddle) = (self.rest(preload)?, self.saddle(preload)?);
        if overload <= self.critical_step(preload)? {
            return None;
        }
        let push = |duration: f64| self.pushed(rest, overload, duration);
        let over = |state: [f64; 2]| match self.arrival_speed(preload, state[0]) {
            Some(limit) if state[0] < saddle => state[1] - limit,
            _ => 1.0,
        };
        let mut high = 0.25;
        while over(push(high)) <= 0.0 {
            high *= 1.5;
            if high > 1e4 {
                return None;
            }
        }
        Some(locate::root(0.0, high, |duration| over(push(duration)), 1e-14))
    }

    /// Load angle and speed after a time under a load, from rest at `x`.
    fn pushed(self, x: f64, load: f64, duration: f64) -> [f64; 2] {
        super::march::swing([x, 0.0], duration, &|x, v| load - self.torque(x) - self.damper(v))
    }

    /// The load over K below which a slipping gear falls into step again.
    pub fn resynchronisation(self) -> Option<f64> {
        if self.beta == 0.0 {
            return Some(0.0);
        }
        let surplus = |load: f64| -> Option<f64> {
            let middle = self.rest(load)?;
            Some(self.departure_speed(load, middle)? - self.arrival_speed(load, middle)?)
        };
        let high = self.peak() * (1.0 - AT_PEAK);
        if surplus(high)? <= 0.0 {
            return Some(self.peak());
        }
        Some(locate::root(0.0, high, |load| surplus(load).unwrap_or(f64::NAN), 1e-13))
    }
}

#[cfg(test)]
#[path = "swing_tests.rs"]
mod tests;
