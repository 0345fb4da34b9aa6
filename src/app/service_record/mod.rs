//! What a visit's service record says: facts of the registers and entries,
//! and what the rules make of them, as finished strings.

mod entry;
pub(super) mod later;
mod verdict;
mod wording;

pub(super) use verdict::ODP_TABLE;

use super::{App, AppError, PROGRAM, Setting};
use crate::gas::Weighting;
use crate::ledger::{
    Act, Appliance, ApplianceFacts, CautionSeen, ChargePurpose, Closing, Counterpart, Entry, Instrument, Line, Person, PersonId, Registers,
    Signature, Site, Visit, VisitId, VisitState,
};
use crate::record::{
    self, AppliancePart, ApplianceText, Caution, Counterparty, Finding, Party, PersonAtWork, RecordState, ServiceRecord, SignedBy, SiteText,
};
use crate::rules::{History, rulebook, weights};
use crate::store::Store;
use chrono::NaiveDate;
use std::collections::BTreeSet;

impl App {
    /// The service record of a visit. Of a closed visit it is the record that
    /// was signed, with what came after: a later signature, hand-over,
    /// corrections. Of an open one it is a draft.
    ///
    /// # Errors
    /// Unknown visit; a closed record that cannot be read; the store's own.
    pub fn service_record(&self, visit: VisitId) -> Result<ServiceRecord, AppError> {
        let visit = self.store().visit(visit)?.ok_or(AppError::Unknown { what: "visit" })?;
        if visit.state == VisitState::Closed {
            let later = later::of(self.store(), visit.id)?;
            return Ok(later.on(later::original(self.store(), visit.id)?, later.all(), 1));
        }
        let entries = self.store().entries_of_visit(visit.id)?;
        of_visit(self.store(), &visit, &entries)
    }
}

/// The record of a visit as its entries and the rules make it today.
pub(super) fn of_visit(store: &Store, visit: &Visit, entries: &[Entry]) -> Result<ServiceRecord, AppError> {
    let site = store.site(visit.site)?.ok_or(AppError::Unknown { what: "site" })?;
    let days = entries.iter().map(|entry| entry.line.at.date).chain(visit.closing.as_ref().map(|closing| closing.date));
    let last_day = days.clone().max().unwrap_or(visit.date);
    let first_day = days.min().unwrap_or(visit.date).min(visit.date);
    let site_facts = site.versions.on(last_day).unwrap_or_else(|| site.versions.latest());
    let seen = store.cautions_seen(visit.id)?;
    let registers = spoken_of(store, visit, entries, &seen)?;
    let mut jobs: Vec<String> = Vec::new();
    for job in entries.iter().filter_map(|entry| entry.line.job.as_deref()) {
        if !jobs.iter().any(|known| known == job) {
            jobs.push(job.to_owned());
        }
    }
    let mut appliances = Vec::new();
    for appliance in &registers.appliances {
        appliances.push(part(store, &site, appliance, entries, &registers, last_day)?);
    }
    let company = registers.company.as_ref().map(|versions| versions.on(last_day).unwrap_or_else(|| versions.latest()).clone());
    let company = company.unwrap_or_default();
    Ok(ServiceRecord {
        state: state(visit, entries),
        fingerprint: None,
        copy: 1,
        demonstration: store.setting(Setting::Demonstration.key())?.is_some_and(|value| value == "yes"),
        program: PROGRAM.to_owned(),
        rulebooks: rulebooks(&site_facts.rulebooks),
        company: Party { name: company.name, address: company.address, certificate: company.certificate },
        site: SiteText {
            name: site.name.clone(),
            address: site_facts.address.clone(),
            owner: site_facts.owner.clone(),
            operator: site_facts.operator.clone(),
            time_zone: visit.time_zone.clone(),
        },
        jobs,
        first_day,
        last_day,
        people: visit.people.iter().filter_map(|id| registers.person(*id)).map(person_at_work).collect(),
        appliances,
        cautions: cautions(&seen, visit, &registers),
        technician: visit.closing.as_ref().map(|closing| signed_by(&closing.technician)),
        counterparty: visit.closing.as_ref().map(counterparty),
        handed_over: String::new(),
        remarks: Vec::new(),
    })
}

/// The rulebooks that judged a visit, with their versions, in one line.
pub(super) fn rulebook_versions(store: &Store, visit: &Visit, on: NaiveDate) -> Result<String, AppError> {
    let site = store.site(visit.site)?.ok_or(AppError::Unknown { what: "site" })?;
    let ids = site.versions.on(on).map(|facts| facts.rulebooks.clone()).unwrap_or_default();
    Ok(rulebooks(&ids).into_iter().map(|book| format!("{} {}", book.id, book.version)).collect::<Vec<_>>().join(", "))
}

/// A rulebook that comes with the program changes with it alone; a company's own says its fingerprint.
fn rulebooks(ids: &[String]) -> Vec<record::Rulebook> {
    let known = ids.iter().filter_map(|id| rulebook(id));
    known
        .map(|book| record::Rulebook { id: book.id.clone(), name: book.title.clone(), version: book.version.chars().take(12).collect() })
        .collect()
}

fn state(visit: &Visit, entries: &[Entry]) -> RecordState {
    match (&visit.closing, visit.state) {
        (Some(closing), _) => RecordState::Closed { on: closing.date, at: wording::clock(Some(closing.minute)) },
        (None, VisitState::Imported) => {
            let from = entries.iter().map(|entry| entry.detail.imported_from.as_str()).find(|from| !from.is_empty()).unwrap_or_default();
            // `log.csv, line 14`: the file alone.
            RecordState::Imported { from: from.split(", line").next().unwrap_or_default().to_owned() }
        }
        (None, _) => RecordState::Open,
    }
}

/// Only what the visit speaks of is read, appliances in the order in which they were taken up.
fn spoken_of(store: &Store, visit: &Visit, entries: &[Entry], seen: &[CautionSeen]) -> Result<Registers, AppError> {
    let mut found = Registers { company: store.company_versions()?, ..Registers::default() };
    let mut appliances = BTreeSet::new();
    let mut cylinders = BTreeSet::new();
    let mut people: BTreeSet<PersonId> = visit.people.iter().copied().chain(seen.iter().filter_map(|seen| seen.person)).collect();
    let mut instruments = BTreeSet::new();
    for entry in entries {
        if appliances.insert(entry.line.appliance) {
            found.appliances.extend(store.appliance(entry.line.appliance)?);
        }
        cylinders.extend(entry.line.act.cylinder());
        people.extend(entry.detail.person);
        instruments.extend(entry.detail.instrument);
        instruments.extend(entry.detail.reading.as_ref().and_then(|reading| reading.scale));
    }
    for id in cylinders {
        found.cylinders.extend(store.cylinder(id)?);
    }
    for id in people {
        found.people.extend(store.person(id)?);
    }
    for id in instruments {
        found.instruments.extend(store.instrument(id)?);
    }
    Ok(found)
}

fn part(
    store: &Store,
    site: &Site,
    appliance: &Appliance,
    entries: &[Entry],
    registers: &Registers,
    last_day: NaiveDate,
) -> Result<AppliancePart, AppError> {
    let mut own: Vec<&Entry> = entries.iter().filter(|entry| entry.line.appliance == appliance.id).collect();
    own.sort_by_key(|entry| (entry.line.at.date, entry.line.at.minute, entry.line.position));
    let all = store.entries_of_appliance(appliance.id)?;
    let lines: Vec<_> = all.iter().filter(|entry| entry.struck_by.is_none()).map(|entry| entry.line.clone()).collect();
    let open_leaks = crate::ledger::open_leaks(&all, last_day);
    let judged = verdict::judge(site, appliance, &lines, &own, last_day);
    let facts = judged.facts.clone().unwrap_or_else(|| appliance.versions.latest().clone());
    let site_facts = site.versions.on(last_day).unwrap_or_else(|| site.versions.latest());
    // Struck transfers are printed too, with the gas of their place; a struck retrofit changed nothing.
    let counts_here = |entry: &&Entry| entry.struck_by.is_none() || !matches!(entry.line.act, Act::Retrofit { .. });
    let in_place: Vec<Line> = all.iter().filter(counts_here).map(|entry| entry.line.clone()).collect();
    let history = History::new(appliance, &in_place, last_day);
    let names = entry::Names { registers, site, all: &all, facts: &facts, history: &history, does_not_count: &judged.does_not_count };
    let mut facts_of_entries = Vec::new();
    for entry in &own {
        let struck_by = entry.struck_by.map(|by| store.entry(by)).transpose()?.flatten();
        let mends = entry.strikes.map(|wrong| store.entry(wrong)).transpose()?.flatten();
        let mended_record = match &mends {
            Some(wrong) if wrong.visit != entry.visit => store.visit(wrong.visit)?.and_then(|visit| visit.fingerprint),
            _ => None,
        };
        // The strike itself is said at the entry that it strikes.
        if mends.as_ref().is_some_and(|wrong| wrong.visit == entry.visit) {
            continue;
        }
        facts_of_entries.push(entry::facts(entry, struck_by.as_ref(), mends.as_ref(), mended_record, &names));
    }
    Ok(AppliancePart {
        appliance: appliance_text(appliance, &facts, weights(site_facts), &all),
        entries: facts_of_entries,
        finding: finding(&own, &open_leaks),
        leak_rates: judged.leak_rates,
        no_rates: judged.no_rates,
        open_leaks: open_leaks
            .into_iter()
            .map(|leak| record::OpenLeak { place: leak.place, since: leak.since, state: leak.state })
            .collect(),
        duties: judged.duties,
        amounts: judged.amounts,
        readings: judged.readings,
    })
}

fn finding(own: &[&Entry], open: &[crate::ledger::OpenLeak]) -> Finding {
    use crate::ledger::TestResult;
    let results: Vec<Option<TestResult>> = own
        .iter()
        .filter(|entry| entry.struck_by.is_none())
        .filter_map(|entry| if let Act::Test { result, .. } = &entry.line.act { Some(*result) } else { None })
        .collect();
    if !open.is_empty() {
        Finding::LeaksOpen
    } else if results.contains(&Some(TestResult::LeakFound)) {
        Finding::LeaksRepaired
    } else if results.iter().any(|result| matches!(result, Some(TestResult::NoLeak | TestResult::Pass))) {
        Finding::NoLeak
    } else {
        Finding::NotTested
    }
}

fn appliance_text(appliance: &Appliance, facts: &ApplianceFacts, weights: Weighting, all: &[Entry]) -> ApplianceText {
    let declared = [
        (facts.labelled_hermetically_sealed, "labelled hermetically sealed"),
        (facts.residential, "residential"),
        (facts.leakage_detection_system, "leakage detection system"),
        (facts.residential_or_light_commercial_ac, "residential or light commercial air conditioning"),
        (facts.product_below_minus_50c, "product below \u{2212}50 °C"),
        (facts.military, "military"),
    ];
    let at_installation = all.iter().filter(|entry| entry.struck_by.is_none()).find_map(|entry| match &entry.line.act {
        Act::Charge { purpose: ChargePurpose::Installation, transfer } => Some(wording::mass(transfer.mass, wording::unit_of(entry))),
        _ => None,
    });
    ApplianceText {
        name: appliance.name.clone(),
        place: facts.place.clone(),
        description: facts.description.clone(),
        serial: facts.serial.clone(),
        assembly: facts.assembly.clone(),
        category: facts.category.name().to_owned(),
        equipment: facts.equipment.map(|equipment| equipment.name().to_owned()).unwrap_or_default(),
        refrigerant: facts.refrigerant.clone(),
        refrigerant_facts: wording::gas_facts(&facts.refrigerant, weights),
        full_charge: wording::full_charge(facts),
        full_charge_method: facts.charge_method.map(|method| method.name().to_owned()).unwrap_or_default(),
        charged_at_installation: at_installation.unwrap_or_default(),
        installed_on: facts.installed_on,
        declared: declared.into_iter().filter(|(is, _)| *is).map(|(_, words)| words.to_owned()).collect(),
    }
}

fn person_at_work(person: &Person) -> PersonAtWork {
    PersonAtWork {
        name: person.name.clone(),
        certificate: person.certificate.clone(),
        certificate_kind: person.certificate_kind.clone(),
        certificate_validity: person.valid_to.map(|to| format!("to {}", wording::day(to))).unwrap_or_default(),
        company: person.company.clone(),
        company_certificate: person.company_certificate.clone(),
    }
}

/// Which instrument, as `Scale 2, K-114`, with what `more` says of it.
fn instrument_text(instrument: &Instrument, more: Option<String>) -> String {
    let parts = [Some(instrument.name.clone()), Some(instrument.serial.clone()), more];
    parts.into_iter().flatten().filter(|part| !part.is_empty()).collect::<Vec<_>>().join(", ")
}

/// Each with the day, the minute and the person it was acknowledged by.
fn cautions(seen: &[CautionSeen], visit: &Visit, registers: &Registers) -> Vec<Caution> {
    let name = |id: PersonId| registers.person(id).map(|person| person.name.clone());
    let caution = |seen: &CautionSeen| Caution {
        text: record::caution(&seen.caution).map_or(&*seen.caution, |known| known.text).to_owned(),
        basis: record::caution(&seen.caution).map_or("", |known| known.basis).to_owned(),
        at: wording::at(seen.on.unwrap_or(visit.date), Some(seen.at_minute)),
        person: seen.person.or(visit.people.first().copied()).and_then(name).unwrap_or_default(),
    };
    seen.iter().map(caution).collect()
}

fn signed_by(signature: &Signature) -> SignedBy {
    SignedBy { name: signature.name.clone(), ink: signature.ink.clone() }
}

fn counterparty(closing: &Closing) -> Counterparty {
    match &closing.counterpart {
        Counterpart::Signed { signature } => Counterparty::Signed { signed: signed_by(signature) },
        Counterpart::NobodyPresent => Counterparty::NobodyPresent,
        Counterpart::Refused { name, reason } => Counterparty::Refused { name: name.clone(), reason: reason.clone() },
        Counterpart::SignsLater { name } => Counterparty::SignsLater { name: name.clone() },
    }
}
