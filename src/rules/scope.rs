//! Whether a rulebook takes an appliance on a day, and why.

use super::book::{Band, Basis, EquipmentTest, Exemption, GasTest, Rulebook, Scope};
use crate::gas::{self, Gas, UsGwp};
use crate::ledger::{ApplianceFacts, Category, Equipment};
use crate::quantity::{Mass, Ratio, decimal_text};
use chrono::NaiveDate;

/// Whether a rulebook applies, with the reason either way.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Applicability {
    pub applies: bool,
    /// One sentence with its article.
    pub why: String,
    /// Last day of the row that takes the appliance, where it has one.
    pub until: Option<NaiveDate>,
}

/// Whether `book` takes an appliance with these facts on `day`.
pub fn applicability(book: &Rulebook, facts: &ApplianceFacts, day: NaiveDate) -> Applicability {
    let no = |why: String| Applicability { applies: false, why, until: None };
    let Some(gas) = gas::find(&facts.refrigerant) else {
        return no(format!("{} is not in the gas catalogue", facts.refrigerant));
    };
    let mut in_force = book.scopes.iter().filter(|row| row.validity.holds_on(day)).peekable();
    if in_force.peek().is_none() {
        let begins = book.scopes.iter().map(|row| row.validity.from).min();
        return no(begins.map_or_else(|| "no rule in force".to_owned(), |from| format!("begins {from}")));
    }
    let mut refusal: Option<String> = None;
    let mut taken: Option<&Scope> = None;
    for row in in_force {
        match refused_by(row, gas, facts) {
            None if taken.is_none_or(|before| before.validity.to.is_some()) => taken = Some(row),
            None => {}
            Some(why) => {
                refusal.get_or_insert(why);
            }
        }
    }
    let Some(row) = taken else {
        return no(refusal.unwrap_or_default());
    };
    if book.bands.is_empty() {
        let declared = us_gwp_note(row.gas, gas);
        return Applicability { applies: true, why: format!("{}{declared} ({})", row.why, row.source), until: row.validity.to };
    }
    if let Some(exemption) = book.exemptions.iter().find(|row| row.validity.holds_on(day) && exempts(row, gas, facts, book)) {
        return no(format!("{} ({})", exemption.why, exemption.source));
    }
    match strictest_band(book, facts, day) {
        Some(band) => Applicability {
            applies: true,
            why: format!("{}, {} ({})", row.why, measured(band, gas, facts, book), band.source),
            until: row.validity.to,
        },
        None if facts.full_charge.is_none() => no("full charge not determined".to_owned()),
        None => {
            let first = book.bands.first();
            let basis = first.map(|band| measured(band, gas, facts, book)).unwrap_or_default();
            no(format!("{basis}, under the least of {} ({})", book.id, first.map_or("", |band| band.source.as_str())))
        }
    }
}

/// The leak check interval of an appliance on a day: the strictest band that
/// it falls into.
pub fn strictest_band<'b>(book: &'b Rulebook, facts: &ApplianceFacts, day: NaiveDate) -> Option<&'b Band> {
    let gas = gas::find(&facts.refrigerant)?;
    book.bands
        .iter()
        .filter(|band| band.validity.holds_on(day))
        .filter(|band| {
            amount(band.basis, gas, facts, book)
                .is_some_and(|amount| band.at_least.is_none_or(|least| amount >= least) && band.over.is_none_or(|over| amount > over))
        })
        .min_by_key(|band| months(band, facts))
}

/// The band's interval for this appliance in calendar months.
pub fn months(band: &Band, facts: &ApplianceFacts) -> u32 {
    match band.months_with_detection {
        Some(months) if facts.leakage_detection_system => months,
        _ => band.months,
    }
}

fn refused_by(row: &Scope, gas: &Gas, facts: &ApplianceFacts) -> Option<String> {
    let because = |why: &str| Some(format!("{why} ({})", row.source));
    if let Some(why) = gas_refusal(row, gas) {
        return because(&why);
    }
    if row.not_categories.contains(&facts.category) {
        return because(facts.category.name());
    }
    if row.not_residential_or_light_commercial_ac && facts.residential_or_light_commercial_ac {
        return because("declared residential or light commercial air conditioning or heat pump");
    }
    if !equipment_fits(row.equipment, facts) {
        return because(facts.equipment.map_or(facts.category.name(), Equipment::name));
    }
    match (row.charge_at_least, facts.full_charge) {
        (Some(_), None) => Some("full charge not determined".to_owned()),
        (Some(least), Some(charge)) if charge < least => because(&format!("full charge under {}", pounds(least))),
        _ => None,
    }
}

fn pounds(mass: Mass) -> String {
    let pounds = decimal_text(mass.in_unit(crate::quantity::MassUnit::Pound)).unwrap_or_default();
    format!("{pounds} lb")
}

fn gas_refusal(row: &Scope, gas: &Gas) -> Option<String> {
    let fluorinated = gas.has_hfc_or_pfc() || gas.hfo_fraction() > Ratio::from_integer(0);
    let why = match row.gas {
        GasTest::OzoneDepleting => (!gas.has_ods()).then_some("no ozone-depleting refrigerant"),
        GasTest::Fluorinated | GasTest::FluorinatedAnnexI if gas.has_ods() => Some("judged as an ozone-depleting refrigerant"),
        GasTest::Substitute | GasTest::Fluorinated => (!fluorinated).then_some("no HFC, PFC or HFO part"),
        GasTest::RegulatedOrSubstitute if gas.solely_ods() => Some("solely ozone-depleting"),
        GasTest::RegulatedOrSubstitute if gas.has_us_regulated() => None,
        GasTest::RegulatedOrSubstitute => return substitute_refusal(row.gwp_over?, gas),
        GasTest::FluorinatedAnnexI => (!gas.has_hfc_or_pfc()).then_some("no HFC or PFC part"),
        GasTest::Halocarbon => (!gas.has_ods() && !gas.has_hfc_or_pfc()).then_some("no halocarbon listed in SOR/2016-137"),
    };
    why.map(str::to_owned)
}

/// A gas without a regulated substance is taken by its GWP alone; one that is
/// not known counts as not over the limit, and the answer says so.
fn substitute_refusal(limit: Ratio, gas: &Gas) -> Option<String> {
    let limit_text = decimal_text(limit).unwrap_or_default();
    match gas.us_substitute_gwp() {
        UsGwp::Known(gwp) if gwp > limit => None,
        UsGwp::Known(_) => Some(format!("no regulated substance, GWP not over {limit_text}")),
        UsGwp::Unknown => {
            Some(format!("no regulated substance; its GWP in 40 CFR 84.64(b) is not known and counts as not over {limit_text}"))
        }
    }
}

/// The contract asks that the answer say so where ozone-depleting parts or
/// unknown values were counted as nothing.
fn us_gwp_note(test: GasTest, gas: &Gas) -> &'static str {
    if test == GasTest::RegulatedOrSubstitute && !gas.has_us_regulated() && gas.has_ods() { "; ozone-depleting parts count 0" } else { "" }
}

fn equipment_fits(test: EquipmentTest, facts: &ApplianceFacts) -> bool {
    let truck = facts.equipment == Some(Equipment::RefrigeratedTruckOrTrailer);
    let other_mobile = facts.equipment == Some(Equipment::OtherMobile);
    let transport = facts.category == Category::RefrigeratedTransport;
    let generator_or_switchgear = matches!(facts.equipment, Some(Equipment::OrganicRankineCycle | Equipment::Switchgear));
    match test {
        EquipmentTest::Any => true,
        EquipmentTest::Stationary => !truck && !other_mobile && !transport && !generator_or_switchgear,
        EquipmentTest::StationaryTrucksAndTrailers => truck || (!other_mobile && !transport),
        EquipmentTest::OtherMobile => other_mobile && !transport,
    }
}

fn amount(basis: Basis, gas: &Gas, facts: &ApplianceFacts, book: &Rulebook) -> Option<Ratio> {
    let kg = facts.full_charge?.kg();
    match basis {
        Basis::Kg => Some(kg),
        Basis::KgOfHfo => {
            let fraction = gas.hfo_fraction();
            (fraction > Ratio::from_integer(0)).then(|| kg * fraction)
        }
        Basis::TonnesCo2e if gas.has_hfc_or_pfc() => Some(kg * gas.weight(book.weights)? / Ratio::from_integer(1000)),
        Basis::TonnesCo2e => None,
    }
}

fn exempts(row: &Exemption, gas: &Gas, facts: &ApplianceFacts, book: &Rulebook) -> bool {
    // An amount that this gas does not have is under every limit.
    let below = |limit: Option<Ratio>, basis: Basis| limit.is_none_or(|limit| amount(basis, gas, facts, book).is_none_or(|a| a < limit));
    facts.full_charge.is_some()
        && (!row.labelled_hermetically_sealed || facts.labelled_hermetically_sealed)
        && (!row.residential || facts.residential)
        && row.equipment.is_none_or(|equipment| facts.equipment == Some(equipment))
        && below(row.kg_below, Basis::Kg)
        && below(row.co2e_t_below, Basis::TonnesCo2e)
        && below(row.hfo_kg_below, Basis::KgOfHfo)
}

fn measured(band: &Band, gas: &Gas, facts: &ApplianceFacts, book: &Rulebook) -> String {
    let Some(amount) = amount(band.basis, gas, facts, book) else {
        return gas.designation().to_owned();
    };
    let figure = crate::quantity::rounded_text(amount, 3);
    match band.basis {
        Basis::TonnesCo2e => format!("{figure} t of CO₂ equivalent"),
        Basis::KgOfHfo => format!("{figure} kg of Annex II section 1 gas"),
        Basis::Kg => format!("{figure} kg"),
    }
}
