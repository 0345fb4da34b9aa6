//! Where a figure comes from, and how far it can be trusted.

use super::table;
use crate::quantity::Ratio;
use std::fmt;
use std::sync::LazyLock;

/// How a source was read.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Standing {
    /// The text or the data itself.
    Read,
    /// A transcription by others.
    SecondHand,
    /// Not checked against the text.
    FromMemory,
    /// Worked out by a fluid-property library.
    Computed,
    /// True by definition.
    Definition,
}

/// A text, a table or a data set that gave a value.
#[derive(Debug, PartialEq, Eq)]
pub struct Source {
    key: String,
    citation: String,
    standing: Standing,
}

impl Source {
    pub fn key(&self) -> &str {
        &self.key
    }

    /// The article, table or data set, without its standing.
    pub fn citation(&self) -> &str {
        &self.citation
    }

    pub fn standing(&self) -> Standing {
        self.standing
    }

    /// Values of a standard that were not read in the standard itself.
    pub fn asks_for_a_check(&self) -> bool {
        matches!(self.standing, Standing::SecondHand | Standing::FromMemory)
    }
}

/// The citation with what a reader must know of it: "(from memory)".
impl fmt::Display for Source {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.citation)?;
        match self.standing {
            Standing::FromMemory => f.write_str(" (from memory)"),
            Standing::SecondHand => f.write_str(" (second-hand)"),
            Standing::Computed => f.write_str(" (computed)"),
            Standing::Read | Standing::Definition => Ok(()),
        }
    }
}

/// A value with its source, as the exact decimal the source prints.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Figure {
    pub value: Ratio,
    pub source: &'static Source,
}

impl Figure {
    /// For physics, where 53 bits are plenty.
    pub fn as_f64(self) -> f64 {
        float(self.value)
    }
}

/// The nearest float of a ratio. Only for physics, never for a comparison with a legal limit.
pub(super) fn float(value: Ratio) -> f64 {
    *value.numer() as f64 / *value.denom() as f64
}

pub(super) static SOURCES: LazyLock<Vec<Source>> = LazyLock::new(|| {
    let mut sources = Vec::new();
    for row in table::rows(include_str!("data/sources.csv")) {
        let standing = match row.get("standing") {
            "read" => Standing::Read,
            "second-hand" => Standing::SecondHand,
            "computed" => Standing::Computed,
            "definition" => Standing::Definition,
            // An unknown word is trusted least.
            _ => Standing::FromMemory,
        };
        sources.push(Source { key: row.get("key").to_owned(), citation: row.get("citation").to_owned(), standing });
    }
    sources
});

pub(super) fn source(key: &str) -> Option<&'static Source> {
    SOURCES.iter().find(|source| source.key == key)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn memory_is_marked() {
        assert_eq!(source("eu517-memory").unwrap().to_string(), "Regulation (EU) No 517/2014, Annexes II and IV (from memory)");
        assert_eq!(source("mp-a-i").unwrap().to_string(), "Montreal Protocol, Annex A, group I");
        assert!(source("ashrae34-memory").unwrap().asks_for_a_check());
        assert!(!source("imc-1103.1").unwrap().asks_for_a_check());
    }

    #[test]
    fn keys_are_unique() {
        for (place, one) in SOURCES.iter().enumerate() {
            assert!(!SOURCES[place + 1..].iter().any(|other| other.key == one.key), "{}", one.key);
        }
    }
}
