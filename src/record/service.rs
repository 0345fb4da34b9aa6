//! A service record: what was done at one visit, one part per appliance.
//!
//! Everything that 40 CFR 82.157(l)(2), (3), (5), 84.106(l)(4), (5), (7) and
//! Regulation (EU) 2024/573 Art. 7(1) ask of a record has its field here; the
//! field's comment names the article where there is one.
//!
//! Strings are finished facts: names as registered, readings as typed. An empty
//! string is a fact nobody has given; paper says *to complete* where the law
//! asks for it and leaves out the rest. Numbers are kept only where something
//! is drawn or compared.

mod entry;
mod judged;

pub use entry::{EntryFacts, Named, RepairFacts, TestFacts, TransferFacts, Way, Work};
pub use judged::{DutyFacts, DutyStep, LeakRate, NoRate, Notice, OpenLeak, RateInput, Verdict, WeightedAmount};

use crate::ledger::Ink;
use chrono::NaiveDate;
use serde::{Deserialize, Serialize};

/// One visit, ready to be laid out.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct ServiceRecord {
    pub state: RecordState,
    /// `None` for an open visit and for imported history: neither was closed here.
    pub fingerprint: Option<Fingerprint>,
    /// Which copy this paper is; 1 is the filed original.
    pub copy: u32,
    /// Made by the demonstration: said on every page.
    pub demonstration: bool,
    /// Program and version, as `bubblepoint 0.1.0`.
    pub program: String,
    /// The rulebooks by which this record was judged, each with its version.
    pub rulebooks: Vec<Rulebook>,
    /// The undertaking that did the work (573 Art. 7(1)(e)).
    pub company: Party,
    pub site: SiteText,
    /// Order numbers or names, in the order in which they first occur.
    pub jobs: Vec<String>,
    /// First day of the visit, by the site's own date.
    pub first_day: NaiveDate,
    /// Last day with an entry, or of closing.
    pub last_day: NaiveDate,
    /// Who did the work (82.157(l)(2)(v)); the one who began the visit first.
    pub people: Vec<PersonAtWork>,
    /// One part per appliance, in the order in which they were taken up.
    pub appliances: Vec<AppliancePart>,
    /// Cautions acknowledged, in order of time.
    pub cautions: Vec<Caution>,
    /// `None` for an open visit and for imported history.
    pub technician: Option<SignedBy>,
    /// `None` for an open visit and for imported history.
    pub counterparty: Option<Counterparty>,
    /// To whom, when and how the record was handed over; empty until then.
    pub handed_over: String,
    /// Remarks on the whole record, as *corrected by record 3f9a…*.
    pub remarks: Vec<String>,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[serde(tag = "state", rename_all = "kebab-case")]
pub enum RecordState {
    /// Still open: *draft* on each page.
    Open,
    /// Closed on the site's date and minute, as `16:40`.
    Closed { on: NaiveDate, at: String },
    /// History read from a file: never signed here. `from` names the file.
    Imported { from: String },
}

/// What a closed record can be recognised by.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Fingerprint {
    /// SHA-256 of the closed record, 64 hex digits.
    pub full: String,
}

impl Fingerprint {
    /// Its first eight digits in two groups: `3f9a c1d2`.
    pub fn short(&self) -> String {
        let digits: Vec<char> = self.full.chars().take(8).collect();
        digits.chunks(4).map(|group| group.iter().collect::<String>()).collect::<Vec<_>>().join(" ")
    }
}

/// A rulebook that this record was judged by.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Rulebook {
    /// Id, as `us-82f`.
    pub id: String,
    /// Name of the legal text, as `40 CFR part 82 subpart F`.
    pub name: String,
    pub version: String,
}

/// A company with address and certificate.
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct Party {
    pub name: String,
    pub address: String,
    pub certificate: String,
}

#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct SiteText {
    pub name: String,
    pub address: String,
    pub owner: String,
    pub operator: String,
    /// IANA name; all times on the record are local to it.
    pub time_zone: String,
}

#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct PersonAtWork {
    pub name: String,
    /// Number or name of the certificate.
    pub certificate: String,
    /// As `608 universal`, `573 category A1`.
    pub certificate_kind: String,
    /// As `to 30 Jun 2028`; empty when no end is known.
    pub certificate_validity: String,
    /// Where it is not the record's own company.
    pub company: String,
    pub company_certificate: String,
}

/// One appliance's part of the record.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct AppliancePart {
    pub appliance: ApplianceText,
    /// In order of time; struck ones included, marked.
    pub entries: Vec<EntryFacts>,
    /// What the leak tests of this visit come to, for the plate's head.
    pub finding: Finding,
    /// The latest leak rate by each rulebook that applies.
    pub leak_rates: Vec<LeakRate>,
    /// Additions that asked for no leak rate, and why.
    pub no_rates: Vec<NoRate>,
    /// Open leaks as the visit ends.
    pub open_leaks: Vec<OpenLeak>,
    /// Duties this visit started or met, and those still unmet.
    pub duties: Vec<DutyFacts>,
    /// Gas charged, recovered, lost, each weighted.
    pub amounts: Vec<WeightedAmount>,
    /// Readings of the law that were taken and matter here, one sentence each.
    pub readings: Vec<Notice>,
}

/// The appliance as registered on the visit's last day.
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct ApplianceText {
    /// Identification (82.157(l)(2)(i)).
    pub name: String,
    /// Where on the site it stands (82.157(l)(2)(i)).
    pub place: String,
    pub description: String,
    pub serial: String,
    pub assembly: String,
    /// As `commercial refrigeration`.
    pub category: String,
    /// As `chiller`; empty where no European rulebook applies.
    pub equipment: String,
    /// Designation (573 Art. 7(1)(a)), as `R-22`.
    pub refrigerant: String,
    /// Its nature and weights, as `HCFC, class A1, ODP 0.055, GWP 1,810`.
    pub refrigerant_facts: String,
    /// As written, with its unit (82.157(l)(2)(vii)); empty: not determined.
    pub full_charge: String,
    /// How it was determined, as `measurement`; for a range also its ends and how they were set.
    pub full_charge_method: String,
    /// Quantity added at installation (573 Art. 7(1)(a)).
    pub charged_at_installation: String,
    pub installed_on: Option<NaiveDate>,
    /// Facts that change what the law asks, as `labelled hermetically sealed`.
    pub declared: Vec<String>,
}

/// What this visit says about leaks.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Finding {
    /// No leak test was made.
    #[default]
    NotTested,
    /// Tested, nothing found.
    NoLeak,
    /// Found, and every one repaired for good.
    LeaksRepaired,
    /// At least one leak is open.
    LeaksOpen,
}

/// A caution that was acknowledged before the act.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Caution {
    /// What was acknowledged, in the words shown.
    pub text: String,
    /// What it rests on, as `EN 378-3`, `common practice`.
    pub basis: String,
    /// Day and minute, as `3 Mar 2026, 09:08`.
    pub at: String,
    pub person: String,
}

/// A signature as drawn, with the signer's name.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct SignedBy {
    pub name: String,
    /// Strokes on a field of [`Ink::WIDTH`] by [`Ink::HEIGHT`].
    pub ink: Ink,
}

/// How the owner's or operator's representative ended the visit.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[serde(tag = "how", rename_all = "kebab-case")]
pub enum Counterparty {
    Signed { signed: SignedBy },
    NobodyPresent,
    Refused { name: String, reason: String },
    SignsLater { name: String },
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_fingerprint_is_shown_in_two_groups() {
        assert_eq!(Fingerprint { full: "3f9ac1d2e4".into() }.short(), "3f9a c1d2");
    }
}
