//! What a person fills in for each kind of entry.

use crate::ledger::{
    ChargePurpose, CylinderId, EntryId, InstrumentId, LeakPlace, Moment, PersonId, Reading, RecoveryPurpose, Scope, TestKind, TestResult,
};
use crate::quantity::Weighing;

/// What every entry has.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Common {
    /// On the site's clock; `None` is now.
    pub at: Option<Moment>,
    /// `None` is the one who began the visit.
    pub person: Option<PersonId>,
    pub job: Option<String>,
    pub note: String,
    /// Why it is done although a rule asks to think again; printed.
    pub reason: String,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub struct ChargeInput {
    pub common: Common,
    /// `None` only for a factory charge.
    pub cylinder: Option<CylinderId>,
    pub purpose: ChargePurpose,
    pub reading: Reading,
    /// Hoses that were not emptied.
    pub full_hoses: Option<InstrumentId>,
    /// `liquid` or `vapour`.
    pub phase: String,
    /// `None`: to full charge, as far as anyone can say.
    pub short_by: Option<Weighing>,
    /// The earlier charge whose leak this is.
    pub same_leak_as: Option<EntryId>,
    /// Recycled or reclaimed gas: facility, address, batch, certificate. Empty: as the cylinder has it.
    pub gas_source: String,
    /// Why the first gross differs from the last one known.
    pub weighing_gap: String,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RecoverInput {
    pub common: Common,
    pub cylinder: CylinderId,
    pub purpose: RecoveryPurpose,
    pub reading: Reading,
    /// Hoses that were not emptied.
    pub full_hoses: Option<InstrumentId>,
    /// As typed with its unit.
    pub level_reached: String,
    pub weighing_gap: String,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub struct TestInput {
    pub common: Common,
    pub kind: TestKind,
    pub result: Option<TestResult>,
    pub scope: Option<Scope>,
    pub method: String,
    pub instrument: Option<InstrumentId>,
    pub parts: String,
    pub place: String,
    pub leaks: Vec<LeakPlace>,
    /// The repair that a verification test tests.
    pub repair: Option<EntryId>,
    /// Not all identified leaks were tested.
    pub partial: bool,
    /// As typed, in hours; empty where nobody counted.
    pub running_hours: String,
}

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct RepairInput {
    pub common: Common,
    /// The open leak or place.
    pub place: String,
    pub parts: String,
    /// What was done.
    pub done: String,
    /// Not for good: meets no duty.
    pub temporary: bool,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RecycleInput {
    pub common: Common,
    pub cylinder: CylinderId,
    /// Recovery machine and filter.
    pub method: String,
    pub instrument: Option<InstrumentId>,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RetrofitInput {
    pub common: Common,
    pub refrigerant: String,
    pub full_charge: Option<Weighing>,
}

/// A pressure hold or a vacuum rise: kept as a note with its readings.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct PressureInput {
    pub common: Common,
    /// `pressure hold` or `vacuum rise`.
    pub method: String,
    /// Readings as typed, with their units.
    pub level_reached: String,
    pub instrument: Option<InstrumentId>,
    pub place: String,
}

/// Why a cylinder had weighed otherwise, said later.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct GapAnswerInput {
    pub common: Common,
    /// The entry that left it open.
    pub entry: EntryId,
    pub why: String,
}

/// Acts that say all by their name.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SimpleAct {
    NormalOperation,
    DetectionSystemCheck,
    Mothball,
    Retire,
    PlanMade,
    ReportSent,
    Note,
}

/// Anything that can be entered.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum NewEntry {
    Charge(ChargeInput),
    Recover(RecoverInput),
    Recycle(RecycleInput),
    Test(TestInput),
    Repair(RepairInput),
    Retrofit(RetrofitInput),
    Pressure(PressureInput),
    GapAnswer(GapAnswerInput),
    Simple(SimpleAct, Common),
}

impl NewEntry {
    /// The action of a visit that this comes from; the key of its draft.
    pub fn action(&self) -> &'static str {
        match self {
            Self::Charge(_) => "charge",
            Self::Recover(_) => "recover",
            Self::Recycle(_) => "recycle",
            Self::Test(_) => "leak test",
            Self::Repair(_) => "repair",
            Self::Retrofit(_) => "retrofit",
            Self::Pressure(_) => "pressure",
            Self::GapAnswer(_) => "gap answer",
            Self::Simple(_, _) => "note",
        }
    }

    pub fn common(&self) -> &Common {
        match self {
            Self::Charge(input) => &input.common,
            Self::Recover(input) => &input.common,
            Self::Recycle(input) => &input.common,
            Self::Test(input) => &input.common,
            Self::Repair(input) => &input.common,
            Self::Retrofit(input) => &input.common,
            Self::Pressure(input) => &input.common,
            Self::GapAnswer(input) => &input.common,
            Self::Simple(_, common) => common,
        }
    }
}
