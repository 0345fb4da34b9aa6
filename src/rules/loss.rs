//! What an appliance lost: the mass, weighted by ODP and by GWP.

use super::history::History;
use crate::gas::{self, Weighting};
use crate::ledger::{Act, RecoveryPurpose};
use crate::quantity::{Mass, Ratio};
use chrono::NaiveDate;

/// The account of an appliance between two days, both included.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Loss {
    pub charged: Mass,
    pub recovered: Mass,
    /// What was *added* as for a rate; at a retirement or retrofit also full
    /// charge less what was recovered for it.
    pub lost: Mass,
    /// Kilograms weighted by ozone depletion potential; `None` where a gas is not in the catalogue.
    pub odp_kg: Option<Ratio>,
    /// Tonnes of CO₂ equivalent; `None` where a part has no value.
    pub co2e_t: Option<Ratio>,
    /// A retirement or retrofit took the appliance as having been full.
    pub assumed_full: bool,
}

/// One loss: when, how much, of which gas.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct LossEntry {
    pub line: usize,
    pub refrigerant: String,
    pub mass: Mass,
    pub assumed_full: bool,
}

/// Every loss of an appliance, in order.
pub fn loss_entries(history: &History) -> Vec<LossEntry> {
    let mut losses = Vec::new();
    let mut recovered = [(RecoveryPurpose::Retire, Mass::ZERO), (RecoveryPurpose::Retrofit, Mass::ZERO)];
    for (index, line) in history.lines.iter().enumerate() {
        let closing = match &line.act {
            Act::Recover { purpose, transfer } => {
                for (for_purpose, sum) in &mut recovered {
                    if for_purpose == purpose {
                        *sum += transfer.mass;
                    }
                }
                continue;
            }
            Act::Charge { .. } => None,
            Act::Retire => Some(0),
            Act::Retrofit { .. } => Some(1),
            _ => continue,
        };
        // A retrofit's own line already has the new facts: the loss is the old gas's.
        let facts = if closing.is_some() { history.facts_before(index) } else { history.facts_at(index) };
        let Some(facts) = facts else { continue };
        let mass = match closing {
            None => history.added[index],
            Some(which) => {
                let taken = std::mem::take(&mut recovered[which].1);
                facts.full_charge.map_or(Mass::ZERO, |full| (full - taken).max(Mass::ZERO))
            }
        };
        if mass.is_positive() || (closing.is_some() && facts.full_charge.is_some()) {
            losses.push(LossEntry { line: index, refrigerant: facts.refrigerant.clone(), mass, assumed_full: closing.is_some() });
        }
    }
    losses
}

/// The account from `from` to `to`.
pub fn loss_between(history: &History, weights: Weighting, from: NaiveDate, to: NaiveDate) -> Loss {
    let within = |index: usize| (from..=to).contains(&history.date(index));
    let mut loss = Loss {
        charged: Mass::ZERO,
        recovered: Mass::ZERO,
        lost: Mass::ZERO,
        odp_kg: Some(Ratio::from_integer(0)),
        co2e_t: Some(Ratio::from_integer(0)),
        assumed_full: false,
    };
    for (_, line) in history.lines.iter().enumerate().filter(|(index, _)| within(*index)) {
        match &line.act {
            Act::Charge { transfer, .. } => loss.charged += transfer.mass,
            Act::Recover { transfer, .. } => loss.recovered += transfer.mass,
            _ => {}
        }
    }
    // Each gas is weighed once: fractions are exact, and dear.
    let mut by_gas: Vec<(String, Mass)> = Vec::new();
    for entry in loss_entries(history).into_iter().filter(|entry| within(entry.line)) {
        loss.lost += entry.mass;
        loss.assumed_full |= entry.assumed_full;
        match by_gas.iter_mut().find(|(name, _)| *name == entry.refrigerant) {
            Some((_, sum)) => *sum += entry.mass,
            None => by_gas.push((entry.refrigerant, entry.mass)),
        }
    }
    for (name, mass) in by_gas {
        let gas = gas::find(&name);
        loss.odp_kg = loss.odp_kg.zip(gas).map(|(sum, gas)| sum + mass.kg() * gas.odp());
        loss.co2e_t = loss
            .co2e_t
            .zip(gas.and_then(|gas| gas.weight(weights)))
            .map(|(sum, weight)| sum + mass.kg() * weight / Ratio::from_integer(1000));
    }
    loss
}
