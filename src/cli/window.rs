//! Without a command: the window, on the store that is there or a new one.

use super::Answer;
use std::path::Path;

#[cfg(feature = "gui")]
pub fn run(store: Option<&Path>) -> anyhow::Result<Answer> {
    use crate::store::OpenMode;
    use anyhow::Context;
    // Without a display no store is made either.
    if !crate::gui::has_display() {
        return Err(crate::gui::WindowError::NoDisplay.into());
    }
    let path = super::place::store_path(store)?;
    if let Some(folder) = path.parent().filter(|folder| !folder.as_os_str().is_empty() && store.is_none()) {
        std::fs::create_dir_all(folder).with_context(|| format!("cannot make the folder {}", folder.display()))?;
    }
    let app = super::open(store, OpenMode::Create)?;
    crate::gui::open(app, None)?;
    Ok(Answer::well(String::new()))
}

#[cfg(not(feature = "gui"))]
pub fn run(_store: Option<&Path>) -> anyhow::Result<Answer> {
    anyhow::bail!("this build has no window; see bubblepoint --help for the commands")
}
