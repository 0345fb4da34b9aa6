//! What happened at Quernhaven in the thirteen months before today. Numbers
//! are days before today, then the hour and minute.

use super::DemonstrationError;
use super::stage::{Cast, OPENING_DAY, Stage, gross, signed, zeroed};
use crate::app::{ChargeInput, Common, Correction, NewEntry, SimpleAct};
use crate::ledger::{
    ApplianceFacts, Category, ChargeMethod, ChargePurpose, Company, Counterpart, CylinderFacts, Equipment, Instrument, InstrumentId,
    InstrumentKind, Reading, RecoveryPurpose, TestKind, WeighingMode,
};
use crate::quantity::{MassUnit, Weighing};
use uuid::Uuid;

type Told = Result<(), DemonstrationError>;

const WREN: &str = "Wren Castellane";
const IDRIS: &str = "Idris Holm";
const MARIT: &str = "Marit Oyelowo";
/// Weighs to 0.1 lb.
const VAN_SCALE: &str = "Scale 1";
/// Weighs to 0.5 lb.
const DOCK_SCALE: &str = "Dock scale";
/// Weighs to 0.02 kg.
const EAST_SCALE: &str = "Scale 3";

pub fn tell(stage: &Stage) -> Told {
    company(stage)?;
    let cast = stage.cast()?;
    ferry_terminal_checked(stage, &cast, 385)?;
    museum_checked(stage, &cast, 375, "E-0702")?;
    ferry_terminal_checked(stage, &cast, 210)?;
    rink_emptied_for_summer(stage, &cast)?;
    museum_checked(stage, &cast, 200, "E-0744")?;
    curling_sheet_topped_up(stage, &cast)?;
    cold_store_charged(stage, &cast)?;
    stacks_topped_up(stage, &cast)?;
    new_chiller(stage, &cast)?;
    ice_works_topped_up(stage, &cast)?;
    curling_sheet_leaks(stage, &cast)?;
    curling_sheet_mothballed(stage, &cast)?;
    rink_filled_for_winter(stage, &cast)?;
    ferry_terminal_leaks(stage, &cast)?;
    museum_checked(stage, &cast, 20, "E-0790")?;
    ice_works_at_its_trigger(stage, &cast)?;
    stacks_over_their_trigger(stage, &cast)?;
    display_cases_near_their_trigger(stage, &cast)?;
    repair_under_way(stage, &cast)
}

fn company(stage: &Stage) -> Told {
    let app = stage.app;
    let company = Company {
        name: "Quernhaven Cold Works".to_owned(),
        address: "7 Cooper\u{2019}s Slip, Quernhaven, west shore".to_owned(),
        certificate: "QH-UC-0417".to_owned(),
    };
    app.set_company(company, stage.day(OPENING_DAY), "")?;
    let files = [
        ("sites.csv", include_str!("sites.csv")),
        ("appliances.csv", include_str!("appliances.csv")),
        ("cylinders.csv", include_str!("cylinders.csv")),
        ("people.csv", include_str!("people.csv")),
        ("log.csv", include_str!("log.csv")),
    ];
    let files: Vec<(String, Vec<u8>)> = files.iter().map(|(name, text)| ((*name).to_owned(), stage.dated(text).into_bytes())).collect();
    app.import(&files)?;
    for instrument in instruments(stage) {
        app.add_instrument(instrument)?;
    }
    // Where reclaimed gas came from stands on its delivery notes.
    let cast = stage.cast()?;
    for (name, batch) in [("W-101", "R22-2207"), ("W-102", "R22-2214"), ("W-105", "R408A-0931")] {
        let id = cast.cylinder(name)?;
        if let Some(cylinder) = app.store().cylinder(id).map_err(crate::app::AppError::from)? {
            let gas_source =
                format!("Saltbeck Gases, reclaiming works, 2 Salt Lane, Quernhaven, west shore; batch {batch}, certificate SG-{batch}");
            let facts = CylinderFacts { gas_source, ..cylinder.versions.latest().clone() };
            app.change_cylinder(id, facts, stage.day(OPENING_DAY), "delivery note")?;
        }
    }
    Ok(())
}

fn instruments(stage: &Stage) -> Vec<Instrument> {
    let instrument = |kind, name: &str, serial: &str, division: Option<Weighing>, holds: Option<Weighing>| Instrument {
        id: InstrumentId(Uuid::nil()),
        kind,
        name: name.to_owned(),
        serial: serial.to_owned(),
        division,
        holds,
        checked_on: Some(stage.day(OPENING_DAY + 12)),
        check_due: Some(stage.day(0) + chrono::Days::new(180)),
    };
    let pounds = |text: &str| Some(Weighing::new(text, MassUnit::Pound));
    vec![
        instrument(InstrumentKind::Scale, VAN_SCALE, "K-114", pounds("0.1"), None),
        instrument(InstrumentKind::Scale, DOCK_SCALE, "K-020", pounds("0.5"), None),
        instrument(InstrumentKind::Scale, EAST_SCALE, "K-231", Some(Weighing::new("0.02", MassUnit::Kilogram)), None),
        instrument(InstrumentKind::Detector, "Detector 2", "D-5518", None, None),
        instrument(InstrumentKind::Gauge, "Gauge set 1", "G-077", None, None),
        instrument(InstrumentKind::RecoveryMachine, "Recovery machine 1", "RM-3", None, None),
        instrument(InstrumentKind::Hoses, "Hoses 1", "H-1", None, pounds("0.3")),
    ]
}

fn ferry_terminal_checked(stage: &Stage, cast: &Cast, days: u64) -> Told {
    stage.at(days, 9, 5);
    let scene = stage.begin(cast, "Ferry terminal", MARIT, "E-0698")?;
    scene.cautions(&["1"])?;
    for heat_pump in ["FT-HP1", "FT-HP2"] {
        scene.test(heat_pump, TestKind::LeakInspection, "compressors, joints, coils, valves", &[])?;
    }
    scene.close_with("Ines Calloway", "Given to Ines Calloway on paper")
}

fn museum_checked(stage: &Stage, cast: &Cast, days: u64, job: &str) -> Told {
    stage.at(days, 10, 20);
    let scene = stage.begin(cast, "Tide museum", MARIT, job)?;
    scene.cautions(&["1"])?;
    scene.test("TM-1", TestKind::LeakInspection, "compressor, joints, evaporator, relief valve", &[])?;
    scene.test("TM-2", TestKind::LeakTest, "joints, gas cooler, valves", &[])?;
    scene.close_with("Perrin Dale", "")
}

fn rink_emptied_for_summer(stage: &Stage, cast: &Cast) -> Told {
    stage.at(208, 8, 15);
    let scene = stage.begin(cast, "Ice rink", IDRIS, "W-1522")?;
    scene.cautions(&["1", "3", "4"])?;
    scene.recover("IR-1", RecoveryPurpose::Seasonal, &gross("W-201", "60.0", VAN_SCALE), "12 psig")?;
    scene.simple("IR-1", SimpleAct::Note, "Surplus of the winter charge taken out until the ice is made again.")?;
    scene.close_with("Lio Hartmoor", "Given to Lio Hartmoor on paper")
}

fn rink_filled_for_winter(stage: &Stage, cast: &Cast) -> Told {
    stage.at(40, 8, 40);
    let scene = stage.begin(cast, "Ice rink", IDRIS, "W-1601")?;
    scene.cautions(&["1", "3", "15"])?;
    scene.charge("IR-1", ChargePurpose::Seasonal, &gross("W-201", "58.5", VAN_SCALE))?;
    scene.test("IR-1", TestKind::LeakTest, "pumps, headers, chiller barrel", &[])?;
    scene.close_with("Lio Hartmoor", "Given to Lio Hartmoor on paper")
}

fn curling_sheet_topped_up(stage: &Stage, cast: &Cast) -> Told {
    stage.at(160, 14, 10);
    let scene = stage.begin(cast, "Ice rink", IDRIS, "W-1548")?;
    scene.charge("IR-2", ChargePurpose::Leak, &zeroed("W-101", "2.0", VAN_SCALE))?;
    scene.close(Counterpart::NobodyPresent)
}

fn curling_sheet_leaks(stage: &Stage, cast: &Cast) -> Told {
    stage.at(60, 13, 30);
    let scene = stage.begin(cast, "Ice rink", IDRIS, "W-1583")?;
    scene.cautions(&["1", "15"])?;
    scene.test("IR-2", TestKind::LeakTest, "whole circuit", &[("shell of the brine chiller", "")])?;
    scene.charge("IR-2", ChargePurpose::Leak, &gross("W-101", "8.0", VAN_SCALE))?;
    scene.close_with("Lio Hartmoor", "")
}

/// The brine chiller is not worth mending: the sheet waits for a decision.
fn curling_sheet_mothballed(stage: &Stage, cast: &Cast) -> Told {
    stage.at(45, 8, 5);
    let scene = stage.begin(cast, "Ice rink", IDRIS, "W-1583")?;
    scene.cautions(&["1", "3", "4"])?;
    scene.recover("IR-2", RecoveryPurpose::Mothball, &gross("W-202", "39.6", VAN_SCALE), "20 psig")?;
    scene.recover("IR-2", RecoveryPurpose::Mothball, &gross("W-204", "12.8", VAN_SCALE), "0 psig")?;
    scene.simple(
        "IR-2",
        SimpleAct::Mothball,
        "Shut down at the owner\u{2019}s wish until the brine chiller is replaced or the plant retired.",
    )?;
    scene.close_with("Lio Hartmoor", "Given to Lio Hartmoor on paper")
}

/// A reading is typed wrong and mended the next day.
fn cold_store_charged(stage: &Stage, cast: &Cast) -> Told {
    stage.at(150, 11, 0);
    let scene = stage.begin(cast, "Fish market", WREN, "W-1551")?;
    scene.cautions(&["1", "5", "15"])?;
    scene.test("FM-2", TestKind::LeakTest, "cases 4 to 9, liquid line", &[("flare at the receiver outlet", "isolated")])?;
    let repair = scene.repair("FM-2", "flare at the receiver outlet", "Flare cut and made anew", "flare nut 5/8 in")?;
    scene.verify("FM-2", TestKind::InitialVerification, "flare at the receiver outlet", repair)?;
    let wrong = scene.charge("FM-2", ChargePurpose::Leak, &gross("W-105", "7.9", VAN_SCALE))?;
    scene.close(Counterpart::NobodyPresent)?;

    stage.at(149, 8, 30);
    let scale = cast.instrument(VAN_SCALE)?;
    let pounds = |text: &str| Some(Weighing::new(text, MassUnit::Pound));
    let instead = ChargeInput {
        common: Common { job: Some("W-1551".to_owned()), ..Common::default() },
        cylinder: Some(cast.cylinder("W-105")?),
        purpose: ChargePurpose::Leak,
        reading: Reading { mode: WeighingMode::Gross, before: pounds("52.4"), after: pounds("45.4"), net: None, scale: Some(scale) },
        full_hoses: None,
        phase: "liquid".to_owned(),
        short_by: None,
        same_leak_as: None,
        gas_source: String::new(),
        weighing_gap: String::new(),
    };
    let correction = Correction {
        person: cast.person(WREN)?,
        why: "The display read 45.4 lb at the end, 44.5 was written".to_owned(),
        instead: Some(NewEntry::Charge(instead)),
        technician: signed(WREN),
        counterpart: Counterpart::SignsLater { name: "Tamsin Orrell".to_owned() },
    };
    stage.app.correct(wrong.line.entry, &correction)?;
    Ok(())
}

fn stacks_topped_up(stage: &Stage, cast: &Cast) -> Told {
    stage.at(133, 9, 30);
    let scene = stage.begin(cast, "Civic archive", WREN, "W-1560")?;
    scene.cautions(&["1", "15"])?;
    scene.test("CA-1", TestKind::LeakTest, "compressor, purge unit, joints", &[("stem of the suction valve", "")])?;
    scene.repair("CA-1", "stem of the suction valve", "Gland tightened, cap with new gasket", "cap gasket")?;
    scene.charge("CA-1", ChargePurpose::Leak, &gross("W-101", "12.0", VAN_SCALE))?;
    scene.close_with("Ambrose Feld", "Given to Ambrose Feld on paper")
}

/// Written down on the spot, with a factory charge that is trimmed.
fn new_chiller(stage: &Stage, cast: &Cast) -> Told {
    stage.at(100, 10, 0);
    let site = cast.registers().site_named("Civic archive").ok_or(crate::app::AppError::Unknown { what: "site" })?.id;
    let charge = Weighing::new("310", MassUnit::Pound);
    let facts = ApplianceFacts {
        full_charge: charge.mass().ok(),
        full_charge_written: Some(charge.clone()),
        charge_method: Some(ChargeMethod::Manufacturer),
        installed_on: Some(stage.day(100)),
        equipment: Some(Equipment::Chiller),
        description: "Chiller of the reading rooms".to_owned(),
        serial: "SC-310-19".to_owned(),
        place: "basement, plant room 2".to_owned(),
        leakage_detection_system: true,
        room_volume_m3: Some("180".to_owned()),
        ..ApplianceFacts::new(Category::ComfortCooling, "R-134a")
    };
    let chiller = stage.app.add_appliance_with(site, "CA-2", facts)?;
    let now = stage.cast()?;
    let scene = stage.begin(&now, "Civic archive", WREN, "W-1566")?;
    stage.app.join_visit(scene.visit, now.person(IDRIS)?)?;
    scene.cautions(&["1", "3"])?;
    scene.factory_charge(chiller, Weighing::new("306", MassUnit::Pound))?;
    scene.charge("CA-2", ChargePurpose::Trim, &zeroed("W-106", "4.0", VAN_SCALE))?;
    scene.test("CA-2", TestKind::LeakInspection, "every joint made on site", &[])?;
    scene.close_with("Ambrose Feld", "Sent to the council\u{2019}s office")
}

fn ice_works_topped_up(stage: &Stage, cast: &Cast) -> Told {
    stage.at(90, 15, 0);
    let scene = stage.begin(cast, "Fish market", IDRIS, "W-1571")?;
    scene.charge("FM-3", ChargePurpose::Leak, &gross("W-101", "6.0", VAN_SCALE))?;
    scene.close_with("Tamsin Orrell", "")
}

/// 12 lb of 200 lb in 73 days are 30 % a year: at the trigger, not over it.
fn ice_works_at_its_trigger(stage: &Stage, cast: &Cast) -> Told {
    stage.at(17, 9, 15);
    let scene = stage.begin(cast, "Fish market", IDRIS, "W-1615")?;
    scene.cautions(&["1", "2", "15"])?;
    let twice = scene.simple("FM-3", SimpleAct::Note, "Leak test begins at the drum.")?;
    stage.app.strike(twice.line.entry, "written on the wrong line", None)?;
    scene.test("FM-3", TestKind::LeakTest, "drum, spray header, valves", &[("packing of the drum bearing", "")])?;
    let repair = scene.repair("FM-3", "packing of the drum bearing", "Packing replaced", "packing set 40 mm")?;
    scene.verify("FM-3", TestKind::InitialVerification, "packing of the drum bearing", repair)?;
    scene.charge("FM-3", ChargePurpose::Leak, &gross("W-101", "12.0", VAN_SCALE))?;
    scene.close_with("Tamsin Orrell", "Given to Tamsin Orrell on paper")
}

/// One heat pump's leak is mended and waits for its re-check, the other's is still open.
fn ferry_terminal_leaks(stage: &Stage, cast: &Cast) -> Told {
    stage.at(30, 8, 50);
    let scene = stage.begin(cast, "Ferry terminal", MARIT, "E-0781")?;
    scene.cautions(&["1", "5", "15"])?;
    scene.test(
        "FT-HP1",
        TestKind::LeakInspection,
        "compressors, joints, coils, valves",
        &[("return bend of the outdoor coil, row 3", "section shut")],
    )?;
    scene.simple("FT-HP1", SimpleAct::Note, "Coil is ordered; the circuit runs on its second section until it comes.")?;
    scene.test("FT-HP2", TestKind::LeakInspection, "compressors, joints, coils, valves", &[("Schrader core, liquid side", "")])?;
    scene.repair("FT-HP2", "Schrader core, liquid side", "Core replaced", "valve core")?;
    scene.charge("FT-HP2", ChargePurpose::Leak, &gross("E-301", "2.14", EAST_SCALE))?;
    scene.close(Counterpart::SignsLater { name: "Ines Calloway".to_owned() })?;
    stage.at(28, 16, 20);
    stage.app.countersign(scene.visit, signed("Ines Calloway"))?;
    stage.app.hand_over(scene.visit, "Given to Ines Calloway on paper")?;
    Ok(())
}

/// 20 lb of 480 lb in 120 days: 12.67 % a year, over the 10 % of comfort cooling.
fn stacks_over_their_trigger(stage: &Stage, cast: &Cast) -> Told {
    stage.at(13, 10, 30);
    let scene = stage.begin(cast, "Civic archive", WREN, "W-1619")?;
    scene.cautions(&["1", "3", "15"])?;
    scene.test("CA-1", TestKind::LeakTest, "compressor, shaft, joints", &[("shaft of the compressor", "isolated")])?;
    scene.charge_with(
        "CA-1",
        ChargePurpose::Leak,
        &gross("W-102", "20.0", VAN_SCALE),
        Some("Hoses 1"),
        Some(Weighing::new("5", MassUnit::Pound)),
    )?;
    scene.simple("CA-1", SimpleAct::Note, "New shaft parts are ordered for Tuesday week.")?;
    scene.close_with("Ambrose Feld", "Given to Ambrose Feld on paper")
}

/// 47.5 lb of 240 lb: 19.79 % under a trigger of 20 %, on a scale that reads half pounds.
fn display_cases_near_their_trigger(stage: &Stage, cast: &Cast) -> Told {
    stage.at(6, 7, 45);
    let scene = stage.begin(cast, "Fish market", WREN, "W-1624")?;
    stage.app.join_visit(scene.visit, cast.person(IDRIS)?)?;
    scene.cautions(&["1", "3", "5"])?;
    scene.test(
        "FM-1",
        TestKind::LeakTest,
        "cases 1 to 14, suction header, condensers",
        &[("braze of the suction header, case 11", "section shut"), ("flare at case 3", "")],
    )?;
    let header = scene.repair("FM-1", "braze of the suction header, case 11", "Emptied section brazed under nitrogen", "")?;
    let flare = scene.repair("FM-1", "flare at case 3", "Flare made anew", "flare nut 3/8 in")?;
    scene.verify("FM-1", TestKind::InitialVerification, "braze of the suction header, case 11", header)?;
    scene.verify("FM-1", TestKind::InitialVerification, "flare at case 3", flare)?;
    scene.charge("FM-1", ChargePurpose::Leak, &gross("W-103", "24.0", DOCK_SCALE))?;
    scene.charge("FM-1", ChargePurpose::Leak, &gross("W-104", "23.5", DOCK_SCALE))?;
    scene.close(Counterpart::Refused {
        name: "Tamsin Orrell".to_owned(),
        reason: "Wants the manager of the halls to read it first.".to_owned(),
    })
}

/// Left open: the repair is made, the tests that prove it are still to come.
fn repair_under_way(stage: &Stage, cast: &Cast) -> Told {
    stage.at(1, 13, 10);
    let scene = stage.begin(cast, "Civic archive", WREN, "W-1619")?;
    scene.cautions(&["1", "6"])?;
    scene.repair("CA-1", "shaft of the compressor", "Shaft ring and sleeve replaced", "shaft ring set SR-480")?;
    Ok(())
}
