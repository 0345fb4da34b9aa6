//! What holds for every history, tried on random ones.

mod conservation;
mod histories;
mod imports;
mod quantities;

/// So many cases each; failures are told on screen and not kept in files.
pub fn cases(cases: u32) -> proptest::test_runner::Config {
    proptest::test_runner::Config { cases, failure_persistence: None, ..proptest::test_runner::Config::default() }
}
