//! Paper, read back by another library.

mod account;
mod files;
pub mod fixtures;
mod read_back;
mod service;
