//! What a cylinder may take: one answer for refusals, visits and places.

use super::{App, AppError, CylinderStanding};
use crate::gas::{self, Gas};
use crate::ledger::GasStatus;
use crate::measure::{self, CylinderLaw, CylinderLimit, cylinder_limit};
use crate::quantity::{GaugePressure, Ratio, Volume, parse_decimal};

/// What limits are worked out with at a site, or in a whole store.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct LimitRules {
    pub law: CylinderLaw,
    /// Share of a limit left for gas that was recovered with oil of unknown amount.
    pub oil_factor: Ratio,
}

impl App {
    /// Under these rulebooks: 49 CFR where one is of the United States, else ADR.
    ///
    /// # Errors
    /// The store's own.
    pub fn limit_rules(&self, rulebooks: &[String]) -> Result<LimitRules, AppError> {
        Ok(LimitRules::under(rulebooks, self.oil_factor()?))
    }
}

impl LimitRules {
    pub(super) fn under(rulebooks: &[String], oil_factor: Ratio) -> Self {
        let united_states = rulebooks.iter().any(|id| id.starts_with("us-"));
        Self { law: if united_states { CylinderLaw::UnitedStates } else { CylinderLaw::Adr }, oil_factor }
    }

    /// What the cylinder may take of `gas`. Room for oil is left only where the gas was `recovered`.
    pub fn limit_of(&self, gas: &Gas, cylinder: &CylinderStanding, recovered: bool) -> CylinderLimit {
        let oil_factor = if recovered { self.oil_factor } else { Ratio::from_integer(1) };
        cylinder_limit(gas, &measured(self.law, cylinder), oil_factor)
    }

    /// What it may take of the gas in it; `None` while no gas is known in it.
    pub fn limit_of_content(&self, cylinder: &CylinderStanding) -> Option<CylinderLimit> {
        let gas = gas::find(cylinder.balance.gas.as_deref()?)?;
        Some(self.limit_of(gas, cylinder, cylinder.holds_recovered()))
    }
}

impl CylinderStanding {
    /// Gas that may have brought oil with it.
    pub fn holds_recovered(&self) -> bool {
        matches!(self.balance.status, Some(GasStatus::Recovered | GasStatus::Mixed))
    }
}

/// The cylinder as the limits are worked out from it.
fn measured(law: CylinderLaw, cylinder: &CylinderStanding) -> measure::Cylinder {
    let facts = &cylinder.facts;
    // Water capacities weighed in pounds have more digits than a person writes.
    let litres = facts.water_capacity_l.as_ref().and_then(|text| parse_decimal(text).ok());
    measure::Cylinder {
        water_capacity: litres.and_then(Volume::from_litres),
        tare: Some(facts.tare),
        stamped_maximum: facts.stamped_maximum,
        service_pressure: facts.service_pressure_psig.as_ref().and_then(|text| GaugePressure::from_psi_text(text).ok()),
        test_pressure: facts.test_pressure_bar.as_ref().and_then(|text| GaugePressure::from_bar_text(text).ok()),
        law,
    }
}
