//! Torque limit of a drive over its speed.
//!
//! ```text
//! upper(w) = limit                                                      driving (torque*speed >= 0)
//!          = straight from limit at rest to regeneration_limit at regeneration_from, held beyond
//!                                                                       braking (torque*speed < 0)
//!          times base_speed/|w| beyond base_speed                       constant power
//! lower(w) = -upper(-w)
//! ```
//!
//! Field weakening holds the voltage and with it the power beyond the base speed (Leonhard, Control
//! of Electrical Drives; from memory). A drive that cannot give power back has only its own losses
//! to brake with: at a small speed they take up any torque, hence the straight line from rest.

/// What a drive's torque is limited to.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TorqueLimits {
    /// At low speed while it drives, N*m.
    pub torque_limit: f64,
    /// Speed from which the power stays constant, rad/s; `None`: none.
    pub base_speed: Option<f64>,
    /// Limit while it brakes (N*m) and the speed from which that holds (rad/s); `None`: as while it drives.
    pub regeneration: Option<[f64; 2]>,
}

/// One of the two limits as a law over the speed in rad/s.
#[derive(Clone, Debug, PartialEq)]
pub struct TorqueLimit {
    boundaries: Vec<f64>,
    pieces: Vec<Piece>,
}

/// Between two boundaries: `(torque + per_speed*|w|)*(1 or base/|w|)`.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Piece {
    sense: f64,
    torque: f64,
    per_speed: f64,
    base: Option<f64>,
}

impl TorqueLimits {
    /// True when the limits follow the speed.
    pub fn follow_speed(&self) -> bool {
        self.base_speed.is_some() || self.regeneration.is_some()
    }
}

impl TorqueLimit {
    /// The lower (`side` -1) or upper (`side` +1) limit.
    pub fn new(limits: &TorqueLimits, side: f64) -> Self {
        // Built for the upper limit; the lower one is the same turned about the origin.
        let mut bounds: Vec<f64> = Vec::new();
        bounds.extend(limits.base_speed.iter().flat_map(|base| [-base, *base]));
        bounds.extend(limits.regeneration.iter().flat_map(|[_, from]| [-from, 0.0]));
        bounds.sort_by(f64::total_cmp);
        bounds.dedup();
        let far = bounds.iter().fold(1.0_f64, |size, bound| size.max(2.0 * bound.abs()));
        let edges: Vec<f64> =
            std::iter::once(-far).chain(bounds.iter().copied()).chain([far]).collect();
        let mut pieces: Vec<Piece> = edges
            .windows(2)
            .map(|ends| Piece::of(limits, 0.5 * (ends[0] + ends[1]), ends[0] >= 0.0))
            .collect();
        if side < 0.0 {
            bounds.iter_mut().for_each(|bound| *bound = -*bound);
            bounds.reverse();
            pieces.reverse();
            for piece in &mut pieces {
                piece.sense = -piece.sense;
                piece.torque = -piece.torque;
                piece.per_speed = -piece.per_speed;
            }
        }
        Self { boundaries: bounds, pieces }
    }

    /// The limit at a speed by the formula of `piece`, N*m.
    #[inline]
    pub fn value(&self, speed: f64, piece: usize) -> f64 {
        let Some(piece) = self.pieces.get(piece) else { return 0.0 };
        let size = piece.sense * speed;
        match piece.base {
            None => piece.torque + piece.per_speed * size,
            Some(base) => base * (piece.torque / size + piece.per_speed),
        }
    }

    /// Derivative of the limit with respect to the speed.
    #[inline]
    pub fn slope(&self, speed: f64, piece: usize) -> f64 {
        let Some(piece) = self.pieces.get(piece) else { return 0.0 };
        match piece.base {
            None => piece.sense * piece.per_speed,
            Some(base) => -piece.sense * base * piece.torque / (speed * speed),
        }
    }

    /// Speeds at which the formula changes, rising.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        &self.boundaries
    }
}

impl Piece {
    fn of(limits: &TorqueLimits, middle: f64, forward: bool) -> Self {
        let sense = if forward || middle > 0.0 { 1.0 } else { -1.0 };
        let size = middle.abs();
        let base = limits.base_speed.filter(|base| size > *base);
        let limit = limits.torque_limit;
        let (torque, per_speed) = match limits.regeneration {
            Some([held, from]) if sense < 0.0 && size > from => (held, 0.0),
            Some([held, from]) if sense < 0.0 => (limit, (held - limit) / from),
            _ => (limit, 0.0),
        };
        Self { sense, torque, per_speed, base }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn both(limits: &TorqueLimits) -> [TorqueLimit; 2] {
        [TorqueLimit::new(limits, -1.0), TorqueLimit::new(limits, 1.0)]
    }

    fn at(limit: &TorqueLimit, speed: f64) -> f64 {
        limit.value(speed, limit.boundaries().partition_point(|bound| *bound <= speed))
    }

    // Closed form: beyond the base speed torque*speed stays limit*base_speed.
    #[test]
    fn the_power_is_constant_beyond_the_base_speed() {
        let limits =
            TorqueLimits { torque_limit: 300.0, base_speed: Some(150.0), regeneration: None };
        let [lower, upper] = both(&limits);
        for speed in [-600.0, -200.0, -150.0, -40.0, 0.0, 40.0, 150.0, 200.0, 600.0_f64] {
            let expected = 300.0_f64.min(45_000.0 / speed.abs().max(1e-9));
            assert!((at(&upper, speed) - expected).abs() < 1e-9, "{speed}");
            assert!((at(&lower, speed) + expected).abs() < 1e-9, "{speed}");
        }
    }

    // By hand: 300 N*m driving, 60 N*m braking from 2 rad/s on, 45 kW beyond 150 rad/s.
    #[test]
    fn braking_has_its_own_limit_which_begins_at_rest() {
        let limits = TorqueLimits {
            torque_limit: 300.0,
            base_speed: Some(150.0),
            regeneration: Some([60.0, 2.0]),
        };
        let [lower, upper] = both(&limits);
        for (speed, highest, lowest) in [
            (100.0, 300.0, -60.0),
            (1.0, 300.0, -180.0),
            (0.0, 300.0, -300.0),
            (-0.5, 240.0, -300.0),
            (-100.0, 60.0, -300.0),
            (-300.0, 30.0, -150.0),
            (300.0, 150.0, -30.0),
        ] {
            assert!((at(&upper, speed) - highest).abs() < 1e-9, "{speed}: {}", at(&upper, speed));
            assert!((at(&lower, speed) - lowest).abs() < 1e-9, "{speed}: {}", at(&lower, speed));
        }
    }
}
