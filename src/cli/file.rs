//! Files that commands write: whole, or not at all.

use anyhow::Context;
use std::io::Write;
use std::path::Path;

/// Writes `bytes` to `path` through a temporary file in the same folder:
/// written, synced, then named. What was there before stays until then.
pub fn write_whole(path: &Path, bytes: &[u8]) -> anyhow::Result<()> {
    let folder = match path.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder,
        _ => Path::new("."),
    };
    let cannot = || format!("{} could not be written; what was there before is unchanged", path.display());
    let mut builder = tempfile::Builder::new();
    builder.prefix(".bubblepoint-");
    // Temporary files are private; a record is for all whom the folder is for.
    #[cfg(unix)]
    builder.permissions(std::os::unix::fs::PermissionsExt::from_mode(0o666));
    let mut temporary = builder.tempfile_in(folder).with_context(cannot)?;
    temporary.write_all(bytes).with_context(cannot)?;
    temporary.as_file().sync_all().with_context(cannot)?;
    temporary.persist(path).map_err(|e| e.error).with_context(cannot)?;
    // The name itself is on disk once the folder is; folders cannot be synced everywhere.
    if let Ok(folder) = std::fs::File::open(folder) {
        let _ = folder.sync_all();
    }
    Ok(())
}

/// Makes a folder, with those above it, where it is missing.
pub fn make_folder(path: &Path) -> anyhow::Result<()> {
    std::fs::create_dir_all(path).with_context(|| format!("the folder {} could not be made", path.display()))
}
