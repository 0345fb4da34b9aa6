//! Gas that may not be used: to service what is there, or in what is put into
//! operation, from which day to which.
//!
//! "Until 1 January" is read with 31 December as the last day.

use super::book::read::{day, optional_day, optional_ratio};
use super::book::{GasTest, InForce, Rulebook};
use super::own::rulebook;
use super::scope::gas_refusal;
use crate::gas::{self, Gas, GwpSet, Weighting};
use crate::ledger::{ApplianceFacts, Category, Equipment, GasStatus};
use crate::quantity::Ratio;
use chrono::NaiveDate;
use serde::Deserialize;

/// Gas that may not be used to service equipment.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ServiceBan {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
    pub gas: GasTest,
    #[serde(default, deserialize_with = "optional_ratio")]
    gwp_at_least: Option<Ratio>,
    /// Empty: any.
    #[serde(default)]
    equipment: Vec<Equipment>,
    #[serde(default)]
    not_equipment: Vec<Equipment>,
    /// Only appliances whose charge comes to at least so many tonnes of CO₂ equivalent.
    #[serde(default, deserialize_with = "optional_ratio")]
    co2e_t_at_least: Option<Ratio>,
    /// Last day on which reclaimed or recycled gas may be used.
    #[serde(default, deserialize_with = "optional_day")]
    pub used_gas_to: Option<NaiveDate>,
    /// Reclaimed and recycled gas may be used without an end.
    #[serde(default)]
    used_gas_allowed: bool,
    /// Military equipment and products for use below −50 °C are left out.
    #[serde(default)]
    spares_military_and_cold: bool,
    /// The law itself leaves room in this case: a reason lets it pass.
    #[serde(default)]
    leaves_room: bool,
    /// What is forbidden, as a clause.
    pub forbids: String,
    pub source: String,
}

/// Gas with which equipment may not be put into operation.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct InstallationBan {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
    pub gas: GasTest,
    #[serde(default, deserialize_with = "optional_ratio")]
    gwp_at_least: Option<Ratio>,
    #[serde(default)]
    equipment: Vec<Equipment>,
    /// Kilograms of charge.
    #[serde(default, deserialize_with = "optional_ratio")]
    kg_below: Option<Ratio>,
    #[serde(default, deserialize_with = "optional_ratio")]
    kg_at_least: Option<Ratio>,
    /// What is forbidden, as a clause, with the conditions that no register knows.
    pub forbids: String,
    pub source: String,
}

impl ServiceBan {
    /// Whether a reason lets it pass.
    pub fn leaves_room(&self) -> bool {
        self.leaves_room
    }

    fn forbids_on(&self, day: NaiveDate, gas: &Gas, status: GasStatus, facts: &ApplianceFacts, weights: Weighting) -> bool {
        let used = matches!(status, GasStatus::Recycled | GasStatus::Reclaimed);
        let used_is_allowed = self.used_gas_allowed || self.used_gas_to.is_some_and(|last| day <= last);
        let equipment = equipment(facts);
        self.holds_on(day)
            && !(used && used_is_allowed)
            && !(self.spares_military_and_cold && (facts.military || facts.product_below_minus_50c))
            && (self.equipment.is_empty() || self.equipment.contains(&equipment))
            && !self.not_equipment.contains(&equipment)
            && takes_gas(self.gas, self.gwp_at_least, gas, weights)
            && self.co2e_t_at_least.is_none_or(|tonnes| charge_comes_to(tonnes, gas, facts, weights))
    }
}

impl InstallationBan {
    fn forbids_on(&self, day: NaiveDate, gas: &Gas, facts: &ApplianceFacts, weights: Weighting) -> bool {
        let kg = facts.full_charge.map(|charge| charge.kg());
        self.holds_on(day)
            && (self.equipment.is_empty() || self.equipment.contains(&equipment(facts)))
            && takes_gas(self.gas, self.gwp_at_least, gas, weights)
            && self.kg_below.is_none_or(|limit| kg.is_some_and(|kg| kg < limit))
            && self.kg_at_least.is_none_or(|limit| kg.is_some_and(|kg| kg >= limit))
    }
}

fn takes_gas(test: GasTest, gwp_at_least: Option<Ratio>, gas: &Gas, weights: Weighting) -> bool {
    gas_refusal(test, None, gas).is_none() && gwp_at_least.is_none_or(|least| gas.gwp_at_least(set(weights)).0 >= least)
}

/// The table by which a law's own limits of GWP are meant.
fn set(weights: Weighting) -> GwpSet {
    match weights {
        Weighting::UnitedStates => GwpSet::Us84,
        Weighting::EuropeanUnion => GwpSet::Eu573,
        Weighting::GreatBritain => GwpSet::Gb517,
    }
}

/// A charge that is not determined is taken as reaching the limit: the safe side.
fn charge_comes_to(tonnes: Ratio, gas: &Gas, facts: &ApplianceFacts, weights: Weighting) -> bool {
    let gwp = gas.gwp(set(weights));
    facts.full_charge.zip(gwp).is_none_or(|(charge, gwp)| charge.kg() * gwp >= tonnes * Ratio::from_integer(1000))
}

/// Where nobody said what the equipment is, its category says what it is likest.
pub(super) fn equipment(facts: &ApplianceFacts) -> Equipment {
    facts.equipment.unwrap_or(match facts.category {
        Category::ComfortCooling => Equipment::AirConditioning,
        Category::FireProtection => Equipment::FireProtection,
        Category::RefrigeratedTransport => Equipment::RefrigeratedTruckOrTrailer,
        Category::CommercialRefrigeration | Category::IndustrialProcessRefrigeration | Category::Other => Equipment::Refrigeration,
    })
}

/// The rows that forbid charging this gas, in this state, into this appliance
/// on this day at a site under these rulebooks. An unknown gas is forbidden
/// by none. A gas of unknown status is passed as virgin.
pub fn service_bans(
    rulebooks: &[String],
    facts: &ApplianceFacts,
    refrigerant: &str,
    status: GasStatus,
    day: NaiveDate,
) -> Vec<&'static ServiceBan> {
    let Some(gas) = gas::find(refrigerant) else { return Vec::new() };
    let rows = |book: &'static Rulebook| book.service_bans.iter().map(move |row| (row, book.weights));
    let named = rulebooks.iter().filter_map(|id| rulebook(id)).flat_map(rows);
    named.filter(|(row, weights)| row.forbids_on(day, gas, status, facts, *weights)).map(|(row, _)| row).collect()
}

/// The rows that speak against putting this appliance into operation on this
/// day at a site under these rulebooks. What they say has conditions that no
/// register knows: they warn, and refuse nothing.
pub fn installation_bans(rulebooks: &[String], facts: &ApplianceFacts, day: NaiveDate) -> Vec<&'static InstallationBan> {
    let Some(gas) = gas::find(&facts.refrigerant) else { return Vec::new() };
    let rows = |book: &'static Rulebook| book.installation_bans.iter().map(move |row| (row, book.weights));
    let named = rulebooks.iter().filter_map(|id| rulebook(id)).flat_map(rows);
    named.filter(|(row, weights)| row.forbids_on(day, gas, facts, *weights)).map(|(row, _)| row).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::{Mass, MassUnit};

    fn refrigeration() -> ApplianceFacts {
        ApplianceFacts {
            full_charge: Some(Mass::from_kg(45)),
            equipment: Some(Equipment::Refrigeration),
            ..ApplianceFacts::new(Category::CommercialRefrigeration, "R-404A")
        }
    }

    fn forbidden(rulebook: &str, facts: &ApplianceFacts, gas: &str, status: GasStatus, day: &str) -> Vec<&'static str> {
        let bans = service_bans(&[rulebook.to_owned()], facts, gas, status, day.parse().unwrap());
        bans.into_iter().map(|row| row.source.as_str()).collect()
    }

    /// 2024/573 Art. 13(3), (4); GWP of R-404A 3,921.6, R-410A 2,087.5 (Annex I by composition).
    #[test]
    fn high_gwp_gas_is_banned_by_equipment_and_day() {
        let plant = refrigeration();
        let article = ["Regulation (EU) 2024/573 Art. 13(3)"];
        assert_eq!(forbidden("eu-573", &plant, "R-404A", GasStatus::Virgin, "2025-01-01"), article);
        assert_eq!(forbidden("eu-573", &plant, "R-410A", GasStatus::Virgin, "2026-06-01"), [""; 0]);
        assert_eq!(forbidden("eu-573", &plant, "R-404A", GasStatus::Reclaimed, "2029-12-31"), [""; 0]);
        assert_eq!(forbidden("eu-573", &plant, "R-404A", GasStatus::Reclaimed, "2030-01-01"), article);
        let cold = ApplianceFacts { product_below_minus_50c: true, ..plant.clone() };
        assert_eq!(forbidden("eu-573", &cold, "R-404A", GasStatus::Virgin, "2026-06-01"), [""; 0]);
        let pump = ApplianceFacts { equipment: Some(Equipment::HeatPump), ..plant };
        assert_eq!(forbidden("eu-573", &pump, "R-404A", GasStatus::Virgin, "2025-12-31"), [""; 0]);
        assert_eq!(forbidden("eu-573", &pump, "R-404A", GasStatus::Virgin, "2026-01-01"), ["Regulation (EU) 2024/573 Art. 13(4)"]);
        assert_eq!(forbidden("eu-573", &pump, "R-404A", GasStatus::Recycled, "2031-12-31"), [""; 0]);
        assert_eq!(forbidden("eu-573", &pump, "R-404A", GasStatus::Recycled, "2032-01-01").len(), 1);
    }

    /// From 2032 a GWP of 750 or more is out of stationary refrigeration other than chillers; used gas stays allowed.
    #[test]
    fn the_lower_limit_of_2032_knows_its_equipment() {
        let article = ["Regulation (EU) 2024/573 Art. 13(5)"];
        let plant = refrigeration();
        assert_eq!(forbidden("eu-573", &plant, "R-448A", GasStatus::Virgin, "2031-12-31"), [""; 0]);
        assert_eq!(forbidden("eu-573", &plant, "R-448A", GasStatus::Virgin, "2032-01-01"), article);
        assert_eq!(forbidden("eu-573", &plant, "R-448A", GasStatus::Reclaimed, "2040-01-01"), [""; 0]);
        let chiller = ApplianceFacts { equipment: Some(Equipment::Chiller), ..plant };
        assert_eq!(forbidden("eu-573", &chiller, "R-448A", GasStatus::Virgin, "2032-01-01"), [""; 0]);
    }

    /// In 2024 the ban began at 40 t CO2e: 10.2 kg of R-404A (40 / 3.9216 = 10.1999…).
    #[test]
    fn in_2024_the_charge_decided() {
        let of = |kg: &str| ApplianceFacts { full_charge: Mass::parse(kg, MassUnit::Kilogram).ok(), ..refrigeration() };
        assert_eq!(forbidden("eu-573", &of("10.19"), "R-404A", GasStatus::Virgin, "2024-06-01"), [""; 0]);
        assert_eq!(forbidden("eu-573", &of("10.2"), "R-404A", GasStatus::Virgin, "2024-06-01").len(), 1);
        assert_eq!(forbidden("gb-517", &of("10.2"), "R-404A", GasStatus::Virgin, "2026-06-01").len(), 1);
        assert_eq!(forbidden("gb-517", &of("10.19"), "R-404A", GasStatus::Virgin, "2026-06-01"), [""; 0]);
    }

    #[test]
    fn hcfc_of_any_origin_is_banned_in_the_union() {
        let plant = refrigeration();
        for status in [GasStatus::Virgin, GasStatus::Recycled, GasStatus::Reclaimed] {
            assert_eq!(forbidden("eu-590", &plant, "R-22", status, "2026-06-01"), ["Regulation (EU) 2024/590 Art. 4(1)"]);
            assert_eq!(forbidden("us-82f", &plant, "R-22", status, "2026-06-01"), [""; 0]);
        }
        assert_eq!(forbidden("eu-590", &plant, "R-134a", GasStatus::Virgin, "2026-06-01"), [""; 0]);
    }

    /// 2024/573 Annex IV, points 5 and 9(a).
    #[test]
    fn new_equipment_is_warned_of_by_gas_and_day() {
        let warned = |facts: &ApplianceFacts, day: &str| -> Vec<&str> {
            let bans = installation_bans(&["eu-573".to_owned()], facts, day.parse().unwrap());
            bans.into_iter().map(|row| row.source.as_str()).collect()
        };
        let plant = refrigeration();
        assert_eq!(warned(&plant, "2024-12-31"), ["Regulation (EU) 2024/573 Annex IV point 5(a)"]);
        assert_eq!(warned(&plant, "2025-01-01"), ["Regulation (EU) 2024/573 Annex IV point 5(b)"]);
        let low = ApplianceFacts { refrigerant: "R-448A".to_owned(), ..plant.clone() };
        assert_eq!(warned(&low, "2029-12-31"), [""; 0]);
        assert_eq!(warned(&low, "2030-01-01"), ["Regulation (EU) 2024/573 Annex IV point 5(c)"]);
        let split = |kg: i64| ApplianceFacts {
            equipment: Some(Equipment::AirConditioning),
            full_charge: Some(Mass::from_kg(kg)),
            refrigerant: "R-410A".to_owned(),
            ..plant.clone()
        };
        assert_eq!(warned(&split(2), "2026-06-01"), ["Regulation (EU) 2024/573 Annex IV point 9(a)"]);
        assert_eq!(warned(&split(3), "2026-06-01"), [""; 0]);
    }
}
