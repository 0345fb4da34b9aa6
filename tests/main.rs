//! One integration binary.

mod app;
mod faults;
mod reference;
mod support;
