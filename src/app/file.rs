//! Files that are written: whole, or not at all.

use std::io::Write;
use std::path::Path;

/// Writes `bytes` to `path` through a temporary file in the same folder:
/// written, synced, then named. What was there before stays until then.
///
/// # Errors
/// The system's own; the file is then as it was.
pub fn write_whole(path: &Path, bytes: &[u8]) -> std::io::Result<()> {
    let folder = match path.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder,
        _ => Path::new("."),
    };
    let mut builder = tempfile::Builder::new();
    builder.prefix(".bubblepoint-");
    // Temporary files are private; a record is for all whom the folder is for.
    #[cfg(unix)]
    builder.permissions(std::os::unix::fs::PermissionsExt::from_mode(0o666));
    let mut temporary = builder.tempfile_in(folder)?;
    temporary.write_all(bytes)?;
    temporary.as_file().sync_all()?;
    temporary.persist(path).map_err(|e| e.error)?;
    // The name itself is on disk once the folder is; folders cannot be synced everywhere.
    if let Ok(folder) = std::fs::File::open(folder) {
        let _ = folder.sync_all();
    }
    Ok(())
}

/// As [`write_whole`], in a folder that is made, with those above it, where it is missing.
///
/// # Errors
/// As there.
pub fn file_away(path: &Path, bytes: &[u8]) -> std::io::Result<()> {
    if let Some(folder) = path.parent() {
        std::fs::create_dir_all(folder)?;
    }
    write_whole(path, bytes)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_file_is_written_whole_and_again() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("2026/Quay/record.pdf");
        assert!(write_whole(&path, b"one").is_err(), "there is no such folder");
        file_away(&path, b"one").unwrap();
        write_whole(&path, b"two").unwrap();
        assert_eq!(std::fs::read(&path).unwrap(), b"two");
        assert_eq!(std::fs::read_dir(path.parent().unwrap()).unwrap().count(), 1, "no temporary file is left");
    }
}
