//! Records on paper, and telling a saved one by what the store holds.

use super::service_record::later;
use super::{App, AppError};
use crate::ledger::{Visit, VisitId, VisitState};
use crate::print::{self, Paper};
use crate::record::{Fingerprint, ServiceRecord, fingerprint, read_closed};
use crate::store::{FurtherCopy, Since, VisitFilter};
use chrono::Datelike;
use sha2::{Digest, Sha256};
use std::path::PathBuf;

/// A PDF with the name it is kept under.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Printed {
    /// `<date> <appliance> <fingerprint>.pdf`, fit for any file system; a further copy is named as one.
    pub file_name: String,
    pub bytes: Vec<u8>,
}

/// What a saved file turned out to be.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Recognised {
    /// Byte for byte what this store prints, or printed earlier, for a closed record.
    Print(KnownPrint),
    /// It carries the mark of this visit's record but has other bytes than any print of it.
    OtherPrint(VisitId),
    /// The bytes that were signed, as the store holds them.
    Closed(VisitId),
    /// A closed record that reads well but is not in this store.
    Foreign { fingerprint: String },
    /// A record that does not have the bytes it was closed with, in the store itself.
    Broken(VisitId),
    /// Nothing that this store knows.
    Unknown,
}

/// A print that this store makes.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct KnownPrint {
    pub visit: VisitId,
    pub paper: Paper,
    /// 1 is the filed original.
    pub copy: u32,
    /// What had come after closing when it was printed.
    pub then: Since,
    /// What has come by now.
    pub now: Since,
}

impl App {
    /// The folder of a visit's record among the documents: year, then site.
    ///
    /// # Errors
    /// Unknown visit; the store's own.
    pub fn filed_in(&self, visit: VisitId) -> Result<PathBuf, AppError> {
        let visit = self.store().visit(visit)?.ok_or(AppError::Unknown { what: "visit" })?;
        let site = self.store().site(visit.site)?.ok_or(AppError::Unknown { what: "site" })?;
        let date = visit.closing.as_ref().map_or(visit.date, |closing| closing.date);
        Ok(PathBuf::from(date.year().to_string()).join(fit(&site.name)))
    }

    /// Prints a visit's service record: a closed one as it was signed, an open
    /// one as a draft, imported history marked as such. Without `paper` it is
    /// as set on this device, else Letter at a site under United States rules, else A4.
    ///
    /// # Errors
    /// Unknown visit; [`AppError::Print`] where a name cannot stand on paper as it is.
    pub fn print_record(&self, visit: VisitId, paper: Option<Paper>) -> Result<Printed, AppError> {
        let found = self.store().visit(visit)?.ok_or(AppError::Unknown { what: "visit" })?;
        let record = self.service_record(visit)?;
        let bytes = print::service_record(&record, paper.or(self.units()?.paper).unwrap_or_else(|| paper_of(&record)))?;
        Ok(Printed { file_name: file_name(&found, &record), bytes })
    }

    /// Counts a further copy of a closed record, to be handed out, and says which it is: 2 and up.
    ///
    /// # Errors
    /// The visit is not closed; the store's own.
    pub fn further_copy(&self, visit: VisitId) -> Result<u32, AppError> {
        self.store.write(self.now(), |tx| {
            let visit = super::closing::closed_visit(tx, visit)?;
            let at = self.moment_of(&visit);
            let number = tx.copies(visit.id)?.last().map_or(2, |last| last.number + 1);
            let since = later::of(tx, visit.id)?.all();
            let copy = FurtherCopy { number, made: self.now(), date: at.date, minute: at.minute.unwrap_or(0), since };
            tx.add_copy(visit.id, &copy)?;
            Ok(number)
        })
    }

    /// Prints a copy that was counted, with the same bytes each time: as the
    /// record stood when it was made. Copy 1 is [`App::print_record`].
    ///
    /// # Errors
    /// As there; [`AppError::Input`] where no such copy was made.
    pub fn print_copy(&self, visit: VisitId, number: u32, paper: Option<Paper>) -> Result<Printed, AppError> {
        if number == 1 {
            return self.print_record(visit, paper);
        }
        let found = self.store().visit(visit)?.ok_or(AppError::Unknown { what: "visit" })?;
        let made = self.store().copies(visit)?.into_iter().find(|copy| copy.number == number);
        let made = made.ok_or_else(|| AppError::input("copy", format!("No copy {number} of this record was made.")))?;
        let record = later::of(self.store(), visit)?.on(later::original(self.store(), visit)?, made.since, number);
        let bytes = print::service_record(&record, paper.or(self.units()?.paper).unwrap_or_else(|| paper_of(&record)))?;
        Ok(Printed { file_name: file_name(&found, &record), bytes })
    }

    /// Compares a saved file with the closed records of this store.
    ///
    /// # Errors
    /// The store's own, and those of printing.
    pub fn recognise(&self, saved: &[u8]) -> Result<Recognised, AppError> {
        let closed = VisitFilter { state: Some(VisitState::Closed), ..VisitFilter::default() };
        let visits = self.store().visits(&closed)?;
        if saved.starts_with(b"%PDF") {
            for visit in &visits {
                let Some(full) = &visit.fingerprint else { continue };
                if holds(saved, print_mark(full).as_bytes()) {
                    return self.compare(visit, saved);
                }
            }
            return Ok(Recognised::Unknown);
        }
        let own = fingerprint(saved);
        if let Some(visit) = visits.iter().find(|visit| visit.fingerprint.as_deref() == Some(own.as_str())) {
            return Ok(Recognised::Closed(visit.id));
        }
        Ok(match read_closed(saved) {
            Ok(_) => Recognised::Foreign { fingerprint: own },
            Err(_) => Recognised::Unknown,
        })
    }

    fn compare(&self, visit: &Visit, saved: &[u8]) -> Result<Recognised, AppError> {
        let kept = self.store().closed_record(visit.id)?.ok_or(AppError::Unknown { what: "closed record" })?;
        if fingerprint(&kept.bytes) != kept.fingerprint {
            return Ok(Recognised::Broken(visit.id));
        }
        let original = later::original(self.store(), visit.id)?;
        let later = later::of(self.store(), visit.id)?;
        let copies = self.store().copies(visit.id)?;
        // The original in every state in which it can have been printed, each copy in its own.
        let original_states = later.states().into_iter().map(|since| (1, since));
        for (copy, since) in original_states.chain(copies.iter().map(|copy| (copy.number, copy.since))) {
            let record = later.on(original.clone(), since, copy);
            for paper in [Paper::A4, Paper::Letter] {
                let named = holds(saved, hex(&print::print_id(&record, paper)?).as_bytes());
                if named && print::service_record(&record, paper)? == saved {
                    return Ok(Recognised::Print(KnownPrint { visit: visit.id, paper, copy, then: since, now: later.all() }));
                }
            }
        }
        Ok(Recognised::OtherPrint(visit.id))
    }
}

fn paper_of(record: &ServiceRecord) -> Paper {
    if record.rulebooks.iter().any(|book| book.id.starts_with("us-")) { Paper::Letter } else { Paper::A4 }
}

/// The id that every print of one closed record carries in its trailer: the
/// first 16 bytes of the SHA-256 of the record's fingerprint, in hex.
fn print_mark(fingerprint: &str) -> String {
    hex(&Sha256::digest(fingerprint.as_bytes())[..16])
}

fn hex(bytes: &[u8]) -> String {
    bytes.iter().map(|byte| format!("{byte:02x}")).collect()
}

fn holds(bytes: &[u8], mark: &[u8]) -> bool {
    bytes.windows(mark.len()).any(|window| window == mark)
}

fn file_name(visit: &Visit, record: &ServiceRecord) -> String {
    let mark = match &record.fingerprint {
        Some(fingerprint) => Fingerprint::short(fingerprint).replace(' ', ""),
        // The end of an id differs even between those given at the same moment.
        None => format!(
            "{} {}",
            visit.state.name(),
            visit.id.to_string().chars().rev().take(6).collect::<Vec<_>>().iter().rev().collect::<String>()
        ),
    };
    let appliances = match record.appliances.as_slice() {
        [] => record.site.name.clone(),
        [one] => one.appliance.name.clone(),
        [first, rest @ ..] => format!("{} and {} more", first.appliance.name, rest.len()),
    };
    let copy = if record.copy > 1 { format!(" copy {}", record.copy) } else { String::new() };
    fit(&format!("{} {appliances} {mark}{copy}.pdf", record.first_day))
}

/// A file name that every system takes: what one of them forbids becomes a hyphen.
pub fn fit(name: &str) -> String {
    let unfit = |c: char| c.is_control() || matches!(c, '/' | '\\' | ':' | '*' | '?' | '"' | '<' | '>' | '|');
    let name: String = name.chars().map(|c| if unfit(c) { '-' } else { c }).collect();
    name.trim_matches([' ', '.']).to_owned()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_of_files_are_fit_for_every_system() {
        assert_eq!(fit("2026-03-03 CH-1/2: \"old\"? 3f9ac1d2.pdf"), "2026-03-03 CH-1-2- -old-- 3f9ac1d2.pdf");
        assert_eq!(fit(" a\n."), "a-");
    }
}
