//! Register lines in their file's own words: what is compared, and what is
//! shown where two lines differ. What a file has no column for says nothing.

use crate::ledger::{ApplianceFacts, CylinderFacts, Person, SiteFacts};
use crate::quantity::{Mass, Weighing, decimal_text, parse_decimal};
use chrono::NaiveDate;

/// One column of a line.
#[derive(Debug, PartialEq, Eq)]
pub(super) struct Column {
    pub name: &'static str,
    /// Alike where two ways of writing mean the same; empty for nothing.
    meaning: String,
    /// As a person reads it.
    shown: String,
}

/// A column in which two lines differ.
#[derive(Debug, PartialEq, Eq)]
pub(super) struct Difference {
    pub column: &'static str,
    pub before: String,
    pub after: String,
}

/// What a register file says of one line.
pub(super) trait Columns {
    /// What to do where a known line comes again with another value.
    const ADVICE: &'static str;

    fn columns(&self) -> Vec<Column>;
}

/// Columns in which two lines of one register differ.
pub(super) fn differences<T: Columns>(before: &T, after: &T) -> Vec<Difference> {
    let shown = |column: &Column| if column.meaning.is_empty() { "nothing".to_owned() } else { column.shown.clone() };
    let both = before.columns().into_iter().zip(after.columns());
    both.filter(|(before, after)| before.meaning != after.meaning)
        .map(|(before, after)| Difference { column: before.name, before: shown(&before), after: shown(&after) })
        .collect()
}

const DATE_IT: &str = "date the change with valid_from, or correct the line";

fn text(name: &'static str, value: &str) -> Column {
    Column { name, meaning: value.to_owned(), shown: format!("\u{201c}{value}\u{201d}") }
}

fn word(name: &'static str, value: Option<&'static str>) -> Column {
    text(name, value.unwrap_or_default())
}

fn yes(name: &'static str, value: bool) -> Column {
    let word = if value { "yes" } else { "no" };
    Column { name, meaning: word.to_owned(), shown: word.to_owned() }
}

fn day(name: &'static str, value: Option<NaiveDate>) -> Column {
    let day = value.map(|day| day.to_string()).unwrap_or_default();
    Column { name, meaning: day.clone(), shown: day }
}

/// A mass as it was written, where that is known.
fn mass(name: &'static str, value: Option<Mass>, written: Option<&Weighing>) -> Column {
    let meaning = value.map(|mass| format!("{} kg", mass.kg_text())).unwrap_or_default();
    Column { name, shown: written.map_or_else(|| meaning.clone(), Weighing::text), meaning }
}

fn number(name: &'static str, value: Option<&str>, unit: &str) -> Column {
    let plain = value.map(|text| parse_decimal(text).ok().and_then(decimal_text).unwrap_or_else(|| text.to_owned()));
    let meaning = plain.map(|number| format!("{number} {unit}")).unwrap_or_default();
    Column { name, shown: meaning.clone(), meaning }
}

impl Columns for SiteFacts {
    const ADVICE: &'static str = DATE_IT;

    fn columns(&self) -> Vec<Column> {
        vec![
            text("rulebooks", &self.rulebooks.join(" ")),
            text("owner", &self.owner),
            text("operator", &self.operator),
            text("address", &self.address),
            text("rate_method", self.rate_method.name()),
            text("time_zone", &self.time_zone),
        ]
    }
}

impl Columns for ApplianceFacts {
    const ADVICE: &'static str = DATE_IT;

    fn columns(&self) -> Vec<Column> {
        vec![
            text("category", self.category.name()),
            text("refrigerant", &self.refrigerant),
            mass("full_charge", self.full_charge, self.full_charge_written.as_ref()),
            word("charge_method", self.charge_method.map(|word| word.name())),
            day("installed_on", self.installed_on),
            word("equipment", self.equipment.map(|word| word.name())),
            text("assembly", &self.assembly),
            text("description", &self.description),
            text("serial", &self.serial),
            text("place", &self.place),
            yes("labelled_hermetically_sealed", self.labelled_hermetically_sealed),
            yes("residential", self.residential),
            yes("leakage_detection_system", self.leakage_detection_system),
            yes("residential_or_light_commercial_ac", self.residential_or_light_commercial_ac),
            yes("product_below_minus_50c", self.product_below_minus_50c),
            yes("military", self.military),
            number("room_volume_m3", self.room_volume_m3.as_deref(), "m\u{b3}"),
        ]
    }
}

impl Columns for CylinderFacts {
    const ADVICE: &'static str = "a cylinder's line takes no date: correct it, or write the change down at the cylinder in the window";

    fn columns(&self) -> Vec<Column> {
        vec![
            text("kind", self.kind.name()),
            mass("tare", Some(self.tare), Some(&self.tare_written)),
            text("refrigerant", self.refrigerant.as_deref().unwrap_or_default()),
            word("gas_status", self.gas_status.map(|word| word.name())),
            mass("gross", self.gross, self.gross_written.as_ref()),
            number("water_capacity", self.water_capacity_l.as_deref(), "l"),
            mass("stamped_maximum", self.stamped_maximum, None),
            number("service_pressure_psig", self.service_pressure_psig.as_deref(), "psig"),
            number("test_pressure_bar", self.test_pressure_bar.as_deref(), "bar"),
            day("requalify_by", self.requalify_by),
            text("owner", &self.owner),
            text("gas_owner", &self.gas_owner),
            text("where", &self.location),
        ]
    }
}

impl Columns for Person {
    const ADVICE: &'static str = DATE_IT;

    fn columns(&self) -> Vec<Column> {
        vec![
            text("certificate", &self.certificate),
            text("certificate_kind", &self.certificate_kind),
            day("valid_to", self.valid_to),
            text("company", &self.company),
            text("company_certificate", &self.company_certificate),
        ]
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::exchange::csv::Kind;
    use crate::ledger::{Category, CylinderKind, PersonId};
    use crate::quantity::MassUnit;

    fn cylinder() -> CylinderFacts {
        CylinderFacts::new(CylinderKind::Supply, Mass::from_lb(28), Weighing::new("28.0", MassUnit::Pound))
    }

    fn names(columns: &[Column]) -> Vec<&'static str> {
        columns.iter().map(|column| column.name).collect()
    }

    /// Every column of a file is compared, but for those that name the line, date it or give a unit.
    #[test]
    fn no_column_is_forgotten() {
        let person = Person {
            id: PersonId(uuid::Uuid::nil()),
            name: String::new(),
            certificate: String::new(),
            certificate_kind: String::new(),
            valid_from: None,
            valid_to: None,
            company: String::new(),
            company_certificate: String::new(),
        };
        let compared = [
            (Kind::Sites, SiteFacts::under(Vec::new()).columns()),
            (Kind::Appliances, ApplianceFacts::new(Category::Other, "R-22").columns()),
            (Kind::Cylinders, cylinder().columns()),
            (Kind::People, person.columns()),
        ];
        for (kind, columns) in compared {
            let beside = |name: &str| match kind {
                Kind::Appliances => ["appliance", "site", "unit", "valid_from"].contains(&name),
                _ => ["site", "cylinder", "person", "unit", "water_capacity_unit", "valid_from"].contains(&name),
            };
            assert_eq!(names(&columns), kind.columns().filter(|name| !beside(name)).collect::<Vec<_>>(), "{kind:?}");
        }
    }

    #[test]
    fn differences_are_told_in_the_files_words() {
        let moved = CylinderFacts { location: "van 2".to_owned(), water_capacity_l: Some("21.6".to_owned()), ..cylinder() };
        let told = differences(&cylinder(), &moved);
        let told: Vec<_> = told.iter().map(|told| (told.column, told.before.as_str(), told.after.as_str())).collect();
        assert_eq!(told, [("water_capacity", "nothing", "21.6 l"), ("where", "nothing", "\u{201c}van 2\u{201d}")]);
        let heavier = CylinderFacts { tare: Mass::from_lb(29), tare_written: Weighing::new("29", MassUnit::Pound), ..cylinder() };
        assert_eq!(differences(&cylinder(), &heavier)[0].before, "28.0 lb");
        let sealed = ApplianceFacts { labelled_hermetically_sealed: true, ..ApplianceFacts::new(Category::Other, "R-22") };
        let told = differences(&ApplianceFacts::new(Category::Other, "R-22"), &sealed);
        assert_eq!((told[0].before.as_str(), told[0].after.as_str()), ("no", "yes"));
    }

    #[test]
    fn two_ways_of_writing_the_same_are_no_difference() {
        let same = CylinderFacts {
            tare_written: Weighing::new("28", MassUnit::Pound),
            // Beside the file: nothing that it could contradict.
            gas_source: "Saltbeck Gases".to_owned(),
            scrapped: Some("valve bent".to_owned()),
            ..cylinder()
        };
        assert_eq!(differences(&cylinder(), &same), []);
        let room =
            |volume: &str| ApplianceFacts { room_volume_m3: Some(volume.to_owned()), ..ApplianceFacts::new(Category::Other, "R-22") };
        assert_eq!(differences(&room("180"), &room("180.0")), []);
    }
}
