//! The fold from entries to what a cylinder holds and what an appliance took:
//! the only place where masses are added up for a balance.

use super::{ApplianceId, Cylinder, CylinderFacts, CylinderId, EntryId, GasStatus, Moment, Position, ReadAt};
use crate::quantity::{Mass, Weighing};
use chrono::{DateTime, NaiveDate, Utc};

/// Gas that went into or out of a cylinder, or was made fit for use in it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Movement {
    pub cylinder: CylinderId,
    /// `None`: an entry of the cylinder's own book.
    pub appliance: Option<ApplianceId>,
    pub entry: EntryId,
    pub at: Moment,
    /// The same in UTC; where history gives no time, the start of its day.
    pub instant: DateTime<Utc>,
    pub position: Position,
    pub kind: MovementKind,
    /// The cylinder with its tare when it was over, where it was weighed so.
    pub gross_after: Option<Mass>,
    pub division: Option<Mass>,
}

/// What happened, seen from the cylinder.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum MovementKind {
    /// Charged into the appliance.
    Out(Mass),
    /// Recovered from the appliance.
    Into(Mass),
    /// The content was made recycled gas.
    Recycled,
    /// Came from a supplier.
    Bought { refrigerant: String, status: GasStatus, mass: Mass },
    /// Sent away, returned or lost.
    Left(Mass),
    /// Weighed where it stands.
    Weighed,
}

impl MovementKind {
    /// What the cylinder holds more afterwards.
    fn gain(&self) -> Mass {
        match self {
            Self::Out(mass) | Self::Left(mass) => -*mass,
            Self::Into(mass) | Self::Bought { mass, .. } => *mass,
            Self::Recycled | Self::Weighed => Mass::ZERO,
        }
    }
}

impl Movement {
    /// Whether the gas had moved when something was read. What was written
    /// down later may still have happened earlier; history without a time
    /// happened by the day's readings.
    fn is_before(&self, reading: &ReadAt) -> bool {
        self.position <= reading.after
            || match self.at.minute {
                Some(_) => self.instant < reading.instant,
                None => self.at.date <= reading.at.date,
            }
    }
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
    /// The content follows from a weighing that came only later.
    pub worked_back: bool,
    /// What was left in it when it was last filled, where that is known.
    pub heel: Option<Mass>,
    /// Gas in it, or last in it; `None`: none yet.
    pub gas: Option<String>,
    pub status: Option<GasStatus>,
    /// `None` while it was never weighed.
    pub last_gross: Option<KnownGross>,
}

impl CylinderBalance {
    /// Of a cylinder about which nothing is known.
    pub const UNKNOWN: Self =
        Self { content: Content::NotWeighed, worked_back: false, heel: None, gas: None, status: None, last_gross: None };

    /// Two gases in one cylinder.
    pub fn is_mixed(&self) -> bool {
        self.status == Some(GasStatus::Mixed)
    }
}

#[derive(Clone, Copy)]
enum Event<'a> {
    /// Gas and status were written down.
    Told(&'a CylinderFacts),
    /// No gas was ever named in it: it is empty.
    Empty,
    Weighed {
        gross: Mass,
        tare: Mass,
        at: Option<Moment>,
        division: Option<Mass>,
    },
    Moved {
        movement: &'a Movement,
        tare: Mass,
    },
}

/// An event with its day; `None`: from the beginning.
type OnDay<'a> = (Option<NaiveDate>, Event<'a>);

/// Folds a cylinder's register versions and movements, in any order and of
/// any cylinders, up to and with the day `on`. `gas_of` names the gas that the
/// appliance of a movement held then.
///
/// A gross reading settles the content anew, wherever it was taken; between
/// two of them transfers are added. Before the first of them the content is
/// worked back from it. Another gas on top of some makes a mix, and nothing
/// unmakes it but a version that says so.
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
    let mut fold = Fold { balance: CylinderBalance::UNKNOWN, filling: false };
    let (by_then, later): (Vec<OnDay>, Vec<OnDay>) =
        events(cylinder, movements).into_iter().partition(|(day, _)| day.is_none_or(|day| day <= on));
    for (_, event) in by_then {
        if let Event::Moved { movement, .. } = event {
            before(movement, &fold.balance);
        }
        fold.take(event, gas_of);
    }
    if fold.balance.content == Content::NotWeighed {
        fold.balance.work_back(later);
    }
    fold.balance
}

/// All that ever happened to a cylinder, in order.
fn events<'a>(cylinder: &'a Cylinder, movements: &'a [Movement]) -> Vec<OnDay<'a>> {
    let mut moved: Vec<&Movement> = movements.iter().filter(|movement| movement.cylinder == cylinder.id).collect();
    // By the world's clock: sites and the shop may be on different ones.
    moved.sort_by_key(|movement| (movement.instant, movement.position));
    // Each with the number of movements that come before it.
    let mut read: Vec<(usize, OnDay)> = Vec::new();
    let mut before: Option<&CylinderFacts> = None;
    for version in cylinder.versions.all() {
        let facts = &version.facts;
        let place = |mark: Option<&ReadAt>| match (mark, version.from) {
            (Some(mark), _) => (moved.iter().rposition(|movement| movement.is_before(mark)).map_or(0, |last| last + 1), Some(mark.at.date)),
            (None, Some(from)) => (moved.iter().rposition(|movement| movement.at.date < from).map_or(0, |last| last + 1), Some(from)),
            (None, None) => (0, None),
        };
        let told_anew = before.is_none_or(|before| {
            (&before.refrigerant, before.gas_status, before.gas_told) != (&facts.refrigerant, facts.gas_status, facts.gas_told)
        });
        if told_anew {
            let (index, day) = place(facts.gas_told.as_ref());
            read.push((index, (day, Event::Told(facts))));
        }
        let weighed_anew = before.is_none_or(|before| (before.gross, before.weighed) != (facts.gross, facts.weighed));
        if let Some(gross) = facts.gross.filter(|_| weighed_anew) {
            let (index, day) = place(facts.weighed.as_ref());
            let at = facts.weighed.map(|mark| mark.at).or(day.map(|date| Moment { date, minute: None }));
            let division = facts.gross_written.as_ref().map(Weighing::last_digit);
            read.push((index, (day, Event::Weighed { gross, tare: facts.tare, at, division })));
        } else if before.is_none() && facts.refrigerant.is_none() {
            let (index, day) = place(None);
            read.push((index, (day, Event::Empty)));
        }
        before = Some(facts);
    }
    read.sort_by_key(|(index, _)| *index);
    let mut read = read.into_iter().peekable();
    let mut events = Vec::with_capacity(moved.len() + read.len());
    for (index, movement) in moved.into_iter().enumerate() {
        while let Some((_, event)) = read.next_if(|(place, _)| *place <= index) {
            events.push(event);
        }
        // History may know of transfers from before the first version.
        let tare = cylinder.versions.on(movement.at.date).unwrap_or_else(|| &cylinder.versions.first().facts).tare;
        events.push((Some(movement.at.date), Event::Moved { movement, tare }));
    }
    events.extend(read.map(|(_, event)| event));
    events
}

/// A balance in the making.
struct Fold {
    balance: CylinderBalance,
    /// Nothing was drawn off since gas last came in.
    filling: bool,
}

impl Fold {
    fn take(&mut self, event: Event, gas_of: &dyn Fn(&Movement) -> Option<String>) {
        if let Event::Moved { movement, .. } = event {
            match &movement.kind {
                MovementKind::Into(_) | MovementKind::Bought { .. } if !self.filling => {
                    self.balance.heel = self.balance.content.mass();
                    self.filling = true;
                }
                MovementKind::Out(_) | MovementKind::Left(_) => self.filling = false,
                _ => {}
            }
        }
        self.balance.take(event, gas_of);
    }
}

impl CylinderBalance {
    fn take(&mut self, event: Event, gas_of: &dyn Fn(&Movement) -> Option<String>) {
        match event {
            Event::Told(facts) => {
                if self.gas != facts.refrigerant {
                    self.heel = None;
                }
                self.gas.clone_from(&facts.refrigerant);
                self.status = facts.gas_status;
            }
            Event::Empty => self.content = Content::Known(Mass::ZERO),
            Event::Weighed { gross, tare, at, division } => {
                self.content = Content::Known(gross - tare);
                self.last_gross = Some(KnownGross { gross, at, read: true, division });
            }
            Event::Moved { movement, tare } => self.take_movement(movement, tare, gas_of),
        }
        // What was drawn off below the heel was heel.
        let content = self.content.mass();
        self.heel = self.heel.map(|heel| content.map_or(heel, |content| heel.min(content)).max(Mass::ZERO));
    }

    fn take_movement(&mut self, movement: &Movement, tare: Mass, gas_of: &dyn Fn(&Movement) -> Option<String>) {
        match &movement.kind {
            MovementKind::Out(_) | MovementKind::Left(_) | MovementKind::Weighed => {}
            MovementKind::Into(_) => self.take_in(gas_of(movement), GasStatus::Recovered),
            MovementKind::Bought { refrigerant, status, .. } => self.take_in(Some(refrigerant.clone()), *status),
            MovementKind::Recycled => {
                if self.status == Some(GasStatus::Recovered) {
                    self.status = Some(GasStatus::Recycled);
                }
                return;
            }
        }
        self.content = self.content.plus(movement.kind.gain());
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

    /// Gas on top of the same gas is no better than the worse of the two.
    fn take_in(&mut self, gas: Option<String>, status: GasStatus) {
        let was_empty = self.gas.is_none() || self.content.holds_nothing();
        let other = gas.is_some() && self.gas != gas;
        if was_empty {
            self.gas = gas.or_else(|| self.gas.take());
            self.status = Some(status);
        } else if other || self.is_mixed() {
            self.status = Some(GasStatus::Mixed);
        } else if self.status.is_none_or(|held| purity(status) < purity(held)) {
            self.status = Some(status);
        }
    }

    /// The first weighing to come, less what came in until then and more what went out.
    fn work_back(&mut self, later: Vec<OnDay>) {
        let mut gained = Mass::ZERO;
        for (_, event) in later {
            let weighed = match event {
                Event::Weighed { gross, tare, .. } => Some(gross - tare),
                Event::Moved { movement, tare } => {
                    gained += movement.kind.gain();
                    movement.gross_after.map(|gross| gross - tare)
                }
                Event::Told(_) | Event::Empty => None,
            };
            if let Some(weighed) = weighed {
                // More that came in than was there later: history does not tell all.
                let content = Some(weighed - gained).filter(|content| !content.is_negative());
                self.content = content.map_or(Content::NotWeighed, Content::Known);
                self.worked_back = content.is_some();
                return;
            }
        }
    }
}

/// How far gas may be used; less is worse.
const fn purity(status: GasStatus) -> u8 {
    match status {
        GasStatus::Mixed => 0,
        GasStatus::Recovered => 1,
        GasStatus::Recycled => 2,
        GasStatus::Reclaimed => 3,
        GasStatus::Virgin => 4,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ledger::{CylinderKind, Dated, Versions};
    use crate::quantity::MassUnit;
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
            appliance: Some(ApplianceId(Uuid::from_u128(position.unsigned_abs().into()))),
            entry: EntryId(Uuid::from_u128(7)),
            at: Moment { date: day(date), minute: None },
            instant: day(date).and_hms_opt(0, 0, 0).unwrap().and_utc(),
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

    fn read_at(date: &str, time: &str, after: Position) -> ReadAt {
        let instant: DateTime<Utc> = format!("{date}T{time}:00Z").parse().unwrap();
        let minute = u16::try_from(chrono::Timelike::num_seconds_from_midnight(&instant.time()) / 60).unwrap();
        ReadAt { at: Moment { date: day(date), minute: Some(minute) }, instant, after }
    }

    /// The same at a time of the day in UTC.
    fn timed(time: &str, movement: Movement) -> Movement {
        let mark = read_at(&movement.at.date.to_string(), time, 0);
        Movement { at: mark.at, instant: mark.instant, ..movement }
    }

    /// The register came with its history: the gross was read on the day of import.
    #[test]
    fn history_is_in_the_weighing_that_came_after_it() {
        let mut imported = facts(Some("R-22"), Some(GasStatus::Virgin), Some("20"));
        imported.weighed = Some(read_at("2026-03-10", "10:00", 0));
        let imported = cylinder(imported);
        let moved = [
            movement(1, "2025-06-01", MovementKind::Out(kg("2")), None),
            movement(2, "2026-03-10", MovementKind::Out(kg("1")), None),
            timed("11:00", movement(3, "2026-03-10", MovementKind::Out(kg("0.5")), None)),
        ];
        let on = |date| cylinder_balance(&imported, &moved, day(date), &r22);
        assert_eq!((on("2026-03-10").content, on("2026-03-10").worked_back), (Content::Known(kg("9.5")), false));
        assert_eq!((on("2026-03-09").content, on("2026-03-09").worked_back), (Content::Known(kg("11")), true));
        assert_eq!(on("2025-05-31").content, Content::Known(kg("13")));
        assert_eq!(on("2026-03-09").last_gross, None);
    }

    #[test]
    fn what_cannot_have_been_in_it_is_not_worked_back() {
        let mut weighed = facts(Some("R-22"), Some(GasStatus::Recovered), Some("11"));
        weighed.weighed = Some(read_at("2026-03-10", "10:00", 0));
        let moved = [movement(1, "2026-03-01", MovementKind::Into(kg("3")), None)];
        assert_eq!(cylinder_balance(&cylinder(weighed), &moved, day("2026-02-28"), &r22).content, Content::NotWeighed);
    }

    #[test]
    fn a_weighing_stands_between_the_transfers_of_its_day() {
        let mut weighed = cylinder(facts(Some("R-22"), Some(GasStatus::Virgin), Some("20")));
        let mut again = facts(Some("R-22"), Some(GasStatus::Virgin), Some("18.2"));
        again.weighed = Some(read_at("2026-03-01", "12:00", 1));
        let again = Dated { from: Some(day("2026-03-01")), reason: None, facts: again };
        weighed.versions = Versions::new([weighed.versions.all().to_vec(), vec![again]].concat()).unwrap();
        let moved = [
            timed("10:00", movement(1, "2026-03-01", MovementKind::Out(kg("2")), None)),
            timed("15:00", movement(2, "2026-03-01", MovementKind::Out(kg("1")), None)),
            // Written down in the evening, done before the weighing.
            timed("11:00", movement(3, "2026-03-01", MovementKind::Into(kg("0.2")), None)),
        ];
        assert_eq!(cylinder_balance(&weighed, &moved, day("2026-03-01"), &r22).content, Content::Known(kg("7.2")));
        // In one minute, what was written first was first.
        let same_minute = [timed("12:00", movement(1, "2026-03-01", MovementKind::Out(kg("2")), None))];
        assert_eq!(cylinder_balance(&weighed, &same_minute, day("2026-03-01"), &r22).content, Content::Known(kg("8.2")));
        let next = [timed("12:00", movement(2, "2026-03-01", MovementKind::Out(kg("2")), None))];
        assert_eq!(cylinder_balance(&weighed, &next, day("2026-03-01"), &r22).content, Content::Known(kg("6.2")));
    }

    /// The same figure read again is a weighing of its own.
    #[test]
    fn the_same_gross_read_anew_settles_too() {
        let mut refilled = cylinder(facts(Some("R-22"), Some(GasStatus::Virgin), Some("20")));
        let mut again = facts(Some("R-22"), Some(GasStatus::Virgin), Some("20"));
        again.weighed = Some(read_at("2026-03-05", "12:00", 1));
        let again = Dated { from: Some(day("2026-03-05")), reason: None, facts: again };
        refilled.versions = Versions::new([refilled.versions.all().to_vec(), vec![again]].concat()).unwrap();
        let moved = [movement(1, "2026-03-01", MovementKind::Out(kg("9")), None)];
        assert_eq!(cylinder_balance(&refilled, &moved, day("2026-03-05"), &r22).content, Content::Known(kg("10")));
    }

    /// The gross read at the end of a transfer belongs to its own time, not to when it was written down.
    #[test]
    fn transfers_of_a_day_stand_in_order_of_time() {
        let virgin = cylinder(facts(Some("R-22"), Some(GasStatus::Virgin), Some("20")));
        let moved = [
            timed("15:00", movement(1, "2026-03-01", MovementKind::Out(kg("2")), Some("16"))),
            timed("09:00", movement(2, "2026-03-01", MovementKind::Out(kg("2")), Some("18"))),
        ];
        assert_eq!(cylinder_balance(&virgin, &moved, day("2026-03-01"), &r22).content, Content::Known(kg("6")));
    }

    #[test]
    fn a_weighing_alone_unmakes_no_mix() {
        let mut weighed = facts(Some("R-410A"), Some(GasStatus::Recovered), Some("15"));
        weighed.weighed = Some(read_at("2026-03-05", "12:00", 2));
        let moved = [movement(1, "2026-03-01", MovementKind::Into(kg("3")), None)];
        let balance = cylinder_balance(&cylinder(weighed), &moved, day("2026-03-05"), &r22);
        assert_eq!((balance.status, balance.content), (Some(GasStatus::Mixed), Content::Known(kg("5"))));
    }

    #[test]
    fn the_heel_is_what_was_in_it_when_filling_began() {
        let heel = |moved: &[Movement], date| {
            let known = facts(Some("R-22"), Some(GasStatus::Recovered), Some("14"));
            cylinder_balance(&cylinder(known), moved, day(date), &r22).heel
        };
        let moved = [
            movement(1, "2026-03-01", MovementKind::Out(kg("3.5")), None),
            movement(2, "2026-03-02", MovementKind::Into(kg("2")), None),
            movement(3, "2026-03-03", MovementKind::Into(kg("2")), None),
            movement(4, "2026-03-04", MovementKind::Out(kg("4.3")), None),
        ];
        assert_eq!((heel(&moved, "2026-03-01"), heel(&moved, "2026-03-03")), (None, Some(kg("0.5"))));
        assert_eq!(heel(&moved, "2026-03-04"), Some(kg("0.2")));
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
