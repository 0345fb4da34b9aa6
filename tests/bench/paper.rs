//! How long a service record takes and how large it is. `--quick` for a smoke
//! run; `--into DIR` also writes every invented paper there, to be looked at.

#[path = "../print/fixtures/mod.rs"]
mod fixtures;

use bubblepoint::print::{Paper, annual_account, service_record};
use bubblepoint::record::ServiceRecord;
use std::time::Instant;

fn main() {
    let arguments: Vec<String> = std::env::args().collect();
    let runs = if arguments.iter().any(|argument| argument == "--quick") { 3 } else { 50 };
    let into = arguments.iter().position(|argument| argument == "--into").and_then(|at| arguments.get(at + 1));
    let records: [(&str, ServiceRecord); 10] = [
        ("over-trigger", fixtures::over_trigger()),
        ("clean", fixtures::clean()),
        ("nobody-present", fixtures::nobody_present()),
        ("refused", fixtures::refused()),
        ("signs-later", fixtures::signs_later()),
        ("draft", fixtures::draft()),
        ("imported", fixtures::imported()),
        ("large", fixtures::large()),
        ("many-tongues", fixtures::many_tongues()),
        ("long-words", fixtures::long_words()),
    ];
    println!("{:<18} {:>9} {:>9} {:>7}", "paper", "first ms", "ms", "KB");
    for (name, record) in &records {
        let mut print = || service_record(record, Paper::A4);
        report(name, runs, into, &mut print);
        if let (Some(folder), Ok(bytes)) = (into, service_record(record, Paper::Letter)) {
            write(folder, &format!("{name}-letter"), &bytes);
        }
    }
    let account = fixtures::account();
    report("account", runs, into, &mut || annual_account(&account, Paper::A4));
    println!("aim: a service record at most 20 ms and 60 KB");
}

fn report(name: &str, runs: u32, into: Option<&String>, print: &mut dyn FnMut() -> Result<Vec<u8>, bubblepoint::print::PrintError>) {
    let start = Instant::now();
    let bytes = print().expect("a paper");
    let first = start.elapsed().as_secs_f64() * 1000.0;
    let start = Instant::now();
    for _ in 0..runs {
        std::hint::black_box(print().expect("a paper"));
    }
    let mean = start.elapsed().as_secs_f64() * 1000.0 / f64::from(runs);
    println!("{name:<18} {first:>9.2} {mean:>9.2} {:>7.1}", bytes.len() as f64 / 1000.0);
    if let Some(folder) = into {
        write(folder, name, &bytes);
    }
}

#[allow(clippy::disallowed_methods)]
fn write(folder: &str, name: &str, bytes: &[u8]) {
    std::fs::write(std::path::Path::new(folder).join(format!("{name}.pdf")), bytes).expect("a folder that can be written to");
}
