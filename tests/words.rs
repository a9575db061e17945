//! What the text of the source must and must not hold.

use std::fs;
use std::path::{Path, PathBuf};

/// Longest file of source or tests, in lines.
const LONGEST: usize = 400;

/// Every Rust file below a folder.
fn rust_files(folder: &Path, found: &mut Vec<PathBuf>) {
    let Ok(entries) = fs::read_dir(folder) else { return };
    let mut paths: Vec<PathBuf> = entries.filter_map(|entry| Some(entry.ok()?.path())).collect();
    paths.sort();
    for path in paths {
        if path.is_dir() {
            rust_files(&path, found);
        } else if path.extension().is_some_and(|ending| ending == "rs") {
            found.push(path);
        }
    }
}

/// Every Rust file of the package with its shown name and text.
fn all_files() -> Vec<(String, String)> {
    let package = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut files = Vec::new();
    for folder in ["src", "tests", "benches"] {
        rust_files(&package.join(folder), &mut files);
    }
    assert!(files.len() > 10, "the source is not found");
    files
        .into_iter()
        .map(|file| {
            let shown = file.strip_prefix(package).unwrap_or(&file).display().to_string();
            let text = fs::read_to_string(&file).expect("a source file can be read");
            (shown, text)
        })
        .collect()
}

/// Lines of code that hold one of the words as a whole word; comments are left out.
fn lines_with(words: &[String]) -> Vec<String> {
    let joins = |c: char| c.is_alphanumeric() || c == '_';
    let mut found = Vec::new();
    for (shown, text) in all_files() {
        for (number, line) in text.lines().enumerate() {
            let code = line.split("//").next().unwrap_or_default();
            for word in words {
                let whole = code.match_indices(word.as_str()).any(|(at, _)| {
                    !code[..at].ends_with(joins) && !code[at + word.len()..].starts_with(joins)
                });
                if whole {
                    found.push(format!("{shown}:{}: {word}", number + 1));
                }
            }
        }
    }
    found
}

#[test]
fn no_file_is_too_long() {
    let long: Vec<String> = all_files()
        .iter()
        .map(|(shown, text)| (shown, text.lines().count()))
        .filter(|(_, lines)| *lines > LONGEST)
        .map(|(shown, lines)| format!("{shown}: {lines} lines, at most {LONGEST}"))
        .collect();
    assert!(long.is_empty(), "\n{}", long.join("\n"));
}

#[test]
fn every_file_says_what_it_is_for() {
    let silent: Vec<String> = all_files()
        .into_iter()
        .filter(|(_, text)| !text.starts_with("//! "))
        .map(|(shown, _)| format!("{shown}:1: begins without `//!`"))
        .collect();
    assert!(silent.is_empty(), "\n{}", silent.join("\n"));
}

#[test]
fn the_compiler_checks_all_memory() {
    // Put together here so that this file does not find itself.
    let found = lines_with(&[["un", "safe"].concat()]);
    assert!(found.is_empty(), "\n{}", found.join("\n"));
}

#[test]
fn nothing_is_left_for_later() {
    let marks = [["to", "do!"], ["unimple", "mented!"], ["db", "g!"], ["FIX", "ME"], ["TO", "DO"]];
    let found = lines_with(&marks.map(|halves| halves.concat()));
    assert!(found.is_empty(), "\n{}", found.join("\n"));
}
