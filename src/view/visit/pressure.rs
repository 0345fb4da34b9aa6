//! Pressure or vacuum: readings on a gauge in order of time.

use super::{Panel, id};
use crate::app::{AppError, PressureInput, Units};
use crate::ledger::{ApplianceId, InstrumentId, InstrumentKind};
use crate::quantity::{PressureUnit, Ratio, TemperatureUnit, VacuumUnit, parse_decimal};
use crate::view::desk::Desk;
use crate::view::shown::{Choice, Fact, Line, Reading, Ready};
use crate::view::{format, parse, words};
use serde::{Deserialize, Serialize};

const PRESSURE: &str = "pressure";
const TEMPERATURE: &str = "temperature";
pub const HOLD: &str = "pressure hold";
pub const RISE: &str = "vacuum rise";

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Taken {
    pub time: String,
    /// Minutes since midnight of the first reading's day.
    pub minute: u32,
    pub pressure: String,
    pub temperature: String,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Form {
    pub appliance: ApplianceId,
    pub kind: String,
    pub gauge: Option<InstrumentId>,
    pub unit: String,
    pub pressure: String,
    pub temperature: String,
    pub active: String,
    pub taken: Vec<Taken>,
    /// As set on this device when the series began.
    #[serde(default)]
    pub temperature_unit: TemperatureUnit,
    /// The units that a hold and a rise begin with.
    #[serde(skip)]
    usual: (PressureUnit, VacuumUnit),
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Kind(String),
    Gauge(String),
    Unit(String),
    Reading(String),
    Key(String),
    Next,
    Take,
    /// A reading of the list: it goes back into the fields, to be taken anew.
    OpenReading(String),
    Save,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Shown {
    pub appliance: String,
    pub kind: String,
    pub gauges: Vec<Choice>,
    pub gauge: String,
    pub units: Vec<Choice>,
    pub unit: String,
    pub pressure: Reading,
    pub temperature: Reading,
    pub active: String,
    pub error: String,
    pub readings: Vec<Line>,
    pub judged: String,
    pub figures: Vec<Fact>,
    pub can_take: bool,
    pub ready: Ready,
}

impl Form {
    fn new(appliance: ApplianceId, gauge: Option<InstrumentId>, units: &Units) -> Self {
        Self {
            appliance,
            kind: HOLD.to_owned(),
            gauge,
            unit: units.pressure.name().to_owned(),
            pressure: String::new(),
            temperature: String::new(),
            active: PRESSURE.to_owned(),
            taken: Vec::new(),
            temperature_unit: units.temperature,
            usual: (units.pressure, units.vacuum),
        }
    }

    fn units(&self) -> &'static [&'static str] {
        if self.kind == RISE { &["Pa", "mbar", "micron"] } else { &["bar", "kPa", "psi"] }
    }

    fn update(&mut self, msg: Msg) {
        match msg {
            Msg::Kind(key) if key != self.kind => {
                self.kind = key;
                let usual = if self.kind == RISE { self.usual.1.name() } else { self.usual.0.name() };
                usual.clone_into(&mut self.unit);
                self.taken.clear();
            }
            Msg::Unit(key) if key != self.unit => {
                self.unit = key;
                self.taken.clear();
            }
            Msg::Gauge(key) => self.gauge = id(&key, InstrumentId),
            Msg::Reading(key) => self.active = key,
            // A pipe can be colder than ice, a gauge can stand below nought; an absolute pressure cannot.
            Msg::Key(key) if key == "-" && self.active == PRESSURE && self.kind == RISE => {}
            Msg::Key(key) => parse::press_signed(if self.active == TEMPERATURE { &mut self.temperature } else { &mut self.pressure }, &key),
            Msg::Next => self.active = if self.active == PRESSURE { TEMPERATURE } else { PRESSURE }.to_owned(),
            Msg::OpenReading(key) => {
                if let Ok(index) = key.parse::<usize>()
                    && index < self.taken.len()
                {
                    let taken = self.taken.remove(index);
                    (self.pressure, self.temperature) = (taken.pressure, taken.temperature);
                }
            }
            Msg::Kind(_) | Msg::Unit(_) | Msg::Take | Msg::Save => {}
        }
    }

    fn can_take(&self) -> bool {
        parse_decimal(&self.pressure).is_ok() && (self.temperature.is_empty() || parse_decimal(&self.temperature).is_ok())
    }

    fn take(&mut self, time: String, minute: u32) {
        if !self.can_take() {
            return;
        }
        self.taken.push(Taken {
            time,
            minute,
            pressure: std::mem::take(&mut self.pressure),
            temperature: std::mem::take(&mut self.temperature),
        });
        PRESSURE.clone_into(&mut self.active);
    }

    /// The change between the first and the last reading, exactly.
    fn change(&self) -> Option<Ratio> {
        let (first, last) = (self.taken.first()?, self.taken.last()?);
        Some(parse_decimal(&last.pressure).ok()? - parse_decimal(&first.pressure).ok()?)
    }

    /// The series as one line of the record.
    fn series(&self) -> String {
        let reading = |taken: &Taken| {
            let temperature = if taken.temperature.is_empty() {
                String::new()
            } else {
                format!(" at {} {}", taken.temperature, self.temperature_unit.name())
            };
            format!("{} {} {}{temperature}", taken.time, taken.pressure, self.unit)
        };
        self.taken.iter().map(reading).collect::<Vec<_>>().join("; ")
    }
}

impl Desk {
    pub(super) fn begin_pressure(&mut self) -> Result<(), AppError> {
        let appliance = self.appliance_in_hand()?;
        if self.work()?.pressure.as_ref().is_none_or(|form| form.appliance != appliance) {
            let gauge = self.registers.instruments.iter().find(|instrument| instrument.kind == InstrumentKind::Gauge);
            let form = Form::new(appliance, gauge.map(|gauge| gauge.id), &self.app.units()?);
            self.work_mut()?.pressure = Some(form);
        }
        self.open_panel(Panel::Pressure)
    }

    pub(in crate::view) fn update_pressure(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::Save => return self.save_pressure(),
            Msg::Take => {
                let minute = self.minutes_of_visit()?;
                let time = format::clock(u16::try_from(minute % 1440).ok());
                if let Some(form) = &mut self.work_mut()?.pressure {
                    form.take(time, minute);
                }
            }
            other => {
                if let Some(form) = &mut self.work_mut()?.pressure {
                    form.update(other);
                }
            }
        }
        self.work()?.pressure.as_ref().map_or(Ok(()), |form| self.keep(Panel::Pressure, form))
    }

    /// Minutes since the midnight before the visit began, on the site's clock.
    fn minutes_of_visit(&self) -> Result<u32, AppError> {
        let visit = &self.work()?.visit;
        let now = self.app.moment_in(visit.time_zone.parse().unwrap_or(chrono_tz::Tz::UTC));
        let days = crate::quantity::days_between(visit.date, now.date).max(0);
        Ok(u32::try_from(days).unwrap_or(0).saturating_mul(1440) + u32::from(now.minute.unwrap_or(0)))
    }

    fn save_pressure(&mut self) -> Result<(), AppError> {
        let form = self.work()?.pressure.clone().ok_or(AppError::Unknown { what: "series being entered" })?;
        let (visit, common) = (self.work()?.visit.id, self.work()?.common(Panel::Pressure, form.appliance, "")?);
        let input =
            PressureInput { common, method: form.kind.clone(), level_reached: form.series(), instrument: form.gauge, place: String::new() };
        self.app.pressure(visit, form.appliance, input)?;
        self.work_mut()?.pressure = None;
        self.entered(Panel::Pressure, form.appliance)
    }

    /// The page of pressure and vacuum.
    ///
    /// # Errors
    /// No visit is open, no series is being entered; the store's own.
    pub fn pressure_shown(&self) -> Result<Shown, AppError> {
        let form = self.work()?.pressure.as_ref().ok_or(AppError::Unknown { what: "series being entered" })?;
        let reading = |key: &str, caption: &str, unit: &str, text: &str| Reading {
            key: key.to_owned(),
            caption: caption.to_owned(),
            // Temperatures are in the unit of the series.
            unit: if key == TEMPERATURE { form.temperature_unit.name() } else { unit }.to_owned(),
            text: text.to_owned(),
            ..Reading::default()
        };
        let line = |(index, taken): (usize, &Taken)| Line {
            key: index.to_string(),
            time: taken.time.clone(),
            name: format!("{} {}", taken.pressure, form.unit),
            facts: if taken.temperature.is_empty() {
                String::new()
            } else {
                format!("{} {}", taken.temperature, form.temperature_unit.name())
            },
            ..Line::default()
        };
        let caption = if form.kind == RISE { words::pressure_absolute() } else { words::pressure_gauge() };
        let typed = [&form.pressure, &form.temperature];
        let wrong = typed.into_iter().find(|typed| !typed.is_empty() && parse_decimal(typed).is_err());
        Ok(Shown {
            appliance: self.appliance_words()?,
            kind: form.kind.clone(),
            gauges: self.instruments(InstrumentKind::Gauge, self.today_there()?),
            gauge: form.gauge.map(|gauge| gauge.to_string()).unwrap_or_default(),
            units: form.units().iter().map(|unit| Choice::word(unit)).collect(),
            unit: form.unit.clone(),
            pressure: reading(PRESSURE, &caption, &form.unit, &form.pressure),
            temperature: reading(TEMPERATURE, &words::pipe_temperature(), "°C", &form.temperature),
            active: form.active.clone(),
            error: wrong.map(|typed| words::reading_not_a_number(typed)).unwrap_or_default(),
            readings: form.taken.iter().enumerate().map(line).collect(),
            judged: words::kept_as_read(),
            figures: figures(form),
            can_take: form.can_take(),
            ready: self.ready_at(
                Panel::Pressure,
                form.appliance,
                if form.taken.len() < 2 { Ready::not(words::take_a_reading()) } else { Ready::yes() },
            )?,
        })
    }
}

fn figures(form: &Form) -> Vec<Fact> {
    let (Some(first), Some(last), Some(change)) = (form.taken.first(), form.taken.last(), form.change()) else { return Vec::new() };
    let sign = if change > Ratio::from_integer(0) { "+" } else { "" };
    vec![
        Fact::new(words::minutes(), last.minute.saturating_sub(first.minute).to_string()),
        Fact::new(words::change(), format!("{sign}{} {}", format::figure(change, 3).replace('-', "\u{2212}"), form.unit)),
    ]
}

#[cfg(test)]
mod tests {
    use super::*;

    fn units(pressure: PressureUnit) -> Units {
        let mass = crate::quantity::MassUnit::Kilogram;
        Units { mass, pressure, vacuum: VacuumUnit::Micron, temperature: TemperatureUnit::Fahrenheit, paper: None }
    }

    #[test]
    fn a_series_begins_in_the_units_that_are_set() {
        let mut form = Form::new(ApplianceId(uuid::Uuid::nil()), None, &units(PressureUnit::Psi));
        assert_eq!(form.unit, "psi");
        (form.pressure, form.temperature) = ("150".to_owned(), "68".to_owned());
        form.take("10:12".to_owned(), 612);
        assert_eq!(form.series(), "10:12 150 psi at 68 \u{b0}F");
        form.update(Msg::Kind(RISE.to_owned()));
        assert_eq!(form.unit, "micron");
        form.update(Msg::Kind(HOLD.to_owned()));
        assert_eq!(form.unit, "psi");
    }

    #[test]
    fn a_series_is_kept_as_read() {
        let mut form = Form::new(ApplianceId(uuid::Uuid::nil()), None, &units(PressureUnit::Bar));
        for (time, minute, keys) in [("10:12", 612, "10.45"), ("10:42", 642, "10.40")] {
            for key in keys.chars() {
                form.update(Msg::Key(key.to_string()));
            }
            form.take(time.to_owned(), minute);
        }
        assert_eq!(form.series(), "10:12 10.45 bar; 10:42 10.40 bar");
        assert_eq!(figures(&form)[1].value, "\u{2212}0.050 bar");
        assert_eq!(figures(&form)[0].value, "30");
    }

    #[test]
    fn a_pipe_can_be_colder_than_ice() {
        let mut form = Form::new(ApplianceId(uuid::Uuid::nil()), None, &units(PressureUnit::Bar));
        form.pressure = "2.1".to_owned();
        form.update(Msg::Next);
        for key in ["-", "1", "2", ".", "5"] {
            form.update(Msg::Key(key.to_owned()));
        }
        assert!(form.can_take());
        form.take("10:12".to_owned(), 612);
        assert_eq!(form.series(), "10:12 2.1 bar at -12.5 °F");
        form.update(Msg::Kind(RISE.to_owned()));
        form.update(Msg::Key("-".to_owned()));
        assert_eq!(form.pressure, "", "an absolute pressure is never below nought");
    }
}
