//! A correction of a closed entry: what can be put right in it, and the entry
//! that holds instead. The act stays what it was; another act is entered anew.

use super::page::unit_of;
use crate::app::{
    AppError, ChargeInput, Common, NewEntry, PressureInput, RecoverInput, RecycleInput, RepairInput, RetrofitInput, SimpleAct, TestInput,
};
use crate::ledger::{Act, Entry, LeakPlace, Reading, TestKind, TestResult, Transfer, WeighingMode};
use crate::quantity::{MassUnit, Weighing};
use crate::view::shown::{Choice, Ready};
use crate::view::{parse, words};
use serde::{Deserialize, Serialize};

const LASTING: &str = "for good";
const TEMPORARY: &str = "temporary";
/// How the log marks a test of some of the leaks; the entry has it as a fact of its own.
const PARTIAL: &str = "partial";

/// What is typed and chosen.
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(default)]
pub struct Correcting {
    /// It never happened.
    pub never: bool,
    /// The right net, or the right words.
    pub instead: String,
    /// The right result, by its word; empty while it is as it was.
    pub result: String,
    /// Where the leak is that the first entry did not know.
    pub place: String,
}

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Shown {
    pub never: bool,
    /// Something else can be right; else the entry can only be taken out.
    pub can_replace: bool,
    pub why_only_out: String,
    pub caption: String,
    pub instead: String,
    pub error: String,
    pub results: Vec<Choice>,
    pub result: String,
    pub asks_place: bool,
    pub place: String,
}

/// What of an entry can be put right.
enum Kind {
    Net,
    Words,
    /// History without its cylinder or gas, or an answer to a question: taken out and entered anew.
    OnlyOut,
}

fn kind(entry: &Entry) -> Kind {
    match &entry.line.act {
        Act::Charge { .. } | Act::Recover { transfer: Transfer { cylinder: Some(_), .. }, .. } => Kind::Net,
        Act::Recover { .. } | Act::Recycle { cylinder: None } | Act::Retrofit { refrigerant: None, .. } => Kind::OnlyOut,
        Act::Note if entry.detail.answers.is_some() => Kind::OnlyOut,
        _ => Kind::Words,
    }
}

/// The results that an act can have, the first word each.
fn results(act: &Act) -> &'static [&'static str] {
    match act {
        Act::Test { kind: TestKind::InitialVerification | TestKind::FollowUpVerification, .. } => &["pass", "fail"],
        Act::Test { .. } => &["no leak", "leak found"],
        Act::Repair { .. } => &[LASTING, TEMPORARY],
        _ => &[],
    }
}

fn result_of(act: &Act) -> &'static str {
    match act {
        Act::Test { result: Some(result), .. } => result.name(),
        Act::Repair { temporary: true } => TEMPORARY,
        Act::Repair { temporary: false } => LASTING,
        _ => "",
    }
}

impl Correcting {
    fn result<'a>(&'a self, act: &Act) -> &'a str {
        if self.result.is_empty() { result_of(act) } else { &self.result }
    }

    /// A leak is found now where none was written down.
    fn asks_place(&self, entry: &Entry) -> bool {
        let is_test = matches!(entry.line.act, Act::Test { .. });
        is_test && self.result(&entry.line.act) == TestResult::LeakFound.name() && entry.detail.leaks.is_empty()
    }

    fn net(&self, entry: &Entry) -> Result<Option<Weighing>, String> {
        parse::mass(&self.instead, unit_of(entry))
    }

    pub fn shown(&self, entry: &Entry) -> Shown {
        let act = &entry.line.act;
        let kind = kind(entry);
        Shown {
            never: self.never || matches!(kind, Kind::OnlyOut),
            can_replace: !matches!(kind, Kind::OnlyOut),
            why_only_out: if matches!(kind, Kind::OnlyOut) { words::only_taken_out() } else { String::new() },
            caption: match (&kind, act) {
                (Kind::Net, _) => words::right_net(),
                (_, Act::Repair { .. }) => words::right_work(),
                (_, Act::Recycle { .. }) => words::right_recycling(),
                (_, Act::Note) if !entry.detail.method.is_empty() => words::right_readings(),
                _ => words::right_words(),
            },
            instead: self.instead.clone(),
            error: if matches!(kind, Kind::Net) { self.net(entry).err().unwrap_or_default() } else { String::new() },
            results: results(act).iter().map(|result| Choice::word(result)).collect(),
            result: self.result(act).to_owned(),
            asks_place: self.asks_place(entry),
            place: self.place.clone(),
        }
    }

    /// Something differs from what was closed, and it can be read.
    pub fn ready(&self, entry: &Entry) -> Ready {
        if self.never || matches!(kind(entry), Kind::OnlyOut) {
            return Ready::yes();
        }
        if self.asks_place(entry) && self.place.trim().is_empty() {
            return Ready::not(words::add_the_place());
        }
        let typed = !self.instead.trim().is_empty();
        match kind(entry) {
            Kind::Net => match self.net(entry) {
                Err(sentence) => Ready::not(sentence),
                Ok(None) => Ready::not(words::say_instead()),
                Ok(Some(_)) => Ready::yes(),
            },
            _ if typed || self.result(&entry.line.act) != result_of(&entry.line.act) => Ready::yes(),
            _ => Ready::not(words::say_instead()),
        }
    }

    /// The entry that holds instead; `None`: it never happened.
    ///
    /// # Errors
    /// The net that was typed cannot be read.
    pub fn entry(&self, wrong: &Entry) -> Result<Option<NewEntry>, AppError> {
        if self.never || matches!(kind(wrong), Kind::OnlyOut) {
            return Ok(None);
        }
        let detail = &wrong.detail;
        let typed = self.instead.trim();
        let or = |before: &str| if typed.is_empty() { before.to_owned() } else { typed.to_owned() };
        // Who did it, when and for which job stay as they were.
        let common =
            |note: String| Common { person: detail.person, job: wrong.line.job.as_deref().map(str::to_owned), note, ..Common::default() };
        let net = || -> Result<Reading, AppError> {
            let read = self.net(wrong).map_err(|sentence| AppError::Input { field: "instead", sentence })?;
            Ok(Reading { mode: WeighingMode::NetOnly, before: None, after: None, net: read, scale: None })
        };
        let simple = |act| NewEntry::Simple(act, common(or(&detail.note)));
        Ok(Some(match &wrong.line.act {
            Act::Charge { purpose, transfer } => NewEntry::Charge(ChargeInput {
                common: common(detail.note.clone()),
                cylinder: transfer.cylinder,
                purpose: *purpose,
                reading: net()?,
                full_hoses: None,
                phase: detail.phase.clone(),
                short_by: detail.short_by.clone(),
                same_leak_as: detail.same_leak_as,
                gas_source: detail.gas_source.clone(),
                weighing_gap: detail.weighing_gap.clone(),
            }),
            Act::Recover { purpose, transfer: Transfer { cylinder: Some(cylinder), .. } } => NewEntry::Recover(RecoverInput {
                common: common(detail.note.clone()),
                cylinder: *cylinder,
                purpose: *purpose,
                reading: net()?,
                full_hoses: None,
                level_reached: detail.level_reached.clone(),
                weighing_gap: detail.weighing_gap.clone(),
            }),
            Act::Test { kind, scope, partial, .. } => {
                let result = TestResult::from_name(self.result(&wrong.line.act)).ok();
                let new_place = LeakPlace { place: self.place.trim().to_owned(), state: String::new() };
                let leaks = match result {
                    Some(TestResult::LeakFound) if detail.leaks.is_empty() => vec![new_place],
                    Some(TestResult::NoLeak) => Vec::new(),
                    _ => detail.leaks.clone(),
                };
                NewEntry::Test(TestInput {
                    common: common(or(detail.note.strip_prefix(PARTIAL).filter(|_| *partial).unwrap_or(&detail.note).trim())),
                    kind: *kind,
                    result,
                    scope: *scope,
                    method: detail.method.clone(),
                    instrument: detail.instrument,
                    parts: detail.parts.clone(),
                    place: detail.place.clone(),
                    leaks,
                    repair: detail.repair,
                    partial: *partial,
                    running_hours: detail.running_hours.clone(),
                })
            }
            Act::Repair { .. } => NewEntry::Repair(RepairInput {
                common: common(String::new()),
                place: detail.place.clone(),
                parts: detail.parts.clone(),
                done: or(&detail.note),
                temporary: self.result(&wrong.line.act) == TEMPORARY,
            }),
            Act::Retrofit { refrigerant, full_charge } => NewEntry::Retrofit(RetrofitInput {
                common: common(or(&detail.note)),
                refrigerant: refrigerant.clone().unwrap_or_default(),
                full_charge: detail
                    .new_full_charge
                    .clone()
                    .or_else(|| full_charge.map(|mass| Weighing::new(mass.kg_text(), MassUnit::Kilogram))),
            }),
            Act::Recycle { cylinder: Some(cylinder) } => NewEntry::Recycle(RecycleInput {
                common: common(detail.note.clone()),
                cylinder: *cylinder,
                method: or(&detail.method),
                instrument: detail.instrument,
            }),
            Act::Note if !detail.method.is_empty() => NewEntry::Pressure(PressureInput {
                common: common(detail.note.clone()),
                method: detail.method.clone(),
                level_reached: or(&detail.level_reached),
                instrument: detail.instrument,
                place: detail.place.clone(),
            }),
            Act::NormalOperation => simple(SimpleAct::NormalOperation),
            Act::DetectionSystemCheck => simple(SimpleAct::DetectionSystemCheck),
            Act::Mothball => simple(SimpleAct::Mothball),
            Act::Retire => simple(SimpleAct::Retire),
            Act::PlanMade => simple(SimpleAct::PlanMade),
            Act::ReportSent => simple(SimpleAct::ReportSent),
            // What can only be taken out does not come here.
            Act::Note | Act::Recover { .. } | Act::Recycle { .. } => simple(SimpleAct::Note),
        }))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ledger::{ApplianceId, Detail, EntryId, Line, Moment, VisitId};
    use uuid::Uuid;

    fn entry(act: Act, detail: Detail) -> Entry {
        let at = Moment { date: "2026-04-01".parse().unwrap(), minute: Some(600) };
        let line = Line { entry: EntryId(Uuid::nil()), appliance: ApplianceId(Uuid::nil()), at, position: 1, job: None, act };
        Entry { line, visit: VisitId(Uuid::nil()), written: chrono::DateTime::UNIX_EPOCH, strikes: None, struck_by: None, detail }
    }

    fn words(text: &str) -> Correcting {
        Correcting { instead: text.to_owned(), ..Correcting::default() }
    }

    #[test]
    fn every_act_stays_what_it_was() {
        let retrofit = Act::Retrofit { refrigerant: Some("R-448A".to_owned()), full_charge: None };
        for act in [Act::Mothball, Act::Retire, Act::PlanMade, Act::ReportSent, Act::NormalOperation, Act::DetectionSystemCheck, retrofit] {
            let wrong = entry(act.clone(), Detail::default());
            let instead = words("another day").entry(&wrong).unwrap().unwrap();
            let same = match (&act, &instead) {
                (Act::Retrofit { .. }, NewEntry::Retrofit(input)) => input.refrigerant == "R-448A" && input.common.note == "another day",
                (_, NewEntry::Simple(simple, common)) => format!("{simple:?}") == format!("{act:?}") && common.note == "another day",
                _ => false,
            };
            assert!(same, "{act:?} became {instead:?}");
        }
        let recycle = Act::Recycle { cylinder: Some(crate::ledger::CylinderId(Uuid::nil())) };
        assert!(matches!(words("machine 3").entry(&entry(recycle, Detail::default())), Ok(Some(NewEntry::Recycle(_)))));
    }

    #[test]
    fn a_result_can_be_put_right() {
        let test = Act::Test {
            kind: TestKind::LeakInspection,
            result: Some(TestResult::NoLeak),
            scope: None,
            partial: false,
            running_hundredths: None,
        };
        let wrong = entry(test, Detail { note: "all joints".to_owned(), ..Detail::default() });
        let mut correcting = Correcting::default();
        assert!(!correcting.ready(&wrong).ready, "nothing differs yet");
        correcting.result = "leak found".to_owned();
        assert!(correcting.shown(&wrong).asks_place && !correcting.ready(&wrong).ready);
        correcting.place = "flare at drier".to_owned();
        assert!(correcting.ready(&wrong).ready);
        let Some(NewEntry::Test(input)) = correcting.entry(&wrong).unwrap() else { panic!() };
        assert_eq!((input.result, input.leaks[0].place.as_str()), (Some(TestResult::LeakFound), "flare at drier"));
        assert_eq!(input.common.note, "all joints");
        let repair = entry(Act::Repair { temporary: false }, Detail { note: "clamp set".to_owned(), ..Detail::default() });
        let temporary = Correcting { result: TEMPORARY.to_owned(), ..Correcting::default() };
        let Some(NewEntry::Repair(input)) = temporary.entry(&repair).unwrap() else { panic!() };
        assert!(input.temporary && input.done == "clamp set");
    }

    #[test]
    fn what_cannot_be_replaced_says_so() {
        let transfer =
            Transfer { mass: crate::quantity::Mass::from_kg(2), cylinder: None, division: None, hoses: crate::quantity::Mass::ZERO };
        let recovery = entry(Act::Recover { purpose: crate::ledger::RecoveryPurpose::Repair, transfer }, Detail::default());
        let shown = Correcting::default().shown(&recovery);
        assert!(shown.never && !shown.can_replace && !shown.why_only_out.is_empty());
        assert_eq!(words("3 kg").entry(&recovery).unwrap(), None);
    }
}
