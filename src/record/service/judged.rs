//! What came of it by the law: leak rates, duties, open leaks, weighted amounts.

use crate::ledger::RateMethod;
use crate::quantity::{Mass, Ratio};
use crate::record::exact;
use chrono::NaiveDate;
use serde::{Deserialize, Serialize};

/// Verdict of a leak rate; mirrors the words on the screens.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub enum Verdict {
    #[serde(rename = "under trigger")]
    Under,
    #[serde(rename = "at trigger")]
    At,
    #[serde(rename = "over trigger")]
    Over,
}

impl Verdict {
    pub const fn words(self) -> &'static str {
        match self {
            Self::Under => "under trigger",
            Self::At => "at trigger",
            Self::Over => "over trigger",
        }
    }
}

/// A leak rate by one rulebook, with everything it came from.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct LeakRate {
    /// Legal text and article, as `40 CFR 82.157(b)`.
    pub source: String,
    /// Why the rulebook applies.
    pub applies_because: String,
    /// Day of the addition that asked for it.
    pub on: NaiveDate,
    pub method: RateMethod,
    /// Percent of full charge a year, exactly.
    #[serde(with = "exact")]
    pub percent: Ratio,
    /// Trigger rate in percent.
    #[serde(with = "exact")]
    pub trigger: Ratio,
    /// Article of the trigger, as `40 CFR 82.157(c)(2)`.
    pub trigger_source: String,
    /// Weighing error in percent points; `None`: unknown.
    #[serde(with = "exact::option")]
    pub band: Option<Ratio>,
    pub verdict: Verdict,
    /// The weighing error could turn the verdict over. The verdict stands.
    pub within_weighing_error: bool,
    /// What went into it, each spelled out.
    pub inputs: Vec<RateInput>,
    /// The sum written out, as `10 lb ÷ 100 lb × 365 ÷ 180 × 100 % = 365/18 % = 20.28 %`.
    pub working: String,
}

/// One figure that a leak rate came from.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct RateInput {
    /// As `added`, `full charge`, `days`.
    pub caption: String,
    /// As `10 lb`, `180`.
    pub value: String,
    /// Where it comes from, as `since the charge of 4 Sep 2025`; or empty.
    pub from: String,
}

/// An addition that asked for no leak rate.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct NoRate {
    pub on: NaiveDate,
    /// As `3.20 kg`.
    pub amount: String,
    pub because: String,
    pub source: String,
}

/// A leak found and not yet repaired for good.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct OpenLeak {
    pub place: String,
    pub since: NaiveDate,
    /// `isolated`, `section shut`, `repaired temporarily` or empty.
    pub state: String,
}

/// What this visit did to a duty.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum DutyStep {
    /// An entry of this visit started it.
    Started,
    /// An entry of this visit met it.
    Met,
    /// It was there before and still is.
    StillOpen,
    /// An entry of this visit suspended or ended it.
    Ended,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct DutyFacts {
    /// As `initial verification test`.
    pub duty: String,
    /// Article, as `40 CFR 82.157(e)(1)`.
    pub source: String,
    pub step: DutyStep,
    pub from: NaiveDate,
    /// `None`: no day yet, or without undue delay; `due_words` says which.
    pub due: Option<NaiveDate>,
    pub due_words: String,
    pub met_on: Option<NaiveDate>,
    /// `open`, `late`, `met`, `met late`, `suspended`, `ended`.
    pub state: String,
}

/// A mass with its two weights.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct WeightedAmount {
    /// As `charged`, `recovered`, `lost this year`.
    pub what: String,
    pub mass: Mass,
    /// The mass in the unit of the record, as `10.00 lb`.
    pub mass_written: String,
    /// ODP-weighted, in kg; `None`: the table lacks a part.
    #[serde(with = "exact::option")]
    pub odp_kg: Option<Ratio>,
    /// CO₂ equivalent, in t; `None`: the table lacks a part.
    #[serde(with = "exact::option")]
    pub co2e_t: Option<Ratio>,
    /// As `40 CFR 82 subpart A, appendices A and B`.
    pub odp_table: String,
    /// As `40 CFR 84.64, else IPCC AR4`.
    pub gwp_table: String,
}

/// A finished sentence with its article or basis.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Notice {
    pub text: String,
    pub source: String,
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rates_keep_their_fraction_in_files() {
        let rate = LeakRate {
            source: "40 CFR 82.157(b)".into(),
            applies_because: String::new(),
            on: NaiveDate::from_ymd_opt(2026, 3, 3).unwrap(),
            method: RateMethod::Annualizing,
            percent: Ratio::new(365, 18),
            trigger: Ratio::from_integer(20),
            trigger_source: String::new(),
            band: None,
            verdict: Verdict::Over,
            within_weighing_error: false,
            inputs: vec![],
            working: String::new(),
        };
        let text = serde_json::to_string(&rate).unwrap();
        assert!(text.contains(r#""percent":"365/18","trigger":"20""#), "{text}");
        assert_eq!(serde_json::from_str::<LeakRate>(&text).unwrap(), rate);
    }
}
