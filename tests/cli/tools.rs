//! The commands beside `run`: new, check, poles, schema.

use super::bench::{Bench, json};

const KINDS: [&str; 9] = [
    "pump",
    "fan",
    "wind_turbine",
    "tidal_turbine",
    "conveyor",
    "hoist",
    "propeller",
    "test_bench",
    "coupling",
];

#[test]
fn every_starting_file_runs_as_printed() {
    let bench = Bench::new("new");
    for kind in KINDS {
        let told = bench.run(&["new", kind]);
        assert_eq!(told.status, Some(0));
        assert!(told.out.contains("<-"), "{kind} says what to fill in");
        let file = format!("{kind}.yaml");
        bench.write(&file, &told.out);
        let told = bench.run(&["check", &file]);
        assert_eq!(told.status, Some(0), "{kind}: {told:?}");
        assert!(told.out.lines().count() < 60, "{kind}: one screen");
        assert!(told.out.lines().all(|line| line.chars().count() <= 110), "{kind}: {}", told.out);
        let told = bench.run(&["run", &file, "--no-charts"]);
        assert!(matches!(told.status, Some(0 | 1)), "{kind}: {told:?}");
        assert!(!told.err.contains("error"), "{kind}: {}", told.err);
    }
}

/// The studies of a starting file: those it has, and those that wait behind `#`.
#[test]
fn studies_of_starting_files_answer_as_printed_and_with_the_marks_taken_off() {
    let bench = Bench::new("new_studies");
    let mut with_studies = 0;
    for kind in KINDS {
        let text = bench.run(&["new", kind]).out;
        let Some((train, studies)) = text.split_once("\nstudies:") else { continue };
        with_studies += 1;
        let uncommented: Vec<String> = studies
            .lines()
            .map(|line| match line.strip_prefix("  # ") {
                Some(study) => format!("  {study}"),
                None => line.to_owned(),
            })
            .collect();
        let all = format!("{train}\nstudies:{}\n", uncommented.join("\n"));
        assert_ne!(all, text, "{kind} has a study behind `#`");
        for (name, text, least) in [("as_printed", &text, 1), ("all", &all, 2)] {
            let file = format!("{kind}_{name}.yaml");
            bench.write(&file, text);
            let told = bench.run(&["study", &file, "--no-charts", "--format", "json"]);
            assert!(matches!(told.status, Some(0 | 1)), "{kind}, {name}: {told:?}");
            let answers = json(&told.out)["studies"].clone();
            let answers = answers.as_object().unwrap();
            assert!(answers.len() >= least, "{kind}, {name}");
            for (study, answer) in answers {
                assert_eq!(answer["completed"], true, "{kind}, {study}");
            }
        }
        // The margin that stands in it says something: it finds the limit within its range.
        let told = bench.run(&["study", &format!("{kind}_as_printed.yaml"), "--format", "json"]);
        let answers = json(&told.out)["studies"].clone();
        let margin = answers.as_object().unwrap().values().next().unwrap();
        assert_eq!(
            (&margin["kind"], &margin["reached"]),
            (&"margin".into(), &true.into()),
            "{kind}"
        );
        assert!(margin["value"].is_number(), "{kind}: {margin}");
    }
    assert!(with_studies >= 3, "{with_studies}");
}

#[test]
fn help_lists_every_kind_of_starting_file() {
    let bench = Bench::new("kinds");
    let told = bench.run(&["new", "--help"]);
    for kind in KINDS {
        assert!(told.out.contains(kind), "{kind}");
    }
}

/// Closed forms for two bodies and a coupling of p pole pairs: K = 80/4 = 20 N*m, inertia along
/// the phase `1/J_e` = p^2 (`1/J_a` + `1/J_b`) = 16 (10 + 5), f = `sqrt(K/J_e)/(2` pi) = sqrt(4800)/(2 pi).
#[test]
fn check_gives_the_figures_of_the_train() {
    let bench = Bench::new("figures");
    let told = bench.run(&["check", "small.yaml", "--format", "json"]);
    let file = &json(&told.out)["files"]["small.yaml"];
    assert_eq!(file["accepted"], true);
    let gear = &file["gears"]["coupling"];
    let frequency = gear["natural_frequency_hz"].as_f64().unwrap();
    let expected = 4800.0_f64.sqrt() / std::f64::consts::TAU;
    assert!((frequency / expected - 1.0).abs() < 1e-12, "{frequency} {expected}");
    // D = 0.5/16; damping ratio D/(2 sqrt(K J_e)) with J_e = 1/240.
    let ratio = gear["damping_ratio"].as_f64().unwrap();
    let expected = 0.5 / 16.0 / (2.0 * (20.0_f64 / 240.0).sqrt());
    assert!((ratio / expected - 1.0).abs() < 1e-12, "{ratio} {expected}");
    assert_eq!(file["bodies"]["driven"]["referred_inertia"], 0.2);
}

/// By hand: with the ring of pieces held, 4 `w_i` + 22 `w_o` = 0; the outer side seen from the motor
/// has its inertia over 5.5^2.
#[test]
fn check_refers_inertias_through_the_gear() {
    let bench = Bench::new("referred");
    bench.write("pump.yaml", &bench.run(&["new", "pump"]).out);
    let told = bench.run(&["check", "pump.yaml", "--format", "json"]);
    let bodies = &json(&told.out)["files"]["pump.yaml"]["bodies"];
    let of = |name: &str, key: &str| bodies[name][key].as_f64().unwrap();
    assert!((of("impeller", "ratio_to_reference") + 1.0 / 5.5).abs() < 1e-12);
    assert!((of("impeller", "referred_inertia") - 2.5 / 30.25).abs() < 1e-12);
}

#[test]
fn poles_lists_choices_and_tells_when_there_is_none() {
    let bench = Bench::new("poles");
    let told = bench.run(&["poles", "--ratio", "5.5", "--tolerance", "0", "--format", "json"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    let choices = json(&told.out)["choices"].clone();
    let first = &choices[0];
    assert_eq!(first["inner_pole_pairs"], 2);
    assert_eq!(first["outer_pole_pairs"], 11);
    assert_eq!(first["modulator_pieces"], 13);
    assert_eq!(first["ratio"], -5.5);
    assert_eq!(first["ripple_order_inner"], 52);
    let told = bench.run(&["poles", "--ratio", "-5.5", "--held", "outer"]);
    assert_eq!(told.status, Some(2), "{told:?}");
    let told = bench.run(&["poles", "--ratio", "5.5003", "--tolerance", "0 %"]);
    assert_eq!(told.status, Some(1), "{told:?}");
    assert!(told.err.contains("the nearest is"), "{}", told.err);
}

#[test]
fn the_schema_knows_every_section() {
    let bench = Bench::new("schema");
    let schema = json(&bench.run(&["schema"]).out);
    assert_eq!(schema["$schema"], "https://json-schema.org/draft/2020-12/schema");
    for section in ["bodies", "shafts", "magnetic_gears", "motors", "loads", "requirements"] {
        assert!(schema["properties"][section].is_object(), "{section}");
    }
}

#[test]
fn the_version_is_told() {
    let bench = Bench::new("version");
    let told = bench.run(&["--version"]);
    assert_eq!(told.status, Some(0));
    assert_eq!(told.out.trim(), concat!("lodeshaft ", env!("CARGO_PKG_VERSION")));
}

#[test]
fn completions_and_manual_pages_are_printed() {
    let bench = Bench::new("manual");
    for (shell, words) in [
        ("bash", "complete -F"),
        ("zsh", "#compdef lodeshaft"),
        ("fish", "complete -c lodeshaft"),
        ("powershell", "Register-ArgumentCompleter"),
    ] {
        let told = bench.run(&["completions", shell]);
        assert_eq!(told.status, Some(0), "{shell}: {told:?}");
        assert!(told.out.contains(words), "{shell}: {}", told.out);
        let option = if shell == "fish" { "-l set" } else { "--set" };
        assert!(told.out.contains("compare") && told.out.contains(option), "{shell}");
    }
    assert_eq!(bench.run(&["completions", "dos"]).status, Some(2));
    let told = bench.run(&["man"]);
    assert!(told.out.contains(".TH lodeshaft 1"), "{}", told.out);
    assert!(told.out.contains("Exit status"), "{}", told.out);
    let told = bench.run(&["man", "compare"]);
    assert!(told.out.contains(".TH lodeshaft-compare 1"), "{}", told.out);
    let told = bench.run(&["man", "compar"]);
    assert_eq!(told.status, Some(2));
    assert!(told.err.contains("did you mean `compare`?"), "{}", told.err);
}

/// Width and height of a PNG stand in its first chunk (ISO/IEC 15948, 11.2.2).
fn png_size(bytes: &[u8]) -> (u32, u32) {
    let number = |at: usize| u32::from_be_bytes(bytes[at..at + 4].try_into().unwrap());
    (number(16), number(20))
}

#[test]
fn charts_come_in_the_size_asked_for() {
    let bench = Bench::new("sizes");
    let size = |arguments: &[&str]| {
        let told = bench.run(&[&["run", "small.yaml", "--quiet"], arguments].concat());
        assert_eq!(told.status, Some(0), "{told:?}");
        png_size(&std::fs::read(bench.path("output/small/run.png")).unwrap())
    };
    assert_eq!(size(&[]).0, 1440, "720 px at two to the pixel");
    assert_eq!(size(&["--scale", "1"]).0, 720);
    assert_eq!(size(&["--size", "900x600", "--scale", "1"]), (900, 600));
    let (width, height) = size(&["--size", "slide", "--scale", "1"]);
    assert!(width.abs_diff(960) <= 1 && height.abs_diff(540) <= 1, "{width} {height}");
    for wrong in [["--scale", "0"], ["--scale", "nan"], ["--size", "poster"], ["--size", "1x1"]] {
        let told = bench.run(&["run", "small.yaml", wrong[0], wrong[1]]);
        assert_eq!(told.status, Some(2), "{wrong:?}: {told:?}");
    }
}

#[test]
#[cfg(target_os = "linux")]
fn a_report_is_opened_by_the_desktop_when_asked() {
    use std::os::unix::fs::PermissionsExt;
    let bench = Bench::new("open");
    std::fs::create_dir(bench.path("bin")).unwrap();
    let script = format!("#!/bin/sh\necho \"$1\" > {}\n", bench.path("opened").display());
    bench.write("bin/xdg-open", &script);
    let mode = std::fs::Permissions::from_mode(0o755);
    std::fs::set_permissions(bench.path("bin/xdg-open"), mode).unwrap();
    let run = |path: &str| {
        let mut command = bench.command(&["report", "small.yaml", "--quiet", "--open"]);
        super::bench::Told::from(command.env("PATH", path).output().unwrap())
    };
    let told = run(&format!("{}:/usr/bin:/bin", bench.path("bin").display()));
    assert_eq!(told.status, Some(0), "{told:?}");
    for _ in 0..200 {
        if bench.path("opened").exists() && bench.read("opened").ends_with('\n') {
            break;
        }
        std::thread::sleep(std::time::Duration::from_millis(50));
    }
    assert_eq!(bench.read("opened").trim(), "output/small/report.html");
    let told = run("/nowhere");
    assert_eq!(told.status, Some(0), "the page stands: {told:?}");
    assert!(told.err.contains("cannot be opened with `xdg-open`"), "{}", told.err);
}

/// By hand: 20 N*m stop 1 kg*m2 at 10 rad/s within 0.5 s, so the brake that is pressed at 0.5 s holds
/// from 1 s on and not before.
#[test]
fn a_brake_is_drawn_as_stuck_from_when_it_holds() {
    let bench = Bench::new("stuck");
    let text = "lodeshaft: 1\nduration: 2 s\nbodies:\n  wheel: { inertia: 1 kg*m2, speed: 10 rad/s }\nbrakes:\n  \
        stop: { body: wheel, torque: 20 N*m, applied: { step: { at: 0.5 s, from: 0, to: 1 } } }\n";
    bench.write("wheel.yaml", text);
    assert_eq!(bench.run(&["run", "wheel.yaml", "--quiet"]).status, Some(0));
    let chart = bench.read("output/wheel/run.svg");
    let mut bars: Vec<[f64; 2]> = chart
        .split("class=\"b\"")
        .skip(1)
        .map(|part| {
            ["data-t=\"", "data-u=\""].map(|key| {
                part.split(key).nth(1).unwrap().split('"').next().unwrap().parse().unwrap()
            })
        })
        .collect();
    bars.sort_by(|one, two| one[0].total_cmp(&two[0]));
    assert_eq!(bars.len(), 2, "the signal and the state: {bars:?}");
    for (bar, wanted) in bars.iter().zip([[0.5, 2.0], [1.0, 2.0]]) {
        assert!((bar[0] - wanted[0]).abs() < 1e-6 && (bar[1] - wanted[1]).abs() < 1e-6, "{bars:?}");
    }
}
