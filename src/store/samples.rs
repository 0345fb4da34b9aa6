//! A small invented store for the tests of this module.

use super::Store;
use crate::ledger::{
    Act, Appliance, ApplianceFacts, Category, ChargePurpose, Cylinder, CylinderFacts, CylinderKind, Detail, Entry, EntryId, GasStatus,
    Line, Moment, Person, Reading, RecoveryPurpose, Scope, Site, SiteFacts, TestKind, TestResult, Transfer, Versions, Visit, VisitState,
    WeighingMode,
};
use crate::quantity::{Mass, MassUnit, Weighing};
use chrono::{DateTime, Utc};
use uuid::Uuid;

pub mod ids {
    use crate::ledger::{ApplianceId, CylinderId, PersonId, SiteId, VisitId};
    use uuid::Uuid;

    pub const SITE: SiteId = SiteId(Uuid::from_u128(1));
    pub const APPLIANCE: ApplianceId = ApplianceId(Uuid::from_u128(2));
    pub const CYLINDER: CylinderId = CylinderId(Uuid::from_u128(3));
    pub const PERSON: PersonId = PersonId(Uuid::from_u128(4));
    pub const VISIT: VisitId = VisitId(Uuid::from_u128(5));
}

pub fn now() -> DateTime<Utc> {
    "2026-03-03T08:12:00Z".parse().unwrap()
}

pub fn at(date: &str, minute: u16) -> Moment {
    Moment { date: date.parse().unwrap(), minute: Some(minute) }
}

fn kg(text: &str) -> Mass {
    Mass::parse(text, MassUnit::Kilogram).unwrap()
}

pub fn site() -> Site {
    let facts = SiteFacts {
        owner: "Harbour Fish Ltd".to_owned(),
        address: "Quay 3".to_owned(),
        time_zone: "Etc/UTC".to_owned(),
        ..SiteFacts::under(vec!["us-82f".to_owned()])
    };
    Site { id: ids::SITE, name: "Fish market".to_owned(), versions: Versions::always(facts) }
}

pub fn appliance() -> Appliance {
    let facts = ApplianceFacts {
        full_charge: Some(Mass::from_lb(100)),
        full_charge_written: Some(Weighing::new("100", MassUnit::Pound)),
        ..ApplianceFacts::new(Category::CommercialRefrigeration, "R-22")
    };
    Appliance { id: ids::APPLIANCE, site: ids::SITE, name: "R-1".to_owned(), versions: Versions::always(facts) }
}

pub fn cylinder() -> Cylinder {
    let facts = CylinderFacts {
        refrigerant: Some("R-22".to_owned()),
        gas_status: Some(GasStatus::Reclaimed),
        gross: Some(kg("20")),
        gross_written: Some(Weighing::new("20", MassUnit::Kilogram)),
        ..CylinderFacts::new(CylinderKind::Supply, kg("10"), Weighing::new("10", MassUnit::Kilogram))
    };
    Cylinder { id: ids::CYLINDER, name: "S-204".to_owned(), versions: Versions::always(facts) }
}

pub fn person() -> Person {
    Person {
        id: ids::PERSON,
        name: "Ada Quill".to_owned(),
        certificate: "F-17".to_owned(),
        certificate_kind: String::new(),
        valid_from: None,
        valid_to: None,
        company: String::new(),
        company_certificate: String::new(),
    }
}

pub fn visit() -> Visit {
    Visit {
        id: ids::VISIT,
        site: ids::SITE,
        state: VisitState::Open,
        date: at("2026-03-03", 0).date,
        minute: Some(492),
        time_zone: "Etc/UTC".to_owned(),
        begun: now(),
        people: vec![ids::PERSON],
        closing: None,
        fingerprint: None,
    }
}

pub fn fill(store: &Store) {
    store
        .write(now(), |tx| {
            tx.add_person(&person())?;
            tx.add_site(&site())?;
            tx.add_appliance(&appliance())?;
            tx.add_cylinder(&cylinder())?;
            tx.begin_visit(&visit())
        })
        .unwrap();
}

pub fn store_with_visit() -> Store {
    let store = Store::in_memory().unwrap();
    fill(&store);
    store
}

pub fn entry(number: u16, act: Act) -> Entry {
    Entry {
        line: Line {
            entry: EntryId(Uuid::from_u128(1000 + u128::from(number))),
            appliance: ids::APPLIANCE,
            at: at("2026-03-03", 492 + number),
            position: 0,
            job: None,
            act,
        },
        visit: ids::VISIT,
        written: now(),
        strikes: None,
        struck_by: None,
        detail: Detail::default(),
    }
}

pub fn charge(mass: &str) -> Act {
    Act::Charge { purpose: ChargePurpose::Leak, transfer: transfer(mass) }
}

fn transfer(mass: &str) -> Transfer {
    Transfer { mass: kg(mass), cylinder: Some(ids::CYLINDER), division: Some(kg("0.01")), hoses: Mass::ZERO }
}

/// One entry of every act, with every lean column in use.
pub fn every_act() -> Vec<Entry> {
    let bare = Transfer { cylinder: None, division: None, hoses: kg("0.2"), ..transfer("90000") };
    let test = |kind, result, scope, partial, running_hundredths| Act::Test { kind, result, scope, partial, running_hundredths };
    let acts = vec![
        charge("4.5359237"),
        Act::Charge { purpose: ChargePurpose::SameLeak, transfer: bare },
        Act::Recover { purpose: RecoveryPurpose::Mothball, transfer: transfer("0.00000000000001") },
        Act::Recycle { cylinder: Some(ids::CYLINDER) },
        Act::Recycle { cylinder: None },
        test(TestKind::LeakTest, Some(TestResult::LeakFound), Some(Scope::Part), false, None),
        test(TestKind::LeakInspection, Some(TestResult::NoLeak), Some(Scope::Whole), false, Some(2450)),
        test(TestKind::InitialVerification, Some(TestResult::Pass), None, false, None),
        test(TestKind::FollowUpVerification, Some(TestResult::Fail), None, true, None),
        test(TestKind::LeakTest, None, None, false, None),
        Act::Repair { temporary: true },
        Act::Repair { temporary: false },
        Act::NormalOperation,
        Act::DetectionSystemCheck,
        Act::Mothball,
        Act::Retrofit { refrigerant: Some("R-448A".to_owned()), full_charge: Some(kg("40")) },
        Act::Retrofit { refrigerant: Some("R-448A".to_owned()), full_charge: None },
        Act::Retrofit { refrigerant: None, full_charge: Some(kg("42")) },
        Act::Retire,
        Act::PlanMade,
        Act::ReportSent,
        Act::Note,
    ];
    let mut entries: Vec<Entry> = (1..).zip(acts).map(|(number, act)| entry(number, act)).collect();
    entries[0].line.job = Some("J-1".into());
    entries[1].line.job = Some("J-1".into());
    entries[2].line.at.minute = None;
    entries[0].detail = Detail {
        person: Some(ids::PERSON),
        reading: Some(Reading {
            mode: WeighingMode::Gross,
            before: Some(Weighing::new("20.00", MassUnit::Kilogram)),
            after: Some(Weighing::new("15.4640763", MassUnit::Kilogram)),
            net: None,
            scale: None,
        }),
        note: "Łódź, 32 °C".to_owned(),
        ..Detail::default()
    };
    entries
}
