//! Closing a visit: signatures, record, fingerprint; and what comes after.

use super::entries::{allowed, open_visit};
use super::inputs::NewEntry;
use super::visits::{Unsaved, unsaved};
use super::{App, AppError, PROGRAM, service_record};
use crate::ledger::{Act, Closing, Counterpart, Detail, Entry, EntryId, Line, PersonId, Signature, Visit, VisitId, VisitState};
use crate::record::{Closed, ClosedEntry, ClosedVisit, VisitFacts, close};
use crate::store::{ClosedRecord, Countersignature, HandOver, Store, Writing};
use std::collections::BTreeSet;

/// How a closed entry is mended.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Correction {
    /// Who mends it.
    pub person: PersonId,
    pub why: String,
    /// What holds instead; `None`: it never happened.
    pub instead: Option<NewEntry>,
    pub technician: Signature,
    pub counterpart: Counterpart,
}

/// What closing a visit came to.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Ended {
    pub record: Closed,
    /// What was begun and never saved; it is dropped, and whoever closes is told so.
    pub unsaved: Vec<Unsaved>,
}

impl App {
    /// Closes a visit. From here on nothing in it changes; its record is kept
    /// as the bytes that were signed.
    ///
    /// # Errors
    /// A signature or reason is missing; nothing was entered; the visit is closed already.
    pub fn close_visit(&self, visit: VisitId, technician: Signature, counterpart: Counterpart) -> Result<Ended, AppError> {
        self.flush_drafts()?;
        self.store.write(self.now(), |tx| {
            let unsaved = unsaved(tx, visit)?;
            Ok(Ended { record: self.close_in(tx, visit, technician, counterpart)?, unsaved })
        })
    }

    fn close_in(&self, tx: &Writing<'_>, visit: VisitId, technician: Signature, counterpart: Counterpart) -> Result<Closed, AppError> {
        let visit = open_visit(tx, visit)?;
        signed("technician", &technician)?;
        ended(&counterpart)?;
        let entries = tx.entries_of_visit(visit.id)?;
        if entries.is_empty() {
            return Err(AppError::input("visit", "Nothing was entered at this visit. Enter what was done, a note at least."));
        }
        let at = self.moment_of(&visit);
        let closing = Closing {
            closed: self.now(),
            date: at.date,
            minute: at.minute.unwrap_or(0),
            technician,
            counterpart,
            handed_over: String::new(),
        };
        let closed = close(&self.closed_visit(tx, &visit, &entries, &closing)?).map_err(|e| AppError::Record(e.to_string()))?;
        let rulebooks = service_record::rulebook_versions(tx, &visit, at.date)?;
        let record =
            ClosedRecord { bytes: closed.bytes.clone(), fingerprint: closed.fingerprint.clone(), rulebooks, program: PROGRAM.to_owned() };
        tx.close_visit(visit.id, &closing, &record)?;
        Ok(closed)
    }

    fn closed_visit(&self, store: &Store, visit: &Visit, entries: &[Entry], closing: &Closing) -> Result<ClosedVisit, AppError> {
        let visit_as_closed = Visit { closing: Some(closing.clone()), state: VisitState::Closed, ..visit.clone() };
        let paper = service_record::of_visit(store, &visit_as_closed, entries)?;
        let mut appliances = Vec::new();
        for id in in_order_of_use(entries.iter().map(|entry| entry.line.appliance)) {
            appliances.extend(store.appliance(id)?);
        }
        let mut cylinders = Vec::new();
        for id in in_order_of_use(entries.iter().filter_map(|entry| entry.line.act.cylinder())) {
            cylinders.extend(store.cylinder(id)?);
        }
        let cautions = store.cautions_seen(visit.id)?;
        let mut people = Vec::new();
        let at_work = visit.people.iter().copied().chain(entries.iter().filter_map(|entry| entry.detail.person));
        for id in in_order_of_use(at_work.chain(cautions.iter().filter_map(|seen| seen.person))) {
            people.extend(store.person(id)?);
        }
        Ok(ClosedVisit {
            visit: VisitFacts::from(visit),
            entries: entries.iter().map(ClosedEntry::from).collect(),
            cautions,
            closing: closing.clone(),
            site: store.site(visit.site)?.ok_or(AppError::Unknown { what: "site" })?,
            appliances,
            cylinders,
            people,
            paper,
        })
    }

    /// Mends an entry of a closed visit by a closed record of its own that
    /// names it, says why and is signed. The old entry stays and counts no more.
    ///
    /// # Errors
    /// A reason or signature is missing; the entry's visit is open (strike it
    /// there), or it was struck already; the rules for new entries.
    pub fn correct(&self, entry: EntryId, correction: &Correction) -> Result<Closed, AppError> {
        let why = correction.why.trim();
        if why.is_empty() {
            return Err(AppError::input("why", "Write why this entry is corrected."));
        }
        self.store.write(self.now(), |tx| {
            let wrong = tx.entry(entry)?.ok_or(AppError::Unknown { what: "entry" })?;
            let before = tx.visit(wrong.visit)?.ok_or(AppError::Unknown { what: "visit" })?;
            if before.state == VisitState::Open {
                return Err(AppError::input("entry", "This visit is still open: strike the entry and enter it anew."));
            }
            let mending = self.visit_for_correction(&before, correction.person);
            tx.begin_visit(&mending)?;
            let entry = match &correction.instead {
                Some(instead) => {
                    let mut entry = allowed(self.prepare_in(tx, mending.id, wrong.line.appliance, instead, Some(&wrong))?)?;
                    entry.detail.reason =
                        [why, entry.detail.reason.as_str()].into_iter().filter(|text| !text.is_empty()).collect::<Vec<_>>().join("; ");
                    entry
                }
                None => self.never_happened(&wrong, &mending, why),
            };
            tx.add_entry(&entry)?;
            self.close_in(tx, mending.id, correction.technician.clone(), correction.counterpart.clone())
        })
    }

    fn visit_for_correction(&self, before: &Visit, person: PersonId) -> Visit {
        let at = self.moment_of(before);
        Visit {
            id: VisitId(self.new_id()),
            state: VisitState::Open,
            date: at.date,
            minute: at.minute,
            begun: self.now(),
            people: vec![person],
            closing: None,
            fingerprint: None,
            ..before.clone()
        }
    }

    fn never_happened(&self, wrong: &Entry, mending: &Visit, why: &str) -> Entry {
        let line = Line { entry: EntryId(self.new_id()), at: self.moment_of(mending), act: Act::Note, ..wrong.line.clone() };
        let detail = Detail { person: mending.people.first().copied(), reason: why.to_owned(), ..Detail::default() };
        Entry { line, visit: mending.id, written: self.now(), strikes: Some(wrong.line.entry), struck_by: None, detail }
    }

    /// The representative signs a record that was closed without.
    ///
    /// # Errors
    /// The visit is not closed; it was signed already; the signature is missing.
    pub fn countersign(&self, visit: VisitId, signature: Signature) -> Result<(), AppError> {
        signed("representative", &signature)?;
        self.store.write(self.now(), |tx| {
            let visit = closed_visit(tx, visit)?;
            if matches!(&visit.closing, Some(Closing { counterpart: Counterpart::Signed { .. }, .. })) {
                return Err(AppError::input("representative", "This record was signed when it was closed."));
            }
            let at = self.moment_of(&visit);
            let later = Countersignature { signed: self.now(), date: at.date, minute: at.minute.unwrap_or(0), signature };
            Ok(tx.countersign(visit.id, &later)?)
        })
    }

    /// Keeps to whom and how a closed record was handed over.
    ///
    /// # Errors
    /// The visit is not closed; nothing was said.
    pub fn hand_over(&self, visit: VisitId, told: &str) -> Result<(), AppError> {
        let told = told.trim();
        if told.is_empty() {
            return Err(AppError::input("handed over", "Write down to whom the record was given, and how."));
        }
        self.store.write(self.now(), |tx| {
            let visit = closed_visit(tx, visit)?;
            let at = self.moment_of(&visit);
            let told = told.to_owned();
            Ok(tx.hand_over(visit.id, &HandOver { handed: self.now(), date: at.date, minute: at.minute.unwrap_or(0), told })?)
        })
    }
}

pub(super) fn closed_visit(store: &Store, visit: VisitId) -> Result<Visit, AppError> {
    let visit = store.visit(visit)?.ok_or(AppError::Unknown { what: "visit" })?;
    if visit.state == VisitState::Closed { Ok(visit) } else { Err(AppError::input("visit", "This visit is not closed yet.")) }
}

fn signed(who: &'static str, signature: &Signature) -> Result<(), AppError> {
    if signature.name.trim().is_empty() {
        return Err(AppError::input(who, format!("The {who}'s name is missing.")));
    }
    if signature.ink.is_empty() {
        return Err(AppError::input(who, format!("The {who}'s signature is missing.")));
    }
    Ok(())
}

fn ended(counterpart: &Counterpart) -> Result<(), AppError> {
    match counterpart {
        Counterpart::Signed { signature } => signed("representative", signature),
        Counterpart::Refused { reason, .. } if reason.trim().is_empty() => {
            Err(AppError::input("representative", "Write down why the signature was refused."))
        }
        Counterpart::SignsLater { name } if name.trim().is_empty() => Err(AppError::input("representative", "Write down who will sign.")),
        Counterpart::Refused { .. } | Counterpart::SignsLater { .. } | Counterpart::NobodyPresent => Ok(()),
    }
}

/// Each once, in the order in which they first occur.
fn in_order_of_use<T: Copy + Ord>(all: impl Iterator<Item = T>) -> Vec<T> {
    let mut seen = BTreeSet::new();
    all.filter(|one| seen.insert(*one)).collect()
}
