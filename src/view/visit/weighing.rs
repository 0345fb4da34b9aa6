//! Two readings of a scale, as a charge and a recovery take them.

use crate::app::{AppError, CylinderStanding, Prepared, Setting, WeighingGap};
use crate::gas;
use crate::ledger::{CylinderId, Instrument, InstrumentId, InstrumentKind, Reading, WeighingMode};
use crate::measure::{CylinderLimit, Direction};
use crate::quantity::{Mass, MassUnit, Weighing};
use crate::view::bars::mass_bar;
use crate::view::desk::Desk;
use crate::view::shown::{self, Choice};
use crate::view::visit::id;
use crate::view::{format, parse, words};
use serde::{Deserialize, Serialize};

/// Which figure takes the next digit.
pub const BEFORE: &str = "before";
pub const BEFORE_OUNCES: &str = "before oz";
pub const AFTER: &str = "after";
pub const AFTER_OUNCES: &str = "after oz";

/// What is typed and chosen about a weighing.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[serde(default)]
pub struct WeighingForm {
    pub cylinder: Option<CylinderId>,
    pub zeroed: bool,
    pub unit: MassUnit,
    pub before: String,
    pub before_ounces: String,
    pub after: String,
    pub after_ounces: String,
    pub active: String,
    pub scale: Option<InstrumentId>,
    pub hoses_full: bool,
    pub hose_length: String,
    pub hose_bore: String,
    pub gap_reason: String,
}

impl Default for WeighingForm {
    fn default() -> Self {
        Self {
            cylinder: None,
            zeroed: false,
            unit: MassUnit::Kilogram,
            before: String::new(),
            before_ounces: String::new(),
            after: String::new(),
            after_ounces: String::new(),
            active: BEFORE.to_owned(),
            scale: None,
            hoses_full: false,
            hose_length: String::new(),
            hose_bore: String::new(),
            gap_reason: String::new(),
        }
    }
}

/// What can be done about a weighing.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Key(String),
    Next,
    Reading(String),
    Mode(String),
    Unit(String),
    Scale(String),
    GapReason(String),
    HosesEmptied(bool),
    HoseLength(String),
    HoseBore(String),
}

/// A weighing as it is shown.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Shown {
    pub cylinder: String,
    pub cylinder_state: String,
    pub mass: shown::MassBar,
    pub first: shown::Reading,
    pub second: shown::Reading,
    pub first_ounces: shown::Reading,
    pub second_ounces: shown::Reading,
    pub two_part: bool,
    pub active: String,
    pub error: String,
    pub net_caption: String,
    pub net: String,
    pub net_unit: String,
    pub net_error: String,
    pub mode: String,
    pub unit: String,
    pub scale: String,
    pub scale_words: String,
    pub hoses_emptied: bool,
    pub gap_words: String,
    pub gap_reason: String,
}

/// The unit's name on the screens.
pub fn unit_key(unit: MassUnit) -> &'static str {
    if unit == MassUnit::PoundOunce { "lb oz" } else { unit.name() }
}

fn unit_of_key(key: &str) -> Option<MassUnit> {
    MassUnit::ALL.into_iter().find(|unit| unit_key(*unit) == key)
}

impl WeighingForm {
    pub fn update(&mut self, msg: Msg) {
        match msg {
            Msg::Key(key) => self.key(&key),
            Msg::Next => self.active = self.next().to_owned(),
            Msg::Reading(key) => self.active = key,
            Msg::Mode(key) => {
                let zeroed = key == "zeroed";
                if zeroed != self.zeroed {
                    self.zeroed = zeroed;
                    self.clear_readings();
                }
            }
            Msg::Unit(key) => {
                if let Some(unit) = unit_of_key(&key).filter(|unit| *unit != self.unit) {
                    self.unit = unit;
                    self.clear_readings();
                }
            }
            Msg::Scale(key) => self.scale = id(&key, InstrumentId),
            Msg::GapReason(reason) => self.gap_reason = reason,
            Msg::HosesEmptied(emptied) => self.hoses_full = !emptied,
            Msg::HoseLength(text) => self.hose_length = text,
            Msg::HoseBore(text) => self.hose_bore = text,
        }
    }

    fn key(&mut self, key: &str) {
        let text = match self.active.as_str() {
            BEFORE_OUNCES => &mut self.before_ounces,
            AFTER => &mut self.after,
            AFTER_OUNCES => &mut self.after_ounces,
            _ => &mut self.before,
        };
        parse::press(text, key);
    }

    fn two_part(&self) -> bool {
        self.unit == MassUnit::PoundOunce
    }

    fn next(&self) -> &'static str {
        match (self.active.as_str(), self.two_part()) {
            (BEFORE, true) => BEFORE_OUNCES,
            (AFTER, true) => AFTER_OUNCES,
            (BEFORE, false) | (BEFORE_OUNCES, _) => AFTER,
            _ => BEFORE,
        }
    }

    /// Readings of another kind or unit are other readings.
    fn clear_readings(&mut self) {
        for text in [&mut self.before, &mut self.before_ounces, &mut self.after, &mut self.after_ounces] {
            text.clear();
        }
        self.gap_reason.clear();
        // A zeroed scale shows nought at the start, so the end is what is read.
        self.active = if self.zeroed { AFTER } else { BEFORE }.to_owned();
    }

    /// Another cylinder: what was read was read of the other one.
    pub fn take_cylinder(&mut self, cylinder: Option<CylinderId>) {
        if self.cylinder != cylinder {
            self.cylinder = cylinder;
            self.clear_readings();
        }
    }

    /// The same cylinder goes on: its reading after serves as the next one before.
    pub fn go_on(&self) -> Self {
        let mut next = Self { gap_reason: String::new(), ..self.clone() };
        next.clear_readings();
        if !self.zeroed {
            next.before.clone_from(&self.after);
            next.before_ounces.clone_from(&self.after_ounces);
            AFTER.clone_into(&mut next.active);
        }
        next
    }

    fn typed(&self, first: &str, ounces: &str, minus: bool) -> Option<Weighing> {
        let text = if self.two_part() {
            match (first.is_empty(), ounces.is_empty()) {
                (true, true) => String::new(),
                (_, true) => first.to_owned(),
                (true, false) => format!("0 {ounces}"),
                (false, false) => format!("{first} {ounces}"),
            }
        } else {
            first.to_owned()
        };
        (!text.is_empty()).then(|| Weighing::new(if minus { format!("-{text}") } else { text }, self.unit))
    }

    /// The readings as typed. A zeroed scale starts at nought and runs below it while charging.
    pub fn reading(&self, direction: Direction) -> Reading {
        let minus = self.zeroed && direction == Direction::Out;
        let after = self.typed(&self.after, &self.after_ounces, minus);
        let before = self.typed(&self.before, &self.before_ounces, false).or_else(|| self.nought(after.as_ref()));
        let mode = if self.zeroed { WeighingMode::Zeroed } else { WeighingMode::Gross };
        Reading { mode, before, after, net: None, scale: self.scale }
    }

    /// Nought with the decimals of the other reading: what the scale showed.
    fn nought(&self, after: Option<&Weighing>) -> Option<Weighing> {
        let after = after.filter(|_| self.zeroed)?;
        let figure = after.typed.trim_start_matches('-');
        let last = figure.rsplit(' ').next().unwrap_or(figure);
        let zeros = last.split_once('.').map_or(String::new(), |(_, part)| format!(".{}", "0".repeat(part.len())));
        let text = if self.two_part() { format!("0 0{zeros}") } else { format!("0{zeros}") };
        Some(Weighing::new(text, self.unit))
    }

    pub fn is_complete(&self) -> bool {
        let after = !self.after.is_empty() || !self.after_ounces.is_empty();
        after && (self.zeroed || !self.before.is_empty() || !self.before_ounces.is_empty())
    }

    /// What hoses that were not emptied can hold, from length, bore and the
    /// gas's liquid density at 25 °C, rounded up to the gram.
    ///
    /// # Errors
    /// A sentence that says what is missing.
    pub fn hoses(&self, gas_name: &str) -> Result<Option<Weighing>, String> {
        if !self.hoses_full {
            return Ok(None);
        }
        let (Some(length), Some(bore)) = (parse::number(&self.hose_length)?, parse::number(&self.hose_bore)?) else {
            return Err(words::hose_figures_missing());
        };
        let unknown = || words::hose_content_unknown(gas_name);
        // kg/m³ at 25 °C; common practice takes hoses as full of liquid.
        let density = gas::find(gas_name).and_then(|gas| gas.liquid_density(25.0)).ok_or_else(unknown)?;
        let (metres, millimetres) = (format::float(length), format::float(bore));
        let cubic_metres = std::f64::consts::FRAC_PI_4 * (millimetres / 1000.0).powi(2) * metres;
        let grams = (cubic_metres * density * 1000.0).ceil();
        if !(grams > 0.0 && grams < 90_000.0) {
            return Err(words::hose_figures_missing());
        }
        Ok(Some(Weighing::new(format!("{grams:.0}"), MassUnit::Gram)))
    }

    /// Readings, units and what follows from them, for either direction.
    pub fn shown(&self, context: &Context) -> Shown {
        let unit = format::unit(self.unit);
        let two = self.two_part();
        let captions = match (self.zeroed, context.direction) {
            (true, _) => (words::reading_at_start(), words::reading_at_end()),
            (false, Direction::Out) => (words::gross_before(), words::gross_after()),
            (false, Direction::Into) => (words::gross_before(), words::line_off_after()),
        };
        let last = context.cylinder.and_then(|cylinder| cylinder.balance.last_gross).filter(|_| !self.zeroed).map(|known| {
            let gross = format::mass(known.gross, self.unit);
            if known.read { words::last_known(&gross) } else { words::calculated_last(&gross) }
        });
        let reading = |key: &str, caption: String, text: &str, unit: &str, last: String| shown::Reading {
            key: key.to_owned(),
            caption,
            text: text.to_owned(),
            unit: unit.to_owned(),
            last,
            wrong: false,
        };
        let minus = if self.zeroed && context.direction == Direction::Out && !self.after.is_empty() { "\u{2212}" } else { "" };
        let before = if self.zeroed && self.before.is_empty() { "0" } else { &self.before };
        let (net, net_unit, net_error) = context.net.as_ref().map_or_else(
            || (String::new(), unit.to_owned(), String::new()),
            |(net, error)| (format::mass_figure(*net, self.unit), unit.to_owned(), words::plus_minus(&format!("{error} kg"))),
        );
        Shown {
            cylinder: context.cylinder.map_or_else(words::choose_the_cylinder, |cylinder| {
                let status = cylinder.balance.status.map(crate::ledger::GasStatus::name).unwrap_or_default();
                words::cylinder_plate(&cylinder.cylinder.name, cylinder.balance.gas.as_deref().unwrap_or_default(), status)
            }),
            cylinder_state: context.cylinder.map(|cylinder| cylinder.facts.location.clone()).unwrap_or_default(),
            mass: context.cylinder.map(|cylinder| bar(cylinder, context.limit, self.unit)).unwrap_or_default(),
            first: reading(BEFORE, captions.0, before, if two { "lb" } else { unit }, last.unwrap_or_default()),
            second: reading(AFTER, captions.1, &format!("{minus}{}", self.after), if two { "lb" } else { unit }, String::new()),
            first_ounces: reading(BEFORE_OUNCES, words::ounces(), &self.before_ounces, "oz", String::new()),
            second_ounces: reading(AFTER_OUNCES, words::ounces(), &self.after_ounces, "oz", String::new()),
            two_part: two,
            active: self.active.clone(),
            error: if self.is_complete() { context.error.clone() } else { String::new() },
            net_caption: if context.direction == Direction::Out { words::net_charged() } else { words::net_recovered() },
            net,
            net_unit,
            net_error,
            mode: if self.zeroed { "zeroed" } else { "gross" }.to_owned(),
            unit: unit_key(self.unit).to_owned(),
            scale: self.scale.map(|scale| scale.to_string()).unwrap_or_default(),
            scale_words: if self.scale.is_none() { words::last_digit_counts() } else { String::new() },
            hoses_emptied: !self.hoses_full,
            gap_words: context.gap.map(|gap| self.gap_words(context, &gap)).unwrap_or_default(),
            gap_reason: self.gap_reason.clone(),
        }
    }

    fn gap_words(&self, context: &Context, gap: &WeighingGap) -> String {
        let name = context.cylinder.map(|cylinder| cylinder.cylinder.name.as_str()).unwrap_or_default();
        let (known, by) = (format::mass(gap.known.gross, self.unit), format::mass(gap.difference.magnitude(), self.unit));
        words::gap(name, &known, &by, gap.difference.is_positive())
    }

    /// `gross before and after, kg`, for the line that opens the choices.
    pub fn summary(&self) -> String {
        format::commas([if self.zeroed { words::scale_zeroed() } else { words::gross_twice() }, unit_key(self.unit)])
    }
}

/// What a weighing is shown with.
pub struct Context<'a> {
    pub direction: Direction,
    pub cylinder: Option<&'a CylinderStanding>,
    pub limit: Option<&'a CylinderLimit>,
    /// With its error in kg.
    pub net: Option<(Mass, String)>,
    pub gap: Option<WeighingGap>,
    pub error: String,
}

fn bar(cylinder: &CylinderStanding, limit: Option<&CylinderLimit>, unit: MassUnit) -> shown::MassBar {
    let litres = cylinder.facts.water_capacity_l.as_ref().and_then(|text| crate::quantity::parse_decimal(text).ok());
    mass_bar(cylinder.balance.content.mass(), cylinder.balance.heel, litres, limit, unit)
}

/// The error of what is prepared, with hoses that are not in the register yet.
pub(super) fn net_with_error(prepared: &Prepared) -> Option<(Mass, String)> {
    let transfer = prepared.entry.line.act.transfer()?;
    let uncertainty = prepared.uncertainty.clone()?;
    Some((transfer.mass, uncertainty.with_hoses(transfer.hoses).expanded_kg_text(3)))
}

/// Scales to choose from; the last choice is a scale that is not in the register.
pub(super) fn scales(desk: &Desk, today: chrono::NaiveDate) -> Vec<Choice> {
    let mut scales = desk.instruments(InstrumentKind::Scale, today);
    if !scales.is_empty() {
        scales.push(Choice::new("", words::no_scale(), ""));
    }
    scales
}

impl Desk {
    /// A weighing as this device last took one.
    pub(super) fn fresh_weighing(&self) -> Result<WeighingForm, AppError> {
        let scale = self
            .app
            .setting(Setting::Scale)?
            .and_then(|key| id(&key, InstrumentId))
            .filter(|scale| self.registers.instrument(*scale).is_some());
        let zeroed = self.app.setting(Setting::WeighingMode)?.as_deref() == Some("zeroed");
        let active = if zeroed { AFTER } else { BEFORE }.to_owned();
        Ok(WeighingForm { unit: self.app.weighed_in()?, scale, zeroed, active, ..WeighingForm::default() })
    }

    /// Remembers how it was weighed, for the next time.
    pub(super) fn remember_weighing(&self, form: &WeighingForm) -> Result<(), AppError> {
        self.app.set(Setting::WeighedIn, form.unit.name())?;
        self.app.set(Setting::WeighingMode, if form.zeroed { "zeroed" } else { "gross" })?;
        if let Some(scale) = form.scale {
            self.app.set(Setting::Scale, &scale.to_string())?;
        }
        Ok(())
    }

    /// Hoses that were not emptied become instruments of the register, so that the record can name them.
    pub(super) fn hoses_of(&mut self, form: &WeighingForm, gas: &str) -> Result<Option<InstrumentId>, AppError> {
        let Some(holds) = form.hoses(gas).map_err(|sentence| AppError::Input { field: "hoses", sentence })? else { return Ok(None) };
        let name = words::hose_name(form.hose_length.trim(), form.hose_bore.trim(), gas);
        if let Some(known) = self.registers.instruments.iter().find(|instrument| instrument.name == name) {
            return Ok(Some(known.id));
        }
        let hoses = Instrument {
            id: InstrumentId(uuid::Uuid::nil()),
            kind: InstrumentKind::Hoses,
            name,
            serial: String::new(),
            division: None,
            holds: Some(holds),
            checked_on: None,
            check_due: None,
        };
        let id = self.app.add_instrument(hoses)?;
        self.reload_registers()?;
        Ok(Some(id))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn typed(form: &mut WeighingForm, keys: &str) {
        for key in keys.chars() {
            form.update(Msg::Key(key.to_string()));
        }
    }

    #[test]
    fn two_gross_readings() {
        let mut form = WeighingForm::default();
        typed(&mut form, "24.05");
        form.update(Msg::Next);
        typed(&mut form, "19,51");
        assert!(form.is_complete());
        let reading = form.reading(Direction::Out);
        assert_eq!(reading.before.unwrap().text(), "24.05 kg");
        assert_eq!(reading.after.unwrap().text(), "19.51 kg");
    }

    #[test]
    fn a_zeroed_scale_starts_at_nought_and_runs_below_it() {
        let mut form = WeighingForm::default();
        form.update(Msg::Mode("zeroed".to_owned()));
        typed(&mut form, "4.54");
        let reading = form.reading(Direction::Out);
        assert_eq!((reading.before.unwrap().typed, reading.after.unwrap().typed), ("0.00".to_owned(), "-4.54".to_owned()));
        assert_eq!(form.reading(Direction::Into).after.unwrap().typed, "4.54");
    }

    #[test]
    fn pounds_and_ounces_have_two_fields() {
        let mut form = WeighingForm::default();
        form.update(Msg::Unit("lb oz".to_owned()));
        typed(&mut form, "30");
        form.update(Msg::Next);
        typed(&mut form, "4.5");
        form.update(Msg::Next);
        typed(&mut form, "20");
        let reading = form.reading(Direction::Out);
        assert_eq!((reading.before.unwrap().typed, reading.after.unwrap().typed), ("30 4.5".to_owned(), "20".to_owned()));
    }

    #[test]
    fn the_reading_after_is_the_next_one_before() {
        let mut form = WeighingForm { cylinder: Some(CylinderId(uuid::Uuid::from_u128(1))), ..WeighingForm::default() };
        typed(&mut form, "24.05");
        form.update(Msg::Next);
        typed(&mut form, "19.51");
        let next = form.go_on();
        assert_eq!((next.before.as_str(), next.after.as_str(), next.active.as_str()), ("19.51", "", AFTER));
        assert_eq!(next.cylinder, form.cylinder);
    }

    #[test]
    fn full_hoses_hold_their_volume_of_liquid() {
        let mut form = WeighingForm { hoses_full: true, ..WeighingForm::default() };
        assert!(form.hoses("R-22").is_err());
        form.hose_length = "1,5".to_owned();
        form.hose_bore = "6".to_owned();
        // π/4 · (6 mm)² · 1.5 m = 42.4 ml, times 1.19 kg/l: 51 g.
        assert_eq!(form.hoses("R-22").unwrap().unwrap().text(), "51 g");
    }
}
