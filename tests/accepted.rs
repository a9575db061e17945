//! Files that must be read without a fault.

use lodeshaft::scenario::{load, load_text};
use std::path::Path;

#[test]
fn every_file_of_the_folder_is_accepted() {
    let mut files: Vec<_> = std::fs::read_dir("tests/accepted")
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|ending| ending == "yaml"))
        .collect();
    files.sort();
    assert!(!files.is_empty());
    for file in files {
        if let Err(failure) = load(&file, &[]) {
            panic!("{} is refused:\n{}", file.display(), failure.render());
        }
    }
}

fn near(value: f64, wanted: f64) -> bool {
    (value - wanted).abs() <= 1e-12 * wanted.abs()
}

#[test]
fn values_of_the_first_file_arrive_in_si() {
    let loaded = load(Path::new("tests/accepted/contract.yaml"), &[]).unwrap();
    let scenario = &loaded.scenario;
    assert!(near(scenario.duration, 3.0));
    assert!(near(scenario.output_step, 2e-3));
    assert!(near(scenario.bodies[0].inertia, 0.25));
    assert_eq!(scenario.bodies[1].speed, None);
    assert!(near(scenario.shafts[1].stiffness, 50e3));
    let gear = &scenario.magnetic_gears[0];
    assert_eq!((gear.inner_pole_pairs, gear.outer_pole_pairs), (4, 22));
    assert_eq!(gear.modulator, "ground");
    assert!(near(gear.damping.unwrap().coefficient, 24.2));
    let names: Vec<_> = scenario.requirements.iter().map(|one| one.text.as_str()).collect();
    assert_eq!(
        names,
        [
            "gear.slips at most 0",
            "gear.pull_out_share at most 85 %",
            "motor_rotor.speed reaches 1440 rpm within 1 s, stays within 4 %",
            "impeller.speed at least 25 rad/s, after 1 s",
        ]
    );
    assert_eq!(scenario.channels[0].name, "motor_rotor.speed");
    assert!(scenario.channels.iter().any(|channel| channel.name == "gear.torque_modulator"));
}

#[test]
fn warnings_tell_how_a_value_was_read() {
    let text = "lodeshaft: 1
duration: 3 s
bodies:
  rotor: { inertia: 0.2, speed: 1500 }
loads:
  push:
    body: rotor
    law: { prescribed: { torque: { points: [[1 s, 0 N*m], [2 s, 5 N*m]] } } }
";
    let loaded = load_text("case.yaml", Path::new("."), text, &[]).unwrap();
    assert_eq!(loaded.scenario.title, "case");
    assert_eq!(
        loaded.source.render(&loaded.warnings),
        "warning: 1500 is read as 1500 rad/s = 14324 rpm
  --> case.yaml:4:33  (bodies.rotor.speed)
  hint: write the unit: \"1500 rad/s\" or \"1500 rpm\"
warning: it begins at 1 s; until then its first value holds
  --> case.yaml:8:36  (loads.push.law.prescribed.torque.points)
warning: it ends at 2 s, the run at 3 s; its last value holds in between
  --> case.yaml:8:36  (loads.push.law.prescribed.torque.points)
"
    );
}

#[test]
fn what_cannot_be_read_says_why() {
    let folder = std::env::temp_dir().join(format!("lodeshaft-reading-{}", std::process::id()));
    std::fs::create_dir_all(&folder).unwrap();
    let large = folder.join("large.yaml");
    std::fs::write(&large, vec![b'#'; 17 * 1024 * 1024]).unwrap();
    let binary = folder.join("binary.yaml");
    std::fs::write(&binary, b"title: a\nabout: \xff\xfe\n").unwrap();
    for (path, words) in [
        (folder.join("nowhere.yaml"), "no such file"),
        (folder.clone(), "it is a folder"),
        (large, "is larger than 16 MB"),
        (binary, "line 2 of"),
    ] {
        let said = load(&path, &[]).unwrap_err().render();
        assert!(said.contains(words), "{said}");
        assert_eq!(said.lines().count(), 2, "{said}");
    }
    std::fs::remove_dir_all(&folder).unwrap();
}
