//! The standard gust, the axial rotor and the 5 MW reference train.

use super::sheet::Case;
use crate::helper::{head, run_well};
use crate::wind::{COEFFICIENTS, GUSTS, gust, rotor};
use std::f64::consts::PI;

const CHAPTER: &str = "Wind";
const GUST: &str = "IEC 61400-1 edition 3, extreme operating gust (formulas from memory)";
const SLOOTWEG: &str = "Slootweg, Polinder and Kling 2003 (coefficients read in published code)";
const REGIONS: &str =
    "NREL/TP-500-38060 (2009), torques of the generator read in data files that cite it";
const TURBINE: &str = "NREL/TP-500-38060 (2009), figures by closed form";

const KAIMAL: &str = "IEC 61400-1, normal turbulence and Kaimal's spectrum, closed form of its integral (from memory)";

/// Turbulence class, highest frequency in Hz, deviation at 12 m/s (Iref (0.75 V + 5.6)) and the
/// share of the variance below that frequency, 1 - (1 + 6 f L/V)^(-2/3) with L = 340.2 m.
const TURBULENT: [(&str, f64, f64, f64); 2] =
    [("A", 1.0, 2.336, 0.967_553_589_359), ("B", 0.1, 2.044, 0.854_457_155_645)];

/// Samples of one period of a wind, four to the shortest wave.
const SAMPLES: usize = 65_536;

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    let mut cases = Vec::new();
    for (turbine, turbulence, wind, magnitude) in GUSTS {
        cases.push(Case::new(CHAPTER, GUST, move |sheet| {
            let flow = gust(wind, 80.0, 80.0, turbine, turbulence);
            let series = run_well(&rotor(13.0, 0.25, 1.5, 40.0, &flow, "0 deg")).series();
            let found = (series.at("blades.flow", 6.25) - wind) / 0.74;
            let what = format!("gust of class {turbine} {turbulence} at {wind} m/s");
            sheet.relative(what, "m/s", [magnitude, found], 1e-12);
        }));
    }
    cases.push(Case::new(CHAPTER, GUST, |sheet| {
        let flow = gust(12.0, 80.0, 80.0, "II", "A");
        let outcome = run_well(&rotor(13.0, 0.25, 1.5, 40.0, &flow, "0 deg"));
        let series = outcome.series();
        for (time, speed) in [(2.0, 10.517547730511), (4.0, 13.801576566917), (8.0, 10.2667972069)]
        {
            let what = format!("gust of class II A at 12 m/s after {time} s");
            sheet.relative(what, "m/s", [speed, series.at("blades.flow", 1.0 + time)], 1e-12);
        }
        let found = outcome.channel("blades.flow", "min");
        sheet.relative("its dip", "m/s", [10.264207526848, found], 1e-9);
        let found = outcome.channel("blades.flow", "max");
        sheet.relative("its peak", "m/s", [16.79179008, found], 1e-9);
    }));
    for (class, highest, deviation, share) in TURBULENT {
        cases.push(Case::new(CHAPTER, KAIMAL, move |sheet| {
            // One period of the wind, sampled evenly: its variance is that of its lines.
            let flow = format!(
                "{{ turbulence: {{ mean: 12 m/s, turbulence_class: {class}, length_scale: 340.2 m, highest_frequency: {highest} Hz, seed: 3 }} }}"
            );
            let step = 0.25 / highest;
            let scenario = rotor(SAMPLES as f64 * step, step, 1.5, 40.0, &flow, "0 deg");
            let column = run_well(&scenario).series().column("blades.flow");
            let squares = column[..SAMPLES].iter().map(|flow| (flow - 12.0).powi(2));
            let found = (squares.sum::<f64>() / SAMPLES as f64).sqrt();
            let what = format!("deviation of the wind below {highest} Hz, class {class}");
            sheet.relative(what, "m/s", [deviation * share.sqrt(), found], 1e-9);
        }));
    }
    for (ratio, pitch, coefficient) in COEFFICIENTS {
        cases.push(Case::new(CHAPTER, SLOOTWEG, move |sheet| {
            let scenario = rotor(1.0, 0.5, ratio, 10.0, "10 m/s", &format!("{pitch} deg"));
            let found = run_well(&scenario).series().at("blades.power_coefficient", 0.0);
            let what = format!("power coefficient at {ratio:.3}, pitch {pitch} deg");
            sheet.relative(what, "", [coefficient, found], 1e-12);
        }));
    }
    cases.push(Case::new(CHAPTER, "closed form, best tip speed ratio", |sheet| {
        let (ratio, coefficient) = (6.907744908695644_f64, 0.4411993813370081);
        let k = 0.5 * 1.225 * PI * 10.0_f64.powi(5) * coefficient / ratio.powi(3);
        let scenario = format!(
            "{}start: steady\nbodies:\n  hub: {{ inertia: 5000 kg*m2, speed: 5 rad/s }}\n\
             motors:\n  generator: {{ body: hub, law: {{ optimal_power: {{ coefficient: {k} N*m*s2/rad2, torque_limit: 100 kN*m }} }} }}\n\
             loads:\n  blades: {{ body: hub, law: {{ axial_rotor: {{ radius: 10 m, density: 1.225 kg/m3, flow: 8 m/s, pitch: 0 deg }} }} }}\n",
            head(1.0, 0.5, 1e-10),
        );
        let found = run_well(&scenario).series().at("blades.tip_speed_ratio", 1.0);
        sheet.relative("tip speed ratio of a generator by square law", "", [ratio, found], 1e-7);
    }));
    cases.push(Case::new(CHAPTER, TURBINE, |sheet| {
        // Loss of the grid at rated torque: the whole train speeds up.
        let scenario = format!(
            "{}bodies:\n  rotor: {{ inertia: 38759228 kg*m2, speed: 12.1 rpm }}\n  generator: {{ inertia: 534.116 kg*m2, speed: 1173.7 rpm }}\n\
             gear_pairs:\n  box: {{ between: [generator, rotor], ratio: 97 }}\n\
             loads:\n  wind: {{ body: rotor, law: {{ prescribed: {{ torque: 4180074.49639 N*m }} }} }}\n",
            head(1.0, 0.5, 1e-9),
        );
        let series = run_well(&scenario).series();
        let found = (series.at("rotor.speed", 1.0) - series.at("rotor.speed", 0.0)) * 30.0 / PI;
        sheet.relative("overspeed a second after loss of grid", "rpm", [0.911659733179, found], 1e-9);
        // Twist of the shaft at rated torque.
        let scenario = format!(
            "{}start: steady\nbodies:\n  rotor: {{ inertia: 38759227.5 kg*m2 }}\n\
             shafts:\n  low: {{ between: [rotor, ground], stiffness: 867637000 N*m/rad }}\n\
             loads:\n  wind: {{ body: rotor, law: {{ prescribed: {{ torque: 4180074.49639 N*m }} }} }}\n",
            head(1.0, 0.5, 1e-9),
        );
        let found = run_well(&scenario).series().at("low.twist", 0.0).to_degrees();
        sheet.relative("twist of its shaft at rated torque", "deg", [0.276037820763, found], 1e-9);
    }));
    cases.push(Case::new(CHAPTER, TURBINE, |sheet| {
        // Square law of the radius 62.94 m at the speed where it ends.
        let scenario = format!(
            "{}bodies:\n  shaft: {{ inertia: 1e15 kg*m2, speed: 1136.49729051 rpm }}\n\
             motors:\n  generator: {{ body: shaft, law: {{ optimal_power: {{ coefficient: 0.0255763092884 N*m/rpm2, torque_limit: 50 kN*m }} }} }}\n",
            head(1.0, 0.5, 1e-9),
        );
        let found = run_well(&scenario).series().at("generator.torque", 0.0);
        sheet.relative("its generator torque at 1136.497 rpm", "N*m", [-33035.0283973, found], 1e-10);
    }));
    cases.push(Case::new(CHAPTER, REGIONS, |sheet| {
        let series = run_well(&crate::wind::reference_generator(0.0255764)).series();
        for (place, turns, torque) in [(3, 1136.498, 33035.2), (4, 1161.963, 43528.84)] {
            let found = series.at(&format!("generator_{place}.torque"), 0.0);
            let what = format!("generator torque at {turns} rpm");
            sheet.relative(what, "N*m", [-torque, found], 5e-6);
        }
    }));
    cases
}
