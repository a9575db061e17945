//! A hand-written loop of the train of `pump_train.yaml`: what the engine is measured by.

use lodeshaft::equations::Equations;

/// States of the train.
pub const STATES: usize = 7;
/// The scaled state.
pub type State = [f64; STATES];

/// Working sizes of the states, as the engine scales them.
pub struct Hand {
    /// Physical value of a state of 1.
    pub scale: State,
}

impl Hand {
    /// The loop with the working sizes of the engine's equations of the same train.
    pub fn of(equations: &Equations) -> Self {
        let mut scale = [0.0; STATES];
        scale.copy_from_slice(&equations.scale[..STATES]);
        Self { scale }
    }

    /// Rates of the scaled state, written out by hand.
    #[inline(always)]
    fn rates(&self, y: &State) -> State {
        let s = &self.scale;
        let (wm, wi, wo, wp) = (y[0] * s[0], y[1] * s[1], y[2] * s[2], y[3] * s[3]);
        let (tm, tp, phase) = (y[4] * s[4], y[5] * s[5], y[6]);
        let slip = 1.0 - wm / 157.079_632_679_489_66;
        let motor = 2.0 * 416.0 * slip * 0.13 / (slip * slip + 0.13 * 0.13);
        let motor_shaft = 20_000.0 * tm + 2.0 * (wm - wi);
        let pump_shaft = 50_000.0 * tp + 5.0 * (wo - wp);
        let rate = 4.0 * wi + 22.0 * wo;
        let magnet = 1500.0 / 22.0 * phase.sin() + 24.2 / 484.0 * rate;
        let speed = 267.0 * std::f64::consts::PI / 30.0;
        let pump = 700.0 * wp * wp.abs() / (speed * speed);
        [
            (motor - motor_shaft - 0.01 * wm) / 0.25 / s[0],
            (motor_shaft - 4.0 * magnet) / 0.02 / s[1],
            (-22.0 * magnet - pump_shaft) / 0.15 / s[2],
            (pump_shaft - pump) / 2.5 / s[3],
            (wm - wi) / s[4],
            (wo - wp) / s[5],
            rate,
        ]
    }

    /// Dormand and Prince 5(4) with the usual controller; returns steps and the final phase.
    pub fn run(&self, end: f64, tolerance: f64) -> (u64, f64) {
        let mut y: State = [0.0; STATES];
        let (mut t, mut h, mut steps) = (0.0, 1e-5, 0);
        let mut k1 = self.rates(&y);
        let mut old: f64 = 1e-4;
        let add = |y: &State, h: f64, parts: &[(f64, &State)]| -> State {
            let mut sum = *y;
            for (weight, rate) in parts {
                for i in 0..STATES {
                    sum[i] += h * weight * rate[i];
                }
            }
            sum
        };
        while t < end {
            h = f64::min(h, end - t);
            let k2 = self.rates(&add(&y, h, &[(0.2, &k1)]));
            let k3 = self.rates(&add(&y, h, &[(3.0 / 40.0, &k1), (9.0 / 40.0, &k2)]));
            let k4 = self.rates(&add(
                &y,
                h,
                &[(44.0 / 45.0, &k1), (-56.0 / 15.0, &k2), (32.0 / 9.0, &k3)],
            ));
            let k5 = self.rates(&add(
                &y,
                h,
                &[
                    (19372.0 / 6561.0, &k1),
                    (-25360.0 / 2187.0, &k2),
                    (64448.0 / 6561.0, &k3),
                    (-212.0 / 729.0, &k4),
                ],
            ));
            let k6 = self.rates(&add(
                &y,
                h,
                &[
                    (9017.0 / 3168.0, &k1),
                    (-355.0 / 33.0, &k2),
                    (46732.0 / 5247.0, &k3),
                    (49.0 / 176.0, &k4),
                    (-5103.0 / 18656.0, &k5),
                ],
            ));
            let next = add(
                &y,
                h,
                &[
                    (35.0 / 384.0, &k1),
                    (500.0 / 1113.0, &k3),
                    (125.0 / 192.0, &k4),
                    (-2187.0 / 6784.0, &k5),
                    (11.0 / 84.0, &k6),
                ],
            );
            let k7 = self.rates(&next);
            let mut error = 0.0;
            for i in 0..STATES {
                let e = h
                    * (71.0 / 57600.0 * k1[i] - 71.0 / 16695.0 * k3[i] + 71.0 / 1920.0 * k4[i]
                        - 17253.0 / 339_200.0 * k5[i]
                        + 22.0 / 525.0 * k6[i]
                        - 1.0 / 40.0 * k7[i]);
                let scale = tolerance + tolerance * y[i].abs().max(next[i].abs());
                error += (e / scale) * (e / scale);
            }
            let error = (error / STATES as f64).sqrt();
            let beta = 0.04;
            let factor = error.powf(0.2 - beta * 0.75);
            if error <= 1.0 {
                let change = (factor / old.powf(beta) / 0.9).clamp(0.1, 5.0);
                old = error.max(1e-4);
                t += h;
                y = next;
                k1 = k7;
                h /= change;
                steps += 1;
            } else {
                h /= (factor / 0.9).min(5.0);
            }
        }
        (steps, y[6])
    }
}
