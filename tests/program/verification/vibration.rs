//! Natural frequencies and shapes through the study of modes.

use super::sheet::Case;
use super::study;
use crate::gears::benchmark;
use std::f64::consts::TAU;

const CHAPTER: &str = "Torsional vibration";

/// Natural frequencies of a train in Hz, and its answer.
fn modes(train: &str) -> (Vec<f64>, serde_json::Value) {
    let answer = study(train, "{ modes: {} }");
    let modes = answer["modes"].as_array().unwrap();
    (modes.iter().map(|mode| mode["frequency_hz"].as_f64().unwrap()).collect(), answer)
}

/// A gear of 5 kN*m that carries a share of it.
fn loaded_gear(share: f64) -> String {
    format!(
        "start: steady\nbodies: {{ fast: {{ inertia: 0.05 }}, slow: {{ inertia: 20 }} }}\n\
         magnetic_gears:\n  gear: {{ inner: fast, modulator: ground, outer: slow, pole_pairs: {{ inner: 4, outer: 22 }}, pull_out: {{ at: outer, torque: 5000 }} }}\n\
         motors: {{ drive: {{ body: fast, law: {{ prescribed: {{ torque: {} }} }} }} }}\n\
         loads: {{ work: {{ body: slow, law: {{ prescribed: {{ torque: {} }} }} }} }}",
        share * 5000.0 * 4.0 / 22.0,
        share * 5000.0,
    )
}

/// The cases of this chapter.
pub fn cases() -> Vec<Case> {
    vec![
        Case::new(CHAPTER, "closed form, two discs and their damping", |sheet| {
            let (found, answer) = modes(
                "bodies: { a: { inertia: 10 }, b: { inertia: 40 } }\nshafts: { s: { between: [a, b], stiffness: 2e5, damping: 120 } }",
            );
            sheet.relative("two discs", "Hz", [25.1646060522, found[0]], 1e-10);
            let mode = &answer["modes"][0];
            let ratio = mode["damping_ratio"].as_f64().unwrap();
            sheet.relative("their damping ratio", "", [0.0474341649025, ratio], 1e-9);
            let damped = mode["damped_hz"].as_f64().unwrap();
            sheet.relative("damped", "Hz", [157.935904721 / TAU, damped], 1e-10);
        }),
        Case::new(CHAPTER, "Thomson, Holzer example (from memory), closed form", |sheet| {
            let (found, answer) = modes(
                "bodies: { a: { inertia: 5 }, b: { inertia: 11 }, c: { inertia: 22 } }\n\
                 shafts: { one: { between: [a, b], stiffness: 1e5 }, two: { between: [b, c], stiffness: 2e5 } }",
            );
            for (place, expected) in [123.665800083, 202.65834859].into_iter().enumerate() {
                let what = format!("three discs, mode {}", place + 1);
                sheet.relative(what, "rad/s", [expected, TAU * found[place]], 1e-10);
            }
            let shape = answer["modes"][0]["shape"]["c"].as_f64().unwrap();
            sheet.relative("shape at the third disc", "", [-0.344941974517, shape], 1e-10);
        }),
        Case::new(CHAPTER, "textbook problem with answer 171 Hz (read second-hand)", |sheet| {
            let shaft = |length: f64| {
                format!("{{ diameter: 70 mm, length: {length} m, shear_modulus: 84 GPa }}")
            };
            let train = |a: f64, b: f64, c: f64| {
                format!(
                    "bodies: {{ a: {{ inertia: {a} }}, b: {{ inertia: {b} }}, c: {{ inertia: {c} }} }}\n\
                     shafts:\n  one: {{ between: [a, b], stiffness: {} }}\n  two: {{ between: [b, c], stiffness: {} }}",
                    shaft(1.5),
                    shaft(1.0),
                )
            };
            let (found, _) = modes(&train(0.15, 0.3, 0.09));
            sheet.absolute("three discs on a solid shaft", "Hz", [171.0, found[0]], 0.5);
            sheet.relative("the same to more digits", "Hz", [170.687712766, found[0]], 1e-10);
            let (found, _) = modes(&train(0.3, 0.6, 0.18));
            sheet.relative("twice the inertias", "Hz", [120.694439162, found[0]], 1e-10);
            sheet.relative("their second mode", "Hz", [195.892624988, found[1]], 1e-10);
        }),
        Case::new(CHAPTER, "closed form, 2 sqrt(k/J) sin(r pi/2N)", |sheet| {
            let names = ["a", "b", "c", "d", "e", "f"];
            let bodies: Vec<String> =
                names.iter().map(|name| format!("{name}: {{ inertia: 2 }}")).collect();
            let shafts: Vec<String> = names
                .windows(2)
                .map(|two| {
                    format!("{0}{1}: {{ between: [{0}, {1}], stiffness: 1e4 }}", two[0], two[1])
                })
                .collect();
            let (found, _) = modes(&format!(
                "bodies: {{ {} }}\nshafts: {{ {} }}",
                bodies.join(", "),
                shafts.join(", ")
            ));
            for (place, expected) in
                [36.6025403784, 70.7106781187, 100.0, 122.474487139, 136.602540378]
                    .into_iter()
                    .enumerate()
            {
                let what = format!("six equal discs, mode {}", place + 1);
                sheet.relative(what, "rad/s", [expected, TAU * found[place]], 1e-10);
            }
        }),
        Case::new(CHAPTER, "referred through a gear, in its own coordinates", |sheet| {
            // The second shaft turns three times as fast: its inertia and stiffness count ninefold.
            let (found, _) = modes(
                "bodies: { a: { inertia: 2 }, wheel: { inertia: 0.3 }, pinion: { inertia: 0.02 }, b: { inertia: 0.5 } }\n\
                 shafts: { one: { between: [a, wheel], stiffness: 5e4 }, two: { between: [pinion, b], stiffness: 2e4 } }\n\
                 gear_pairs: { pair: { between: [pinion, wheel], ratio: 3 } }",
            );
            for (place, expected) in [167.876093959, 718.32046034].into_iter().enumerate() {
                let what = format!("geared train, mode {}", place + 1);
                sheet.relative(what, "rad/s", [expected, TAU * found[place]], 1e-10);
            }
        }),
        Case::new(CHAPTER, "NREL/TP-500-38060 (2009), figures by closed form", |sheet| {
            let (found, answer) = modes(
                "bodies: { rotor: { inertia: 38759227.5 }, generator: { inertia: 534.116 }, wheel: { inertia: 0 } }\n\
                 shafts: { low: { between: [rotor, wheel], stiffness: 867637000, damping: 6215000 } }\n\
                 gear_pairs: { box: { between: [generator, wheel], ratio: 97 } }",
            );
            sheet.relative("5 MW reference turbine", "Hz", [2.22266183161, found[0]], 1e-9);
            let ratio = answer["modes"][0]["damping_ratio"].as_f64().unwrap();
            sheet.relative("its damping ratio", "", [0.0500180012805, ratio], 1e-9);
        }),
        Case::new(CHAPTER, "closed form, magnetic spring under load", |sheet| {
            for (share, expected) in [(0.0, 44.514266999), (0.5, 41.4251931687)] {
                let (found, _) = modes(&loaded_gear(share));
                let what = format!("magnetic gear at {share} of its pull-out");
                sheet.relative(what, "Hz", [expected, found[0]], 1e-9);
            }
        }),
        Case::new(CHAPTER, "closed form, sqrt(K/J_e)/2 pi", |sheet| {
            for (inner, outer, modulator, expected, what) in [
                ("inner", "outer", "ground", 18.047203393507875, "modulator held"),
                ("inner", "outer", "modulator", 21.94009417637153, "all three free"),
                ("ground", "outer", "ground", 13.353849003583742, "only the outer free"),
                ("inner", "ground", "ground", 12.139862730530673, "only the inner free"),
            ] {
                let scenario = benchmark(inner, outer, modulator, "");
                let (_, train) = scenario.split_once("bodies:").unwrap();
                let (found, _) = modes(&format!("bodies:{train}"));
                let what = format!("gear of 4 and 22 pole pairs, {what}");
                sheet.relative(what, "Hz", [expected, found[0]], 1e-9);
            }
        }),
    ]
}
