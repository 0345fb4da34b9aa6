//! What came after a record was closed: a later signature, hand-overs,
//! corrections. A paper says all of it that had come when it was printed.

use super::{signed_by, wording};
use crate::app::AppError;
use crate::ledger::VisitId;
use crate::record::{Counterparty, Fingerprint, ServiceRecord, read_closed};
use crate::store::{Countersignature, HandOver, Since, Store};

/// All that came, each kind in the order in which it was written.
pub struct Later {
    countersignature: Option<Countersignature>,
    hand_overs: Vec<HandOver>,
    /// One remark each.
    corrections: Vec<String>,
}

/// The record as it was signed, with its fingerprint.
///
/// # Errors
/// No closed record, or one that cannot be read.
pub fn original(store: &Store, visit: VisitId) -> Result<ServiceRecord, AppError> {
    let kept = store.closed_record(visit)?.ok_or(AppError::Unknown { what: "closed record" })?;
    let paper = read_closed(&kept.bytes).map_err(|e| AppError::Record(e.to_string()))?.paper;
    Ok(ServiceRecord { fingerprint: Some(Fingerprint { full: kept.fingerprint }), ..paper })
}

/// # Errors
/// The store's own.
pub fn of(store: &Store, visit: VisitId) -> Result<Later, AppError> {
    Ok(Later {
        countersignature: store.countersignature(visit)?,
        hand_overs: store.hand_overs(visit)?,
        corrections: corrections(store, visit)?,
    })
}

impl Later {
    pub fn all(&self) -> Since {
        let count = |length: usize| u32::try_from(length).unwrap_or(u32::MAX);
        Since {
            countersigned: self.countersignature.is_some(),
            hand_overs: count(self.hand_overs.len()),
            corrections: count(self.corrections.len()),
        }
    }

    /// Every state in which a paper can have been printed, the present one
    /// first. A clock that was set back does not matter: kinds are combined.
    pub fn states(&self) -> Vec<Since> {
        let all = self.all();
        let mut states = Vec::new();
        for corrections in (0..=all.corrections).rev() {
            for hand_overs in (0..=all.hand_overs).rev() {
                for countersigned in [true, false].into_iter().filter(|signed| all.countersigned || !signed) {
                    states.push(Since { countersigned, hand_overs, corrections });
                }
            }
        }
        states
    }

    /// The record with so much of what came later, as this copy.
    pub fn on(&self, original: ServiceRecord, since: Since, copy: u32) -> ServiceRecord {
        let mut paper = ServiceRecord { copy, ..original };
        let first = |number: u32| usize::try_from(number).unwrap_or(usize::MAX);
        let hand_overs = self.hand_overs.iter().take(first(since.hand_overs));
        let told = |over: &HandOver| format!("{}, {}", over.told, wording::at(over.date, Some(over.minute)));
        paper.handed_over = hand_overs.map(told).collect::<Vec<_>>().join("; ");
        if let Some(later) = self.countersignature.as_ref().filter(|_| since.countersigned) {
            let at = wording::at(later.date, Some(later.minute));
            paper.remarks.push(format!("Signed later, on {at}, by {}.", later.signature.name));
            paper.counterparty = Some(Counterparty::Signed { signed: signed_by(&later.signature) });
        }
        paper.remarks.extend(self.corrections.iter().take(first(since.corrections)).cloned());
        paper
    }
}

/// One remark for each later record that corrects an entry of this one.
fn corrections(store: &Store, visit: VisitId) -> Result<Vec<String>, AppError> {
    let mut remarks = Vec::new();
    for entry in store.entries_of_visit(visit)? {
        let Some(by) = entry.struck_by else { continue };
        let Some(correction) = store.entry(by)?.filter(|by| by.visit != visit) else { continue };
        let record = store.visit(correction.visit)?.and_then(|visit| visit.fingerprint);
        let record = record.map_or("an open record".to_owned(), |full| format!("record {}", Fingerprint { full }.short()));
        let what = wording::entry_name(&entry);
        let why = correction.detail.reason.trim_end_matches('.');
        remarks.push((correction.line.position, format!("The {what} is corrected by {record}: {why}.")));
    }
    remarks.sort_by_key(|(position, _)| *position);
    Ok(remarks.into_iter().map(|(_, remark)| remark).collect())
}
