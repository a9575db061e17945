//! Runs the commands of the README's shell blocks against the built program.
//!
//! A line is one command. `cargo run --release --` and `lodeshaft` both mean the program;
//! `> FILE` keeps what it prints; `# exit status N` at the end is held to, 0 without it.
//! Commands that build or test the project itself are left to whoever runs this test.

use crate::text;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::Command;

/// Beginnings of commands that are not the program's.
const NOT_OURS: [&str; 5] = ["cargo test", "cargo build", "cargo install", ".ci/run", "git "];

/// One command of the README.
struct Line {
    arguments: Vec<String>,
    kept_in: Option<String>,
    status: i32,
    shown: String,
}

/// The lines of all blocks marked as shell.
fn shell_lines() -> Vec<String> {
    let mut lines = Vec::new();
    let mut inside = false;
    for line in text().lines() {
        match line.trim() {
            "```shell" => inside = true,
            "```" => inside = false,
            "" => {}
            command if inside => lines.push(command.to_owned()),
            _ => {}
        }
    }
    lines
}

/// Splits a command into words; quotes hold a word together.
fn words(command: &str) -> Vec<String> {
    let (mut words, mut word, mut quote) = (Vec::new(), String::new(), None);
    for letter in command.chars() {
        match (letter, quote) {
            (_, Some(mark)) if letter == mark => quote = None,
            ('"' | '\'', None) => quote = Some(letter),
            (' ', None) => {
                if !word.is_empty() {
                    words.push(std::mem::take(&mut word));
                }
            }
            _ => word.push(letter),
        }
    }
    if !word.is_empty() {
        words.push(word);
    }
    words
}

/// A line of the program's; `None` for one of another program.
fn ours(line: &str) -> Option<Line> {
    if NOT_OURS.iter().any(|other| line.starts_with(other)) {
        return None;
    }
    let (command, note) = line.split_once('#').unwrap_or((line, ""));
    let status = note.trim().strip_prefix("exit status ").map_or(0, |rest| {
        let number = rest.split(|c: char| !c.is_ascii_digit()).next().unwrap_or_default();
        number.parse().unwrap_or_else(|_| panic!("no number in `{line}`"))
    });
    let rest = command
        .strip_prefix("cargo run --release -- ")
        .or_else(|| command.strip_prefix("lodeshaft "))
        .unwrap_or_else(|| panic!("`{line}` is no command of the program"));
    let mut arguments = words(rest);
    let kept_in = arguments.iter().position(|word| word == ">").map(|place| {
        let file = arguments.remove(place + 1);
        arguments.truncate(place);
        file
    });
    Some(Line { arguments, kept_in, status, shown: line.to_owned() })
}

/// A folder with the scenarios in it, where the commands may write.
fn playground() -> PathBuf {
    let package = Path::new(env!("CARGO_MANIFEST_DIR"));
    let name = format!("readme-{}", std::process::id());
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    let scenarios = folder.join("scenarios");
    fs::create_dir_all(&scenarios).expect("a folder for the test can be made");
    fs::create_dir_all(folder.join("output")).expect("a folder for results can be made");
    for entry in fs::read_dir(package.join("scenarios")).expect("the scenarios can be read") {
        let path = entry.expect("an entry can be read").path();
        let to = scenarios.join(path.file_name().expect("a file has a name"));
        fs::copy(&path, to).expect("a scenario can be copied");
    }
    folder
}

#[test]
fn every_command_ends_with_its_status() {
    let folder = playground();
    let lines: Vec<Line> = shell_lines().iter().filter_map(|line| ours(line)).collect();
    assert!(lines.len() >= 8, "only {} commands are found", lines.len());
    for line in lines {
        let output = Command::new(env!("CARGO_BIN_EXE_lodeshaft"))
            .args(&line.arguments)
            .current_dir(&folder)
            .output()
            .expect("the program starts");
        let told = String::from_utf8_lossy(&output.stderr);
        assert_eq!(output.status.code(), Some(line.status), "{}\n{told}", line.shown);
        if let Some(file) = line.kept_in {
            fs::write(folder.join(file), &output.stdout).expect("the output can be kept");
        }
    }
    // A folder left behind harms nobody.
    let _ = fs::remove_dir_all(&folder);
}

#[test]
fn the_first_block_runs_the_main_job_and_the_tests() {
    let lines = shell_lines();
    assert_eq!(
        lines.first().map(String::as_str),
        Some("cargo run --release -- run scenarios/pump_start.yaml")
    );
    assert_eq!(lines.get(1).map(String::as_str), Some("cargo test --release"));
}

#[test]
fn every_command_of_the_program_is_listed() {
    let output = Command::new(env!("CARGO_BIN_EXE_lodeshaft")).arg("--help").output();
    let help = String::from_utf8(output.expect("the program starts").stdout).expect("UTF-8");
    let list = help.split("Commands:\n").nth(1).and_then(|rest| rest.split("\n\n").next());
    let names = list.expect("the help lists commands").lines().filter_map(|line| {
        let (indent, rest) = line.split_at_checked(2)?;
        // Longer explanations go on further in.
        (indent == "  " && !rest.starts_with(' ')).then(|| rest.split(' ').next())?
    });
    let names: Vec<&str> = names.filter(|name| *name != "help").collect();
    assert!(names.contains(&"run") && names.len() >= 6, "{names:?}");
    for name in names {
        assert!(text().contains(&format!("\n    lodeshaft {name}")), "{name} is not in the README");
    }
}

#[test]
fn the_example_of_the_file_runs() {
    let readme = text();
    let example = readme.split("```yaml\n").nth(1).and_then(|rest| rest.split("```").next());
    let name = format!("readme-example-{}", std::process::id());
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    fs::create_dir_all(&folder).expect("a folder for the test can be made");
    fs::write(folder.join("pump.yaml"), example.expect("the README has an example"))
        .expect("the example can be written");
    let output = Command::new(env!("CARGO_BIN_EXE_lodeshaft"))
        .args(["run", "pump.yaml", "--out", "out", "--quiet"])
        .current_dir(&folder)
        .output()
        .expect("the program starts");
    let told = String::from_utf8_lossy(&output.stderr).into_owned();
    // A folder left behind harms nobody.
    let _ = fs::remove_dir_all(&folder);
    assert_eq!(output.status.code(), Some(0), "{told}");
}

#[test]
fn quotes_hold_words_together() {
    assert_eq!(words("run a --set 'b=1 m' \"c d\""), ["run", "a", "--set", "b=1 m", "c d"]);
}
