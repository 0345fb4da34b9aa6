//! Settings of this device: every key stands here, and nowhere else.

use super::{App, AppError};
use crate::print::Paper;
use crate::quantity::{MassUnit, PressureUnit, TemperatureUnit, VacuumUnit};

/// One thing that is set or remembered on this device.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Setting {
    Mass,
    Pressure,
    Vacuum,
    Temperature,
    /// `a4` or `letter`; anything else is as the site's law has it.
    Paper,
    /// `light`, `dark` or `sunlight`.
    Appearance,
    /// In percent.
    TextSize,
    /// The unit last chosen at a scale: it stays at the scale.
    WeighedIn,
    /// `gross` or `zeroed`.
    WeighingMode,
    Scale,
    Detector,
    /// Who began the last visit.
    Person,
    OilFactor,
    LastBackup,
    /// `yes` in a store that the demonstration built.
    Demonstration,
}

impl Setting {
    /// Under which name the store keeps it.
    pub const fn key(self) -> &'static str {
        match self {
            Self::Mass => "unit of mass",
            Self::Pressure => "unit of pressure",
            Self::Vacuum => "unit of vacuum",
            Self::Temperature => "unit of temperature",
            Self::Paper => "paper",
            Self::Appearance => "appearance",
            Self::TextSize => "text size",
            Self::WeighedIn => "weighed in",
            Self::WeighingMode => "weighing mode",
            Self::Scale => "scale",
            Self::Detector => "detector",
            Self::Person => "person",
            Self::OilFactor => "oil factor",
            Self::LastBackup => "last backup",
            Self::Demonstration => "demonstration",
        }
    }
}

/// In what figures are shown and typed, and on what is printed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Units {
    pub mass: MassUnit,
    pub pressure: PressureUnit,
    pub vacuum: VacuumUnit,
    pub temperature: TemperatureUnit,
    /// `None`: as the site's law has it.
    pub paper: Option<Paper>,
}

/// For which light colours are made.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Appearance {
    #[default]
    Light,
    Dark,
    Sunlight,
}

impl Appearance {
    pub const ALL: [Self; 3] = [Self::Light, Self::Dark, Self::Sunlight];

    pub const fn name(self) -> &'static str {
        match self {
            Self::Light => "light",
            Self::Dark => "dark",
            Self::Sunlight => "sunlight",
        }
    }
}

/// Colours, and how large the text is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Look {
    pub appearance: Appearance,
    /// In percent, one of [`Look::SIZES`].
    pub text_size: u32,
}

impl Look {
    pub const SIZES: [u32; 4] = [100, 115, 130, 150];

    /// As set; anything unknown is light and 100 %.
    ///
    /// # Errors
    /// The store's own.
    pub fn read(app: &App) -> Result<Self, AppError> {
        let appearance = app.setting(Setting::Appearance)?;
        let size = app.setting(Setting::TextSize)?.and_then(|text| text.parse().ok());
        Ok(Self {
            appearance: Appearance::ALL.into_iter().find(|known| appearance.as_deref() == Some(known.name())).unwrap_or_default(),
            text_size: size.filter(|size| Self::SIZES.contains(size)).unwrap_or(100),
        })
    }
}

/// A paper as its setting names it.
pub const fn paper_name(paper: Option<Paper>) -> &'static str {
    match paper {
        Some(Paper::A4) => "a4",
        Some(Paper::Letter) => "letter",
        None => "",
    }
}

impl App {
    /// A setting as it was last put.
    ///
    /// # Errors
    /// The store's own.
    pub fn setting(&self, setting: Setting) -> Result<Option<String>, AppError> {
        Ok(self.store().setting(setting.key())?)
    }

    /// Keeps a setting. Who sets the unit of mass means the scale's too.
    ///
    /// # Errors
    /// The store's own.
    pub fn set(&self, setting: Setting, value: &str) -> Result<(), AppError> {
        self.store().write(self.now(), |tx| {
            tx.put_setting(setting.key(), value)?;
            if setting == Setting::Mass {
                tx.put_setting(Setting::WeighedIn.key(), value)?;
            }
            Ok(())
        })
    }

    /// As set; metric, and paper by the site's law, before anyone has.
    ///
    /// # Errors
    /// The store's own.
    pub fn units(&self) -> Result<Units, AppError> {
        let paper = self.setting(Setting::Paper)?;
        Ok(Units {
            mass: self.mass_unit(Setting::Mass)?.unwrap_or(MassUnit::Kilogram),
            pressure: self.setting(Setting::Pressure)?.and_then(|name| PressureUnit::from_name(&name)).unwrap_or_default(),
            vacuum: self.setting(Setting::Vacuum)?.and_then(|name| VacuumUnit::from_name(&name)).unwrap_or_default(),
            temperature: self.setting(Setting::Temperature)?.and_then(|name| TemperatureUnit::from_name(&name)).unwrap_or_default(),
            paper: [Paper::A4, Paper::Letter].into_iter().find(|known| paper.as_deref() == Some(paper_name(Some(*known)))),
        })
    }

    /// In what a scale is read: as last chosen there, else as set.
    ///
    /// # Errors
    /// The store's own.
    pub fn weighed_in(&self) -> Result<MassUnit, AppError> {
        Ok(match self.mass_unit(Setting::WeighedIn)? {
            Some(unit) => unit,
            None => self.units()?.mass,
        })
    }

    fn mass_unit(&self, setting: Setting) -> Result<Option<MassUnit>, AppError> {
        Ok(self.setting(setting)?.and_then(|name| MassUnit::from_name(&name).ok()))
    }

    /// # Errors
    /// The store's own.
    pub fn is_demonstration(&self) -> Result<bool, AppError> {
        Ok(self.setting(Setting::Demonstration)?.is_some_and(|value| value == "yes"))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::app::testing::{CountedIds, SetClock};
    use crate::store::Store;

    fn app() -> App {
        let clock = SetClock::at("2026-03-03T13:12:00Z".parse().unwrap(), chrono_tz::Tz::UTC);
        App::with(Store::in_memory().unwrap(), Box::new(clock), Box::new(CountedIds::after(1))).unwrap()
    }

    #[test]
    fn a_fresh_device_is_metric_and_light() {
        let app = app();
        let units = app.units().unwrap();
        assert_eq!((units.mass, units.pressure, units.paper), (MassUnit::Kilogram, PressureUnit::Bar, None));
        assert_eq!(Look::read(&app).unwrap(), Look { appearance: Appearance::Light, text_size: 100 });
        assert!(!app.is_demonstration().unwrap());
    }

    #[test]
    fn what_is_set_is_read() {
        let app = app();
        for (setting, value) in [
            (Setting::Pressure, "psi"),
            (Setting::Vacuum, "micron"),
            (Setting::Temperature, "\u{b0}F"),
            (Setting::Paper, "letter"),
            (Setting::Appearance, "sunlight"),
            (Setting::TextSize, "130"),
        ] {
            app.set(setting, value).unwrap();
        }
        let units = app.units().unwrap();
        assert_eq!((units.pressure, units.vacuum, units.temperature), (PressureUnit::Psi, VacuumUnit::Micron, TemperatureUnit::Fahrenheit));
        assert_eq!(units.paper, Some(Paper::Letter));
        assert_eq!(Look::read(&app).unwrap(), Look { appearance: Appearance::Sunlight, text_size: 130 });
        app.set(Setting::Paper, "").unwrap();
        app.set(Setting::TextSize, "7").unwrap();
        assert_eq!((app.units().unwrap().paper, Look::read(&app).unwrap().text_size), (None, 100));
    }

    #[test]
    fn the_unit_of_mass_holds_at_the_scale_until_another_is_chosen_there() {
        let app = app();
        app.set(Setting::Mass, "lb").unwrap();
        assert_eq!((app.units().unwrap().mass, app.weighed_in().unwrap()), (MassUnit::Pound, MassUnit::Pound));
        app.set(Setting::WeighedIn, "oz").unwrap();
        assert_eq!((app.units().unwrap().mass, app.weighed_in().unwrap()), (MassUnit::Pound, MassUnit::Ounce));
        app.set(Setting::Mass, "g").unwrap();
        assert_eq!(app.weighed_in().unwrap(), MassUnit::Gram);
    }
}
