//! What was done: the entries of an appliance's part.

use crate::ledger::WeighingMode;
use crate::quantity::Mass;
use chrono::NaiveDate;
use serde::{Deserialize, Serialize};

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
        /// What else was written down, as the readings of a pressure hold and its gauge.
        #[serde(default, skip_serializing_if = "Vec::is_empty")]
        fields: Vec<Named>,
    },
}

/// A value under its caption, both finished.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Named {
    pub caption: String,
    pub value: String,
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
    /// Recovery level that had to be reached, with its article, as
    /// `10 in Hg vacuum (40 CFR 82.156, Table 1: high-pressure, 200 lb or more)`; empty where none was asked for.
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
