//! Log lines: each becomes an entry of an imported visit.

use super::history::{OfAppliance, check_history};
use super::{ImportError, Imported, Parts, Remark};
use crate::app::App;
use crate::exchange::csv::{BadLine, Kind, LogRow, LogWhat};
use crate::ledger::{
    Act, ApplianceId, CylinderId, Detail, Entry, EntryId, Line, Person, PersonId, Reading, Registers, Site, SiteId, Transfer, Visit,
    VisitId, VisitState, WeighingMode,
};
use crate::quantity::{Mass, Weighing};
use crate::store::Writing;
use chrono::NaiveDate;
use std::collections::{BTreeMap, HashMap, HashSet};
use std::sync::Arc;

/// An entry of the log, its site and the line that it comes from.
pub(super) struct Taken<'a> {
    pub row: &'a LogRow,
    pub site: SiteId,
    pub entry: Entry,
}

/// Takes the log in. Where something is bad nothing is written, but every
/// line is looked at. `strays` are appliances whose own line could not be
/// placed: what is said of them says nothing of the log.
pub(super) fn take<'a>(
    tx: &Writing<'_>,
    app: &App,
    parts: &'a Parts,
    strays: &HashSet<&str>,
    bad: &mut Vec<BadLine>,
    taken: &mut Imported,
) -> Result<Vec<Taken<'a>>, ImportError> {
    if parts.log.is_empty() {
        return Ok(Vec::new());
    }
    let registers = tx.registers()?;
    let names = Names::new(&registers, parts, strays);
    let mut people: HashMap<&str, PersonId> = registers.people.iter().map(|person| (person.name.as_str(), person.id)).collect();
    let mut entries: Vec<Taken> = Vec::with_capacity(parts.log.len());
    let mut todays: HashMap<Option<SiteId>, NaiveDate> = HashMap::new();
    let mut visits: HashMap<(SiteId, NaiveDate), VisitId> = HashMap::new();
    let mut by_appliance: BTreeMap<ApplianceId, OfAppliance> = BTreeMap::new();
    let mut position = tx.last_position()?;
    let unread = parts.may_miss(Kind::Log);
    for row in &parts.log {
        let found = names.appliance(row).unwrap_or_else(|line| {
            bad.push(line);
            None
        });
        let site = found.map(|(_, site)| site);
        let today = *todays.entry(site).or_insert_with(|| today_at(app, site.and_then(|site| registers.site(site))));
        if row.at.date > today {
            bad.push(fault(row, "date", format!("{} is after today, {today}; correct the date", row.at.date)));
        }
        let Some((appliance, site)) = found else { continue };
        let of_appliance = by_appliance.entry(appliance).or_default();
        of_appliance.has_gaps |= unread;
        if !row.placed {
            of_appliance.has_gaps = true;
            continue;
        }
        let cylinder = names.cylinders.get(row.cylinder.as_str()).copied();
        let visit = *visits.entry((site, row.at.date)).or_insert_with(|| VisitId(app.new_id()));
        position += 1;
        let person = match people.get(row.person.as_str()) {
            _ if row.person.is_empty() => None,
            Some(&id) => Some(id),
            None => {
                let id = PersonId(app.new_id());
                tx.add_person(&nameless(id, &row.person))?;
                people.insert(&row.person, id);
                taken.people += 1;
                Some(id)
            }
        };
        let line = Line {
            entry: EntryId(app.new_id()),
            appliance,
            at: row.at,
            position,
            job: (!row.job.is_empty()).then(|| Arc::from(row.job.as_str())),
            act: act(row, cylinder),
        };
        of_appliance.entries.push(entries.len());
        let detail = detail(row, person);
        entries.push(Taken { row, site, entry: Entry { line, visit, written: tx.now(), strikes: None, struck_by: None, detail } });
    }
    check_history(tx, &registers, &by_appliance, &entries, bad)?;
    if bad.is_empty() {
        write(tx, &registers, &entries)?;
        taken.entries += entries.len();
    }
    Ok(entries)
}

/// The law's day is the site's.
fn today_at(app: &App, site: Option<&Site>) -> NaiveDate {
    site.map_or_else(|| app.today(), |site| app.today_there(site))
}

fn write(tx: &Writing<'_>, registers: &Registers, entries: &[Taken]) -> Result<(), ImportError> {
    let mut begun: HashSet<VisitId> = HashSet::new();
    for Taken { row, site, entry } in entries {
        if begun.insert(entry.visit) {
            let time_zone = registers
                .site(*site)
                .and_then(|site| site.versions.on(row.at.date))
                .map(|facts| facts.time_zone.clone())
                .unwrap_or_default();
            tx.begin_visit(&Visit {
                id: entry.visit,
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
    strays: &'a HashSet<&'a str>,
    /// A register file could not be read whole: what is not found may stand in it.
    unread: bool,
}

impl<'a> Names<'a> {
    fn new(registers: &'a Registers, parts: &Parts, strays: &'a HashSet<&'a str>) -> Self {
        let mut appliances: HashMap<&str, Vec<(SiteId, ApplianceId)>> = HashMap::new();
        for appliance in &registers.appliances {
            appliances.entry(appliance.name.as_str()).or_default().push((appliance.site, appliance.id));
        }
        Self {
            sites: registers.sites.iter().map(|site| (site.name.as_str(), site.id)).collect(),
            appliances,
            cylinders: registers.cylinders.iter().map(|cylinder| (cylinder.name.as_str(), cylinder.id)).collect(),
            strays,
            unread: parts.may_miss(Kind::Sites) || parts.may_miss(Kind::Appliances),
        }
    }

    /// `None` where another line's fault, told there, hides it.
    fn appliance(&self, row: &LogRow) -> Result<Option<(ApplianceId, SiteId)>, BadLine> {
        let name = row.appliance.as_str();
        let found = self.appliances.get(name).map(Vec::as_slice).unwrap_or_default();
        let hidden = name.is_empty() || self.unread || self.strays.contains(name);
        let missing = |column: &str, message: String| if hidden { Ok(None) } else { Err(fault(row, column, message)) };
        if row.site.is_empty() {
            return match found {
                [(site, appliance)] => Ok(Some((*appliance, *site))),
                [] => missing(
                    "appliance",
                    format!("there is no appliance \u{201c}{name}\u{201d}; import its line first, or correct the name"),
                ),
                _ => Err(fault(row, "site", format!("\u{201c}{name}\u{201d} stands at {} sites; say which", found.len()))),
            };
        }
        let Some(site) = self.sites.get(row.site.as_str()) else {
            return missing("site", format!("there is no site \u{201c}{}\u{201d}; import its line first, or correct the name", row.site));
        };
        match found.iter().find(|(at, _)| at == site) {
            Some((site, appliance)) => Ok(Some((*appliance, *site))),
            None => missing(
                "appliance",
                format!(
                    "there is no appliance \u{201c}{name}\u{201d} at \u{201c}{}\u{201d}; import its line first, or correct the name",
                    row.site
                ),
            ),
        }
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

/// Known from a log alone: a name and nothing else yet.
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

pub(super) fn remark(row: &LogRow, message: String) -> Remark {
    Remark { file: row.file.clone(), line: row.line, message }
}
