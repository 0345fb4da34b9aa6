//! What the places show, as finished strings.
//!
//! [`Desk`] holds what the window is about: the page, the open visit, what is
//! being typed. A screen's file has its state, its messages, what a message
//! does, and the view model. Nothing here knows Slint, so that every flow can
//! be followed in a test.

mod bars;
mod desk;
pub mod format;
pub mod gases;
pub mod parse;
pub mod places;
pub mod shown;
pub mod visit;
mod why;
pub mod words;

pub use desk::{Desk, DeskOptions, Msg, Page};
pub use shown::Message;
