use super::{Desk, stocked};

#[test]
fn five_kinds_in_any_order_make_a_store() {
    let desk = stocked();
    let visits = desk.on_store(&["visits", "--format", "json"]).done();
    let visits: serde_json::Value = serde_json::from_str(&visits).unwrap();
    let days: Vec<_> = visits.as_array().unwrap().iter().map(|visit| (visit["date"].as_str(), visit["state"].as_str())).collect();
    assert_eq!(days, [(Some("2025-09-04"), Some("imported")), (Some("2026-03-03"), Some("imported"))]);
}

#[test]
fn a_file_is_taken_once() {
    let desk = stocked();
    let again = desk.on_store(&["import", "log.csv"]).refused();
    assert!(again.contains("log.csv was taken in already, on "), "{again}");
    assert!(again.contains("nothing was imported"), "{again}");
}

#[test]
fn what_is_odd_is_taken_and_remarked_on() {
    let desk = stocked();
    let text = desk.import(&[(
        "odd.csv",
        "date,appliance,what,amount,unit,result\n2026-04-01,R-1,initial verification test,,,pass\n2026-04-02,R-1,charge,120,lb,\n",
    )]);
    assert!(text.contains("odd.csv, line 2: remark: an initial verification test without a repair before it"), "{text}");
    assert!(text.contains("odd.csv, line 3: remark: more was charged at once"), "{text}");
    assert!(text.contains("imported: 2 entries"), "{text}");
}

#[test]
fn semicolons_bom_and_decimal_comma_are_read() {
    let desk = stocked();
    desk.import(&[("comma.csv", "\u{feff}date;appliance;what;amount;unit\n2026-05-05;R-1;charge;1,5;kg\n")]);
    let assessed = desk.on_store(&["assess", "--on", "2026-05-05", "--format", "json"]).done();
    let assessed: serde_json::Value = serde_json::from_str(&assessed).unwrap();
    // 4.5359237 kg before and 1.5 kg now.
    assert_eq!(assessed["appliances"][0]["this_year"]["charged_kg"], "6.0359237");
}

#[test]
fn one_bad_line_in_two_megabytes_refuses_all_and_is_named() {
    let desk = stocked();
    let mut text = String::from("date,appliance,what,amount,unit,note\n");
    let mut line = 1;
    while text.len() < 2_000_000 {
        text.push_str("2026-06-01,R-1,note,,,looked at the pressures and left it running\n");
        line += 1;
    }
    text.push_str("2026-06-01,R-1,charge,0,lb,\n");
    let bad = line + 1;
    text.push_str("2026-06-02,R-1,note,,,last line\n");
    desk.write("large.csv", &text);
    let refused = desk.on_store(&["import", "large.csv"]).refused();
    assert!(refused.contains("1 line cannot be taken; nothing was imported"), "{refused}");
    assert!(refused.contains(&format!("large.csv, line {bad}, column amount:")), "{refused}");
    let visits = desk.on_store(&["visits", "--from", "2026-06-01"]).done();
    assert_eq!(visits, "no visits\n");
}

#[test]
fn every_bad_line_is_listed() {
    let desk = Desk::new();
    desk.write("sites.csv", super::SITES);
    desk.write(
        "appliances.csv",
        "appliance,site,category,refrigerant\nA,Fish market cold store,comfort cooling,R-2O\nB,Nowhere,shed,R-22\n",
    );
    let refused = desk.on_store(&["import", "sites.csv", "appliances.csv"]).refused();
    assert!(refused.contains("appliances.csv, line 2, column refrigerant:"), "{refused}");
    assert!(refused.contains("appliances.csv, line 3, column category:"), "{refused}");
}

/// A retrofit line that names no gas, or no charge, leaves it as it was.
#[test]
fn what_a_retrofit_does_not_name_stays_as_it_was() {
    let desk = stocked();
    desk.import(&[(
        "retrofit.csv",
        "date,appliance,what,new_refrigerant,new_full_charge,new_unit\n\
         2026-05-02,R-1,retrofit,,40,kg\n2026-05-01,R-1,retrofit,R-448A,,\n2026-05-03,R-1,retrofit,,,\n",
    )]);
    let after = |day: &str| {
        let assessed = desk.on_store(&["assess", "--on", day, "--format", "json"]).done();
        let assessed: serde_json::Value = serde_json::from_str(&assessed).unwrap();
        let appliance = &assessed["appliances"][0];
        (appliance["refrigerant"].as_str().unwrap().to_owned(), appliance["full_charge_kg"].as_str().unwrap().to_owned())
    };
    assert_eq!(after("2026-04-30"), ("R-22".to_owned(), "45.359237".to_owned()));
    assert_eq!(after("2026-05-01"), ("R-448A".to_owned(), "45.359237".to_owned()));
    assert_eq!(after("2026-05-03"), ("R-448A".to_owned(), "40".to_owned()));
}

/// On a new device there is no folder for program data yet.
#[test]
fn without_a_named_store_the_devices_own_is_made() {
    let desk = Desk::new();
    desk.write("sites.csv", super::SITES);
    desk.write("bad.csv", "site,rulebooks\nElsewhere,us-99\n");
    desk.run(&["import", "bad.csv"]).refused();
    assert!(!desk.path("data").exists(), "what is refused makes nothing");
    let text = desk.run(&["import", "sites.csv"]).done();
    assert!(text.contains("imported: 1 site"), "{text}");
    assert_eq!(desk.run(&["assess"]).status, 0);
}

#[test]
fn a_refused_import_makes_no_store_and_takes_none_away() {
    let desk = Desk::new();
    desk.write("bad.csv", "site,rulebooks\nElsewhere,us-99\n");
    desk.on_store(&["import", "bad.csv"]).refused();
    assert!(!desk.path("store.db").exists());
    // A link to a disk that is not there just now.
    #[cfg(unix)]
    {
        std::os::unix::fs::symlink(desk.path("away/store.db"), desk.path("store.db")).unwrap();
        desk.on_store(&["import", "bad.csv"]).refused();
        assert!(desk.path("store.db").is_symlink(), "the link is somebody's");
    }
}

#[test]
fn every_file_that_cannot_be_read_is_named() {
    let desk = Desk::new();
    let refused = desk.on_store(&["import", "one.csv", "two.csv"]).refused();
    assert!(refused.contains("one.csv cannot be read") && refused.contains("two.csv cannot be read"), "{refused}");
    assert!(refused.contains("nothing was imported"), "{refused}");
}
