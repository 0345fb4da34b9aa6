//! The five kinds of failure that reach a person.

use super::Refusal;
use crate::store::StoreError;

/// Each is a finished sentence.
#[derive(Debug, thiserror::Error)]
pub enum AppError {
    /// Something typed cannot be read or is missing.
    #[error("{sentence}")]
    Input {
        /// Which field: `before`, `after`, `refrigerant`, …
        field: &'static str,
        sentence: String,
    },
    /// A rule for new entries forbids it. All reasons, the gravest first.
    #[error("{}", list(.0))]
    Refused(Vec<Refusal>),
    /// What was asked for is not in the store.
    #[error("There is no such {what} in this store.")]
    Unknown { what: &'static str },
    #[error(transparent)]
    Store(#[from] StoreError),
    /// A record could not be made.
    #[error("The record could not be made: {0}. Nothing was closed.")]
    Record(String),
    /// A record could not be put on paper.
    #[error("Nothing was printed: {0}.")]
    Print(#[from] crate::print::PrintError),
}

impl AppError {
    pub(super) fn input(field: &'static str, sentence: impl Into<String>) -> Self {
        Self::Input { field, sentence: sentence.into() }
    }
}

fn list(refusals: &[Refusal]) -> String {
    refusals.iter().map(ToString::to_string).collect::<Vec<_>>().join("\n")
}
