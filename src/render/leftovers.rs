//! Hidden folders beside a result: the one being written, and the one being replaced.
//!
//! They are named after their result (`.pump.lodeshaft-4711-0`) and say which process made
//! them, so that those of a killed run are told from those of a living one and cleaned.

use std::fs;
use std::io;
use std::path::{Path, PathBuf};
use std::time::{Duration, SystemTime};

/// The file by which a folder of results is known.
pub const MARKER_FILE: &str = ".lodeshaft";

/// First line of that file.
pub const MARKER: &str =
    "results of lodeshaft: the next run into this folder replaces it as a whole";

/// What hidden folders inside a result are named after.
pub const INSIDE: &str = "result";

/// The file of a hidden folder that says who made it.
const MAKER_FILE: &str = ".lodeshaft-process";

/// A hidden folder of a process that cannot be asked is given up after this time.
const GIVEN_UP: Duration = Duration::from_secs(24 * 3600);

/// The last part of a path as text.
pub fn file_name(target: &Path) -> String {
    target.file_name().map_or_else(String::new, |name| name.to_string_lossy().into_owned())
}

/// The name of a hidden folder of this process.
pub fn hidden_name(name: &str, count: u32) -> String {
    format!("{}{}-{count}", prefix(name), std::process::id())
}

fn prefix(name: &str) -> String {
    format!(".{name}.lodeshaft-")
}

/// True when a folder holds a result of this program.
pub fn is_ours(folder: &Path) -> bool {
    fs::read_to_string(folder.join(MARKER_FILE)).is_ok_and(|text| text.starts_with(MARKER))
}

/// Moves the result at the target out of the way and returns where it went.
pub fn set_aside(target: &Path) -> io::Result<PathBuf> {
    let name = file_name(target);
    let mut count = 0_u32;
    loop {
        let aside = target.with_file_name(format!("{}-old", hidden_name(&name, count)));
        if !aside.exists() {
            sign(target);
            fs::rename(target, &aside)?;
            return Ok(aside);
        }
        count += 1;
    }
}

/// Puts back a result that was set aside.
pub fn restore(aside: &Path, target: &Path) {
    if fs::rename(aside, target).is_ok() {
        unsign(target);
    }
}

/// Removes what killed runs left beside a target; a result set aside whose successor never
/// came is put back.
pub fn clean(target: &Path) {
    for folder in hidden(target) {
        if !is_abandoned(&folder) {
            continue;
        }
        if is_old(&folder) && !target.exists() {
            restore(&folder, target);
        } else {
            discard(&folder);
        }
    }
}

/// Removes a hidden folder; the file that says who made it goes last, so that a removal that is
/// killed on its way leaves a folder that can still be told and cleaned.
pub fn discard(folder: &Path) {
    for entry in fs::read_dir(folder).into_iter().flatten().flatten() {
        if entry.file_name() == MAKER_FILE {
            continue;
        }
        let path = entry.path();
        let _ = if path.is_dir() { fs::remove_dir_all(path) } else { fs::remove_file(path) };
    }
    let _ = fs::remove_dir_all(folder);
}

/// Removes what killed runs left in a folder that is written in place.
pub fn clean_inside(target: &Path) {
    for folder in hidden_in(target, INSIDE) {
        if is_abandoned(&folder) {
            discard(&folder);
        }
    }
}

/// True for the name of a hidden folder of a result that is written in place.
pub fn is_hidden_inside(name: &str) -> bool {
    name.starts_with(&prefix(INSIDE))
}

fn hidden(target: &Path) -> Vec<PathBuf> {
    target.parent().map_or_else(Vec::new, |parent| hidden_in(parent, &file_name(target)))
}

/// The hidden folders of a result that stand in `place`.
fn hidden_in(place: &Path, name: &str) -> Vec<PathBuf> {
    let prefix = prefix(name);
    let Ok(entries) = fs::read_dir(place) else { return Vec::new() };
    let mut folders: Vec<PathBuf> = entries
        .flatten()
        .filter(|entry| entry.file_name().to_string_lossy().starts_with(&prefix))
        .filter(|entry| entry.file_type().is_ok_and(|kind| kind.is_dir()))
        .map(|entry| entry.path())
        .collect();
    folders.sort();
    folders
}

fn is_old(folder: &Path) -> bool {
    file_name(folder).ends_with("-old")
}

/// Notes in a folder that this process has it in hand.
pub fn sign(folder: &Path) {
    let _ = fs::write(folder.join(MAKER_FILE), own_identity());
}

/// Takes the note away: the folder stands in its place, and the same run gives the same bytes.
pub fn unsign(folder: &Path) {
    let _ = fs::remove_file(folder.join(MAKER_FILE));
}

fn maker(folder: &Path) -> Option<String> {
    fs::read_to_string(folder.join(MAKER_FILE)).ok()
}

fn is_abandoned(folder: &Path) -> bool {
    match maker(folder).as_deref().and_then(parse) {
        Some((process, started, machine)) if machine == own_machine() && machine != "-" => {
            started_at(process) != Some(started.to_owned())
        }
        // Another machine, or a folder whose marker was not written yet: only time can tell.
        _ => newest(folder).is_some_and(|time| time.elapsed().is_ok_and(|age| age > GIVEN_UP)),
    }
}

fn newest(folder: &Path) -> Option<SystemTime> {
    let inside = fs::read_dir(folder).ok()?.flatten().filter_map(|entry| entry.metadata().ok());
    let itself = fs::metadata(folder).ok();
    inside.chain(itself).filter_map(|data| data.modified().ok()).max()
}

/// Process, its start and its machine as one line.
fn own_identity() -> String {
    let process = std::process::id();
    let started = started_at(process).unwrap_or_else(|| "-".to_owned());
    format!("process {process} started {started} on {}", own_machine())
}

fn parse(identity: &str) -> Option<(u32, &str, &str)> {
    let mut words = identity.split(' ');
    let (Some("process"), Some(process)) = (words.next(), words.next()) else { return None };
    let (Some("started"), Some(started)) = (words.next(), words.next()) else { return None };
    let (Some("on"), Some(machine)) = (words.next(), words.next()) else { return None };
    Some((process.parse().ok()?, started, machine))
}

/// When a living process was started, in ticks since the machine was; `None`: no such process.
///
/// The start tells a process from a later one of the same number (Linux: proc(5), field 22 of
/// `stat`, counted from behind the name in brackets, which may hold anything).
fn started_at(process: u32) -> Option<String> {
    let text = fs::read_to_string(format!("/proc/{process}/stat")).ok()?;
    let (_, behind_name) = text.rsplit_once(')')?;
    behind_name.split_whitespace().nth(19).map(str::to_owned)
}

/// The machine since its last start, containers told apart; `-` where that cannot be told.
fn own_machine() -> String {
    let boot = fs::read_to_string("/proc/sys/kernel/random/boot_id");
    let space = fs::read_link("/proc/self/ns/pid");
    match (boot, space) {
        (Ok(boot), Ok(space)) => format!("{}/{}", boot.trim(), space.display()),
        _ => "-".to_owned(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn bench(name: &str) -> PathBuf {
        let folder = std::env::temp_dir().join(format!("lodeshaft-{name}-{}", std::process::id()));
        let _ = fs::remove_dir_all(&folder);
        fs::create_dir_all(&folder).unwrap();
        folder
    }

    fn hide(target: &Path, name: &str, identity: &str) -> PathBuf {
        let folder = target.with_file_name(format!(".result.lodeshaft-{name}"));
        fs::create_dir(&folder).unwrap();
        fs::write(folder.join(MARKER_FILE), format!("{MARKER}\n")).unwrap();
        fs::write(folder.join(MAKER_FILE), identity).unwrap();
        folder
    }

    #[test]
    fn a_living_run_is_left_alone_and_a_dead_one_is_cleaned() {
        if own_machine() == "-" {
            return; // Processes can be asked on Linux only.
        }
        let bench = bench("leftovers");
        let target = bench.join("result");
        fs::create_dir(&target).unwrap();
        let living = hide(&target, "1-0", &own_identity());
        // No process has this number: Linux numbers end at 2^22.
        let dead = hide(&target, "2-0", &format!("process 4194305 started 1 on {}", own_machine()));
        // This number lives, but started at another time.
        let reused = format!("process {} started 1 on {}", std::process::id(), own_machine());
        let reused = hide(&target, "3-0", &reused);
        let elsewhere = hide(&target, "4-0", "process 1 started 1 on another/machine");
        clean(&target);
        assert!(living.exists() && elsewhere.exists());
        assert!(!dead.exists() && !reused.exists());
        fs::remove_dir_all(bench).unwrap();
    }

    #[test]
    fn a_result_whose_successor_never_came_is_put_back() {
        if own_machine() == "-" {
            return;
        }
        let bench = bench("put_back");
        let target = bench.join("result");
        let identity = format!("process 4194305 started 1 on {}", own_machine());
        let aside = hide(&target, "2-0-old", &identity);
        clean(&target);
        assert!(!aside.exists() && is_ours(&target));
        fs::remove_dir_all(bench).unwrap();
    }
}
