//! What an import takes, refuses and remarks on.

use bubblepoint::app::testing::{CountedIds, SetClock};
use bubblepoint::app::{App, ImportError, Imported};
use bubblepoint::store::Store;
use chrono_tz::Tz;

const SITES: &str = "site,rulebooks,owner,time_zone\n\
    West,us-82f,Harbour Estates,America/New_York\nEast,eu-573 eu-590,Quays Company,UTC\n";
const APPLIANCES: &str = "appliance,site,category,refrigerant,full_charge,unit,installed_on,equipment,leakage_detection_system\n\
    R-1,West,commercial refrigeration,R-22,100,lb,2015-05-01,refrigeration,\n\
    C-1,East,commercial refrigeration,R-404A,40,kg,2018-01-01,refrigeration,no\n\
    H-1,East,comfort cooling,R-22,20,kg,,air conditioning,\n";
const CYLINDERS: &str = "cylinder,kind,tare,unit,refrigerant,gas_status,gross,requalify_by,water_capacity\n\
    V-1,supply,10,kg,R-404A,virgin,70,,\nU-1,supply,10,kg,R-404A,reclaimed,30,,\n\
    B-1,supply,10,kg,R-404A,reclaimed,20,,32\nE-1,recovery,10,kg,,,,2025-12-31,26.2\nN-1,non-refillable,5,kg,R-22,virgin,16,,\n";

/// Before noon of 1 June 2026 on the device, in UTC.
fn empty() -> App {
    let clock = SetClock::at("2026-06-01T10:00:00Z".parse().unwrap(), Tz::UTC);
    App::with(Store::in_memory().unwrap(), Box::new(clock), Box::new(CountedIds::default())).unwrap()
}

fn stocked() -> App {
    let app = empty();
    take(&app, &[("sites.csv", SITES), ("appliances.csv", APPLIANCES), ("cylinders.csv", CYLINDERS)]);
    app
}

fn import(app: &App, files: &[(&str, &str)]) -> Result<Imported, ImportError> {
    let files: Vec<(String, Vec<u8>)> = files.iter().map(|(name, text)| ((*name).to_owned(), text.as_bytes().to_vec())).collect();
    app.import(&files)
}

/// Takes files in and gives the remarks, as `line N: what`.
#[track_caller]
fn take(app: &App, files: &[(&str, &str)]) -> Vec<String> {
    let taken = import(app, files).unwrap_or_else(|error| panic!("{error}"));
    taken.remarks.iter().map(|remark| format!("line {}: {}", remark.line, remark.message)).collect()
}

/// Files that are refused: what stands against them, line by line, without the heading.
#[track_caller]
fn refused(app: &App, files: &[(&str, &str)]) -> Vec<String> {
    let before = (app.store().registers().unwrap(), app.store().lines().unwrap());
    let error = import(app, files).expect_err("refused").to_string();
    assert_eq!((app.store().registers().unwrap(), app.store().lines().unwrap()), before, "nothing was taken");
    error.lines().skip(1).map(str::to_owned).collect()
}

#[track_caller]
fn starts(told: &[String], with: &[&str]) {
    assert!(told.len() == with.len() && told.iter().zip(with).all(|(told, with)| told.starts_with(with)), "{told:#?}");
}

fn log(lines: &str) -> String {
    format!("date,time,appliance,what,amount,unit,cylinder,purpose,result,method\n{lines}")
}

// Registers.

#[test]
fn an_undated_line_holds_from_the_beginning_wherever_it_stands() {
    let dated = "R-9,West,commercial refrigeration,R-448A,2026-01-01\n";
    let undated = "R-9,West,commercial refrigeration,R-22,\n";
    for lines in [[dated, undated].concat(), [undated, dated].concat()] {
        let app = stocked();
        take(&app, &[("a.csv", &format!("appliance,site,category,refrigerant,valid_from\n{lines}"))]);
        let registers = app.store().registers().unwrap();
        let versions = &registers.appliances.iter().find(|appliance| appliance.name == "R-9").unwrap().versions;
        let gas = |day: &str| versions.on(day.parse().unwrap()).unwrap().refrigerant.as_str();
        assert_eq!((gas("2025-12-31"), gas("2026-01-01")), ("R-22", "R-448A"));
    }
}

#[test]
fn an_undated_line_repeats_what_the_store_has_or_is_refused() {
    let app = stocked();
    let file = |gas: &str, from: &str| format!("site,rulebooks,owner,time_zone,valid_from\nWest,us-82f,{gas},America/New_York,{from}\n");
    take(&app, &[("later.csv", &file("Tide Trust", "2026-03-01"))]);
    take(&app, &[("first.csv", &(file("Harbour Estates", "") + "\n"))]);
    take(&app, &[("now.csv", &file("Tide Trust", ""))]);
    let told = refused(&app, &[("other.csv", &file("Nobody", ""))]);
    assert_eq!(
        told,
        ["other.csv, line 2, column owner: was \u{201c}Tide Trust\u{201d} and is now \u{201c}Nobody\u{201d}; \
          date the change with valid_from, or correct the line"]
    );
}

#[test]
fn what_changed_is_told_in_the_files_words() {
    let app = stocked();
    let cylinders = "cylinder,kind,tare,unit,refrigerant,gas_status,gross,requalify_by,where\nV-1,supply,22.5,lb,R-404A,virgin,70,,van 2\n";
    let appliances = APPLIANCES.replace(",no\n", ",yes\n").replace("100,lb", "45.4,kg");
    starts(
        &refused(&app, &[("c.csv", cylinders), ("a.csv", &appliances)]),
        &[
            "a.csv, line 2, column full_charge: was 100 lb and is now 45.4 kg; date the change",
            "a.csv, line 3, column leakage_detection_system: was no and is now yes; date the change",
            "c.csv, line 2, column tare: was 10 kg and is now 22.5 lb; a cylinder's line takes no date",
            "c.csv, line 2, column gross: was 70 kg and is now 70 lb; a cylinder's line takes no date",
            "c.csv, line 2, column where: was nothing and is now \u{201c}van 2\u{201d}; a cylinder's line takes no date",
        ],
    );
}

#[test]
fn two_lines_of_one_import_must_agree() {
    let told = refused(
        &empty(),
        &[("b.csv", "site,rulebooks,owner\nWest,us-82f,A\n"), ("a.csv", "site,rulebooks,owner\nWest,us-82f,B\nWest,us-82f,B\n")],
    );
    starts(&told, &["b.csv, line 2, column owner: is \u{201c}A\u{201d} here and \u{201c}B\u{201d} in a.csv, line 2; date the change"]);
}

#[test]
fn the_latest_certificate_counts_in_any_order() {
    let (old, new) = ("Ada,F-17,2020-01-01,2024-12-31\n", "Ada,F-18,2025-01-01,\n");
    let file = |lines: &str| format!("person,certificate,valid_from,valid_to\n{lines}");
    let latest = |app: &App| app.store().registers().unwrap().people[0].certificate.clone();
    for lines in [[old, new].concat(), [new, old].concat()] {
        let app = empty();
        take(&app, &[("p.csv", &file(&lines))]);
        assert_eq!(latest(&app), "F-18");
    }
    let app = empty();
    take(&app, &[("new.csv", &file(new))]);
    take(&app, &[("old.csv", &file(old))]);
    assert_eq!(latest(&app), "F-18");
    starts(&refused(&app, &[("p.csv", &file("Ada,F-19,2025-01-01,\n"))]), &["p.csv, line 2, column certificate: was \u{201c}F-18\u{201d}"]);
}

#[test]
fn numbers_that_nothing_can_be_worked_out_from_are_refused() {
    let app = stocked();
    let long = "123456789012345678901234567890";
    let cylinders = format!(
        "cylinder,kind,tare,unit,water_capacity,service_pressure_psig,test_pressure_bar\n\
         S-1,supply,10,kg,{long},400,40\nS-2,supply,10,kg,26.2,0.{long},40\nS-3,supply,10,kg,26.2,400,99999\n"
    );
    let appliances = format!("appliance,site,category,refrigerant,room_volume_m3\nX,West,other,R-22,{long}\n");
    let hours = format!("date,appliance,what,running_hours\n2026-05-01,R-1,leak test,{long}\n");
    starts(
        &refused(&app, &[("c.csv", &cylinders), ("a.csv", &appliances), ("l.csv", &hours)]),
        &[
            &format!("a.csv, line 2, column room_volume_m3: \u{201c}{long}\u{201d} is not a volume in cubic metres such as 40; volumes"),
            &format!("c.csv, line 2, column water_capacity: \u{201c}{long}\u{201d} is not a volume in litres such as 26.2; volumes"),
            &format!("c.csv, line 3, column service_pressure_psig: \u{201c}0.{long}\u{201d} is not a "),
            "c.csv, line 4, column test_pressure_bar: \u{201c}99999\u{201d} is not a pressure in bar such as 40; pressures",
            &format!("l.csv, line 2, column running_hours: \u{201c}{long}\u{201d} is not a number of hours"),
        ],
    );
}

// Every fault, and no noise after it.

#[test]
fn faults_of_all_files_are_listed_at_once() {
    let app = stocked();
    take(&app, &[("taken.csv", &log("2025-05-01,,R-1,note,,,,,,\n"))]);
    let told = refused(
        &app,
        &[
            ("taken.csv", &log("2025-05-01,,R-1,note,,,,,,\n")),
            ("sites.csv", "site,rulebooks,time_zone\nNorth,us-99,Mars/Olympus\n"),
            ("appliances.csv", "appliance,site,category,refrigerant,colour\nN-1,North,shed,R-22,red\nN-2,Nowhere,other,R-22,\n"),
            (
                "log.csv",
                &log("2026-05-01,,N-1,charge,1,stone,,,,\n2026-05-02,,N-1,retire,,,,,,\n2026-05-03,,N-1,note,,,,,,\n\
                      2026-05-01,,N-2,note,,,,,,\n2026-05-01,,N-3,leek test,,,,,,\n2027-01-01,,R-1,note,,,,,,\n"),
            ),
        ],
    );
    starts(
        &told,
        &[
            "taken.csv was taken in already, on 2026-06-01 as taken.csv; leave it out",
            "appliances.csv, line 1, column colour: is not a column of an appliances file; known are appliance, site,",
            "appliances.csv, line 2, column category: ",
            "appliances.csv, line 3, column site: there is no site \u{201c}Nowhere\u{201d}; import its line",
            "log.csv, line 2, column unit: ",
            "log.csv, line 4, column what: the appliance was retired on 2026-05-02; nothing can follow",
            "log.csv, line 6, column what: \u{201c}leek test\u{201d}",
            "log.csv, line 6, column appliance: there is no appliance \u{201c}N-3\u{201d}; import its line first",
            "log.csv, line 7, column date: 2027-01-01 is after today, 2026-06-01; correct the date",
            "sites.csv, line 2, column rulebooks: ",
            "sites.csv, line 2, column time_zone: ",
        ],
    );
}

#[test]
fn what_cannot_be_read_hides_what_refers_to_it() {
    let app = empty();
    let told =
        refused(&app, &[("sites.csv", "site,owner\nWest,A\n"), ("a.csv", APPLIANCES), ("l.csv", &log("2026-05-01,,R-1,note,,,,,,\n"))]);
    starts(&told, &["sites.csv, line 1, column rulebooks: is missing; a sites file needs site, rulebooks"]);
    let heading = import(&app, &[("x.csv", ""), ("l.csv", &log("2026-05-01,,,charge,0,stone,,,,\n"))]).unwrap_err().to_string();
    assert!(heading.starts_with("1 file and 1 line cannot be taken; nothing was imported.\n"), "{heading}");
}

#[test]
fn words_and_gases_must_be_known_in_every_column() {
    let line = "2026-05-01,R-1,normal operation,whim,good,al,bushel,R-2O\n";
    let told = refused(&stocked(), &[("l.csv", &format!("date,appliance,what,purpose,result,scope,unit,new_refrigerant\n{line}"))]);
    let columns: Vec<&str> = told.iter().map(|told| told.split("column ").nth(1).unwrap().split(':').next().unwrap()).collect();
    assert_eq!(columns, ["purpose", "unit", "result", "scope", "new_refrigerant"]);
}

#[test]
fn characters_that_nobody_can_see_are_refused() {
    let told = refused(&stocked(), &[("s.csv", "site,rulebooks,operator\nNorth,us-82f,\u{0}\nSouth,us-82f,\"two\nlines\"\n")]);
    assert_eq!(told, ["s.csv, line 2, column operator: has a character that nobody can see, U+0000; take it out"]);
}

// What cannot be true, whatever came first.

#[test]
fn nothing_follows_a_retirement_whichever_came_first() {
    let (charge, retire) = (log("2026-05-01,,R-1,charge,1,lb,,,,\n"), log("2026-04-01,,R-1,retire,,,,,,\n"));
    let app = stocked();
    take(&app, &[("charge.csv", &charge)]);
    starts(
        &refused(&app, &[("retire.csv", &retire)]),
        &["retire.csv, line 2, column date: nothing can follow a retirement, and the store has a charge on 2026-05-01 after it"],
    );
    let app = stocked();
    take(&app, &[("retire.csv", &retire)]);
    starts(&refused(&app, &[("charge.csv", &charge)]), &["charge.csv, line 2, column what: the appliance was retired on 2026-04-01"]);
    // Of one day and without a time, nobody knows which was first.
    take(&app, &[("same day.csv", &log("2026-04-01,,R-1,recover,90,lb,,retire,,\n"))]);
    let both = format!("{retire}2026-04-01,,R-1,note,,,,,,\n");
    starts(&refused(&stocked(), &[("both.csv", &both)]), &["both.csv, line 3, column what: the appliance was retired on 2026-04-01"]);
}

#[test]
fn what_is_mothballed_is_not_mothballed_again_whichever_came_first() {
    let mothball = |day: &str| log(&format!("{day},,R-1,mothball,,,,,,\n"));
    let (april, may) = (mothball("2026-04-01"), mothball("2026-05-01"));
    let app = stocked();
    take(&app, &[("may.csv", &may)]);
    starts(
        &refused(&app, &[("april.csv", &april)]),
        &["april.csv, line 2, column what: the store has a mothball on 2026-05-01 already, and nothing was charged in between"],
    );
    let app = stocked();
    take(&app, &[("april.csv", &april)]);
    starts(&refused(&app, &[("may.csv", &may)]), &["may.csv, line 2, column what: the appliance has been mothballed since 2026-04-01"]);
    take(&app, &[("charge.csv", &log("2026-04-15,,R-1,charge,1,lb,,mothball,,\n"))]);
    take(&app, &[("may.csv", &may)]);
}

#[test]
fn the_day_of_installation_is_judged_from_either_side() {
    let app = stocked();
    starts(
        &refused(&app, &[("l.csv", &log("2015-04-30,,R-1,note,,,,,,\n"))]),
        &["l.csv, line 2, column date: 2015-04-30 is before the appliance was installed, 2015-05-01; correct one of the two"],
    );
    take(&app, &[("h.csv", &log("2019-03-01,,H-1,note,,,,,,\n"))]);
    let late = "appliance,site,category,refrigerant,full_charge,unit,equipment,installed_on,valid_from\n\
        H-1,East,comfort cooling,R-22,20,kg,air conditioning,2020-01-01,2026-01-01\n";
    starts(
        &refused(&app, &[("a.csv", late)]),
        &["a.csv, line 2, column installed_on: 2020-01-01 is after 2019-03-01, when the store has a note; correct the day"],
    );
    // A successor of the same name leaves the history of the one before it be.
    let successor = "appliance,site,category,refrigerant,full_charge,unit,equipment,installed_on,valid_from\n\
        R-1,West,commercial refrigeration,R-448A,100,lb,refrigeration,2024-01-01,2024-01-01\n";
    take(&app, &[("b.csv", successor), ("m.csv", &log("2016-04-30,,R-1,note,,,,,,\n"))]);
}

/// At ten in the morning, UTC, of 1 June it is that day in New York too, and past midnight of the next in Kiritimati.
#[test]
fn today_is_the_sites() {
    let app = empty();
    let line = |what: &str| log(&format!("2026-06-02,,{what},note,,,,,,\n"));
    let sites = "site,rulebooks,time_zone\nFar,us-82f,Pacific/Kiritimati\nNear,us-82f,UTC\n";
    take(&app, &[("s.csv", sites), ("a.csv", "appliance,site,category,refrigerant\nF,Far,other,R-22\nN,Near,other,R-22\n")]);
    take(&app, &[("far.csv", &line("F"))]);
    starts(&refused(&app, &[("near.csv", &line("N"))]), &["near.csv, line 2, column date: 2026-06-02 is after today, 2026-06-01"]);
}

// What is taken and remarked on.

#[test]
fn what_the_law_forbade_is_remarked_on() {
    let app = stocked();
    let told = take(
        &app,
        &[(
            "l.csv",
            &log("2024-03-01,,C-1,charge,5,kg,V-1,,,\n2025-01-15,,C-1,charge,5,kg,V-1,,,\n2025-02-01,,C-1,charge,5,kg,U-1,,,\n\
                  2025-02-15,,C-1,charge,1,kg,,,,\n2025-02-16,,C-1,charge,1,kg,,factory charge,,\n\
                  2025-03-01,,H-1,charge,1,kg,,,,\n2025-04-01,,C-1,recover,4,kg,E-1,,,\n2025-04-01,,C-1,charge,4,kg,E-1,returned,,\n\
                  2026-03-01,,R-1,recover,1,kg,N-1,,,\n2026-03-02,,R-1,recover,1,kg,E-1,,,\n"),
        )],
    );
    starts(
        &told,
        &[
            "line 3: C-1 takes no virgin R-404A: gas with a GWP of 2,500 or more does not service refrigeration equipment (Regulation (EU) 2024/573 Art. 13(3))",
            "line 5: C-1 takes no R-404A of unknown origin, which is taken as virgin: ",
            "line 6: put into operation where refrigeration equipment with gas of GWP 2,500 or more, other than chillers and for products",
            "line 7: H-1 takes no R-22 of unknown origin, which is taken as virgin: ozone-depleting gas, of whatever origin, is not used to fill equipment",
            "line 9: Cylinder E-1 holds recovered gas, which is not charged before it is recycled or reclaimed (Regulation (EU) 2024/573 Art. 8(6))",
            "line 9: C-1 takes no recovered R-404A: ",
            "line 10: Cylinder N-1 is non-refillable and is never filled again (49 CFR 178.65)",
            "line 11: Cylinder E-1 was to be requalified by 2025-12-31. It may be emptied, not filled (",
        ],
    );
}

#[test]
fn what_exceeds_a_charge_or_a_content_is_remarked_on() {
    let app = stocked();
    let told = take(
        &app,
        &[(
            "l.csv",
            &log("2025-01-15,,R-1,charge,101,lb,,trim,,\n2025-02-01,,R-1,recover,101,lb,,surplus,,\n\
                  2025-03-01,,R-1,charge,100,lb,,replacement,,\n2025-03-02,,R-1,recover,60,lb,,mothball,,\n\
                  2025-03-03,,R-1,recover,50,lb,,mothball,,\n2025-04-01,,C-1,charge,21,kg,U-1,,,\n\
                  2025-05-01,,C-1,recover,30,kg,E-1,,,\n2025-05-02,,C-1,charge,31,kg,E-1,returned,,\n\
                  2025-05-03,,C-1,charge,25,kg,B-1,,,\n2025-05-04,,C-1,charge,28,kg,B-1,,,\n"),
        )],
    );
    let told: Vec<String> = told.into_iter().filter(|told| !told.contains("Regulation")).collect();
    starts(
        &told,
        &[
            "line 2: more was charged at once than the appliance's full charge",
            "line 3: more was recovered than the appliance's full charge",
            "line 6: more was recovered than the appliance can have held after the recoveries before, 18.1436948 kg",
            "line 7: 21 kg were charged at once, more than cylinder U-1 held when it was weighed, 20 kg",
            "line 8: Cylinder E-1 would hold 30 kg, over its limit of 19.17 kg (ADR filling ratio",
            "line 9: 31 kg were charged at once, more than cylinder E-1 held by what is on record, 30 kg",
            // It holds 10 kg now; before, it may have held what it is made for.
            "line 11: 28 kg were charged at once, more than cylinder B-1 may hold, 26",
        ],
    );
}

#[test]
fn gas_that_is_told_twice_is_remarked_on() {
    let app = stocked();
    let first = log("2026-05-01,,R-1,charge,1,lb,,,,\n2026-05-01,,R-1,charge,1,lb,,,,\n2026-05-02,,R-1,note,,,,,,\n");
    assert_eq!(take(&app, &[("l.csv", &first)]), [""; 0], "two lines of one file are two charges");
    let longer = format!("{first}2026-05-03,,R-1,charge,1,lb,,,,\n2026-05-01,,R-1,recover,1,lb,,,,\n");
    let other = log("2026-05-03,,R-1,charge,1.0,lb,,,,\n");
    starts(
        &take(&app, &[("a.csv", &longer), ("b.csv", &other)]),
        &[
            "line 2: the store has the same charge already; if it happened once, it now counts twice",
            "line 3: the store has the same charge already",
            "line 2: a.csv has the same charge already",
        ],
    );
}

#[test]
fn tests_without_their_repair_and_cylinders_without_their_line_are_remarked_on() {
    let told = take(
        &stocked(),
        &[(
            "l.csv",
            &log("2026-05-01,,R-1,follow-up verification test,,,,,fail,\n2026-05-02,,R-1,initial verification test,,,,,pass,\n\
                  2026-05-03,,R-1,repair,,,,,,\n2026-05-04,,R-1,follow-up verification test,,,,,pass,\n\
                  2026-05-05,,R-1,note,,,N-1,,,\n2026-05-05,,R-1,note,,,X-1,,,\n2026-05-06,,R-1,recover,1,lb,X-1,,,\n"),
        )],
    );
    assert_eq!(
        told,
        [
            "line 2: a follow-up verification test without a repair before it",
            "line 3: an initial verification test without a repair before it",
            "line 5: this follow-up test does not count: partial, or no initial test passed since the last repair",
            "line 7: cylinder \u{201c}X-1\u{201d} is not in the register",
            "line 8: cylinder \u{201c}X-1\u{201d} is not in the register; the mass counts for no cylinder",
        ]
    );
}

#[test]
fn an_indirect_method_is_no_inspection() {
    let told = take(
        &stocked(),
        &[(
            "l.csv",
            &log("2026-05-01,,R-1,leak inspection,,,,,no leak,sight glass\n2026-05-02,,R-1,leak test,,,,,no leak,sight glass\n\
                  2026-05-03,,R-1,leak inspection,,,,,no leak,electronic detector\n2026-05-04,,R-1,leak inspection,,,,,no leak,\n"),
        )],
    );
    starts(
        &told,
        &[
            "line 2: \u{201c}sight glass\u{201d} is an indirect method: it shows that gas is missing, not where. It is no leak inspection (common practice); it was taken as written",
        ],
    );
}

#[test]
fn a_detection_system_without_a_check_is_remarked_on() {
    let declares = |name: &str, site: &str| {
        format!("appliance,site,category,refrigerant,leakage_detection_system\n{name},{site},commercial refrigeration,R-404A,yes\n")
    };
    let app = stocked();
    starts(
        &take(&app, &[("a.csv", &declares("C-2", "East"))]),
        &["line 2: a leakage detection system is declared and no check of it is on record; write down the last one (2024/573 Art. 6(3))"],
    );
    let check = log("2026-01-01,,C-3,detection system check,,,,,,\n");
    assert_eq!(take(&app, &[("b.csv", &declares("C-3", "East")), ("l.csv", &check)]), [""; 0]);
    // No law of this site asks for its check.
    assert_eq!(take(&app, &[("c.csv", &declares("R-2", "West"))]), [""; 0]);
}
