//! No gas comes from nowhere: whatever is done, in whatever order, opening and
//! what came, less what went and what nobody can explain, is the closing.
//!
//! Beside the program runs a model that knows what is really in each cylinder,
//! how much has leaked unseen, and when a weighing brought that to light.

use crate::support::plant::MORNING;
use bubblepoint::app::testing::{CountedIds, SetClock};
use bubblepoint::app::{Amount, App, AppError, ChargeInput, Common, CylinderWork, Destination, NewCylinderEntry, RecoverInput};
use bubblepoint::ledger::{
    ApplianceId, ChargePurpose, CylinderFacts, CylinderId, EntryId, GasStatus, Reading, RecoveryPurpose, VisitId, WeighingMode,
};
use bubblepoint::quantity::{Mass, MassUnit, Weighing};
use bubblepoint::store::Store;
use chrono::Duration;
use proptest::prelude::*;
use std::collections::BTreeMap;

const REGISTERS: [(&str, &str); 4] = [
    ("sites.csv", "site,rulebooks,owner,time_zone\nQuay,us-82f us-84c,Harbour Fish Ltd,America/New_York\n"),
    (
        "appliances.csv",
        "appliance,site,category,refrigerant,full_charge,unit,installed_on\nR-1,Quay,commercial refrigeration,R-22,5000,kg,2019-01-01\n\
         H-1,Quay,comfort cooling,R-410A,5000,kg,2019-01-01\n",
    ),
    (
        "cylinders.csv",
        "cylinder,kind,tare,unit,refrigerant,gas_status,gross,water_capacity,service_pressure_psig\n\
         S-1,supply,10,kg,R-22,reclaimed,60,200,400\nS-2,supply,10,kg,R-410A,reclaimed,70,200,400\n\
         V-1,recovery,10,kg,R-22,recovered,14,200,400\nV-2,recovery,10,kg,R-410A,recovered,12,200,400\n",
    ),
    ("people.csv", "person,certificate\nAda Quill,F-17\n"),
];
const GASES: [&str; 2] = ["R-22", "R-410A"];

/// What is done next. Masses are grams, and are cut to what the cylinder has.
#[derive(Debug, Clone)]
enum Step {
    Charge { gas: usize, cylinder: usize, grams: i64, gross: bool },
    Recover { gas: usize, grams: i64, gross: bool },
    FactoryCharge { gas: usize, grams: i64 },
    History { gas: usize, grams: i64, charge: bool, named: bool },
    Leak { gas: usize, cylinder: usize, grams: i64 },
    Reweigh { gas: usize, cylinder: usize, in_the_register: bool },
    Buy { gas: usize, grams: i64, gross: bool },
    SendAway { gas: usize, cylinder: usize, grams: i64, gross: bool },
    Lose { gas: usize, cylinder: usize, grams: i64, gross: bool },
    Return { gas: usize },
    Strike { which: usize },
}

fn step() -> impl Strategy<Value = Step> {
    let (gas, cylinder, grams) = (0_usize..2, 0_usize..2, 1_i64..6000);
    prop_oneof![
        4 => (gas.clone(), cylinder.clone(), grams.clone(), any::<bool>())
            .prop_map(|(gas, cylinder, grams, gross)| Step::Charge { gas, cylinder, grams, gross }),
        4 => (gas.clone(), grams.clone(), any::<bool>()).prop_map(|(gas, grams, gross)| Step::Recover { gas, grams, gross }),
        1 => (gas.clone(), grams.clone()).prop_map(|(gas, grams)| Step::FactoryCharge { gas, grams }),
        2 => (gas.clone(), grams.clone(), any::<bool>(), any::<bool>())
            .prop_map(|(gas, grams, charge, named)| Step::History { gas, grams, charge, named }),
        2 => (gas.clone(), cylinder.clone(), 1_i64..200).prop_map(|(gas, cylinder, grams)| Step::Leak { gas, cylinder, grams }),
        3 => (gas.clone(), cylinder.clone(), any::<bool>())
            .prop_map(|(gas, cylinder, in_the_register)| Step::Reweigh { gas, cylinder, in_the_register }),
        2 => (gas.clone(), grams.clone(), any::<bool>()).prop_map(|(gas, grams, gross)| Step::Buy { gas, grams, gross }),
        2 => (gas.clone(), cylinder.clone(), grams.clone(), any::<bool>())
            .prop_map(|(gas, cylinder, grams, gross)| Step::SendAway { gas, cylinder, grams, gross }),
        1 => (gas.clone(), cylinder, grams, any::<bool>()).prop_map(|(gas, cylinder, grams, gross)| Step::Lose { gas, cylinder, grams, gross }),
        1 => gas.prop_map(|gas| Step::Return { gas }),
        2 => (0_usize..40).prop_map(|which| Step::Strike { which }),
    ]
}

/// A cylinder as it really is, in grams.
#[derive(Debug, Clone, Copy)]
struct Real {
    id: CylinderId,
    /// What is in it.
    holds: i64,
    /// What the books say.
    told: i64,
}

/// An entry that can still be struck: zeroed or net, so that no reading settled anything.
#[derive(Debug, Clone, Copy)]
enum Strikable {
    Visit(EntryId, usize, usize, i64, bool),
    Book(EntryId, usize, usize, i64),
}

/// Sums of one gas, in grams.
#[derive(Debug, Clone, Copy, Default)]
struct Sums {
    opening: i64,
    bought: i64,
    charged: i64,
    recovered: i64,
    past: i64,
    sent: i64,
    lost: i64,
    unexplained: i64,
}

struct World {
    app: App,
    clock: SetClock,
    visit: VisitId,
    appliances: [ApplianceId; 2],
    /// By gas: supply, recovery.
    cylinders: [[Real; 2]; 2],
    sums: [Sums; 2],
    strikable: Vec<Strikable>,
    files: usize,
}

const TARE: i64 = 10_000;

fn grams(grams: i64) -> Weighing {
    Weighing::new(grams.to_string(), MassUnit::Gram)
}

fn mass(of: i64) -> Mass {
    Mass::parse(&of.to_string(), MassUnit::Gram).unwrap_or_else(|_| -Mass::parse(&(-of).to_string(), MassUnit::Gram).unwrap())
}

fn reading(gross: bool, before: i64, after: i64) -> Reading {
    let (mode, before, after) = if gross { (WeighingMode::Gross, before, after) } else { (WeighingMode::Zeroed, 0, after - before) };
    Reading { mode, before: Some(grams(before)), after: Some(grams(after)), net: None, scale: None }
}

fn with_reasons() -> Common {
    Common { reason: "tried out".to_owned(), ..Common::default() }
}

impl World {
    fn new() -> Self {
        let clock = SetClock::at(MORNING.parse().unwrap(), chrono_tz::UTC);
        let app = App::with(Store::in_memory().unwrap(), Box::new(clock.clone()), Box::new(CountedIds::default())).unwrap();
        let files: Vec<_> = REGISTERS.iter().map(|(name, text)| ((*name).to_owned(), text.as_bytes().to_vec())).collect();
        app.import(&files).unwrap();
        let registers = app.store().registers().unwrap();
        let visit = app.begin_visit(registers.sites[0].id, registers.people[0].id).unwrap().id;
        let appliance = |name: &str| registers.appliances.iter().find(|appliance| appliance.name == name).unwrap().id;
        let real = |name: &str, holds: i64| Real { id: registers.cylinder_named(name).unwrap().id, holds, told: holds };
        let cylinders = [[real("S-1", 50_000), real("V-1", 4_000)], [real("S-2", 60_000), real("V-2", 2_000)]];
        let opening = |gas: usize| Sums { opening: cylinders[gas][0].holds + cylinders[gas][1].holds, ..Sums::default() };
        let appliances = [appliance("R-1"), appliance("H-1")];
        Self { app, clock, visit, appliances, cylinders, sums: [opening(0), opening(1)], strikable: Vec::new(), files: 0 }
    }

    /// A gross reading brings to light what the books do not know.
    fn settle(&mut self, gas: usize, cylinder: usize) {
        let real = &mut self.cylinders[gas][cylinder];
        self.sums[gas].unexplained += real.holds - real.told;
        real.told = real.holds;
        // What was entered before a reading is in it, struck or not.
        let settled = real.id;
        let cylinders = self.cylinders;
        self.strikable.retain(|entry| {
            let (Strikable::Visit(_, gas, cylinder, _, _) | Strikable::Book(_, gas, cylinder, _)) = entry;
            cylinders[*gas][*cylinder].id != settled
        });
    }

    fn moved(&mut self, gas: usize, cylinder: usize, gain: i64) {
        let real = &mut self.cylinders[gas][cylinder];
        real.holds += gain;
        real.told += gain;
    }

    fn book(&self, gas: usize, cylinder: usize, what: CylinderWork) -> Result<EntryId, AppError> {
        let new = NewCylinderEntry {
            reason: "tried out".to_owned(),
            weighing_gap: "do not know".to_owned(),
            ..NewCylinderEntry::of(self.cylinders[gas][cylinder].id, what)
        };
        self.app.enter_cylinder(&new).map(|entry| entry.id)
    }

    fn take(&mut self, step: &Step) {
        self.clock.forward(Duration::minutes(7));
        match *step {
            Step::Charge { gas, cylinder, grams, gross } => {
                let Real { id, holds, told } = self.cylinders[gas][cylinder];
                // Books that say less than nothing know nothing.
                let net = if gross { grams.min(holds) } else { grams.min(holds).min(told) };
                if net <= 0 {
                    return;
                }
                let input = ChargeInput {
                    common: with_reasons(),
                    cylinder: Some(id),
                    purpose: ChargePurpose::Leak,
                    reading: reading(gross, TARE + holds, TARE + holds - net),
                    full_hoses: None,
                    phase: "liquid".to_owned(),
                    short_by: None,
                    same_leak_as: None,
                    gas_source: "where it was made fit".to_owned(),
                    weighing_gap: "do not know".to_owned(),
                };
                let entry = self.app.charge(self.visit, self.appliances[gas], input).unwrap();
                self.moved(gas, cylinder, -net);
                self.sums[gas].charged += net;
                self.entered(gross, Strikable::Visit(entry.line.entry, gas, cylinder, net, true));
            }
            Step::Recover { gas, grams, gross } => {
                let Real { id, holds, .. } = self.cylinders[gas][1];
                let input = RecoverInput {
                    common: with_reasons(),
                    cylinder: id,
                    purpose: RecoveryPurpose::Surplus,
                    reading: reading(gross, TARE + holds, TARE + holds + grams),
                    full_hoses: None,
                    level_reached: String::new(),
                    weighing_gap: "do not know".to_owned(),
                };
                let entry = self.app.recover(self.visit, self.appliances[gas], input).unwrap();
                self.moved(gas, 1, grams);
                self.sums[gas].recovered += grams;
                self.entered(gross, Strikable::Visit(entry.line.entry, gas, 1, grams, false));
            }
            Step::FactoryCharge { gas, grams: net } => {
                let input = ChargeInput {
                    common: with_reasons(),
                    cylinder: None,
                    purpose: ChargePurpose::FactoryCharge,
                    reading: Reading { mode: WeighingMode::NetOnly, before: None, after: None, net: Some(grams(net)), scale: None },
                    full_hoses: None,
                    phase: String::new(),
                    short_by: None,
                    same_leak_as: None,
                    gas_source: "where it was made fit".to_owned(),
                    weighing_gap: String::new(),
                };
                self.app.charge(self.visit, self.appliances[gas], input).unwrap();
                self.sums[gas].charged += net;
                self.sums[gas].past += net;
            }
            Step::History { gas, grams, charge, named } => {
                // Of a day before the registers came: with a cylinder it moves the opening of the year.
                let cylinder = usize::from(!charge);
                let (name, what) = ([["S-1", "V-1"], ["S-2", "V-2"]][gas][cylinder], if charge { "charge" } else { "recover" });
                let named = named && (charge || self.sums[gas].opening >= grams);
                self.files += 1;
                let (day, appliance, name) = (1 + self.files % 28, ["R-1", "H-1"][gas], if named { name } else { "" });
                let line = format!("2026-02-{day:02},{appliance},{what},{grams},g,{name},{}", self.files);
                let text = format!("date,appliance,what,amount,unit,cylinder,note\n{line}\n");
                // Worked back, a cylinder cannot have held less than nothing.
                if named && !charge && self.cylinders_opening(gas, 1) < grams {
                    return;
                }
                self.app.import(&[(format!("log-{}.csv", self.files), text.into_bytes())]).unwrap();
                let sums = &mut self.sums[gas];
                if charge {
                    sums.charged += grams;
                    (sums.opening, sums.past) = if named { (sums.opening + grams, sums.past) } else { (sums.opening, sums.past + grams) };
                } else {
                    sums.recovered += grams;
                    (sums.opening, sums.past) = if named { (sums.opening - grams, sums.past) } else { (sums.opening, sums.past - grams) };
                }
            }
            Step::Leak { gas, cylinder, grams } => {
                let real = &mut self.cylinders[gas][cylinder];
                real.holds -= grams.min(real.holds);
            }
            Step::Reweigh { gas, cylinder, in_the_register } => {
                let Real { id, holds, .. } = self.cylinders[gas][cylinder];
                let gross = grams(TARE + holds);
                if in_the_register {
                    let known = self.app.store().cylinder(id).unwrap().unwrap();
                    let facts = CylinderFacts {
                        gross: gross.mass().ok(),
                        gross_written: Some(gross),
                        weighed: None,
                        ..known.versions.latest().clone()
                    };
                    self.app.change_cylinder(id, facts, self.app.today(), "").unwrap();
                } else {
                    self.book(gas, cylinder, CylinderWork::Weighed { gross }).unwrap();
                }
                self.settle(gas, cylinder);
            }
            Step::Buy { gas, grams: net, gross } => {
                let holds = self.cylinders[gas][0].holds;
                let gross_after = gross.then(|| grams(TARE + holds + net));
                let what = CylinderWork::Bought {
                    refrigerant: GASES[gas].to_owned(),
                    status: GasStatus::Reclaimed,
                    net: grams(net),
                    gross: gross_after,
                };
                let entry = self.book(gas, 0, what).unwrap();
                self.moved(gas, 0, net);
                self.sums[gas].bought += net;
                self.entered(gross, Strikable::Book(entry, gas, 0, -net));
            }
            Step::SendAway { gas, cylinder, grams: net, gross } => {
                let Real { holds, told, .. } = self.cylinders[gas][cylinder];
                let net = if gross { holds } else { net.min(holds).min(told) };
                if net <= 0 {
                    return;
                }
                let amount = if gross { Amount::Gross(grams(TARE + holds)) } else { Amount::Net(grams(net)) };
                let to = Destination::Reclaimer;
                let entry = self.book(gas, cylinder, CylinderWork::SentAway { to, amount }).unwrap();
                self.moved(gas, cylinder, -net);
                self.sums[gas].sent += net;
                self.entered(gross, Strikable::Book(entry, gas, cylinder, net));
            }
            Step::Lose { gas, cylinder, grams: net, gross } => {
                let Real { holds, told, .. } = self.cylinders[gas][cylinder];
                if gross {
                    // By weight, all that is missing from the books is told to be lost.
                    let entry = self.book(gas, cylinder, CylinderWork::Lost { amount: Amount::Gross(grams(TARE + holds)) });
                    assert_eq!(entry.is_ok(), told > holds, "{entry:?}");
                    if entry.is_ok() {
                        self.sums[gas].lost += told - holds;
                        self.cylinders[gas][cylinder].told = holds;
                        self.settle(gas, cylinder);
                    }
                    return;
                }
                let net = net.min(holds).min(told);
                if net <= 0 {
                    return;
                }
                let entry = self.book(gas, cylinder, CylinderWork::Lost { amount: Amount::Net(grams(net)) }).unwrap();
                self.moved(gas, cylinder, -net);
                self.sums[gas].lost += net;
                self.strikable.push(Strikable::Book(entry, gas, cylinder, net));
            }
            Step::Return { gas } => {
                let holds = self.cylinders[gas][0].holds;
                let entry = self.book(gas, 0, CylinderWork::Returned { gross: grams(TARE + holds) });
                // Once it is back with its owner, it is there until it comes filled again.
                if entry.is_ok() {
                    self.settle(gas, 0);
                    self.moved(gas, 0, -holds);
                    self.sums[gas].sent += holds;
                }
            }
            Step::Strike { which } => {
                if self.strikable.is_empty() {
                    return;
                }
                let index = which % self.strikable.len();
                let (gas, cylinder, gain) = match self.strikable[index] {
                    Strikable::Visit(_, gas, cylinder, net, charge) => (gas, cylinder, if charge { net } else { -net }),
                    Strikable::Book(_, gas, cylinder, gain) => (gas, cylinder, gain),
                };
                if self.cylinders[gas][cylinder].told + gain < 0 {
                    return;
                }
                match self.strikable.remove(index) {
                    Strikable::Visit(entry, gas, cylinder, net, charge) => {
                        self.app.strike(entry, "tried out", None).unwrap();
                        // It never happened in the books; in truth it did.
                        let (sum, gain) = if charge { (&mut self.sums[gas].charged, net) } else { (&mut self.sums[gas].recovered, -net) };
                        *sum -= net;
                        self.cylinders[gas][cylinder].told += gain;
                    }
                    Strikable::Book(entry, gas, cylinder, gain) => {
                        let act = self.app.store().cylinder_entry(entry).unwrap().unwrap().act;
                        self.app.strike_cylinder_entry(entry, "tried out").unwrap();
                        let sums = &mut self.sums[gas];
                        match act.name() {
                            "bought" => sums.bought += gain,
                            "lost" => sums.lost -= gain,
                            _ => sums.sent -= gain,
                        }
                        self.cylinders[gas][cylinder].told += gain;
                    }
                }
            }
        }
    }

    /// A gross reading settles; else the entry can be struck.
    fn entered(&mut self, gross: bool, entry: Strikable) {
        let (Strikable::Visit(_, gas, cylinder, _, _) | Strikable::Book(_, gas, cylinder, _)) = entry;
        if gross { self.settle(gas, cylinder) } else { self.strikable.push(entry) }
    }

    /// What a cylinder held as the year began, worked back.
    fn cylinders_opening(&self, gas: usize, cylinder: usize) -> i64 {
        let eve = "2025-12-31".parse().unwrap();
        let held = self.app.cylinder_standing(self.cylinders[gas][cylinder].id, eve).unwrap().balance.content.mass().unwrap();
        i64::try_from((held.kg() * 1000).to_integer()).unwrap()
    }
}

proptest! {
    #![proptest_config(super::cases(48))]

    #[test]
    fn no_gas_comes_from_nowhere(steps in prop::collection::vec(step(), 1..40)) {
        let mut world = World::new();
        for step in &steps {
            world.take(step);
        }
        let account = world.app.annual_account(2026, None).unwrap();
        let lines: BTreeMap<&str, _> = account.gases.iter().map(|gas| (gas.refrigerant.as_str(), gas.line)).collect();
        let mut all = [Mass::ZERO; 2];
        for (gas, name) in GASES.into_iter().enumerate() {
            let (sums, line) = (world.sums[gas], lines[name]);
            let told: i64 = world.cylinders[gas].iter().map(|cylinder| cylinder.told).sum();
            prop_assert_eq!(line.opening, Some(mass(sums.opening)), "{} opening, {:?}", name, account.remarks);
            prop_assert_eq!(line.closing, Some(mass(told)), "{} closing", name);
            prop_assert_eq!((line.charged, line.recovered), (mass(sums.charged), mass(sums.recovered)), "{}", name);
            prop_assert_eq!(line.past_cylinders, mass(sums.past), "{}", name);
            if let Some(bought) = line.bought {
                let went = (line.sent_away, line.lost_from_cylinders);
                prop_assert_eq!((bought, went), (mass(sums.bought), (Some(mass(sums.sent)), Some(mass(sums.lost)))), "{}", name);
                prop_assert_eq!(line.unexplained(), Some(mass(sums.unexplained)), "{}", name);
            } else {
                prop_assert_eq!((sums.bought, sums.sent, sums.lost), (0, 0, 0), "{}", name);
            }
            let came = sums.opening + sums.bought + sums.recovered - sums.charged + sums.past;
            prop_assert_eq!(mass(came - sums.sent - sums.lost + sums.unexplained), line.closing.unwrap(), "{}", name);
            all[0] += line.closing.unwrap();
            all[1] += mass(told);
        }
        prop_assert_eq!(all[0], all[1]);
    }
}
