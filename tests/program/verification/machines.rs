//! Machines by their circuits and coefficients: induction motor, propeller, other wind rotors.

use super::sheet::Case;
use crate::helper::run_well;
use crate::loads::screw;
use crate::motors::torque;
use crate::wind::rotor;
use std::f64::consts::TAU;

const CHAPTER: &str = "Machines by circuit and coefficient";
const CHAPMAN: &str =
    "Chapman, example 7-5 (data read in a public exercise), exact circuit evaluated apart";
const BOOK: &str = "Chapman, example 7-5, printed answers (from memory)";
const B_SERIES: &str = "Oosterveld and van Oossanen 1975 (table read second-hand), evaluated apart";

/// Formula of a power coefficient: name, source, words, values by tip speed ratio and pitch.
type Formula = (&'static str, &'static str, &'static str, [(f64, f64, f64); 3]);

const FORMULAS: [Formula; 3] = [
    (
        "0.5176 and 21",
        "formula with coefficients read in published code",
        "c1: 0.5176, c2: 116, c3: 0.4, c4: 0, c6: 5, c7: 21, c8: 0.08, c9: 0.035, c10: 0.0068",
        [(8.0, 0.0, 0.4797795393), (6.0, 5.0, 0.25783970788), (4.0, 0.0, 0.140148335672)],
    ),
    (
        "0.5 and 21",
        "Heier's formula (from memory)",
        "c1: 0.5, c2: 116, c3: 0.4, c4: 0, c6: 5, c7: 21, c8: 0.08, c9: 0.035",
        [(8.0, 0.0, 0.410915320035), (6.0, 5.0, 0.209659686901), (4.0, 0.0, 0.109107743115)],
    ),
    (
        "0.22 and 12.5",
        "formula with coefficients read in published code",
        "c1: 0.22, c2: 116, c3: 0.4, c4: 0, c6: 5, c7: 12.5, c8: 0.08, c9: 0.035",
        [(8.0, 0.0, 0.388544072934), (6.0, 5.0, 0.34732780412), (4.0, 0.0, 0.298525486437)],
    ),
];

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    let mut cases = vec![
        Case::new(CHAPTER, CHAPMAN, |sheet| {
            for (slip, expected, what) in [
                (0.022, 62.8068215673, "motoring"),
                (0.05, 125.557029231, "motoring"),
                (0.201411534502, 230.80171322, "breakdown"),
                (0.5, 174.061595842, "starting up"),
                (1.0, 106.562104547, "standstill"),
                (-0.022, -73.3256173768, "generating"),
                (1.5, 75.5428493112, "plugging"),
            ] {
                let what = format!("induction machine at slip {slip}, {what}");
                sheet.relative(what, "N*m", [expected, torque(slip, "")], 1e-11);
            }
            let found = torque(1.0, ", voltage: 80 %");
            sheet.relative("its start at 80 % voltage", "N*m", [68.1997469101, found], 1e-11);
        }),
        Case::new(CHAPTER, BOOK, |sheet| {
            for (slip, printed) in [(1.0, 104.0), (0.198, 229.0)] {
                let what = format!("the book's rounded circuit at slip {slip}");
                sheet.relative(what, "N*m", [printed, torque(slip, "")], 0.03);
            }
        }),
        Case::new(CHAPTER, B_SERIES, |sheet| {
            for (ratio, expected) in [
                (0.0, 0.06753840264),
                (0.4, 0.049210131252),
                (0.7, 0.0307678303014),
                (1.0, 0.009692083648),
            ] {
                let law = format!(
                    "advance: {} m/s, density: 1000 kg/m3, \
                     torque_coefficient: {{ b_series: {{ blades: 4, pitch_ratio: 1.0, area_ratio: 0.7 }} }}",
                    ratio * 8.0
                );
                let series = run_well(&screw(1.0, 0.5, 1e15, 2.0 * TAU, &law)).series();
                let found = -series.at("screw.torque", 0.0) / (1000.0 * 4.0 * 1024.0);
                let what = format!("propeller B4-70, pitch ratio 1, at J {ratio}");
                sheet.relative(what, "", [expected, found], 1e-10);
            }
        }),
        Case::new(CHAPTER, "definition, KQ density n^2 D^5", |sheet| {
            let law = "torque_coefficient: { constant: 0.03 }";
            let series = run_well(&screw(1.0, 0.5, 1e15, 2.0 * TAU, law)).series();
            let found = -series.at("screw.power", 0.0);
            sheet.relative("power of a propeller", "W", [1582759.51162, found], 1e-10);
        }),
    ];
    for (name, source, words, values) in FORMULAS {
        cases.push(Case::new(CHAPTER, source, move |sheet| {
            for (ratio, degrees, expected) in values {
                let pitch =
                    format!("{degrees} deg, power_coefficient: {{ exponential: {{ {words} }} }}");
                let scenario = rotor(1.0, 0.5, ratio, 10.0, "10 m/s", &pitch);
                let found = run_well(&scenario).series().at("blades.power_coefficient", 0.0);
                let what = format!("power coefficient of {name} at {ratio}, pitch {degrees} deg");
                sheet.relative(what, "", [expected, found], 1e-9);
            }
        }));
    }
    cases
}
