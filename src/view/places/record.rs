//! A closed or imported visit, seen from one of its appliances.

use super::appliance::{short_print, told};
use super::plant::Pane;
use super::signing::may_sign;
use super::{Go, Office};
use crate::app::{App, AppError, file_away};
use crate::ledger::{Act, ApplianceId, Counterpart, Moment, VisitId};
use crate::view::format;
use crate::view::shown::{Fact, Line};
use crate::view::words;
use crate::view::words::office as say;
use std::path::PathBuf;

#[derive(Debug, Clone, Default, PartialEq)]
pub struct RecordPage {
    pub title: String,
    pub subject: String,
    pub file: String,
    pub folder: String,
    pub facts: Vec<Fact>,
    pub entries: Vec<Line>,
    pub corrections: Vec<Fact>,
    /// The representative has not signed, and still may.
    pub can_sign: bool,
    /// Who that would be, as far as it was said at closing.
    pub signer: String,
}

impl Office {
    pub(super) fn read_record(&self, app: &App, visit: VisitId, appliance: ApplianceId) -> Result<Option<RecordPage>, AppError> {
        let Some(overview) = &self.overview else { return Ok(None) };
        let Some(visit) = app.store().visit(visit)? else { return Ok(None) };
        let Some(appliance) = overview.registers.appliance(appliance) else { return Ok(None) };
        let site = overview.registers.site(visit.site).map(|site| site.name.clone()).unwrap_or_default();
        let person = |id| overview.registers.person(id).map(|person| person.name.clone()).unwrap_or_default();
        let later = app.store().countersignature(visit.id)?;
        let mut facts = Vec::new();
        let people: Vec<String> = visit.people.iter().map(|id| person(*id)).collect();
        if let Some(closing) = &visit.closing {
            facts.push(Fact::new("technician", format!("{}, signed", closing.technician.name)));
            let signed_later = later.as_ref().map(|later| {
                let at = Moment { date: later.date, minute: Some(later.minute) };
                say::signed_later(&later.signature.name, &format!("{} {}", format::full_day(at.date), format::clock(at.minute)))
            });
            facts.push(Fact::new("representative", signed_later.unwrap_or_else(|| words::counterpart(&closing.counterpart))));
            let at = Moment { date: closing.date, minute: Some(closing.minute) };
            facts.push(Fact::new("closed", format!("{} {}", format::full_day(at.date), format::clock(at.minute))));
            facts.push(Fact::new("handed over", if closing.handed_over.is_empty() { "not yet" } else { &closing.handed_over }));
        } else {
            facts.push(Fact::new("people", people.join(", ")));
        }
        if let Some(fingerprint) = &visit.fingerprint {
            facts.push(Fact::new("fingerprint", short_print(fingerprint)));
        }
        let entries = app.store().entries_of_visit(visit.id)?;
        let mut rows = Vec::new();
        let mut corrections = Vec::new();
        for entry in entries.iter().filter(|entry| entry.line.appliance == appliance.id) {
            // Who and how are read where an entry is opened; a visit of several says who at once.
            let mut about = Vec::new();
            if let Act::Test { result: Some(result), .. } = &entry.line.act {
                about.push(result.name().to_owned());
            }
            about.extend([&entry.detail.place, &entry.detail.note].into_iter().filter(|text| !text.is_empty()).cloned());
            if let Some(id) = entry.detail.person.filter(|_| visit.people.len() > 1 && about.is_empty()) {
                about.push(person(id));
            }
            let state = match &entry.line.act {
                Act::Charge { transfer, .. } | Act::Recover { transfer, .. } => format::mass(transfer.mass, self.units.mass),
                Act::Repair { temporary: true } => words::temporary(),
                _ => String::new(),
            };
            rows.push(Line {
                time: format::clock(entry.line.at.minute),
                struck: entry.struck_by.is_some(),
                ..Line::new(entry.line.entry.to_string(), short_act(&entry.line.act), about.join(", ")).state(state, "")
            });
            if let Some(by) = entry.struck_by
                && let Some(correction) = app.store().entry(by)?
            {
                let said = [told(&correction, self.units.mass), correction.detail.reason.clone()];
                let said = said.into_iter().filter(|part| !part.is_empty()).collect::<Vec<_>>().join("; ");
                let caption = format!("{}, {}", format::full_day(correction.line.at.date), told(entry, self.units.mass));
                corrections.push(Fact::new(caption, said));
            }
        }
        // Named as its print is; a name that paper cannot show says so instead.
        let file = match app.print_record(visit.id, None) {
            Ok(printed) => printed.file_name,
            Err(error) => error.to_string(),
        };
        Ok(Some(RecordPage {
            title: say::visit_of(&format::full_day(visit.date)),
            subject: say::at_site(&appliance.name, &site),
            file,
            folder: self.documents.join(app.filed_in(visit.id)?).display().to_string(),
            facts,
            entries: rows,
            corrections,
            can_sign: may_sign(&visit, later.is_some()),
            signer: visit.closing.map(|closing| named(&closing.counterpart)).unwrap_or_default(),
        }))
    }

    /// Opens the record, or the folder it is kept in; the file is written first.
    pub(super) fn record_file(&mut self, app: &App, itself: bool) -> Vec<Go> {
        let (Some(page), Pane::Record(visit, _)) = (&self.plant.record, self.plant.pane) else { return Vec::new() };
        let folder = PathBuf::from(&page.folder);
        let file = folder.join(&page.file);
        let written = match app.print_record(visit, None) {
            // The same bytes where nothing came since; else with what came.
            Ok(printed) => {
                file_away(&file, &printed.bytes).map_err(|error| words::cannot_write(&file.display().to_string(), &error.to_string()))
            }
            Err(error) => Err(error.to_string()),
        };
        match written {
            Ok(()) => vec![Go::Open(if itself { file } else { folder })],
            Err(sentence) => {
                self.fail(&sentence);
                Vec::new()
            }
        }
    }
}

/// The act in the few letters of a row.
fn short_act(act: &Act) -> String {
    match act {
        Act::Test { kind: crate::ledger::TestKind::InitialVerification, .. } => "Initial test".to_owned(),
        Act::Test { kind: crate::ledger::TestKind::FollowUpVerification, .. } => "Follow-up test".to_owned(),
        Act::Test { kind: crate::ledger::TestKind::LeakInspection, .. } => "Inspection".to_owned(),
        Act::DetectionSystemCheck => "Detection system check".to_owned(),
        act => format::capital(act.name()),
    }
}

/// The representative's name, where one was written down.
fn named(counterpart: &Counterpart) -> String {
    match counterpart {
        Counterpart::Signed { signature } => signature.name.clone(),
        Counterpart::SignsLater { name } | Counterpart::Refused { name, .. } => name.clone(),
        Counterpart::NobodyPresent => String::new(),
    }
}
