//! One process at a time in a folder of studies.
//!
//! Studies are kept on the way in files of fixed names, so that two processes in one folder would
//! spoil each other's. The lock is the system's own on an open file: it goes with the process,
//! however that ends, and nothing has to be cleaned up after a kill.

use std::fs::{self, File, OpenOptions, TryLockError};
use std::io::{self, Write};
use std::path::{Path, PathBuf};

/// The file that is locked.
pub const LOCK_FILE: &str = ".lodeshaft-lock";

/// How often a lock file that vanished under the hand is made anew.
const ATTEMPTS: u32 = 20;

/// A folder that is locked until this is dropped.
#[derive(Debug)]
pub struct Lock {
    file: File,
    path: PathBuf,
}

/// What came of asking for a folder.
#[derive(Debug)]
pub enum Asked {
    /// It is ours; `None` where the file system knows no locks.
    Ours(Option<Lock>),
    /// Another process has it, with the number that it left.
    Taken(Option<u32>),
}

/// Locks a folder, which must exist.
///
/// # Errors
/// The fault of the disk.
pub fn take(folder: &Path) -> io::Result<Asked> {
    let path = folder.join(LOCK_FILE);
    for _ in 0..ATTEMPTS {
        let file = OpenOptions::new().create(true).truncate(false).write(true).open(&path)?;
        match file.try_lock() {
            Ok(()) if is_at(&file, &path) => return Ok(Asked::Ours(Some(sign(file, path)))),
            // Its holder took the file away when it ended: this lock holds nobody off.
            Ok(()) => {}
            Err(TryLockError::WouldBlock) => return Ok(Asked::Taken(holder(&path))),
            Err(TryLockError::Error(error)) if error.kind() == io::ErrorKind::Unsupported => {
                return Ok(Asked::Ours(None));
            }
            Err(TryLockError::Error(error)) => return Err(error),
        }
    }
    Ok(Asked::Taken(None))
}

/// The process that holds a folder, if one does; its number is not always known.
pub fn taken(folder: &Path) -> Option<Option<u32>> {
    let path = folder.join(LOCK_FILE);
    let file = OpenOptions::new().write(true).open(&path).ok()?;
    match file.try_lock() {
        Err(TryLockError::WouldBlock) => Some(holder(&path)),
        _ => None,
    }
}

/// Leaves the number of this process for messages; nothing depends on it.
fn sign(mut file: File, path: PathBuf) -> Lock {
    let _ = file.set_len(0).and_then(|()| writeln!(file, "{}", std::process::id()));
    Lock { file, path }
}

fn holder(path: &Path) -> Option<u32> {
    fs::read_to_string(path).ok()?.trim().parse().ok()
}

/// True when the open file is the one that stands at the path.
#[cfg(unix)]
fn is_at(file: &File, path: &Path) -> bool {
    use std::os::unix::fs::MetadataExt;
    match (file.metadata(), fs::metadata(path)) {
        (Ok(open), Ok(there)) => open.dev() == there.dev() && open.ino() == there.ino(),
        _ => false,
    }
}

#[cfg(not(unix))]
fn is_at(_: &File, path: &Path) -> bool {
    path.exists()
}

impl Drop for Lock {
    fn drop(&mut self) {
        // Removed while it is held, so that nobody's new file is taken away.
        if is_at(&self.file, &self.path) {
            let _ = fs::remove_file(&self.path);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_folder_is_held_by_one_and_free_afterwards() {
        let folder = std::env::temp_dir().join(format!("lodeshaft-lock-{}", std::process::id()));
        let _ = fs::remove_dir_all(&folder);
        fs::create_dir_all(&folder).unwrap();
        assert!(taken(&folder).is_none());
        let Asked::Ours(first) = take(&folder).unwrap() else { panic!("it is free") };
        if first.is_none() {
            return; // A file system without locks.
        }
        let own = std::process::id();
        assert!(matches!(take(&folder).unwrap(), Asked::Taken(Some(process)) if process == own));
        assert_eq!(taken(&folder), Some(Some(own)));
        drop(first);
        assert!(taken(&folder).is_none());
        assert!(!folder.join(LOCK_FILE).exists());
        // What a killed process leaves is a file that nobody holds.
        fs::write(folder.join(LOCK_FILE), "1\n").unwrap();
        assert!(matches!(take(&folder).unwrap(), Asked::Ours(Some(_))));
        fs::remove_dir_all(folder).unwrap();
    }
}
