//! Every check against a value from outside, through the whole program, as one table.
//!
//! `cargo test --release --test program verification_table -- --ignored` writes the table to
//! `output/verification.md` and `output/verification.csv`. With `LODESHAFT_WRITE_VERIFICATION=1`
//! it also writes the README's summary anew. Without `--ignored` the table is worked out and held
//! to its tolerances and to that summary. The cases are those of the tests beside.

mod coupling;
mod fatigue;
mod fluxes;
mod friction;
mod gears;
mod heat;
mod limits;
mod machines;
mod sheet;
mod slip;
mod starts;
mod units;
mod vibration;
mod wind;

use crate::helper::{Folder, call};
use serde_json::Value;
use sheet::{Case, Row};
use std::fmt::Write as _;
use std::fs;
use std::path::{Path, PathBuf};

const BEGIN: &str = "<!-- verification: made by tests/program/verification/mod.rs -->\n";
const END: &str = "<!-- end of the verification -->\n";

/// Runs the only study of a train and returns its answer.
fn study(train: &str, study: &str) -> Value {
    let duration = if train.contains("duration:") { "" } else { "duration: 1 s\n" };
    let folder = Folder::new();
    let text = format!(
        "lodeshaft: 1\ntitle: a handbook case\n{duration}{train}\nstudies: {{ it: {study} }}\n"
    );
    folder.write("case.yaml", &text);
    let arguments = ["study", "case.yaml", "--out", "out", "--format", "json", "--quiet"];
    let outcome = call(folder, &arguments, "");
    assert!(matches!(outcome.status, Some(0 | 1)), "{}\n{text}", outcome.stderr);
    outcome.at(&["studies", "it"])
}

/// All cases, chapter by chapter.
fn cases() -> Vec<Case> {
    [
        coupling::cases,
        limits::cases,
        slip::cases,
        gears::cases,
        heat::cases,
        starts::cases,
        machines::cases,
        fluxes::cases,
        friction::cases,
        vibration::cases,
        fatigue::cases,
        wind::cases,
        units::cases,
    ]
    .iter()
    .flat_map(|chapter| chapter())
    .collect()
}

/// All lines in the order of the cases.
fn rows() -> Vec<Row> {
    let cases = cases();
    let threads = std::thread::available_parallelism().map_or(1, usize::from);
    let share = cases.len().div_ceil(threads).max(1);
    std::thread::scope(|scope| {
        let parts: Vec<_> = cases
            .chunks(share)
            .map(|part| scope.spawn(|| part.iter().flat_map(Case::rows).collect::<Vec<_>>()))
            .collect();
        parts.into_iter().flat_map(|part| part.join().unwrap()).collect()
    })
}

/// Chapters in order, each with its lines.
fn chapters(rows: &[Row]) -> Vec<&[Row]> {
    rows.chunk_by(|a, b| a.chapter == b.chapter).collect()
}

/// Text that may stand in a cell.
fn cell(text: &str) -> String {
    text.replace('|', "\\|")
}

/// The summary that stands in the README.
fn summary(rows: &[Row]) -> String {
    let mut text = String::from("| chapter | checks | sources |\n| --- | --- | --- |\n");
    for chapter in chapters(rows) {
        let mut sources: Vec<&str> = Vec::new();
        for row in chapter {
            if !sources.contains(&row.source) {
                sources.push(row.source);
            }
        }
        let sources = sources.join("; ");
        let _ =
            writeln!(text, "| {} | {} | {} |", chapter[0].chapter, chapter.len(), cell(&sources));
    }
    let _ = writeln!(text, "| all | {} | |", rows.len());
    text
}

/// The whole table for reading.
fn markdown(rows: &[Row]) -> String {
    let failed = rows.iter().filter(|row| !row.holds()).count();
    let mut text = format!(
        "# Verification of lodeshaft {}\n\n{} checks, {failed} of them not met. Each ran through \
         the whole program, from scenario file to results.\n",
        env!("CARGO_PKG_VERSION"),
        rows.len(),
    );
    for chapter in chapters(rows) {
        let _ = write!(
            text,
            "\n## {}\n\n| what | source | expected | got | error | tolerance | verdict |\n\
             | --- | --- | --- | --- | --- | --- | --- |\n",
            chapter[0].chapter
        );
        for row in chapter {
            let verdict = if row.holds() { "met" } else { "NOT MET" };
            let cells = [
                &row.what,
                row.source,
                &row.expected,
                &row.got,
                &row.error,
                &row.tolerance,
                verdict,
            ]
            .map(cell);
            let _ = writeln!(text, "| {} |", cells.join(" | "));
        }
    }
    text
}

/// The whole table for machines.
fn table(rows: &[Row]) -> Vec<u8> {
    let mut writer = csv::Writer::from_writer(Vec::new());
    let head = ["chapter", "what", "source", "expected", "got", "error", "tolerance", "verdict"];
    writer.write_record(head).unwrap();
    for row in rows {
        let verdict = if row.holds() { "met" } else { "not met" };
        let cells: [&str; 8] = [
            row.chapter,
            &row.what,
            row.source,
            &row.expected,
            &row.got,
            &row.error,
            &row.tolerance,
            verdict,
        ];
        writer.write_record(cells).unwrap();
    }
    writer.into_inner().unwrap()
}

fn path(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join(name)
}

/// Fails with every line that does not hold.
#[track_caller]
fn hold(rows: &[Row]) {
    let failed: Vec<String> = rows
        .iter()
        .filter(|row| !row.holds())
        .map(|row| {
            format!(
                "{}: expected {}, got {}, error {}, tolerance {}",
                row.what, row.expected, row.got, row.error, row.tolerance
            )
        })
        .collect();
    assert!(failed.is_empty(), "{} checks do not hold:\n{}", failed.len(), failed.join("\n"));
}

#[test]
fn every_check_of_the_table_holds_and_the_readme_tells_them() {
    let rows = rows();
    hold(&rows);
    let readme = fs::read_to_string(path("README.md")).unwrap();
    let inside = readme.split_once(BEGIN).and_then(|(_, rest)| rest.split_once(END));
    let (told, _) = inside.expect("the README has the marks of the verification");
    assert_eq!(told.trim(), summary(&rows).trim(), "write it anew, see tests/program/verification");
}

#[test]
#[ignore = "writes the table into the folder `output`"]
fn verification_table() {
    let rows = rows();
    fs::create_dir_all(path("output")).unwrap();
    fs::write(path("output/verification.md"), markdown(&rows)).unwrap();
    fs::write(path("output/verification.csv"), table(&rows)).unwrap();
    if std::env::var_os("LODESHAFT_WRITE_VERIFICATION").is_some() {
        let readme = fs::read_to_string(path("README.md")).unwrap();
        let (before, rest) = readme.split_once(BEGIN).unwrap();
        let (_, after) = rest.split_once(END).unwrap();
        let text = format!("{before}{BEGIN}\n{}\n{END}{after}", summary(&rows));
        fs::write(path("README.md"), text).unwrap();
    }
    hold(&rows);
}

#[test]
fn a_wrong_value_does_not_hold() {
    // The sheet itself must be able to fail.
    let case = Case::new("none", "none", |sheet| {
        sheet.relative("off by two tolerances", "", [1.0, 1.0 + 2e-7], 1e-7);
        sheet.absolute("not a number", "", [1.0, f64::NAN], 1e-7);
        sheet.exact("words", "a", "b");
        sheet.bracket("no change of the outcome", String::new(), 1e-4, |_| true);
        sheet.relative("good", "", [1.0, 1.0 + 0.5e-7], 1e-7);
    });
    let holds: Vec<bool> = case.rows().iter().map(Row::holds).collect();
    assert_eq!(holds, [false, false, false, false, true]);
}
