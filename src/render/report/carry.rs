//! Takes tables of studies that are finished or begun over into a folder in the making.

use crate::render::folder::FolderFault;
use crate::render::leftovers;
use crate::render::study::folder::NAME;
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
