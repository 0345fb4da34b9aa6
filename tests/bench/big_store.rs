//! A large invented store, the same for every benchmark that reads one.

use bubblepoint::ledger::{
    Act, Appliance, ApplianceFacts, ApplianceId, Category, ChargePurpose, Detail, Entry, EntryId, Line, Moment, Person, PersonId,
    RecoveryPurpose, Site, SiteFacts, SiteId, TestKind, TestResult, Transfer, Versions, Visit, VisitId, VisitState,
};
use bubblepoint::quantity::{Mass, MassUnit};
use bubblepoint::store::{OpenMode, Store, StoreError};
use chrono::{DateTime, Days, NaiveDate, Utc};
use std::path::Path;
use uuid::Uuid;

const A_SITE: usize = 10;

/// Makes a store: ten appliances a site, `each` entries an appliance over five
/// years, and one visit left open at the first site.
pub fn fill(path: &Path, appliances: usize, each: usize) -> Result<(), StoreError> {
    let now: DateTime<Utc> = DateTime::UNIX_EPOCH;
    let store = Store::open(path, OpenMode::Create)?;
    let mut next = 0_u128;
    let mut id = || {
        next += 1;
        Uuid::from_u128(next)
    };
    store.write(now, |tx| {
        let mut sites = Vec::new();
        for number in 0..appliances.div_ceil(A_SITE) {
            let site = SiteId(id());
            tx.add_site(&Site { id: site, name: format!("Quay {number}"), versions: Versions::always(site_facts()) })?;
            sites.push(site);
        }
        let person = PersonId(id());
        tx.add_person(&Person {
            id: person,
            name: "Ada Quill".to_owned(),
            certificate: "F-17".to_owned(),
            certificate_kind: String::new(),
            valid_from: None,
            valid_to: None,
            company: String::new(),
            company_certificate: String::new(),
        })?;
        let first = NaiveDate::from_ymd_opt(2022, 1, 1).unwrap_or_default();
        for number in 0..appliances {
            let (appliance, site) = (ApplianceId(id()), sites[number / A_SITE]);
            tx.add_appliance(&Appliance { id: appliance, site, name: format!("A-{number}"), versions: Versions::always(facts(number)) })?;
            for entry in 0..each {
                let date = first.checked_add_days(Days::new((entry * 1750 / each) as u64)).unwrap_or(first);
                let visit = VisitId(id());
                tx.begin_visit(&self::visit(visit, site, VisitState::Imported, date, Vec::new()))?;
                let line = Line {
                    entry: EntryId(id()),
                    appliance,
                    at: Moment { date, minute: None },
                    position: 0,
                    job: None,
                    act: act(number + entry),
                };
                tx.add_entry(&Entry { line, visit, written: now, strikes: None, struck_by: None, detail: Detail::default() })?;
            }
        }
        let open = VisitId(id());
        tx.begin_visit(&visit(open, sites[0], VisitState::Open, today(), vec![person]))
    })
}

fn visit(id: VisitId, site: SiteId, state: VisitState, date: NaiveDate, people: Vec<PersonId>) -> Visit {
    let begun = DateTime::UNIX_EPOCH;
    Visit { id, site, state, date, minute: None, time_zone: "Etc/UTC".to_owned(), begun, people, closing: None, fingerprint: None }
}

/// The day on which the store is looked at.
pub fn today() -> NaiveDate {
    NaiveDate::from_ymd_opt(2026, 12, 1).unwrap_or_default()
}

fn site_facts() -> SiteFacts {
    SiteFacts { time_zone: "UTC".to_owned(), ..SiteFacts::under(vec!["us-82f".to_owned(), "us-84c".to_owned()]) }
}

fn facts(number: usize) -> ApplianceFacts {
    ApplianceFacts {
        full_charge: Mass::parse("600", MassUnit::Pound).ok(),
        ..ApplianceFacts::new(Category::CommercialRefrigeration, if number.is_multiple_of(2) { "R-448A" } else { "R-22" }.to_owned())
    }
}

/// A mix like a real log's: charges, recoveries, tests, repairs.
fn act(number: usize) -> Act {
    let mass = |tenths: usize| Mass::parse(&format!("{}.{}", tenths / 10, tenths % 10), MassUnit::Pound).unwrap_or(Mass::ZERO);
    let transfer = |tenths: usize| Transfer { mass: mass(tenths), cylinder: None, division: None, hoses: Mass::ZERO };
    let test = |kind| Act::Test { kind, result: Some(TestResult::Pass), scope: None, partial: false, running_hundredths: None };
    match number % 10 {
        0..=3 => Act::Charge { purpose: ChargePurpose::Leak, transfer: transfer(20 + number % 300) },
        4 => Act::Recover { purpose: RecoveryPurpose::Repair, transfer: transfer(100 + number % 200) },
        5 => Act::Repair { temporary: false },
        6 => test(TestKind::InitialVerification),
        7 => test(TestKind::FollowUpVerification),
        8 => test(TestKind::LeakInspection),
        _ => Act::Note,
    }
}
