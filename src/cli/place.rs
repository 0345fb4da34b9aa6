//! Where things are on this device.

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
