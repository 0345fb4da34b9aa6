//! A small invented plant: one site, one appliance, three cylinders, two people.

use bubblepoint::app::testing::{CountedIds, SetClock};
use bubblepoint::app::{App, ChargeInput, Common, NewAppliance, NewSite, RecoverInput};
use bubblepoint::ledger::{
    ApplianceId, Category, ChargePurpose, Company, Counterpart, CylinderFacts, CylinderId, CylinderKind, GasStatus, Ink, Person, PersonId,
    Reading, RecoveryPurpose, Signature, SiteFacts, SiteId, Visit, WeighingMode,
};
use bubblepoint::quantity::{MassUnit, Weighing};
use bubblepoint::store::{OpenMode, Store};
use chrono_tz::Tz;
use std::path::Path;

pub struct Plant {
    pub app: App,
    pub clock: SetClock,
    pub site: SiteId,
    /// 100 lb of R-22, commercial refrigeration.
    pub appliance: ApplianceId,
    /// R-22, virgin, 50 lb in it, gross 70 lb.
    pub supply: CylinderId,
    /// Empty, gross 25 lb.
    pub recovery: CylinderId,
    /// R-410A, virgin.
    pub other_gas: CylinderId,
    pub ada: PersonId,
    pub ben: PersonId,
}

/// 3 March 2026, 08:12 in New York.
pub const MORNING: &str = "2026-03-03T13:12:00Z";

pub fn plant() -> Plant {
    plant_under(Store::in_memory().unwrap(), &["us-82f"])
}

pub fn plant_at(path: &Path) -> Plant {
    plant_under(Store::open(path, OpenMode::Create).unwrap(), &["us-82f"])
}

/// A plant under these rulebooks.
pub fn plant_under(store: Store, rulebooks: &[&str]) -> Plant {
    let clock = clock();
    let app = App::with(store, Box::new(clock.clone()), Box::new(CountedIds::after(1000))).unwrap();
    let today = app.today();
    let company = Company { name: "Quill Cooling".to_owned(), address: "2 Rope Lane".to_owned(), certificate: "RC-7".to_owned() };
    app.set_company(company, today, "").unwrap();
    let person = |name: &str| Person {
        id: PersonId(uuid::Uuid::nil()),
        name: name.to_owned(),
        certificate: "F-17".to_owned(),
        certificate_kind: "608 universal".to_owned(),
        valid_from: None,
        valid_to: None,
        company: String::new(),
        company_certificate: String::new(),
    };
    let ada = app.add_person(person("Ada Quill")).unwrap();
    let ben = app.add_person(person("Ben Osei")).unwrap();
    let facts = SiteFacts {
        owner: "Harbour Fish Ltd".to_owned(),
        address: "Quay 3".to_owned(),
        time_zone: "America/New_York".to_owned(),
        ..SiteFacts::under(rulebooks.iter().map(|id| (*id).to_owned()).collect())
    };
    let site = app.add_site(NewSite { name: "Fish market cold store".to_owned(), facts }).unwrap();
    let new = NewAppliance {
        site,
        name: "R-1".to_owned(),
        category: Category::CommercialRefrigeration,
        refrigerant: "r22".to_owned(),
        full_charge: Some(lb("100")),
    };
    let appliance = app.add_appliance(&new).unwrap();
    let supply =
        app.add_cylinder("S-204", cylinder(CylinderKind::Supply, "20", Some("70"), Some("R-22"), Some(GasStatus::Virgin))).unwrap();
    let recovery = app.add_cylinder("R-9", cylinder(CylinderKind::Recovery, "25", None, None, None)).unwrap();
    let other_gas =
        app.add_cylinder("S-300", cylinder(CylinderKind::Supply, "20", Some("45"), Some("R-410A"), Some(GasStatus::Virgin))).unwrap();
    Plant { app, clock, site, appliance, supply, recovery, other_gas, ada, ben }
}

pub fn clock() -> SetClock {
    SetClock::at(MORNING.parse().unwrap(), Tz::UTC)
}

pub fn lb(text: &str) -> Weighing {
    Weighing::new(text, MassUnit::Pound)
}

fn cylinder(kind: CylinderKind, tare: &str, gross: Option<&str>, gas: Option<&str>, status: Option<GasStatus>) -> CylinderFacts {
    CylinderFacts {
        refrigerant: gas.map(str::to_owned),
        gas_status: status,
        gross: gross.map(|gross| lb(gross).mass().unwrap()),
        gross_written: gross.map(lb),
        water_capacity_l: Some("21.6".to_owned()),
        service_pressure_psig: Some("400".to_owned()),
        ..CylinderFacts::new(kind, lb(tare).mass().unwrap(), lb(tare))
    }
}

pub fn gross(before: &str, after: &str) -> Reading {
    Reading { mode: WeighingMode::Gross, before: Some(lb(before)), after: Some(lb(after)), net: None, scale: None }
}

pub fn zeroed(before: &str, after: &str) -> Reading {
    Reading { mode: WeighingMode::Zeroed, ..gross(before, after) }
}

pub fn charge(cylinder: CylinderId, reading: Reading) -> ChargeInput {
    ChargeInput {
        common: Common::default(),
        cylinder: Some(cylinder),
        purpose: ChargePurpose::Leak,
        reading,
        full_hoses: None,
        phase: "liquid".to_owned(),
        short_by: None,
        same_leak_as: None,
        gas_source: String::new(),
        weighing_gap: String::new(),
    }
}

pub fn recover(cylinder: CylinderId, reading: Reading) -> RecoverInput {
    RecoverInput {
        common: Common::default(),
        cylinder,
        purpose: RecoveryPurpose::Repair,
        reading,
        full_hoses: None,
        level_reached: "0 psig".to_owned(),
        weighing_gap: String::new(),
    }
}

pub fn signature(name: &str) -> Signature {
    Signature { name: name.to_owned(), ink: Ink(vec![vec![(100, 500), (200, 400), (300, 500)], vec![(350, 450), (420, 450)]]) }
}

pub fn signed_by_both() -> (Signature, Counterpart) {
    (signature("Ada Quill"), Counterpart::Signed { signature: signature("Mara Brandeis") })
}

impl Plant {
    pub fn begin(&self) -> Visit {
        self.app.begin_visit(self.site, self.ada).unwrap()
    }
}
