//! Files that commands write, with a sentence where that fails.

use anyhow::Context;
use std::path::Path;

/// As [`crate::app::write_whole`].
pub fn write_whole(path: &Path, bytes: &[u8]) -> anyhow::Result<()> {
    crate::app::write_whole(path, bytes)
        .with_context(|| format!("{} could not be written; what was there before is unchanged", path.display()))
}

/// Makes a folder, with those above it, where it is missing.
pub fn make_folder(path: &Path) -> anyhow::Result<()> {
    std::fs::create_dir_all(path).with_context(|| format!("the folder {} could not be made", path.display()))
}
