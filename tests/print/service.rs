//! The service record: every field that the law and `record` name is on paper.

use super::fixtures;
use super::read_back::Paper as Read;
use bubblepoint::ledger::RateMethod;
use bubblepoint::print::{Paper, PrintError, missing_characters, service_record};
use bubblepoint::record::{Counterparty, Finding, Named, ServiceRecord, Way, Work};

fn read(record: &ServiceRecord) -> Read {
    Read::read(&service_record(record, Paper::A4).unwrap())
}

/// The same text without blanks: long values are broken over lines.
fn squeezed(text: &str) -> String {
    text.chars().filter(|c| !c.is_whitespace()).collect()
}

fn assert_all(record: &ServiceRecord, wanted: &[&str]) {
    let text = squeezed(&read(record).text());
    for fact in wanted {
        assert!(text.contains(&squeezed(fact)), "\u{201c}{fact}\u{201d} is not on paper:\n{text}");
    }
}

/// 40 CFR 82.157(l)(2), (3), (5); Regulation (EU) 2024/573 Art. 7(1).
#[test]
fn everything_the_law_asks_for_is_on_paper() {
    assert_all(
        &fixtures::over_trigger(),
        &[
            // Company, people, owner and operator, site, job.
            "Tolk & Daughters Cooling",
            "17 Ropewalk, Skerrow Harbour",
            "RC-4402",
            "Maren Tolk",
            "T-20881",
            "608 universal",
            "Skerrow Market Trust",
            "Fish market cold store",
            "Pier 3, Skerrow Harbour",
            "W-1187",
            // Appliance, place, gas, full charge and how it was determined.
            "R-1",
            "cold room 2, roof plant",
            "HX-88-1402",
            "commercial refrigeration",
            "R-22",
            "100 lb",
            "measurement",
            "96 lb",
            "11 May 1998",
            // Day and time of each entry, parts, what was done.
            "3 Mar 2026",
            "09:12",
            "10:05",
            "compressor, condenser, receiver, liquid line, evaporators 1 to 3",
            "flare cut back and remade, drier changed",
            "liquid line drier, flare nut",
            // The transfer.
            "S-204",
            "reclaimed, liquid",
            "Northmole Gas Works, 4 Kiln Row, Skerrow; batch 7731; certificate RC-118",
            "gross before",
            "53.1 lb",
            "gross after",
            "43.1 lb",
            "10.0 lb",
            "\u{b1} 0.08 lb",
            "Scale 2, K-114, division 0.1 lb",
            "to full charge",
            // Tests.
            "Leak inspection",
            "electronic detector",
            "method, direct",
            "whole appliance",
            "Detector 1, L-2207, checked 12 Jan 2026",
            "leak found",
            "flare at liquid line drier: section shut",
            "All visible and accessible parts of the appliance were inspected.",
            "Initial verification test",
            "soap solution",
            "repair of 3 Mar 2026, 10:05",
            "pass",
            // Open leaks.
            "Open leaks",
            "Schrader valve, evaporator 2",
            "isolated",
            // Leak rate with its inputs.
            "20.28 %",
            "trigger 20 %",
            "over trigger",
            "by less than the weighing error",
            "The duty stands.",
            "\u{b1} 0.17 %",
            "annualizing method",
            "40 CFR 82.157(b)",
            "180, since the charge of 4 Sep 2025",
            "365/18 %",
            "Ozone-depleting refrigerant, full charge at least 50 lb (40 CFR 82.157(a))",
            "40 CFR 82.157(c)(2)(ii)",
            // Duties.
            "follow-up verification test",
            "13 Mar 2026",
            "40 CFR 82.157(e)(2)",
            "met 3 Mar 2026",
            // Weighted amounts.
            "0.2495",
            "8.210",
            "40 CFR 82 subpart A, appendix B",
            "40 CFR 84.64, else IPCC AR4",
            // Readings, cautions.
            "Days are counted from the latest day with any charge before this work",
            "isolated and locked off",
            "EN 378-4; common practice",
            "3 Mar 2026, 09:08",
            // Signatures, hand-over, fingerprint, copy.
            "Ivo Brandeis",
            "to Ivo Brandeis, 3 Mar 2026, 11:25, on paper",
            "3f9a c1d2",
            fixtures::FULL,
            "copy 1",
            "Where local codes",
            "40 CFR part 82 subpart F (us-82f, version 2026-06)",
        ],
    );
}

#[test]
fn what_is_missing_is_said() {
    let mut record = fixtures::clean();
    record.company.certificate.clear();
    record.appliances[0].appliance.full_charge.clear();
    let text = read(&record).text();
    assert_eq!(text.matches("to complete").count(), 2, "{text}");
}

#[test]
fn a_clean_visit_says_so_plainly() {
    let record = fixtures::clean();
    let text = read(&record).text();
    assert!(text.contains("no leak found"), "{text}");
    for absent in ["over trigger", "Open leaks", "leak found:"] {
        assert!(!text.contains(absent), "{absent}");
    }
    let mut open = fixtures::over_trigger();
    open.appliances[0].finding = Finding::LeaksRepaired;
    assert!(read(&open).text().contains("leaks found, all repaired"));
}

#[test]
fn struck_entries_stay_and_are_struck_through() {
    let mut record = fixtures::clean();
    record.appliances[0].entries = fixtures::over_trigger().appliances[0].entries.clone();
    record.appliances[0].entries.retain(|entry| entry.struck);
    assert!(read(&record).text().contains("Struck 09:40: wrong cylinder chosen."));
    let mut unstruck = record.clone();
    for entry in &mut unstruck.appliances[0].entries {
        entry.struck = false;
    }
    let lines = |record: &ServiceRecord| read(record).pages.iter().map(|page| page.strokes.len()).sum::<usize>();
    assert_eq!(lines(&record), lines(&unstruck) + 2, "the words and the figure are struck through");
}

#[test]
fn an_addition_without_a_rate_says_why() {
    assert_all(&fixtures::large(), &["No rate due", "3.2 lb on 5 Mar 2026", "returned for the season", "40 CFR 82.152, seasonal variance"]);
}

#[test]
fn signatures_are_strokes() {
    // The scrawl has strokes of more than twenty points; nothing else on the page has.
    let long = |record: &ServiceRecord| read(record).pages.iter().flat_map(|page| &page.strokes).filter(|points| **points > 20).count();
    assert_eq!(long(&fixtures::over_trigger()), 4, "two signatures of two long strokes");
    assert_eq!(long(&fixtures::refused()), 2, "the technician alone");
    assert_eq!(long(&fixtures::draft()), 0);
}

#[test]
fn why_there_is_no_signature() {
    assert_all(&fixtures::nobody_present(), &["Nobody present to sign."]);
    assert_all(&fixtures::refused(), &["Refused to sign.", fixtures::REASON, "Ivo Brandeis"]);
    assert_all(&fixtures::signs_later(), &["Signs later.", "Ivo Brandeis", "copy 2"]);
    assert_all(&fixtures::draft(), &["Not signed: the visit is still open."]);
    assert_all(&fixtures::imported(), &["Not signed: history read from a file."]);
}

#[test]
fn drafts_are_stamped_on_every_page() {
    let mut record = fixtures::large();
    record.state = fixtures::draft().state;
    record.fingerprint = None;
    let read = read(&record);
    assert!(read.pages.len() > 2);
    for page in &read.pages {
        assert!(page.runs.iter().any(|run| run.text == "draft"), "{}", page.text());
        assert!(page.text().contains("Demonstration:"));
    }
    assert!(!self::read(&fixtures::over_trigger()).text().contains("draft"));
}

#[test]
fn imported_nets_are_marked() {
    let record = fixtures::imported();
    assert_all(&record, &["net as imported", "weighing error unknown", "log.csv, line 14", "imported history"]);
    let text = read(&record).text();
    assert!(!text.contains("gross before"), "there were no readings to print");
}

#[test]
fn a_rate_says_whether_it_is_of_this_visit_and_what_it_is_a_share_of() {
    let mut record = fixtures::over_trigger();
    let text = read(&record).text();
    assert!(text.contains("% of full charge a year") && !text.contains("Latest leak rate"), "{text}");
    record.appliances[0].leak_rates[0].on = fixtures::day("2026-02-11");
    record.appliances[0].leak_rates[0].method = RateMethod::RollingAverage;
    let text = read(&record).text();
    assert!(text.contains("% of full charge in the period") && !text.contains("a year"), "{text}");
    assert!(text.contains("Latest leak rate; no addition of this visit asked for one"), "{text}");
}

#[test]
fn the_one_job_of_a_record_is_said_once() {
    let mut record = fixtures::clean();
    record.jobs = vec!["W-1187".into()];
    record.appliances[0].entries[0].job = "W-1187".into();
    assert_eq!(read(&record).text().matches("W-1187").count(), 1);
    record.jobs.push("W-1188".into());
    assert_eq!(read(&record).text().matches("W-1187").count(), 2, "of two jobs each entry says its own");
}

/// Whoever reads the first page alone knows that the record was corrected.
#[test]
fn corrections_stand_on_the_first_page() {
    let mut record = fixtures::large();
    record.remarks = vec!["The charge of 3 Mar 2026, 09:41 is corrected by record 91b2 77aa: misread.".into()];
    let paper = read(&record);
    assert!(paper.pages.len() > 1 && paper.pages[0].text().contains("is corrected by record 91b2 77aa: misread."));
}

/// A plate's strip with no row under it says nothing.
#[test]
fn cautions_are_not_parted_from_their_heading() {
    for lines in 0..40 {
        let mut record = fixtures::clean();
        record.cautions = fixtures::over_trigger().cautions;
        record.appliances[0].entries[0].note = "One more line. ".repeat(lines * 6);
        for paper in [Paper::A4, Paper::Letter] {
            let read = Read::read(&service_record(&record, paper).unwrap());
            let page = read.pages.iter().find(|page| page.text().contains("Cautions acknowledged")).unwrap();
            for caution in &record.cautions {
                assert!(page.text().contains(&caution.at), "{lines} on {paper:?}: {}", page.text());
            }
        }
    }
}

/// What is known by its net alone says why.
#[test]
fn nets_say_where_they_come_from() {
    let mut record = fixtures::imported();
    let charge = record.appliances[0].entries[0].clone();
    let with = |cylinder: &str, corrects: &str| {
        let mut entry = charge.clone();
        entry.imported_from.clear();
        entry.corrects = corrects.to_owned();
        if let Work::Transfer(transfer) = &mut entry.work {
            cylinder.clone_into(&mut transfer.cylinder);
        }
        entry
    };
    let told = |entry| {
        record.appliances[0].entries = vec![entry];
        read(&record).text()
    };
    let mut told = told;
    for (entry, words) in [
        (with("S-204", "charge of 3 Mar 2026, record 3f9a c1d2: misread"), "net as corrected; weighing error unknown"),
        (with("", ""), "net as the maker states it; weighing error unknown"),
        (with("S-204", ""), "net as stated; weighing error unknown"),
    ] {
        let text = told(entry);
        assert!(text.contains(words) && !text.contains("as imported"), "{words}: {text}");
    }
}

#[test]
fn levels_and_readings_are_on_paper() {
    let mut record = fixtures::clean();
    let mut recovery = fixtures::charge("10:00", "10.0", "43.1 lb", "53.1 lb");
    if let Work::Transfer(transfer) = &mut recovery.work {
        transfer.way = Way::Recover;
        "10 in Hg vacuum (40 CFR 82.156, Table 1: high-pressure, 200 lb or more)".clone_into(&mut transfer.level_required);
        "12 in Hg vacuum".clone_into(&mut transfer.level_reached);
    }
    let named = |caption: &str, value: &str| Named { caption: caption.into(), value: value.into() };
    let hold = Work::Other {
        name: "pressure hold".into(),
        text: "kept as read, not judged".into(),
        figure: String::new(),
        fields: vec![named("readings, gauge pressure", "10:12 10.45 bar; 10:42 10.40 bar"), named("gauge", "Gauge 1, G-17")],
    };
    record.appliances[0].entries = vec![recovery, fixtures::entry("10:12", hold)];
    assert_all(
        &record,
        &[
            "level to reach",
            "10 in Hg vacuum (40 CFR 82.156, Table 1: high-pressure, 200 lb or more)",
            "level reached",
            "12 in Hg vacuum",
            "Pressure hold",
            "kept as read, not judged",
            "readings, gauge pressure",
            "10:12 10.45 bar; 10:42 10.40 bar",
            "Gauge 1, G-17",
        ],
    );
}

#[test]
fn names_of_many_tongues_read_back_right() {
    let record = fixtures::many_tongues();
    assert_all(&record, &[&record.company.name, &record.site.name, &record.site.owner, &record.people[0].name]);
}

#[test]
fn long_names_stand_in_full() {
    let record = fixtures::long_words();
    let mut wanted = vec![&record.company.name, &record.company.address, &record.site.name, &record.site.address, &record.site.owner];
    wanted.extend([&record.people[0].name, &record.appliances[0].appliance.name, &record.appliances[0].appliance.serial]);
    wanted.extend(&record.jobs);
    let wanted: Vec<&str> = wanted.into_iter().map(String::as_str).collect();
    assert_all(&record, &wanted);
}

#[test]
fn a_signed_name_that_cannot_be_printed_is_refused_by_name() {
    let mut record = fixtures::clean();
    record.technician.as_mut().unwrap().name = "\u{738B} Wei".into();
    let refusal = service_record(&record, Paper::A4).unwrap_err();
    assert!(matches!(&refusal, PrintError::Character { character: '\u{738B}', .. }), "{refusal:?}");
    let said = refusal.to_string();
    assert!(said.contains("the signing technician\u{2019}s name") && said.contains("U+738B"), "{said}");
    let mut record = fixtures::refused();
    record.counterparty = Some(Counterparty::SignsLater { name: "\u{5D0}".into() });
    assert!(service_record(&record, Paper::A4).is_err());
    let mut record = fixtures::clean();
    record.site.address = "\u{1F41F} pier".into();
    assert!(service_record(&record, Paper::A4).is_err());
    assert_eq!(missing_characters("a\u{738B}b\u{738B}\u{1F41F}").unwrap(), ['\u{738B}', '\u{1F41F}']);
}

#[test]
fn elsewhere_a_missing_character_is_printed_as_its_number() {
    let mut record = fixtures::clean();
    record.appliances[0].entries[0].note = "valve \u{6C34} tight".into();
    if let Work::Test(test) = &mut record.appliances[0].entries[0].work {
        test.method = "soap \u{1F9FC}".into();
    }
    assert_all(&record, &["valve [U+6C34] tight", "soap [U+1F9FC]"]);
}

/// However long a record gets, nothing of it is lost at the end of a page.
#[test]
fn every_entry_survives_the_page_breaks() {
    let mut record = fixtures::large();
    let part = &mut record.appliances[1];
    let model = part.entries[0].clone();
    part.entries = (0..60)
        .map(|index| {
            let mut entry = model.clone();
            entry.note = format!("entry number {index} of sixty. {}", "Words. ".repeat(index * 3));
            entry
        })
        .collect();
    for paper in [Paper::A4, Paper::Letter] {
        let text = Read::read(&service_record(&record, paper).unwrap()).text();
        for index in 0..60 {
            assert!(text.contains(&format!("entry number {index} of sixty")), "{index}");
        }
    }
}

/// One entry longer than a page goes on over the next.
#[test]
fn an_endless_note_does_not_run_off_the_page() {
    let mut record = fixtures::clean();
    record.appliances[0].entries[0].note = (0..900).map(|index| format!("word{index} ")).collect();
    let read = read(&record);
    let text = read.text();
    for index in 0..900 {
        assert!(text.contains(&format!("word{index}")), "{index}");
    }
    for page in &read.pages {
        for run in &page.runs {
            assert!(run.y > 12.0, "\u{201c}{}\u{201d} at {}", run.text, run.y);
        }
    }
}
