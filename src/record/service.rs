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

use super::exact;
use crate::ledger::{Ink, RateMethod, WeighingMode};
use crate::quantity::{Mass, Ratio};
use chrono::NaiveDate;
use serde::{Deserialize, Serialize};

/// One visit, ready to be laid out.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct ServiceRecord {
    pub state: RecordState,
    /// `None` for an open visit and for imported history: neither was closed here.
    pub fingerprint: Option<Fingerprint>,
    /// Which copy this paper is; 1 is the first print.
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

/// One entry.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct EntryFacts {
    /// The site's date.
    pub on: NaiveDate,
    /// As `09:40`; empty where history does not say.
    pub at: String,
    pub person: String,
    pub job: String,
    pub work: Work,
    /// Parts looked at or worked on (82.157(l)(2)(iii)).
    pub parts: String,
    pub note: String,
    /// The reason given where the law leaves room for judgement.
    pub reason: String,
    /// What this entry corrects: the earlier record, its entry, and why. Empty for others.
    pub corrects: String,
    /// Struck by a later entry: shown struck through, left out of sums.
    pub struck: bool,
    /// When and why it was struck, as `struck 09:52: wrong cylinder`.
    pub struck_because: String,
    /// History: file and line, as `log.csv, line 14`; empty for entries made here.
    pub imported_from: String,
}

/// What was done (82.157(l)(2)(iv)).
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[serde(tag = "work", rename_all = "kebab-case")]
pub enum Work {
    Transfer(Box<TransferFacts>),
    Test(Box<TestFacts>),
    Repair(RepairFacts),
    /// Any other entry, under its own word: `mothball`, `note`, `recycle`.
    /// `text` is one finished sentence, which may be empty; `figure` stands at the right.
    Other {
        name: String,
        text: String,
        figure: String,
    },
}

/// Which way gas went.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Way {
    Charge,
    Recover,
}

/// Gas moved, known by weighing (82.157(l)(2)(vi); 573 Art. 7(1)(b)–(d)).
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct TransferFacts {
    pub way: Way,
    pub refrigerant: String,
    /// The trade's word, as `leak`, `seasonal`.
    pub purpose: String,
    /// Empty where no cylinder was named (history, factory charge).
    pub cylinder: String,
    /// As `virgin`; empty where unknown.
    pub gas_status: String,
    /// Reclaimed or recycled gas: facility, address, batch, certificate (573 Art. 7(1)(d)).
    pub gas_source: String,
    /// `liquid` or `vapour`.
    pub phase: String,
    pub weighing: WeighingMode,
    /// Reading as typed, with its unit; empty in net-only history.
    pub before: String,
    pub after: String,
    /// Scale, serial and division, as `Scale 2, K-114, division 0.005 kg`.
    pub scale: String,
    /// The net, with its unit, as `4.540 kg`.
    pub net: String,
    /// The net exactly.
    pub net_mass: Mass,
    /// Weighing error, as `± 0.008 kg`; empty: unknown.
    pub error: String,
    /// What the hoses can hide, as `hoses emptied`, `hoses up to 0.05 kg`; empty where nothing was said.
    pub hoses: String,
    /// `to full charge`, or `short by about 1 lb`; empty for recoveries and history.
    pub fill: String,
    /// Recovery or evacuation level that had to be reached, with its article.
    pub level_required: String,
    pub level_reached: String,
    /// Why the first gross differs from the last one known.
    pub weighing_gap: String,
}

/// A leak test, leak inspection, verification test or re-check
/// (82.157(l)(3), (5); 573 Art. 7(1)(f)).
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct TestFacts {
    /// The trade's word, as `leak inspection`.
    pub kind: String,
    pub method: String,
    /// Direct and indirect methods are told apart; `None` where unknown.
    pub direct: Option<bool>,
    /// `whole appliance`, `part`; empty where unknown.
    pub scope: String,
    /// Detector or gauge, serial and the day of its last check.
    pub instrument: String,
    pub place: String,
    /// `pass`, `fail`, `leak found`, `no leak`; empty where not said.
    pub result: String,
    /// Each leak place found, as `flare at liquid line drier: isolated`.
    pub leaks: Vec<String>,
    /// Running hours since the repair, with their unit.
    pub running_hours: String,
    /// The repair tested, as `repair of 3 Mar 2026, 10:05`.
    pub of_repair: String,
    /// The certification of a leak inspection that all visible and accessible
    /// parts were inspected (82.157(l)(3)); a sentence, or empty.
    pub certification: String,
    /// Why this test does not count as what it is named, as `does not count: no initial test stands before it`; or empty.
    pub does_not_count: String,
}

#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct RepairFacts {
    /// The open leak or place.
    pub place: String,
    /// What was done.
    pub done: String,
    /// Not for good: meets no duty.
    pub temporary: bool,
}

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
