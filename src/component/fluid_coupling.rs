//! Fluid couplings: torque by the square of the faster wheel's speed and the ratio of speeds.
//!
//! ```text
//! v = turbine speed / pump speed
//! torque = C * f(v) * pump speed^2                on the turbine wheel, the opposite on the pump wheel
//! C f(v) = density * diameter^5 * lambda(v)       lambda: performance number of the maker's curve
//! the turbine wheel faster: torque = -C * f(1/v) * turbine speed^2     the wheels change their parts
//! ```
//! Speeds rad/s, torque N*m, C in N*m*s2/rad2. The law follows from likeness of flow (Foettinger's
//! couplings; performance number and speed ratio as in VDI 2153, from memory). `f` is read as a
//! smooth curve through its points; it must fall to 0 at v = 1, where nothing is passed on. It is a
//! law of steady flow: filling, heating and the fluid's own inertia are left out.

use super::monotone::Monotone;
use super::points::read_pairs;
use crate::quantity::Dimension;
use crate::tree::{Fields, Range};

/// A fluid coupling as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct FluidCoupling {
    /// Its name.
    pub name: String,
    /// Pump wheel and turbine wheel.
    pub between: [String; 2],
    /// N*m*s2/rad2 for a factor of 1; with a diameter density times diameter^5.
    pub capacity: f64,
    /// Rows of speed ratio and torque factor.
    pub points: Vec<[f64; 2]>,
    /// Where its figures come from.
    pub source: Option<String>,
}

impl FluidCoupling {
    /// Reads a fluid coupling.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        let between = fields.pair("between", "The bodies of pump wheel and turbine wheel.");
        let capacity = fields.quantity_or_group(
            "capacity",
            (Dimension::TorquePerSpeedSquared, Range::Positive),
            "Torque over the square of the pump wheel's speed for a factor of 1; or density and diameter.",
            |capacity| capacity,
            read_size,
        );
        if capacity.is_none() && !fields.has("capacity") {
            fields.miss("capacity", "for example 0.02 N*m*s2/rad2, or a density and a diameter");
        }
        let points = read_pairs(
            fields,
            "points",
            [Dimension::One, Dimension::One],
            "speed ratios",
            "Rows of speed ratio (turbine over pump, -1 to 1) and torque factor; with a diameter the factor is the performance number.",
        );
        if !fields.has("points") {
            fields.miss("points", "for example points: [[0, 1], [0.8, 0.7], [0.96, 0.2], [1, 0]]");
        }
        let points = points.unwrap_or_default();
        check(fields, &points);
        Self {
            name: fields.own_name().to_owned(),
            between,
            capacity: capacity.unwrap_or(f64::NAN),
            points,
            source: fields.source(),
        }
    }

    /// The torque law.
    pub fn law(&self) -> FluidLaw {
        FluidLaw { capacity: self.capacity, factor: Monotone::new(&self.points) }
    }
}

fn read_size(fields: &mut Fields<'_>) -> f64 {
    let density = fields.quantity(
        "density",
        Dimension::Density,
        Range::Positive,
        "Density of the fluid; oil about 860 kg/m3.",
    );
    let diameter = fields.quantity(
        "diameter",
        Dimension::Length,
        Range::Positive,
        "Profile diameter: the largest of the flow.",
    );
    density * diameter.powi(5)
}

fn check(fields: &mut Fields<'_>, points: &[[f64; 2]]) {
    for (index, [ratio, factor]) in points.iter().enumerate() {
        if !(-1.0..=1.0).contains(ratio) {
            fields.fault_hint(
                &format!("points.{index}.0"),
                "a speed ratio lies between -1 and 1",
                "where the turbine wheel is the faster one the wheels change their parts",
            );
            return;
        }
        if *factor < 0.0 {
            fields.fault(&format!("points.{index}.1"), "a torque factor is never negative");
            return;
        }
    }
    if let Some([ratio, factor]) = points.last()
        && (*ratio != 1.0 || *factor != 0.0)
    {
        fields.fault_hint(
            "points",
            "the last point must be [1, 0]",
            "wheels of equal speed pass no torque on",
        );
    }
}

/// Torque of a fluid coupling over its wheels' speeds.
#[derive(Clone, Debug, PartialEq)]
pub struct FluidLaw {
    capacity: f64,
    factor: Monotone,
}

impl FluidLaw {
    /// Torque on the pump wheel at its speed against the turbine wheel and the turbine's speed.
    #[inline]
    pub fn value(&self, slip: f64, turbine: f64) -> f64 {
        let pump = slip + turbine;
        if pump.abs() >= turbine.abs() {
            if pump == 0.0 {
                return 0.0;
            }
            -self.capacity * self.factor.at(turbine / pump).0 * pump * pump.abs()
        } else {
            self.capacity * self.factor.at(pump / turbine).0 * turbine * turbine.abs()
        }
    }

    /// Derivatives with respect to slip and turbine speed.
    pub fn slopes(&self, slip: f64, turbine: f64) -> [f64; 2] {
        let pump = slip + turbine;
        let [by_pump, by_turbine] = if pump.abs() >= turbine.abs() {
            if pump == 0.0 {
                return [0.0; 2];
            }
            let (factor, rise) = self.factor.at(turbine / pump);
            [-2.0 * pump.abs() * factor + turbine * pump.signum() * rise, -pump.abs() * rise]
        } else {
            let (factor, rise) = self.factor.at(pump / turbine);
            [turbine.abs() * rise, 2.0 * turbine.abs() * factor - pump * turbine.signum() * rise]
        };
        [self.capacity * by_pump, self.capacity * (by_pump + by_turbine)]
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn law() -> FluidLaw {
        let points = vec![[0.0, 2.0], [0.5, 1.7], [0.8, 1.2], [0.95, 0.5], [1.0, 0.0]];
        FluidLaw { capacity: 0.01, factor: Monotone::new(&points) }
    }

    // By definition: 2*0.01*150^2 at stall; likeness: four times the torque at twice the speeds.
    #[test]
    fn torque_follows_the_square_of_the_speeds() {
        let law = law();
        assert!((law.value(150.0, 0.0) + 450.0).abs() < 1e-9);
        assert!((law.value(60.0, 240.0) - 4.0 * law.value(30.0, 120.0)).abs() < 1e-9);
        assert!(
            (law.value(-30.0, 150.0) + law.value(30.0, 120.0)).abs() < 1e-9,
            "they change parts"
        );
        assert!((law.value(-150.0, 0.0) - 450.0).abs() < 1e-9, "backwards");
        assert_eq!(law.value(0.0, 0.0).to_bits(), 0.0_f64.to_bits());
    }

    #[test]
    fn slopes_are_the_differences_of_the_values() {
        let law = law();
        for (slip, turbine) in
            [(40.0, 100.0), (-40.0, 130.0), (20.0, -120.0), (150.0, 0.0), (-5.0, 9.0)]
        {
            let step = 1e-5;
            let by_slip =
                (law.value(slip + step, turbine) - law.value(slip - step, turbine)) / (2.0 * step);
            let by_turbine =
                (law.value(slip, turbine + step) - law.value(slip, turbine - step)) / (2.0 * step);
            let found = law.slopes(slip, turbine);
            assert!((found[0] - by_slip).abs() < 1e-5, "{slip} {turbine}: {found:?} {by_slip}");
            assert!(
                (found[1] - by_turbine).abs() < 1e-5,
                "{slip} {turbine}: {found:?} {by_turbine}"
            );
        }
    }
}
