//! Units at the border.

use super::sheet::Case;
use crate::helper::{head, run_well};
use crate::units::wheel;

const CHAPTER: &str = "Units";
const NIST: &str = "exact by definition, NIST SP 811 appendix B (from memory)";

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    vec![
        Case::new(CHAPTER, NIST, |sheet| {
            for (typed, expected) in [("1 lbf*ft", 1.35581794833), ("1 lbf*in", 0.112984829028)] {
                let series = run_well(&wheel("1e12 kg*m2", "0 rpm", typed)).series();
                sheet.relative(typed, "N*m", [expected, series.at("push.torque", 0.0)], 1e-11);
            }
            let outcome = run_well(&wheel("1 lb*ft2", "0 rpm", "1 N*m"));
            let found = 1.0 / outcome.channel("wheel.speed", "final");
            sheet.relative("1 lb*ft2", "kg*m2", [0.0421401100938, found], 1e-9);
            let series = run_well(&wheel("1 kg*m2", "1 rpm", "0")).series();
            sheet.relative("1 rpm", "rad/s", [0.10471975512, series.at("wheel.speed", 0.0)], 1e-10);
        }),
        Case::new(CHAPTER, "torque = power/speed", |sheet| {
            for (power, speed, torque) in [
                ("2 MW", "1500 rpm", 12732.3954474),
                ("25 hp", "1755 rpm", 101.437453526),
                ("1 PS", "1 rad/s", 735.49875),
                ("1 hp", "1 rad/s", 745.699871582),
            ] {
                let scenario = format!(
                    "{}bodies:\n  wheel: {{ inertia: 1e12 kg*m2, speed: {speed} }}\n\
                     loads:\n  fan: {{ body: wheel, law: {{ power_law: {{ power: {power}, speed: {speed}, exponent: 2 }} }} }}\n",
                    head(1.0, 0.5, 1e-8),
                );
                let found = -run_well(&scenario).series().at("fan.torque", 0.0);
                sheet.relative(format!("{power} at {speed}"), "N*m", [torque, found], 1e-11);
            }
        }),
        Case::new(CHAPTER, "closed form, pi G (d^4 - bore^4)/(32 length)", |sheet| {
            for (solid, stiffness) in [
                ("diameter: 70 mm, length: 1.5 m, shear_modulus: 84 GPa", 132001.869322),
                ("diameter: 100 mm, length: 1 m, shear_modulus: 80 GPa", 785398.163397),
                (
                    "diameter: 100 mm, bore: 60 mm, length: 1 m, shear_modulus: 80 GPa",
                    683610.561421,
                ),
            ] {
                let scenario = format!(
                    "{}start: steady\nshafts:\n  spring: {{ between: [wheel, ground], stiffness: {{ {solid} }} }}\n",
                    wheel("1 kg*m2", "0 rpm", "1 kN*m")
                );
                let found = 1000.0 / run_well(&scenario).series().at("spring.twist", 0.0);
                sheet.relative(format!("shaft, {solid}"), "N*m/rad", [stiffness, found], 1e-9);
            }
        }),
    ]
}
