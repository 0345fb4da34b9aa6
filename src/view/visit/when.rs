//! When an entry was made, and by whom: now, and whoever was named last,
//! unless something else is said.

use super::{Panel, Work, id};
use crate::app::{AppError, Common};
use crate::ledger::{ApplianceId, Moment, PersonId};
use crate::view::desk::Desk;
use crate::view::shown::{Choice, Reading, Ready};
use crate::view::{format, words};
use chrono::{Datelike, Days, Months, NaiveDate};
use serde::{Deserialize, Serialize};

/// Signs of a time: two for the hour, two for the minute.
const SIGNS: usize = 4;

/// A day and time said for an entry that is being filled in.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Said {
    panel: Panel,
    appliance: ApplianceId,
    date: NaiveDate,
    /// The figures as typed: `945`, `1205`.
    time: String,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    /// Opens the page from the action in front.
    Open,
    Person(String),
    /// `day`, `month` or `year`, and by how many.
    Step(String, i32),
    Today,
    Key(String),
    /// It is being done now: nothing is said about the time.
    Now,
    Done,
}

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Shown {
    pub appliance: String,
    pub people: Vec<Choice>,
    pub person: String,
    pub is_now: bool,
    pub now: String,
    pub day: String,
    pub month: String,
    pub year: String,
    pub day_words: String,
    pub time: Reading,
    pub error: String,
    pub ready: Ready,
}

/// What the head of an action says.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Stamp {
    pub when: String,
    /// Empty where only one person is at work.
    pub who: String,
    pub wrong: bool,
}

impl Said {
    /// Hours and minutes; a sentence where the figures are no time.
    fn minute(&self) -> Result<u16, String> {
        let split = self.time.len().checked_sub(2).filter(|hours| *hours > 0).ok_or_else(words::time_missing)?;
        let (hours, minutes) = self.time.split_at(split);
        match (hours.parse::<u16>(), minutes.parse::<u16>()) {
            (Ok(hours), Ok(minutes)) if hours < 24 && minutes < 60 => Ok(hours * 60 + minutes),
            _ => Err(words::no_such_time(&self.written())),
        }
    }

    /// `9:45` as far as it is typed.
    fn written(&self) -> String {
        match self.time.len() {
            0..=2 => self.time.clone(),
            length => format!("{}:{}", &self.time[..length - 2], &self.time[length - 2..]),
        }
    }

    fn press(&mut self, key: &str) {
        match key {
            "back" => drop(self.time.pop()),
            digit if digit.len() == 1 && digit.bytes().all(|sign| sign.is_ascii_digit()) => {
                // A further figure after a whole time begins a new one.
                if self.time.len() >= SIGNS {
                    self.time.clear();
                }
                self.time.push_str(digit);
            }
            _ => {}
        }
    }

    fn step(&mut self, part: &str, by: i32) {
        let count = by.unsigned_abs();
        let months = Months::new(if part == "year" { count.saturating_mul(12) } else { count });
        let stepped = match (part, by < 0) {
            ("day", false) => self.date.checked_add_days(Days::new(count.into())),
            ("day", true) => self.date.checked_sub_days(Days::new(count.into())),
            (_, false) => self.date.checked_add_months(months),
            (_, true) => self.date.checked_sub_months(months),
        };
        self.date = stepped.unwrap_or(self.date);
    }

    fn moment(&self) -> Result<Moment, String> {
        Ok(Moment { date: self.date, minute: Some(self.minute()?) })
    }
}

impl Work {
    /// Whoever does what is entered: named last, else the one who began.
    pub(super) fn person_in_hand(&self) -> Option<PersonId> {
        let named = self.place.person.filter(|person| self.visit.people.contains(person));
        named.or(self.visit.people.first().copied())
    }

    fn said(&self, panel: Panel, appliance: ApplianceId) -> Option<&Said> {
        self.place.said.iter().find(|said| said.panel == panel && said.appliance == appliance)
    }

    pub(super) fn forget_said(&mut self, panel: Panel, appliance: ApplianceId) {
        self.place.said.retain(|said| said.panel != panel || said.appliance != appliance);
    }

    /// What every entry has, of the action that it is filled in at.
    ///
    /// # Errors
    /// The time that was typed is none.
    pub(super) fn common(&self, panel: Panel, appliance: ApplianceId, reason: &str) -> Result<Common, AppError> {
        let at = self.said(panel, appliance).map(Said::moment).transpose();
        let at = at.map_err(|sentence| AppError::Input { field: "time", sentence })?;
        let job = Some(self.place.job.trim().to_owned()).filter(|job| !job.is_empty());
        Ok(Common { at, person: self.person_in_hand(), job, reason: reason.trim().to_owned(), ..Common::default() })
    }
}

impl Desk {
    pub(in crate::view) fn update_when(&mut self, msg: Msg) -> Result<(), AppError> {
        if msg == Msg::Open {
            let panel = self.panel;
            self.work_mut()?.next = panel;
            return self.open_panel(Panel::When);
        }
        let (panel, appliance) = (self.work()?.next, self.appliance_in_hand()?);
        if msg == Msg::Done {
            return self.open_panel(panel);
        }
        let now = self.now_there()?;
        let work = self.work_mut()?;
        match &msg {
            Msg::Person(key) => work.place.person = id(key, PersonId),
            Msg::Now => work.forget_said(panel, appliance),
            _ => {
                let mut said = work.said(panel, appliance).cloned().unwrap_or_else(|| Said {
                    panel,
                    appliance,
                    date: now.date,
                    time: format::clock(now.minute).replace(':', ""),
                });
                match &msg {
                    Msg::Step(part, by) => said.step(part, *by),
                    Msg::Today => said.date = now.date,
                    Msg::Key(key) => said.press(key),
                    _ => {}
                }
                work.forget_said(panel, appliance);
                work.place.said.push(said);
            }
        }
        self.changed();
        self.keep_place()
    }

    /// Now, on the clock of the open visit's site.
    fn now_there(&self) -> Result<Moment, AppError> {
        let zone = self.work()?.visit.time_zone.parse().unwrap_or(chrono_tz::Tz::UTC);
        Ok(self.app.moment_in(zone))
    }

    /// What stands against the moment that was said; empty where nothing does.
    pub(super) fn moment_refused(&self, panel: Panel, appliance: ApplianceId) -> Result<String, AppError> {
        let Some(said) = self.work()?.said(panel, appliance) else { return Ok(String::new()) };
        let at = match said.moment() {
            Ok(at) => at,
            Err(sentence) => return Ok(sentence),
        };
        let refusals = self.app.refusals_at(self.work()?.visit.id, appliance, at)?;
        Ok(refusals.first().map(|refusal| refusal.sentence.clone()).unwrap_or_default())
    }

    /// An action is ready only if its moment can be.
    pub(super) fn ready_at(&self, panel: Panel, appliance: ApplianceId, ready: Ready) -> Result<Ready, AppError> {
        let refused = self.moment_refused(panel, appliance)?;
        Ok(if refused.is_empty() { ready } else { Ready::not(refused) })
    }

    /// The head of the action in front.
    ///
    /// # Errors
    /// The store's own.
    pub fn stamp_shown(&self) -> Result<Stamp, AppError> {
        let Some(work) = self.work.as_ref().filter(|_| self.panel.acts_on_an_appliance()) else { return Ok(Stamp::default()) };
        let appliance = self.appliance_in_hand()?;
        let today = self.today_there()?;
        let when = match work.said(self.panel, appliance).map(Said::moment) {
            None => words::now(),
            Some(Ok(at)) => format::moment(at, today),
            Some(Err(_)) => words::time_to_complete(),
        };
        let person = work.person_in_hand().and_then(|person| self.registers.person(person));
        let who = person.filter(|_| work.visit.people.len() > 1).map(|person| person.name.clone());
        let wrong = !self.moment_refused(self.panel, appliance)?.is_empty();
        Ok(Stamp { when, who: who.unwrap_or_default(), wrong })
    }

    /// The page of day, time and person.
    ///
    /// # Errors
    /// No visit is open; the store's own.
    pub fn when_shown(&self) -> Result<Shown, AppError> {
        let work = self.work()?;
        let (panel, appliance) = (work.next, self.appliance_in_hand()?);
        let now = self.now_there()?;
        let said = work.said(panel, appliance);
        let date = said.map_or(now.date, |said| said.date);
        let people = work.visit.people.iter().filter_map(|person| self.registers.person(*person));
        let error = self.moment_refused(panel, appliance)?;
        Ok(Shown {
            appliance: self.appliance_words()?,
            people: people.map(|person| Choice::new(person.id.to_string(), &person.name, "")).collect(),
            person: work.person_in_hand().map(|person| person.to_string()).unwrap_or_default(),
            is_now: said.is_none(),
            now: words::now_is(&format::clock(now.minute)),
            day: date.day().to_string(),
            month: words::month_short(date),
            year: date.year().to_string(),
            day_words: words::office::weekday(date),
            time: Reading {
                key: "time".to_owned(),
                caption: words::time_of_day(),
                text: said.map_or_else(|| format::clock(now.minute), Said::written),
                wrong: !error.is_empty(),
                ..Reading::default()
            },
            ready: if error.is_empty() { Ready::yes() } else { Ready::not(error.clone()) },
            error,
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn said(date: &str, keys: &[&str]) -> Said {
        let mut said =
            Said { panel: Panel::Note, appliance: ApplianceId(uuid::Uuid::nil()), date: date.parse().unwrap(), time: "0905".to_owned() };
        keys.iter().for_each(|key| said.press(key));
        said
    }

    #[test]
    fn a_time_is_typed_as_on_a_clock() {
        let typed = said("2026-04-01", &["1", "2", "0", "5"]);
        assert_eq!((typed.written().as_str(), typed.minute()), ("12:05", Ok(725)));
        assert_eq!(said("2026-04-01", &["9", "4", "5"]).minute(), Ok(585));
        assert!(said("2026-04-01", &["9"]).minute().is_err() && said("2026-04-01", &["2", "5", "0", "0"]).minute().is_err());
        assert!(said("2026-04-01", &["9", "7", "0"]).minute().unwrap_err().contains("9:70"));
        assert_eq!(said("2026-04-01", &["back", "."]).written(), "0:90");
    }

    #[test]
    fn days_step_over_the_ends_of_months() {
        let mut at = said("2026-03-01", &[]);
        at.step("day", -1);
        assert_eq!(at.date.to_string(), "2026-02-28");
        at.step("month", -1);
        at.step("year", 1);
        assert_eq!(at.date.to_string(), "2027-01-28");
    }
}
