//! The screens' checks, one after another on one thread: Slint's windows
//! belong to the thread that made them. Takes a filter, as other tests do.

mod acts;
mod contrast;
mod flow;
mod keyboard;
mod pages;
mod places;
mod previews;
mod rules;

use std::panic::{AssertUnwindSafe, catch_unwind};
use std::process::ExitCode;

type Check = (&'static str, fn());

fn main() -> ExitCode {
    let words: Vec<String> = std::env::args().skip(1).filter(|a| !a.starts_with('-')).collect();
    let checks: Vec<Check> =
        [contrast::CHECKS, rules::CHECKS, pages::CHECKS, keyboard::CHECKS, acts::CHECKS, flow::CHECKS, places::CHECKS, previews::CHECKS]
            .concat();
    if std::env::args().any(|a| a == "--list") {
        for (name, _) in &checks {
            println!("{name}: test");
        }
        return ExitCode::SUCCESS;
    }
    let mut failed = Vec::new();
    let mut run = 0;
    for (name, check) in checks {
        if !words.is_empty() && !words.iter().any(|w| name.contains(w.as_str())) {
            continue;
        }
        run += 1;
        let passed = catch_unwind(AssertUnwindSafe(check)).is_ok();
        println!("test {name} ... {}", if passed { "ok" } else { "FAILED" });
        if !passed {
            failed.push(name);
        }
    }
    println!("\ntest result: {}. {} passed; {} failed", if failed.is_empty() { "ok" } else { "FAILED" }, run - failed.len(), failed.len());
    if failed.is_empty() { ExitCode::SUCCESS } else { ExitCode::FAILURE }
}
