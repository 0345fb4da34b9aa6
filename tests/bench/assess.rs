//! Judging a whole store against adding up its entries once.
//!
//! `cargo bench --bench assess`; `-- --quick` takes a small store.

mod big_store;

use big_store::{fill, today};
use bubblepoint::app::assess_all;
use bubblepoint::ledger::by_appliance;
use bubblepoint::store::{OpenMode, Store, StoreError};
use chrono::NaiveDate;
use std::hint::black_box;
use std::path::Path;
use std::time::{Duration, Instant};

fn main() {
    let quick = std::env::args().any(|argument| argument == "--quick");
    let (appliances, each) = if quick { (40, 10) } else { (2_000, 50) };
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("store.db");
    fill(&path, appliances, each).expect("a store");
    let store = Store::open(&path, OpenMode::MustExist).expect("the store opens");
    let on = today();

    // `total` and not `sum`: in 10⁻¹⁴ kg a large store's masses leave 64 bits.
    let bare = rusqlite::Connection::open(&path).expect("SQLite opens it");
    let sum =
        fastest(7, || bare.query_row("SELECT total(mass) FROM entries", [], |row| row.get::<_, f64>(0)).map(|sum| _ = black_box(sum)));
    let read = fastest(5, || store.lines().map(|lines| drop(black_box(lines))));
    let judged = fastest(5, || whole_pass(&store, on));
    println!("{appliances} appliances, {} entries", appliances * each);
    println!("sum over entries  {sum:>10.2?}");
    println!("read all lines    {read:>10.2?}  {:>6.1}x the sum", ratio(read, sum));
    println!("assess            {judged:>10.2?}  {:>6.1}x the sum (aim 20x)", ratio(judged, sum));

    // 10,000 appliances and 500,000 entries in the end.
    let (wide, deep) = if quick { ((100, 10), (20, 50)) } else { ((2_500, 50), (250, 125)) };
    println!("more appliances");
    growth(folder.path(), on, |times| (wide.0 * times, wide.1));
    println!("longer logs");
    growth(folder.path(), on, |times| (deep.0, deep.1 * times));
}

/// Read from the disk, judge every appliance: what `assess` does before it prints.
fn whole_pass(store: &Store, on: NaiveDate) -> Result<(), StoreError> {
    let registers = store.registers()?;
    let lines = by_appliance(store.lines()?);
    black_box(assess_all(&registers, &lines, on, |_| true));
    Ok(())
}

/// Time of one pass over 1, 2 and 4 times as many entries: linear growth prints 1, 2, 4.
fn growth(folder: &Path, on: NaiveDate, size: impl Fn(usize) -> (usize, usize)) {
    let mut first = None;
    for times in [1_usize, 2, 4] {
        let (appliances, each) = size(times);
        let path = folder.join(format!("growth-{appliances}-{each}.db"));
        fill(&path, appliances, each).expect("a store");
        let store = Store::open(&path, OpenMode::MustExist).expect("the store opens");
        let took = fastest(3, || whole_pass(&store, on));
        let base = *first.get_or_insert(took);
        let entries = appliances * each;
        println!("{appliances:>7} appliances, {entries:>7} entries  {took:>10.2?}  {:>6.2}x for {times}x", ratio(took, base));
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
