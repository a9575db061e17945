//! The table of the shipped scenarios.

use crate::text;
use std::fs;
use std::path::Path;

#[test]
fn every_scenario_stands_in_the_table_and_every_entry_exists() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let readme = text();
    let mut count = 0;
    for entry in fs::read_dir(&folder).expect("the folder can be read") {
        let name = entry.expect("an entry can be read").file_name().display().to_string();
        if name.ends_with(".yaml") {
            assert!(readme.contains(&format!("| `{name}` |")), "no row for {name}");
            count += 1;
        }
    }
    let rows = readme.lines().filter(|line| line.starts_with("| `") && line.contains(".yaml` |"));
    assert_eq!(rows.count(), count, "a row names a file that is not there");
}

#[test]
fn every_picture_is_there() {
    for part in text().split("![").skip(1) {
        let target = part.split("](").nth(1).and_then(|rest| rest.split(')').next());
        let target = target.expect("a picture has a target");
        let file = Path::new(env!("CARGO_MANIFEST_DIR")).join(target);
        assert!(file.is_file(), "{target} is not there");
    }
}
