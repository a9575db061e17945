//! What `compare` was asked to compare: files, variants of a file, folders of results.

use super::compare::CompareArguments;
use super::{Common, path_and_value};
use std::path::{Path, PathBuf};

/// Longest name that is made from a change.
const LONGEST_NAME: usize = 28;

/// One of the runs to be compared.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Wanted {
    /// What it is called.
    pub name: String,
    /// The file or folder.
    pub path: PathBuf,
    /// True for a folder of results.
    pub kept: bool,
    /// Values set from outside.
    pub sets: Vec<(String, String)>,
}

/// A fault of the command line with its hint.
pub type Misuse = (String, &'static str);

/// The runs asked for, each with a name of its own.
///
/// # Errors
/// What is wrong with the command line.
pub fn wanted(arguments: &CompareArguments, common: &Common) -> Result<Vec<Wanted>, Misuse> {
    let mut wanted: Vec<Wanted> = Vec::new();
    let files: Vec<&PathBuf> = arguments.subjects.iter().filter(|path| !path.is_dir()).collect();
    if !common.sets.is_empty() && files.is_empty() {
        return Err((
            "--set changes scenarios, but only folders of results are named".to_owned(),
            "results stand as they are; name the scenario file to run it changed",
        ));
    }
    if !arguments.variants.is_empty() && files.len() != 1 {
        return Err((
            format!("--variant changes one scenario file, but {} are named", files.len()),
            "--set changes all of them alike",
        ));
    }
    // One file with --set: as typed, and changed.
    let as_typed = files.len() == 1
        && arguments.subjects.len() == 1
        && arguments.variants.is_empty()
        && !common.sets.is_empty();
    for path in &arguments.subjects {
        let kept = path.is_dir();
        let sets = if kept || as_typed { Vec::new() } else { common.sets.clone() };
        wanted.push(Wanted { name: stem(path), path: path.clone(), kept, sets });
        if as_typed {
            let name = change_name(&common.sets);
            let sets = common.sets.clone();
            wanted.push(Wanted { name, path: path.clone(), kept: false, sets });
        }
        if !kept {
            for text in &arguments.variants {
                let (name, changes) = variant(text)?;
                let name = name.unwrap_or_else(|| change_name(&changes));
                let sets = common.sets.iter().cloned().chain(changes).collect();
                wanted.push(Wanted { name, path: path.clone(), kept: false, sets });
            }
        }
    }
    if wanted.len() < 2 {
        return Err((
            "there is only one run; a comparison takes two or more".to_owned(),
            "name another scenario or folder of results, or change this one with --set or --variant",
        ));
    }
    make_unique(&mut wanted);
    Ok(wanted)
}

fn stem(path: &Path) -> String {
    if path == Path::new("-") {
        return "standard_input".to_owned();
    }
    let name = if path.is_dir() { path.file_name() } else { path.file_stem() };
    name.map_or_else(|| path.display().to_string(), |name| name.to_string_lossy().into_owned())
}

/// `heavy: bodies.hub.inertia=2 kg*m2; ...` with or without the name.
fn variant(text: &str) -> Result<(Option<String>, Vec<(String, String)>), Misuse> {
    let hint =
        "for example --variant \"heavy: bodies.rotor.inertia=4 kg*m2\"; changes are parted by `;`";
    let (name, changes) = match text.split_once(':') {
        // A colon within a value is no name's.
        Some((name, rest)) if !name.contains('=') => (Some(name.trim().to_owned()), rest),
        _ => (None, text),
    };
    if name.as_deref() == Some("") {
        return Err((format!("`{text}` has no name before its colon"), hint));
    }
    let changes: Result<Vec<_>, String> =
        changes.split(';').filter(|change| !change.trim().is_empty()).map(path_and_value).collect();
    match changes {
        Ok(changes) if !changes.is_empty() => Ok((name, changes)),
        _ => Err((format!("`{text}` is no change: it takes a dotted path, `=` and a value"), hint)),
    }
}

/// A short name for changes: the last words of the first path, and its value.
fn change_name(sets: &[(String, String)]) -> String {
    let Some((path, value)) = sets.first() else { return "changed".to_owned() };
    let last = path.rsplit('.').next().unwrap_or(path);
    let more = if sets.len() > 1 { " and more" } else { "" };
    let name = format!("{last} {value}{more}");
    if name.chars().count() <= LONGEST_NAME { name } else { format!("{last} changed") }
}

/// Names that stand twice are told apart: by the folder that holds them, else by number.
fn make_unique(wanted: &mut [Wanted]) {
    let names: Vec<String> = wanted.iter().map(|one| one.name.clone()).collect();
    let again = |name: &str| names.iter().filter(|other| *other == name).count() > 1;
    for one in wanted.iter_mut().filter(|one| again(&one.name)) {
        let above = one.path.parent().and_then(Path::file_name);
        if let (Some(above), true) = (above, one.sets.is_empty()) {
            one.name = format!("{}/{}", above.to_string_lossy(), one.name);
        }
    }
    for place in 0..wanted.len() {
        let (before, rest) = wanted.split_at_mut(place);
        let Some(one) = rest.first_mut() else { continue };
        let plain = one.name.clone();
        let mut number = 2;
        while before.iter().any(|other| other.name == one.name) {
            one.name = format!("{plain} {number}");
            number += 1;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use clap::Parser;

    fn ask(arguments: &[&str]) -> Result<Vec<Wanted>, Misuse> {
        let typed = ["lodeshaft", "compare"].iter().chain(arguments);
        let line = super::super::CommandLine::try_parse_from(typed).unwrap();
        match line.command {
            super::super::Command::Compare(compare) => wanted(&compare, &line.common),
            _ => panic!("another command"),
        }
    }

    fn names(arguments: &[&str]) -> Vec<String> {
        ask(arguments).unwrap().into_iter().map(|one| one.name).collect()
    }

    #[test]
    fn a_file_and_changes_make_two_runs() {
        let found = ask(&["a.yaml", "--set", "x.y=2 s"]).unwrap();
        assert!(found[0].sets.is_empty());
        assert_eq!(found[1].sets, [("x.y".to_owned(), "2 s".to_owned())]);
        assert_eq!(found[1].name, "y 2 s");
    }

    #[test]
    fn variants_have_names_and_several_changes() {
        let found =
            ask(&["a.yaml", "--variant", "hot: x.y=2; z=a:b", "--variant", "x.y=3"]).unwrap();
        assert_eq!(found.len(), 3);
        assert_eq!(found[1].name, "hot");
        assert_eq!(found[1].sets.len(), 2);
        assert_eq!(found[1].sets[1].1, "a:b");
        assert_eq!(found[2].name, "y 3");
    }

    #[test]
    fn names_that_stand_twice_are_told_apart() {
        assert_eq!(names(&["one/a.yaml", "two/a.yaml"]), ["one/a", "two/a"]);
        assert_eq!(names(&["a.yaml", "a.yaml"]), ["a", "a 2"]);
    }

    #[test]
    fn misuse_is_told() {
        assert!(ask(&["a.yaml"]).unwrap_err().0.contains("only one run"));
        assert!(
            ask(&["a.yaml", "b.yaml", "--variant", "x=1"]).unwrap_err().0.contains("2 are named")
        );
        assert!(ask(&["a.yaml", "--variant", "none"]).unwrap_err().0.contains("no change"));
        assert!(ask(&["a.yaml", "--variant", ": x=1"]).unwrap_err().0.contains("no name"));
    }
}
