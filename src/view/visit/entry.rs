//! One entry read in full; struck while its visit is open, corrected once it is
//! closed. A weighing gap that was left open is explained here.

use super::close::{self, InkMsg, Signer, draw, path};
use super::correction::{self, Correcting};
use super::page::{entry_name, unit_of};
use super::{Panel, charge};
use crate::app::{AppError, Common, Correction, GapAnswerInput, NewEntry};
use crate::ledger::{Act, Entry, EntryId, GAP_REASONS, GAP_UNKNOWN, PersonId, Signature, VisitState, WeighingMode, open_gaps};
use crate::measure::Uncertainty;
use crate::quantity::Weighing;
use crate::record::Fingerprint;
use crate::rules::weights;
use crate::store::AFTER_CLOSING;
use crate::view::desk::{Desk, Page};
use crate::view::shown::{Choice, Fact, Message, Ready};
use crate::view::words::captions;
use crate::view::{format, words};
use chrono::NaiveDate;
use serde::{Deserialize, Serialize};

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Serialize, Deserialize)]
pub enum Step {
    #[default]
    Read,
    Strike,
    Correct,
    /// Why a cylinder had weighed otherwise.
    Answer,
}

/// What is typed about an entry; kept as a draft beside the entry's visit.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct State {
    pub entry: EntryId,
    pub step: Step,
    pub correcting: Correcting,
    pub reason: String,
    pub answer: String,
    pub signatures: close::Form,
    /// Where *back* leads when no visit is open.
    #[serde(skip)]
    pub from: Page,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Step(Step),
    /// `instead`, `place`, `reason`, `representative` or `refusal reason`.
    Edited(String, String),
    /// It never happened, or something else is right.
    Never(bool),
    Result(String),
    Answer(String),
    Signing(bool),
    Counterpart(String),
    Ink(Signer, InkMsg),
    Strike,
    Correct,
    SaveAnswer,
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
    pub can_answer: bool,
    pub step: Step,
    pub correcting: correction::Shown,
    pub reason: String,
    pub answers: Vec<Choice>,
    pub answer: String,
    pub signing: bool,
    pub technician: String,
    pub strokes: String,
    pub counterpart: String,
    pub representative: String,
    pub representative_strokes: String,
    pub refusal_reason: String,
    /// What is right instead is said: on to the signatures.
    pub said: Ready,
    pub ready: Ready,
}

/// The key of an entry's draft.
fn draft_key(entry: EntryId) -> String {
    format!("{AFTER_CLOSING}entry {entry}")
}

impl Desk {
    /// Opens an entry, of whatever visit, with what was being typed about it.
    ///
    /// # Errors
    /// The store's own.
    pub fn open_entry(&mut self, entry: EntryId) -> Result<(), AppError> {
        let from = self.page();
        let fresh = State {
            entry,
            step: Step::Read,
            correcting: Correcting::default(),
            reason: String::new(),
            answer: String::new(),
            signatures: close::Form::default(),
            from,
        };
        let visit = self.app.store().entry(entry)?.map(|entry| entry.visit);
        let draft = visit.map(|visit| self.app.draft(visit, &draft_key(entry))).transpose()?.flatten();
        let kept = draft.and_then(|draft| serde_json::from_str::<State>(&draft.body).ok());
        self.entry = Some(kept.map_or(fresh, |kept| State { from, ..kept }));
        self.go(Page::Visit);
        self.open_panel(Panel::Entry)
    }

    /// Opens an entry at the question why its cylinder had weighed otherwise.
    pub(super) fn open_gap(&mut self, entry: EntryId) -> Result<(), AppError> {
        self.open_entry(entry)?;
        self.update_entry(Msg::Step(Step::Answer))
    }

    fn entry_state(&self) -> Result<&State, AppError> {
        self.entry.as_ref().ok_or(AppError::Unknown { what: "entry" })
    }

    /// The entry that is open, from the store.
    fn entry_in_hand(&self) -> Result<Entry, AppError> {
        self.app.store().entry(self.entry_state()?.entry)?.ok_or(AppError::Unknown { what: "entry" })
    }

    pub(in crate::view) fn update_entry(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::Strike => return self.strike(),
            Msg::Correct => return self.correct(),
            Msg::SaveAnswer => return self.answer_gap(),
            _ => {}
        }
        let Some(state) = &mut self.entry else { return Ok(()) };
        let before = state.clone();
        // A stroke is kept when the pen is lifted.
        let (drawing, lifted) = (matches!(msg, Msg::Ink(_, InkMsg::Point { .. })), matches!(msg, Msg::Ink(_, InkMsg::Lifted)));
        match msg {
            Msg::Step(step) => state.step = step,
            Msg::Never(never) => state.correcting.never = never,
            Msg::Result(key) => state.correcting.result = key,
            Msg::Answer(key) => state.answer = key,
            Msg::Signing(signing) => state.signatures.signing = signing,
            Msg::Counterpart(key) => state.signatures.counterpart = key,
            Msg::Edited(field, text) => match field.as_str() {
                "instead" => state.correcting.instead = text,
                "place" => state.correcting.place = text,
                "representative" => state.signatures.representative = text,
                "refusal reason" => state.signatures.refusal_reason = text,
                _ => state.reason = text,
            },
            Msg::Ink(Signer::Technician, msg) => draw(&mut state.signatures.technician_ink, msg),
            Msg::Ink(Signer::Representative, msg) => draw(&mut state.signatures.representative_ink, msg),
            Msg::Strike | Msg::Correct | Msg::SaveAnswer => {}
        }
        if lifted || (!drawing && *state != before) { self.keep_entry() } else { Ok(()) }
    }

    /// Keeps what is typed about the entry, at once.
    fn keep_entry(&self) -> Result<(), AppError> {
        let state = self.entry_state()?;
        let Ok(body) = serde_json::to_string(state) else { return Ok(()) };
        self.app.save_draft(self.entry_in_hand()?.visit, None, &draft_key(state.entry), &body)
    }

    fn strike(&mut self) -> Result<(), AppError> {
        let (state, entry) = (self.entry_state()?.clone(), self.entry_in_hand()?);
        let person = self.work.as_ref().and_then(super::Work::person_in_hand);
        self.app.strike(state.entry, &state.reason, person)?;
        self.app.clear_draft(entry.visit, &draft_key(state.entry))?;
        self.entry = None;
        self.reload_visit()?;
        self.open_panel(Panel::None)
    }

    /// Explains a gap by an entry of the visit that is open.
    fn answer_gap(&mut self) -> Result<(), AppError> {
        let (state, entry) = (self.entry_state()?.clone(), self.entry_in_hand()?);
        let work = self.work()?;
        let common = Common { person: work.person_in_hand(), ..Common::default() };
        let visit = work.visit.id;
        let input = GapAnswerInput { common, entry: state.entry, why: state.answer.clone() };
        self.app.enter(visit, entry.line.appliance, &NewEntry::GapAnswer(input))?;
        self.app.clear_draft(entry.visit, &draft_key(state.entry))?;
        self.entry = None;
        self.reload_visit()?;
        self.open_panel(Panel::None)
    }

    fn correct(&mut self) -> Result<(), AppError> {
        let (state, wrong) = (self.entry_state()?.clone(), self.entry_in_hand()?);
        let person = self.corrector(&wrong)?;
        let name = self.registers.person(person).map(|person| person.name.clone()).unwrap_or_default();
        let closed = self.app.correct(
            state.entry,
            &Correction {
                person,
                why: state.reason.clone(),
                instead: state.correcting.entry(&wrong)?,
                technician: Signature { name, ink: state.signatures.technician_ink.clone() },
                counterpart: state.signatures.counterpart(),
            },
        )?;
        self.app.clear_draft(wrong.visit, &draft_key(state.entry))?;
        let short = Fingerprint { full: closed.fingerprint }.short();
        self.entry = None;
        self.panel = Panel::None;
        self.changed();
        self.say(Message::told(words::correction_saved(&short)));
        self.go(state.from);
        Ok(())
    }

    /// Whoever works on this device; else whoever did what is corrected.
    fn corrector(&self, entry: &Entry) -> Result<PersonId, AppError> {
        if let Some(person) = self.begin.person.filter(|person| self.registers.person(*person).is_some()) {
            return Ok(person);
        }
        let person = entry.detail.person.or_else(|| self.registers.people.first().map(|person| person.id));
        person.ok_or(AppError::Unknown { what: "person" })
    }

    /// The page of one entry.
    ///
    /// # Errors
    /// No entry is open; the store's own.
    pub fn entry_shown(&self) -> Result<Shown, AppError> {
        let (state, entry) = (self.entry_state()?, self.entry_in_hand()?);
        let store = self.app.store();
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
        let unanswered = open_gaps(&store.entries_of_appliance(entry.line.appliance)?).iter().any(|gap| gap.line.entry == state.entry);
        let at_site = self.work.as_ref().is_some_and(|work| work.visit.site == visit.site);
        let said = if state.step == Step::Correct { state.correcting.ready(&entry) } else { Ready::yes() };
        let said = if said.ready && state.reason.trim().is_empty() { Ready::not(words::say_why()) } else { said };
        let ready = match state.step {
            Step::Read => Ready::yes(),
            Step::Answer if state.answer.is_empty() => Ready::not(words::say_why_it_differs()),
            Step::Answer => Ready::yes(),
            Step::Correct if said.ready => state.signatures.ready(),
            Step::Strike | Step::Correct => said.clone(),
        };
        let form = &state.signatures;
        let technician = self.corrector(&entry).ok().and_then(|person| self.registers.person(person));
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
            can_answer: unanswered && at_site,
            step: state.step,
            correcting: state.correcting.shown(&entry),
            reason: state.reason.clone(),
            answers: GAP_REASONS.iter().filter(|reason| **reason != GAP_UNKNOWN).map(|reason| Choice::word(reason)).collect(),
            answer: state.answer.clone(),
            signing: form.signing,
            technician: technician.map(|person| person.name.clone()).unwrap_or_default(),
            strokes: path(&form.technician_ink),
            counterpart: form.counterpart.clone(),
            representative: form.representative.clone(),
            representative_strokes: path(&form.representative_ink),
            refusal_reason: form.refusal_reason.clone(),
            said,
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
            fact(captions::NET, &format!("{}{error}", format::mass(transfer.mass, unit)));
            let written = |weighing: &Option<Weighing>| weighing.as_ref().map(Weighing::text).unwrap_or_default();
            if let Some(reading) = &detail.reading {
                let zeroed = reading.mode == WeighingMode::Zeroed;
                fact(&if zeroed { words::reading_at_start() } else { words::gross_before() }, &written(&reading.before));
                fact(&if zeroed { words::reading_at_end() } else { words::gross_after() }, &written(&reading.after));
                let scale = reading.scale.and_then(|id| self.registers.instrument(id));
                fact(captions::SCALE, scale.map(|scale| scale.name.as_str()).unwrap_or_default());
            }
            let cylinder = transfer.cylinder.and_then(|id| self.registers.cylinder(id));
            let status = detail.gas_status.map(crate::ledger::GasStatus::name).unwrap_or_default();
            fact(captions::CYLINDER, &format::commas([cylinder.map(|cylinder| cylinder.name.as_str()).unwrap_or_default(), status]));
            fact(captions::GAS_FROM, &detail.gas_source);
        }
        match &entry.line.act {
            Act::Charge { purpose, .. } => {
                fact(captions::PURPOSE, words::charge_purpose(*purpose));
                fact(captions::CHARGED_AS, &detail.phase);
                let fill = detail.short_by.as_ref().map_or_else(words::to_full_charge, |short| words::short_by(&short.text()));
                fact(captions::AFTERWARDS, &fill);
            }
            Act::Recover { purpose, .. } => fact(captions::PURPOSE, purpose.name()),
            Act::Test { result, scope, .. } => {
                fact(captions::RESULT, result.map(crate::ledger::TestResult::name).unwrap_or_default());
                fact(captions::LOOKED_AT, scope.map(crate::ledger::Scope::name).unwrap_or_default());
            }
            Act::Retrofit { refrigerant, .. } => fact(captions::GAS_FROM_THEN_ON, refrigerant.as_deref().unwrap_or_default()),
            _ => {}
        }
        fact(captions::METHOD, &detail.method);
        let instrument = detail.instrument.and_then(|id| self.registers.instrument(id));
        fact(captions::INSTRUMENT, instrument.map(|instrument| instrument.name.as_str()).unwrap_or_default());
        for leak in &detail.leaks {
            fact(captions::LEAK, &format::commas([leak.place.as_str(), words::leak_state(&leak.state).as_str()]));
        }
        fact(captions::PLACE, &detail.place);
        fact(captions::PARTS, &detail.parts);
        fact(captions::HOURS_IT_RAN, &detail.running_hours);
        fact(captions::LEVEL_OR_READINGS, &detail.level_reached);
        fact(captions::WHY_IT_WEIGHED_OTHERWISE, &detail.weighing_gap);
        fact(captions::REASON, &detail.reason);
        fact(captions::JOB, entry.line.job.as_deref().unwrap_or_default());
        fact(captions::READ_FROM, &detail.imported_from);
        if let Some(transfer) = entry.line.act.transfer() {
            let standing = self.app.appliance_standing(entry.line.appliance, entry.line.at.date.min(today))?;
            facts.extend(charge::weighted(&standing.facts.refrigerant, transfer.mass, weights(&standing.site_facts)));
        }
        Ok(facts)
    }
}
