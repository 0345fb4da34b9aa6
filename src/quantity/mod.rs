//! Exact quantities. Nothing here is a float, knows a clock or a language.

mod calendar;
mod decimal;
mod mass;
mod pressure;
mod temperature;
mod units;
mod volume;
mod written;

pub use calendar::{add_months, days_between};
pub use decimal::{NotADecimal, Ratio, decimal_text, floored_text, parse_decimal, rounded_text, square_root_text};
pub use mass::{Mass, MassError, MassUnit, Weighing};
pub use pressure::{AbsolutePressure, GaugePressure, PressureStep, WrittenPressure};
pub use temperature::{Temperature, TemperatureStep};
pub use units::{PressureUnit, TemperatureUnit, VacuumUnit};
pub use volume::Volume;
pub use written::QuantityError;
