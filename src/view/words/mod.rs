//! Every sentence that the screens say with figures or names in it: one
//! function each, English.

mod act;
pub mod office;
mod visit;
mod weighing;

pub use act::*;
pub use visit::*;
pub use weighing::*;

/// A cause as a sentence: capital first, full stop last.
pub fn sentence(cause: &str) -> String {
    let text = super::format::capital(cause.trim());
    if text.ends_with(['.', '!', '?']) || text.is_empty() { text } else { text + "." }
}

pub fn today() -> String {
    "today".to_owned()
}

pub fn to_complete() -> String {
    "to complete".to_owned()
}
