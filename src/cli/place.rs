//! Where things are on this device.

use super::file::make_folder;
use anyhow::Context;
use std::path::{Path, PathBuf};

/// The store that was named, or the one in the platform's data folder.
pub fn store_path(named: Option<&Path>) -> anyhow::Result<PathBuf> {
    if let Some(path) = named {
        return Ok(path.to_owned());
    }
    let folders = directories::ProjectDirs::from("", "", "Bubblepoint")
        .context("this device names no folder for program data; name the store with --store FILE")?;
    Ok(folders.data_dir().join("bubblepoint.db"))
}

/// As [`store_path`], for commands that make a missing store: on a new device
/// the folder for program data is made too. A folder that was named is not,
/// for its name may be a slip.
pub fn store_path_to_make(named: Option<&Path>) -> anyhow::Result<PathBuf> {
    let path = store_path(named)?;
    if let Some(folder) = path.parent().filter(|_| named.is_none()) {
        make_folder(folder)?;
    }
    Ok(path)
}
