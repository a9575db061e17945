//! `sweep`: each cell of the map is on the side of the limit where the closed form puts it.

use super::helper::{Folder, LIMIT, Table, train};

#[test]
fn a_map_of_torque_and_pull_out_slips_where_equal_areas_say() {
    let scenario = train(
        60.0,
        100.0,
        "  map: { sweep: { vary: { motors.drive.law.prescribed.torque: { from: 40 N*m, to: 110 N*m, count: 8 }, magnetic_couplings.coupling.pull_out: { values: [80 N*m, 100 N*m, 140 N*m] } }, channels: [rotor.speed, coupling.torque_a] } }\n",
    );
    let folder = Folder::new(&scenario);
    let (status, answers, stderr) = folder.study(&["map"]);
    assert_eq!(status, Some(0), "{stderr}");
    let answer = &answers["studies"]["map"];
    assert_eq!((&answer["rows"], &answer["file"]), (&24.into(), &"map.csv".into()));
    let table = Table::read(&folder.study_file("out", "map.csv"));
    let torque = table.numbers("motors.drive.law.prescribed.torque [N*m]");
    let pull_out = table.numbers("magnetic_couplings.coupling.pull_out [N*m]");
    // The first number stands, the second runs.
    assert_eq!(&torque[..4], [40.0, 40.0, 40.0, 50.0]);
    assert_eq!(&pull_out[..4], [80.0, 100.0, 140.0, 80.0]);
    let slips = table.numbers("coupling.slips [1]");
    let met = table.column("met");
    let mut good = 0;
    for row in 0..24 {
        let holds = torque[row] < LIMIT * pull_out[row];
        assert_eq!(slips[row] == 0.0, holds, "{} {}", torque[row], pull_out[row]);
        assert_eq!(met[row], if holds { "true" } else { "false" });
        good += u64::from(holds);
        // Largest speed without slip, from energy: J w^2/2 = (T x - K (1 - cos x))/p at
        // sin x = T/K.
        if holds {
            let x = (torque[row] / pull_out[row]).asin();
            let energy = (torque[row] * x - pull_out[row] * (1.0 - x.cos())) / 4.0;
            let speed = (2.0 * energy / 0.05).sqrt();
            let found = table.numbers("rotor.speed.max [rad/s]")[row];
            assert!((found / speed - 1.0).abs() < 1e-4, "{found} {speed}");
        }
    }
    assert_eq!(answer["met"].as_u64(), Some(good));
    assert_eq!(answer["slipped"].as_u64(), Some(24 - good));
    assert_eq!(answer["failed"], 0);
}

#[test]
fn a_run_that_comes_to_nothing_is_a_row_with_its_reason() {
    // A steady start exists only below the pull-out torque.
    let scenario = train(
        60.0,
        100.0,
        "  map: { sweep: { vary: { motors.drive.law.prescribed.torque: { values: [60 N*m, 120 N*m, 90 N*m] } } } }\n",
    )
    .replace("studies:", "start: steady\nstudies:");
    let folder = Folder::new(&scenario);
    let (status, answers, _) = folder.study(&[]);
    assert_eq!(status, Some(0));
    assert_eq!(answers["studies"]["map"]["failed"], 1);
    assert_eq!(answers["studies"]["map"]["met"], 2);
    let table = Table::read(&folder.study_file("out", "map.csv"));
    let reasons = table.column("failure");
    assert!(reasons[0].is_empty() && reasons[2].is_empty(), "{reasons:?}");
    assert!(reasons[1].contains("no steady start") && reasons[1].contains("120 %"), "{reasons:?}");
    assert_eq!(table.column("met"), ["true", "", "true"]);
}

#[test]
fn the_text_opens_with_the_answer() {
    let scenario = train(
        60.0,
        100.0,
        "  map: { sweep: { vary: { motors.drive.law.prescribed.torque: { values: [60 N*m, 80 N*m] } } } }\n",
    );
    let folder = Folder::new(&scenario);
    let output = folder.call(&["study", "case.yaml", "--out", "out"]);
    let text = String::from_utf8(output.stdout).unwrap();
    let mut lines = text.lines();
    assert_eq!(lines.next(), Some("map (sweep)"));
    assert_eq!(lines.next(), Some("  1 of 2 runs meet all requirements; 1 run slips."));
    assert!(text.contains("80 N*m") && text.contains("NOT MET"), "{text}");
}
