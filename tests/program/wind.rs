//! The extreme gust and the axial rotor.
//!
//! Gust: IEC 61400-1 edition 3, extreme operating gust (formulas from memory):
//!
//! ```text
//! sigma = I (0.75 V + 5.6),  I = 0.16, 0.14, 0.12 for classes A, B, C
//! Vgust = min(1.35 (0.8 * 1.4 Vref - V), 3.3 sigma/(1 + 0.1 D/L)),  L = 0.7 z up to 60 m, else 42 m
//! V(t)  = V - 0.37 Vgust sin(3 pi t/T)(1 - cos(2 pi t/T)),  T = 10.5 s
//! ```

use super::helper::{head, near, run_well, same};
use std::f64::consts::PI;

/// A rotor too heavy to change its speed in a flow.
pub fn rotor(duration: f64, step: f64, speed: f64, radius: f64, flow: &str, pitch: &str) -> String {
    format!(
        "{}bodies:\n  hub: {{ inertia: 1e15 kg*m2, speed: {speed} rad/s }}\n\
         loads:\n  blades: {{ body: hub, law: {{ axial_rotor: {{ radius: {radius} m, density: 1.225 kg/m3, \
         flow: {flow}, pitch: {pitch} }} }} }}\n",
        head(duration, step, 1e-8),
    )
}

/// A gust that starts at 1 s.
pub fn gust(hub_wind: f64, diameter: f64, height: f64, turbine: &str, turbulence: &str) -> String {
    format!(
        "{{ extreme_gust: {{ start: 1 s, hub_wind: {hub_wind} m/s, rotor_diameter: {diameter} m, \
         hub_height: {height} m, turbine_class: {turbine}, turbulence_class: {turbulence} }} }}"
    )
}

/// Turbine class, turbulence class, wind at the hub and magnitude of the gust for D = z = 80 m.
pub const GUSTS: [(&str, &str, f64, f64); 7] = [
    ("I", "A", 12.0, 6.475392),
    ("II", "A", 10.0, 5.810112),
    ("II", "A", 12.0, 6.475392),
    ("II", "A", 14.0, 7.140672),
    ("II", "A", 25.0, 10.799712),
    ("II", "B", 12.0, 5.665968),
    ("III", "C", 12.0, 4.856544),
];

#[test]
fn extreme_gust_has_the_magnitude_of_each_class() {
    for (turbine, turbulence, wind, magnitude) in GUSTS {
        let scenario =
            rotor(13.0, 0.25, 1.5, 40.0, &gust(wind, 80.0, 80.0, turbine, turbulence), "0 deg");
        let series = run_well(&scenario).series();
        same(series.at("blades.flow", 6.25), wind + 0.74 * magnitude, 1e-12);
    }
    // The other branch, 1.35 (Ve1 - V), counts only near the extreme wind (artificial case).
    let scenario = rotor(13.0, 0.25, 1.5, 15.0, &gust(40.0, 30.0, 40.0, "III", "A"), "0 deg");
    same(run_well(&scenario).series().at("blades.flow", 6.25), 40.0 + 0.74 * 2.7, 1e-12);
}

#[test]
fn extreme_gust_has_the_shape_of_the_standard() {
    let scenario = rotor(13.0, 0.25, 1.5, 40.0, &gust(12.0, 80.0, 80.0, "II", "A"), "0 deg");
    let outcome = run_well(&scenario);
    let series = outcome.series();
    for (time, speed) in [
        (2.0, 10.517547730511),
        (3.0, 10.729140712415),
        (4.0, 13.801576566917),
        (6.0, 15.560868594782),
        (8.0, 10.2667972069),
    ] {
        same(series.at("blades.flow", 1.0 + time), speed, 1e-12);
    }
    for calm in [0.0, 0.5, 1.0, 11.5, 12.0, 13.0] {
        same(series.at("blades.flow", calm), 12.0, 1e-12);
    }
    // Extremes of the continuous signal: dip 0.268059829143 Vgust at T acos(sqrt 0.55)/pi.
    same(outcome.channel("blades.flow", "min"), 10.264207526848, 1e-9);
    same(outcome.channel("blades.flow", "max"), 16.79179008, 1e-9);
    near(outcome.channel("blades.flow", "max_time"), 1.0 + 5.25, 1e-4);
    let dip = outcome.channel("blades.flow", "min_time") - 1.0;
    let dip = dip.min(10.5 - dip);
    near(dip, 2.4576075277464, 1e-4);
}

/// Slootweg, Polinder and Kling, IEEE Trans. Power Systems 18(1) (2003) 144 (coefficients read
/// in a published code that cites it), worked out independently: tip speed ratio, pitch in
/// degrees, power coefficient.
pub const COEFFICIENTS: [(f64, f64, f64); 5] = [
    (6.907744908695644, 0.0, 0.4411993813370081),
    (8.0, 0.0, 0.40388290806087),
    (6.0, 5.0, 0.30442211986914),
    (4.0, 0.0, 0.18685480764346),
    (10.0, 10.0, -0.43198069042885),
];

#[test]
fn rotor_delivers_the_published_power_coefficient() {
    for (ratio, pitch, coefficient) in COEFFICIENTS {
        // Radius 10 m in 10 m/s: the tip speed ratio is the speed in rad/s.
        let scenario = rotor(1.0, 0.5, ratio, 10.0, "10 m/s", &format!("{pitch} deg"));
        let series = run_well(&scenario).series();
        same(series.at("blades.tip_speed_ratio", 0.0), ratio, 1e-12);
        same(series.at("blades.power_coefficient", 0.0), coefficient, 1e-12);
        // Torque = density pi R^3 V^2 Cp/(2 lambda), power = torque * speed.
        let power = 0.5 * 1.225 * PI * 100.0 * 1000.0 * coefficient;
        same(series.at("blades.torque", 0.0), power / ratio, 1e-12);
        same(series.at("blades.power", 0.0), power, 1e-12);
    }
}

#[test]
fn rotor_without_flow_gives_nothing() {
    for flow in ["0 m/s", "-3 m/s"] {
        let outcome = run_well(&rotor(1.0, 0.5, 2.0, 10.0, flow, "0 deg"));
        let series = outcome.series();
        for channel in ["blades.torque", "blades.tip_speed_ratio", "blades.power_coefficient"] {
            assert!(series.column(channel).iter().all(|value| value.abs() < 1e-300), "{channel}");
        }
        assert!(!outcome.at(&["warnings"]).as_array().unwrap().is_empty(), "no warning");
    }
}

#[test]
fn optimal_power_generator_takes_the_square_of_the_speed() {
    // k = density pi R^5 Cp/(2 lambda^3) holds the rotor at its best tip speed ratio: steady at
    // lambda 6.9077449087 in any wind (closed form).
    let (ratio, coefficient) = (6.907744908695644_f64, 0.4411993813370081);
    let k = 0.5 * 1.225 * PI * 10.0_f64.powi(5) * coefficient / ratio.powi(3);
    let scenario = format!(
        "{}start: steady\nbodies:\n  hub: {{ inertia: 5000 kg*m2, speed: 5 rad/s }}\n\
         motors:\n  generator: {{ body: hub, law: {{ optimal_power: {{ coefficient: {k} N*m*s2/rad2, torque_limit: 100 kN*m }} }} }}\n\
         loads:\n  blades: {{ body: hub, law: {{ axial_rotor: {{ radius: 10 m, density: 1.225 kg/m3, flow: 8 m/s, pitch: 0 deg }} }} }}\n",
        head(1.0, 0.5, 1e-10),
    );
    let series = run_well(&scenario).series();
    for time in [0.0, 1.0] {
        same(series.at("blades.tip_speed_ratio", time), ratio, 1e-7);
        same(series.at("blades.power_coefficient", time), coefficient, 1e-9);
        same(series.at("generator.torque", time), -k * (0.8 * ratio).powi(2), 1e-7);
    }
}

/// The rotor of 10 m in 10 m/s with a power coefficient of its own: tip speed ratio is rad/s.
fn shaped(ratio: f64, pitch: &str, coefficient: &str) -> f64 {
    let scenario = rotor(1.0, 0.5, ratio, 10.0, "10 m/s", pitch)
        .replace("pitch:", &format!("power_coefficient: {{ {coefficient} }}, pitch:"));
    let series = run_well(&scenario).series();
    let found = series.at("blades.power_coefficient", 0.0);
    // Torque = density pi R^3 V^2 Cp/(2 lambda).
    same(series.at("blades.torque", 0.0), 0.5 * 1.225 * PI * 1e5 * found / ratio, 1e-12);
    found
}

#[test]
fn power_coefficients_can_be_given_by_constant_points_table_and_formula() {
    same(shaped(7.0, "3 deg", "constant: 0.42"), 0.42, 1e-12);
    let points = "points: [[2, 0.1], [6, 0.44], [10, 0.2]]";
    for (ratio, expected) in
        [(1.0, 0.05), (2.0, 0.1), (4.0, 0.27), (6.0, 0.44), (9.0, 0.26), (10.0, 0.2), (14.0, 0.2)]
    {
        same(shaped(ratio, "3 deg", points), expected, 1e-12);
    }
    let table = "table: { pitch: [0 deg, 5 deg, 10 deg], \
                 rows: [[2, 0.1, 0.08, 0.02], [6, 0.44, 0.3, 0.1], [10, 0.2, 0.0, -0.2]] }";
    for (ratio, pitch, expected) in [
        (6.0, "0 deg", 0.44),
        (6.0, "5 deg", 0.3),
        (8.0, "5 deg", 0.15),
        (4.0, "10 deg", 0.06),
        (8.0, "20 deg", -0.05),
    ] {
        same(shaped(ratio, pitch, table), expected, 1e-11);
    }
    // Heier's set of constants, worked out apart: best point 0.410963103521 at 7.95402599099.
    let heier =
        "exponential: { c1: 0.5, c2: 116, c3: 0.4, c4: 0, c6: 5, c7: 21, c8: 0.08, c9: 0.035 }";
    same(shaped(7.95402599099, "0 deg", heier), 0.410963103521, 1e-11);
    same(shaped(6.0, "5 deg", heier), 0.209659686901, 1e-10);
    // Without a word of it the constants are those of the built-in formula.
    same(shaped(8.0, "0 deg", "exponential: {}"), 0.403882908061, 1e-11);
}

#[test]
fn a_rotor_that_runs_through_its_points_stops_at_each_of_them() {
    // The tip speed ratio passes all five points and several of them again as the wind swings; a
    // run at a thousandth of the tolerance must agree however the corners fall between steps.
    let run = |tolerance: &str| {
        let scenario = format!(
            "lodeshaft: 1\nduration: 20 s\noutput_step: 0.5 s\nsolver: {{ tolerance: {tolerance} }}\n\
             bodies:\n  hub: {{ inertia: 300 kg*m2, speed: 0.5 rad/s }}\n\
             loads:\n  blades: {{ body: hub, law: {{ axial_rotor: {{ radius: 4 m, density: 1.225 kg/m3, flow: {{ sine: {{ mean: 8 m/s, amplitude: 3 m/s, frequency: 0.2 Hz }} }}, \
             power_coefficient: {{ points: [[1, 0.05], [3, 0.3], [5, 0.45], [7, 0.4], [9, 0]] }} }} }} }}\n"
        );
        run_well(&scenario)
    };
    let (coarse, fine) = (run("1e-7"), run("1e-10"));
    for (one, other) in
        coarse.series().column("hub.speed").into_iter().zip(fine.series().column("hub.speed"))
    {
        near(one, other, 5e-5);
    }
    assert!(fine.number(&["energy", "residual_share"]) < 1e-8);
    assert!(fine.number(&["solver", "events"]) > 8.0, "corners are located");
}

/// Speeds in rpm at which the generator of the 5-MW reference turbine is read.
pub const TURNS: [f64; 7] = [600.0, 770.5, 1000.0, 1136.498, 1161.963, 1250.0, 1400.0];

/// The generator of the 5-MW reference turbine on bodies too heavy to change their speed.
pub fn reference_generator(coefficient: f64) -> String {
    let mut bodies = String::new();
    let mut motors = String::new();
    for (place, turns) in TURNS.into_iter().enumerate() {
        bodies += &format!("  shaft_{place}: {{ inertia: 1e15 kg*m2, speed: {turns} rpm }}\n");
        motors += &format!(
            "  generator_{place}: {{ body: shaft_{place}, law: {{ optimal_power: {{ coefficient: {coefficient} N*m/rpm2, \
             cut_in: {{ from: 670 rpm, to: 871 rpm }}, rated_speed: 1161.963 rpm, rated_power: 5.2966102 MW, \
             transition_slip: 10 % }} }} }}\n"
        );
    }
    format!("{}bodies:\n{bodies}motors:\n{motors}", head(1.0, 0.5, 1e-8))
}

// NREL/TP-500-38060 (2009), section 7 (regions 1 1/2 to 3; read in data files that cite it): no torque
// up to 670 rpm, straight to the square law at 871 rpm, 0.0255764 N*m/rpm2, from 1136.498 rpm on the
// line of a slip of 10 % to 43 528.84 N*m at 1161.963 rpm, then 5.2966102 MW.
#[test]
fn the_generator_of_the_reference_turbine_has_its_regions() {
    let k = 0.0255764;
    let series = run_well(&reference_generator(k)).series();
    let power = 5.2966102e6 * 30.0 / PI;
    for (place, torque, within) in [
        (0, 0.0, 1e-12),
        (1, 0.5 * k * 871.0 * 871.0, 1e-10),
        (2, k * 1e6, 1e-10),
        (3, 33035.2, 5e-6),
        (4, 43528.84, 1e-7),
        (5, power / 1250.0, 1e-10),
        (6, power / 1400.0, 1e-10),
    ] {
        let found = series.at(&format!("generator_{place}.torque"), 0.0);
        assert!((found + torque).abs() <= within * torque.max(1.0), "{}: {found}", TURNS[place]);
    }
}

// A rotor that is driven by a constant torque through all regions: J dw/dt = M - T(w). Independent
// integration of the regions as written in the report (SciPy 1.x, DOP853, rtol 1e-12, atol 1e-9).
#[test]
fn a_run_through_all_regions_agrees_with_an_independent_integration() {
    for (above, expected) in [("constant_power", POWER), ("constant_torque", TORQUE)] {
        let scenario = format!(
            "{}bodies:\n  shaft: {{ inertia: 5000 kg*m2, speed: 60 rad/s }}\n\
             motors:\n  generator: {{ body: shaft, law: {{ optimal_power: {{ coefficient: 0.0255764 N*m/rpm2, \
             cut_in: {{ from: 670 rpm, to: 871 rpm }}, rated_speed: 1161.963 rpm, rated_torque: 43528.84 N*m, \
             above_rated: {above} }} }} }}\n\
             loads:\n  wind: {{ body: shaft, law: {{ prescribed: {{ torque: 50 kN*m }} }} }}\n",
            head(20.0, 5.0, 1e-11),
        );
        let series = run_well(&scenario).series();
        for (time, speed) in [5.0, 10.0, 15.0, 20.0].into_iter().zip(expected) {
            same(series.at("shaft.speed", time), speed, 1e-9);
        }
    }
}

/// Speeds after 5, 10, 15 and 20 s, rad/s.
const POWER: [f64; 4] =
    [98.83873905614276, 120.13397642565435, 127.91688237451619, 137.9829903620129];
/// Speeds after 5, 10, 15 and 20 s, rad/s.
const TORQUE: [f64; 4] =
    [98.83873905614276, 120.13397642565435, 127.06150326427453, 133.53266326427453];
