//! Log lines: each becomes an entry of an imported visit.

use super::history::check_history;
use super::{ImportError, Imported, Remark};
use crate::app::IdSource;
use crate::exchange::csv::{BadLine, LogRow, LogWhat};
use crate::ledger::{
    Act, ApplianceId, CylinderId, Detail, Entry, EntryId, Line, Person, PersonId, Reading, Registers, SiteId, Transfer, Visit, VisitId,
    VisitState, WeighingMode,
};
use crate::quantity::{Mass, Weighing};
use crate::store::Writing;
use chrono::NaiveDate;
use std::collections::{HashMap, HashSet};
use std::sync::Arc;

pub(super) fn take(
    tx: &Writing<'_>,
    ids: &dyn IdSource,
    today: NaiveDate,
    rows: &[LogRow],
    taken: &mut Imported,
) -> Result<(), ImportError> {
    if rows.is_empty() {
        return Ok(());
    }
    let registers = tx.registers()?;
    let names = Names::new(&registers);
    let mut people: HashMap<String, PersonId> = registers.people.iter().map(|person| (person.name.clone(), person.id)).collect();
    let mut bad = Vec::new();
    let mut entries: Vec<(&LogRow, SiteId, Entry)> = Vec::with_capacity(rows.len());
    let mut visits: HashMap<(SiteId, NaiveDate), VisitId> = HashMap::new();
    let mut position = tx.last_position()?;
    for row in rows {
        if row.at.date > today {
            bad.push(fault(row, "date", format!("{} is after today, {today}", row.at.date)));
            continue;
        }
        let (appliance, site) = match names.appliance(row) {
            Ok(found) => found,
            Err(line) => {
                bad.push(line);
                continue;
            }
        };
        let cylinder = names.cylinders.get(row.cylinder.as_str()).copied();
        if !row.cylinder.is_empty() && cylinder.is_none() {
            remark(
                taken,
                row,
                format!("cylinder \u{201c}{}\u{201d} is not in the register; the mass counts for no cylinder", row.cylinder),
            );
        }
        let visit = *visits.entry((site, row.at.date)).or_insert_with(|| VisitId(ids.fresh(tx.now())));
        position += 1;
        let person = match people.get(&row.person) {
            _ if row.person.is_empty() => None,
            Some(&id) => Some(id),
            None => {
                let id = PersonId(ids.fresh(tx.now()));
                tx.add_person(&nameless(id, &row.person))?;
                people.insert(row.person.clone(), id);
                taken.people += 1;
                Some(id)
            }
        };
        let line = Line {
            entry: EntryId(ids.fresh(tx.now())),
            appliance,
            at: row.at,
            position,
            job: (!row.job.is_empty()).then(|| Arc::from(row.job.as_str())),
            act: act(row, cylinder),
        };
        let detail = detail(row, person);
        entries.push((row, site, Entry { line, visit, written: tx.now(), strikes: None, struck_by: None, detail }));
    }
    if bad.is_empty() {
        check_history(tx, &registers, &entries, &mut bad, taken)?;
    }
    if !bad.is_empty() {
        return Err(ImportError::BadLines(bad));
    }
    write(tx, &registers, &visits, &entries)?;
    taken.entries += entries.len();
    Ok(())
}

fn write(
    tx: &Writing<'_>,
    registers: &Registers,
    visits: &HashMap<(SiteId, NaiveDate), VisitId>,
    entries: &[(&LogRow, SiteId, Entry)],
) -> Result<(), ImportError> {
    let mut begun: HashSet<VisitId> = HashSet::new();
    for (row, site, entry) in entries {
        let visit = visits.get(&(*site, row.at.date)).copied().unwrap_or(entry.visit);
        if begun.insert(visit) {
            let time_zone = registers
                .site(*site)
                .and_then(|site| site.versions.on(row.at.date))
                .map(|facts| facts.time_zone.clone())
                .unwrap_or_default();
            tx.begin_visit(&Visit {
                id: visit,
                site: *site,
                state: VisitState::Imported,
                date: row.at.date,
                minute: None,
                time_zone,
                begun: tx.now(),
                people: Vec::new(),
                closing: None,
                fingerprint: None,
            })?;
        }
        tx.add_entry(entry)?;
    }
    Ok(())
}

/// Identifications to ids.
struct Names<'a> {
    sites: HashMap<&'a str, SiteId>,
    appliances: HashMap<&'a str, Vec<(SiteId, ApplianceId)>>,
    cylinders: HashMap<&'a str, CylinderId>,
}

impl<'a> Names<'a> {
    fn new(registers: &'a Registers) -> Self {
        let mut appliances: HashMap<&str, Vec<(SiteId, ApplianceId)>> = HashMap::new();
        for appliance in &registers.appliances {
            appliances.entry(appliance.name.as_str()).or_default().push((appliance.site, appliance.id));
        }
        Self {
            sites: registers.sites.iter().map(|site| (site.name.as_str(), site.id)).collect(),
            appliances,
            cylinders: registers.cylinders.iter().map(|cylinder| (cylinder.name.as_str(), cylinder.id)).collect(),
        }
    }

    fn appliance(&self, row: &LogRow) -> Result<(ApplianceId, SiteId), BadLine> {
        let found = self.appliances.get(row.appliance.as_str()).map(Vec::as_slice).unwrap_or_default();
        if row.site.is_empty() {
            return match found {
                [(site, appliance)] => Ok((*appliance, *site)),
                [] => {
                    Err(fault(row, "appliance", format!("there is no appliance \u{201c}{}\u{201d}; import its line first", row.appliance)))
                }
                _ => Err(fault(row, "site", format!("\u{201c}{}\u{201d} stands at {} sites; say which", row.appliance, found.len()))),
            };
        }
        let Some(site) = self.sites.get(row.site.as_str()) else {
            return Err(fault(row, "site", format!("there is no site \u{201c}{}\u{201d}", row.site)));
        };
        found.iter().find(|(at, _)| at == site).map(|(site, appliance)| (*appliance, *site)).ok_or_else(|| {
            fault(row, "appliance", format!("there is no appliance \u{201c}{}\u{201d} at \u{201c}{}\u{201d}", row.appliance, row.site))
        })
    }
}

fn act(row: &LogRow, cylinder: Option<CylinderId>) -> Act {
    // Only what was weighed out of or into a cylinder has a known scale: the
    // digits written are its division. Without a cylinder the error is unknown.
    let transfer =
        |mass: Mass, written: &Weighing| Transfer { mass, cylinder, division: cylinder.map(|_| written.last_digit()), hoses: Mass::ZERO };
    match &row.what {
        LogWhat::Charge { purpose, mass, written } => Act::Charge { purpose: *purpose, transfer: transfer(*mass, written) },
        LogWhat::Recover { purpose, mass, written } => Act::Recover { purpose: *purpose, transfer: transfer(*mass, written) },
        LogWhat::Recycle => Act::Recycle { cylinder },
        LogWhat::Test { kind, result, scope, running_hundredths } => Act::Test {
            kind: *kind,
            result: *result,
            scope: *scope,
            partial: row.note.trim_start().starts_with("partial"),
            running_hundredths: *running_hundredths,
        },
        LogWhat::Repair { temporary } => Act::Repair { temporary: *temporary },
        LogWhat::NormalOperation => Act::NormalOperation,
        LogWhat::DetectionSystemCheck => Act::DetectionSystemCheck,
        LogWhat::Mothball => Act::Mothball,
        LogWhat::Retrofit { refrigerant, full_charge } => {
            Act::Retrofit { refrigerant: refrigerant.clone(), full_charge: full_charge.as_ref().map(|(mass, _)| *mass) }
        }
        LogWhat::Retire => Act::Retire,
        LogWhat::PlanMade => Act::PlanMade,
        LogWhat::ReportSent => Act::ReportSent,
        LogWhat::Note => Act::Note,
    }
}

fn detail(row: &LogRow, person: Option<PersonId>) -> Detail {
    let net = match &row.what {
        LogWhat::Charge { written, .. } | LogWhat::Recover { written, .. } => Some(written.clone()),
        _ => None,
    };
    let new_full_charge = match &row.what {
        LogWhat::Retrofit { full_charge: Some((_, written)), .. } => Some(written.clone()),
        _ => None,
    };
    Detail {
        person,
        reading: net.map(|net| Reading { mode: WeighingMode::NetOnly, before: None, after: None, net: Some(net), scale: None }),
        method: row.method.clone(),
        place: row.place.clone(),
        running_hours: row.running_hours.clone(),
        note: row.note.clone(),
        imported_from: format!("{}, line {}", row.file, row.line),
        new_full_charge,
        ..Detail::default()
    }
}

fn nameless(id: PersonId, name: &str) -> Person {
    Person {
        id,
        name: name.to_owned(),
        certificate: String::new(),
        certificate_kind: String::new(),
        valid_from: None,
        valid_to: None,
        company: String::new(),
        company_certificate: String::new(),
    }
}

pub(super) fn fault(row: &LogRow, column: &str, message: String) -> BadLine {
    BadLine { file: row.file.clone(), line: row.line, column: column.to_owned(), message }
}

pub(super) fn remark(taken: &mut Imported, row: &LogRow, message: String) {
    taken.remarks.push(Remark { file: row.file.clone(), line: row.line, message });
}
