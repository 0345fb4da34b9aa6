//! Saving durably against bare SQLite on the same machine in the same run. `--quick` for a smoke run.
//!
//! Figures are medians of interleaved runs; only the ratios mean something
//! away from the machine they were taken on.

use bubblepoint::app::testing::{CountedIds, SetClock};
use bubblepoint::app::{App, ChargeInput, Common};
use bubblepoint::ledger::{
    Act, Appliance, ApplianceFacts, ApplianceId, Category, ChargePurpose, Cylinder, CylinderFacts, CylinderId, CylinderKind, Detail, Entry,
    EntryId, GasStatus, Line, Moment, Person, PersonId, Reading, Site, SiteFacts, SiteId, Transfer, Versions, Visit, VisitId, VisitState,
    WeighingMode,
};
use bubblepoint::quantity::{Mass, MassUnit, Weighing};
use bubblepoint::store::{OpenMode, Store};
use chrono::{DateTime, Days, NaiveDate, Utc};
use rusqlite::{Connection, params};
use std::path::Path;
use std::time::{Duration, Instant};
use uuid::Uuid;

fn main() {
    let quick = std::env::args().any(|argument| argument == "--quick");
    let folder = tempfile::tempdir().expect("a temporary folder");
    saving(folder.path(), if quick { 20 } else { 400 });
}

fn report(what: &str, time: Duration, base: Duration, aim: &str) {
    let ratio = time.as_secs_f64() / base.as_secs_f64();
    println!("{what:<58} {:>9.3} ms {ratio:>7.2} × {aim}", time.as_secs_f64() * 1e3);
}

fn median(mut times: Vec<Duration>) -> Duration {
    times.sort();
    times[times.len() / 2]
}

fn timed(act: impl FnOnce()) -> Duration {
    let start = Instant::now();
    act();
    start.elapsed()
}

fn saving(folder: &Path, runs: u32) {
    let store = Store::open(&folder.join("saving.store"), OpenMode::Create).expect("a store");
    fill(&store, 1);
    let other = store.another().expect("a second connection");
    let clock = SetClock::at(now(), chrono_tz::UTC);
    let app = App::with(store, Box::new(clock), Box::new(CountedIds::after(1 << 40))).expect("an app");
    let bare = bare(&folder.join("bare.db"));

    let (mut plain, mut store_only, mut whole) = (Vec::new(), Vec::new(), Vec::new());
    for run in 0..runs {
        let entry = charge_entry(u128::from(run) + 1, 0, u64::from(run));
        // Each comes first as often as the others: who follows a sync finds the disk busy.
        for turn in 0..3 {
            match (run + turn) % 3 {
                0 => plain.push(timed(|| bare_insert(&bare, &entry))),
                1 => store_only.push(timed(|| {
                    other.write(now(), |tx| tx.add_entry(&entry)).expect("saved");
                })),
                _ => whole.push(timed(|| {
                    app.charge(visit_id(), appliance_id(0), charge_input(run)).expect("saved");
                })),
            }
        }
    }
    let base = median(plain);
    println!("saving one entry durably, {runs} runs");
    report("bare SQLite: the same row, insert and commit", base, base, "");
    report("the store's write of an entry", median(store_only), base, "(aim 1.2)");
    report("a charge as the window saves it, rules asked", median(whole), base, "");
}

/// The same pragmas, the same columns, no index but the key.
fn bare(path: &Path) -> Connection {
    let bare = Connection::open(path).expect("a database");
    bare.execute_batch(
        "PRAGMA journal_mode=WAL; PRAGMA synchronous=FULL; PRAGMA foreign_keys=ON;
         CREATE TABLE entries (position INTEGER PRIMARY KEY, id BLOB, visit BLOB, appliance BLOB, local_date TEXT, minute INTEGER,
            time_zone TEXT, written INTEGER, act TEXT, purpose TEXT, mass INTEGER, cylinder BLOB, division INTEGER, detail TEXT) STRICT;",
    )
    .expect("a table");
    bare
}

fn bare_insert(bare: &Connection, entry: &Entry) {
    let transfer = entry.line.act.transfer().expect("a charge");
    let detail = serde_json::to_string(&entry.detail).expect("text");
    let mut insert = bare
        .prepare_cached(
            "INSERT INTO entries (id, visit, appliance, local_date, minute, time_zone, written, act, purpose, mass, cylinder, division, detail)
             VALUES (?1, ?2, ?3, ?4, ?5, ?6, ?7, ?8, ?9, ?10, ?11, ?12, ?13)",
        )
        .expect("a statement");
    insert
        .execute(params![
            entry.line.entry.0.as_bytes(),
            entry.visit.0.as_bytes(),
            entry.line.appliance.0.as_bytes(),
            entry.line.at.date.to_string(),
            entry.line.at.minute,
            "Etc/UTC",
            entry.written.timestamp_millis(),
            "charge",
            "leak",
            transfer.mass.to_i64(),
            transfer.cylinder.map(|cylinder| *cylinder.0.as_bytes()),
            transfer.division.and_then(Mass::to_i64),
            detail
        ])
        .expect("inserted");
}

// --- an invented store ----------------------------------------------------

fn now() -> DateTime<Utc> {
    DateTime::from_timestamp(1_800_000_000, 0).expect("a time")
}

fn day(number: u64) -> NaiveDate {
    NaiveDate::from_ymd_opt(2023, 1, 2).expect("a day") + Days::new(number)
}

fn site_id() -> SiteId {
    SiteId(Uuid::from_u128(1))
}

fn visit_id() -> VisitId {
    VisitId(Uuid::from_u128(2))
}

fn cylinder_id() -> CylinderId {
    CylinderId(Uuid::from_u128(3))
}

fn appliance_id(number: u64) -> ApplianceId {
    ApplianceId(Uuid::from_u128(u128::from(number) + 100))
}

fn lb(text: &str) -> Mass {
    Mass::parse(text, MassUnit::Pound).expect("a mass")
}

fn fill(store: &Store, appliances: u64) {
    let site_facts = SiteFacts {
        owner: "Harbour Fish Ltd".to_owned(),
        address: "Quay 3".to_owned(),
        time_zone: "Etc/UTC".to_owned(),
        ..SiteFacts::under(vec!["us-82f".to_owned(), "us-84c".to_owned()])
    };
    let facts = ApplianceFacts {
        full_charge: Some(Mass::from_lb(100)),
        full_charge_written: Some(Weighing::new("100", MassUnit::Pound)),
        ..ApplianceFacts::new(Category::CommercialRefrigeration, "R-22")
    };
    let gas = CylinderFacts {
        refrigerant: Some("R-22".to_owned()),
        gas_status: Some(GasStatus::Virgin),
        gross: Some(Mass::from_lb(20_000)),
        gross_written: Some(Weighing::new("20000", MassUnit::Pound)),
        ..CylinderFacts::new(CylinderKind::Supply, Mass::from_lb(20), Weighing::new("20", MassUnit::Pound))
    };
    let person = Person {
        id: PersonId(Uuid::from_u128(4)),
        name: "Ada Quill".to_owned(),
        certificate: "F-17".to_owned(),
        certificate_kind: String::new(),
        valid_from: None,
        valid_to: None,
        company: String::new(),
        company_certificate: String::new(),
    };
    let visit = Visit {
        id: visit_id(),
        site: site_id(),
        state: VisitState::Open,
        date: day(0),
        minute: None,
        time_zone: "Etc/UTC".to_owned(),
        begun: now(),
        people: vec![person.id],
        closing: None,
        fingerprint: None,
    };
    store
        .write(now(), |tx| {
            tx.add_person(&person)?;
            tx.add_site(&Site { id: site_id(), name: "Quay".to_owned(), versions: Versions::always(site_facts) })?;
            for number in 0..appliances {
                let (id, name) = (appliance_id(number), format!("R-{number:05}"));
                tx.add_appliance(&Appliance { id, site: site_id(), name, versions: Versions::always(facts.clone()) })?;
            }
            tx.add_cylinder(&Cylinder { id: cylinder_id(), name: "S-1".to_owned(), versions: Versions::always(gas) })?;
            tx.begin_visit(&visit)
        })
        .expect("registers");
}

fn detail() -> Detail {
    let written = |text: &str| Some(Weighing::new(text, MassUnit::Pound));
    let reading = Reading { mode: WeighingMode::Zeroed, before: written("0.0"), after: written("-0.1"), net: None, scale: None };
    Detail { person: Some(PersonId(Uuid::from_u128(4))), reading: Some(reading), gas_status: Some(GasStatus::Virgin), ..Detail::default() }
}

fn entry(number: u128, appliance: u64, date: NaiveDate, act: Act) -> Entry {
    let at = Moment { date, minute: Some(u16::try_from(number % 1440).unwrap_or(0)) };
    Entry {
        line: Line {
            entry: EntryId(Uuid::from_u128((1 << 100) + number)),
            appliance: appliance_id(appliance),
            at,
            position: 0,
            job: Some(format!("J-{}", number / 8).into()),
            act,
        },
        visit: visit_id(),
        written: now(),
        strikes: None,
        struck_by: None,
        detail: detail(),
    }
}

fn transfer(mass: Mass) -> Transfer {
    Transfer { mass, cylinder: Some(cylinder_id()), division: Some(lb("0.1")), hoses: Mass::ZERO }
}

fn charge_entry(number: u128, appliance: u64, date: u64) -> Entry {
    entry(number, appliance, day(date), Act::Charge { purpose: ChargePurpose::Leak, transfer: transfer(lb("0.1")) })
}

fn charge_input(run: u32) -> ChargeInput {
    let written = |text: &str| Some(Weighing::new(text, MassUnit::Pound));
    ChargeInput {
        common: Common { at: Some(Moment { date: day(u64::from(run)), minute: Some(600) }), ..Common::default() },
        cylinder: Some(cylinder_id()),
        purpose: ChargePurpose::Leak,
        reading: Reading { mode: WeighingMode::Zeroed, before: written("0.0"), after: written("-0.1"), net: None, scale: None },
        full_hoses: None,
        phase: "liquid".to_owned(),
        short_by: None,
        same_leak_as: None,
        gas_source: String::new(),
        weighing_gap: String::new(),
    }
}
