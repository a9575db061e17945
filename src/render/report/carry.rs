//! Takes tables of studies that are finished or begun over into a folder in the making.
//!
//! A run replaces its folder as a whole, but the studies below it may have taken hours.

use crate::render::folder::FolderFault;
use crate::render::leftovers;
use crate::render::study::folder::{MARK, NAME};
use serde_json::Value;
use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::Path;

/// Copies what is left of a study from a folder of results to the one in the making, so that its
/// finished runs are not made again.
///
/// # Errors
/// The fault of the disk.
pub fn study(from: &Path, to: &Path, name: &str) -> Result<(), FolderFault> {
    if !leftovers::is_ours(from) {
        return Ok(());
    }
    let told = |error| FolderFault::disk(&format!("the study `{name}`"), &error);
    for ending in ["csv", "json", "unfinished.csv"] {
        let file = format!("{name}.{ending}");
        let old = from.join(NAME).join(&file);
        if old.is_file() {
            let folder = to.join(NAME);
            fs::create_dir_all(&folder).map_err(told)?;
            fs::copy(&old, folder.join(&file)).map_err(told)?;
        }
    }
    Ok(())
}

/// Endings of the files of a study, the longest first.
const ENDINGS: [&str; 3] = [".unfinished.csv", ".csv", ".json"];

/// Takes the studies of a folder of results over to the one in the making and returns the names
/// of those that were left behind: finished ones of other work than `marks` tell by name.
///
/// Begun ones are always taken: their runs are lost otherwise, and whether they can go on is told
/// when they are to.
///
/// # Errors
/// The fault of the disk.
pub fn all(
    from: &Path,
    to: &Path,
    marks: &BTreeMap<String, String>,
) -> Result<Vec<String>, FolderFault> {
    if !leftovers::is_ours(from) {
        return Ok(Vec::new());
    }
    let folder = from.join(NAME);
    let mut left = Vec::new();
    for name in names(&folder) {
        let text = fs::read_to_string(folder.join(format!("{name}.json"))).unwrap_or_default();
        let answer: Value = serde_json::from_str(&text).unwrap_or(Value::Null);
        let mark = answer.get(MARK).and_then(Value::as_str);
        if text.is_empty() || mark.is_some() && mark == marks.get(&name).map(String::as_str) {
            study(from, to, &name)?;
            continue;
        }
        left.push(name);
    }
    begun(from, to)?;
    Ok(left)
}

/// Takes the journals of all begun studies over, whatever they belong to.
///
/// # Errors
/// The fault of the disk.
pub fn begun(from: &Path, to: &Path) -> Result<(), FolderFault> {
    if !leftovers::is_ours(from) {
        return Ok(());
    }
    let folder = from.join(NAME);
    for name in names(&folder) {
        let journal = format!("{name}.unfinished.csv");
        if folder.join(&journal).is_file() {
            let told = |error| FolderFault::disk(&format!("the study `{name}`"), &error);
            let place = to.join(NAME);
            fs::create_dir_all(&place).map_err(told)?;
            fs::copy(folder.join(&journal), place.join(&journal)).map_err(told)?;
        }
    }
    Ok(())
}

/// Names of all studies of which something stands in a folder.
fn names(folder: &Path) -> BTreeSet<String> {
    let Ok(entries) = fs::read_dir(folder) else { return BTreeSet::new() };
    entries
        .flatten()
        .filter_map(|entry| {
            let file = entry.file_name().into_string().ok()?;
            ENDINGS.iter().find_map(|ending| file.strip_suffix(ending)).map(str::to_owned)
        })
        .collect()
}
