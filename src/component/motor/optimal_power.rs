//! Generator on its optimal-power curve.
//!
//! ```text
//! torque = -min(coefficient*speed^2, torque_limit)   while turning forward, else 0       N*m
//! ```
//!
//! With `coefficient = 1/2 density pi R^5 Cp/lambda^3` a variable-speed rotor runs at its best
//! tip speed ratio lambda (common practice; Jonkman et al., NREL/TP-500-38060, call it region 2).

/// Torque of a generator that follows the best speed of its rotor.
#[derive(Clone, Debug, PartialEq)]
pub struct OptimalPower {
    coefficient: f64,
    torque_limit: f64,
    boundaries: [f64; 2],
}

impl OptimalPower {
    /// From the coefficient (N*m*s2/rad2) and the torque limit (N*m), neither negative.
    pub fn new(coefficient: f64, torque_limit: f64) -> Self {
        // A coefficient of zero never reaches its limit.
        let reached =
            if coefficient > 0.0 { (torque_limit / coefficient).sqrt() } else { f64::MAX };
        Self { coefficient, torque_limit, boundaries: [0.0, reached] }
    }

    /// Torque at a speed in rad/s by the formula of `piece`.
    #[inline]
    pub fn value(&self, speed: f64, piece: usize) -> f64 {
        match piece {
            0 => 0.0,
            1 => -self.coefficient * speed * speed,
            _ => -self.torque_limit,
        }
    }

    /// Derivative of the torque with respect to the speed.
    #[inline]
    pub fn slope(&self, speed: f64, piece: usize) -> f64 {
        if piece == 1 { -2.0 * self.coefficient * speed } else { 0.0 }
    }

    /// Speeds at which the formula changes, rad/s, rising.
    #[inline]
    pub fn boundaries(&self) -> &[f64] {
        &self.boundaries
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Closed form k w^2. The coefficient is that of a rotor of 40 m at Cp 0.480011902828 and
    // lambda 8.10011723832 in air of 1.225 kg/m3: 1/2 rho pi R^5 Cp/lambda^3.
    #[test]
    fn the_coefficient_of_a_rotor_gives_the_torque_of_its_best_point() {
        let (density, radius, cp, lambda) = (1.225, 40.0_f64, 0.480011902828, 8.10011723832_f64);
        let coefficient =
            0.5 * density * std::f64::consts::PI * radius.powi(5) * cp / lambda.powi(3);
        assert!((coefficient - 177964.760634).abs() < 1e-3);
        let generator = OptimalPower::new(coefficient, 1.0e6);
        let speed = 12.0 * lambda / radius;
        let power = -generator.value(speed, 1) * speed;
        let wind = 0.5 * density * std::f64::consts::PI * radius.powi(2) * 12.0_f64.powi(3);
        assert!((power / wind - cp).abs() < 1e-9);
        assert!((generator.boundaries()[1] - (1.0e6 / coefficient).sqrt()).abs() < 1e-12);
    }
}
