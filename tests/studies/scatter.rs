//! `monte_carlo` against shares that are known in closed form.

use super::helper::{Folder, LIMIT, Table, ask, train};

/// Share of a standard normal distribution below -1.25 and below -1.5 (tables, from memory).
const BELOW: [(f64, f64); 2] = [(-1.25, 0.105_649_773_7), (-1.5, 0.066_807_201_3)];

/// Share beyond four deviations on one side, which is cut off.
const CUT: f64 = 3.167_124_183_3e-5;

#[test]
fn one_scattering_number_slips_as_often_as_its_distribution_says() {
    // Pull-out normal about 100 with 5: slips when it lies below T/LIMIT = 100 - 1.25*5.
    let (z, below) = BELOW[0];
    let torque = (100.0 + 5.0 * z) * LIMIT;
    let share = (below - CUT) / (1.0 - 2.0 * CUT);
    let (status, answer) = ask(&train(
        torque,
        100.0,
        "  drawn: { monte_carlo: { draws: 400, seed: 3, slipping_at_most: 20 %, spread: { magnetic_couplings.coupling.pull_out: { normal: { relative: 5 % } } } } }\n",
    ));
    assert_eq!(status, Some(0), "{answer}");
    let slipped = answer["slipped"].as_f64().unwrap();
    // A Latin hypercube of one number holds the share to one draw.
    assert!((slipped - 400.0 * share).abs() <= 1.0, "{slipped} of {}", 400.0 * share);
    let [low, high] = [0, 1].map(|end| answer["interval"][end].as_f64().unwrap());
    assert!(low < share && share < high, "{low} {share} {high}");
    assert_eq!(answer["draws"], 400);
    assert_eq!(answer["not_met"], answer["slipped"]);
    assert_eq!(answer["met"], true);
}

#[test]
fn two_scattering_numbers_slip_as_often_as_their_difference_says() {
    // T normal about m with a, K normal about 100 with b: slips when T - LIMIT K > 0, which is
    // normal about m - 100 LIMIT with sqrt(a^2 + (LIMIT b)^2).
    let (z, share) = BELOW[1];
    let (a, b): (f64, f64) = (2.0, 3.0);
    let torque = 100.0 * LIMIT + z * a.hypot(LIMIT * b);
    let (_, answer) = ask(&train(
        torque,
        100.0,
        "  drawn: { monte_carlo: { draws: 600, seed: 5, spread: { magnetic_couplings.coupling.pull_out: { normal: { absolute: 3 N*m } }, motors.drive.law.prescribed.torque: { normal: { absolute: 2 N*m } } } } }\n",
    ));
    let [low, high] = [0, 1].map(|end| answer["interval"][end].as_f64().unwrap());
    assert!(low < share && share < high, "{low} {share} {high}");
    // More torque slips more, more pull-out less. An event with the share p = 0.067 of a normal
    // sum goes with one of its parts by density(z)/sqrt(p (1 - p)) = 0.52 times the part's share
    // of the deviation, 2/sqrt(8.73) and 2.17/sqrt(8.73).
    let slips = &answer["sensitivity"]["slips"];
    let torque = slips["motors.drive.law.prescribed.torque"].as_f64().unwrap();
    let pull_out = slips["magnetic_couplings.coupling.pull_out"].as_f64().unwrap();
    assert!((torque - 0.35).abs() < 0.1 && (pull_out + 0.38).abs() < 0.1, "{torque} {pull_out}");
}

#[test]
fn quantiles_of_a_verdicts_value_are_those_of_its_closed_form() {
    // Without slip the largest share is 1 - cos-like: sin of the far turning point; small torque
    // keeps it below the peak. Uniform torque 20 +- 10: the turning point x solves
    // T x = K (1 - cos x), and the share there is sin x.
    let turning = |torque: f64| {
        let (mut low, mut high) = (1e-9_f64, 1.5_f64);
        for _ in 0..200 {
            let middle = 0.5 * (low + high);
            let over = 100.0 * (1.0 - middle.cos()) > torque * middle;
            if over { high = middle } else { low = middle }
        }
        low.sin()
    };
    let scenario = train(
        20.0,
        100.0,
        "  drawn: { monte_carlo: { draws: 200, spread: { motors.drive.law.prescribed.torque: { uniform: { absolute: 10 N*m } } } } }\n",
    )
    .replace("studies:", "  share: { of: coupling.pull_out_share, at_most: 50 % }\nstudies:");
    let (_, answer) = ask(&scenario);
    let of = &answer["quantiles"]["share"];
    for (key, share) in [("0.05", 0.05), ("0.5", 0.5), ("0.95", 0.95)] {
        let expected = turning(10.0 + 20.0 * share);
        let found = of[key].as_f64().unwrap();
        // Draws stand in strata of a two-hundredth: 0.1 N*m, a share of 0.002.
        assert!((found - expected).abs() < 3e-3, "{key}: {found} {expected}");
    }
    // The limit of 50 % is passed above the torque with turning(T) = 0.5.
    let (mut low, mut high) = (10.0, 30.0);
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if turning(middle) > 0.5 { high = middle } else { low = middle }
    }
    let expected = 200.0 * (30.0 - low) / 20.0;
    let not_met = answer["not_met"].as_f64().unwrap();
    assert!((not_met - expected).abs() <= 1.0, "{not_met} {expected}");
    assert_eq!(answer["slipped"], 0);
}

#[test]
fn too_few_draws_cannot_tell() {
    let (status, answer) = ask(&train(
        50.0,
        100.0,
        "  drawn: { monte_carlo: { draws: 20, slipping_at_most: 1 %, spread: { bodies.rotor.inertia: { triangular: { relative: 10 % } } } } }\n",
    ));
    assert_eq!(status, Some(1));
    assert!(answer["met"].is_null(), "{answer}");
    // No event in n draws: the interval ends at z^2/(n + z^2), z = 1.96.
    let high = answer["interval"][1].as_f64().unwrap();
    assert!((high - 3.841_458_8 / 23.841_458_8).abs() < 1e-6, "{high}");
    assert_eq!(answer["draws_to_tell"], 381);
}

#[test]
fn any_number_of_threads_gives_the_same_bytes() {
    let scenario = train(
        70.0,
        100.0,
        "  drawn: { monte_carlo: { draws: 60, seed: 9, channels: [rotor.speed], spread: { magnetic_couplings.coupling.pull_out: { lognormal: { relative: 5 % } }, bodies.rotor.inertia: { normal: { relative: 10 % } } } } }
  room: { margin: { vary: motors.drive.law.prescribed.torque, between: [50 N*m, 100 N*m] } }\n",
    );
    let folder = Folder::new(&scenario);
    let run = |out: &str, threads: &str| {
        let arguments =
            ["study", "case.yaml", "--format", "json", "--out", out, "--threads", threads];
        folder.call(&arguments).stdout
    };
    let (one, two, five) = (run("one", "1"), run("two", "2"), run("five", "5"));
    assert!(!one.is_empty());
    assert_eq!(one, two);
    assert_eq!(one, five);
    for name in ["drawn.csv", "drawn.json", "room.csv", "room.json"] {
        assert_eq!(folder.study_file("one", name), folder.study_file("two", name), "{name}");
    }
    let table = Table::read(&folder.study_file("one", "drawn.csv"));
    let runs: Vec<String> = (0..60).map(|run| run.to_string()).collect();
    assert_eq!(table.column("run"), runs);
    // Another seed draws otherwise.
    let other = folder.call(&[
        "study",
        "case.yaml",
        "drawn",
        "--out",
        "other",
        "--set",
        "studies.drawn.monte_carlo.seed=10",
    ]);
    assert!(other.status.code().is_some());
    assert_ne!(folder.study_file("one", "drawn.csv"), folder.study_file("other", "drawn.csv"));
}
