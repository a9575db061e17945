//! Induction machines by their fluxes, turbulence.

use super::sheet::Case;
use crate::helper::run_well;
use crate::motors::{extremes, machine};
use crate::wind::rotor;

const CHAPTER: &str = "Machines by fluxes, turbulence";
const FLUXES: &str = "flux linkages in a frame at rest, integrated with SciPy at 1e-12";
const KAIMAL: &str = "Kaimal's spectrum of IEC 61400-1 (from memory), closed form";

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    vec![
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
