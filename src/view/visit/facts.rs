//! Who is at work and under which job; what was open here before.

use super::{Panel, duty_line, id};
use crate::app::AppError;
use crate::ledger::{ApplianceId, EntryId, PersonId, open_gaps, open_leaks};
use crate::view::desk::Desk;
use crate::view::shown::{Line, Message};
use crate::view::{format, words};

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    SetAtWork(String, bool),
    Job(String),
    /// An open leak or duty: its appliance is taken in hand. A weighing gap: it is asked about again.
    Open(String),
    /// What was open has been read: on to the appliance.
    GoOn,
}

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct AtWork {
    pub key: String,
    pub name: String,
    pub facts: String,
    pub at_work: bool,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Shown {
    pub site: String,
    pub people: Vec<AtWork>,
    pub job: String,
    pub still_open: Vec<Line>,
    /// Nothing is in hand yet: the next step is the appliance.
    pub goes_on: bool,
}

impl Desk {
    pub(in crate::view) fn update_facts(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::SetAtWork(key, true) => {
                let Some(person) = id(&key, PersonId) else { return Ok(()) };
                let visit = self.work()?.visit.id;
                if !self.work()?.visit.people.contains(&person) {
                    self.app.join_visit(visit, person)?;
                }
                self.reload_visit()
            }
            Msg::SetAtWork(_, false) => {
                self.say(Message::told(words::stays_at_work()));
                Ok(())
            }
            Msg::Job(job) => {
                self.work_mut()?.place.job = job;
                self.keep_place()
            }
            Msg::Open(key) => {
                let Some((appliance, item)) = key.split_once('/') else { return Ok(()) };
                let Some(appliance) = id(appliance, ApplianceId) else { return Ok(()) };
                self.take_in_hand(appliance)?;
                match item.strip_prefix("gap/").and_then(|key| id(key, EntryId)) {
                    Some(entry) => self.open_gap(entry),
                    None => self.open_panel(Panel::None),
                }
            }
            Msg::GoOn => self.ask(Panel::ChooseAppliance),
        }
    }

    /// The page of the visit's own facts.
    ///
    /// # Errors
    /// No visit is open; the store's own.
    pub fn facts_shown(&self) -> Result<Shown, AppError> {
        let work = self.work()?;
        let today = self.today_there()?;
        let at_work = |person: &crate::ledger::Person| AtWork {
            key: person.id.to_string(),
            name: person.name.clone(),
            facts: words::certificate(&person.certificate_kind, &person.certificate),
            at_work: work.visit.people.contains(&person.id),
        };
        let since = format::moment(crate::ledger::Moment { date: work.visit.date, minute: work.visit.minute }, today);
        Ok(Shown {
            site: words::site_since(&self.site_name(work.visit.site), &since),
            people: self.registers.people.iter().map(at_work).collect(),
            job: work.place.job.clone(),
            still_open: self.still_open()?,
            goes_on: work.place.appliance.is_none(),
        })
    }

    /// Open leaks, duties and unanswered weighing gaps of the site. Keys begin with the appliance's id.
    pub(super) fn still_open(&self) -> Result<Vec<Line>, AppError> {
        let work = self.work()?;
        let today = self.today_there()?;
        let (mut leaks, mut duties, mut gaps) = (Vec::new(), Vec::new(), Vec::new());
        for appliance in self.registers.appliances_at(work.visit.site) {
            let entries = self.app.store().entries_of_appliance(appliance.id)?;
            for leak in open_leaks(&entries, today) {
                let since = words::since(&format::day(leak.since, today));
                leaks.push(Line {
                    key: format!("{}/leak/{}", appliance.id, leak.place),
                    name: words::open_leak_at(&appliance.name),
                    facts: format::commas([words::leak_place(&leak.place).as_str(), since.as_str()]),
                    state: words::leak_state(&leak.state),
                    ..Line::default()
                });
            }
            for entry in open_gaps(&entries) {
                let cylinder = entry.line.act.cylinder().and_then(|id| self.registers.cylinder(id));
                gaps.push(Line {
                    key: format!("{}/gap/{}", appliance.id, entry.line.entry),
                    name: words::weighed_otherwise(cylinder.map(|cylinder| cylinder.name.as_str()).unwrap_or_default()),
                    facts: format::moment(entry.line.at, today),
                    state: words::unanswered(),
                    ..Line::default()
                });
            }
            let standing = self.app.appliance_standing(appliance.id, today)?;
            let Some(assessment) = crate::rules::assess(&standing.site, &standing.appliance, &standing.lines, today) else { continue };
            use crate::rules::DutyState;
            let open = assessment.duties.iter().filter(|duty| matches!(duty.state(today), DutyState::Open | DutyState::Late));
            duties.extend(open.map(|duty| {
                let line = duty_line(duty, today);
                Line { key: format!("{}/{}", appliance.id, line.key), name: words::duty_at(&line.name, &appliance.name), ..line }
            }));
        }
        Ok([leaks, duties, gaps].concat())
    }
}
