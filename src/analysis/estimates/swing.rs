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

use super::march::{Curve, march};
use crate::component::magnetic_law::MagnetLaw;
use crate::solve::locate;

/// Start distance from a saddle, rad.
const NEAR: f64 = 1e-6;

/// Torques closer to the peak than this share are taken as the peak.
const AT_PEAK: f64 = 1e-9;

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
        march(start, x, saddle, &|x, v| (load - self.torque(x) - self.damper(v)) / v)
    }

    /// Where a swing from rest must begin to end on the saddle; `None`: it begins before the last saddle.
    fn turning_point(self, load: f64) -> Option<f64> {
        let (saddle, rest) = (self.saddle(load)?, self.rest(load)?);
        let behind = saddle - std::f64::consts::TAU;
        if self.beta == 0.0 {
            let height = self.energy(saddle) - load * saddle;
            let missing = |x: f64| height - (self.energy(x) - load * x);
            if missing(behind) > 0.0 {
                return None;
            }
            return Some(locate::root(rest, behind, missing, 0.0));
        }
        // From the rest on the torque drives: there x is a smooth function of v down to v = 0.
        let mut here = Curve { x: rest, v: self.arrival_speed(load, rest)? };
        while here.x > behind {
            let drive = load - self.torque(here.x) - self.damper(here.v);
            if drive > here.v {
                return Some(self.down_to_rest(load, here));
            }
            let next = here.x - 0.02_f64.min(0.25 * here.v.max(1e-3));
            here = self.along(load, here, next, f64::INFINITY);
            if here.v <= 0.0 || here.v.is_nan() {
                return Some(here.x);
            }
        }
        None
    }

    fn down_to_rest(self, load: f64, from: Curve) -> f64 {
        let turned = Curve { x: from.v, v: from.x };
        let rates = |v: f64, x: f64| v / (load - self.torque(x) - self.damper(v));
        march(turned, 0.0, f64::INFINITY, &rates).v
    }

    /// The largest torque step from rest under `preload` that is survived: total over K.
    pub fn critical_step(self, preload: f64) -> Option<f64> {
        let rest = self.rest(preload)?;
        let peak = self.peak();
        let miss = |load: f64| match self.turning_point(load) {
            Some(turn) => turn - rest,
            None => -std::f64::consts::TAU,
        };
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
