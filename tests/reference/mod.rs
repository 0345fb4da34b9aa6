//! Published figures, one file per source; `README.md` says how to add one.

mod ahri_guideline_k;
mod ashrae_handbook;
mod blends;
mod cfr_40_82_156;
mod cfr_40_leak_rates;
mod cfr_49_173;
mod co2_equivalent_tables;
mod coolprop;
mod epa_reference_table;
mod eu_2024_573;
mod eu_2024_590;
mod eu_boundaries;
mod ipcc;
mod montreal_annexes;
mod ozone_secretariat;
mod pressure_and_vacuum;
mod regime_changes;
mod rsif_table_a;
mod stories;
mod uk_factors;
mod un_p200;

use bubblepoint::gas::{Gas, find};
use bubblepoint::quantity::{Ratio, parse_decimal};
use std::collections::BTreeMap;

/// A line of a source's table.
pub struct Row(BTreeMap<String, String>);

/// The lines of an embedded table, at least one.
pub fn table(text: &str) -> Vec<Row> {
    let mut reader = csv::Reader::from_reader(text.as_bytes());
    let rows: Vec<Row> = reader.deserialize().map(|row| Row(row.unwrap())).collect();
    assert!(!rows.is_empty());
    rows
}

impl Row {
    pub fn text(&self, name: &str) -> &str {
        self.0.get(name).unwrap_or_else(|| panic!("no column {name}"))
    }

    pub fn has(&self, name: &str) -> bool {
        !self.text(name).is_empty()
    }

    pub fn number(&self, name: &str) -> Ratio {
        parse_decimal(self.text(name)).unwrap()
    }

    pub fn float(&self, name: &str) -> f64 {
        self.text(name).parse().unwrap()
    }

    /// The gas in the first column that names one.
    pub fn gas(&self) -> &'static Gas {
        let name = self.0.get("gas").or_else(|| self.0.get("substance")).unwrap();
        find(name).unwrap_or_else(|| panic!("{name} is not in the catalogue"))
    }

    /// Decimals that the source prints under `name`.
    pub fn places(&self, name: &str) -> u32 {
        self.text(name).split_once('.').map_or(0, |(_, part)| u32::try_from(part.len()).unwrap())
    }
}

/// Within `percent` of the printed value.
pub fn close(ours: f64, printed: f64, percent: f64, what: &str) {
    assert!((ours / printed - 1.0).abs() * 100.0 <= percent, "{what}: ours {ours}, printed {printed}, allowed {percent} %");
}

/// Within `tolerance` of the printed value, exactly compared.
pub fn within(ours: Ratio, printed: Ratio, tolerance: Ratio) -> bool {
    let difference = ours - printed;
    difference <= tolerance && -difference <= tolerance
}
