//! The page of the open visit: its appliances as plates, entries in order of time.

use super::judging::duty_key;
use super::{Panel, id, judge, repair};
use crate::app::AppError;
use crate::ledger::{Act, ApplianceId, Entry, EntryId, Moment, TestResult, open_leaks};
use crate::quantity::MassUnit;
use crate::rules::{DutyKind, assess};
use crate::view::desk::Desk;
use crate::view::shown::{Line, Message, Rate, Reason};
use crate::view::{format, words};
use chrono::NaiveDate;

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    ChooseAppliance(String),
    Ask(Panel),
    OpenEntry(String),
    /// A duty or an open leak of the appliance in hand.
    OpenItem(String),
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Shown {
    pub under_way: bool,
    pub site: String,
    pub since: String,
    pub still_open: String,
    pub appliances: Vec<Line>,
    /// Key of the appliance in hand.
    pub appliance: String,
    pub name: String,
    pub place: String,
    pub rates: Vec<Rate>,
    pub entries: Vec<Line>,
    pub no_entry_words: String,
    pub leaks: Vec<Line>,
    pub duties: Vec<Line>,
    pub reasons: Vec<Reason>,
    pub can_close: bool,
}

/// The unit in which an entry was weighed.
pub(in crate::view) fn unit_of(entry: &Entry) -> MassUnit {
    let reading = entry.detail.reading.as_ref();
    reading.and_then(|reading| reading.after.as_ref().or(reading.net.as_ref())).map_or(MassUnit::Kilogram, |written| written.unit)
}

impl Desk {
    pub(in crate::view) fn update_visit(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::ChooseAppliance(key) => {
                let Some(appliance) = id(&key, ApplianceId) else { return Ok(()) };
                let other = self.work()?.place.appliance != Some(appliance);
                self.take_in_hand(appliance)?;
                // A form of another appliance stays as a draft; neither it nor what leads to it is shown over this one.
                if !other || !self.panel.speaks_of_an_appliance() {
                    return Ok(());
                }
                self.work_mut()?.next = Panel::None;
                self.open_panel(Panel::None)
            }
            Msg::Ask(panel) => self.ask(panel),
            Msg::OpenEntry(key) => match id(&key, EntryId) {
                Some(entry) => self.open_entry(entry),
                None => Ok(()),
            },
            Msg::OpenItem(key) => self.open_item(&key),
        }
    }

    /// An open leak leads to its repair; a duty to the action that meets it.
    fn open_item(&mut self, key: &str) -> Result<(), AppError> {
        if let Some(place) = key.strip_prefix("leak/") {
            self.prepare_repair(repair::Step::Repair, Some(place))?;
            return self.ask(Panel::Repair);
        }
        let Some(duty) = self.duty_of_key(key)? else { return Ok(()) };
        match duty {
            DutyKind::Repair | DutyKind::RepairOfFoundLeak => self.ask_for_repair(repair::Step::Repair),
            DutyKind::InitialVerification => self.ask_for_repair(repair::Step::Initial),
            // Only this step asks for the hours that a re-check counts.
            DutyKind::FollowUpVerification | DutyKind::ReCheck => self.ask_for_repair(repair::Step::FollowUp),
            DutyKind::LeakInspection | DutyKind::LeakCheck => self.ask(Panel::LeakTest),
            DutyKind::Plan => self.ask_for_note("plan made"),
            DutyKind::ChronicLeakReport => self.ask_for_note("report sent"),
            DutyKind::DetectionSystemCheck => self.ask_for_note("detection system check"),
            DutyKind::DetermineFullCharge => {
                self.say(Message::told(words::full_charge_in_plant()));
                Ok(())
            }
        }
    }

    fn ask_for_repair(&mut self, step: repair::Step) -> Result<(), AppError> {
        self.prepare_repair(step, None)?;
        self.ask(Panel::Repair)
    }

    fn ask_for_note(&mut self, kind: &str) -> Result<(), AppError> {
        self.prepare_note(kind)?;
        self.ask(Panel::Note)
    }

    /// The kind of the duty that a row of the appliance in hand stands for.
    fn duty_of_key(&self, key: &str) -> Result<Option<DutyKind>, AppError> {
        let today = self.today_there()?;
        let standing = self.app.appliance_standing(self.appliance_in_hand()?, today)?;
        let assessment = assess(&standing.site, &standing.appliance, &standing.lines, today);
        let duties = assessment.map(|assessment| assessment.duties).unwrap_or_default();
        Ok(duties.iter().find(|duty| duty_key(duty) == key).map(|duty| duty.kind))
    }

    /// The page of the visit.
    ///
    /// # Errors
    /// The store's own.
    pub fn visit_shown(&self) -> Result<Shown, AppError> {
        let Some(work) = &self.work else { return Ok(Shown::default()) };
        let today = self.today_there()?;
        let mut appliances = Vec::new();
        for id in work.appliances() {
            if let Some(appliance) = self.registers.appliance(id) {
                let line = self.appliance_line(appliance)?;
                let count = work.entries_of(id).len();
                let done = words::entries(count);
                let gas = self.app.appliance_standing(id, today)?.facts.refrigerant;
                appliances.push(Line { facts: format::commas([&*gas, &*done]), ..line });
            }
        }
        let since = format::moment(Moment { date: work.visit.date, minute: work.visit.minute }, today);
        let shown = Shown {
            under_way: true,
            site: self.site_name(work.visit.site),
            since: words::visit_since(&since),
            still_open: words::still_open_here(self.still_open()?.len()),
            appliances,
            can_close: work.entries.iter().any(|entry| entry.strikes.is_none()),
            no_entry_words: words::nothing_entered(),
            ..Shown::default()
        };
        match work.place.appliance {
            Some(appliance) => self.with_appliance(shown, appliance, today),
            None => Ok(shown),
        }
    }

    fn with_appliance(&self, shown: Shown, appliance: ApplianceId, today: NaiveDate) -> Result<Shown, AppError> {
        let work = self.work()?;
        let standing = self.app.appliance_standing(appliance, today)?;
        let entries = work.entries_of(appliance);
        let unit = entries.iter().find(|entry| entry.line.act.transfer().is_some()).map(|entry| unit_of(entry));
        let unit = unit.or_else(|| standing.facts.full_charge_written.as_ref().map(|written| written.unit)).unwrap_or(MassUnit::Kilogram);
        let judging = judge(&standing, &standing.lines, today, unit, None);
        let all = self.app.store().entries_of_appliance(appliance)?;
        let leaks = open_leaks(&all, today).into_iter().map(|leak| Line {
            key: format!("leak/{}", leak.place),
            name: words::leak_place(&leak.place),
            facts: words::since(&format::day(leak.since, today)),
            state: words::leak_state(&leak.state),
            ..Line::default()
        });
        Ok(Shown {
            appliance: appliance.to_string(),
            name: words::appliance_plate(&standing.appliance.name, &standing.facts.refrigerant, &format::full_charge(&standing.facts)),
            place: standing.facts.place.clone(),
            rates: judging.rates,
            entries: entries.into_iter().map(|entry| self.entry_line(entry, &work.entries, today)).collect(),
            leaks: leaks.collect(),
            duties: judging.duties,
            reasons: judging.reasons,
            ..shown
        })
    }

    /// An entry as a row of its visit.
    pub(in crate::view) fn entry_line(&self, entry: &Entry, all: &[Entry], today: NaiveDate) -> Line {
        let detail = &entry.detail;
        let cylinder = entry.line.act.cylinder().and_then(|id| self.registers.cylinder(id));
        let cylinder = cylinder.map(|cylinder| words::cylinder(&cylinder.name)).unwrap_or_default();
        let unit = unit_of(entry);
        let (facts, state) = match &entry.line.act {
            Act::Charge { purpose, transfer } => {
                let fill = if detail.short_by.is_some() { words::short_by("") } else { String::new() };
                (format::commas([&*cylinder, words::charge_purpose(*purpose), &fill]), format::mass(transfer.mass, unit))
            }
            Act::Recover { purpose, transfer } => (format::commas([&*cylinder, purpose.name()]), format::mass(transfer.mass, unit)),
            Act::Test { result, scope, .. } => {
                let scope = scope.map(crate::ledger::Scope::name).unwrap_or_default();
                let state = match result {
                    Some(TestResult::LeakFound) => words::leaks_found(detail.leaks.len().max(1)),
                    Some(result) => result.name().to_owned(),
                    None => String::new(),
                };
                (format::commas([&*detail.method, scope, &*detail.place]), state)
            }
            Act::Repair { temporary } => {
                let state = if *temporary { words::temporary() } else { String::new() };
                (format::commas([&*detail.place, &*detail.note]), state)
            }
            Act::Retrofit { refrigerant, .. } => (refrigerant.as_ref().map(|gas| format!("now {gas}")).unwrap_or_default(), String::new()),
            Act::Recycle { .. } => (format::commas([&*cylinder, &*detail.method]), String::new()),
            _ => (format::commas([&*detail.level_reached, &*detail.note]), String::new()),
        };
        let facts = match entry.struck_by {
            None => facts,
            Some(by) => {
                let why = all.iter().find(|entry| entry.line.entry == by).map(|by| by.detail.reason.clone());
                words::struck(&why.unwrap_or_default())
            }
        };
        let time = format::clock(entry.line.at.minute);
        Line {
            key: entry.line.entry.to_string(),
            time: if entry.line.at.date == today { time } else { format::day(entry.line.at.date, today) },
            name: entry_name(entry),
            facts,
            state,
            struck: entry.struck_by.is_some(),
            ..Line::default()
        }
    }
}

/// `Charge`, `Leak inspection`, `Pressure hold`: what the entry is, as its heading.
pub(in crate::view) fn entry_name(entry: &Entry) -> String {
    match &entry.line.act {
        Act::Note if !entry.detail.method.is_empty() => format::capital(&entry.detail.method),
        act => format::capital(act.name()),
    }
}
