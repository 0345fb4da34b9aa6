//! What is worth a look in history that was taken all the same. What the law
//! forbade is found by the rules for new entries.

use super::doubles::told_twice;
use super::log::{Taken, remark};
use super::{ImportError, Imported, Parts, Remark};
use crate::app::App;
use crate::app::limits::LimitRules;
use crate::app::refusals::{self, Kind, Refusal, STOP_BEFORE};
use crate::app::standing::{ApplianceStanding, CylinderStanding, HeldBefore, held_before_entries};
use crate::exchange::csv::LogRow;
use crate::gas;
use crate::ledger::{
    Act, Appliance, ApplianceFacts, ApplianceId, ChargePurpose, Cylinder, CylinderFacts, CylinderId, EntryId, Registers, Site, TestKind,
    TestResult, Transfer,
};
use crate::measure::default_oil_factor;
use crate::quantity::Mass;
use crate::rules::{DutyKind, History, InForce, installation_bans, rulebook};
use crate::store::{StoreError, Writing};
use chrono::NaiveDate;
use std::collections::{BTreeMap, HashMap, HashSet};

/// Looks at all that was taken in, when it stands in the store.
pub(super) fn look(tx: &Writing<'_>, app: &App, parts: &Parts, entries: &[Taken], taken: &mut Imported) -> Result<(), ImportError> {
    let registers = tx.registers()?;
    let mut by_appliance: BTreeMap<ApplianceId, HashMap<EntryId, &LogRow>> = BTreeMap::new();
    for Taken { row, entry, .. } in entries {
        by_appliance.entry(entry.line.appliance).or_default().insert(entry.line.entry, row);
    }
    let moved: HashSet<CylinderId> = entries.iter().filter_map(|taken| taken.entry.line.act.cylinder()).collect();
    let mut cylinders = Cylinders::new(tx, &registers, &moved)?;
    let appliances: HashMap<ApplianceId, &Appliance> = registers.appliances.iter().map(|appliance| (appliance.id, appliance)).collect();
    for (id, rows) in by_appliance {
        let Some(appliance) = appliances.get(&id) else { continue };
        let Some(site) = registers.site(appliance.site) else { continue };
        let lines = tx.lines_of(id)?;
        let history = History::new(appliance, &lines, NaiveDate::MAX);
        odd(&history, &rows, &mut taken.remarks);
        told_twice(&history, &rows, &mut taken.remarks);
        forbidden(site, &history, &rows, &mut cylinders, &mut taken.remarks);
    }
    for Taken { row, entry, .. } in entries {
        if !row.cylinder.is_empty() && !cylinders.names.contains(row.cylinder.as_str()) {
            let so = if entry.line.act.transfer().is_some() { "; the mass counts for no cylinder" } else { "" };
            taken.remarks.push(remark(row, format!("cylinder \u{201c}{}\u{201d} is not in the register{so}", row.cylinder)));
        }
    }
    unchecked_detection_systems(tx, app, parts, &registers, &mut taken.remarks)?;
    taken.remarks.sort_by(|a, b| (&a.file, a.line).cmp(&(&b.file, b.line)));
    Ok(())
}

/// More than can have been there, tests without their repair, a seasonal
/// charge that broke its limits.
fn odd(history: &History, rows: &HashMap<EntryId, &LogRow>, remarks: &mut Vec<Remark>) {
    let mut holds = MostHeld::default();
    for (index, line) in history.lines.iter().enumerate() {
        let full = history.facts_at(index).and_then(|facts| facts.full_charge);
        let most = holds.before(full, &line.act);
        let Some(row) = rows.get(&line.entry) else { continue };
        let mut say = |message: String| remarks.push(remark(row, message));
        match &line.act {
            Act::Charge { purpose, transfer } => {
                if full.is_some_and(|full| transfer.mass > full) {
                    say("more was charged at once than the appliance's full charge".to_owned());
                }
                if history.counted[index] && !purpose.nets_recovered() {
                    say(format!("this {purpose} charge is over what was recovered for it, or too late; it counts wholly as leak"));
                }
            }
            Act::Recover { transfer, .. } => {
                if full.is_some_and(|full| transfer.mass > full) {
                    say("more was recovered than the appliance's full charge".to_owned());
                } else if most.is_some_and(|most| transfer.mass > most) {
                    let most = most.unwrap_or_default().kg_text();
                    say(format!("more was recovered than the appliance can have held after the recoveries before, {most} kg"));
                }
            }
            Act::Test { kind: TestKind::InitialVerification, .. } if history.repair_before(index).is_none() => {
                say("an initial verification test without a repair before it".to_owned());
            }
            Act::Test { kind: TestKind::FollowUpVerification, .. } if history.repair_before(index).is_none() => {
                say("a follow-up verification test without a repair before it".to_owned());
            }
            Act::Test { kind: TestKind::FollowUpVerification, result: Some(TestResult::Pass), .. }
                if !history.is_follow_up_that_counts(index) =>
            {
                say("this follow-up test does not count: partial, or no initial test passed since the last repair".to_owned());
            }
            Act::Test { kind, .. } => {
                if let Some(refusal) = refusals::of_inspection(*kind, &row.method) {
                    say(format!("{}; it was taken as written", told(&refusal)));
                }
            }
            _ => {}
        }
    }
}

/// The most that an appliance can hold at a place in its history: its full
/// charge, less what was recovered, and charged again.
#[derive(Default)]
struct MostHeld {
    full: Option<Mass>,
    most: Option<Mass>,
}

impl MostHeld {
    /// The most just before an act; `None` while the full charge is not known.
    fn before(&mut self, full: Option<Mass>, act: &Act) -> Option<Mass> {
        if full != self.full {
            (self.full, self.most) = (full, full);
        }
        let before = self.most;
        self.most = match (before, self.full, act) {
            (Some(most), Some(full), Act::Charge { transfer, .. }) => Some((most + transfer.mass).min(full)),
            (Some(most), _, Act::Recover { transfer, .. }) => Some((most - transfer.mass).max(Mass::ZERO)),
            _ => before,
        };
        before
    }
}

/// What the law forbade, and what a cylinder cannot have held.
fn forbidden(site: &Site, history: &History, rows: &HashMap<EntryId, &LogRow>, cylinders: &mut Cylinders, remarks: &mut Vec<Remark>) {
    let mut standing: Option<ApplianceStanding> = None;
    for (index, line) in history.lines.iter().enumerate() {
        let Some(row) = rows.get(&line.entry) else { continue };
        let facts = history.facts_at(index).unwrap_or_else(|| &history.appliance.versions.first().facts);
        let date = history.date(index);
        let cylinder = cylinders.before(line.entry, line.act.cylinder(), date);
        let found = match (&line.act, cylinder) {
            (Act::Charge { purpose, transfer }, Some(cylinder)) => {
                let standing = at(&mut standing, site, history.appliance, facts, date);
                let refused = refusals::of_charge(standing, Some(cylinder), *purpose, transfer.mass, None, date);
                told_of(refused, cylinder).chain(over_content(standing, cylinder, transfer)).collect()
            }
            // Made with its charge, an appliance is not serviced.
            (Act::Charge { purpose, .. }, None) if *purpose != ChargePurpose::FactoryCharge => {
                let standing = at(&mut standing, site, history.appliance, facts, date);
                refusals::banned(standing, None, date).iter().filter(|refusal| !refusal.judgement).map(told).collect()
            }
            (Act::Recover { transfer, .. }, Some(cylinder)) => {
                let standing = at(&mut standing, site, history.appliance, facts, date);
                let refused = refusals::of_recovery(standing, cylinder, transfer.mass, None, default_oil_factor(), date);
                told_of(refused, cylinder).collect::<Vec<String>>()
            }
            (Act::Recycle { .. }, Some(cylinder)) => told_of(refusals::of_recycling(cylinder), cylinder).collect(),
            _ => Vec::new(),
        };
        remarks.extend(found.into_iter().map(|message| remark(row, message)));
        if let Act::Charge { purpose: ChargePurpose::Installation | ChargePurpose::FactoryCharge, .. } = line.act {
            let rulebooks = site.versions.on(date).map(|site| site.rulebooks.as_slice()).unwrap_or_default();
            let warnings = installation_bans(rulebooks, facts, date).into_iter();
            remarks.extend(warnings.map(|ban| remark(row, format!("put into operation where {} ({})", ban.forbids, ban.source))));
        }
    }
}

/// The appliance as it stood on a day. Made anew only where it changed.
fn at<'a>(
    standing: &'a mut Option<ApplianceStanding>,
    site: &Site,
    appliance: &Appliance,
    facts: &ApplianceFacts,
    date: NaiveDate,
) -> &'a ApplianceStanding {
    let site_facts = site.versions.on(date).unwrap_or_else(|| &site.versions.first().facts);
    let standing = standing.get_or_insert_with(|| ApplianceStanding {
        site: site.clone(),
        site_facts: site_facts.clone(),
        appliance: appliance.clone(),
        facts: facts.clone(),
        lines: Vec::new(),
        installed_on: None,
        retired_on: None,
        mothballed_on: None,
    });
    if standing.facts != *facts {
        standing.facts.clone_from(facts);
    }
    if standing.site_facts != *site_facts {
        standing.site_facts.clone_from(site_facts);
    }
    standing
}

/// Refusals of a new entry that are remarks on an old one: what the law does
/// not leave to judgement, and a cylinder filled over its limit. That no limit
/// can be worked out forbids a new filling, and says nothing of an old one.
fn told_of(refused: Vec<Refusal>, cylinder: &CylinderStanding) -> impl Iterator<Item = String> {
    let nameless = cylinder.balance.gas.is_none();
    refused
        .into_iter()
        .filter(|refusal| refusal.kind == Kind::OverLimit || !refusal.judgement && refusal.kind != Kind::NoLimit)
        // That nobody wrote down what is in a cylinder is nothing to say of each line.
        .filter(move |refusal| !nameless || !matches!(refusal.kind, Kind::OtherGas | Kind::NothingToRecycle))
        .map(|refusal| told(&refusal))
}

fn told(refusal: &Refusal) -> String {
    let sentence = refusal.sentence.strip_suffix(STOP_BEFORE).unwrap_or(&refusal.sentence).trim_end_matches('.');
    if refusal.source.is_empty() { sentence.to_owned() } else { format!("{sentence} ({})", refusal.source) }
}

/// A charge over what the cylinder held. Before its first weighing only what
/// it may hold at all speaks against a charge, or where that is not known,
/// what it held when it was weighed.
fn over_content(standing: &ApplianceStanding, cylinder: &CylinderStanding, transfer: &Transfer) -> Option<String> {
    let (name, facts) = (&cylinder.cylinder.name, &cylinder.facts);
    let most = || {
        let rules = LimitRules::under(&standing.site_facts.rulebooks, default_oil_factor());
        rules.limit_of(gas::find(&standing.facts.refrigerant)?, cylinder, false).binding.map(|limit| limit.net)
    };
    let (held, so) = match cylinder.balance.content.mass() {
        Some(held) => (held.max(Mass::ZERO), "held by what is on record"),
        None => match (most(), facts.gross) {
            (Some(most), _) => (most, "may hold"),
            (None, Some(gross)) => (gross - facts.tare, "held when it was weighed"),
            (None, None) => return None,
        },
    };
    (transfer.mass > held)
        .then(|| format!("{} kg were charged at once, more than cylinder {name} {so}, {} kg", transfer.mass.kg_text(), held.kg_text()))
}

/// The cylinders of a log, each as it stood before the entry looked at.
struct Cylinders<'a> {
    known: HashMap<CylinderId, &'a Cylinder>,
    names: HashSet<&'a str>,
    held: HashMap<EntryId, HeldBefore>,
    standing: HashMap<CylinderId, CylinderStanding>,
}

impl<'a> Cylinders<'a> {
    fn new(tx: &Writing<'_>, registers: &'a Registers, moved: &HashSet<CylinderId>) -> Result<Self, StoreError> {
        Ok(Self {
            known: registers.cylinders.iter().map(|cylinder| (cylinder.id, cylinder)).collect(),
            names: registers.cylinders.iter().map(|cylinder| cylinder.name.as_str()).collect(),
            held: held_before_entries(tx, registers, moved)?,
            standing: HashMap::new(),
        })
    }

    fn before(&mut self, entry: EntryId, cylinder: Option<CylinderId>, date: NaiveDate) -> Option<&CylinderStanding> {
        let cylinder = *self.known.get(&cylinder?)?;
        let HeldBefore { balance, recovered_from, owners } = self.held.remove(&entry)?;
        let facts: &CylinderFacts = cylinder.versions.on(date).unwrap_or_else(|| &cylinder.versions.first().facts);
        let standing = self.standing.entry(cylinder.id).or_insert_with(|| CylinderStanding {
            cylinder: cylinder.clone(),
            facts: facts.clone(),
            balance: balance.clone(),
            recovered_from: None,
            owners: std::collections::BTreeSet::new(),
        });
        if standing.facts != *facts {
            standing.facts.clone_from(facts);
        }
        (standing.balance, standing.recovered_from, standing.owners) = (balance, recovered_from, owners);
        Some(standing)
    }
}

/// An appliance that declares a leakage detection system, where the law wants
/// it checked, and no check on record: no duty can be worked out.
fn unchecked_detection_systems(
    tx: &Writing<'_>,
    app: &App,
    parts: &Parts,
    registers: &Registers,
    remarks: &mut Vec<Remark>,
) -> Result<(), StoreError> {
    let mut looked_at: HashSet<ApplianceId> = HashSet::new();
    for row in parts.appliances.iter().rev().filter(|row| row.facts.leakage_detection_system) {
        let Some(site) = registers.site_named(&row.site) else { continue };
        let Some(appliance) = registers.appliances_at(site.id).find(|appliance| appliance.name == row.name) else { continue };
        let today = app.today_there(site);
        let site_facts = site.versions.on(today).unwrap_or_else(|| site.versions.latest());
        let asked = site_facts
            .rulebooks
            .iter()
            .filter_map(|id| rulebook(id))
            .find_map(|book| book.duties.iter().find(|row| row.duty == DutyKind::DetectionSystemCheck && row.holds_on(today)));
        let declared = appliance.versions.on(today).is_some_and(|facts| facts.leakage_detection_system);
        let Some(asked) = asked.filter(|_| declared && looked_at.insert(appliance.id)) else { continue };
        if !tx.lines_of(appliance.id)?.iter().any(|line| line.act == Act::DetectionSystemCheck) {
            let message = format!(
                "a leakage detection system is declared and no check of it is on record; write down the last one ({})",
                asked.source
            );
            remarks.push(Remark { file: row.file.clone(), line: row.line, message });
        }
    }
    Ok(())
}
