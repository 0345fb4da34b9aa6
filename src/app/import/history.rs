//! What a log says together, with what the store knows already: whether it
//! can be true. The order in which files come does not matter.

use super::ImportError;
use super::log::{Taken, fault};
use crate::exchange::csv::{BadLine, LogRow};
use crate::ledger::{Act, Appliance, ApplianceId, EntryId, Line, Registers};
use crate::rules::History;
use crate::store::Writing;
use chrono::NaiveDate;
use std::collections::{BTreeMap, HashMap};

/// What an import says of one appliance.
#[derive(Default)]
pub(super) struct OfAppliance {
    /// Places among the entries.
    pub entries: Vec<usize>,
    /// A further line could not be placed: what it says is missing.
    pub has_gaps: bool,
}

pub(super) fn check_history(
    tx: &Writing<'_>,
    registers: &Registers,
    by_appliance: &BTreeMap<ApplianceId, OfAppliance>,
    entries: &[Taken],
    bad: &mut Vec<BadLine>,
) -> Result<(), ImportError> {
    let appliances: HashMap<ApplianceId, &Appliance> = registers.appliances.iter().map(|appliance| (appliance.id, appliance)).collect();
    for (id, of_appliance) in by_appliance {
        let Some(appliance) = appliances.get(id) else { continue };
        let mut lines: Vec<Line> = tx.lines_of(*id)?;
        lines.extend(of_appliance.entries.iter().map(|&index| entries[index].entry.line.clone()));
        let rows = of_appliance.entries.iter().map(|&index| (entries[index].entry.line.entry, entries[index].row)).collect();
        let check = Check { history: History::new(appliance, &lines, NaiveDate::MAX), rows };
        check.installation(bad);
        check.retirement(bad);
        // A charge that could not be read may stand between two of them.
        if !of_appliance.has_gaps {
            check.mothballs(bad);
        }
    }
    Ok(())
}

/// An appliance's history, old and new, and the lines that the new entries come from.
struct Check<'a> {
    history: History<'a>,
    rows: HashMap<EntryId, &'a LogRow>,
}

impl Check<'_> {
    fn row(&self, index: usize) -> Option<&LogRow> {
        self.rows.get(&self.history.lines[index].entry).copied()
    }

    fn told(&self, index: usize) -> String {
        format!("a {} on {}", self.history.lines[index].act.name(), self.history.date(index))
    }

    /// Nothing is done to an appliance before it is there.
    fn installation(&self, bad: &mut Vec<BadLine>) {
        let Some(installed) = self.history.appliance.there_since() else { return };
        for index in 0..self.history.lines.len() {
            let date = self.history.date(index);
            if let Some(row) = self.row(index).filter(|_| date < installed) {
                bad.push(fault(row, "date", format!("{date} is before the appliance was installed, {installed}; correct one of the two")));
            }
        }
    }

    /// Nothing follows a retirement, whichever of the two came first into the store.
    fn retirement(&self, bad: &mut Vec<BadLine>) {
        let lines = &self.history.lines;
        let Some(retired) = (0..lines.len()).find(|&index| lines[index].act == Act::Retire) else { return };
        let after: Vec<usize> = (retired + 1..lines.len()).filter(|&index| self.surely_follows(retired, index)).collect();
        if let (Some(row), Some(&known)) = (self.row(retired), after.iter().find(|&&index| self.row(index).is_none())) {
            let message =
                format!("nothing can follow a retirement, and the store has {} after it; correct one of the two", self.told(known));
            bad.push(fault(row, "date", message));
        }
        for row in after.into_iter().filter_map(|index| self.row(index)) {
            let message =
                format!("the appliance was retired on {}; nothing can follow; correct one of the two", self.history.date(retired));
            bad.push(fault(row, "what", message));
        }
    }

    /// Of one day, lines have an order where all of them have a time or both
    /// stand in one file.
    fn surely_follows(&self, first: usize, second: usize) -> bool {
        let lines = &self.history.lines;
        let day = self.history.date(first);
        if self.history.date(second) != day {
            return true;
        }
        let file = |index| self.row(index).map(|row: &LogRow| row.file.as_str());
        let timed = lines.iter().filter(|line| line.at.date == day).all(|line| line.at.minute.is_some());
        timed || file(first).is_some_and(|first| file(second) == Some(first))
    }

    /// What is mothballed is mothballed again only after a charge.
    fn mothballs(&self, bad: &mut Vec<BadLine>) {
        let mut since: Option<usize> = None;
        for (index, line) in self.history.lines.iter().enumerate() {
            match (&line.act, since) {
                (Act::Charge { .. }, _) => since = None,
                (Act::Mothball, None) => since = Some(index),
                (Act::Mothball, Some(first)) => {
                    let message = match (self.row(index), self.row(first)) {
                        (Some(row), _) => {
                            let since = self.history.date(first);
                            Some((row, format!("the appliance has been mothballed since {since} and nothing was charged since")))
                        }
                        (None, Some(row)) => {
                            Some((row, format!("the store has {} already, and nothing was charged in between", self.told(index))))
                        }
                        (None, None) => None,
                    };
                    if let Some((row, message)) = message {
                        bad.push(fault(row, "what", format!("{message}; correct the date, or leave this line out")));
                    }
                }
                _ => {}
            }
        }
    }
}
