//! What a service record says of the law that it was judged by.

use crate::support::office::taken;
use bubblepoint::store::VisitFilter;

/// The readings told on the record of the last visit there is.
fn on_paper(sites: &str, appliances: &str, log: &str) -> Vec<String> {
    let office = taken(sites, appliances, log);
    let visit = office.app.store().visits(&VisitFilter::default()).unwrap().pop().unwrap();
    let record = office.app.service_record(visit.id).unwrap();
    record.appliances[0].readings.iter().map(|notice| format!("{} ({})", notice.text, notice.source)).collect()
}

#[test]
fn a_text_that_was_read_second_hand_says_so_on_paper() {
    let told = on_paper(
        "site,rulebooks\nDock,gb-517",
        "appliance,site,category,refrigerant,full_charge,unit\nG-1,Dock,commercial refrigeration,R-404A,20,kg",
        "date,appliance,what,result\n2026-03-01,G-1,leak inspection,no leak",
    );
    let why = "at least 50 t (517/2014 Art. 4(3)(b)); gb-517: second-hand: figures from the regulators' guidance.";
    assert!(told.iter().any(|line| line.contains(why)), "{told:#?}");
    assert!(told.contains(&"Kept for 5 years: records. (517/2014 Art. 6(2))".to_owned()), "{told:#?}");
}

#[test]
fn the_readings_that_a_rate_rests_on_stand_on_paper() {
    let told = on_paper(
        "site,rulebooks\nHall,us-82f",
        "appliance,site,category,refrigerant,full_charge,unit\nC-1,Hall,commercial refrigeration,R-22,100,lb",
        "date,appliance,what,amount,unit,purpose\n2025-03-02,C-1,charge,1,lb,\n2026-03-02,C-1,recover,30,lb,\n2026-03-02,C-1,charge,50,lb,replacement",
    );
    assert!(
        told[0].starts_with("Days are counted from the latest day with any charge before this work, and never more than 365."),
        "{told:#?}"
    );
    assert!(told.contains(
        &"13.6077711 kg that was recovered in the same work was put back and is not added. (40 CFR 82.152, leak rate)".to_owned()
    ));
    // 20 lb of 100 lb after 365 days.
    assert!(told.contains(
        &"At the trigger is not over it, and not below it: it asks for no repair and proves none. (40 CFR 82.157(c)(2))".to_owned()
    ));
}
