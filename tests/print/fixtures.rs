//! Invented records: people, companies and places of one harbour town.

use bubblepoint::ledger::{Ink, RateMethod, WeighingMode};
use bubblepoint::quantity::{Mass, MassUnit, Ratio};
use bubblepoint::record::{
    AccountLine, AnnualAccount, ApplianceAccount, AppliancePart, ApplianceText, Caution, Counterparty, DutyCounts, DutyFacts, DutyStep,
    DutyTally, EntryFacts, Finding, Fingerprint, GasAccount, LeakRate, NoRate, Notice, OpenLeak, Party, PersonAtWork, RateInput,
    RecordState, RepairFacts, Rulebook, ServiceRecord, SignedBy, SiteText, TestFacts, TransferFacts, Verdict, Way, WeightedAmount,
    WeightedLoss, Work,
};
use chrono::NaiveDate;

pub const FULL: &str = "3f9ac1d2e45b77a0c61f8e02d9b4537718aa0fc2e6d37b915c4e20fd86b1a3c9";

pub fn day(text: &str) -> NaiveDate {
    text.parse().unwrap()
}

pub fn kg(text: &str) -> Mass {
    Mass::parse(text, MassUnit::Kilogram).unwrap()
}

/// A scrawl: `seed` bends it.
pub fn scrawl(seed: i32) -> Ink {
    let stroke = |from: i32, to: i32, lift: i32| {
        (from..to)
            .step_by(9)
            .map(|x| {
                let wave = ((x + seed * 37) as f64 / 70.0).sin() * 210.0 + ((x * (2 + seed % 3)) as f64 / 190.0).cos() * 130.0;
                (x, 520 + lift + wave as i32)
            })
            .collect::<Vec<_>>()
    };
    Ink(vec![stroke(320, 1_500, 0), stroke(1_560, 2_500, 60), vec![(2_600, 300)]])
}

pub fn signed(name: &str, seed: i32) -> SignedBy {
    SignedBy { name: name.into(), ink: scrawl(seed) }
}

fn us_82() -> Rulebook {
    Rulebook { id: "us-82f".into(), name: "40 CFR part 82 subpart F".into(), version: "2026-06".into() }
}

pub fn charge(at: &str, net: &str, before: &str, after: &str) -> EntryFacts {
    entry(
        at,
        Work::Transfer(Box::new(TransferFacts {
            way: Way::Charge,
            refrigerant: "R-22".into(),
            purpose: "leak".into(),
            cylinder: "S-204".into(),
            gas_status: "reclaimed".into(),
            gas_source: "Northmole Gas Works, 4 Kiln Row, Skerrow; batch 7731; certificate RC-118".into(),
            phase: "liquid".into(),
            weighing: WeighingMode::Gross,
            before: before.into(),
            after: after.into(),
            scale: "Scale 2, K-114, division 0.1 lb".into(),
            net: format!("{net} lb"),
            net_mass: Mass::parse(net, MassUnit::Pound).unwrap(),
            error: "\u{b1} 0.08 lb".into(),
            hoses: "emptied".into(),
            fill: "to full charge".into(),
            level_required: String::new(),
            level_reached: String::new(),
            weighing_gap: String::new(),
        })),
    )
}

pub fn entry(at: &str, work: Work) -> EntryFacts {
    EntryFacts {
        on: day("2026-03-03"),
        at: at.into(),
        person: "Maren Tolk".into(),
        job: String::new(),
        work,
        parts: String::new(),
        note: String::new(),
        reason: String::new(),
        corrects: String::new(),
        struck: false,
        struck_because: String::new(),
        imported_from: String::new(),
    }
}

pub fn inspection(at: &str, leaks: &[&str]) -> EntryFacts {
    let mut entry = entry(
        at,
        Work::Test(Box::new(TestFacts {
            kind: "leak inspection".into(),
            method: "electronic detector".into(),
            direct: Some(true),
            scope: "whole appliance".into(),
            instrument: "Detector 1, L-2207, checked 12 Jan 2026".into(),
            result: if leaks.is_empty() { "no leak".into() } else { "leak found".into() },
            leaks: leaks.iter().map(|leak| (*leak).to_owned()).collect(),
            certification: "All visible and accessible parts of the appliance were inspected.".into(),
            ..TestFacts::default()
        })),
    );
    entry.parts = "compressor, condenser, receiver, liquid line, evaporators 1 to 3".into();
    entry
}

pub fn rate(percent: Ratio, verdict: Verdict, within: bool) -> LeakRate {
    LeakRate {
        source: "40 CFR 82.157(b)".into(),
        applies_because: "Ozone-depleting refrigerant, full charge at least 50 lb (40 CFR 82.157(a))".into(),
        on: day("2026-03-03"),
        method: RateMethod::Annualizing,
        percent,
        trigger: Ratio::from_integer(20),
        trigger_source: "40 CFR 82.157(c)(2)(ii)".into(),
        band: Some(Ratio::new(17, 100)),
        verdict,
        within_weighing_error: within,
        inputs: vec![
            RateInput { caption: "added".into(), value: "10.0 lb".into(), from: String::new() },
            RateInput { caption: "full charge".into(), value: "100 lb".into(), from: String::new() },
            RateInput { caption: "days".into(), value: "180".into(), from: "since the charge of 4 Sep 2025".into() },
        ],
        working: "10 lb \u{f7} 100 lb \u{d7} 365 \u{f7} 180 \u{d7} 100 % = 365/18 % = 20.28 %".into(),
    }
}

pub fn duty(name: &str, source: &str, step: DutyStep, due: &str, state: &str) -> DutyFacts {
    DutyFacts {
        duty: name.into(),
        source: source.into(),
        step,
        from: day("2026-03-03"),
        due: due.parse().ok(),
        due_words: if due.is_empty() { "10 days after the initial test".into() } else { String::new() },
        met_on: (step == DutyStep::Met).then(|| day("2026-03-03")),
        state: state.into(),
    }
}

pub fn appliance_r1() -> ApplianceText {
    ApplianceText {
        name: "R-1".into(),
        place: "cold room 2, roof plant".into(),
        description: "low-temperature rack with three evaporators".into(),
        serial: "HX-88-1402".into(),
        assembly: String::new(),
        category: "commercial refrigeration".into(),
        equipment: String::new(),
        refrigerant: "R-22".into(),
        refrigerant_facts: "HCFC, class A1, ODP 0.055, GWP 1810".into(),
        full_charge: "100 lb".into(),
        full_charge_method: "measurement".into(),
        charged_at_installation: "96 lb".into(),
        installed_on: Some(day("1998-05-11")),
        declared: vec![],
    }
}

/// A closed visit with a rate over its trigger by less than the weighing error.
pub fn over_trigger() -> ServiceRecord {
    let mut struck = charge("09:38", "10.0", "53.1 lb", "43.1 lb");
    struck.struck = true;
    struck.struck_because = "Struck 09:40: wrong cylinder chosen.".into();
    let mut repair = entry(
        "10:05",
        Work::Repair(RepairFacts {
            place: "flare at liquid line drier".into(),
            done: "flare cut back and remade, drier changed".into(),
            temporary: false,
        }),
    );
    repair.parts = "liquid line drier, flare nut".into();
    let initial = entry(
        "10:40",
        Work::Test(Box::new(TestFacts {
            kind: "initial verification test".into(),
            method: "soap solution".into(),
            direct: Some(true),
            scope: "part".into(),
            place: "flare at liquid line drier".into(),
            result: "pass".into(),
            of_repair: "repair of 3 Mar 2026, 10:05".into(),
            ..TestFacts::default()
        })),
    );
    ServiceRecord {
        state: RecordState::Closed { on: day("2026-03-03"), at: "11:20".into() },
        fingerprint: Some(Fingerprint { full: FULL.into() }),
        copy: 1,
        demonstration: false,
        program: "bubblepoint 0.1.0".into(),
        rulebooks: vec![us_82()],
        company: Party {
            name: "Tolk & Daughters Cooling".into(),
            address: "17 Ropewalk, Skerrow Harbour".into(),
            certificate: "RC-4402".into(),
        },
        site: SiteText {
            name: "Fish market cold store".into(),
            address: "Pier 3, Skerrow Harbour".into(),
            owner: "Skerrow Market Trust".into(),
            operator: "Skerrow Market Trust".into(),
            time_zone: "America/New_York".into(),
        },
        jobs: vec!["W-1187".into()],
        first_day: day("2026-03-03"),
        last_day: day("2026-03-03"),
        people: vec![PersonAtWork {
            name: "Maren Tolk".into(),
            certificate: "T-20881".into(),
            certificate_kind: "608 universal".into(),
            certificate_validity: "no end".into(),
            ..PersonAtWork::default()
        }],
        appliances: vec![AppliancePart {
            appliance: appliance_r1(),
            entries: vec![
                inspection("09:12", &["flare at liquid line drier: section shut", "Schrader valve, evaporator 2: isolated"]),
                struck,
                charge("09:41", "10.0", "53.1 lb", "43.1 lb"),
                repair,
                initial,
            ],
            finding: Finding::LeaksOpen,
            leak_rates: vec![rate(Ratio::new(365, 18), Verdict::Over, true)],
            no_rates: vec![],
            open_leaks: vec![OpenLeak { place: "Schrader valve, evaporator 2".into(), since: day("2026-03-03"), state: "isolated".into() }],
            duties: vec![
                duty("repair", "40 CFR 82.157(d)", DutyStep::Met, "2026-04-02", "met"),
                duty("initial verification test", "40 CFR 82.157(e)(1)", DutyStep::Met, "2026-04-02", "met"),
                duty("follow-up verification test", "40 CFR 82.157(e)(2)", DutyStep::Started, "2026-03-13", "open"),
                duty("leak inspection", "40 CFR 82.157(g)", DutyStep::Started, "2026-12-31", "open"),
            ],
            amounts: vec![
                weighted("charged", "4.5359237", "10.0 lb"),
                weighted("lost, as added for the leak rate", "4.5359237", "10.0 lb"),
                weighted("full charge", "45.359237", "100 lb"),
            ],
            readings: vec![Notice {
                text: "Days are counted from the latest day with any charge before this work, and never more than 365.".into(),
                source: "40 CFR 82.152, leak rate, annualizing method, step 2".into(),
            }],
        }],
        cautions: vec![
            Caution {
                text: "Someone knows where you are; the way out is free; the appliance is isolated and locked off.".into(),
                basis: "EN 378-4; common practice".into(),
                at: "3 Mar 2026, 09:08".into(),
                person: "Maren Tolk".into(),
            },
            Caution {
                text: "Flame near halogenated gas gives hydrogen fluoride and phosgene: gas out first, nitrogen through.".into(),
                basis: "common practice".into(),
                at: "3 Mar 2026, 09:58".into(),
                person: "Maren Tolk".into(),
            },
        ],
        technician: Some(signed("Maren Tolk", 1)),
        counterparty: Some(Counterparty::Signed { signed: signed("Ivo Brandeis", 4) }),
        handed_over: "to Ivo Brandeis, 3 Mar 2026, 11:25, on paper".into(),
        remarks: vec![],
    }
}

pub fn weighted(what: &str, mass: &str, written: &str) -> WeightedAmount {
    let mass = kg(mass);
    WeightedAmount {
        what: what.into(),
        mass,
        mass_written: written.into(),
        odp_kg: Some(mass.kg() * Ratio::new(55, 1000)),
        co2e_t: Some(mass.kg() * Ratio::new(1810, 1000)),
        odp_table: "40 CFR 82 subpart A, appendix B".into(),
        gwp_table: "40 CFR 84.64, else IPCC AR4".into(),
    }
}

/// A closed visit in which nothing leaked and no gas moved.
pub fn clean() -> ServiceRecord {
    let mut record = over_trigger();
    record.jobs.clear();
    record.appliances.truncate(1);
    let part = &mut record.appliances[0];
    part.entries = vec![inspection("14:05", &[])];
    part.finding = Finding::NoLeak;
    part.leak_rates.clear();
    part.open_leaks.clear();
    part.amounts = vec![weighted("full charge", "45.359237", "100 lb")];
    part.readings.clear();
    part.duties = vec![duty("leak inspection", "40 CFR 82.157(g)", DutyStep::Met, "2026-12-31", "met")];
    record.cautions.truncate(1);
    record
}

/// Nobody there to sign.
pub fn nobody_present() -> ServiceRecord {
    ServiceRecord { counterparty: Some(Counterparty::NobodyPresent), handed_over: String::new(), ..clean() }
}

pub const REASON: &str = "Disputes the weight of the second charge and wants the cylinder weighed again at the shop before signing";

pub fn refused() -> ServiceRecord {
    ServiceRecord { counterparty: Some(Counterparty::Refused { name: "Ivo Brandeis".into(), reason: REASON.into() }), ..over_trigger() }
}

pub fn signs_later() -> ServiceRecord {
    ServiceRecord { counterparty: Some(Counterparty::SignsLater { name: "Ivo Brandeis".into() }), copy: 2, ..clean() }
}

pub fn draft() -> ServiceRecord {
    ServiceRecord {
        state: RecordState::Open,
        fingerprint: None,
        technician: None,
        counterparty: None,
        handed_over: String::new(),
        ..over_trigger()
    }
}

/// History from a file: the nets alone.
pub fn imported() -> ServiceRecord {
    let mut record = over_trigger();
    record.state = RecordState::Imported { from: "log.csv".into() };
    record.fingerprint = None;
    record.technician = None;
    record.counterparty = None;
    record.handed_over = String::new();
    record.cautions.clear();
    let part = &mut record.appliances[0];
    part.entries.retain(|entry| matches!(entry.work, Work::Transfer(_)) && !entry.struck);
    for entry in &mut part.entries {
        entry.at = String::new();
        entry.imported_from = "log.csv, line 14".into();
        if let Work::Transfer(transfer) = &mut entry.work {
            transfer.weighing = WeighingMode::NetOnly;
            for text in [
                &mut transfer.before,
                &mut transfer.after,
                &mut transfer.error,
                &mut transfer.cylinder,
                &mut transfer.scale,
                &mut transfer.hoses,
                &mut transfer.fill,
                &mut transfer.gas_status,
                &mut transfer.gas_source,
                &mut transfer.phase,
            ] {
                text.clear();
            }
        }
    }
    part.finding = Finding::NotTested;
    part.open_leaks.clear();
    part.leak_rates[0].band = None;
    part.leak_rates[0].within_weighing_error = false;
    record
}

/// Three appliances, many transfers, two people, several days, a seasonal addition.
pub fn large() -> ServiceRecord {
    let mut record = over_trigger();
    record.last_day = day("2026-03-05");
    record.demonstration = true;
    record.people.push(PersonAtWork {
        name: "Bartholomew Featheringstone-Oyelaran of the Outer Breakwater".into(),
        certificate: "T-31107-2024-EXT".into(),
        certificate_kind: "608 type II".into(),
        certificate_validity: "to 30 Jun 2028".into(),
        company: "Breakwater Refrigeration Cooperative".into(),
        company_certificate: "RC-9917".into(),
    });
    let mut second = record.appliances[0].clone();
    second.appliance.name = "Rack 2 \u{2013} supermarket, medium temperature, north hall".into();
    second.appliance.refrigerant = "R-448A".into();
    second.appliance.full_charge = "310.5 kg".into();
    second.appliance.equipment = "refrigeration".into();
    second.appliance.assembly = "supermarket plant A".into();
    second.appliance.declared = vec!["leakage detection system".into(), "residential or light commercial air conditioning".into()];
    second.entries = (0..14)
        .map(|index| {
            let mut entry = charge(&format!("{:02}:{:02}", 8 + index / 2, 5 + 30 * (index % 2)), "2.5", "40.0 lb", "37.5 lb");
            entry.on = day(if index < 7 { "2026-03-04" } else { "2026-03-05" });
            entry.person = record.people[1].name.clone();
            entry
        })
        .collect();
    let mut far = rate(Ratio::new(1745, 10), Verdict::Over, false);
    far.trigger = Ratio::from_integer(30);
    second.leak_rates = vec![far, {
        let mut at = rate(Ratio::from_integer(20), Verdict::At, true);
        at.source = "40 CFR 84.106(b)".into();
        at.method = RateMethod::RollingAverage;
        at
    }];
    second.finding = Finding::LeaksRepaired;
    second.open_leaks.clear();
    let mut third = record.appliances[0].clone();
    third.appliance.name = "HP-3".into();
    third.appliance.full_charge = String::new();
    third.appliance.full_charge_method = String::new();
    third.entries = vec![inspection("15:30", &[]), charge("16:10", "3.2", "20.0 lb", "16.8 lb")];
    third.finding = Finding::NoLeak;
    third.leak_rates.clear();
    third.no_rates = vec![NoRate {
        on: day("2026-03-05"),
        amount: "3.2 lb".into(),
        because: "returned for the season; as much was recovered on 4 Oct 2025".into(),
        source: "40 CFR 82.152, seasonal variance".into(),
    }];
    third.duties.clear();
    third.open_leaks.clear();
    record.appliances.push(second);
    record.appliances.push(third);
    record
}

/// Names from the whole of the font's reach.
pub fn many_tongues() -> ServiceRecord {
    let mut record = clean();
    record.company.name = "Chłodnictwo Gąsiorek i Żółć, sp. z o.o.".into();
    record.site.name = "Ψυχρή αποθήκη Λιμένος".into();
    record.site.owner = "Ђорђе Щербак та Ївга Ґалаґан".into();
    record.people[0].name = "Nguyễn Thị Ánh Đặng".into();
    record.technician = Some(signed("Nguyễn Thị Ánh Đặng", 2));
    record
}

/// Everything that can be long is.
pub fn long_words() -> ServiceRecord {
    let long =
        |what: &str| format!("{what} of the Outer Breakwater and Lesser Fish Quay Amalgamated Cold Stores, formerly Brandeis & Widow");
    let mut record = over_trigger();
    record.company.name = long("Company");
    record.company.address = long("17 Ropewalk");
    record.site.name = long("Cold store");
    record.site.address = long("Pier 3");
    record.site.owner = long("Trust");
    record.site.operator = long("Operators");
    record.jobs = (0..12).map(|index| format!("W-11{index:02}/breakwater")).collect();
    record.people[0].name = long("Maren Tolk");
    let part = &mut record.appliances[0];
    part.appliance.name = long("Rack");
    part.appliance.place = long("Plant room");
    part.appliance.description = long("Rack");
    part.appliance.serial = "HX".repeat(90);
    for entry in &mut part.entries {
        entry.person = long("Maren Tolk");
        entry.reason = long("Because");
        entry.corrects = long("Record 3f9a c1d2, charge of 09:41");
        if let Work::Transfer(transfer) = &mut entry.work {
            transfer.net = "12 lb 4.5 oz, read twice and agreed with the foreman of the quay".into();
            transfer.cylinder = long("S-204");
            transfer.purpose = "replaces gas recovered in this job before the repair of the flare at the liquid line drier".into();
        }
    }
    for duty in &mut part.duties {
        duty.duty = "leakage detection system check of the whole assembly".into();
        duty.state = "suspended while mothballed".into();
    }
    part.leak_rates[0].applies_because = long("Because the appliance");
    record.counterparty = Some(Counterparty::Refused { name: long("Ivo Brandeis"), reason: REASON.repeat(4) });
    record.handed_over = long("to the harbour master");
    record
}

pub fn account() -> AnnualAccount {
    let line = |opening: &str, bought: &str, charged: &str, recovered: &str, sent: &str, lost: &str, closing: &str| AccountLine {
        opening: Some(kg(opening)),
        bought: Some(kg(bought)),
        charged: kg(charged),
        recovered: kg(recovered),
        sent_away: Some(kg(sent)),
        lost: kg(lost),
        closing: Some(kg(closing)),
    };
    let loss = |lost: &str, odp: i128, gwp: i128| WeightedLoss {
        odp_kg: Some(kg(lost).kg() * Ratio::new(odp, 1000)),
        co2e_t: Some(kg(lost).kg() * Ratio::new(gwp, 1000)),
        odp_table: "40 CFR 82 subpart A, appendices A and B".into(),
        gwp_table: "40 CFR 84.64, else IPCC AR4".into(),
    };
    let gas = |name: &str, line: AccountLine, loss: WeightedLoss| GasAccount { refrigerant: name.into(), line, loss };
    let appliance =
        |site: &str, name: &str, gas: &str, full: &str, charged: &str, lost: &str, odp: i128, gwp: i128, remark: &str| ApplianceAccount {
            site: site.into(),
            appliance: name.into(),
            owner: "Skerrow Market Trust".into(),
            refrigerant: gas.into(),
            line: AccountLine {
                opening: Some(kg(full)),
                charged: kg(charged),
                lost: kg(lost),
                closing: Some(kg(full)),
                ..AccountLine::default()
            },
            loss: loss(lost, odp, gwp),
            remark: remark.into(),
        };
    let tally = |duty: &str, in_time, late, not_done, open| DutyTally {
        duty: duty.into(),
        rulebook: "us-82f".into(),
        counts: DutyCounts { in_time, late, not_done, open },
    };
    AnnualAccount {
        year: 2026,
        to: day("2026-12-31"),
        owner: Some("Skerrow Market Trust".into()),
        company: over_trigger().company,
        demonstration: false,
        program: "bubblepoint 0.1.0".into(),
        unit: MassUnit::Kilogram,
        gases: vec![
            gas("R-22", line("20", "30", "12.5", "4", "4", "9.0718474", "37.4"), loss("9.0718474", 55, 1810)),
            gas("R-401A", line("0", "10.9", "6.2", "0", "0", "6.2", "4.7"), loss("6.2", 37, 1182)),
            gas(
                "R-448A",
                line("45.36", "136.08", "88.125", "12.3", "0", "31.75", "105.615"),
                WeightedLoss { co2e_t: None, ..loss("31.75", 0, 0) },
            ),
        ],
        appliances: vec![
            appliance("Fish market cold store", "R-1", "R-22", "45.359237", "9.0718474", "9.0718474", 55, 1810, ""),
            appliance("Fish market cold store", "R-2", "R-401A", "31.2", "6.2", "6.2", 37, 1182, ""),
            appliance("Ice rink", "CH-1", "R-448A", "310.5", "61.75", "31.75", 0, 1273, "assumed full at retirement"),
            appliance("Civic archive", "AC-4", "R-448A", "18.4", "0", "0", 0, 1273, ""),
        ],
        duties: vec![
            tally("repair", 4, 1, 0, 1),
            tally("initial verification test", 4, 1, 0, 1),
            tally("follow-up verification test", 3, 0, 1, 1),
            tally("leak inspection", 6, 2, 1, 0),
        ],
        remarks: vec![Notice { text: "One visit is still open; its entries are counted.".into(), source: String::new() }],
    }
}
