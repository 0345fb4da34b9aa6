//! Headless tests of the screens.
