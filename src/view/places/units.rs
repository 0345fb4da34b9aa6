//! Units, paper, colours and text size: settings of this device.

use crate::app::{App, AppError};
use crate::quantity::MassUnit;

pub const MASS: &str = "unit of mass";
pub const PRESSURE: &str = "unit of pressure";
pub const VACUUM: &str = "unit of vacuum";
pub const TEMPERATURE: &str = "unit of temperature";
pub const PAPER: &str = "paper";
pub const APPEARANCE: &str = "appearance";
/// Kept as a factor: `1`, `1.15`, `1.3`, `1.5`.
pub const TEXT_SIZE: &str = "text factor";

/// In what figures are shown and typed.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Units {
    pub mass: MassUnit,
    pub pressure: String,
    pub vacuum: String,
    pub temperature: String,
    pub paper: String,
}

impl Units {
    /// As set; metric and A4 before anyone has.
    ///
    /// # Errors
    /// The store's own.
    pub fn read(app: &App) -> Result<Self, AppError> {
        let setting = |key: &str, before: &str| app.store().setting(key).map(|value| value.unwrap_or_else(|| before.to_owned()));
        Ok(Self {
            mass: MassUnit::from_name(&setting(MASS, "kg")?).unwrap_or(MassUnit::Kilogram),
            pressure: setting(PRESSURE, "bar")?,
            vacuum: setting(VACUUM, "Pa")?,
            temperature: setting(TEMPERATURE, "C")?,
            paper: setting(PAPER, "a4")?,
        })
    }
}

/// For which light the colours are made, and how large the text is.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Look {
    /// `light`, `dark` or `sunlight`.
    pub appearance: String,
    /// In percent: 100, 115, 130 or 150.
    pub text_size: u32,
}

impl Look {
    pub const SIZES: [u32; 4] = [100, 115, 130, 150];

    /// As set; anything unknown is light and 100 %.
    ///
    /// # Errors
    /// The store's own.
    pub fn read(app: &App) -> Result<Self, AppError> {
        let appearance = app.store().setting(APPEARANCE)?.filter(|word| matches!(word.as_str(), "dark" | "sunlight"));
        let factor = app.store().setting(TEXT_SIZE)?;
        let size = Self::SIZES.into_iter().find(|size| factor.as_deref() == Some(&Self::factor(*size)));
        Ok(Self { appearance: appearance.unwrap_or_else(|| "light".to_owned()), text_size: size.unwrap_or(100) })
    }

    /// A size in percent as the setting keeps it.
    pub fn factor(percent: u32) -> String {
        let hundredths = format!("{}.{:02}", percent / 100, percent % 100);
        hundredths.trim_end_matches('0').trim_end_matches('.').to_owned()
    }
}
