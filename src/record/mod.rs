//! What a service record, an annual account and a list of duties contain, as data, without layout.

mod account;
mod canonical;
mod cautions;
mod closed;
mod due_list;
mod exact;
mod service;

pub use account::{
    AccountLine, AnnualAccount, ApplianceAccount, DutyCounts, DutyTally, GasAccount, WeightedLoss, account_csv, account_json,
};
pub use canonical::{NotCanonical, canonical_json};
pub use cautions::{CATALOGUE, CautionText, CautiousAct, Circumstances, caution, fitting, glides, is_heavy};
pub use closed::{Closed, ClosedEntry, ClosedVisit, FORMAT, NotClosed, VisitFacts, close, fingerprint, read_closed};
pub use due_list::{DueGroup, DueList, DueRow};
pub use service::{
    AppliancePart, ApplianceText, Caution, Counterparty, DutyFacts, DutyStep, EntryFacts, Finding, Fingerprint, LeakRate, Named, NoRate,
    Notice, OpenLeak, Party, PersonAtWork, RateInput, RecordState, RepairFacts, Rulebook, ServiceRecord, SignedBy, SiteText, TestFacts,
    TransferFacts, Verdict, Way, WeightedAmount, Work,
};
