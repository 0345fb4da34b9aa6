//! The answer as JSON, in the form of the contract.

use crate::app::PROGRAM;
use crate::gas::Weighting;
use crate::ledger::Act;
use crate::quantity::{Mass, Ratio, decimal_text, rounded_text};
use crate::rules::{Assessment, Duty, Judgement, LeakRate, Loss, MonthlyDisposal, monthly_disposals};
use chrono::NaiveDate;
use serde::Serialize;

#[derive(Serialize)]
struct Whole {
    on: NaiveDate,
    program: &'static str,
    appliances: Vec<OneAppliance>,
    /// Only with `--explain`.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    disposals: Vec<OneDisposal>,
}

#[derive(Serialize)]
struct OneDisposal {
    month: String,
    refrigerant: String,
    recovered_kg: String,
    appliances: usize,
    rulebook: String,
    source: String,
}

#[derive(Serialize)]
struct OneAppliance {
    appliance: String,
    site: String,
    refrigerant: String,
    full_charge_kg: Option<String>,
    rulebooks: Vec<OneRulebook>,
    duties: Vec<OneDuty>,
    this_year: Year,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    explain: Vec<String>,
}

#[derive(Serialize)]
struct OneRulebook {
    id: String,
    applies: bool,
    why: String,
    method: Option<&'static str>,
    rate: Option<OneRate>,
}

#[derive(Serialize)]
struct OneRate {
    on: NaiveDate,
    percent: String,
    numerator: String,
    denominator: String,
    added_kg: String,
    days: Option<i64>,
    trigger_percent: String,
    verdict: &'static str,
    band_percent: Option<String>,
    within_weighing_error: Option<bool>,
    #[serde(skip_serializing_if = "Option::is_none")]
    window_from: Option<NaiveDate>,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    notes: Vec<String>,
}

#[derive(Serialize)]
struct OneDuty {
    duty: &'static str,
    rulebook: String,
    source: String,
    from: NaiveDate,
    due: Option<NaiveDate>,
    met_on: Option<NaiveDate>,
    state: &'static str,
}

#[derive(Serialize)]
struct Year {
    charged_kg: String,
    recovered_kg: String,
    lost_kg: String,
    odp_kg: Option<String>,
    co2e_t: Option<String>,
    gwp_set: &'static str,
    #[serde(skip_serializing_if = "std::ops::Not::not")]
    assumed_full: bool,
}

pub fn json(on: NaiveDate, assessments: &[Assessment], explain: bool) -> anyhow::Result<String> {
    let appliances = assessments
        .iter()
        .map(|assessment| OneAppliance {
            appliance: assessment.history.appliance.name.clone(),
            site: assessment.site.name.clone(),
            refrigerant: assessment.facts.refrigerant.clone(),
            full_charge_kg: assessment.facts.full_charge.map(Mass::kg_text),
            rulebooks: assessment.rulebooks.iter().map(rulebook).collect(),
            duties: assessment.duties.iter().map(|one| duty(one, on)).collect(),
            this_year: year(&assessment.this_year, assessment.weights),
            explain: if explain { super::sheet::explanations(assessment) } else { Vec::new() },
        })
        .collect();
    let disposals = if explain { monthly_disposals(assessments).into_iter().map(disposal).collect() } else { Vec::new() };
    Ok(serde_json::to_string_pretty(&Whole { on, program: PROGRAM, appliances, disposals })? + "\n")
}

fn disposal(total: MonthlyDisposal) -> OneDisposal {
    OneDisposal {
        month: total.month.format("%Y-%m").to_string(),
        refrigerant: total.refrigerant,
        recovered_kg: total.recovered.kg_text(),
        appliances: total.appliances,
        rulebook: total.rulebook,
        source: total.source,
    }
}

fn rulebook(judgement: &Judgement) -> OneRulebook {
    OneRulebook {
        id: judgement.id.clone(),
        applies: judgement.applies,
        why: judgement.why.clone(),
        method: judgement.method.map(|method| method.name()),
        rate: judgement.rate().map(rate),
    }
}

fn rate(rate: &LeakRate) -> OneRate {
    OneRate {
        on: rate.on,
        percent: rounded_text(rate.percent, 2),
        numerator: rate.percent.numer().to_string(),
        denominator: rate.percent.denom().to_string(),
        added_kg: rate.added.kg_text(),
        days: rate.days,
        trigger_percent: exact(rate.trigger),
        verdict: rate.verdict.name(),
        band_percent: rate.error.as_ref().map(|band| band.percent.clone()),
        within_weighing_error: rate.error.as_ref().map(|band| band.holds_trigger),
        window_from: rate.window_from,
        notes: rate.notes.clone(),
    }
}

fn duty(duty: &Duty, on: NaiveDate) -> OneDuty {
    OneDuty {
        duty: duty.kind.name(),
        rulebook: duty.rulebook.clone(),
        source: duty.source.clone(),
        from: duty.from,
        due: duty.due,
        met_on: duty.met_on,
        state: duty.state(on).name(),
    }
}

fn year(loss: &Loss, weights: Weighting) -> Year {
    Year {
        charged_kg: loss.charged.kg_text(),
        recovered_kg: loss.recovered.kg_text(),
        lost_kg: loss.lost.kg_text(),
        odp_kg: loss.odp_kg.map(exact),
        co2e_t: loss.co2e_t.map(exact),
        gwp_set: weights.name(),
        assumed_full: loss.assumed_full,
    }
}

/// Masses times catalogue values always have an end; should one not, ten decimals stand for it.
pub fn exact(value: Ratio) -> String {
    decimal_text(value).unwrap_or_else(|| rounded_text(value, 10))
}

/// What a line says it moved, for explanations.
pub fn moved(act: &Act) -> Option<Mass> {
    act.transfer().map(|transfer| transfer.mass)
}
