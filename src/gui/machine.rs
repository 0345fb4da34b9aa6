//! What the desk needs of the machine: a folder for documents, and a way to
//! hand a file to the platform.

use crate::view::DeskOptions;
use std::path::{Path, PathBuf};

/// Whether there is a display to open a window on. Elsewhere than on Linux the platform says so itself.
pub fn has_display() -> bool {
    let set = |name: &str| std::env::var_os(name).is_some_and(|value| !value.is_empty());
    !cfg!(target_os = "linux") || set("DISPLAY") || set("WAYLAND_DISPLAY") || set("WAYLAND_SOCKET")
}

/// The machine's own: its documents folder, its programs.
pub fn desk_options(documents: Option<PathBuf>) -> DeskOptions {
    DeskOptions { documents: documents.unwrap_or_else(documents_folder), open: Box::new(open) }
}

/// The platform's folder for documents, else the home, else here.
fn documents_folder() -> PathBuf {
    let user = directories::UserDirs::new();
    let folder = user.as_ref().and_then(|user| user.document_dir().map(Path::to_path_buf));
    folder.or_else(|| user.map(|user| user.home_dir().to_path_buf())).unwrap_or_else(|| PathBuf::from("."))
}

fn open(path: &Path) -> Result<(), String> {
    opener::open(path).map_err(|e| e.to_string())
}
