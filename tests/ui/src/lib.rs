//! Opens the program's window without a display, draws it, and looks it over.
//!
//! Slint's platform and windows belong to one thread, so the checks in
//! `tests/main.rs` and the pictures of `src/bin/pictures.rs` run on one.

mod office;
mod picture;
mod place_scenes;
mod scenes;
mod sources;
mod sweep;
mod window;

pub use office::{OFFICE_PAGES, OfficePage, OfficeWindow, demonstration, empty, office, office_as};
pub use picture::{Picture, draw, save};
pub use scenes::{Scene, scenes};
pub use sources::{SlintFile, literals, raw_text, screens};
pub use sweep::{Acting, Fault, acting, sweep, texts};
pub use window::{
    DESK, PHONE, SIZES, Size, TABLET, TABLET_UPRIGHT, drag, field, mark_demonstration, open, prepare, press, press_key, settle,
};
