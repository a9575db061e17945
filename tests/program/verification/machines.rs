//! Induction machines by their circuit and fluxes, propellers, rotors by points, turbulence.

use super::sheet::Case;
use crate::helper::run_well;
use crate::loads::screw;
use crate::motors::{SYNCHRONOUS, extremes, machine};
use crate::wind::rotor;
use std::f64::consts::TAU;

const CHAPTER: &str = "Machines and propellers";
const CIRCUIT: &str =
    "Chapman, Electric Machinery Fundamentals, example 7-5 (data read second-hand), exact circuit";
const FLUXES: &str = "flux linkages in a frame at rest, integrated with SciPy at 1e-12";
const SERIES: &str =
    "Oosterveld and van Oossanen 1975, Wageningen B series (coefficients from memory and a copy)";
const KAIMAL: &str = "Kaimal's spectrum of IEC 61400-1 (from memory), closed form";

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    vec![
        Case::new(CHAPTER, CIRCUIT, |sheet| {
            for (what, slip, expected) in [
                ("at slip 0.022", 0.022, 62.8068215673),
                ("at slip 0.5", 0.5, 174.061595842),
                ("at standstill", 1.0, 106.562104547),
                ("generating at slip -0.022", -0.022, -73.3256173768),
                ("plugging at slip 1.5", 1.5, 75.5428493112),
            ] {
                let speed = SYNCHRONOUS * (1.0 - slip);
                let series = run_well(&machine(1.0, 0.5, 1e12, speed, "", "")).series();
                let found = series.at("motor.torque", 0.0);
                sheet.relative(format!("torque {what}"), "N*m", [expected, found], 5e-12);
            }
        }),
        Case::new(CHAPTER, FLUXES, |sheet| {
            let outcome = run_well(&machine(0.6, 1e-4, 0.1, 0.0, ", transient: true", ""));
            let recorded = [301.038703, -67.350028, 269.445429, -24.176458];
            for (number, ((_, found), expected)) in
                extremes(&outcome).into_iter().zip(recorded).enumerate()
            {
                let what = format!("torque pulse {} of a start on the line", number + 1);
                sheet.absolute(what, "N*m", [expected, found], 2e-4);
            }
            let found = outcome.series().at("rotor.speed", 0.1);
            sheet.relative("speed after 0.1 s", "rad/s", [136.199068003, found], 1e-8);
        }),
        Case::new(CHAPTER, SERIES, |sheet| {
            for (ratio, coefficient) in
                [(0.0, 0.06753840264), (0.4, 0.049210131252), (0.7, 0.0307678303014)]
            {
                let law = format!(
                    "advance: {} m/s, density: 1000 kg/m3, \
                     torque_coefficient: {{ b_series: {{ blades: 4, pitch_ratio: 1.0, area_ratio: 0.7 }} }}",
                    ratio * 8.0
                );
                let series = run_well(&screw(1.0, 0.5, 1e15, 2.0 * TAU, &law)).series();
                let found = -series.at("screw.torque", 0.0) / (1000.0 * 4.0 * 1024.0);
                let what = format!("torque coefficient of B4-70 at J {ratio}");
                sheet.relative(what, "", [coefficient, found], 1e-11);
            }
        }),
        Case::new(CHAPTER, KAIMAL, |sheet| {
            // Below 1 Hz lies 0.967553589359 of the variance; a whole period of 16384 s.
            let flow =
                "{ turbulence: { mean: 12 m/s, turbulence_class: A, highest_frequency: 1 Hz } }";
            let series = run_well(&rotor(16384.0, 2.0, 1.5, 40.0, flow, "0 deg")).series();
            let wind = series.column("blades.flow");
            let rows = &wind[..wind.len() - 1];
            let mean = rows.iter().sum::<f64>() / rows.len() as f64;
            let square = rows.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / rows.len() as f64;
            // Rows each 2 s fold the fast part back: the variance of the rows scatters a little.
            let expected = 2.336 * 2.336 * 0.967553589359;
            sheet.relative("variance of a cut spectrum", "m2/s2", [expected, square], 0.02);
            sheet.absolute("its mean", "m/s", [12.0, mean], 0.02);
        }),
    ]
}
