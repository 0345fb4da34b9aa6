//! Every appliance judged as of a day: what `assess`, the calendar and the
//! places of the window show.

use super::{App, AppError, PROGRAM};
use crate::exchange::ics::{Calendar, Event};
use crate::ledger::{Appliance, ApplianceId, Line, Registers, by_appliance};
use crate::rules::{Assessment, Duty, DutyKind, DutyState, assess, rulebook};
use chrono::NaiveDate;
use std::collections::{HashMap, HashSet};
use uuid::Uuid;

/// The name space of the calendar's event ids (RFC 9562, version 5); drawn
/// once. Another one would make every calendar hold each duty twice.
const EVENTS: Uuid = Uuid::from_u128(0x5b1f_3a0c_7c52_4d7e_9a41_0e9d_2f66_b8a3);

/// Every wanted appliance judged, by site and identification.
pub fn assess_all<'a>(
    registers: &'a Registers,
    lines: &'a HashMap<ApplianceId, Vec<Line>>,
    on: NaiveDate,
    wanted: impl Fn(&Appliance) -> bool,
) -> Vec<Assessment<'a>> {
    let sites: HashMap<_, _> = registers.sites.iter().map(|site| (site.id, site)).collect();
    let mut assessments: Vec<Assessment> = registers
        .appliances
        .iter()
        .filter(|appliance| wanted(appliance))
        .filter_map(|appliance| {
            let lines = lines.get(&appliance.id).map(Vec::as_slice).unwrap_or_default();
            assess(sites.get(&appliance.site)?, appliance, lines, on)
        })
        .collect();
    assessments.sort_by(|a, b| (&a.site.name, &a.history.appliance.name).cmp(&(&b.site.name, &b.history.appliance.name)));
    assessments
}

impl App {
    /// The duties of every wanted appliance as of a day, as an iCalendar file
    /// for any calendar program. See [`duty_calendar`].
    ///
    /// # Errors
    /// The store's own.
    pub fn duty_calendar(&self, on: NaiveDate, wanted: impl Fn(&Appliance) -> bool) -> Result<String, AppError> {
        let registers = self.store.registers()?;
        let lines = by_appliance(self.store.lines()?);
        Ok(duty_calendar(&assess_all(&registers, &lines, on, wanted), on, self.store.rows_written()?))
    }
}

/// Duties as iCalendar text: an event on each due day, on the day it began
/// where the law sets no day.
///
/// A duty keeps its id from one export to the next, so that a calendar updates
/// its event. What was met or has ended, and what is suspended, is written as
/// cancelled for as long as it is listed; a suspended duty comes back when its
/// clock runs again. Of checks that recur and of which only the next is known
/// the event moves on. `rows_written` is [`crate::store::Store::rows_written`].
pub fn duty_calendar(assessments: &[Assessment], on: NaiveDate, rows_written: u64) -> String {
    let mut taken = HashSet::new();
    let mut events = Vec::new();
    for assessment in assessments {
        for duty in &assessment.duties {
            events.push(event(assessment, duty, on, &mut taken));
        }
    }
    Calendar { product: PROGRAM.to_owned(), as_of: on, sequence: rows_written, events }.text()
}

fn event(assessment: &Assessment, duty: &Duty, on: NaiveDate, taken: &mut HashSet<Uuid>) -> Event {
    let state = duty.state(on);
    let appliance = &assessment.history.appliance;
    let title = rulebook(&duty.rulebook).map_or(duty.rulebook.as_str(), |book| book.title.as_str());
    let due = match (duty.due, state) {
        (Some(due), _) => format!("due {due}"),
        (None, DutyState::Suspended) => "its clock stands still while the appliance is mothballed".to_owned(),
        (None, _) => "no day set".to_owned(),
    };
    let met = duty.met_on.map(|met| format!(" on {met}")).unwrap_or_default();
    Event {
        id: id(appliance, duty, taken),
        day: duty.due.unwrap_or(duty.from),
        summary: format!("{}: {}", capital(duty.kind.name()), appliance.name),
        description: format!("{title}\n{}\nSince {}, {due}: {}{met}", duty.source, duty.from, state.name()),
        location: assessment.site.name.clone(),
        category: duty.rulebook.clone(),
        cancelled: !matches!(state, DutyState::Open | DutyState::Late),
    }
}

/// The same for the same duty in every export, whatever became of it since.
fn id(appliance: &Appliance, duty: &Duty, taken: &mut HashSet<Uuid>) -> Uuid {
    let what = match duty.kind {
        // Only the next one is ever known: its event moves on.
        DutyKind::LeakCheck | DutyKind::DetectionSystemCheck => String::new(),
        _ => format!("{}/{}/{}", duty.from, duty.exceeded_on.unwrap_or(duty.from), duty.period),
    };
    // Two found leaks of one day have nothing that tells them apart but their order.
    (1_u32..)
        .map(|number| format!("{}/{}/{}/{what}/{number}", appliance.id.0, duty.rulebook, duty.kind.name()))
        .map(|name| Uuid::new_v5(&EVENTS, name.as_bytes()))
        .find(|id| taken.insert(*id))
        .unwrap_or_default()
}

fn capital(text: &str) -> String {
    let mut letters = text.chars();
    letters.next().map(|first| first.to_uppercase().chain(letters).collect()).unwrap_or_default()
}
