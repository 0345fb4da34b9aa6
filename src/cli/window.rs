//! The window: without a command on the store that is there or a new one,
//! after the demonstration on that.

use super::Answer;
use std::path::Path;

#[cfg(feature = "gui")]
pub fn run(store: Option<&Path>) -> anyhow::Result<Answer> {
    use crate::store::OpenMode;
    // Without a display no store is made either.
    if !can_open() {
        return Err(crate::gui::WindowError::NoDisplay.into());
    }
    let app = super::App::open(&super::place::store_path_to_make(store)?, OpenMode::Create)?;
    crate::gui::open(app, None)?;
    Ok(Answer::well(String::new()))
}

#[cfg(not(feature = "gui"))]
pub fn run(_store: Option<&Path>) -> anyhow::Result<Answer> {
    anyhow::bail!("this build has no window; see bubblepoint --help for the commands")
}

/// Whether a window can be tried.
#[cfg(feature = "gui")]
pub fn can_open() -> bool {
    crate::gui::has_display()
}

#[cfg(not(feature = "gui"))]
pub fn can_open() -> bool {
    false
}

/// Opens the window on a store whose records go to a folder of their own.
#[cfg(feature = "gui")]
pub fn open_at(path: &Path, documents: &Path) -> anyhow::Result<()> {
    let app = super::App::open(path, crate::store::OpenMode::MustExist)?;
    Ok(crate::gui::open(app, Some(documents.to_owned()))?)
}

#[cfg(not(feature = "gui"))]
pub fn open_at(_path: &Path, _documents: &Path) -> anyhow::Result<()> {
    Ok(())
}
