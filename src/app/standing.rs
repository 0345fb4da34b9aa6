//! What holds for an appliance and a cylinder at the moment something is
//! entered: what the rules for new entries look at.

use super::{App, AppError};
use crate::ledger::{
    Act, Appliance, ApplianceFacts, ApplianceId, Cylinder, CylinderBalance, CylinderFacts, CylinderId, EntryId, KnownGross, Line, Movement,
    MovementKind, Registers, Site, SiteFacts, follow_cylinder,
};
use crate::measure::{ScaleReading, Uncertainty};
use crate::quantity::Mass;
use crate::rules::History;
use crate::store::{Store, StoreError};
use chrono::NaiveDate;
use std::collections::{BTreeSet, HashMap, HashSet};

/// An appliance on a day.
#[derive(Debug, Clone)]
pub struct ApplianceStanding {
    pub site: Site,
    pub site_facts: SiteFacts,
    pub appliance: Appliance,
    /// With what retrofits changed.
    pub facts: ApplianceFacts,
    pub lines: Vec<Line>,
    /// See [`Appliance::there_since`].
    pub installed_on: Option<NaiveDate>,
    pub retired_on: Option<NaiveDate>,
    /// Mothballed and not charged since.
    pub mothballed_on: Option<NaiveDate>,
}

/// A cylinder on a day.
#[derive(Debug, Clone)]
pub struct CylinderStanding {
    pub cylinder: Cylinder,
    pub facts: CylinderFacts,
    pub balance: CylinderBalance,
    /// All gas in it was recovered from appliances of one owner: that owner.
    pub recovered_from: Option<String>,
    /// All known owners of what was recovered into it since it was last empty.
    pub owners: BTreeSet<String>,
}

/// A first reading that differs from the last gross known by more than both
/// scales' error: why, is asked.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct WeighingGap {
    pub known: KnownGross,
    /// Today's reading less the known one.
    pub difference: Mass,
}

impl CylinderStanding {
    /// Compares a gross reading with the last known one.
    pub fn gap(&self, reading: Mass, division: Mass) -> Option<WeighingGap> {
        let known = self.balance.last_gross?;
        let difference = reading - known.gross;
        let of = |division| ScaleReading { mass: Mass::ZERO, division, stated_error: None };
        let error = Uncertainty::default().with_reading(of(division)).with_reading(of(known.division.unwrap_or(division)));
        (!error.covers(difference)).then_some(WeighingGap { known, difference })
    }
}

impl App {
    /// What holds for an appliance on a day.
    ///
    /// # Errors
    /// Unknown appliance; the store's own.
    pub fn appliance_standing(&self, appliance: ApplianceId, on: NaiveDate) -> Result<ApplianceStanding, AppError> {
        appliance_standing(&self.store, appliance, on, None)
    }

    /// What holds for a cylinder on a day.
    ///
    /// # Errors
    /// Unknown cylinder; the store's own.
    pub fn cylinder_standing(&self, cylinder: CylinderId, on: NaiveDate) -> Result<CylinderStanding, AppError> {
        cylinder_standing(&self.store, cylinder, on, None)
    }

    /// Every cylinder on a day, in order of identification.
    ///
    /// # Errors
    /// The store's own.
    pub fn cylinders(&self, on: NaiveDate) -> Result<Vec<CylinderStanding>, AppError> {
        let registers = self.store.registers()?;
        let movements = self.store.movements()?;
        let appliances: HashSet<ApplianceId> = filled_from(&movements);
        let lines = if appliances.is_empty() { Vec::new() } else { self.store.lines()? };
        let origins = origins(&registers, &lines, &movements);
        let by_cylinder = by_cylinder(&movements);
        let standing = |cylinder: &Cylinder| {
            let own = by_cylinder.get(&cylinder.id).map_or(&[][..], Vec::as_slice);
            stand(cylinder.clone(), own, on, &origins)
        };
        Ok(registers.cylinders.iter().map(standing).collect())
    }
}

/// `without` leaves out an entry that is about to be corrected; likewise below.
pub(super) fn appliance_standing(
    store: &Store,
    appliance: ApplianceId,
    on: NaiveDate,
    without: Option<EntryId>,
) -> Result<ApplianceStanding, AppError> {
    let appliance = store.appliance(appliance)?.ok_or(AppError::Unknown { what: "appliance" })?;
    let site = store.site(appliance.site)?.ok_or(AppError::Unknown { what: "site" })?;
    let mut lines = store.lines_of(appliance.id)?;
    lines.retain(|line| Some(line.entry) != without);
    let history = History::new(&appliance, &lines, on);
    // Before the first version, the first version is the best there is.
    let facts = history.facts_on(on).unwrap_or_else(|| &appliance.versions.first().facts).clone();
    let site_facts = site.versions.on(on).unwrap_or_else(|| &site.versions.first().facts).clone();
    let last_charge = history.lines.iter().rposition(|line| matches!(line.act, Act::Charge { .. }));
    let mothballed = history.lines.iter().rposition(|line| line.act == Act::Mothball);
    let mothballed_on = mothballed.filter(|mothball| last_charge.is_none_or(|charge| charge < *mothball)).map(|index| history.date(index));
    let retired_on = lines.iter().find(|line| line.act == Act::Retire).map(|line| line.at.date);
    let installed_on = appliance.there_since();
    Ok(ApplianceStanding { site_facts, facts, installed_on, retired_on, mothballed_on, site, appliance, lines })
}

pub(super) fn cylinder_standing(
    store: &Store,
    cylinder: CylinderId,
    on: NaiveDate,
    without: Option<EntryId>,
) -> Result<CylinderStanding, AppError> {
    let cylinder = store.cylinder(cylinder)?.ok_or(AppError::Unknown { what: "cylinder" })?;
    let mut movements = store.movements_of(cylinder.id)?;
    movements.retain(|movement| Some(movement.entry) != without);
    let mut registers = Registers::default();
    let mut lines = Vec::new();
    for id in filled_from(&movements) {
        lines.extend(store.lines_of(id)?);
        if let Some(appliance) = store.appliance(id)? {
            registers.sites.extend(store.site(appliance.site)?);
            registers.appliances.push(appliance);
        }
    }
    let origins = origins(&registers, &lines, &movements);
    Ok(stand(cylinder, &movements, on, &origins))
}

/// What a cylinder held just before an entry, and whose gas it was.
#[derive(Debug, Clone)]
pub(super) struct HeldBefore {
    pub balance: CylinderBalance,
    /// As in [`CylinderStanding`].
    pub recovered_from: Option<String>,
    pub owners: BTreeSet<String>,
}

/// What each of these cylinders held just before each entry that moved its gas.
pub(super) fn held_before_entries(
    store: &Store,
    registers: &Registers,
    cylinders: &HashSet<CylinderId>,
) -> Result<HashMap<EntryId, HeldBefore>, StoreError> {
    let mut movements = store.movements()?;
    movements.retain(|movement| cylinders.contains(&movement.cylinder));
    let mut lines = Vec::new();
    for id in filled_from(&movements) {
        lines.extend(store.lines_of(id)?);
    }
    let origins = origins(registers, &lines, &movements);
    let gas_of = |movement: &Movement| origins.get(&movement.entry).map(|(gas, _)| gas.clone());
    let mut held = HashMap::new();
    for (id, movements) in by_cylinder(&movements) {
        let Some(cylinder) = registers.cylinder(id) else { continue };
        let mut owners = Owners::of(cylinder);
        follow_cylinder(cylinder, &movements, NaiveDate::MAX, &gas_of, &mut |movement, balance| {
            let before = HeldBefore { balance: balance.clone(), recovered_from: owners.sole(), owners: owners.known() };
            held.insert(movement.entry, before);
            owners.take(movement, balance, &origins);
        });
    }
    Ok(held)
}

/// Gas and owner, by entry, of everything that was recovered.
type Origins = HashMap<EntryId, (String, String)>;

fn filled_from(movements: &[Movement]) -> HashSet<ApplianceId> {
    movements.iter().filter(|movement| matches!(movement.kind, MovementKind::Into(_))).filter_map(|movement| movement.appliance).collect()
}

fn by_cylinder(movements: &[Movement]) -> HashMap<CylinderId, Vec<Movement>> {
    let mut sorted: HashMap<CylinderId, Vec<Movement>> = HashMap::new();
    for movement in movements {
        sorted.entry(movement.cylinder).or_default().push(movement.clone());
    }
    sorted
}

/// `lines` are in order of appliance.
fn origins(registers: &Registers, lines: &[Line], movements: &[Movement]) -> Origins {
    let recovered: HashSet<EntryId> =
        movements.iter().filter(|movement| matches!(movement.kind, MovementKind::Into(_))).map(|movement| movement.entry).collect();
    let appliances: HashMap<ApplianceId, &Appliance> = registers.appliances.iter().map(|appliance| (appliance.id, appliance)).collect();
    let sites: HashMap<_, &Site> = registers.sites.iter().map(|site| (site.id, site)).collect();
    let mut origins = Origins::new();
    for of_one in lines.chunk_by(|a, b| a.appliance == b.appliance) {
        if !of_one.iter().any(|line| recovered.contains(&line.entry)) {
            continue;
        }
        let Some(appliance) = of_one.first().and_then(|line| appliances.get(&line.appliance)) else { continue };
        let history = History::new(appliance, of_one, NaiveDate::MAX);
        for (index, line) in history.lines.iter().enumerate().filter(|(_, line)| recovered.contains(&line.entry)) {
            let facts = history.facts_at(index).unwrap_or_else(|| &appliance.versions.first().facts);
            let owner = sites.get(&appliance.site).and_then(|site| site.versions.on(line.at.date)).map(|site| site.owner.clone());
            origins.insert(line.entry, (facts.refrigerant.clone(), owner.unwrap_or_default()));
        }
    }
    origins
}

fn stand(cylinder: Cylinder, movements: &[Movement], on: NaiveDate, origins: &Origins) -> CylinderStanding {
    let gas_of = |movement: &Movement| origins.get(&movement.entry).map(|(gas, _)| gas.clone());
    let mut owners = Owners::of(&cylinder);
    let balance = follow_cylinder(&cylinder, movements, on, &gas_of, &mut |movement, balance| owners.take(movement, balance, origins));
    let facts = cylinder.versions.on(on).unwrap_or_else(|| &cylinder.versions.first().facts).clone();
    CylinderStanding { facts, balance, recovered_from: owners.sole(), owners: owners.known(), cylinder }
}

/// Whose recovered gas is in a cylinder.
struct Owners {
    /// Gas that was in it from the beginning is of whoever the register says.
    from_the_beginning: bool,
    /// Empty for an owner that nobody wrote down.
    names: BTreeSet<String>,
}

impl Owners {
    fn of(cylinder: &Cylinder) -> Self {
        Self { from_the_beginning: cylinder.versions.first().facts.refrigerant.is_some(), names: BTreeSet::new() }
    }

    /// `before` is what the cylinder held before the movement: gas in an empty one is nobody's but its giver's.
    fn take(&mut self, movement: &Movement, before: &CylinderBalance, origins: &Origins) {
        let filled = matches!(movement.kind, MovementKind::Into(_) | MovementKind::Bought { .. });
        if filled && before.content.mass().is_some_and(|held| !held.is_positive()) {
            *self = Self { from_the_beginning: false, names: BTreeSet::new() };
        }
        match movement.kind {
            MovementKind::Into(_) => {
                let owner = origins.get(&movement.entry).map_or("", |(_, owner)| owner.trim());
                if !self.names.iter().any(|known| known.eq_ignore_ascii_case(owner)) {
                    self.names.insert(owner.to_owned());
                }
            }
            // A supplier's gas has no owner before.
            MovementKind::Bought { .. } => self.from_the_beginning = true,
            _ => {}
        }
    }

    /// The one from whose appliances all of it was recovered.
    fn sole(&self) -> Option<String> {
        let sole = self.names.first().filter(|owner| self.names.len() == 1 && !owner.is_empty())?;
        (!self.from_the_beginning).then(|| sole.clone())
    }

    fn known(&self) -> BTreeSet<String> {
        self.names.iter().filter(|owner| !owner.is_empty()).cloned().collect()
    }
}
