//! Files that must be refused, each with the exact words beside it: `NAME.yaml`, `NAME.txt`.

#![allow(clippy::unwrap_used, reason = "a test may stop here")]

use lodeshaft::scenario::load;
use std::fs;
use std::path::{Path, PathBuf};

fn files() -> Vec<PathBuf> {
    let mut files: Vec<_> = fs::read_dir("tests/rejected")
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|ending| ending == "yaml"))
        .collect();
    files.sort();
    files
}

fn refusal(file: &Path) -> String {
    match load(file, &[]) {
        Ok(_) => "accepted\n".to_owned(),
        Err(failure) => failure.render(),
    }
}

#[test]
fn each_bad_file_is_refused_in_the_words_beside_it() {
    let files = files();
    assert!(files.len() > 40, "only {} files were found", files.len());
    let mut wrong = String::new();
    for file in files {
        let said = refusal(&file);
        let expected = fs::read_to_string(file.with_extension("txt")).unwrap_or_default();
        if said != expected {
            wrong.push_str(&format!("--- {}\n{said}", file.display()));
        }
    }
    assert!(wrong.is_empty(), "said instead of what is expected:\n{wrong}");
}

#[test]
fn every_expected_message_has_its_file() {
    for entry in fs::read_dir("tests/rejected").unwrap() {
        let path = entry.unwrap().path();
        if path.extension().is_some_and(|ending| ending == "txt") {
            assert!(path.with_extension("yaml").exists(), "{}", path.display());
        }
    }
}
