//! The same train said in another way gives the same course.
//!
//! Invariance of the equations (closed form): names, order and units mean nothing, the origin of
//! time means nothing, springs side by side add up, springs one behind the other add up their
//! compliances, and what stands behind a ratio is referred by its square.

use super::energy::random_train;
use super::helper::{Outcome, Series, head, near, run_through, same};

/// Parts of a train in the order in which they are to be written.
struct Parts {
    sections: Vec<(&'static str, Vec<String>)>,
}

impl Parts {
    /// A pump train that slips, with names for motor rotor, inner rotor, outer rotor and impeller.
    fn named([motor, inner, outer, wheel]: [&str; 4]) -> Self {
        let line = |text: String| vec![text];
        Self {
            sections: vec![
                (
                    "bodies",
                    vec![
                        format!("{motor}: {{ inertia: 0.25 kg*m2 }}"),
                        format!("{inner}: {{ inertia: 0.02 kg*m2 }}"),
                        format!("{outer}: {{ inertia: 0.15 kg*m2 }}"),
                        format!("{wheel}: {{ inertia: 2.5 kg*m2 }}"),
                    ],
                ),
                (
                    "shafts",
                    vec![
                        format!(
                            "fast_shaft: {{ between: [{motor}, {inner}], stiffness: 20 kN*m/rad, damping: 2 N*m*s/rad }}"
                        ),
                        format!(
                            "slow_shaft: {{ between: [{outer}, {wheel}], stiffness: 50 kN*m/rad, damping: 5 N*m*s/rad, backlash: 0.1 deg }}"
                        ),
                    ],
                ),
                (
                    "magnetic_gears",
                    line(format!(
                        "gear: {{ inner: {inner}, modulator: ground, outer: {outer}, pole_pairs: {{ inner: 4, outer: 22 }}, \
                         pull_out: {{ at: outer, torque: 600 N*m }}, damping: {{ at: outer, coefficient: 24.2 N*m*s/rad }} }}"
                    )),
                ),
                (
                    "motors",
                    line(format!(
                        "line: {{ body: {motor}, law: {{ induction: {{ synchronous_speed: 1500 rpm, breakdown_torque: 450 N*m, breakdown_slip: 25 %, voltage: supply }} }} }}"
                    )),
                ),
                (
                    "loads",
                    vec![
                        format!(
                            "pump: {{ body: {wheel}, law: {{ power_law: {{ torque: 600 N*m, speed: 267 rpm, exponent: 2 }} }} }}"
                        ),
                        format!(
                            "gland: {{ body: {wheel}, law: {{ friction: {{ sliding: 20 N*m, breakaway: 40 N*m }} }} }}"
                        ),
                    ],
                ),
                ("signals", line("supply: { step: { at: 0.3 s, from: 0.7, to: 1 } }".to_owned())),
            ],
        }
    }

    fn text(&self) -> String {
        let mut text = head(1.0, 0.02, 1e-9);
        for (section, things) in &self.sections {
            text.push_str(&format!("{section}:\n"));
            for thing in things {
                text.push_str(&format!("  {thing}\n"));
            }
        }
        text
    }
}

const NAMES: [&str; 4] = ["motor_rotor", "inner_rotor", "outer_rotor", "impeller"];

/// Fails unless two columns agree over all rows.
#[track_caller]
fn agree(a: &[f64], b: &[f64], sign: f64, absolute: f64) {
    assert_eq!(a.len(), b.len());
    for (x, y) in a.iter().zip(b) {
        near(*x, sign * y, absolute);
    }
}

fn largest(column: &[f64]) -> f64 {
    column.iter().fold(0.0, |most: f64, value| most.max(value.abs()))
}

/// All columns but slips agree to a share of their largest value.
#[track_caller]
fn alike(a: &Series, b: &Series, share: f64) {
    for head in &a.heads {
        let name = head.split(" [").next().unwrap();
        let column = a.column(name);
        agree(&column, &b.column(name), 1.0, share * largest(&column).max(1e-6));
    }
}

#[test]
fn names_mean_nothing() {
    let plain = run_through(&Parts::named(NAMES).text());
    assert!(plain.slips("gear") > 0, "the case should slip");
    // In the other order of the alphabet.
    let renamed = run_through(&Parts::named(["z", "y", "x", "a"]).text());
    let (a, b) = (plain.series(), renamed.series());
    assert_ne!(a.heads, b.heads);
    assert_eq!(a.rows, b.rows, "to the last bit");
}

#[test]
fn order_means_nothing() {
    let plain = run_through(&Parts::named(NAMES).text());
    let mut parts = Parts::named(NAMES);
    parts.sections.reverse();
    let sections = run_through(&parts.text());
    for (_, things) in &mut parts.sections {
        things.reverse();
    }
    let all = run_through(&parts.text());
    for other in [sections, all] {
        assert_eq!(plain.slips("gear"), other.slips("gear"));
        alike(&plain.series(), &other.series(), 1e-5);
    }
}

#[test]
fn units_mean_nothing() {
    let text = Parts::named(NAMES).text();
    let mut other = text.clone();
    for (metric, same) in [
        ("0.25 kg*m2", "250 g*m2"),
        ("2.5 kg*m2", "0.0025 t*m2"),
        ("20 kN*m/rad", "20000 N*m/rad"),
        ("50 kN*m/rad", "0.05 MN*m/rad"),
        ("0.1 deg", "\"0.0017453292519943296 rad\""),
        ("600 N*m }, damping", "0.6 kN*m }, damping"),
        ("1500 rpm", "25 rev/s"),
        ("25 %", "0.25"),
        ("267 rpm", "1602 deg/s"),
        ("0.3 s", "300 ms"),
    ] {
        assert_eq!(other.matches(metric).count(), 1, "{metric}");
        other = other.replace(metric, same);
    }
    alike(&run_through(&text).series(), &run_through(&other).series(), 1e-6);
}

#[test]
fn shafts_side_by_side_add_up() {
    let text = Parts::named(NAMES).text();
    let one = "fast_shaft: { between: [motor_rotor, inner_rotor], stiffness: 20 kN*m/rad, damping: 2 N*m*s/rad }";
    let two = "fast_shaft: { between: [motor_rotor, inner_rotor], stiffness: 12 kN*m/rad, damping: 0.5 N*m*s/rad }\n  \
               beside: { between: [inner_rotor, motor_rotor], stiffness: 8 kN*m/rad, damping: 1.5 N*m*s/rad }";
    let (whole, split) = (run_through(&text), run_through(&text.replace(one, two)));
    let (a, b) = (whole.series(), split.series());
    let torque = a.column("fast_shaft.torque");
    let sum: Vec<f64> = b
        .column("fast_shaft.torque")
        .iter()
        .zip(b.column("beside.torque"))
        .map(|(forward, backward)| forward - backward)
        .collect();
    agree(&torque, &sum, 1.0, 1e-5 * largest(&torque));
    agree(&a.column("gear.phase"), &b.column("gear.phase"), 1.0, 1e-5);
}

#[test]
fn shafts_one_behind_the_other_add_their_compliances() {
    // 20 kN*m/rad as 30 and 60 with a small disc between them; what differs is in proportion to
    // the disc. The damping is left to the first.
    let text = Parts::named(NAMES).text().replace(", damping: 2 N*m*s/rad", "");
    let one = "fast_shaft: { between: [motor_rotor, inner_rotor], stiffness: 20 kN*m/rad }";
    assert!(text.contains(one));
    let split = |inertia: f64| {
        text.replace(
            one,
            "fast_shaft: { between: [motor_rotor, disc], stiffness: 30 kN*m/rad }\n  \
             behind: { between: [disc, inner_rotor], stiffness: 60 kN*m/rad }",
        )
        .replace("bodies:\n", &format!("bodies:\n  disc: {{ inertia: {inertia} kg*m2 }}\n"))
    };
    let whole = run_through(&text).series();
    let off = |inertia: f64| {
        let found = run_through(&split(inertia)).series();
        let (a, b) = (whole.column("gear.phase"), found.column("gear.phase"));
        a.iter().zip(&b).fold(0.0, |most: f64, (x, y)| most.max((x - y).abs()))
    };
    let (coarse, fine) = (off(4e-4), off(1e-4));
    assert!(fine < 0.02 && fine < 0.35 * coarse, "{coarse} {fine}");
}

/// A rotor, a shaft and a gear pair in one of two orders; the pair's inertia stands at the rotor.
fn moved(shaft_first: bool) -> String {
    let square = 9.0;
    let (rotor, middle) = if shaft_first { (0.4 + 0.9 / square, 0.0) } else { (0.4, 0.9) };
    let (shaft, pair) = if shaft_first {
        (
            format!("[rotor, middle], stiffness: {}, damping: {}", 18e3 / square, 4.5 / square),
            "[middle, wheel]",
        )
    } else {
        ("[middle, wheel], stiffness: 18e3, damping: 4.5".to_owned(), "[rotor, middle]")
    };
    format!(
        "{}bodies:\n  rotor: {{ inertia: {rotor} kg*m2 }}\n  middle: {{ inertia: {middle} kg*m2 }}\n  wheel: {{ inertia: 7 kg*m2 }}\n\
         shafts:\n  shaft: {{ between: {shaft} }}\n\
         gear_pairs:\n  pair: {{ between: {pair}, ratio: -3 }}\n\
         motors:\n  push: {{ body: rotor, law: {{ prescribed: {{ torque: {{ step: {{ at: 0.1 s, from: 0 N*m, to: 30 N*m }} }} }} }} }}\n\
         loads:\n  fan: {{ body: wheel, law: {{ power_law: {{ torque: 60 N*m, speed: 20 rad/s, exponent: 2 }} }} }}\n",
        head(1.0, 0.02, 1e-10),
    )
}

#[test]
fn a_shaft_may_be_moved_through_a_gear_pair() {
    let (before, behind) =
        (run_through(&moved(true)).series(), run_through(&moved(false)).series());
    for body in ["rotor.speed", "wheel.speed"] {
        agree(&before.column(body), &behind.column(body), 1.0, 1e-7);
    }
    // Its torque by the ratio, its twist the other way.
    let torque = before.column("shaft.torque");
    let scaled: Vec<f64> = behind.column("shaft.torque").iter().map(|t| t / -3.0).collect();
    agree(&torque, &scaled, 1.0, 1e-6 * largest(&torque));
}

#[test]
fn figures_of_a_gear_may_be_given_at_any_member() {
    // Pull-out as the counts, damping as their squares.
    let text = Parts::named(NAMES).text();
    let at_outer = run_through(&text).series();
    for (member, count) in [("inner", 4.0), ("modulator", 26.0)] {
        let factor = count / 22.0;
        let other = text
            .replace(
                "pull_out: { at: outer, torque: 600 N*m }",
                &format!("pull_out: {{ at: {member}, torque: {} N*m }}", 600.0 * factor),
            )
            .replace(
                "damping: { at: outer, coefficient: 24.2 N*m*s/rad }",
                &format!(
                    "damping: {{ at: {member}, coefficient: {} N*m*s/rad }}",
                    24.2 * factor * factor
                ),
            );
        assert_ne!(text, other);
        alike(&at_outer, &run_through(&other).series(), 1e-6);
    }
}

/// Two bodies and a coupling under torques that begin at a time; speeds and load angle at 0 s.
fn pair(begin: f64, duration: f64, start: [f64; 3], tolerance: f64) -> String {
    let [driver, load, angle] = start;
    let at = |time: f64| begin + time;
    format!(
        "{}bodies:\n  driver: {{ inertia: 0.2 kg*m2, speed: {driver} rad/s }}\n  load: {{ inertia: 0.7 kg*m2, speed: {load} rad/s }}\n\
         magnetic_couplings:\n  coupling: {{ between: [driver, load], pole_pairs: 4, pull_out: 50 N*m, damping: 1.5 N*m*s/rad, initial_load_angle: {angle} rad }}\n\
         motors:\n  push: {{ body: driver, law: {{ prescribed: {{ torque: {{ points: [[{}, 0], [{}, 70], [{}, 70], [{}, 20]] }} }} }} }}\n\
         loads:\n  fan: {{ body: load, law: {{ power_law: {{ torque: 15 N*m, speed: 60 rad/s, exponent: 2 }} }} }}\n",
        head(duration, 0.02, tolerance),
        at(0.1),
        at(0.3),
        at(0.7),
        at(0.8),
    )
}

fn shifted(outcome: &Outcome, seconds: f64) -> Vec<f64> {
    outcome.slip_times("coupling").iter().map(|time| time - seconds).collect()
}

#[test]
fn the_origin_of_time_means_nothing() {
    let now = run_through(&pair(0.0, 2.0, [0.0; 3], 1e-10));
    let later = run_through(&pair(0.5, 2.5, [0.0; 3], 1e-10));
    assert!(now.slips("coupling") > 2, "the case should slip");
    let (a, b) = (shifted(&now, 0.0), shifted(&later, 0.5));
    assert_eq!(a.len(), b.len());
    agree(&a, &b, 1.0, 1e-7);
    let (first, second) = (now.series(), later.series());
    let phase = second.column("coupling.phase");
    agree(&first.column("coupling.phase"), &phase[25..], 1.0, 1e-5);
}

#[test]
fn a_run_may_be_taken_up_at_any_row() {
    // The state of this train is its two speeds and the phase, a wells' worth apart.
    let whole = run_through(&pair(0.0, 2.0, [0.0; 3], 1e-11));
    let series = whole.series();
    for time in [0.2, 0.6, 1.2] {
        let at = |channel: &str| series.at(channel, time);
        let phase = at("coupling.phase");
        let start = [at("driver.speed"), at("load.speed"), at("coupling.load_angle")];
        let rest = run_through(&pair(-time, 2.0 - time, start, 1e-11));
        let later = rest.series();
        let wells = phase - start[2];
        for (offset, expected) in [(0.3, time + 0.3), (0.8, time + 0.8)] {
            let found = later.at("coupling.phase", offset) + wells;
            near(found, series.at("coupling.phase", expected), 1e-6);
            same(later.at("load.speed", offset), series.at("load.speed", expected), 1e-6);
        }
        let expected: Vec<f64> =
            whole.slip_times("coupling").into_iter().filter(|slip| *slip > time).collect();
        agree(&expected, &shifted(&rest, -time), 1.0, 1e-6);
    }
}

#[test]
fn random_trains_run_backwards_when_mirrored() {
    let mut slipped = 0;
    for seed in 40..52 {
        let (forward, _) = random_train(seed);
        // The motor's law reversed; the third harmonic's phase changes sign.
        let backward = forward
            .replace("drive: { body: body_0,", "drive: { body: body_0, reversed: true,")
            .replace("phase: 20 deg", "phase: -20 deg");
        assert_ne!(forward, backward);
        let (a, b) = (run_through(&forward), run_through(&backward));
        let (rows, mirrored) = (a.series(), b.series());
        for body in ["body_0.speed", "body_1.speed", "drive.torque"] {
            let column = rows.column(body);
            agree(&column, &mirrored.column(body), -1.0, 1e-5 * largest(&column).max(1e-3));
        }
        for key in ["supplied", "absorbed", "lost"] {
            let energy = a.number(&["energy", key]);
            near(energy, b.number(&["energy", key]), 1e-5 * energy.abs().max(1e-3));
        }
        let gears = a.at(&["gears"]);
        for (name, gear) in gears.as_object().unwrap() {
            let net = |outcome: &Outcome| outcome.at(&["gears", name, "net_slips"]).as_i64();
            assert_eq!(net(&a).map(|slips| -slips), net(&b), "seed {seed}: {gear}");
            slipped += i32::from(gear["slips"] != 0);
        }
    }
    assert!(slipped > 2, "few of them slip: {slipped}");
}
