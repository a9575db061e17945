//! Results in a folder that cannot be swapped: its content is, file by file.

use super::leftovers::{self, MARKER_FILE};
use std::fs;
use std::io;
use std::path::Path;

/// True when the target stands but cannot be renamed: it is a disk of its own (as a folder that
/// is lent to a container is), or its parent may not be written.
pub fn is_needed(target: &Path, parent: &Path) -> bool {
    if !target.is_dir() {
        return false;
    }
    let other_disk = match (device(target), device(parent)) {
        (Some(own), Some(above)) => own != above,
        _ => false,
    };
    other_disk || !may_write(parent)
}

#[cfg(unix)]
fn device(folder: &Path) -> Option<u64> {
    use std::os::unix::fs::MetadataExt;
    fs::metadata(folder).ok().map(|data| data.dev())
}

#[cfg(not(unix))]
fn device(_: &Path) -> Option<u64> {
    None
}

/// Tries it: rights alone do not tell.
fn may_write(folder: &Path) -> bool {
    let probe = folder.join(leftovers::hidden_name("probe", 0));
    let made = fs::create_dir(&probe);
    let _ = fs::remove_dir(&probe);
    match made {
        Ok(()) => true,
        Err(error) => !matches!(
            error.kind(),
            io::ErrorKind::PermissionDenied | io::ErrorKind::ReadOnlyFilesystem
        ),
    }
}

/// Replaces the content of the target by that of the folder made inside it.
///
/// The marker goes first, so that a result torn by a kill is known as ours and replaced.
pub fn fill(target: &Path, temporary: &Path) -> io::Result<()> {
    fs::rename(temporary.join(MARKER_FILE), target.join(MARKER_FILE))?;
    for entry in fs::read_dir(target)? {
        let entry = entry?;
        let name = entry.file_name();
        if name == MARKER_FILE || leftovers::is_hidden_inside(&name.to_string_lossy()) {
            continue;
        }
        if entry.file_type()?.is_dir() {
            fs::remove_dir_all(entry.path())?;
        } else {
            fs::remove_file(entry.path())?;
        }
    }
    leftovers::unsign(temporary);
    for entry in fs::read_dir(temporary)? {
        let entry = entry?;
        fs::rename(entry.path(), target.join(entry.file_name()))?;
    }
    fs::remove_dir(temporary)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn old_content_goes_and_new_comes() {
        let target = std::env::temp_dir().join(format!("lodeshaft-fill-{}", std::process::id()));
        let _ = fs::remove_dir_all(&target);
        let temporary = target.join(leftovers::hidden_name(leftovers::INSIDE, 0));
        fs::create_dir_all(&temporary).unwrap();
        fs::write(target.join("old.svg"), "old").unwrap();
        fs::write(temporary.join(MARKER_FILE), leftovers::MARKER).unwrap();
        fs::write(temporary.join("new.csv"), "new").unwrap();
        fill(&target, &temporary).unwrap();
        let mut names: Vec<_> =
            fs::read_dir(&target).unwrap().map(|entry| entry.unwrap().file_name()).collect();
        names.sort();
        assert_eq!(names, [MARKER_FILE, "new.csv"]);
        assert!(leftovers::is_ours(&target));
        fs::remove_dir_all(target).unwrap();
    }
}
