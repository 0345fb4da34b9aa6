//! Weighing gaps: a cylinder weighed otherwise than last known, and nobody could say why yet.

use super::{Entry, EntryId};
use std::collections::HashSet;

/// Why a cylinder weighs otherwise than when last known. The last one leaves the question open.
pub const GAP_REASONS: [&str; 5] = ["used elsewhere", "wrong weight", "leaking cylinder", "cap or hose", GAP_UNKNOWN];
/// The answer that is none.
pub const GAP_UNKNOWN: &str = "do not know";

/// The entries whose weighing gap nobody has explained: said to be unknown,
/// and not answered since. Struck entries count for nothing.
pub fn open_gaps<'a>(entries: impl IntoIterator<Item = &'a Entry> + Clone) -> Vec<&'a Entry> {
    let valid = |entry: &&Entry| entry.struck_by.is_none();
    let answered: HashSet<EntryId> = entries.clone().into_iter().filter(valid).filter_map(|entry| entry.detail.answers).collect();
    let unknown = |entry: &&Entry| entry.detail.weighing_gap == GAP_UNKNOWN && !answered.contains(&entry.line.entry);
    entries.into_iter().filter(valid).filter(unknown).collect()
}
