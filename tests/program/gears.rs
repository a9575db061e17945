//! Magnetic gears: ratios, torque balance, natural frequency, critical steps, temperature.
//!
//! Field modulation (Atallah and Howe, IEEE Trans. Magn. 37 (2001) 2844, from memory): with
//! pole pairs `p_i`, `p_o` and as many pieces as both together the synchronous speeds obey
//! `p_i w_i + p_o w_o = (p_i + p_o) w_m`, and the torques are as `p_i : p_o : -(p_i + p_o)`.

use super::helper::{head, near, run_through, run_well, same};

/// A gear 3/15 with one member held and the others as given.
pub fn small_gear(held: &str, driven: &str, start: &str, torque: &str) -> String {
    let member = |name: &str| if name == held { "ground".to_owned() } else { name.to_owned() };
    let bodies: String = ["inner", "modulator", "outer"]
        .iter()
        .filter(|name| **name != held)
        .map(|name| {
            let speed = if *name == driven { ", speed: 60 rad/s" } else { "" };
            format!("  {name}: {{ inertia: 0.02 kg*m2{speed} }}\n")
        })
        .collect();
    format!(
        "{}start: {start}\nbodies:\n{bodies}magnetic_gears:\n  gear:\n    inner: {}\n    modulator: {}\n    outer: {}\n    \
         pole_pairs: {{ inner: 3, outer: 15 }}\n    modulator_pieces: 18\n    \
         pull_out: {{ at: outer, torque: 30 N*m }}\n    damping: {{ at: outer, coefficient: 2 N*m*s/rad }}\n\
         motors:\n  drive: {{ body: {driven}, law: {{ prescribed: {{ torque: {torque} }} }} }}\n",
        head(2.0, 0.1, 1e-9),
        member("inner"),
        member("modulator"),
        member("outer"),
    )
}

/// Held, driven, driving and speed of driving over driven... of the six ways to use 3/15/18.
pub const SIX_RATIOS: [(&str, &str, &str, f64); 6] = [
    ("modulator", "inner", "outer", -5.0),
    ("modulator", "outer", "inner", -1.0 / 5.0),
    ("outer", "inner", "modulator", 6.0),
    ("outer", "modulator", "inner", 1.0 / 6.0),
    ("inner", "outer", "modulator", 6.0 / 5.0),
    ("inner", "modulator", "outer", 5.0 / 6.0),
];

#[test]
fn one_gear_has_six_ratios() {
    for (held, driving, driven, ratio) in SIX_RATIOS {
        // At no load the speeds stay in the ratio; the driven body starts in step by itself.
        let outcome = run_well(&small_gear(held, driving, "as_given", "0"));
        let series = outcome.series();
        for time in [0.0, 1.0, 2.0] {
            near(series.at(&format!("{driving}.speed"), time), 60.0, 1e-9);
            near(series.at(&format!("{driven}.speed"), time), 60.0 / ratio, 1e-9);
        }
        let fast = if ratio.abs() > 1.0 { ratio } else { 1.0 / ratio };
        same(outcome.number(&["gears", "gear", "ratio"]), fast, 1e-12);
        // Pushed evenly, the load angle settles and the ratio holds while both speed up.
        let ramp = "{ ramp: { start: 0.1 s, end: 0.5 s, from: 0 N*m, to: 0.5 N*m } }";
        let outcome = run_well(&small_gear(held, driving, "as_given", ramp));
        assert_eq!(outcome.slips("gear"), 0);
        let driving = outcome.channel(&format!("{driving}.speed"), "final");
        let driven = outcome.channel(&format!("{driven}.speed"), "final");
        assert!(driving > 61.0, "{driving}");
        near(driving / driven, ratio, 1e-6 * ratio.abs());
    }
}

#[test]
fn number_of_pieces_is_the_sum_of_the_pole_pairs() {
    let good = small_gear("modulator", "inner", "as_given", "0");
    assert_eq!(super::helper::check(&good).status, Some(0));
    for pieces in [17, 19, 36] {
        let bad = good.replace("modulator_pieces: 18", &format!("modulator_pieces: {pieces}"));
        let outcome = super::helper::check(&bad);
        assert_eq!(outcome.status, Some(2), "{pieces} pieces");
        assert!(outcome.stderr.contains("modulator_pieces"), "{}", outcome.stderr);
    }
}

/// The three-rotor gear 4/22/26 with 16 N*m at the outer rotor; a member is a body or ground.
pub fn benchmark(inner: &str, outer: &str, modulator: &str, more: &str) -> String {
    let bodies: String =
        [("inner", inner, 0.002), ("outer", outer, 0.05), ("modulator", modulator, 0.08)]
            .iter()
            .filter(|(_, member, _)| *member != "ground")
            .map(|(name, member, inertia)| {
                format!(
                    "  {name}: {{ inertia: {inertia} kg*m2{} }}\n",
                    member.trim_start_matches(name)
                )
            })
            .collect();
    let body = |member: &str| member.split(',').next().unwrap_or_default().to_owned();
    format!(
        "{}bodies:\n{bodies}magnetic_gears:\n  gear:\n    inner: {}\n    modulator: {}\n    outer: {}\n    \
         pole_pairs: {{ inner: 4, outer: 22 }}\n    pull_out: {{ at: outer, torque: 16 N*m }}\n{more}",
        head(1.0, 0.01, 1e-9),
        body(inner),
        body(modulator),
        body(outer),
    )
}

/// A constant push from the start.
pub fn push(body: &str, torque: f64) -> String {
    format!(
        "motors:\n  push: {{ body: {body}, law: {{ prescribed: {{ torque: {torque} N*m }} }} }}\n"
    )
}

/// Members (a body or ground), driven member and critical step of the three-rotor gear, N*m.
pub const BENCHMARK_STEPS: [(&str, &str, &str, &str, f64); 5] = [
    ("inner", "outer", "ground", "outer", 21.175419396317693),
    ("inner", "outer", "ground", "inner", 4.658592267189893),
    ("ground", "outer", "ground", "outer", 11.593781660427336),
    ("inner", "outer", "modulator", "outer", 31.29602425485189),
    ("inner", "outer", "modulator", "modulator", 42.37000206810717),
];

#[test]
fn free_reaction_side_lets_a_step_above_pull_out_pass() {
    // Step from rest, critical share 0.7246113537767085 of K, with K = 16/22 and
    // 1/J_e = 16/J_i + 484/J_o + 676/J_m (terms of held members left out), torque T at a member
    // with count p: share = J_e p T/(K J). Inertias invented. Held members, driven, critical.
    for (inner, outer, modulator, driven, critical) in BENCHMARK_STEPS {
        for (factor, slips) in [(0.9999, false), (1.0001, true)] {
            let scenario = benchmark(inner, outer, modulator, &push(driven, critical * factor));
            let outcome = run_through(&scenario);
            assert_eq!(outcome.slips("gear") > 0, slips, "{scenario}");
            // A push on the modulator lets it lead: the phase falls.
            if slips {
                let direction = if driven == "modulator" { -1 } else { 1 };
                let event = &outcome.at(&["gears", "gear", "slip_events"])[0];
                assert_eq!(event["direction"], direction);
            }
        }
    }
}

#[test]
fn jammed_gear_slips_above_the_jam_speed() {
    // 2 sqrt(K/J_i) = 38.13850356982369 rad/s from load angle 0.
    for (factor, slips) in [(0.9999, false), (1.0001, true)] {
        let speed = 38.13850356982369 * factor;
        let inner = format!("inner, speed: {speed} rad/s");
        let outcome = run_through(&benchmark(&inner, "ground", "ground", ""));
        assert_eq!(outcome.slips("gear") > 0, slips, "{speed} rad/s");
    }
}

#[test]
fn small_swings_have_the_natural_frequency() {
    // sqrt(K/J_e)/2 pi: modulator held, all free, only the outer free, only the inner free. A
    // small push of the inner rotor makes the slip speed cross zero each half period; the
    // amplitude a lengthens the period by a^2/16 only.
    for (inner, outer, modulator, pushed, frequency) in [
        ("inner", "outer", "ground", "inner", 18.047203393507875),
        ("inner", "outer", "modulator", "inner", 21.94009417637153),
        ("ground", "outer", "ground", "outer", 13.353849003583742),
        ("inner", "ground", "ground", "inner", 12.139862730530673),
    ] {
        let period = 1.0 / frequency;
        let more = format!(
            "requirements:\n  back: {{ of: gear.load_angle, reaches: 0, after: {} s, signed: true }}\n",
            0.75 * period
        );
        let named = |name: &str, member: &str| {
            if name == pushed {
                format!("{member}, speed: 0.002 rad/s")
            } else {
                format!("{member}, speed: 0 rad/s")
            }
        };
        let member = |name: &str, member: &str| {
            if member == "ground" { "ground".to_owned() } else { named(name, member) }
        };
        let scenario = benchmark(
            &member("inner", inner),
            &member("outer", outer),
            &member("modulator", modulator),
            &more,
        );
        let outcome = run_well(&scenario);
        let amplitude = outcome.number(&["gears", "gear", "peak_load_angle"]).abs();
        assert!(amplitude < 1e-3, "{amplitude}");
        same(outcome.found("back").unwrap(), period, 1e-7);
    }
}

#[test]
fn torques_of_the_members_are_as_their_counts() {
    let scenario = benchmark("inner", "outer", "modulator", &push("inner", 20.0));
    let outcome = run_through(&scenario);
    assert!(outcome.slips("gear") > 0, "it should slip");
    let series = outcome.series();
    let torque = |member: &str| series.column(&format!("gear.torque_{member}"));
    let (inner, outer, modulator) = (torque("inner"), torque("outer"), torque("modulator"));
    let mut largest: f64 = 0.0;
    for row in 0..inner.len() {
        near(inner[row] + outer[row] + modulator[row], 0.0, 1e-12);
        near(inner[row] * 22.0, outer[row] * 4.0, 1e-11);
        near(-inner[row] * 26.0, modulator[row] * 4.0, 1e-11);
        largest = largest.max(outer[row].abs());
    }
    assert!(largest > 10.0 && largest < 16.0 + 1e-9, "{largest}");
}

#[test]
fn hot_magnets_pull_out_sooner() {
    // Remanence falls by a constant per kelvin, pull-out with its square (grade tables of
    // magnets give -0.12 and -0.11 %/K): temperature, coefficient, factor.
    for (celsius, coefficient, factor) in [
        (80.0, -0.12, 0.861184),
        (80.0, -0.11, 0.872356),
        (100.0, -0.12, 0.817216),
        (-20.0, -0.12, 1.098304),
        (20.0, -0.12, 1.0),
    ] {
        let heat = format!(
            "    magnet_temperature: {celsius} degC\n    rated_temperature: 20 degC\n    \
             remanence_coefficient: {coefficient} %/K\n"
        );
        for (bracket, slips) in [(0.9999, false), (1.0001, true)] {
            let critical = 11.593781660427336 * factor * bracket;
            let more = format!("{heat}{}", push("outer", critical));
            let outcome = run_through(&benchmark("ground", "outer", "ground", &more));
            assert_eq!(outcome.slips("gear") > 0, slips, "{celsius} degC, {critical} N*m");
        }
        let more = format!("{heat}{}", push("outer", 8.0));
        let steady = benchmark("ground", "outer", "ground", &more) + "start: steady\n";
        let outcome = run_well(&steady);
        near(outcome.number(&["gears", "gear", "final_load_angle"]), (0.5 / factor).asin(), 1e-6);
        same(outcome.number(&["gears", "gear", "peak_pull_out_share"]), 0.5 / factor, 1e-6);
    }
}
