//! One entry read in full; struck while its visit is open, corrected once it is closed.

use super::close::{InkMsg, draw, path};
use super::page::{entry_name, unit_of};
use super::{Panel, charge};
use crate::app::{AppError, ChargeInput, Common, Correction, NewEntry, RecoverInput, RepairInput, SimpleAct, TestInput};
use crate::ledger::{Act, Counterpart, Entry, EntryId, Ink, PersonId, Reading, Signature, Transfer, VisitState, WeighingMode};
use crate::measure::Uncertainty;
use crate::quantity::Weighing;
use crate::record::Fingerprint;
use crate::rules::weights;
use crate::view::desk::{Desk, Page};
use crate::view::shown::{Fact, Message, Ready};
use crate::view::{format, parse, words};
use chrono::NaiveDate;

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Step {
    #[default]
    Read,
    Strike,
    Correct,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub struct State {
    pub entry: EntryId,
    pub step: Step,
    pub instead: String,
    pub reason: String,
    pub ink: Ink,
    /// Where *back* leads when no visit is open.
    pub from: Page,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Step(Step),
    /// `instead` or `reason`.
    Edited(String, String),
    Ink(InkMsg),
    Strike,
    Correct,
}

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Shown {
    pub title: String,
    pub facts: String,
    pub lines: Vec<Fact>,
    pub note: String,
    pub struck_words: String,
    pub can_strike: bool,
    pub can_correct: bool,
    pub step: Step,
    pub instead: String,
    pub reason: String,
    pub technician: String,
    pub strokes: String,
    pub ready: Ready,
}

impl Desk {
    /// Opens an entry, of whatever visit.
    ///
    /// # Errors
    /// The store's own.
    pub fn open_entry(&mut self, entry: EntryId) -> Result<(), AppError> {
        let from = self.page();
        self.entry = Some(State { entry, step: Step::Read, instead: String::new(), reason: String::new(), ink: Ink::default(), from });
        self.go(Page::Visit);
        self.open_panel(Panel::Entry)
    }

    fn entry_state(&self) -> Result<&State, AppError> {
        self.entry.as_ref().ok_or(AppError::Unknown { what: "entry" })
    }

    pub(in crate::view) fn update_entry(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::Strike => return self.strike(),
            Msg::Correct => return self.correct(),
            _ => {}
        }
        let Some(state) = &mut self.entry else { return Ok(()) };
        match msg {
            Msg::Step(step) => state.step = step,
            Msg::Edited(field, text) if field == "instead" => state.instead = text,
            Msg::Edited(_, text) => state.reason = text,
            Msg::Ink(msg) => draw(&mut state.ink, msg),
            Msg::Strike | Msg::Correct => {}
        }
        Ok(())
    }

    fn strike(&mut self) -> Result<(), AppError> {
        let (entry, reason) = (self.entry_state()?.entry, self.entry_state()?.reason.clone());
        self.app.strike(entry, &reason)?;
        self.entry = None;
        self.entered()
    }

    fn correct(&mut self) -> Result<(), AppError> {
        let state = self.entry_state()?.clone();
        let person = self.corrector(state.entry)?;
        let name = self.registers.person(person).map(|person| person.name.clone()).unwrap_or_default();
        let wrong = self.app.store().entry(state.entry)?.ok_or(AppError::Unknown { what: "entry" })?;
        let closed = self.app.correct(
            state.entry,
            &Correction {
                person,
                why: state.reason.clone(),
                instead: self.instead(&wrong, state.instead.trim())?,
                technician: Signature { name, ink: state.ink.clone() },
                counterpart: Counterpart::NobodyPresent,
            },
        )?;
        let short = Fingerprint { full: closed.fingerprint }.short();
        self.entry = None;
        self.panel = Panel::None;
        self.changed();
        self.say(Message::told(words::correction_saved(&short)));
        self.go(state.from);
        Ok(())
    }

    /// Whoever works on this device; else whoever did what is corrected.
    fn corrector(&self, entry: EntryId) -> Result<PersonId, AppError> {
        if let Some(person) = self.begin.person.filter(|person| self.registers.person(*person).is_some()) {
            return Ok(person);
        }
        let entry = self.app.store().entry(entry)?;
        let person = entry.and_then(|entry| entry.detail.person).or_else(|| self.registers.people.first().map(|person| person.id));
        person.ok_or(AppError::Unknown { what: "person" })
    }

    /// What holds instead: for a transfer another net, else other words. Nothing typed: it never happened.
    fn instead(&self, wrong: &Entry, text: &str) -> Result<Option<NewEntry>, AppError> {
        if text.is_empty() {
            return Ok(None);
        }
        let detail = &wrong.detail;
        let common = |note: String| Common { person: None, job: wrong.line.job.as_deref().map(str::to_owned), note, ..Common::default() };
        let net = || -> Result<Reading, AppError> {
            let read = parse::mass(text, unit_of(wrong)).map_err(|sentence| AppError::Input { field: "instead", sentence })?;
            Ok(Reading { mode: WeighingMode::NetOnly, before: None, after: None, net: read, scale: None })
        };
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
            Act::Test { kind, result, scope, partial, .. } => NewEntry::Test(TestInput {
                common: common(text.to_owned()),
                kind: *kind,
                result: *result,
                scope: *scope,
                method: detail.method.clone(),
                instrument: detail.instrument,
                parts: detail.parts.clone(),
                place: detail.place.clone(),
                leaks: detail.leaks.clone(),
                repair: detail.repair,
                partial: *partial,
                running_hours: detail.running_hours.clone(),
            }),
            Act::Repair { temporary } => NewEntry::Repair(RepairInput {
                common: common(String::new()),
                place: detail.place.clone(),
                parts: detail.parts.clone(),
                done: text.to_owned(),
                temporary: *temporary,
            }),
            _ => NewEntry::Simple(SimpleAct::Note, common(text.to_owned())),
        }))
    }

    /// The page of one entry.
    ///
    /// # Errors
    /// No entry is open; the store's own.
    pub fn entry_shown(&self) -> Result<Shown, AppError> {
        let state = self.entry_state()?;
        let store = self.app.store();
        let entry = store.entry(state.entry)?.ok_or(AppError::Unknown { what: "entry" })?;
        let visit = store.visit(entry.visit)?.ok_or(AppError::Unknown { what: "visit" })?;
        let today = self.app.today();
        let appliance = self.registers.appliance(entry.line.appliance);
        let person = entry.detail.person.and_then(|id| self.registers.person(id)).map(|person| person.name.clone());
        let struck_by = entry.struck_by.map(|by| store.entry(by)).transpose()?.flatten();
        let open = visit.state == VisitState::Open;
        let struck_words = match &struck_by {
            Some(by) if by.visit == entry.visit => words::struck(&by.detail.reason),
            Some(by) => words::corrected(&by.detail.reason),
            None => String::new(),
        };
        let ready = if state.reason.trim().is_empty() {
            Ready::not(if state.step == Step::Correct { words::say_why_or_instead() } else { words::say_why() })
        } else if state.step == Step::Correct && state.ink.is_empty() {
            Ready::not(words::sign_the_correction())
        } else {
            Ready::yes()
        };
        Ok(Shown {
            title: entry_name(&entry),
            facts: format::commas([
                appliance.map(|appliance| appliance.name.as_str()).unwrap_or_default(),
                &format::moment(entry.line.at, today),
                person.as_deref().unwrap_or_default(),
            ]),
            lines: self.entry_facts(&entry, today)?,
            note: entry.detail.note.clone(),
            struck_words,
            can_strike: open && entry.struck_by.is_none(),
            can_correct: !open && entry.struck_by.is_none(),
            step: state.step,
            instead: state.instead.clone(),
            reason: state.reason.clone(),
            technician: self
                .corrector(state.entry)
                .ok()
                .and_then(|person| self.registers.person(person))
                .map(|person| person.name.clone())
                .unwrap_or_default(),
            strokes: path(&state.ink),
            ready,
        })
    }

    fn entry_facts(&self, entry: &Entry, today: NaiveDate) -> Result<Vec<Fact>, AppError> {
        let mut facts = Vec::new();
        let detail = &entry.detail;
        let mut fact = |caption: &str, value: &str| {
            if !value.is_empty() {
                facts.push(Fact::new(caption, value));
            }
        };
        if let Some(transfer) = entry.line.act.transfer() {
            let unit = unit_of(entry);
            let error = transfer.division.map(|division| Uncertainty::of_net(division, transfer.hoses).expanded_kg_text(3));
            let error = error.map(|error| format!(" {}", words::plus_minus(&format!("{error} kg")))).unwrap_or_default();
            fact("net", &format!("{}{error}", format::mass(transfer.mass, unit)));
            let written = |weighing: &Option<Weighing>| weighing.as_ref().map(Weighing::text).unwrap_or_default();
            if let Some(reading) = &detail.reading {
                let zeroed = reading.mode == WeighingMode::Zeroed;
                fact(if zeroed { "zeroed, at start" } else { "gross before" }, &written(&reading.before));
                fact(if zeroed { "at end" } else { "gross after" }, &written(&reading.after));
                let scale = reading.scale.and_then(|id| self.registers.instrument(id));
                fact("scale", scale.map(|scale| scale.name.as_str()).unwrap_or_default());
            }
            let cylinder = transfer.cylinder.and_then(|id| self.registers.cylinder(id));
            let status = detail.gas_status.map(crate::ledger::GasStatus::name).unwrap_or_default();
            fact("cylinder", &format::commas([cylinder.map(|cylinder| cylinder.name.as_str()).unwrap_or_default(), status]));
            fact("gas from", &detail.gas_source);
        }
        match &entry.line.act {
            Act::Charge { purpose, .. } => {
                fact("purpose", purpose.name());
                fact("charged as", &detail.phase);
                let fill = detail.short_by.as_ref().map_or_else(words::to_full_charge, |short| words::short_by(&short.text()));
                fact("afterwards", &fill);
            }
            Act::Recover { purpose, .. } => fact("purpose", purpose.name()),
            Act::Test { result, scope, .. } => {
                fact("result", result.map(crate::ledger::TestResult::name).unwrap_or_default());
                fact("looked at", scope.map(crate::ledger::Scope::name).unwrap_or_default());
            }
            Act::Retrofit { refrigerant, .. } => fact("gas from then on", refrigerant.as_deref().unwrap_or_default()),
            _ => {}
        }
        fact("method", &detail.method);
        let instrument = detail.instrument.and_then(|id| self.registers.instrument(id));
        fact("instrument", instrument.map(|instrument| instrument.name.as_str()).unwrap_or_default());
        for leak in &detail.leaks {
            fact("leak", &format::commas([leak.place.as_str(), words::leak_state(&leak.state).as_str()]));
        }
        fact("place", &detail.place);
        fact("parts", &detail.parts);
        fact("hours it ran", &detail.running_hours);
        fact("level or readings", &detail.level_reached);
        fact("why it weighed otherwise", &detail.weighing_gap);
        fact("reason", &detail.reason);
        fact("job", entry.line.job.as_deref().unwrap_or_default());
        fact("read from", &detail.imported_from);
        if let Some(transfer) = entry.line.act.transfer() {
            let standing = self.app.appliance_standing(entry.line.appliance, entry.line.at.date.min(today))?;
            facts.extend(charge::weighted(&standing.facts.refrigerant, transfer.mass, weights(&standing.site_facts)));
        }
        Ok(facts)
    }
}
