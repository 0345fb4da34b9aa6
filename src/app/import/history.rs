//! What a log says together: refused where it cannot be true, remarked on
//! where it is odd.

use super::log::{fault, remark};
use super::{ImportError, Imported};
use crate::exchange::csv::{BadLine, LogRow};
use crate::ledger::{Act, ApplianceId, Entry, EntryId, Line, RecoveryPurpose, Registers, SiteId, TestKind, TestResult};
use crate::rules::History;
use crate::store::Writing;
use chrono::NaiveDate;
use std::collections::{BTreeMap, HashMap};

pub(super) fn check_history(
    tx: &Writing<'_>,
    registers: &Registers,
    entries: &[(&LogRow, SiteId, Entry)],
    bad: &mut Vec<BadLine>,
    taken: &mut Imported,
) -> Result<(), ImportError> {
    let mut by_appliance: BTreeMap<ApplianceId, Vec<usize>> = BTreeMap::new();
    for (index, (_, _, entry)) in entries.iter().enumerate() {
        by_appliance.entry(entry.line.appliance).or_default().push(index);
    }
    for (id, indices) in by_appliance {
        let Some(appliance) = registers.appliance(id) else { continue };
        let mut lines: Vec<Line> = tx.lines_of(id)?;
        lines.extend(indices.iter().map(|&index| entries[index].2.line.clone()));
        let rows: HashMap<EntryId, &LogRow> = indices.iter().map(|&index| (entries[index].2.line.entry, entries[index].0)).collect();
        let history = History::new(appliance, &lines, NaiveDate::MAX);
        impossible(&history, &rows, bad);
        if bad.is_empty() {
            odd(&history, &rows, taken);
        }
    }
    taken.remarks.sort_by(|a, b| (&a.file, a.line).cmp(&(&b.file, b.line)));
    bad.sort_by(|a, b| (&a.file, a.line).cmp(&(&b.file, b.line)));
    Ok(())
}

/// A date before the installation, anything after a retirement, a mothball of
/// a mothballed appliance.
fn impossible(history: &History, rows: &HashMap<EntryId, &LogRow>, bad: &mut Vec<BadLine>) {
    let (mut retired, mut mothballed): (Option<NaiveDate>, Option<NaiveDate>) = (None, None);
    for (index, line) in history.lines.iter().enumerate() {
        if let Some(row) = rows.get(&line.entry) {
            let installed = history.facts_at(index).and_then(|facts| facts.installed_on).or_else(|| history.installed_on());
            if let Some(installed) = installed.filter(|&installed| line.at.date < installed) {
                bad.push(fault(row, "date", format!("{} is before the appliance was installed, {installed}", line.at.date)));
            }
            if let Some(day) = retired {
                bad.push(fault(row, "what", format!("the appliance was retired on {day}; nothing can follow")));
            }
        }
        match line.act {
            Act::Retire => retired = retired.or(Some(line.at.date)),
            Act::Charge { .. } => mothballed = None,
            Act::Mothball => {
                if let (Some(row), Some(day)) = (rows.get(&line.entry), mothballed) {
                    bad.push(fault(row, "what", format!("the appliance has been mothballed since {day} and nothing was charged since")));
                }
                mothballed = mothballed.or(Some(line.at.date));
            }
            _ => {}
        }
    }
}

/// Worth a look: more recovered than can have been there, tests without their
/// repair, a seasonal charge that broke its limits.
fn odd(history: &History, rows: &HashMap<EntryId, &LogRow>, taken: &mut Imported) {
    for (index, line) in history.lines.iter().enumerate() {
        let Some(row) = rows.get(&line.entry) else { continue };
        let full = history.facts_at(index).and_then(|facts| facts.full_charge);
        match &line.act {
            Act::Charge { purpose, transfer } => {
                if full.is_some_and(|full| transfer.mass > full) {
                    remark(taken, row, "more was charged at once than the appliance's full charge".to_owned());
                }
                let broken = history.counted[index] && !purpose.nets_recovered();
                if broken {
                    remark(
                        taken,
                        row,
                        format!("this {purpose} charge is over what was recovered for it, or too late; it counts wholly as leak"),
                    );
                }
            }
            Act::Recover { purpose: RecoveryPurpose::Repair, transfer } if full.is_some_and(|full| transfer.mass > full) => {
                remark(taken, row, "more was recovered than the appliance's full charge".to_owned());
            }
            Act::Test { kind: TestKind::InitialVerification, .. } if history.repair_before(index).is_none() => {
                remark(taken, row, "an initial verification test without a repair before it".to_owned());
            }
            Act::Test { kind: TestKind::FollowUpVerification, result: Some(TestResult::Pass), .. }
                if !history.is_follow_up_that_counts(index) =>
            {
                remark(
                    taken,
                    row,
                    "this follow-up test does not count: partial, or no initial test passed since the last repair".to_owned(),
                );
            }
            _ => {}
        }
    }
}
