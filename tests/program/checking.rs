//! What `check` says of a train without running it: ratio, pull-out torques, zero-load frequency.
//!
//! Closed forms: field modulation (Atallah and Howe 2001, from memory), and the frequency
//! `sqrt(K/J_e)/2 pi` with K the pull-out torque of a member over its count and
//! `1/J_e` = the sum of count^2/inertia over the members that turn.

use super::helper::{check, head};

/// A gear with members on bodies (inertia) or ground (`None`).
fn gear(pole_pairs: (u32, u32), inertias: [Option<f64>; 3], pull_out: f64) -> String {
    let names = ["inner", "modulator", "outer"];
    let bodies: String = names
        .iter()
        .zip(inertias)
        .filter_map(|(name, inertia)| {
            Some(format!("  {name}: {{ inertia: {} kg*m2 }}\n", inertia?))
        })
        .collect();
    let member = |place: usize| if inertias[place].is_some() { names[place] } else { "ground" };
    format!(
        "{}bodies:\n{bodies}magnetic_gears:\n  gear:\n    inner: {}\n    modulator: {}\n    outer: {}\n    \
         pole_pairs: {{ inner: {}, outer: {} }}\n    pull_out: {{ at: outer, torque: {pull_out} N*m }}\n",
        head(1.0, 0.1, 1e-8),
        member(0),
        member(1),
        member(2),
        pole_pairs.0,
        pole_pairs.1,
    )
}

/// Numbers of a text that stand before a unit, with half a unit of their last digit.
fn numbers(text: &str, unit: &str) -> Vec<(f64, f64)> {
    let words: Vec<&str> = text.split_whitespace().collect();
    let clean =
        |word: &str| word.trim_matches(|c: char| !c.is_ascii_digit() && c != '-').to_owned();
    let mut found = Vec::new();
    for pair in words.windows(2) {
        if pair[1].trim_end_matches([',', '.', ';', ')']) != unit {
            continue;
        }
        let number = clean(pair[0]);
        let places = number.split_once('.').map_or(0, |(_, places)| places.len());
        if let Ok(value) = number.parse::<f64>() {
            found.push((value, 0.5 * 10.0_f64.powi(-i32::try_from(places).unwrap())));
        }
    }
    found
}

/// Fails unless the text shows a value with at least three figures, rounded rightly.
#[track_caller]
fn shows(text: &str, unit: &str, value: f64) {
    let fits = |(found, half): &(f64, f64)| {
        (found - value).abs() <= 1.0001 * half && *half <= 0.006 * value.abs()
    };
    let found = numbers(text, unit);
    assert!(found.iter().any(fits), "no {value} {unit} among {found:?} in\n{text}");
}

#[test]
fn shows_the_zero_load_frequency() {
    for (pairs, inertias, pull_out, frequency) in [
        // Three-rotor gear with invented inertias: modulator held, all free, only one free.
        ((4, 22), [Some(0.002), None, Some(0.05)], 16.0, 18.047203393507875),
        ((4, 22), [Some(0.002), Some(0.08), Some(0.05)], 16.0, 21.94009417637153),
        ((4, 22), [None, None, Some(0.05)], 16.0, 13.353849003583742),
        ((4, 22), [Some(0.002), None, None], 16.0, 12.139862730530673),
        // 5 kN*m with 0.05 and 20 kg*m2.
        ((4, 22), [Some(0.05), None, Some(20.0)], 5000.0, 44.514266999017),
    ] {
        let outcome = check(&gear(pairs, inertias, pull_out));
        assert_eq!(outcome.status, Some(0), "{}", outcome.stderr);
        shows(&outcome.stdout, "Hz", frequency);
    }
}

#[test]
fn shows_pull_out_torques_and_the_ratio() {
    // 5000 N*m at 22 pole pairs: 909.09 at 4, 5909.09 at 26 pieces.
    let outcome = check(&gear((4, 22), [Some(0.05), None, Some(20.0)], 5000.0));
    for torque in [5000.0, 909.09090909, 5909.09090909] {
        shows(&outcome.stdout, "N*m", torque);
    }
    assert!(outcome.stdout.contains("5.5"), "{}", outcome.stdout);
    let outcome = check(&gear((3, 15), [Some(0.05), Some(1.0), None], 500.0));
    assert!(outcome.stdout.contains("18"), "no pieces in\n{}", outcome.stdout);
    assert!(outcome.stdout.contains('6'), "no ratio in\n{}", outcome.stdout);
    for torque in [100.0, 500.0, 600.0] {
        shows(&outcome.stdout, "N*m", torque);
    }
}

#[test]
fn hot_magnets_show_their_lower_pull_out() {
    // (1 - 0.0012 * 60)^2 = 0.861184.
    let hot = gear((4, 22), [Some(0.05), None, Some(20.0)], 5000.0)
        + "    magnet_temperature: 80 degC\n    rated_temperature: 20 degC\n    remanence_coefficient: -0.12 %/K\n";
    let outcome = check(&hot);
    assert_eq!(outcome.status, Some(0), "{}", outcome.stderr);
    shows(&outcome.stdout, "N*m", 5000.0 * 0.861184);
    shows(&outcome.stdout, "Hz", 44.514266999017 * 0.861184_f64.sqrt());
}
