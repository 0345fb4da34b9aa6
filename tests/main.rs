//! One integration binary.

mod reference;
