//! Open leaks: found, and not yet repaired for good.

use super::{Act, Entry, EntryId, LeakPlace, TestResult};
use chrono::NaiveDate;

/// A leak found and not yet repaired for good.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct OpenLeak {
    /// The test that found it.
    pub found_by: EntryId,
    /// Empty where nobody wrote it down.
    pub place: String,
    pub since: NaiveDate,
    /// `isolated`, `section shut`, `repaired temporarily` or empty.
    pub state: String,
}

/// The leaks of one appliance that are open at the end of `on`. Entries may
/// be in any order; struck ones count for nothing. A lasting repair that
/// names a place mends that place, one that names none mends all.
pub fn open_leaks<'a>(entries: impl IntoIterator<Item = &'a Entry>, on: NaiveDate) -> Vec<OpenLeak> {
    let mut entries: Vec<&Entry> = entries.into_iter().filter(|entry| entry.struck_by.is_none() && entry.line.at.date <= on).collect();
    entries.sort_by_key(|entry| (entry.line.at.date, entry.line.position));
    let mut open: Vec<OpenLeak> = Vec::new();
    for entry in entries {
        match &entry.line.act {
            Act::Test { result: Some(TestResult::LeakFound), .. } => {
                let unnamed = [LeakPlace { place: entry.detail.place.clone(), state: String::new() }];
                let found = if entry.detail.leaks.is_empty() { &unnamed[..] } else { &entry.detail.leaks };
                for leak in found {
                    find(&mut open, entry, leak);
                }
            }
            Act::Repair { temporary: true } => {
                for leak in open.iter_mut().filter(|leak| mends(entry, leak)) {
                    "repaired temporarily".clone_into(&mut leak.state);
                }
            }
            Act::Repair { temporary: false } => open.retain(|leak| !mends(entry, leak)),
            Act::Retire => open.clear(),
            _ => {}
        }
    }
    open
}

/// The same place found again is the same leak.
fn find(open: &mut Vec<OpenLeak>, entry: &Entry, found: &LeakPlace) {
    match open.iter_mut().find(|leak| same_place(&leak.place, &found.place)) {
        Some(leak) => leak.state.clone_from(&found.state),
        None => open.push(OpenLeak {
            found_by: entry.line.entry,
            place: found.place.clone(),
            since: entry.line.at.date,
            state: found.state.clone(),
        }),
    }
}

fn mends(repair: &Entry, leak: &OpenLeak) -> bool {
    repair.detail.place.trim().is_empty() || same_place(&repair.detail.place, &leak.place)
}

fn same_place(a: &str, b: &str) -> bool {
    a.trim().to_lowercase() == b.trim().to_lowercase()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ledger::{ApplianceId, Detail, Line, Moment, TestKind, VisitId};
    use uuid::Uuid;

    fn entry(number: i64, act: Act, detail: Detail) -> Entry {
        let day = format!("2026-03-{number:02}");
        Entry {
            line: Line {
                entry: EntryId(Uuid::from_u128(number.unsigned_abs().into())),
                appliance: ApplianceId(Uuid::nil()),
                at: Moment { date: day.parse().unwrap(), minute: None },
                position: number,
                job: None,
                act,
            },
            visit: VisitId(Uuid::nil()),
            written: "2026-03-01T00:00:00Z".parse().unwrap(),
            strikes: None,
            struck_by: None,
            detail,
        }
    }

    fn found(number: i64, places: &[&str]) -> Entry {
        let act = Act::Test {
            kind: TestKind::LeakTest,
            result: Some(TestResult::LeakFound),
            scope: None,
            partial: false,
            running_hundredths: None,
        };
        let leaks = places.iter().map(|place| LeakPlace { place: (*place).to_owned(), state: "isolated".to_owned() }).collect();
        entry(number, act, Detail { leaks, ..Detail::default() })
    }

    fn repair(number: i64, temporary: bool, place: &str) -> Entry {
        entry(number, Act::Repair { temporary }, Detail { place: place.to_owned(), ..Detail::default() })
    }

    fn open(entries: &[Entry]) -> Vec<(String, String)> {
        open_leaks(entries, "2026-03-31".parse().unwrap()).into_iter().map(|leak| (leak.place, leak.state)).collect()
    }

    #[test]
    fn a_lasting_repair_mends_its_place() {
        let entries = [found(1, &["flare", "valve"]), repair(2, false, "Flare "), repair(3, true, "valve")];
        assert_eq!(open(&entries), [("valve".to_owned(), "repaired temporarily".to_owned())]);
    }

    #[test]
    fn a_repair_without_a_place_mends_all() {
        assert_eq!(open(&[found(1, &["flare", "valve"]), repair(2, false, "")]), []);
    }

    #[test]
    fn a_leak_found_again_is_one_and_one_after_its_repair_is_new() {
        let again = [found(1, &["flare"]), found(2, &["flare"])];
        assert_eq!(open_leaks(&again, "2026-03-31".parse().unwrap())[0].since, "2026-03-01".parse().unwrap());
        assert_eq!(open(&again).len(), 1);
        let anew = [found(1, &["flare"]), repair(2, false, "flare"), found(3, &["flare"])];
        assert_eq!(open_leaks(&anew, "2026-03-31".parse().unwrap())[0].since, "2026-03-03".parse().unwrap());
    }

    #[test]
    fn struck_entries_open_nothing() {
        let mut struck = found(1, &["flare"]);
        struck.struck_by = Some(EntryId(Uuid::nil()));
        assert_eq!(open(&[struck]), []);
    }
}
