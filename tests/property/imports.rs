//! The order of an import's files, and of the lines of its registers, means nothing.

use bubblepoint::app::{App, ImportError};
use bubblepoint::cli::{Arguments, Command, assess};
use bubblepoint::store::OpenMode;
use chrono::{Days, NaiveDate};
use clap::Parser;
use proptest::prelude::*;

const SITES: [&str; 5] = [
    "West,us-82f us-84c,annualizing,",
    "West,us-82f us-84c,rolling average,2026-01-01",
    "East,eu-573 eu-590,annualizing,",
    "East,eu-573,annualizing,2025-07-01",
    "North,gb-517 gb-1005,annualizing,2020-01-01",
];
const APPLIANCES: [&str; 6] = [
    "A,West,commercial refrigeration,R-22,100,lb,2015-05-01,",
    "A,West,commercial refrigeration,R-448A,95,lb,2015-05-01,2025-10-01",
    "B,West,comfort cooling,R-410A,60,lb,,2025-03-01",
    "B,West,comfort cooling,R-410A,50,lb,,",
    "C,East,commercial refrigeration,R-404A,20,kg,,",
    "D,North,other,R-134a,12,kg,2019-01-01,",
];
const PEOPLE: [&str; 3] = ["Ada,F-17,2020-01-01", "Ada,F-18,2025-01-01", "Ben,,"];

/// Lines of a log, never two of one appliance on one day.
fn log() -> impl Strategy<Value = Vec<String>> {
    let act = prop_oneof![
        3 => (1_u32..300).prop_map(|tenths| format!("charge,{}.{},lb,leak,", tenths / 10, tenths % 10)),
        1 => (1_u32..300).prop_map(|tenths| format!("recover,{}.{},lb,repair,", tenths / 10, tenths % 10)),
        1 => Just("repair,,,,".to_owned()),
        1 => Just("initial verification test,,,,pass".to_owned()),
        1 => Just("follow-up verification test,,,,pass".to_owned()),
        1 => Just("leak inspection,,,,no leak".to_owned()),
    ];
    let line = (0_u64..500, prop::sample::select(vec!["A", "B", "C", "D"]));
    prop::collection::btree_map(line, act, 1..25).prop_map(|lines| {
        let first: NaiveDate = "2025-01-01".parse().unwrap();
        lines.into_iter().map(|((after, appliance), act)| format!("{},{appliance},{act}", first + Days::new(after))).collect()
    })
}

/// Lines in some order, parted into two files.
fn files(header: &'static str, name: &'static str, lines: Vec<String>) -> impl Strategy<Value = Vec<(String, Vec<u8>)>> {
    let count = lines.len();
    (Just(lines).prop_shuffle(), 0..=count).prop_map(move |(lines, middle)| {
        let file =
            |number: u32, lines: &[String]| (format!("{name}-{number}.csv"), format!("{header}\n{}\n", lines.join("\n")).into_bytes());
        [file(1, &lines[..middle]), file(2, &lines[middle..])].into_iter().filter(|(_, bytes)| bytes.len() > header.len() + 2).collect()
    })
}

/// The same lines, ordered and parted anew.
fn arranged(log: Vec<String>) -> impl Strategy<Value = Vec<(String, Vec<u8>)>> {
    let own = |lines: &[&str]| lines.iter().map(|line| (*line).to_owned()).collect::<Vec<_>>();
    let kinds = (
        files("site,rulebooks,rate_method,valid_from", "s", own(&SITES)),
        files("appliance,site,category,refrigerant,full_charge,unit,installed_on,valid_from", "a", own(&APPLIANCES)),
        files("person,certificate,valid_from", "p", own(&PEOPLE)),
        files("date,appliance,what,amount,unit,purpose,result", "l", log),
    );
    kinds.prop_map(|(sites, appliances, people, log)| [sites, appliances, people, log].concat()).prop_shuffle()
}

fn assessed(files: &[(String, Vec<u8>)]) -> String {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("store.db");
    App::open(&path, OpenMode::Create).unwrap().import(files).unwrap();
    let arguments = Arguments::parse_from(["bubblepoint", "assess", "--on", "2026-06-30", "--format", "json"]);
    let Some(Command::Assess(args)) = &arguments.command else { unreachable!("it is assess") };
    assess::run(Some(&path), args).unwrap().text
}

proptest! {
    #![proptest_config(super::cases(24))]

    #[test]
    fn order_means_nothing((one, other) in log().prop_flat_map(|log| (arranged(log.clone()), arranged(log)))) {
        prop_assert_eq!(assessed(&one), assessed(&other));
    }

    #[test]
    fn a_file_is_taken_once(files in log().prop_flat_map(arranged), which in any::<prop::sample::Index>()) {
        let app = App::with(
            bubblepoint::store::Store::in_memory().unwrap(),
            Box::new(bubblepoint::app::testing::SetClock::at("2026-12-01T12:00:00Z".parse().unwrap(), chrono_tz::UTC)),
            Box::new(bubblepoint::app::FreshIds),
        ).unwrap();
        app.import(&files).unwrap();
        let again = which.get(&files).clone();
        let told = app.import(std::slice::from_ref(&again)).unwrap_err();
        prop_assert!(matches!(told, ImportError::Refused(_)));
        let told = told.to_string();
        prop_assert!(told.contains(&format!("{} was taken in already, on 2026-12-01 as {}", again.0, again.0)), "{}", told);
    }
}
