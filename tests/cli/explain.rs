//! `assess --explain`: the article, the facts, the sum worked through, the
//! reading taken; and for each addition that asked for no rate, why not.

use super::Desk;
use serde_json::Value;

const SITES: &str = "site,rulebooks,time_zone\nHall,us-82f us-84c,UTC\nDock,gb-517,UTC\n";
const APPLIANCES: &str = "appliance,site,category,refrigerant,full_charge,unit,equipment,installed_on\n\
    C-1,Hall,commercial refrigeration,R-408A,220,lb,,\n\
    G-1,Dock,commercial refrigeration,R-404A,200,kg,refrigeration,2021-02-03\n";
const LOG: &str = "date,appliance,job,what,amount,unit,purpose\n\
    2025-10-01,C-1,,recover,10,lb,seasonal\n2025-12-29,C-1,,charge,6,lb,\n2026-04-01,C-1,,charge,9.5,lb,seasonal\n\
    2026-05-12,C-1,J1,recover,180,lb,\n2026-05-14,C-1,J1,charge,220,lb,replacement\n2026-05-16,C-1,,charge,4,lb,same leak\n";

fn desk() -> Desk {
    let desk = Desk::new();
    desk.import(&[("s.csv", SITES), ("a.csv", APPLIANCES), ("l.csv", LOG)]);
    desk
}

#[track_caller]
fn says(text: &str, parts: &[&str]) {
    for part in parts {
        assert!(text.contains(part), "{part}\n--- is not in\n{text}");
    }
}

#[test]
fn a_rate_is_worked_through_with_its_readings() {
    let text = desk().on_store(&["assess", "--on", "2026-05-16", "--appliance", "C-1", "--explain"]).done();
    says(
        &text,
        &[
            // 40 lb in 43 days since the seasonal return.
            "us-82f: 2026-05-14 annualizing: 365 × 100 × 18.1436948 kg / (99.7903214 kg × 43 days) = ",
            "trigger 20 % (40 CFR 82.157(c)(2))",
            "us-82f: 2026-05-14 81.6466266 kg that was recovered in the same work was put back and is not added (40 CFR 82.152, leak rate)",
            "us-82f: 2026-05-16 2 additions for the same leak are one rate; its days run to the last of them",
            "us-84c: 2026-05-14 first calculation: 365 days (40 CFR 84.106(b)(1))",
            "2026-04-01 charge of 4.309127515 kg asked for no rate: seasonal; returned for the season; as much was recovered before",
            "ozone-depleting parts count 0",
            "us-82f: kept for 3 years: records",
            "us-82f: one method is used for all appliances of a facility (40 CFR 82.152, leak rate)",
            "where an industrial process shutdown is needed (40 CFR 82.157(d)(1))",
        ],
    );
}

#[test]
fn an_appliance_is_told_what_else_binds_it() {
    let text = desk().on_store(&["assess", "--on", "2026-12-01", "--appliance", "G-1", "--explain"]).done();
    says(
        &text,
        &[
            // 200 kg × 3,921.6.
            "784.320 t of CO₂ equivalent, at least 500 t (517/2014 Art. 4(3)(c))",
            "gb-517: second-hand: figures from the regulators' guidance",
            "gb-517: a leakage detection system that alerts the operator or a service company is there; none is declared in the register",
            "gb-517: kept for 5 years: records (517/2014 Art. 6(2))",
            "reclaimed or recycled gas does to 2029-12-31 (Regulation (EU) No 517/2014 Art. 13(3) as kept in Great Britain)",
        ],
    );
}

/// Without `--explain` nothing of it stands in the answer.
#[test]
fn the_answer_is_the_contract_s_unless_asked() {
    let desk = desk();
    let of = |more: &[&str]| -> Value {
        let arguments = [&["assess", "--on", "2026-05-16", "--format", "json"], more].concat();
        serde_json::from_str(&desk.on_store(&arguments).done()).unwrap()
    };
    let (plain, mut explained) = (of(&[]), of(&["--explain"]));
    for appliance in explained["appliances"].as_array_mut().unwrap() {
        let lines = appliance.as_object_mut().unwrap().remove("explain").unwrap();
        assert!(!lines.as_array().unwrap().is_empty());
    }
    assert_eq!(plain, explained);
}
