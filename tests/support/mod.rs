//! What several kinds of test stand on.

pub mod plant;
pub mod story;
