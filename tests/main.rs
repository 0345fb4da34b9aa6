//! One integration binary; this is its table of contents.

mod app;
mod architecture;
mod cli;
mod faults;
mod print;
mod property;
mod reference;
mod support;
