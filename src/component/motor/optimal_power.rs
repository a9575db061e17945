//! Generator of a variable-speed rotor: the torque for its best tip speed ratio, and a rated region.
//!
//! ```text
//! torque = -coefficient*w^2 up to torque_limit, which holds beyond         without a rated region
//!
//! cut-in   0 below w1, straight to coefficient*w2^2 at w2
//! best     -coefficient*w^2
//! transition  -rated_torque*(w - ws)/(wr - ws),  ws = wr/(1 + transition_slip), up to wr
//! rated    -rated_torque*wr/w (constant power) or -rated_torque (constant torque) from wr on
//! turning backward 0                                                         N*m
//! ```
//!
//! With `coefficient = 1/2 density pi R^5 Cp/lambda^3` a variable-speed rotor runs at its best
//! tip speed ratio lambda (common practice). The regions are those of Jonkman et al.,
//! NREL/TP-500-38060 (2009), section 7, there called 1 1/2, 2, 2 1/2 and 3: the transition is the
//! line of an induction generator with that slip, met by the square law where the two cross.

/// What a generator does at and beyond its rated speed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rated {
    /// rad/s.
    pub speed: f64,
    /// N*m at that speed.
    pub torque: f64,
    /// Slip of the line that leads there, a share.
    pub transition_slip: f64,
    /// Constant power beyond, else constant torque.
    pub constant_power: bool,
}

/// The figures of a generator as typed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct GeneratorFigures {
    /// N*m*s2/rad2.
    pub coefficient: f64,
    /// Largest torque without a rated region, N*m; `None` where there is one.
    pub torque_limit: Option<f64>,
    /// Speeds between which the torque comes in, rad/s.
    pub cut_in: Option<[f64; 2]>,
    /// The rated region.
    pub rated: Option<Rated>,
}

impl Rated {
    /// Speed at which the line of the transition begins, rad/s.
    pub fn synchronous_speed(&self) -> f64 {
        self.speed / (1.0 + self.transition_slip)
    }

    fn slope(&self) -> f64 {
        self.torque / (self.speed - self.synchronous_speed())
    }

    /// Where the square law meets the line; `None` where the square law stays below it or above.
    pub fn crossing(&self, coefficient: f64) -> Option<f64> {
        let (slope, from) = (self.slope(), self.synchronous_speed());
        let root = slope * (slope - 4.0 * coefficient * from);
        // The smaller root, written so that nothing cancels.
        let speed = 2.0 * slope * from / (slope + root.sqrt());
        (root >= 0.0 && speed < self.speed).then_some(speed)
    }
}

impl GeneratorFigures {
    /// The largest torque, N*m.
    pub fn largest_torque(&self) -> f64 {
        self.rated.map_or(self.torque_limit.unwrap_or(0.0), |rated| rated.torque)
    }

    /// Speed at which the square law ends, rad/s.
    pub fn square_law_ends(&self) -> f64 {
        match &self.rated {
            Some(rated) => rated.crossing(self.coefficient).unwrap_or(rated.speed),
            // A coefficient of zero never reaches its limit.
            None if self.coefficient > 0.0 => {
                (self.torque_limit.unwrap_or(0.0) / self.coefficient).sqrt()
            }
            None => f64::MAX,
        }
    }
}

/// Formula of one region; the torque is its negative.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Part {
    /// The same at every speed.
    Constant(f64),
    /// `slope*(w - from)`.
    Line { slope: f64, from: f64 },
    /// `coefficient*w^2`.
    Square(f64),
    /// `power/w`.
    Power(f64),
}

/// Torque of a generator that follows the best speed of its rotor.
#[derive(Clone, Debug, PartialEq)]
pub struct OptimalPower {
    boundaries: Vec<f64>,
    parts: Vec<Part>,
}

impl OptimalPower {
    /// From figures in which every region follows the one before.
    pub fn new(figures: &GeneratorFigures) -> Self {
        let mut law = Self { boundaries: Vec::new(), parts: vec![Part::Constant(0.0)] };
        let square = Part::Square(figures.coefficient);
        match figures.cut_in {
            Some([from, to]) => {
                let slope = figures.coefficient * to * to / (to - from);
                law.then(from, Part::Line { slope, from });
                law.then(to, square);
            }
            None => law.then(0.0, square),
        }
        let ends = figures.square_law_ends();
        match &figures.rated {
            None => law.then(ends, Part::Constant(figures.torque_limit.unwrap_or(0.0))),
            Some(rated) => {
                let from = rated.synchronous_speed();
                law.then(ends, Part::Line { slope: rated.slope(), from });
                law.then(
                    rated.speed,
                    if rated.constant_power {
                        Part::Power(rated.torque * rated.speed)
                    } else {
                        Part::Constant(rated.torque)
                    },
                );
            }
        }
        law
    }

    fn then(&mut self, from: f64, part: Part) {
        self.boundaries.push(from);
        self.parts.push(part);
    }

    /// Torque at a speed in rad/s by the formula of `piece`.
    #[inline]
    pub fn value(&self, speed: f64, piece: usize) -> f64 {
        match self.parts.get(piece) {
            Some(Part::Constant(torque)) => -torque,
            Some(Part::Line { slope, from }) => -slope * (speed - from),
            Some(Part::Square(coefficient)) => -coefficient * speed * speed,
            Some(Part::Power(power)) => -power / speed,
            None => 0.0,
        }
    }

    /// Derivative of the torque with respect to the speed.
    #[inline]
    pub fn slope(&self, speed: f64, piece: usize) -> f64 {
        match self.parts.get(piece) {
            Some(Part::Line { slope, .. }) => -slope,
            Some(Part::Square(coefficient)) => -2.0 * coefficient * speed,
            Some(Part::Power(power)) => power / (speed * speed),
            Some(Part::Constant(_)) | None => 0.0,
        }
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

    fn at(law: &OptimalPower, speed: f64) -> f64 {
        -law.value(speed, law.boundaries().partition_point(|bound| *bound <= speed))
    }

    // Closed form k w^2. The coefficient is that of a rotor of 40 m at Cp 0.480011902828 and
    // lambda 8.10011723832 in air of 1.225 kg/m3: 1/2 rho pi R^5 Cp/lambda^3.
    #[test]
    fn the_coefficient_of_a_rotor_gives_the_torque_of_its_best_point() {
        let (density, radius, cp, lambda) = (1.225, 40.0_f64, 0.480011902828, 8.10011723832_f64);
        let coefficient =
            0.5 * density * std::f64::consts::PI * radius.powi(5) * cp / lambda.powi(3);
        assert!((coefficient - 177964.760634).abs() < 1e-3);
        let generator = OptimalPower::new(&GeneratorFigures {
            coefficient,
            torque_limit: Some(2.0e6),
            cut_in: None,
            rated: None,
        });
        let speed = 12.0 * lambda / radius;
        let power = at(&generator, speed) * speed;
        let wind = 0.5 * density * std::f64::consts::PI * radius.powi(2) * 12.0_f64.powi(3);
        assert!((power / wind - cp).abs() < 1e-9);
        assert!((generator.boundaries()[1] - (2.0e6 / coefficient).sqrt()).abs() < 1e-12);
    }

    // NREL/TP-500-38060 (2009), figures read in data files that cite it: 0.0255764 N*m/rpm2,
    // 5.29661 MW at 99 % of 1173.7 rpm, slip 10 %, cut-in from 670 to 871 rpm; they say 43 528.84
    // N*m at rated speed and a transition from 1136.5 rpm and 33 035 N*m on. Here with the
    // coefficient to more digits, from Cp 0.482 at 7.55 and a radius of 62.94 m.
    #[test]
    fn the_reference_turbine_of_5_megawatt_has_its_regions() {
        let rpm = std::f64::consts::PI / 30.0;
        let speed = 0.99 * 1173.7 * rpm;
        let k = 0.0255763092884;
        let rated = Rated {
            speed,
            torque: 5e6 / 0.944 / speed,
            transition_slip: 0.1,
            constant_power: true,
        };
        let law = OptimalPower::new(&GeneratorFigures {
            coefficient: k / (rpm * rpm),
            torque_limit: None,
            cut_in: Some([670.0 * rpm, 871.0 * rpm]),
            rated: Some(rated),
        });
        assert!((law.boundaries()[2] / rpm - 1136.49729051).abs() < 1e-7);
        for (turns, torque) in [
            (600.0, 0.0),
            (770.5, 0.5 * k * 871.0 * 871.0),
            (1000.0, k * 1e6),
            (1136.49729051, 33035.0283973),
            (0.99 * 1173.7, 43528.8399083),
            (1300.0, 5e6 / 0.944 / (1300.0 * rpm)),
        ] {
            assert!((at(&law, turns * rpm) - torque).abs() < 1e-5, "{turns} rpm");
        }
    }
}
