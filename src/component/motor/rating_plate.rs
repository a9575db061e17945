//! Cage motor by its rating plate: Kloss's formula near synchronous speed, cubics to standstill.
//!
//! ```text
//! rated  = power/|speed|, m = breakdown/rated, sN = 1 - speed/synchronous_speed
//! sb     = sN*(m + sqrt(m^2 - 1))                      breakdown slip: rated torque at rated speed
//! sp     = 0.8, or (sb + 1)/2 when sb > 0.6            slip of the pull-up torque
//! 0..sb   Kloss's formula with sb
//! sb..sp  pull-up and breakdown joined by a cubic with slope zero at both ends
//! sp..1   pull-up and starting joined by a cubic with slope zero at sp, the secant's slope at 1
//! beyond  the starting torque holds
//! s < 0   -torque(-s): generating beyond synchronous speed
//! ```
//!
//! The plate's three torques are those of IEC 60034-12 and NEMA MG 1 (locked-rotor, pull-up,
//! breakdown); the shape between them is our choice. It is not a model of the transient torque.

use crate::component::motor::Plate;

/// Where the pull-up torque is put when breakdown lies well below it.
const PULL_UP_SLIP: f64 = 0.8;
/// Breakdown slip above which the pull-up point moves halfway to standstill.
const LATE_BREAKDOWN_SLIP: f64 = 0.6;

/// The torque of a rating plate at full voltage.
#[derive(Clone, Debug, PartialEq)]
pub struct RatingPlate {
    /// +1 or -1: the sense of the synchronous speed.
    direction: f64,
    per_synchronous_speed: f64,
    starting: f64,
    twice_breakdown: f64,
    breakdown_slip: f64,
    /// From pull-up to standstill, and from breakdown to pull-up.
    cubics: [Cubic; 2],
    boundaries: [f64; 6],
}

/// `start + square*u^2 + cube*u^3`, `u` the slip beyond `origin`: slope zero at the origin.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Cubic {
    origin: f64,
    start: f64,
    square: f64,
    cube: f64,
}

impl Cubic {
    /// From `start` to `end` over `width`; `shape` holds the factors of the square and the cube.
    fn new(origin: f64, width: f64, start: f64, end: f64, shape: [f64; 2]) -> Self {
        let rise = end - start;
        Self {
            origin,
            start,
            square: shape[0] * rise / (width * width),
            cube: shape[1] * rise / (width * width * width),
        }
    }

    #[inline]
    fn value(&self, slip: f64) -> f64 {
        let u = slip - self.origin;
        self.start + u * u * (self.square + self.cube * u)
    }

    #[inline]
    fn slope(&self, slip: f64) -> f64 {
        let u = slip - self.origin;
        u * (2.0 * self.square + 3.0 * self.cube * u)
    }
}

impl RatingPlate {
    /// The law of a plate whose torques and speeds have been checked.
    pub fn new(plate: &Plate) -> Self {
        let rated = plate.rated_torque();
        let breakdown_slip = plate.breakdown_slip();
        let pull_up_slip = if breakdown_slip > LATE_BREAKDOWN_SLIP {
            0.5 * (breakdown_slip + 1.0)
        } else {
            PULL_UP_SLIP
        };
        let [starting, pull_up, breakdown] =
            [plate.starting * rated, plate.pull_up * rated, plate.breakdown * rated];
        let mut boundaries = [1.0, pull_up_slip, breakdown_slip, 0.0, 0.0, 0.0];
        for entry in 0..3 {
            boundaries[5 - entry] = -boundaries[entry];
        }
        boundaries = boundaries.map(|slip| plate.synchronous_speed * (1.0 - slip));
        boundaries.sort_by(f64::total_cmp);
        let down = Cubic::new(
            breakdown_slip,
            pull_up_slip - breakdown_slip,
            breakdown,
            pull_up,
            [3.0, -2.0],
        );
        let up = Cubic::new(pull_up_slip, 1.0 - pull_up_slip, pull_up, starting, [2.0, -1.0]);
        Self {
            direction: plate.synchronous_speed.signum(),
            per_synchronous_speed: 1.0 / plate.synchronous_speed,
            starting,
            twice_breakdown: 2.0 * breakdown,
            breakdown_slip,
            cubics: [up, down],
            boundaries,
        }
    }

    /// Torque at a speed in rad/s by the formula of `piece`.
    #[inline]
    pub fn value(&self, speed: f64, piece: usize) -> f64 {
        let slip = 1.0 - speed * self.per_synchronous_speed;
        self.direction
            * match self.motor_piece(piece) {
                0 => self.starting,
                1 => self.cubics[0].value(slip),
                2 => self.cubics[1].value(slip),
                3 => {
                    let square = slip * slip + self.breakdown_slip * self.breakdown_slip;
                    self.twice_breakdown * slip * self.breakdown_slip / square
                }
                4 => -self.cubics[1].value(-slip),
                5 => -self.cubics[0].value(-slip),
                _ => -self.starting,
            }
    }

    /// Derivative of the torque with respect to the speed by the formula of `piece`.
    #[inline]
    pub fn slope(&self, speed: f64, piece: usize) -> f64 {
        let slip = 1.0 - speed * self.per_synchronous_speed;
        let over_slip = match self.motor_piece(piece) {
            1 => self.cubics[0].slope(slip),
            2 => self.cubics[1].slope(slip),
            3 => {
                let breakdown_square = self.breakdown_slip * self.breakdown_slip;
                let square = slip * slip + breakdown_square;
                self.twice_breakdown * self.breakdown_slip * (breakdown_square - slip * slip)
                    / (square * square)
            }
            4 => self.cubics[1].slope(-slip),
            5 => self.cubics[0].slope(-slip),
            _ => 0.0,
        };
        -self.direction * self.per_synchronous_speed * over_slip
    }

    /// Speeds at which the formula changes, rad/s, rising.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        &self.boundaries
    }

    /// Pieces are counted by rising speed; the formulas by falling slip.
    #[inline]
    fn motor_piece(&self, piece: usize) -> usize {
        if self.direction > 0.0 { piece } else { 6_usize.saturating_sub(piece) }
    }
}

#[cfg(test)]
#[path = "rating_plate_tests.rs"]
mod tests;
