//! Beginning a visit, joining it, cautions, drafts, and what is still open.

use super::entries::open_visit;
use super::{App, AppError};
use crate::ledger::{ApplianceId, CautionSeen, Entry, PersonId, SiteId, Visit, VisitId, VisitState};
use crate::store::{Draft, Store, VisitFilter};

/// A visit that is not closed, with what was being typed in it.
#[derive(Debug, Clone)]
pub struct OpenVisit {
    pub visit: Visit,
    pub entries: Vec<Entry>,
    pub drafts: Vec<Draft>,
    pub cautions: Vec<CautionSeen>,
}

/// Work that was begun on a page of a visit and never saved.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Unsaved {
    /// The action: `charge`, `leak test`, …
    pub action: String,
    pub appliance: ApplianceId,
    /// Its identification.
    pub name: String,
}

impl App {
    /// Begins work at a site. Where a visit is open there already, it is
    /// taken up again and the person joins it.
    ///
    /// # Errors
    /// Unknown site or person; the store's own, as for all below.
    pub fn begin_visit(&self, site: SiteId, person: PersonId) -> Result<Visit, AppError> {
        self.store.write(self.now(), |tx| {
            let site = tx.site(site)?.ok_or(AppError::Unknown { what: "site" })?;
            tx.person(person)?.ok_or(AppError::Unknown { what: "person" })?;
            let here = VisitFilter { site: Some(site.id), state: Some(VisitState::Open), ..VisitFilter::default() };
            if let Some(open) = tx.visits(&here)?.pop() {
                if !open.people.contains(&person) {
                    tx.join_visit(open.id, person)?;
                }
                return tx.visit(open.id)?.ok_or(AppError::Unknown { what: "visit" });
            }
            let zone = self.zone_of(site.versions.on(self.today()).unwrap_or_else(|| site.versions.latest()));
            let at = self.moment_in(zone);
            let visit = Visit {
                id: VisitId(self.new_id()),
                site: site.id,
                state: VisitState::Open,
                date: at.date,
                minute: at.minute,
                time_zone: zone.name().to_owned(),
                begun: self.now(),
                people: vec![person],
                closing: None,
                fingerprint: None,
            };
            tx.begin_visit(&visit)?;
            Ok(visit)
        })
    }

    /// Takes a further person into an open visit.
    ///
    /// # Errors
    /// The visit is closed, or the person is there already.
    pub fn join_visit(&self, visit: VisitId, person: PersonId) -> Result<(), AppError> {
        self.store.write(self.now(), |tx| {
            open_visit(tx, visit)?;
            tx.person(person)?.ok_or(AppError::Unknown { what: "person" })?;
            Ok(tx.join_visit(visit, person)?)
        })
    }

    /// Visits to be taken up again, with what was being typed: asked at start.
    pub fn open_visits(&self) -> Result<Vec<OpenVisit>, AppError> {
        let mut open = Vec::new();
        for visit in self.store.open_visits()? {
            open.push(self.with_entries(visit)?);
        }
        Ok(open)
    }

    /// A visit with its entries, whatever its state.
    pub fn visit(&self, visit: VisitId) -> Result<OpenVisit, AppError> {
        let visit = self.store.visit(visit)?.ok_or(AppError::Unknown { what: "visit" })?;
        self.with_entries(visit)
    }

    fn with_entries(&self, visit: Visit) -> Result<OpenVisit, AppError> {
        let (entries, drafts) = (self.store.entries_of_visit(visit.id)?, self.store.drafts_of(visit.id)?);
        Ok(OpenVisit { cautions: self.store.cautions_seen(visit.id)?, visit, entries, drafts })
    }

    /// Keeps that a caution was acknowledged, once per visit and kind, with
    /// day, minute and `person`; `None` is the one who began the visit.
    pub fn acknowledge(&self, visit: VisitId, caution: &str, person: Option<PersonId>) -> Result<(), AppError> {
        self.store.write(self.now(), |tx| {
            let visit = open_visit(tx, visit)?;
            let at = self.moment_of(&visit);
            let person = person.or(visit.people.first().copied());
            let seen = CautionSeen { caution: caution.to_owned(), on: Some(at.date), at_minute: at.minute.unwrap_or(0), person };
            Ok(tx.acknowledge(visit.id, &seen)?)
        })
    }

    /// Keeps what is being typed, about an appliance or none; never waits for the disk.
    pub fn save_draft(&self, visit: VisitId, appliance: Option<ApplianceId>, action: &str, body: &str) -> Result<(), AppError> {
        let draft = Draft { visit, appliance, action: action.to_owned(), body: body.to_owned(), saved: self.now() };
        match &self.drafts {
            Some(writer) => writer.put(draft),
            None => self.store.write(self.now(), |tx| tx.put_draft(&draft))?,
        }
        Ok(())
    }

    /// What was being typed, as far as it is on disk.
    pub fn draft(&self, visit: VisitId, action: &str) -> Result<Option<Draft>, AppError> {
        Ok(self.store.draft(visit, action)?)
    }

    /// What was begun in a visit and not saved, as far as it is on disk: closing drops it.
    pub fn unsaved(&self, visit: VisitId) -> Result<Vec<Unsaved>, AppError> {
        unsaved(&self.store, visit)
    }

    pub fn clear_draft(&self, visit: VisitId, action: &str) -> Result<(), AppError> {
        match &self.drafts {
            Some(writer) => writer.clear(visit, action),
            None => self.store.write(self.now(), |tx| tx.clear_draft(visit, action))?,
        }
        Ok(())
    }

    /// Waits until every draft is written: before the program ends.
    ///
    /// # Errors
    /// Why the last one could not be written.
    pub fn flush_drafts(&self) -> Result<(), AppError> {
        self.drafts.as_ref().map_or(Ok(()), |writer| Ok(writer.flush()?))
    }
}

/// Drafts about an appliance; a signature being drawn is no work.
pub(super) fn unsaved(store: &Store, visit: VisitId) -> Result<Vec<Unsaved>, AppError> {
    let mut unsaved = Vec::new();
    for draft in store.drafts_of(visit)? {
        let Some(appliance) = draft.appliance else { continue };
        let name = store.appliance(appliance)?.map(|appliance| appliance.name).unwrap_or_default();
        unsaved.push(Unsaved { action: draft.action, appliance, name });
    }
    Ok(unsaved)
}
