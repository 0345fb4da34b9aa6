//! Gas that is told twice: a log that was added to and came again as another
//! file, or two files that overlap. Only the same file is known by its bytes.

use super::Remark;
use super::log::remark;
use crate::exchange::csv::LogRow;
use crate::ledger::{Act, EntryId, Line};
use crate::rules::History;
use std::collections::HashMap;
use std::collections::hash_map::Entry;

/// Remarks on each transfer that stands in the store, or in another file,
/// just so. Twice in one file it may well have happened twice.
pub(super) fn told_twice(history: &History, rows: &HashMap<EntryId, &LogRow>, remarks: &mut Vec<Remark>) {
    let mut first_told: HashMap<_, Option<&str>> = HashMap::new();
    // What the store had comes before what is new, on whatever day.
    let mut lines: Vec<&Line> = history.lines.clone();
    lines.sort_by_key(|line| line.position);
    for line in lines {
        let (what, purpose) = match &line.act {
            Act::Charge { purpose, .. } => (line.act.name(), purpose.name()),
            Act::Recover { purpose, .. } => (line.act.name(), purpose.name()),
            _ => continue,
        };
        let mass = line.act.transfer().map(|transfer| transfer.mass);
        let row = rows.get(&line.entry);
        let file = row.map(|row| row.file.as_str());
        match first_told.entry((line.at, line.job.clone(), what, purpose, mass, line.act.cylinder())) {
            Entry::Vacant(free) => {
                free.insert(file);
            }
            Entry::Occupied(known) => {
                if let Some(row) = row.filter(|_| *known.get() != file) {
                    let place = known.get().map_or("the store".to_owned(), str::to_owned);
                    remarks.push(remark(row, format!("{place} has the same {what} already; if it happened once, it now counts twice")));
                }
            }
        }
    }
}
