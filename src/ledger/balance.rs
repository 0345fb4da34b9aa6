//! The fold from entries to what a cylinder holds and what an appliance took:
//! the only place where masses are added up for a balance.

use super::{Act, ApplianceId, Cylinder, CylinderFacts, CylinderId, Dated, EntryId, GasStatus, Line, Moment, Position};
use crate::quantity::Mass;
use chrono::NaiveDate;

/// Gas that went into or out of a cylinder, or was made fit for use in it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Movement {
    pub cylinder: CylinderId,
    pub appliance: ApplianceId,
    pub entry: EntryId,
    pub at: Moment,
    pub position: Position,
    pub kind: MovementKind,
    /// The cylinder with its tare when it was over, where it was weighed so.
    pub gross_after: Option<Mass>,
    pub division: Option<Mass>,
}

/// What happened, seen from the cylinder.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum MovementKind {
    /// Charged into the appliance.
    Out(Mass),
    /// Recovered from the appliance.
    Into(Mass),
    /// The content was made recycled gas.
    Recycled,
}

/// How much is in a cylinder.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Content {
    Known(Mass),
    /// It was never weighed with its tare.
    NotWeighed,
}

impl Content {
    pub fn mass(self) -> Option<Mass> {
        match self {
            Self::Known(mass) => Some(mass),
            Self::NotWeighed => None,
        }
    }

    fn plus(self, mass: Mass) -> Self {
        match self {
            Self::Known(before) => Self::Known(before + mass),
            Self::NotWeighed => Self::NotWeighed,
        }
    }

    fn holds_nothing(self) -> bool {
        self.mass().is_some_and(|mass| !mass.is_positive())
    }
}

/// A gross weight to compare the next reading with.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct KnownGross {
    pub gross: Mass,
    /// When; `None`: from the register, from the beginning.
    pub at: Option<Moment>,
    /// Read from a scale; else calculated from a zeroed or net weighing.
    pub read: bool,
    /// Division of the scale it was last weighed on.
    pub division: Option<Mass>,
}

/// What a cylinder holds.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct CylinderBalance {
    pub content: Content,
    /// Gas in it, or last in it; `None`: none yet.
    pub gas: Option<String>,
    pub status: Option<GasStatus>,
    /// `None` while it was never weighed.
    pub last_gross: Option<KnownGross>,
}

impl CylinderBalance {
    /// Two gases in one cylinder.
    pub fn is_mixed(&self) -> bool {
        self.status == Some(GasStatus::Mixed)
    }
}

enum Event<'a> {
    Version(&'a Dated<CylinderFacts>),
    Movement(&'a Movement),
}

/// Folds a cylinder's register versions and movements, in any order and of
/// any cylinders, up to and with the day `on`. `gas_of` names the gas that the
/// appliance of a movement held then.
///
/// A gross reading settles the content anew; between two of them transfers
/// are added. A version with a weighing counts from the start of its day.
/// Another gas on top of some makes a mix, and nothing unmakes it but a
/// version that says so.
pub fn cylinder_balance(
    cylinder: &Cylinder,
    movements: &[Movement],
    on: NaiveDate,
    gas_of: &dyn Fn(&Movement) -> Option<String>,
) -> CylinderBalance {
    follow_cylinder(cylinder, movements, on, gas_of, &mut |_, _| {})
}

/// As [`cylinder_balance`]; `before` is told each movement and what the
/// cylinder held until then.
pub fn follow_cylinder(
    cylinder: &Cylinder,
    movements: &[Movement],
    on: NaiveDate,
    gas_of: &dyn Fn(&Movement) -> Option<String>,
    before: &mut dyn FnMut(&Movement, &CylinderBalance),
) -> CylinderBalance {
    let versions = cylinder.versions.all().iter().filter(|version| version.from.is_none_or(|from| from <= on));
    let moved = movements.iter().filter(|movement| movement.cylinder == cylinder.id && movement.at.date <= on);
    let mut events: Vec<((Option<NaiveDate>, Position), Event)> = versions
        .map(|version| ((version.from, 0), Event::Version(version)))
        .chain(moved.map(|movement| ((Some(movement.at.date), movement.position), Event::Movement(movement))))
        .collect();
    events.sort_by_key(|(at, _)| *at);

    let mut balance = CylinderBalance { content: Content::NotWeighed, gas: None, status: None, last_gross: None };
    let mut facts: Option<&CylinderFacts> = None;
    for (_, event) in events {
        match event {
            Event::Version(version) => {
                balance.take_version(version, facts);
                facts = Some(&version.facts);
            }
            Event::Movement(movement) => {
                before(movement, &balance);
                // History may know of transfers from before the first version.
                let tare = facts.map_or_else(|| cylinder.versions.first().facts.tare, |facts| facts.tare);
                balance.take_movement(movement, tare, gas_of);
            }
        }
    }
    balance
}

impl CylinderBalance {
    fn take_version(&mut self, version: &Dated<CylinderFacts>, before: Option<&CylinderFacts>) {
        let facts = &version.facts;
        let weighed_anew = facts.gross.filter(|gross| before.is_none_or(|before| before.gross != Some(*gross)));
        if before.is_none_or(|before| before.refrigerant != facts.refrigerant || before.gas_status != facts.gas_status)
            || weighed_anew.is_some()
        {
            self.gas.clone_from(&facts.refrigerant);
            self.status = facts.gas_status;
        }
        if let Some(gross) = weighed_anew {
            self.content = Content::Known(gross - facts.tare);
            let at = version.from.map(|date| Moment { date, minute: None });
            let division = facts.gross_written.as_ref().map(crate::quantity::Weighing::last_digit);
            self.last_gross = Some(KnownGross { gross, at, read: true, division });
        } else if before.is_none() && facts.refrigerant.is_none() {
            // No gas was ever named in it: it is empty.
            self.content = Content::Known(Mass::ZERO);
        }
    }

    fn take_movement(&mut self, movement: &Movement, tare: Mass, gas_of: &dyn Fn(&Movement) -> Option<String>) {
        match movement.kind {
            MovementKind::Out(mass) => self.content = self.content.plus(-mass),
            MovementKind::Into(mass) => {
                self.take_in(gas_of(movement));
                self.content = self.content.plus(mass);
            }
            MovementKind::Recycled => {
                if self.status == Some(GasStatus::Recovered) {
                    self.status = Some(GasStatus::Recycled);
                }
                return;
            }
        }
        if let Some(gross) = movement.gross_after {
            self.content = Content::Known(gross - tare);
        }
        let gross = self.content.mass().map(|content| content + tare);
        self.last_gross = gross.map(|gross| KnownGross {
            gross,
            at: Some(movement.at),
            read: movement.gross_after.is_some(),
            division: movement.division,
        });
    }

    fn take_in(&mut self, gas: Option<String>) {
        let was_empty = self.gas.is_none() || self.content.holds_nothing();
        let other = gas.is_some() && self.gas != gas;
        if was_empty {
            self.gas = gas.or_else(|| self.gas.take());
            self.status = Some(GasStatus::Recovered);
        } else if other || self.is_mixed() {
            self.status = Some(GasStatus::Mixed);
        } else {
            self.status = Some(GasStatus::Recovered);
        }
    }
}

/// What an appliance took and gave, whatever the purpose.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub struct ApplianceTotals {
    pub charged: Mass,
    pub recovered: Mass,
}

/// Adds up the transfers of one appliance from `from` to `to`, both included.
pub fn appliance_totals<'a>(lines: impl IntoIterator<Item = &'a Line>, from: NaiveDate, to: NaiveDate) -> ApplianceTotals {
    let mut totals = ApplianceTotals::default();
    for line in lines.into_iter().filter(|line| (from..=to).contains(&line.at.date)) {
        match &line.act {
            Act::Charge { transfer, .. } => totals.charged += transfer.mass,
            Act::Recover { transfer, .. } => totals.recovered += transfer.mass,
            _ => {}
        }
    }
    totals
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ledger::{CylinderKind, Versions};
    use crate::quantity::{MassUnit, Weighing};
    use uuid::Uuid;

    fn kg(text: &str) -> Mass {
        Mass::parse(text, MassUnit::Kilogram).unwrap()
    }

    fn day(text: &str) -> NaiveDate {
        text.parse().unwrap()
    }

    fn facts(gas: Option<&str>, status: Option<GasStatus>, gross: Option<&str>) -> CylinderFacts {
        CylinderFacts {
            refrigerant: gas.map(str::to_owned),
            gas_status: status,
            gross: gross.map(kg),
            gross_written: gross.map(|gross| Weighing::new(gross, MassUnit::Kilogram)),
            ..CylinderFacts::new(CylinderKind::Recovery, kg("10"), Weighing::new("10", MassUnit::Kilogram))
        }
    }

    fn cylinder(facts: CylinderFacts) -> Cylinder {
        Cylinder { id: CylinderId(Uuid::from_u128(1)), name: "S-204".to_owned(), versions: Versions::always(facts) }
    }

    fn movement(position: Position, date: &str, kind: MovementKind, gross_after: Option<&str>) -> Movement {
        Movement {
            cylinder: CylinderId(Uuid::from_u128(1)),
            appliance: ApplianceId(Uuid::from_u128(position.unsigned_abs().into())),
            entry: EntryId(Uuid::from_u128(7)),
            at: Moment { date: day(date), minute: None },
            position,
            kind,
            gross_after: gross_after.map(kg),
            division: Some(kg("0.01")),
        }
    }

    fn r22(_: &Movement) -> Option<String> {
        Some("R-22".to_owned())
    }

    #[test]
    fn transfers_add_up_and_a_gross_reading_settles() {
        let virgin = cylinder(facts(Some("R-22"), Some(GasStatus::Virgin), Some("20")));
        let moved = [
            movement(2, "2026-03-02", MovementKind::Out(kg("2")), Some("16.9")),
            movement(1, "2026-03-01", MovementKind::Out(kg("1.5")), None),
        ];
        let after = |on| cylinder_balance(&virgin, &moved, day(on), &r22);
        assert_eq!(after("2026-02-28").content, Content::Known(kg("10")));
        let first = after("2026-03-01");
        assert_eq!((first.content, first.last_gross.unwrap().read), (Content::Known(kg("8.5")), false));
        assert_eq!(first.last_gross.unwrap().gross, kg("18.5"));
        let second = after("2026-03-02");
        assert_eq!((second.content, second.last_gross.unwrap().read), (Content::Known(kg("6.9")), true));
        assert_eq!(second.status, Some(GasStatus::Virgin));
    }

    #[test]
    fn recovered_gas_is_recovered_until_recycled() {
        let empty = cylinder(facts(None, None, None));
        let moved = [movement(1, "2026-03-01", MovementKind::Into(kg("3")), None), movement(2, "2026-03-02", MovementKind::Recycled, None)];
        let recovered = cylinder_balance(&empty, &moved, day("2026-03-01"), &r22);
        assert_eq!((recovered.gas.as_deref(), recovered.status), (Some("R-22"), Some(GasStatus::Recovered)));
        assert_eq!(recovered.content, Content::Known(kg("3")));
        assert_eq!(cylinder_balance(&empty, &moved, day("2026-03-02"), &r22).status, Some(GasStatus::Recycled));
    }

    #[test]
    fn two_gases_make_a_mix_that_stays() {
        let gas = |movement: &Movement| Some(if movement.position == 1 { "R-22" } else { "R-410A" }.to_owned());
        let moved = [
            movement(1, "2026-03-01", MovementKind::Into(kg("3")), None),
            movement(2, "2026-03-02", MovementKind::Into(kg("1")), None),
            movement(3, "2026-03-03", MovementKind::Recycled, None),
        ];
        let mixed = cylinder_balance(&cylinder(facts(None, None, None)), &moved, day("2026-03-03"), &gas);
        assert!(mixed.is_mixed());
    }

    #[test]
    fn an_emptied_cylinder_takes_another_gas() {
        let emptied = cylinder(facts(Some("R-410A"), Some(GasStatus::Recovered), Some("10")));
        let moved = [movement(1, "2026-03-01", MovementKind::Into(kg("3")), None)];
        let balance = cylinder_balance(&emptied, &moved, day("2026-03-01"), &r22);
        assert_eq!((balance.gas.as_deref(), balance.status), (Some("R-22"), Some(GasStatus::Recovered)));
    }

    #[test]
    fn a_refill_at_the_supplier_begins_anew() {
        let mut refilled = cylinder(facts(Some("R-22"), Some(GasStatus::Virgin), Some("20")));
        let again =
            Dated { from: Some(day("2026-04-01")), reason: None, facts: facts(Some("R-22"), Some(GasStatus::Reclaimed), Some("21")) };
        refilled.versions = Versions::new([refilled.versions.all().to_vec(), vec![again]].concat()).unwrap();
        let moved =
            [movement(1, "2026-03-01", MovementKind::Out(kg("9")), None), movement(2, "2026-04-01", MovementKind::Out(kg("1")), None)];
        let balance = cylinder_balance(&refilled, &moved, day("2026-04-01"), &r22);
        assert_eq!((balance.content, balance.status), (Content::Known(kg("10")), Some(GasStatus::Reclaimed)));
    }

    #[test]
    fn an_edit_without_a_new_weighing_keeps_the_content() {
        let mut moved_to_van = cylinder(facts(Some("R-22"), Some(GasStatus::Virgin), Some("20")));
        let mut elsewhere = facts(Some("R-22"), Some(GasStatus::Virgin), Some("20"));
        elsewhere.location = "van 2".to_owned();
        let again = Dated { from: Some(day("2026-04-01")), reason: None, facts: elsewhere };
        moved_to_van.versions = Versions::new([moved_to_van.versions.all().to_vec(), vec![again]].concat()).unwrap();
        let moved = [movement(1, "2026-03-01", MovementKind::Out(kg("9")), None)];
        let balance = cylinder_balance(&moved_to_van, &moved, day("2026-04-02"), &r22);
        assert_eq!(balance.content, Content::Known(kg("1")));
    }
}
