//! Judging a whole store against adding up its entries once.
//!
//! `cargo bench --bench assess`; `-- --quick` takes a small store.

use bubblepoint::cli::assess::{assess_all, by_appliance};
use bubblepoint::ledger::{
    Act, Appliance, ApplianceFacts, ApplianceId, Category, ChargePurpose, Detail, Entry, EntryId, Line, Moment, RateMethod, Site,
    SiteFacts, SiteId, TestKind, TestResult, Transfer, Versions, Visit, VisitId, VisitState,
};
use bubblepoint::quantity::{Mass, MassUnit};
use bubblepoint::store::{OpenMode, Store, StoreError};
use chrono::{DateTime, Days, NaiveDate, Utc};
use std::hint::black_box;
use std::path::Path;
use std::time::{Duration, Instant};
use uuid::Uuid;

fn main() {
    let quick = std::env::args().any(|argument| argument == "--quick");
    let (appliances, each) = if quick { (40, 10) } else { (2_000, 50) };
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("store.db");
    fill(&path, appliances, each).expect("a store");
    let store = Store::open(&path, OpenMode::MustExist).expect("the store opens");
    let on = NaiveDate::from_ymd_opt(2026, 12, 1).expect("a day");

    let bare = rusqlite::Connection::open(&path).expect("SQLite opens it");
    let sum =
        fastest(7, || bare.query_row("SELECT sum(mass) FROM entries", [], |row| row.get::<_, f64>(0).map(|sum| sum as i64)).map(drop));
    let read = fastest(5, || store.lines().map(|lines| drop(black_box(lines))));
    let judged = fastest(5, || -> Result<(), StoreError> {
        let registers = store.registers()?;
        let lines = by_appliance(store.lines()?);
        black_box(assess_all(&registers, &lines, on, |_| true));
        Ok(())
    });
    println!("{appliances} appliances, {} entries", appliances * each);
    println!("sum over entries  {sum:>10.2?}");
    println!("read all lines    {read:>10.2?}  {:>6.1}x the sum", ratio(read, sum));
    println!("assess            {judged:>10.2?}  {:>6.1}x the sum (aim 20x)", ratio(judged, sum));

    if !quick {
        growth(folder.path(), on);
    }
}

/// Time for 1, 2 and 4 times as many entries: linear growth prints 1, 2, 4.
fn growth(folder: &Path, on: NaiveDate) {
    let mut first = None;
    for times in [1_usize, 2, 4] {
        let path = folder.join(format!("growth-{times}.db"));
        fill(&path, 500 * times, 50).expect("a store");
        let store = Store::open(&path, OpenMode::MustExist).expect("the store opens");
        let registers = store.registers().expect("registers");
        let lines = by_appliance(store.lines().expect("lines"));
        let took = fastest(5, || -> Result<(), StoreError> {
            black_box(assess_all(&registers, &lines, on, |_| true));
            Ok(())
        });
        let base = *first.get_or_insert(took);
        println!("{:>7} entries     {took:>10.2?}  {:>6.2}x for {times}x", 25_000 * times, ratio(took, base));
    }
}

fn ratio(a: Duration, b: Duration) -> f64 {
    a.as_secs_f64() / b.as_secs_f64()
}

/// The fastest of several runs: what the work takes when nothing else disturbs it.
fn fastest<E: std::fmt::Debug>(runs: u32, mut work: impl FnMut() -> Result<(), E>) -> Duration {
    (0..runs)
        .map(|_| {
            let start = Instant::now();
            work().expect("the work succeeds");
            start.elapsed()
        })
        .min()
        .unwrap_or_default()
}

fn fill(path: &Path, appliances: usize, each: usize) -> Result<(), StoreError> {
    let now: DateTime<Utc> = DateTime::UNIX_EPOCH;
    let store = Store::open(path, OpenMode::Create)?;
    let mut next = 0_u128;
    let mut id = || {
        next += 1;
        Uuid::from_u128(next)
    };
    store.write(now, |tx| {
        let site = SiteId(id());
        tx.add_site(&Site { id: site, name: "Harbour works".to_owned(), versions: Versions::always(site_facts()) })?;
        let first = NaiveDate::from_ymd_opt(2022, 1, 1).unwrap_or_default();
        for number in 0..appliances {
            let appliance = ApplianceId(id());
            tx.add_appliance(&Appliance { id: appliance, site, name: format!("A-{number}"), versions: Versions::always(facts(number)) })?;
            for entry in 0..each {
                let date = first.checked_add_days(Days::new((entry * 1750 / each) as u64)).unwrap_or(first);
                let visit = VisitId(id());
                tx.begin_visit(&Visit {
                    id: visit,
                    site,
                    state: VisitState::Imported,
                    date,
                    minute: None,
                    time_zone: String::new(),
                    begun: now,
                    people: Vec::new(),
                    closing: None,
                    fingerprint: None,
                })?;
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
        Ok(())
    })
}

fn site_facts() -> SiteFacts {
    SiteFacts {
        rulebooks: vec!["us-82f".to_owned(), "us-84c".to_owned()],
        owner: String::new(),
        operator: String::new(),
        address: String::new(),
        rate_method: RateMethod::Annualizing,
        time_zone: "UTC".to_owned(),
    }
}

fn facts(number: usize) -> ApplianceFacts {
    ApplianceFacts {
        category: Category::CommercialRefrigeration,
        refrigerant: if number.is_multiple_of(2) { "R-448A" } else { "R-22" }.to_owned(),
        full_charge: Mass::parse("600", MassUnit::Pound).ok(),
        full_charge_written: None,
        charge_method: None,
        installed_on: None,
        equipment: None,
        assembly: String::new(),
        description: String::new(),
        serial: String::new(),
        place: String::new(),
        labelled_hermetically_sealed: false,
        residential: false,
        leakage_detection_system: false,
        residential_or_light_commercial_ac: false,
        product_below_minus_50c: false,
        military: false,
        room_volume_m3: None,
    }
}

/// A mix like a real log's: charges, recoveries, tests, repairs.
fn act(number: usize) -> Act {
    let mass = |tenths: usize| Mass::parse(&format!("{}.{}", tenths / 10, tenths % 10), MassUnit::Pound).unwrap_or(Mass::ZERO);
    let transfer = |tenths: usize| Transfer { mass: mass(tenths), cylinder: None, division: None, hoses: Mass::ZERO };
    let test = |kind| Act::Test { kind, result: Some(TestResult::Pass), scope: None, partial: false, running_hundredths: None };
    match number % 10 {
        0..=3 => Act::Charge { purpose: ChargePurpose::Leak, transfer: transfer(20 + number % 300) },
        4 => Act::Recover { purpose: bubblepoint::ledger::RecoveryPurpose::Repair, transfer: transfer(100 + number % 200) },
        5 => Act::Repair { temporary: false },
        6 => test(TestKind::InitialVerification),
        7 => test(TestKind::FollowUpVerification),
        8 => test(TestKind::LeakInspection),
        _ => Act::Note,
    }
}
