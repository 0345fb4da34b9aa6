//! Reading the embedded tables. They are part of the program, so a fault in
//! one is a fault of the build: the tests look at every cell, and at run time
//! a cell that cannot be read is one that is not known.

use super::source::{Figure, source};
use crate::quantity::{Ratio, parse_decimal};

pub(super) struct Row {
    names: csv::StringRecord,
    cells: csv::StringRecord,
}

/// The rows under the table's header.
pub(super) fn rows(text: &'static str) -> Vec<Row> {
    let mut reader = csv::Reader::from_reader(text.as_bytes());
    let names = reader.headers().cloned().unwrap_or_default();
    reader.records().flatten().map(|cells| Row { names: names.clone(), cells }).collect()
}

impl Row {
    /// The cell under `name`; empty where there is none.
    pub(super) fn get(&self, name: &str) -> &str {
        let place = self.names.iter().position(|known| known == name);
        place.and_then(|place| self.cells.get(place)).unwrap_or("")
    }

    pub(super) fn number(&self, name: &str) -> Option<Ratio> {
        parse_decimal(self.get(name)).ok()
    }

    /// The value under `name` with the source named under `by`.
    pub(super) fn figure(&self, name: &str, by: &str) -> Option<Figure> {
        Some(Figure { value: self.number(name)?, source: source(self.get(by))? })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Every cell of every table: numbers are numbers, sources are known, and no value lacks its source.
    #[test]
    fn every_cell_can_be_read() {
        let tables = [
            (include_str!("data/substances.csv"), 40),
            (include_str!("data/blends.csv"), 60),
            (include_str!("data/properties.csv"), 100),
            (include_str!("data/saturation.csv"), 2005),
            (include_str!("data/second_densities.csv"), 12),
            (include_str!("data/sources.csv"), 41),
        ];
        let words = [
            "designation",
            "name",
            "formula",
            "cas",
            "annex",
            "composition",
            "role",
            "safety_class",
            "note",
            "eu573_listing",
            "us_regulated",
            "key",
            "standing",
            "citation",
            "source",
        ];
        for (text, count) in tables {
            let rows = rows(text);
            assert_eq!(rows.len(), count, "{}", &text[..40]);
            let free_sources = text.starts_with("designation,t_c,rho");
            for row in &rows {
                for (name, cell) in row.names.iter().zip(row.cells.iter()) {
                    if name.ends_with("source") && !free_sources {
                        assert!(cell.is_empty() || source(cell).is_some(), "{cell}");
                    } else if !words.contains(&name) && !cell.is_empty() {
                        assert!(parse_decimal(cell).is_ok(), "{name}: {cell}");
                    }
                }
            }
        }
    }

    #[test]
    fn no_value_of_a_substance_lacks_its_source() {
        for row in rows(include_str!("data/substances.csv")) {
            for name in ["odp", "ar4", "ar5", "ar6", "eu573", "eu590", "gb517", "us84"] {
                let by = format!("{name}_source");
                assert_eq!(row.get(name).is_empty(), row.get(&by).is_empty(), "{} {name}", row.get("designation"));
            }
        }
    }
}
