//! Files that must be read without a fault.

use lodeshaft::scenario::load;
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
