//! Whether a rulebook takes an appliance on a day, and why.

use super::book::{Band, Basis, EquipmentTest, Exemption, GasTest, InForce, Rulebook, Scope};
use crate::gas::{self, Gas, UsGwp};
use crate::ledger::{ApplianceFacts, Category, Equipment};
use crate::quantity::{Mass, Ratio, decimal_text, floored_text};
use chrono::NaiveDate;
use std::borrow::Cow;

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
    let mut answer = judged(book, facts, day);
    if !book.confidence.is_empty() {
        answer.why.push_str(&format!("; {}: {}", book.id, book.confidence));
    }
    answer
}

/// The row by which `book` takes an appliance on a day, with nothing spelled
/// out: whole stores are judged by it.
pub(super) fn taking<'b>(book: &'b Rulebook, facts: &ApplianceFacts, day: NaiveDate) -> Option<&'b Scope> {
    match found(book, facts, day) {
        Found::Taken { row, .. } => Some(row),
        _ => None,
    }
}

/// What the rows come to.
enum Found<'b> {
    UnknownGas,
    NotInForce,
    Refused(Refusal<'b>),
    Exempt(&'b Exemption),
    ChargeNotDetermined,
    UnderEveryBand(&'static Gas),
    Taken { row: &'b Scope, band: Option<&'b Band>, gas: &'static Gas },
}

/// Why a row does not take an appliance, with its article where it is the law's own reason.
struct Refusal<'b> {
    why: Cow<'static, str>,
    source: Option<&'b str>,
}

fn found<'b>(book: &'b Rulebook, facts: &ApplianceFacts, day: NaiveDate) -> Found<'b> {
    let Some(gas) = gas::find(&facts.refrigerant) else { return Found::UnknownGas };
    let mut refusal: Option<Refusal> = None;
    let mut taken: Option<&Scope> = None;
    for row in book.scopes.iter().filter(|row| row.holds_on(day)) {
        match refused_by(row, gas, facts) {
            None if taken.is_none_or(|before| before.to.is_some()) => taken = Some(row),
            None => {}
            Some(why) => {
                refusal.get_or_insert(why);
            }
        }
    }
    let Some(row) = taken else {
        return refusal.map_or(Found::NotInForce, Found::Refused);
    };
    if book.bands.is_empty() {
        return Found::Taken { row, band: None, gas };
    }
    if let Some(exemption) = book.exemptions.iter().find(|row| row.holds_on(day) && exempts(row, gas, facts, book)) {
        return Found::Exempt(exemption);
    }
    if facts.full_charge.is_none() {
        return Found::ChargeNotDetermined;
    }
    match strictest_band(book, facts, day) {
        Some(band) => Found::Taken { row, band: Some(band), gas },
        None => Found::UnderEveryBand(gas),
    }
}

/// The same in words, without how far the text was read.
fn judged(book: &Rulebook, facts: &ApplianceFacts, day: NaiveDate) -> Applicability {
    let no = |why: String| Applicability { applies: false, why, until: None };
    match found(book, facts, day) {
        Found::UnknownGas => no(format!("{} is not in the gas catalogue", facts.refrigerant)),
        Found::NotInForce => no(match book.begins() {
            Some(from) if day < from => format!("begins {from}"),
            _ => "no rule in force".to_owned(),
        }),
        Found::Refused(Refusal { why, source: Some(source) }) => no(format!("{why} ({source})")),
        Found::Refused(Refusal { why, source: None }) => no(why.into_owned()),
        Found::Exempt(exemption) => no(format!("{} ({})", exemption.why, exemption.source)),
        Found::ChargeNotDetermined => no("full charge not determined".to_owned()),
        Found::Taken { row, band, gas } => {
            let why = match band {
                Some(band) => format!("{}, {} ({})", row.why, measured(band, gas, facts, book), band.source),
                None => format!("{}{} ({})", row.why, parts_counted_as_nothing(row.gas, gas), row.source),
            };
            Applicability { applies: true, why, until: row.to }
        }
        Found::UnderEveryBand(gas) => {
            let under = least_bands(book, day).into_iter().filter(|band| amount(band.basis, gas, facts, book).is_some());
            let said: Vec<String> = under.map(|band| format!("{} ({})", measured(band, gas, facts, book), band.source)).collect();
            no(if said.is_empty() { format!("nothing that {} measures", book.title) } else { said.join("; ") })
        }
    }
}

/// Of each basis the band that takes the smallest appliances.
fn least_bands(book: &Rulebook, day: NaiveDate) -> Vec<&Band> {
    let mut least: Vec<&Band> = Vec::new();
    for band in book.bands.iter().filter(|band| band.holds_on(day)) {
        match least.iter_mut().find(|other| other.basis == band.basis) {
            Some(other) if limit(band) < limit(other) => *other = band,
            Some(_) => {}
            None => least.push(band),
        }
    }
    least
}

fn limit(band: &Band) -> Option<Ratio> {
    band.at_least.or(band.over)
}

/// The leak check interval of an appliance on a day: the strictest band that
/// it falls into.
pub fn strictest_band<'b>(book: &'b Rulebook, facts: &ApplianceFacts, day: NaiveDate) -> Option<&'b Band> {
    let gas = gas::find(&facts.refrigerant)?;
    book.bands
        .iter()
        .filter(|band| band.holds_on(day))
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

fn refused_by<'b>(row: &'b Scope, gas: &Gas, facts: &ApplianceFacts) -> Option<Refusal<'b>> {
    let because = |why: Cow<'static, str>| Some(Refusal { why, source: Some(&row.source) });
    if let Some(why) = gas_refusal(row.gas, row.gwp_over, gas) {
        return because(why);
    }
    if row.not_categories.contains(&facts.category) {
        return because(facts.category.name().into());
    }
    if row.not_residential_or_light_commercial_ac && facts.residential_or_light_commercial_ac {
        return because("declared residential or light commercial air conditioning or heat pump".into());
    }
    if !equipment_fits(row.equipment, facts) {
        return because(facts.equipment.map_or(facts.category.name(), Equipment::name).into());
    }
    match (row.charge_at_least, facts.full_charge) {
        (Some(_), None) => Some(Refusal { why: "full charge not determined".into(), source: None }),
        (Some(least), Some(charge)) if charge < least => because(format!("full charge under {}", pounds(least)).into()),
        _ => None,
    }
}

fn pounds(mass: Mass) -> String {
    let pounds = decimal_text(mass.in_unit(crate::quantity::MassUnit::Pound)).unwrap_or_default();
    format!("{pounds} lb")
}

/// Why a test does not take a gas; `None` where it does.
pub(super) fn gas_refusal(test: GasTest, gwp_over: Option<Ratio>, gas: &Gas) -> Option<Cow<'static, str>> {
    let fluorinated = gas.has_hfc_or_pfc() || gas.hfo_fraction() > Ratio::from_integer(0);
    let why = match test {
        GasTest::Any => None,
        GasTest::OzoneDepleting => (!gas.has_ods()).then_some("no ozone-depleting refrigerant"),
        GasTest::Fluorinated | GasTest::FluorinatedAnnexI if gas.has_ods() => Some("judged as an ozone-depleting refrigerant"),
        GasTest::Substitute | GasTest::Fluorinated => (!fluorinated).then_some("no HFC, PFC or HFO part"),
        GasTest::RegulatedOrSubstitute if gas.solely_ods() => Some("solely ozone-depleting"),
        GasTest::RegulatedOrSubstitute if gas.has_us_regulated() => None,
        GasTest::RegulatedOrSubstitute => return substitute_refusal(gwp_over?, gas),
        GasTest::FluorinatedAnnexI => (!gas.has_hfc_or_pfc()).then_some("no HFC or PFC part"),
        GasTest::Halocarbon => (!gas.has_ods() && !gas.has_hfc_or_pfc()).then_some("no halocarbon listed in SOR/2016-137"),
    };
    why.map(Cow::Borrowed)
}

/// A gas without a regulated substance is taken by its GWP alone; one that is
/// not known counts as not over the limit, and the answer says so.
fn substitute_refusal(limit: Ratio, gas: &Gas) -> Option<Cow<'static, str>> {
    let written = decimal_text(limit).unwrap_or_default();
    let counted = parts_counted_as_nothing(GasTest::RegulatedOrSubstitute, gas);
    match gas.us_substitute_gwp() {
        UsGwp::Known(gwp) if gwp > limit => None,
        UsGwp::Known(gwp) => {
            let gwp = decimal_text(gwp).unwrap_or_default();
            Some(format!("no regulated substance, GWP {gwp} by 40 CFR 84.64(b), not over {written}{counted}").into())
        }
        UsGwp::Unknown => Some(
            format!("no regulated substance; its GWP in 40 CFR 84.64(b) is not known and counts as not over {written}{counted}").into(),
        ),
    }
}

/// 84.64(b) is about substitutes: ozone-depleting parts count as nothing
/// there, and the answer says so.
fn parts_counted_as_nothing(test: GasTest, gas: &Gas) -> &'static str {
    if test == GasTest::RegulatedOrSubstitute && gas.has_ods() { "; ozone-depleting parts count 0" } else { "" }
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

pub(super) fn amount(basis: Basis, gas: &Gas, facts: &ApplianceFacts, book: &Rulebook) -> Option<Ratio> {
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

/// What the band measures, against its limit: `243.139 t of CO₂ equivalent, at
/// least 50 t`. The figure is cut off and never rounded up, so that it stands
/// to the limit as the exact amount does.
fn measured(band: &Band, gas: &Gas, facts: &ApplianceFacts, book: &Rulebook) -> String {
    let Some(amount) = amount(band.basis, gas, facts, book) else {
        return gas.designation().to_owned();
    };
    let (unit, of) = match band.basis {
        Basis::TonnesCo2e => ("t", " of CO₂ equivalent"),
        Basis::KgOfHfo => ("kg", " of Annex II section 1 gas"),
        Basis::Kg => ("kg", ""),
    };
    let figure = format!("{} {unit}{of}", cut_off(amount, limit(band)));
    let against = |words: &str, limit: Ratio| format!("{figure}, {words} {} {unit}", decimal_text(limit).unwrap_or_default());
    match (band.at_least, band.over) {
        (Some(least), _) if amount >= least => against("at least", least),
        (Some(least), _) => against("under", least),
        (None, Some(most)) if amount > most => against("over", most),
        (None, Some(most)) => against("not over", most),
        (None, None) => figure,
    }
}

/// Three decimals, or as many as it takes to tell the amount from the limit.
fn cut_off(amount: Ratio, limit: Option<Ratio>) -> String {
    const MOST: u32 = 14;
    let tells = |text: &str| {
        let shown = crate::quantity::parse_decimal(text).ok();
        limit.is_none_or(|limit| shown.is_some_and(|shown| shown.cmp(&limit) == amount.cmp(&limit)))
    };
    (3..MOST).map(|places| floored_text(amount, places)).find(|text| tells(text)).unwrap_or_else(|| floored_text(amount, MOST))
}
