//! The floors of the house: a module uses only modules below it.
//!
//! The order is read from the head of `src/lib.rs`, so that the rule is written in one place.

use std::fs;
use std::path::{Path, PathBuf};

/// Pairs that know each other on purpose: values of the tree are quantities, and quantities
/// are read from it.
const FRIENDS: [(&str, &str); 1] = [("tree", "quantity")];

/// Crates and calls that belong into one room only: what is searched for, and where it may stand.
const ROOMS: [(&str, &[&str], &str); 6] = [
    ("serde_yaml", &["scenario"], "only scenario reads YAML"),
    ("saphyr_parser", &["scenario"], "only scenario reads YAML"),
    ("std::fs", &["scenario", "render"], "scenario reads files and render writes them"),
    ("println!", &["cli", "main"], "only the command line prints"),
    ("eprintln!", &["cli", "main"], "only the command line prints"),
    ("plotters", &["render"], "only render draws"),
];

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

/// The floors in order, from the comment at the head of the library.
fn floors(library: &str) -> Vec<String> {
    let head: String = library
        .lines()
        .filter_map(|line| line.strip_prefix("//!"))
        .flat_map(|line| [line, " "])
        .collect();
    head.split('`')
        .find(|part| part.contains('<'))
        .map(|order| order.split('<').map(|name| name.trim().to_owned()).collect())
        .unwrap_or_default()
}

/// The module of the first floor that a file belongs to, and whether the file is its root.
fn room(source: &Path, file: &Path) -> (String, bool) {
    let inside = file.strip_prefix(source).unwrap_or(file);
    let names: Vec<String> = inside
        .components()
        .map(|part| part.as_os_str().to_string_lossy().trim_end_matches(".rs").to_owned())
        .collect();
    let root = names.len() == 1 || (names.len() == 2 && names[1] == "mod");
    (names[0].clone(), root)
}

/// The names that follow `prefix` on a line of code: one, or the first of each path in braces.
fn names_after(code: &str, prefix: &str) -> Vec<String> {
    let name = |text: &str| -> String {
        text.trim_start().chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect()
    };
    let mut names = Vec::new();
    for (at, _) in code.match_indices(prefix) {
        let rest = &code[at + prefix.len()..];
        let Some(group) = rest.strip_prefix('{') else {
            names.push(name(rest));
            continue;
        };
        let mut depth = 0_i32;
        let mut start = 0;
        for (place, letter) in group.char_indices() {
            match letter {
                '{' => depth += 1,
                '}' if depth == 0 => {
                    names.push(name(&group[start..place]));
                    break;
                }
                '}' => depth -= 1,
                ',' if depth == 0 => {
                    names.push(name(&group[start..place]));
                    start = place + 1;
                }
                _ => {}
            }
        }
    }
    names.retain(|name| !name.is_empty());
    names
}

/// Statements of a file with the number of their first line: comments left out, groups in
/// braces of a `use` joined to one line.
fn statements(text: &str) -> Vec<(usize, String)> {
    let mut found: Vec<(usize, String)> = Vec::new();
    let mut open = false;
    for (number, line) in text.lines().enumerate() {
        let code = line.split("//").next().unwrap_or_default();
        if open {
            if let Some((_, whole)) = found.last_mut() {
                whole.push_str(code.trim());
                whole.push(' ');
            }
        } else {
            found.push((number + 1, code.to_owned()));
        }
        if !open && code.trim_start().starts_with("use ") && !code.contains(';') {
            open = true;
        } else if open && code.contains(';') {
            open = false;
        }
    }
    found
}

/// What a file uses of the other floors: line and name.
fn uses(text: &str, root: bool, floors: &[String]) -> Vec<(usize, String)> {
    let mut found = Vec::new();
    for (line, code) in statements(text) {
        for name in names_after(&code, "crate::") {
            found.push((line, name));
        }
        if root {
            for name in names_after(&code, "super::") {
                if floors.contains(&name) && !text.contains(&format!("mod {name};")) {
                    found.push((line, name));
                }
            }
        }
    }
    found
}

#[test]
fn no_module_climbs_above_its_floor() {
    let package = Path::new(env!("CARGO_MANIFEST_DIR"));
    let source = package.join("src");
    let library = fs::read_to_string(source.join("lib.rs")).unwrap();
    let floors = floors(&library);
    assert!(floors.len() > 10, "the floors are not found at the head of src/lib.rs: {floors:?}");
    let floor = |name: &str| floors.iter().position(|known| known == name);
    let mut files = Vec::new();
    rust_files(&source, &mut files);
    assert!(files.len() > 10, "the source is not found");
    let mut faults = Vec::new();
    let mut seen = 0;
    for file in files {
        let shown = file.strip_prefix(package).unwrap_or(&file).display().to_string();
        let (here, root) = room(&source, &file);
        if here == "lib" || here == "main" {
            continue;
        }
        let Some(own) = floor(&here) else {
            faults.push(format!("{shown}:1: `{here}` has no floor in src/lib.rs"));
            continue;
        };
        let text = fs::read_to_string(&file).unwrap();
        for (line, name) in uses(&text, root, &floors) {
            seen += 1;
            let friends = FRIENDS.contains(&(here.as_str(), name.as_str()))
                || FRIENDS.contains(&(name.as_str(), here.as_str()));
            match floor(&name) {
                Some(other) if other > own && !friends => {
                    faults
                        .push(format!("{shown}:{line}: `{here}` uses `{name}`, which lies above"));
                }
                Some(_) => {}
                None => faults.push(format!("{shown}:{line}: `crate::{name}` is no floor")),
            }
        }
    }
    assert!(seen > 10, "the uses are not found");
    assert!(faults.is_empty(), "\n{}", faults.join("\n"));
}

#[test]
fn each_trade_stays_in_its_room() {
    let package = Path::new(env!("CARGO_MANIFEST_DIR"));
    let source = package.join("src");
    let mut files = Vec::new();
    rust_files(&source, &mut files);
    let mut faults = Vec::new();
    for file in files {
        let shown = file.strip_prefix(package).unwrap_or(&file).display().to_string();
        let (here, _) = room(&source, &file);
        let text = fs::read_to_string(&file).unwrap();
        for (number, line) in text.lines().enumerate() {
            let code = line.split("//").next().unwrap_or_default();
            for (word, rooms, reason) in ROOMS {
                let whole = code.match_indices(word).any(|(at, _)| {
                    !code[..at].ends_with(|c: char| c.is_alphanumeric() || c == '_')
                });
                if whole && !rooms.contains(&here.as_str()) {
                    faults.push(format!("{shown}:{}: {word}: {reason}", number + 1));
                }
            }
        }
    }
    assert!(faults.is_empty(), "\n{}", faults.join("\n"));
}

#[test]
fn the_reader_of_uses_sees_what_it_should() {
    let names =
        names_after("use crate::{tree::{Node, Fields}, quantity, signal::Signal};", "crate::");
    assert_eq!(names, ["tree", "quantity", "signal"]);
    assert_eq!(names_after("let x = crate::model::build();", "crate::"), ["model"]);
    let text = "//! Head.\nuse crate::{\n    model::Model,\n    tree, // not crate::render\n};\n";
    let floors = ["tree".to_owned(), "model".to_owned()];
    assert_eq!(uses(text, false, &floors), [(2, "model".to_owned()), (2, "tree".to_owned())]);
    assert_eq!(uses("use super::model;", true, &floors), [(1, "model".to_owned())]);
    assert!(uses("use super::model;", false, &floors).is_empty());
}
