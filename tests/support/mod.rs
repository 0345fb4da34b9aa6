//! What several kinds of test stand on.

pub mod office;
pub mod plant;
pub mod story;
