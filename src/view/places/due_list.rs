//! The list of what is due: one row for all duties of a kind of an appliance,
//! the oldest first, grouped by day, site, person or month; and its paper and calendar.

use super::Office;
use super::due::{dated, duty_row, leak_row, subject};
use super::overview::{Judged, Overview};
use crate::app::{App, AppError, PROGRAM, file_away, fit};
use crate::print::{self, Paper};
use crate::quantity::MassUnit;
use crate::record::{DueGroup, DueList, DueRow, Party};
use crate::rules::{Duty, DutyState};
use crate::view::shown::Line;
use crate::view::{format, words};
use chrono::{Datelike, NaiveDate};
use std::collections::BTreeMap;
use words::office as say;

/// Days for which a met duty stays on the day's page.
const LATELY: i64 = 30;

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Grouping {
    /// Late, within the chosen days, later.
    #[default]
    Day,
    Site,
    /// By who worked on the appliance last.
    Person,
    Month,
}

impl Grouping {
    pub const ALL: [Self; 4] = [Self::Day, Self::Site, Self::Person, Self::Month];

    pub const fn key(self) -> &'static str {
        match self {
            Self::Day => "day",
            Self::Site => "site",
            Self::Person => "person",
            Self::Month => "month",
        }
    }

    pub fn of_key(key: &str) -> Self {
        Self::ALL.into_iter().find(|grouping| grouping.key() == key).unwrap_or_default()
    }
}

/// A part of the list under its name.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Group {
    pub name: String,
    items: Vec<Listed>,
}

/// One row, with what paper says of it.
#[derive(Debug, Clone, PartialEq)]
struct Listed {
    class: Class,
    day: Option<NaiveDate>,
    line: Line,
    site: String,
    person: String,
    paper: DueRow,
}

/// In which order groups by day stand.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Class {
    Late,
    Soon,
    Leak,
    Later,
    Suspended,
    Met,
}

impl Group {
    fn count(&self) -> usize {
        self.items.iter().map(|item| item.paper.count).sum()
    }

    /// The group's name and its rows.
    pub fn lines(self) -> impl Iterator<Item = Line> {
        let name = Line::group(self.name.clone(), self.count().to_string());
        std::iter::once(name).chain(self.items.into_iter().map(|item| item.line))
    }
}

impl Office {
    /// Duties that are late, and those due within the chosen days.
    pub(super) fn due_counts(&self, overview: &Overview) -> (usize, usize) {
        let pending = || overview.appliances.iter().flat_map(|judged| judged.pending().map(move |duty| (duty, judged.on)));
        let late = pending().filter(|(duty, on)| duty.state(*on) == DutyState::Late).count();
        let soon = pending().filter(|(duty, on)| duty.state(*on) == DutyState::Open && duty.due.is_none_or(|due| due <= self.soon()));
        (late, soon.count())
    }

    pub(super) fn due_groups(&self, overview: &Overview) -> Vec<Group> {
        let mut items: Vec<Listed> = overview.appliances.iter().flat_map(|judged| self.listed(judged)).collect();
        // What has no day comes after what has one; what was met last stands first.
        items.sort_by_key(|item| {
            let day = item.day.map_or(i32::MAX, |day| day.num_days_from_ce());
            (item.class, if item.class == Class::Met { -day } else { day })
        });
        let soon = format::capital(&words::by_day(&format::day(self.soon(), self.today)));
        let mut groups: BTreeMap<(i32, String), Group> = BTreeMap::new();
        for mut item in items {
            let key = match (self.due.grouping, item.class) {
                (Grouping::Day, class) => (class as i32, class_name(class, &soon)),
                (_, Class::Met) => continue,
                (Grouping::Site, _) => (0, item.site.clone()),
                (Grouping::Person, _) if item.person.is_empty() => (1, say::nobody_yet()),
                (Grouping::Person, _) => (0, item.person.clone()),
                (Grouping::Month, Class::Leak | Class::Suspended) => (i32::MAX, class_name(item.class, &soon)),
                (Grouping::Month, _) => match item.day {
                    Some(day) => (day.year() * 12 + day.month0().cast_signed(), say::month(day)),
                    None => (i32::MAX - 1, say::without_a_day()),
                },
            };
            if self.due.grouping == Grouping::Site {
                item.line.facts.clone_from(&item.paper.appliance);
            }
            let group = groups.entry(key.clone()).or_default();
            group.name = key.1;
            group.items.push(item);
        }
        groups.into_values().collect()
    }

    /// The rows of one appliance.
    fn listed(&self, judged: &Judged) -> Vec<Listed> {
        let mut items: Vec<(Listed, &Duty)> = Vec::new();
        for duty in &judged.duties {
            let state = duty.state(judged.on);
            let class = match state {
                DutyState::Late => Class::Late,
                DutyState::Open if duty.due.is_none_or(|due| due <= self.soon()) => Class::Soon,
                DutyState::Open => Class::Later,
                DutyState::Suspended => Class::Suspended,
                DutyState::Met | DutyState::MetLate if duty.met_on.is_some_and(|met| (judged.on - met).num_days() <= LATELY) => Class::Met,
                _ => continue,
            };
            // Duties come by due day: the first of a kind is the oldest, and stands for the others.
            let pending = |class: Class| matches!(class, Class::Late | Class::Soon | Class::Later);
            let alike = |(other, oldest): &&mut (Listed, &Duty)| {
                oldest.kind == duty.kind && (other.class == class || (pending(other.class) && pending(class)))
            };
            if let Some((first, _)) = items.iter_mut().find(alike) {
                first.paper.count += 1;
                continue;
            }
            let line = Line { facts: subject(judged), ..duty_row(judged, duty, self.today, self.soon()) };
            let day = if class == Class::Met { duty.met_on } else { duty.due };
            items.push((self.item(judged, class, day, line, &dated(duty), &duty.source), duty));
        }
        for (item, _) in &mut items {
            if item.paper.count > 1 {
                item.line.name = say::counted(&item.line.name, item.paper.count);
            }
        }
        let leaks = judged.leaks.iter().map(|leak| {
            let line = Line { name: say::leak_of(&judged.appliance.name), ..leak_row(judged, leak, self.today) };
            self.item(judged, Class::Leak, Some(leak.since), line, "", "")
        });
        items.into_iter().map(|(item, _)| item).chain(leaks).collect()
    }

    fn item(&self, judged: &Judged, class: Class, day: Option<NaiveDate>, line: Line, due: &str, source: &str) -> Listed {
        let paper = DueRow {
            what: line.name.clone(),
            count: 1,
            appliance: judged.appliance.name.clone(),
            site: judged.site.name.clone(),
            due: due.to_owned(),
            state: if line.aside.is_empty() { line.state.clone() } else { line.aside.clone() },
            source: source.to_owned(),
        };
        Listed { class, day, line, site: judged.site.name.clone(), person: judged.person.clone(), paper }
    }

    /// Prints the list as it is grouped now.
    pub(super) fn print_due_list(&mut self, app: &App) {
        let Some(overview) = &self.overview else { return };
        let company = overview.registers.company();
        let paper = self.units.paper.unwrap_or(if matches!(self.units.mass, MassUnit::Pound | MassUnit::Ounce | MassUnit::PoundOunce) {
            Paper::Letter
        } else {
            Paper::A4
        });
        let printed = app.is_demonstration().and_then(|demonstration| {
            let list = DueList {
                on: self.today,
                grouped: say::grouped_by(self.due.grouping.key()),
                company: Party { name: company.name, address: company.address, certificate: company.certificate },
                demonstration,
                program: PROGRAM.to_owned(),
                groups: self
                    .due_groups(overview)
                    .into_iter()
                    .map(|group| DueGroup { name: group.name, rows: group.items.into_iter().map(|item| item.paper).collect() })
                    .collect(),
            };
            Ok(print::due_list(&list, paper)?)
        });
        let name = format!("due {} by {}.pdf", self.today, self.due.grouping.key());
        self.keep_due_file(&name, printed);
    }

    /// Writes the duties for a calendar program; the same file again, so that it is found.
    pub(super) fn write_calendar(&mut self, app: &App) {
        let calendar = app.duty_calendar(self.today, |_| true).map(String::into_bytes);
        self.keep_due_file("duties.ics", calendar);
    }

    fn keep_due_file(&mut self, name: &str, bytes: Result<Vec<u8>, AppError>) {
        let path = self.documents.join(fit(name));
        let shown = path.display().to_string();
        let done = bytes
            .map_err(|error| error.to_string())
            .and_then(|bytes| file_away(&path, &bytes).map_err(|error| words::cannot_write(&shown, &error.to_string())));
        (self.due.written, self.due.written_grave) = match done {
            Ok(()) => (say::written_to(&shown), false),
            Err(sentence) => (words::sentence(&sentence), true),
        };
    }
}

fn class_name(class: Class, soon: &str) -> String {
    match class {
        Class::Late => say::late(),
        Class::Soon => soon.to_owned(),
        Class::Leak => say::open_leaks(),
        Class::Later => say::later(),
        Class::Suspended => format::capital(&words::suspended()),
        Class::Met => say::met_lately(),
    }
}
