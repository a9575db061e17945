//! The folder of results: written beside its place, then put there as a whole.
//!
//! Nobody ever sees half a result: all files are written into a hidden folder beside the
//! target, which then takes the target's name. A folder that holds a result of ours is
//! replaced as a whole; any other folder with something in it is refused. A folder that cannot
//! be swapped (a disk of its own, a parent that may not be written) is filled in place.

use super::in_place;
use super::leftovers::{self, MARKER, MARKER_FILE};
use super::lock;
use std::fs::{self, File};
use std::io::{self, BufWriter};
use std::path::{Path, PathBuf};
use std::time::Duration;

/// How often the swap of folders is tried when another run does the same.
const ATTEMPTS: u32 = 50;

/// How often a place that looks like another's is looked at.
const LOOKS: u32 = 5;

/// Why results could not be written.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FolderFault {
    /// One sentence, lower case at the start, without a full stop.
    pub message: String,
    /// What to do about it.
    pub hint: Option<String>,
}

impl FolderFault {
    fn refused(target: &Path, what: &str) -> Self {
        Self {
            message: format!("`{}` {what}", target.display()),
            hint: Some("name another folder with --out".to_owned()),
        }
    }

    /// Studies of another process are under way in a folder of results.
    pub fn in_use(shown: &Path, process: Option<u32>) -> Self {
        let who = process.map_or_else(String::new, |number| format!(" (process {number})"));
        Self {
            message: format!(
                "`{}` is in use: studies of another process{who} are under way in it",
                shown.display()
            ),
            hint: Some("wait for its end, or name another folder with --out".to_owned()),
        }
    }

    /// A fault of the disk while `what` was done.
    pub fn disk(what: &str, error: &io::Error) -> Self {
        let told = match error.kind() {
            io::ErrorKind::StorageFull => "the disk is full".to_owned(),
            io::ErrorKind::PermissionDenied => "permission denied".to_owned(),
            io::ErrorKind::ReadOnlyFilesystem => "the disk is read-only".to_owned(),
            io::ErrorKind::QuotaExceeded => "the disk quota is used up".to_owned(),
            io::ErrorKind::NotADirectory => "a part of the path is a file".to_owned(),
            _ => error.to_string(),
        };
        Self { message: format!("cannot write {what}: {told}"), hint: None }
    }
}

/// What stands at the place of the results.
enum Place {
    Free,
    EmptyFolder,
    Ours,
    Foreign(&'static str),
}

/// A folder of results in the making; it vanishes unless it is committed.
#[derive(Debug)]
pub struct Folder {
    /// The target cannot be swapped, so its content is.
    in_place: bool,
    /// As the user named it, for messages.
    shown: PathBuf,
    target: PathBuf,
    temporary: PathBuf,
    /// Parents that were made for it and go again when nothing comes of it.
    made: Vec<PathBuf>,
    /// Results that were moved out of the way for it.
    aside: Vec<PathBuf>,
    committed: bool,
}

impl Folder {
    /// Opens a folder of results beside its place.
    ///
    /// # Errors
    /// A place that is taken by something else, or a fault of the disk.
    pub fn open(shown: &Path) -> Result<Self, FolderFault> {
        let target = resolve(shown)?;
        let parent = target.parent().map(Path::to_path_buf).unwrap_or_default();
        let name = leftovers::file_name(&target);
        if let Place::Foreign(what) = look(&target) {
            return Err(FolderFault::refused(shown, what));
        }
        is_free(&target, shown)?;
        let told = |error: io::Error| {
            FolderFault::disk(&format!("the folder `{}`", shown.display()), &error)
        };
        let mut made = Vec::new();
        make_parents(&parent, &mut made).map_err(told)?;
        leftovers::clean(&target);
        let in_place = in_place::is_needed(&target, &parent);
        let (beside, name) = if in_place {
            leftovers::clean_inside(&target);
            (target.clone(), leftovers::INSIDE.to_owned())
        } else {
            (parent, name)
        };
        let mut folder = Self {
            in_place,
            shown: shown.to_path_buf(),
            target,
            temporary: PathBuf::new(),
            made,
            aside: Vec::new(),
            committed: false,
        };
        for count in 0_u32.. {
            let temporary = beside.join(leftovers::hidden_name(&name, count));
            match fs::create_dir(&temporary) {
                Ok(()) => {
                    folder.temporary = temporary;
                    break;
                }
                Err(error) if error.kind() == io::ErrorKind::AlreadyExists => {}
                Err(error) => return Err(told(error)),
            }
        }
        leftovers::sign(&folder.temporary);
        fs::write(folder.temporary.join(MARKER_FILE), format!("{MARKER}\n")).map_err(told)?;
        Ok(folder)
    }

    /// The folder as the user named it.
    pub fn shown(&self) -> &Path {
        &self.shown
    }

    /// Where the files are written until the folder is committed.
    pub fn path(&self) -> &Path {
        &self.temporary
    }

    /// Creates a file in it.
    ///
    /// # Errors
    /// The fault of the disk.
    pub fn create(&self, name: &str) -> Result<BufWriter<File>, FolderFault> {
        File::create(self.temporary.join(name))
            .map(|file| BufWriter::with_capacity(1 << 16, file))
            .map_err(|error| FolderFault::disk(&format!("`{name}`"), &error))
    }

    /// Writes a whole file into it.
    ///
    /// # Errors
    /// The fault of the disk.
    pub fn write(&self, name: &str, content: &[u8]) -> Result<(), FolderFault> {
        fs::write(self.temporary.join(name), content)
            .map_err(|error| FolderFault::disk(&format!("`{name}`"), &error))
    }

    /// Puts the folder in its place.
    ///
    /// # Errors
    /// A fault of the disk, or a place that has meanwhile been taken by something else.
    pub fn commit(mut self) -> Result<(), FolderFault> {
        is_free(&self.target, &self.shown)?;
        if self.in_place {
            in_place::fill(&self.target, &self.temporary).map_err(|error| {
                FolderFault::disk(&format!("the folder `{}`", self.shown.display()), &error)
            })?;
            self.committed = true;
            return Ok(());
        }
        let told = |error: &io::Error, shown: &Path| {
            FolderFault::disk(&format!("the folder `{}`", shown.display()), error)
        };
        for attempt in 0..ATTEMPTS {
            match look(&self.target) {
                Place::Foreign(what) => return Err(FolderFault::refused(&self.shown, what)),
                Place::Ours => match leftovers::set_aside(&self.target) {
                    Ok(aside) => self.aside.push(aside),
                    Err(error) if error.kind() == io::ErrorKind::NotFound => {}
                    Err(error) => return Err(told(&error, &self.shown)),
                },
                Place::EmptyFolder => {
                    // Some systems do not rename onto an empty folder.
                    let _ = fs::remove_dir(&self.target);
                }
                Place::Free => {}
            }
            match fs::rename(&self.temporary, &self.target) {
                Ok(()) => {
                    self.committed = true;
                    leftovers::unsign(&self.target);
                    return Ok(());
                }
                Err(error) if attempt + 1 == ATTEMPTS => return Err(told(&error, &self.shown)),
                Err(error) => match error.kind() {
                    // Another run was faster: its result is replaced in turn.
                    io::ErrorKind::AlreadyExists
                    | io::ErrorKind::DirectoryNotEmpty
                    | io::ErrorKind::NotADirectory => {}
                    _ => return Err(told(&error, &self.shown)),
                },
            }
        }
        Err(FolderFault::refused(&self.shown, "is being written by other runs"))
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        if !self.committed
            && let Some(aside) = self.aside.pop()
        {
            leftovers::restore(&aside, &self.target);
        }
        for aside in &self.aside {
            leftovers::discard(aside);
        }
        if self.committed {
            return;
        }
        if !self.temporary.as_os_str().is_empty() {
            leftovers::discard(&self.temporary);
        }
        for parent in self.made.iter().rev() {
            // Stays when something else has come into it.
            let _ = fs::remove_dir(parent);
        }
    }
}

/// Fails when studies of another process are under way in a folder of results.
fn is_free(target: &Path, shown: &Path) -> Result<(), FolderFault> {
    match lock::taken(&target.join(super::study::folder::NAME)) {
        Some(process) => Err(FolderFault::in_use(shown, process)),
        None => Ok(()),
    }
}

/// Makes sure that a place is a folder of results to which files can be added, and returns it.
///
/// # Errors
/// A place that is taken by something else, or a fault of the disk.
pub fn settle(shown: &Path) -> Result<PathBuf, FolderFault> {
    let target = resolve(shown)?;
    let told =
        |error: io::Error| FolderFault::disk(&format!("the folder `{}`", shown.display()), &error);
    match look(&target) {
        Place::Foreign(what) => return Err(FolderFault::refused(shown, what)),
        Place::Ours => return Ok(target),
        Place::Free | Place::EmptyFolder => {}
    }
    fs::create_dir_all(&target).map_err(told)?;
    fs::write(target.join(MARKER_FILE), format!("{MARKER}\n")).map_err(told)?;
    Ok(target)
}

/// The place that a path means, links followed and `.` and `..` resolved.
fn resolve(shown: &Path) -> Result<PathBuf, FolderFault> {
    if shown.as_os_str().is_empty() {
        return Err(FolderFault::refused(shown, "is no name of a folder"));
    }
    let told =
        |error: io::Error| FolderFault::disk(&format!("the folder `{}`", shown.display()), &error);
    match fs::canonicalize(shown) {
        Ok(target) if target.parent().is_none() => {
            Err(FolderFault::refused(shown, "is the root of the disk"))
        }
        Ok(target) => Ok(target),
        Err(error) if error.kind() == io::ErrorKind::NotFound => {
            if shown.file_name().is_none() || fs::symlink_metadata(shown).is_ok() {
                return Err(FolderFault::refused(shown, "leads nowhere"));
            }
            std::path::absolute(shown).map_err(told)
        }
        Err(error) => Err(told(error)),
    }
}

/// What stands at the target; a look while another run swaps folders is taken again.
fn look(target: &Path) -> Place {
    for _ in 0..LOOKS {
        match look_once(target) {
            Place::Foreign(_) => std::thread::sleep(Duration::from_millis(2)),
            place => return place,
        }
    }
    look_once(target)
}

fn look_once(target: &Path) -> Place {
    if !target.exists() {
        return Place::Free;
    }
    if !target.is_dir() {
        return Place::Foreign("is a file, not a folder");
    }
    match fs::read_dir(target) {
        Err(_) => Place::Foreign("cannot be read"),
        Ok(entries) => {
            let mut entries = entries
                .flatten()
                .filter(|entry| !leftovers::is_hidden_inside(&entry.file_name().to_string_lossy()));
            if entries.next().is_none() {
                Place::EmptyFolder
            } else if leftovers::is_ours(target) {
                Place::Ours
            } else {
                Place::Foreign("holds files that are no results of this program; it is left alone")
            }
        }
    }
}

fn make_parents(parent: &Path, made: &mut Vec<PathBuf>) -> io::Result<()> {
    if parent.as_os_str().is_empty() || parent.is_dir() {
        return Ok(());
    }
    if let Some(above) = parent.parent() {
        make_parents(above, made)?;
    }
    match fs::create_dir(parent) {
        Ok(()) => made.push(parent.to_path_buf()),
        Err(error) if error.kind() == io::ErrorKind::AlreadyExists && parent.is_dir() => {}
        Err(error) => return Err(error),
    }
    Ok(())
}
