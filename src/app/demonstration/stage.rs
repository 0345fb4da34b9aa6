//! What the story is told with: a clock that is set, names instead of ids, and
//! weighings that continue where the cylinder was left.

use super::DemonstrationError;
use super::ink::signature;
use crate::app::testing::SetClock;
use crate::app::{App, AppError, ChargeInput, Common, RecoverInput, RepairInput, TestInput};
use crate::ledger::{
    ApplianceId, ChargePurpose, Counterpart, CylinderId, Entry, EntryId, InstrumentId, LeakPlace, PersonId, Reading, RecoveryPurpose,
    Registers, Scope, Signature, TestKind, TestResult, VisitId, WeighingMode,
};
use crate::quantity::{Mass, MassUnit, Weighing, decimal_text};
use chrono::{Days, Duration, NaiveDate, TimeZone, Utc};
use chrono_tz::Tz;

/// Days before today on which the company began to keep this store.
pub const OPENING_DAY: u64 = 400;

pub struct Stage<'a> {
    pub app: &'a App,
    clock: &'a SetClock,
    today: NaiveDate,
    zone: Tz,
}

/// Who and what a name in the story stands for.
pub struct Cast {
    registers: Registers,
}

/// A visit in the making.
pub struct Scene<'a> {
    stage: &'a Stage<'a>,
    cast: &'a Cast,
    pub visit: VisitId,
    job: &'a str,
    technician: &'a str,
}

impl<'a> Stage<'a> {
    pub fn new(app: &'a App, clock: &'a SetClock, today: NaiveDate, zone: Tz) -> Self {
        Self { app, clock, today, zone }
    }

    pub fn day(&self, days_before: u64) -> NaiveDate {
        self.today.checked_sub_days(Days::new(days_before)).unwrap_or(self.today)
    }

    /// Sets the clock, on the device's own zone.
    pub fn at(&self, days_before: u64, hour: u32, minute: u32) {
        let local = self.day(days_before).and_hms_opt(hour, minute, 0).unwrap_or_default();
        // An hour that a change of clocks leaves out is taken as the next.
        let known = self.zone.from_local_datetime(&local).earliest();
        let instant = known.or_else(|| self.zone.from_local_datetime(&(local + Duration::hours(1))).earliest());
        self.clock.set(instant.map_or_else(|| local.and_utc(), |instant| instant.with_timezone(&Utc)));
    }

    pub fn pass(&self, minutes: i64) {
        self.clock.forward(Duration::minutes(minutes));
    }

    /// A CSV file in which `{-30}` stands for the day thirty days before today.
    pub fn dated(&self, template: &str) -> String {
        let mut text = String::with_capacity(template.len());
        let mut rest = template;
        while let Some((before, (days, after))) = rest.split_once('{').and_then(|(before, after)| Some((before, after.split_once('}')?))) {
            text.push_str(before);
            let day = days.parse::<i64>().ok().and_then(|days| self.today.checked_add_signed(Duration::days(days)));
            text.push_str(&day.unwrap_or(self.today).to_string());
            rest = after;
        }
        text + rest
    }

    pub fn cast(&self) -> Result<Cast, AppError> {
        Ok(Cast { registers: self.app.store().registers()? })
    }

    /// Begins work at a site, at this moment.
    pub fn begin(&'a self, cast: &'a Cast, site: &str, technician: &'a str, job: &'a str) -> Result<Scene<'a>, AppError> {
        let site = cast.registers.site_named(site).ok_or(AppError::Unknown { what: "site" })?.id;
        let visit = self.app.begin_visit(site, cast.person(technician)?)?.id;
        Ok(Scene { stage: self, cast, visit, job, technician })
    }
}

impl Cast {
    pub fn registers(&self) -> &Registers {
        &self.registers
    }

    pub fn person(&self, name: &str) -> Result<PersonId, AppError> {
        self.registers.person_named(name).map(|person| person.id).ok_or(AppError::Unknown { what: "person" })
    }

    pub fn appliance(&self, name: &str) -> Result<ApplianceId, AppError> {
        let found = self.registers.appliances.iter().find(|appliance| appliance.name == name);
        found.map(|appliance| appliance.id).ok_or(AppError::Unknown { what: "appliance" })
    }

    pub fn cylinder(&self, name: &str) -> Result<CylinderId, AppError> {
        self.registers.cylinder_named(name).map(|cylinder| cylinder.id).ok_or(AppError::Unknown { what: "cylinder" })
    }

    pub fn instrument(&self, name: &str) -> Result<InstrumentId, AppError> {
        let found = self.registers.instruments.iter().find(|instrument| instrument.name == name);
        found.map(|instrument| instrument.id).ok_or(AppError::Unknown { what: "instrument" })
    }
}

/// A charge or recovery as the story tells it.
pub struct Weighed<'a> {
    pub cylinder: &'a str,
    pub net: &'a str,
    pub scale: &'a str,
    pub zeroed: bool,
}

pub const fn gross<'a>(cylinder: &'a str, net: &'a str, scale: &'a str) -> Weighed<'a> {
    Weighed { cylinder, net, scale, zeroed: false }
}

pub const fn zeroed<'a>(cylinder: &'a str, net: &'a str, scale: &'a str) -> Weighed<'a> {
    Weighed { cylinder, net, scale, zeroed: true }
}

impl Scene<'_> {
    fn common(&self, note: &str) -> Common {
        Common { job: Some(self.job.to_owned()), note: note.to_owned(), ..Common::default() }
    }

    pub fn cautions(&self, numbers: &[&str]) -> Result<(), AppError> {
        numbers.iter().try_for_each(|number| self.stage.app.acknowledge(self.visit, number, None))
    }

    /// The readings of a weighing that begins where the cylinder was left.
    fn reading(&self, weighed: &Weighed, out: bool) -> Result<Reading, AppError> {
        let app = self.stage.app;
        let cylinder = self.cast.cylinder(weighed.cylinder)?;
        let standing = app.cylinder_standing(cylinder, app.today())?;
        let unit = standing.facts.tare_written.unit;
        let mass = |text: &str| Mass::parse(text, unit).map_err(|e| AppError::Record(e.to_string()));
        let net = mass(weighed.net)?;
        // A cylinder that nothing was ever in weighs its tare.
        let known = standing.balance.last_gross.map_or(standing.facts.tare, |known| known.gross);
        let scale = self.cast.instrument(weighed.scale)?;
        let places = app.store().instrument(scale)?.and_then(|scale| scale.division);
        let places = places.map_or(0, |division| division.typed.split_once('.').map_or(0, |(_, part)| part.len()));
        let shown = |mass: Mass| Some(Weighing::new(typed(mass, unit, places), unit));
        let moved = if out { -net } else { net };
        let (mode, before, after) =
            if weighed.zeroed { (WeighingMode::Zeroed, Mass::ZERO, moved) } else { (WeighingMode::Gross, known, known + moved) };
        Ok(Reading { mode, before: shown(before), after: shown(after), net: None, scale: Some(scale) })
    }

    pub fn charge(&self, appliance: &str, purpose: ChargePurpose, weighed: &Weighed) -> Result<Entry, AppError> {
        self.charge_with(appliance, purpose, weighed, None, None)
    }

    /// With hoses that were not emptied, or short of the full charge.
    pub fn charge_with(
        &self,
        appliance: &str,
        purpose: ChargePurpose,
        weighed: &Weighed,
        full_hoses: Option<&str>,
        short_by: Option<Weighing>,
    ) -> Result<Entry, AppError> {
        let input = ChargeInput {
            common: self.common(""),
            cylinder: Some(self.cast.cylinder(weighed.cylinder)?),
            purpose,
            reading: self.reading(weighed, true)?,
            full_hoses: full_hoses.map(|name| self.cast.instrument(name)).transpose()?,
            phase: "liquid".to_owned(),
            short_by,
            same_leak_as: None,
            gas_source: String::new(),
            weighing_gap: String::new(),
        };
        let entry = self.stage.app.charge(self.visit, self.cast.appliance(appliance)?, input)?;
        self.stage.pass(25);
        Ok(entry)
    }

    /// A factory charge, known from the plate.
    pub fn factory_charge(&self, appliance: ApplianceId, net: Weighing) -> Result<(), AppError> {
        let input = ChargeInput {
            common: self.common("by the plate"),
            cylinder: None,
            purpose: ChargePurpose::FactoryCharge,
            reading: Reading { mode: WeighingMode::NetOnly, before: None, after: None, net: Some(net), scale: None },
            full_hoses: None,
            phase: String::new(),
            short_by: None,
            same_leak_as: None,
            gas_source: String::new(),
            weighing_gap: String::new(),
        };
        self.stage.app.charge(self.visit, appliance, input)?;
        self.stage.pass(10);
        Ok(())
    }

    pub fn recover(&self, appliance: &str, purpose: RecoveryPurpose, weighed: &Weighed, level: &str) -> Result<(), AppError> {
        let input = RecoverInput {
            common: self.common(""),
            cylinder: self.cast.cylinder(weighed.cylinder)?,
            purpose,
            reading: self.reading(weighed, false)?,
            full_hoses: None,
            level_reached: level.to_owned(),
            weighing_gap: String::new(),
        };
        self.stage.app.recover(self.visit, self.cast.appliance(appliance)?, input)?;
        self.stage.pass(70);
        Ok(())
    }

    /// A test of the whole appliance; `leaks` are places with what was done about them at once.
    pub fn test(&self, appliance: &str, kind: TestKind, parts: &str, leaks: &[(&str, &str)]) -> Result<Entry, AppError> {
        let verifies = matches!(kind, TestKind::InitialVerification | TestKind::FollowUpVerification);
        let result = match (leaks.is_empty(), verifies) {
            (false, _) => TestResult::LeakFound,
            (true, true) => TestResult::Pass,
            (true, false) => TestResult::NoLeak,
        };
        let input = TestInput {
            common: self.common(""),
            kind,
            result: Some(result),
            scope: Some(Scope::Whole),
            method: "electronic detector".to_owned(),
            instrument: Some(self.cast.instrument("Detector 2")?),
            parts: parts.to_owned(),
            place: String::new(),
            leaks: leaks.iter().map(|(place, state)| LeakPlace { place: (*place).to_owned(), state: (*state).to_owned() }).collect(),
            repair: None,
            partial: false,
            running_hours: String::new(),
        };
        self.enter_test(appliance, input)
    }

    /// A test of the place of a repair, with bubbles.
    pub fn verify(&self, appliance: &str, kind: TestKind, place: &str, repair: EntryId) -> Result<Entry, AppError> {
        let input = TestInput {
            common: self.common(""),
            kind,
            result: Some(TestResult::Pass),
            scope: Some(Scope::Part),
            method: "soap bubbles".to_owned(),
            instrument: None,
            parts: String::new(),
            place: place.to_owned(),
            leaks: Vec::new(),
            repair: Some(repair),
            partial: false,
            running_hours: String::new(),
        };
        self.enter_test(appliance, input)
    }

    fn enter_test(&self, appliance: &str, input: TestInput) -> Result<Entry, AppError> {
        let entry = self.stage.app.test(self.visit, self.cast.appliance(appliance)?, input)?;
        self.stage.pass(35);
        Ok(entry)
    }

    pub fn repair(&self, appliance: &str, place: &str, done: &str, parts: &str) -> Result<EntryId, AppError> {
        let input = RepairInput {
            common: self.common(""),
            place: place.to_owned(),
            parts: parts.to_owned(),
            done: done.to_owned(),
            temporary: false,
        };
        let entry = self.stage.app.repair(self.visit, self.cast.appliance(appliance)?, input)?;
        self.stage.pass(50);
        Ok(entry.line.entry)
    }

    pub fn simple(&self, appliance: &str, act: crate::app::SimpleAct, note: &str) -> Result<Entry, AppError> {
        let entry = self.stage.app.simple(self.visit, self.cast.appliance(appliance)?, act, self.common(note))?;
        self.stage.pass(10);
        Ok(entry)
    }

    pub fn technician(&self) -> Signature {
        signed(self.technician)
    }

    pub fn close(&self, counterpart: Counterpart) -> Result<(), DemonstrationError> {
        self.stage.pass(15);
        self.stage.app.close_visit(self.visit, self.technician(), counterpart)?;
        Ok(())
    }

    /// Closed with the representative's signature, and handed over as told.
    pub fn close_with(&self, representative: &str, handed_over: &str) -> Result<(), DemonstrationError> {
        self.close(Counterpart::Signed { signature: signed(representative) })?;
        if !handed_over.is_empty() {
            self.stage.pass(3);
            self.stage.app.hand_over(self.visit, handed_over)?;
        }
        Ok(())
    }
}

pub fn signed(name: &str) -> Signature {
    Signature { name: name.to_owned(), ink: signature(name) }
}

/// As a display with so many decimals shows it.
fn typed(mass: Mass, unit: MassUnit, places: usize) -> String {
    let text = decimal_text(mass.in_unit(unit)).unwrap_or_default();
    let (whole, part) = text.split_once('.').unwrap_or((&text, ""));
    if places == 0 && part.is_empty() { whole.to_owned() } else { format!("{whole}.{part:0<places$}") }
}
