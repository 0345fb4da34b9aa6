//! Generated code of the screens.
#![allow(clippy::all, unsafe_code)]
slint::include_modules!();
