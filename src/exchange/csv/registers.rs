//! Lines of the register files.

use super::table::Fields;
use crate::ledger::{ApplianceFacts, Category, ChargeMethod, CylinderFacts, CylinderKind, Equipment, GasStatus, RateMethod, SiteFacts};
use crate::quantity::{GaugePressure, Mass, MassUnit, Volume, Weighing, decimal_text};
use crate::rules::{known, rulebook};
use chrono::NaiveDate;

#[derive(Debug)]
pub struct SiteRow {
    pub file: String,
    pub line: u64,
    /// Nothing in it stands in for what could not be read.
    pub sound: bool,
    pub name: String,
    pub valid_from: Option<NaiveDate>,
    pub facts: SiteFacts,
}

#[derive(Debug)]
pub struct ApplianceRow {
    pub file: String,
    pub line: u64,
    /// Nothing in it stands in for what could not be read.
    pub sound: bool,
    pub name: String,
    pub site: String,
    pub valid_from: Option<NaiveDate>,
    pub facts: ApplianceFacts,
}

#[derive(Debug)]
pub struct CylinderRow {
    pub file: String,
    pub line: u64,
    /// Nothing in it stands in for what could not be read.
    pub sound: bool,
    pub name: String,
    pub facts: CylinderFacts,
}

#[derive(Debug)]
pub struct PersonRow {
    pub file: String,
    pub line: u64,
    /// Nothing in it stands in for what could not be read.
    pub sound: bool,
    pub name: String,
    pub certificate: String,
    pub certificate_kind: String,
    pub valid_from: Option<NaiveDate>,
    pub valid_to: Option<NaiveDate>,
    pub company: String,
    pub company_certificate: String,
}

pub(super) fn site_row(fields: &mut Fields) -> SiteRow {
    let mut rulebooks: Vec<String> = Vec::new();
    for id in fields.text("rulebooks").split_whitespace() {
        if !rulebooks.iter().any(|known| known == id) {
            rulebooks.push(id.to_owned());
        }
    }
    for id in &rulebooks {
        if rulebook(id).is_none() {
            let known: Vec<&str> = known().into_iter().map(|book| book.id.as_str()).collect();
            fields.fault("rulebooks", format!("\u{201c}{id}\u{201d} is not a rulebook; known are {}", known.join(", ")));
        }
    }
    let time_zone = fields.text("time_zone").to_owned();
    if !time_zone.is_empty() && time_zone.parse::<chrono_tz::Tz>().is_err() {
        fields.fault("time_zone", format!("\u{201c}{time_zone}\u{201d} is not a time zone such as Europe/Paris"));
    }
    SiteRow {
        file: fields.file().to_owned(),
        line: fields.line(),
        name: fields.text("site").to_owned(),
        valid_from: fields.day("valid_from"),
        facts: SiteFacts {
            rulebooks,
            owner: fields.text("owner").to_owned(),
            operator: fields.text("operator").to_owned(),
            address: fields.text("address").to_owned(),
            rate_method: fields.word("rate_method", RateMethod::from_name).unwrap_or(RateMethod::Annualizing),
            time_zone,
        },
        sound: fields.is_sound(),
    }
}

pub(super) fn appliance_row(fields: &mut Fields) -> ApplianceRow {
    let charge = fields.positive_mass("full_charge", "unit");
    fields.unit("unit");
    ApplianceRow {
        file: fields.file().to_owned(),
        line: fields.line(),
        name: fields.text("appliance").to_owned(),
        site: fields.text("site").to_owned(),
        valid_from: fields.day("valid_from"),
        facts: ApplianceFacts {
            category: fields.word("category", Category::from_name).unwrap_or(Category::Other),
            refrigerant: fields.gas("refrigerant").unwrap_or_default(),
            full_charge: charge.as_ref().map(|(mass, _)| *mass),
            full_charge_written: charge.map(|(_, written)| written),
            charge_method: fields.word("charge_method", ChargeMethod::from_name),
            installed_on: fields.day("installed_on"),
            equipment: fields.word("equipment", Equipment::from_name),
            assembly: fields.text("assembly").to_owned(),
            description: fields.text("description").to_owned(),
            serial: fields.text("serial").to_owned(),
            place: fields.text("place").to_owned(),
            labelled_hermetically_sealed: fields.yes("labelled_hermetically_sealed"),
            residential: fields.yes("residential"),
            leakage_detection_system: fields.yes("leakage_detection_system"),
            residential_or_light_commercial_ac: fields.yes("residential_or_light_commercial_ac"),
            product_below_minus_50c: fields.yes("product_below_minus_50c"),
            military: fields.yes("military"),
            room_volume_m3: fields
                .number("room_volume_m3", Volume::from_cubic_metres_text)
                .and_then(|volume| decimal_text(volume.cubic_metres())),
        },
        sound: fields.is_sound(),
    }
}

pub(super) fn cylinder_row(fields: &mut Fields) -> CylinderRow {
    let tare = fields.positive_mass("tare", "unit");
    let gross = fields.positive_mass("gross", "unit");
    if let (Some((tare, tare_written)), Some((gross, gross_written))) = (&tare, &gross)
        && gross < tare
    {
        fields.fault("gross", format!("{} is less than the tare of {}; correct one of the two", gross_written.text(), tare_written.text()));
    }
    let refrigerant = fields.gas("refrigerant");
    let gas_status = fields.word("gas_status", GasStatus::from_name);
    let (tare_mass, tare_written) = tare.unwrap_or((Mass::ZERO, Weighing::new("0", MassUnit::Kilogram)));
    CylinderRow {
        file: fields.file().to_owned(),
        line: fields.line(),
        name: fields.text("cylinder").to_owned(),
        facts: CylinderFacts {
            kind: fields.word("kind", CylinderKind::from_name).unwrap_or(CylinderKind::Supply),
            tare: tare_mass,
            tare_written,
            refrigerant,
            gas_status,
            gas_told: None,
            gross: gross.as_ref().map(|(mass, _)| *mass),
            gross_written: gross.map(|(_, written)| written),
            weighed: None,
            water_capacity_l: water_capacity(fields),
            stamped_maximum: fields.positive_mass("stamped_maximum", "unit").map(|(mass, _)| mass),
            service_pressure_psig: fields
                .number("service_pressure_psig", GaugePressure::from_psi_text)
                .and_then(|pressure| decimal_text(pressure.psi())),
            test_pressure_bar: fields
                .number("test_pressure_bar", GaugePressure::from_bar_text)
                .and_then(|pressure| decimal_text(pressure.bar())),
            requalify_by: fields.day("requalify_by"),
            damage: String::new(),
            tare_found: None,
            owner: fields.text("owner").to_owned(),
            gas_owner: fields.text("gas_owner").to_owned(),
            location: fields.text("where").to_owned(),
            gas_source: String::new(),
            scrapped: None,
        },
        sound: fields.is_sound(),
    }
}

/// Water capacity in litres; in kg or lb it is a mass of water, 1 kg = 1 l.
fn water_capacity(fields: &mut Fields) -> Option<String> {
    let capacity = match fields.text("water_capacity_unit") {
        "" | "l" => fields.number("water_capacity", Volume::from_litres_text),
        _ => {
            fields.unit("water_capacity_unit");
            fields.positive_mass("water_capacity", "water_capacity_unit").and_then(|(mass, _)| Volume::of_water(mass))
        }
    };
    capacity.and_then(|volume| decimal_text(volume.litres()))
}

pub(super) fn person_row(fields: &mut Fields) -> PersonRow {
    let (valid_from, valid_to) = (fields.day("valid_from"), fields.day("valid_to"));
    if let (Some(from), Some(to)) = (valid_from, valid_to)
        && to < from
    {
        fields.fault("valid_to", format!("{to} is before valid_from, {from}; correct one of the two"));
    }
    PersonRow {
        file: fields.file().to_owned(),
        line: fields.line(),
        name: fields.text("person").to_owned(),
        certificate: fields.text("certificate").to_owned(),
        certificate_kind: fields.text("certificate_kind").to_owned(),
        valid_from,
        valid_to,
        company: fields.text("company").to_owned(),
        company_certificate: fields.text("company_certificate").to_owned(),
        sound: fields.is_sound(),
    }
}
