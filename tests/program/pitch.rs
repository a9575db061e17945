//! The pitch loop of an axial rotor against independent integrations and closed forms.

use super::helper::{head, near, run, run_well, same};

/// A turbine on a magnetic gear of ratio -10: rotor of 40 m, generator with a rated region, and a
/// pitch loop on the generator's speed, which is negative.
fn turbine(duration: f64, wind: &str, rate: f64) -> String {
    format!(
        "{}start: steady\nbodies:\n  rotor: {{ inertia: 6e6 kg*m2, speed: 1.7 rad/s }}\n  shaft: {{ inertia: 2e4 kg*m2 }}\n\
         magnetic_gears:\n  gear: {{ inner: shaft, modulator: ground, outer: rotor, pole_pairs: {{ inner: 3, outer: 30 }}, \
         pull_out: {{ at: outer, torque: 2.6 MN*m }}, damping: {{ at: outer, coefficient: 4 MN*m*s/rad }} }}\n\
         motors:\n  generator: {{ body: shaft, reversed: true, law: {{ optimal_power: {{ coefficient: 263.7 N*m*s2/rad2, \
         rated_speed: 17.8 rad/s, rated_power: 2 MW }} }} }}\n\
         loads:\n  blades: {{ body: rotor, law: {{ axial_rotor: {{ radius: 40 m, density: 1.225 kg/m3, flow: {wind}, pitch_loop: {{ \
         body: shaft, speed: -18 rad/s, gain: 0.3 s, integral_time: 2.7 s, highest_angle: 80 deg, lag: 0.2 s, rate: {rate} deg/s, \
         gain_halves_at: 12 deg }} }} }} }}\n",
        head(duration, 1.0, 1e-10),
    )
}

fn compare(scenario: &str, expected: &[[f64; 4]]) {
    let series = run_well(scenario).series();
    for [time, speed, pitch, phase] in expected {
        near(series.at("rotor.speed", *time), *speed, 1e-6);
        near(series.at("blades.pitch", *time), *pitch, 1e-6);
        near(series.at("gear.load_angle", *time), *phase, 1e-6);
    }
}

/// Time in s, speed of the rotor in rad/s, pitch and load angle in rad.
const OPERATING_GUST: [[f64; 4]; 9] = [
    [2.0, 1.798380744428, 0.120000056160, 0.437963425409],
    [4.0, 1.775879987071, 0.036298247918, 0.431735512524],
    [6.0, 1.841086913433, 0.162394752521, 0.448685533164],
    [8.0, 1.842229411657, 0.227305566735, 0.397386120444],
    [10.0, 1.766265628042, 0.077230195165, 0.403285109369],
    [12.0, 1.793645313360, 0.100607881101, 0.451902342270],
    [15.0, 1.802927601703, 0.121926932978, 0.440927517817],
    [20.0, 1.799992163850, 0.121879156402, 0.441330760690],
    [30.0, 1.800012356899, 0.121283785135, 0.441553198210],
];

/// The same.
const COHERENT_GUST: [[f64; 4]; 9] = [
    [4.0, 1.578092277124, 0.000000000000, 0.279508853425],
    [6.0, 1.708349896310, 0.000000000000, 0.375012903588],
    [8.0, 1.892733736879, 0.051470091611, 0.504556743398],
    [10.0, 2.058311719456, 0.156189846730, 0.446438035333],
    [12.0, 2.178945520640, 0.260909601850, 0.401298345614],
    [15.0, 2.252161093377, 0.417989234530, 0.346724753395],
    [20.0, 1.987796700652, 0.679788622329, 0.314802219442],
    [30.0, 1.201647113851, 0.803824594271, 0.110557967428],
    [40.0, 0.860781457385, 0.280225818673, 0.056590930078],
];

// The equations of rotor, generator, gear and loop written down apart and integrated with SciPy
// (DOP853, rtol and atol 1e-11, steps up to 5 ms; the wind by IEC 61400-1, class II A, Cp by Slootweg).
#[test]
fn a_turbine_rides_through_the_operating_gust() {
    let gust = "{ extreme_gust: { start: 1 s, hub_wind: 14 m/s, rotor_diameter: 80 m, hub_height: 80 m, \
                turbine_class: II, turbulence_class: A } }";
    compare(&turbine(30.0, gust, 8.0), &OPERATING_GUST);
}

// The same way: from below rated, where the integral stands at fine pitch, to 24 m/s with blades so
// slow that their rate limit acts for most of the run.
#[test]
fn slow_blades_and_an_integral_at_its_end_agree_too() {
    let gust = "{ extreme_coherent_gust: { start: 2 s, hub_wind: 9 m/s } }";
    compare(&turbine(40.0, gust, 3.0), &COHERENT_GUST);
}

// Steady start above rated wind: the pitch at which 1/2 rho pi R^3 v^2 Cp/lambda carries the rated
// power at the speed asked for, 6.948309668440534 deg (SciPy, brentq).
#[test]
fn a_steady_start_finds_the_pitch() {
    let series = run_well(&turbine(5.0, "14 m/s", 8.0)).series();
    for time in [0.0, 5.0] {
        same(series.at("blades.pitch", time).to_degrees(), 6.948309668440534, 1e-8);
        same(series.at("rotor.speed", time), 1.8, 1e-9);
        same(series.at("generator.power", time), -2e6, 1e-9);
    }
}

// With a torque that falls in proportion to the pitch, T = T0 - a b, and a rotor at its speed, the
// loop without schedule is linear: J e' = -a b, lag b' = (g e + I) - b, I' = g e/Ti. Its roots are
// those of lag J Ti s^3 + J Ti s^2 + a g Ti s + a g = 0; the study of modes must find them.
#[test]
fn the_linearised_loop_has_the_roots_of_its_polynomial() {
    use super::helper::{Folder, call};
    // Cp over lambda and pitch by rows: straight over lambda through the origin, so that the torque
    // does not follow the speed, and straight over the pitch between inner columns.
    let table = "table: { pitch: [0 deg, 5 deg, 10 deg, 15 deg], rows: [[4, 0.4, 0.3, 0.2, 0.1], [8, 0.8, 0.6, 0.4, 0.2]] }";
    let scenario = format!(
        "{}start: steady\nbodies:\n  rotor: {{ inertia: 1000 kg*m2, speed: 6 rad/s }}\n\
         motors:\n  brake: {{ body: rotor, law: {{ prescribed: {{ torque: -12000 N*m }} }} }}\n\
         loads:\n  blades: {{ body: rotor, law: {{ axial_rotor: {{ radius: 10 m, density: 1.225 kg/m3, flow: 10 m/s, \
         power_coefficient: {{ {table} }}, pitch_loop: {{ speed: 6 rad/s, gain: 0.2 s, integral_time: 2 s, lag: 0.1 s }} }} }} }}\n\
         studies:\n  swing: {{ modes: {{ point: steady }} }}\n",
        head(1.0, 0.5, 1e-9),
    );
    let folder = Folder::new();
    folder.write("case.yaml", &scenario);
    let arguments = ["study", "case.yaml", "--out", "out", "--format", "json", "--quiet"];
    let outcome = call(folder, &arguments, "");
    assert_eq!(outcome.status, Some(0), "{}", outcome.stderr);
    // dT/db = -1/2 rho pi R^3 v^2 * 0.025 per 5 deg, by which Cp/lambda falls.
    let slope = 0.5 * 1.225 * std::f64::consts::PI * 1e5 * 0.025 / 5.0_f64.to_radians();
    let (inertia, gain, time, lag) = (1000.0, 0.2, 2.0, 0.1);
    let cubic = |re: f64, im: f64| {
        let square = (re * re - im * im, 2.0 * re * im);
        let cube = (re * square.0 - im * square.1, re * square.1 + im * square.0);
        let real = lag * inertia * time * cube.0
            + inertia * time * square.0
            + slope * gain * time * re
            + slope * gain;
        let imaginary =
            lag * inertia * time * cube.1 + inertia * time * square.1 + slope * gain * time * im;
        real.hypot(imaginary) / (slope * gain)
    };
    let modes = outcome.at(&["studies", "swing", "modes"]);
    let mode = &modes.as_array().unwrap()[0];
    let size = std::f64::consts::TAU * mode["frequency_hz"].as_f64().unwrap();
    let damping = mode["damping_ratio"].as_f64().unwrap();
    let residual = cubic(-damping * size, size * (1.0 - damping * damping).sqrt());
    assert!(residual < 1e-8, "{residual}");
}

// Constant power takes the damping P/w^2 = 2 MW/(18 rad/s)^2 = 6.17 kN*m*s/rad away at the generator;
// the gear's damper gives (3/30)^2 of its own back there, less what the pitch loop's lag takes. The
// growth is that of the eigenvalue 0.02733266 + 6.65293 i 1/s of the equations written down apart
// (numpy, central differences); with 0.9 MN*m*s/rad it is negative.
#[test]
fn constant_power_needs_a_damper_that_outweighs_it() {
    let with = |damping: &str| turbine(5.0, "14 m/s", 8.0).replace("4 MN*m*s/rad", damping);
    let weak = run(&with("0.75 MN*m*s/rad"));
    assert_eq!(weak.status, Some(2));
    assert!(weak.stderr.contains("unstable: a deviation grows at 0.02733"), "{}", weak.stderr);
    run_well(&with("0.9 MN*m*s/rad"));
}
