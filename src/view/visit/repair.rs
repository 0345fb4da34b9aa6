//! Repair, its initial and follow-up verification tests, and the day the
//! appliance was back to normal operation: each an entry of its own.

use super::{Panel, duty_due, id};
use crate::app::{AppError, RepairInput, SimpleAct, TestInput};
use crate::ledger::{Act, ApplianceId, Entry, EntryId, InstrumentId, LeakMethod, Scope, TestKind, TestResult, open_leaks};
use crate::rules::{DutyKind, DutyState, assess};
use crate::view::desk::Desk;
use crate::view::shown::{Choice, Fact, Ready};
use crate::view::{format, parse, words};
use serde::{Deserialize, Serialize};

/// Repairs offered to be tested, the latest first.
const OFFERED: usize = 6;

#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub enum Step {
    Repair,
    Initial,
    FollowUp,
    NormalOperation,
}

impl Step {
    const ALL: [Self; 4] = [Self::Repair, Self::Initial, Self::FollowUp, Self::NormalOperation];

    fn key(self) -> &'static str {
        match self {
            Self::Repair => "repair",
            Self::Initial => "initial",
            Self::FollowUp => "follow-up",
            Self::NormalOperation => "normal operation",
        }
    }
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Form {
    pub appliance: ApplianceId,
    pub step: Step,
    /// An open leak by its place; empty is another place.
    pub leak: String,
    pub place: String,
    pub done: String,
    pub parts: String,
    pub temporary: bool,
    pub repair: Option<EntryId>,
    pub method: String,
    pub instrument: Option<InstrumentId>,
    pub failed: bool,
    pub partial: bool,
    pub running_hours: String,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Step(String),
    Leak(String),
    Repair(String),
    Method(String),
    Instrument(String),
    Result(String),
    Temporary(bool),
    Partial(bool),
    /// `place`, `done`, `parts` or `running hours`.
    Edited(String, String),
    Save,
}

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Shown {
    pub appliance: String,
    pub steps: Vec<Choice>,
    pub step: String,
    pub asked: Vec<Fact>,
    pub leaks: Vec<Choice>,
    pub leak: String,
    pub place: String,
    pub done: String,
    pub parts: String,
    pub temporary: bool,
    pub repairs: Vec<Choice>,
    pub repair: String,
    pub methods: Vec<Choice>,
    pub method: String,
    pub instruments: Vec<Choice>,
    pub instrument: String,
    pub result: String,
    pub partial: bool,
    pub asks_running_hours: bool,
    pub running_hours: String,
    pub running_hours_error: String,
    pub save_words: String,
    pub ready: Ready,
}

impl Form {
    fn update(&mut self, msg: Msg) {
        match msg {
            Msg::Step(key) => self.step = Step::ALL.into_iter().find(|step| step.key() == key).unwrap_or(self.step),
            Msg::Leak(key) => self.leak = key,
            Msg::Repair(key) => self.repair = id(&key, EntryId),
            Msg::Instrument(key) => self.instrument = id(&key, InstrumentId),
            Msg::Result(key) => self.failed = key == "fail",
            Msg::Temporary(temporary) => self.temporary = temporary,
            Msg::Partial(partial) => self.partial = partial,
            Msg::Edited(field, text) => match field.as_str() {
                "place" => self.place = text,
                "done" => self.done = text,
                "parts" => self.parts = text,
                _ => self.running_hours = text,
            },
            Msg::Method(_) | Msg::Save => {}
        }
    }

    /// Another method: a detector is named only where one is used.
    fn take_method(&mut self, method: String, detector: Option<InstrumentId>) {
        self.instrument = detector.filter(|_| LeakMethod::find(&method).is_some_and(|method| method.detector));
        self.method = method;
    }

    fn place(&self) -> &str {
        if self.leak.is_empty() { self.place.trim() } else { &self.leak }
    }

    fn ready(&self) -> Ready {
        match self.step {
            Step::Repair if self.place().is_empty() => Ready::not(words::say_where()),
            Step::Repair if self.done.trim().is_empty() => Ready::not(words::say_what_was_done()),
            Step::Initial | Step::FollowUp if self.repair.is_none() => Ready::not(words::no_repair_yet()),
            _ => parse::number(&self.running_hours).map_or_else(Ready::not, |_| Ready::yes()),
        }
    }

    /// After the step is saved, what comes next most often.
    fn next_step(&self) -> Step {
        match self.step {
            Step::Repair if !self.temporary => Step::Initial,
            Step::Initial if !self.failed => Step::FollowUp,
            step => step,
        }
    }
}

impl Desk {
    pub(super) fn begin_repair(&mut self) -> Result<(), AppError> {
        let appliance = self.appliance_in_hand()?;
        if self.work()?.repair.as_ref().is_none_or(|form| form.appliance != appliance) {
            let form = self.fresh_repair(appliance)?;
            self.work_mut()?.repair = Some(form);
        }
        self.open_panel(Panel::Repair)
    }

    /// The form at a step, and at an open leak, before its cautions are read.
    pub(super) fn prepare_repair(&mut self, step: Step, leak: Option<&str>) -> Result<(), AppError> {
        let appliance = self.appliance_in_hand()?;
        let begun = self.work()?.repair.clone().filter(|form| form.appliance == appliance);
        let mut form = begun.map_or_else(|| self.fresh_repair(appliance), Ok)?;
        form.step = step;
        if let Some(leak) = leak {
            leak.clone_into(&mut form.leak);
        }
        self.work_mut()?.repair = Some(form);
        Ok(())
    }

    /// Begins with what is open: a leak, else the test that a repair still wants.
    fn fresh_repair(&self, appliance: ApplianceId) -> Result<Form, AppError> {
        let today = self.today_there()?;
        let entries = self.app.store().entries_of_appliance(appliance)?;
        let leaks = open_leaks(&entries, today);
        let repairs = lasting_repairs(&entries);
        let tested = |kind: TestKind, repair: EntryId| {
            entries
                .iter()
                .filter(|entry| entry.struck_by.is_none() && entry.detail.repair == Some(repair))
                .any(|entry| matches!(&entry.line.act, Act::Test { kind: found, result: Some(TestResult::Pass), .. } if *found == kind))
        };
        let step = match repairs.first() {
            Some(repair) if leaks.is_empty() && !tested(TestKind::InitialVerification, repair.line.entry) => Step::Initial,
            Some(repair) if leaks.is_empty() && !tested(TestKind::FollowUpVerification, repair.line.entry) => Step::FollowUp,
            _ => Step::Repair,
        };
        Ok(Form {
            appliance,
            step,
            leak: leaks.first().map(|leak| leak.place.clone()).unwrap_or_default(),
            place: String::new(),
            done: String::new(),
            parts: String::new(),
            temporary: false,
            repair: repairs.first().map(|repair| repair.line.entry),
            method: LeakMethod::ALL[0].name.to_owned(),
            instrument: self.usual_detector()?,
            failed: false,
            partial: false,
            running_hours: String::new(),
        })
    }

    pub(in crate::view) fn update_repair(&mut self, msg: Msg) -> Result<(), AppError> {
        if msg == Msg::Save {
            return self.save_repair();
        }
        let detector = self.usual_detector()?;
        if let Some(form) = &mut self.work_mut()?.repair {
            match msg {
                Msg::Method(key) => form.take_method(key, detector),
                other => form.update(other),
            }
        }
        self.work()?.repair.as_ref().map_or(Ok(()), |form| self.keep(Panel::Repair, form))
    }

    fn save_repair(&mut self) -> Result<(), AppError> {
        let form = self.work()?.repair.clone().ok_or(AppError::Unknown { what: "repair being entered" })?;
        let (visit, common) = (self.work()?.visit.id, self.work()?.common(Panel::Repair, form.appliance, "")?);
        match form.step {
            Step::Repair => {
                let input = RepairInput {
                    common,
                    place: form.place().to_owned(),
                    parts: form.parts.clone(),
                    done: form.done.clone(),
                    temporary: form.temporary,
                };
                self.app.repair(visit, form.appliance, input)?;
            }
            Step::Initial | Step::FollowUp => {
                self.app.test(visit, form.appliance, self.verification(&form, common)?)?;
            }
            Step::NormalOperation => {
                self.app.simple(visit, form.appliance, SimpleAct::NormalOperation, common)?;
            }
        }
        // Tests are entered under another action: this draft is cleared here.
        self.app.clear_draft(visit, Panel::Repair.action())?;
        self.entered(Panel::Repair, form.appliance)?;
        let next = form.next_step();
        let fresh = Form { step: next, ..self.fresh_repair(form.appliance)? };
        self.work_mut()?.repair = (next != form.step).then_some(fresh);
        Ok(())
    }

    fn verification(&self, form: &Form, common: crate::app::Common) -> Result<TestInput, AppError> {
        let repair = form.repair.map(|id| self.app.store().entry(id)).transpose()?.flatten();
        let kind = if form.step == Step::Initial { TestKind::InitialVerification } else { TestKind::FollowUpVerification };
        Ok(TestInput {
            common,
            kind,
            result: Some(if form.failed { TestResult::Fail } else { TestResult::Pass }),
            scope: Some(Scope::Part),
            method: form.method.clone(),
            instrument: form.instrument,
            parts: String::new(),
            place: repair.map(|repair| repair.detail.place).unwrap_or_default(),
            leaks: Vec::new(),
            repair: form.repair,
            partial: form.partial,
            running_hours: form.running_hours.clone(),
        })
    }

    /// The repair page.
    ///
    /// # Errors
    /// No visit is open, no repair is being entered; the store's own.
    pub fn repair_shown(&self) -> Result<Shown, AppError> {
        let form = self.work()?.repair.as_ref().ok_or(AppError::Unknown { what: "repair being entered" })?;
        let today = self.today_there()?;
        let entries = self.app.store().entries_of_appliance(form.appliance)?;
        let mut leaks: Vec<Choice> = open_leaks(&entries, today)
            .into_iter()
            .filter(|leak| !leak.place.is_empty())
            .map(|leak| {
                let since = words::since(&format::day(leak.since, today));
                Choice::new(&leak.place, &leak.place, format!("{} {since}", words::leak_state(&leak.state)))
            })
            .collect();
        leaks.push(Choice::new("", words::another_place(), ""));
        let repair = |entry: &&Entry| {
            let place = words::leak_place(&entry.detail.place);
            Choice::new(entry.line.entry.to_string(), place, words::repaired(&format::moment(entry.line.at, today)))
        };
        Ok(Shown {
            appliance: self.appliance_words()?,
            steps: Step::ALL.map(|step| Choice::new(step.key(), words::repair_step(step), "")).to_vec(),
            step: form.step.key().to_owned(),
            asked: self.asked(form)?,
            leaks,
            leak: form.leak.clone(),
            place: form.place.clone(),
            done: form.done.clone(),
            parts: form.parts.clone(),
            temporary: form.temporary,
            repairs: lasting_repairs(&entries).iter().take(OFFERED).map(repair).collect(),
            repair: form.repair.map(|repair| repair.to_string()).unwrap_or_default(),
            methods: LeakMethod::ALL.iter().filter(|method| method.direct).map(|method| Choice::word(method.name)).collect(),
            method: form.method.clone(),
            instruments: self.detectors(today),
            instrument: form.instrument.map(|instrument| instrument.to_string()).unwrap_or_default(),
            result: if form.failed { "fail" } else { "pass" }.to_owned(),
            partial: form.partial,
            // Re-checks of the European rules count the hours it ran (2024/573 Art. 5(4)).
            asks_running_hours: form.step == Step::FollowUp,
            running_hours: form.running_hours.clone(),
            running_hours_error: parse::number(&form.running_hours).err().unwrap_or_default(),
            save_words: match form.step {
                Step::Repair => words::save_repair(),
                Step::Initial => words::save_initial_test(),
                Step::FollowUp => words::save_follow_up_test(),
                Step::NormalOperation => words::save_normal_operation(),
            },
            ready: self.ready_at(Panel::Repair, form.appliance, form.ready())?,
        })
    }

    /// What the law asks for at this step, and by when.
    fn asked(&self, form: &Form) -> Result<Vec<Fact>, AppError> {
        let today = self.today_there()?;
        let standing = self.app.appliance_standing(form.appliance, today)?;
        let Some(assessment) = assess(&standing.site, &standing.appliance, &standing.lines, today) else { return Ok(Vec::new()) };
        let kinds: &[DutyKind] = match form.step {
            Step::Repair => &[DutyKind::Repair, DutyKind::RepairOfFoundLeak],
            Step::Initial => &[DutyKind::InitialVerification],
            Step::FollowUp | Step::NormalOperation => &[DutyKind::FollowUpVerification, DutyKind::ReCheck],
        };
        let open = assessment.duties.iter().filter(|duty| kinds.contains(&duty.kind));
        let open = open.filter(|duty| matches!(duty.state(today), DutyState::Open | DutyState::Late));
        Ok(open
            .flat_map(|duty| [Fact::new(duty.kind.name(), duty_due(duty, today)), Fact::new(words::asked_for_by(), &duty.source)])
            .collect())
    }
}

/// Repairs that were meant to last, the latest first.
fn lasting_repairs(entries: &[Entry]) -> Vec<&Entry> {
    let lasting = |entry: &&Entry| entry.struck_by.is_none() && matches!(entry.line.act, Act::Repair { temporary: false });
    let mut repairs: Vec<&Entry> = entries.iter().filter(lasting).collect();
    repairs.sort_by_key(|entry| std::cmp::Reverse((entry.line.at, entry.line.position)));
    repairs
}
