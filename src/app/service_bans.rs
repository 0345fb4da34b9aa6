//! Which gas may not be used to service which equipment, from which day to
//! which: rows of the law, each with its article.
//!
//! "Until 1 January" is read with 31 December as the last day.

use crate::gas::{self, Gas, GwpSet};
use crate::ledger::{ApplianceFacts, Category, Equipment, GasStatus};
use crate::quantity::Ratio;
use chrono::NaiveDate;

/// One row.
#[derive(Debug)]
pub struct ServiceBan {
    /// The rulebook whose site it binds.
    pub rulebook: &'static str,
    pub source: &'static str,
    /// What is forbidden, as a clause.
    pub forbids: &'static str,
    /// First and last day, ISO.
    from: &'static str,
    to: Option<&'static str>,
    gas: GasTest,
    equipment: EquipmentTest,
    /// Only appliances whose charge comes to at least so many tonnes of CO₂ equivalent.
    least_co2e_t: Option<i128>,
    /// Last day on which reclaimed or recycled gas may be used: never, always, or a day.
    used_gas: UsedGas,
    /// Military equipment and products for use below −50 °C are left out.
    spares_military_and_cold: bool,
    /// The law itself leaves room in this case: a reason lets it pass.
    judgement: bool,
}

#[derive(Debug, Clone, Copy)]
enum GasTest {
    OzoneDepleting,
    GwpAtLeast(GwpSet, i128),
    /// The same, and an Annex I gas of Regulation (EU) 2024/573.
    AnnexIGwpAtLeast(i128),
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum EquipmentTest {
    NotFireProtection,
    FireProtection,
    Refrigeration,
    StationaryRefrigerationButChillers,
    AirConditioningOrHeatPump,
}

#[derive(Debug, Clone, Copy)]
enum UsedGas {
    Forbidden,
    Allowed,
    AllowedTo(&'static str),
}

const ROWS: &[ServiceBan] = &[
    ServiceBan {
        rulebook: "eu-590",
        source: "Regulation (EU) 2024/590 Art. 4(1)",
        forbids: "ozone-depleting gas, of whatever origin, is not used to fill equipment",
        from: "2024-03-11",
        to: None,
        gas: GasTest::OzoneDepleting,
        equipment: EquipmentTest::NotFireProtection,
        least_co2e_t: None,
        used_gas: UsedGas::Forbidden,
        spares_military_and_cold: false,
        judgement: false,
    },
    ServiceBan {
        rulebook: "eu-590",
        source: "Regulation (EU) 2024/590 Art. 4(1), Annex V",
        forbids: "halons are used only for the critical uses that are named",
        from: "2024-03-11",
        to: None,
        gas: GasTest::OzoneDepleting,
        equipment: EquipmentTest::FireProtection,
        least_co2e_t: None,
        used_gas: UsedGas::Forbidden,
        spares_military_and_cold: false,
        judgement: true,
    },
    ServiceBan {
        rulebook: "gb-1005",
        source: "Regulation (EC) No 1005/2009 as kept in Great Britain; HCFC guidance of gov.uk",
        forbids: "HCFC is not used to fill equipment; virgin since 2010, recycled or reclaimed since 2015",
        from: "2010-01-01",
        to: None,
        gas: GasTest::OzoneDepleting,
        equipment: EquipmentTest::NotFireProtection,
        least_co2e_t: None,
        used_gas: UsedGas::AllowedTo("2014-12-31"),
        spares_military_and_cold: false,
        judgement: false,
    },
    ServiceBan {
        rulebook: "eu-573",
        source: "Regulation (EU) 2024/573 Art. 13(3)",
        forbids: "gas with a GWP of 2,500 or more does not service refrigeration equipment of 40 t CO\u{2082} equivalent or more",
        from: "2024-03-11",
        to: Some("2024-12-31"),
        gas: GasTest::GwpAtLeast(GwpSet::Eu573, 2500),
        equipment: EquipmentTest::Refrigeration,
        least_co2e_t: Some(40),
        used_gas: UsedGas::Allowed,
        spares_military_and_cold: true,
        judgement: false,
    },
    ServiceBan {
        rulebook: "eu-573",
        source: "Regulation (EU) 2024/573 Art. 13(3)",
        forbids: "gas with a GWP of 2,500 or more does not service refrigeration equipment",
        from: "2025-01-01",
        to: None,
        gas: GasTest::GwpAtLeast(GwpSet::Eu573, 2500),
        equipment: EquipmentTest::Refrigeration,
        least_co2e_t: None,
        used_gas: UsedGas::AllowedTo("2029-12-31"),
        spares_military_and_cold: true,
        judgement: false,
    },
    ServiceBan {
        rulebook: "eu-573",
        source: "Regulation (EU) 2024/573 Art. 13(4)",
        forbids: "gas with a GWP of 2,500 or more does not service air conditioning or heat pumps",
        from: "2026-01-01",
        to: None,
        gas: GasTest::AnnexIGwpAtLeast(2500),
        equipment: EquipmentTest::AirConditioningOrHeatPump,
        least_co2e_t: None,
        used_gas: UsedGas::AllowedTo("2031-12-31"),
        spares_military_and_cold: false,
        judgement: false,
    },
    ServiceBan {
        rulebook: "eu-573",
        source: "Regulation (EU) 2024/573 Art. 13(5)",
        forbids: "gas with a GWP of 750 or more does not service stationary refrigeration other than chillers",
        from: "2032-01-01",
        to: None,
        gas: GasTest::AnnexIGwpAtLeast(750),
        equipment: EquipmentTest::StationaryRefrigerationButChillers,
        least_co2e_t: None,
        used_gas: UsedGas::Allowed,
        spares_military_and_cold: true,
        judgement: false,
    },
    ServiceBan {
        rulebook: "gb-517",
        source: "Regulation (EU) No 517/2014 Art. 13(3) as kept in Great Britain",
        forbids: "gas with a GWP of 2,500 or more does not service refrigeration equipment of 40 t CO\u{2082} equivalent or more",
        from: "2020-01-01",
        to: None,
        gas: GasTest::GwpAtLeast(GwpSet::Gb517, 2500),
        equipment: EquipmentTest::Refrigeration,
        least_co2e_t: Some(40),
        used_gas: UsedGas::AllowedTo("2029-12-31"),
        spares_military_and_cold: true,
        judgement: false,
    },
];

impl ServiceBan {
    /// Whether a reason lets it pass.
    pub fn leaves_room(&self) -> bool {
        self.judgement
    }

    fn forbids_on(&self, day: NaiveDate, gas: &Gas, status: GasStatus, facts: &ApplianceFacts) -> bool {
        let used = matches!(status, GasStatus::Recycled | GasStatus::Reclaimed);
        let used_is_allowed = match self.used_gas {
            UsedGas::Forbidden => false,
            UsedGas::Allowed => true,
            UsedGas::AllowedTo(last) => day <= iso(last),
        };
        iso(self.from) <= day
            && self.to.is_none_or(|to| day <= iso(to))
            && !(used && used_is_allowed)
            && !(self.spares_military_and_cold && (facts.military || facts.product_below_minus_50c))
            && self.equipment.takes(facts)
            && self.gas.takes(gas)
            && self.least_co2e_t.is_none_or(|tonnes| self.charge_comes_to(tonnes, gas, facts))
    }

    /// A charge that is not determined is taken as reaching the limit: the safe side.
    fn charge_comes_to(&self, tonnes: i128, gas: &Gas, facts: &ApplianceFacts) -> bool {
        let (GasTest::GwpAtLeast(set, _), Some(charge)) = (self.gas, facts.full_charge) else { return true };
        gas.gwp(set).is_none_or(|gwp| charge.kg() * gwp >= Ratio::from_integer(tonnes * 1000))
    }
}

impl GasTest {
    fn takes(self, gas: &Gas) -> bool {
        let at_least = |set, least| gas.gwp_at_least(set).0 >= Ratio::from_integer(least);
        match self {
            Self::OzoneDepleting => gas.has_ods(),
            Self::GwpAtLeast(set, least) => !gas.has_ods() && at_least(set, least),
            Self::AnnexIGwpAtLeast(least) => !gas.has_ods() && gas.has_hfc_or_pfc() && at_least(GwpSet::Eu573, least),
        }
    }
}

impl EquipmentTest {
    /// Where nobody said what the equipment is, its category says what it is likest.
    fn takes(self, facts: &ApplianceFacts) -> bool {
        let equipment = facts.equipment.unwrap_or(match facts.category {
            Category::ComfortCooling => Equipment::AirConditioning,
            Category::FireProtection => Equipment::FireProtection,
            Category::RefrigeratedTransport => Equipment::RefrigeratedTruckOrTrailer,
            Category::CommercialRefrigeration | Category::IndustrialProcessRefrigeration | Category::Other => Equipment::Refrigeration,
        });
        match self {
            Self::FireProtection => equipment == Equipment::FireProtection,
            Self::NotFireProtection => equipment != Equipment::FireProtection,
            Self::Refrigeration => {
                matches!(equipment, Equipment::Refrigeration | Equipment::Chiller | Equipment::RefrigeratedTruckOrTrailer)
            }
            Self::StationaryRefrigerationButChillers => equipment == Equipment::Refrigeration,
            Self::AirConditioningOrHeatPump => matches!(equipment, Equipment::AirConditioning | Equipment::HeatPump),
        }
    }
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
    ROWS.iter().filter(|row| rulebooks.iter().any(|id| id == row.rulebook) && row.forbids_on(day, gas, status, facts)).collect()
}

/// Days in the rows above are constants; a test reads each.
fn iso(day: &str) -> NaiveDate {
    day.parse().unwrap_or(NaiveDate::MAX)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::app::refusals::tests::appliance_facts;
    use crate::quantity::{Mass, MassUnit};

    fn forbidden(rulebook: &str, facts: &ApplianceFacts, gas: &str, status: GasStatus, day: &str) -> Vec<&'static str> {
        service_bans(&[rulebook.to_owned()], facts, gas, status, day.parse().unwrap()).into_iter().map(|row| row.source).collect()
    }

    fn refrigeration() -> ApplianceFacts {
        ApplianceFacts { equipment: Some(Equipment::Refrigeration), ..appliance_facts("R-404A") }
    }

    #[test]
    fn every_day_of_the_rows_reads() {
        for row in ROWS {
            assert!(row.from.parse::<NaiveDate>().is_ok(), "{}", row.from);
            assert!(row.to.is_none_or(|to| to.parse::<NaiveDate>().is_ok()));
            if let UsedGas::AllowedTo(day) = row.used_gas {
                assert!(day.parse::<NaiveDate>().is_ok(), "{day}");
            }
        }
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
}
