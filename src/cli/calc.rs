//! `calc`: the field calculations, one file each.

mod fill;
mod gas;
mod hold;
mod leak;
mod rate;
mod room;
mod saturation;
mod sheet;
mod vacuum;

use crate::gas::Gas;
use crate::quantity::{Mass, PressureStep, QuantityError, Ratio, Temperature, TemperatureStep, Volume, WrittenPressure};
use clap::{Args, Subcommand, ValueEnum};

/// What goes wrong in a calculation that was asked for rightly. The sentence says what to do.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum CalcError {
    #[error("{name} is not in the catalogue{hint}")]
    UnknownGas { name: String, hint: String },
    #[error("{0}")]
    Cannot(String),
}

/// Calculators for the field: what goes in, what comes out, and where the figures come from.
#[derive(Debug, Args)]
pub struct CalcArgs {
    #[command(subcommand)]
    pub command: CalcCommand,
}

#[derive(Debug, Subcommand)]
pub enum CalcCommand {
    /// What a gas is: composition, ODP, GWP by each set, safety class, limits, sources
    Gas(gas::GasArgs),
    /// A leak rate by the annualizing method, and how it stands to the triggers
    Rate(rate::RateArgs),
    /// How much a cylinder may take, and which limit binds
    Fill(fill::FillArgs),
    /// A pressure hold with dry nitrogen: what was lost, and what the hold could have shown
    Hold(hold::HoldArgs),
    /// A vacuum rise, judged by its shape
    Vacuum(vacuum::VacuumArgs),
    /// A leak in all its units
    Leak(leak::LeakArgs),
    /// The whole charge let into a room, against each limit
    Room(room::RoomArgs),
    /// Pressures and density between liquid and vapour, and what a reading means
    Saturation(saturation::SaturationArgs),
}

/// How an answer is printed.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, ValueEnum)]
pub enum CalcFormat {
    #[default]
    Table,
    Json,
}

/// The answer, ready to print.
///
/// # Errors
/// [`CalcError`] when the gas is unknown or the figures do not allow an answer.
pub fn run(args: &CalcArgs) -> Result<String, CalcError> {
    match &args.command {
        CalcCommand::Gas(args) => gas::run(args),
        CalcCommand::Rate(args) => rate::run(args),
        CalcCommand::Fill(args) => fill::run(args),
        CalcCommand::Hold(args) => hold::run(args),
        CalcCommand::Vacuum(args) => vacuum::run(args),
        CalcCommand::Leak(args) => leak::run(args),
        CalcCommand::Room(args) => room::run(args),
        CalcCommand::Saturation(args) => saturation::run(args),
    }
}

fn find_gas(name: &str) -> Result<&'static Gas, CalcError> {
    crate::gas::find(name).ok_or_else(|| {
        let like = crate::gas::like(name);
        let hint = match like.as_slice() {
            [] => "; names look like R-410A or R-1234ze(E)".to_owned(),
            // A bare "R-4" would list half the catalogue.
            some => format!("; there is {}", some[..some.len().min(6)].join(", ")),
        };
        CalcError::UnknownGas { name: name.trim().to_owned(), hint }
    })
}

fn float(value: Ratio) -> f64 {
    *value.numer() as f64 / *value.denom() as f64
}

fn temperature(text: &str) -> Result<Temperature, String> {
    Temperature::from_written(text).map_err(|error| error.to_string())
}

fn temperature_step(text: &str) -> Result<TemperatureStep, String> {
    TemperatureStep::from_written(text).map_err(|error| error.to_string())
}

fn pressure(text: &str) -> Result<WrittenPressure, String> {
    WrittenPressure::from_written(text).map_err(|error| error.to_string())
}

fn pressure_step(text: &str) -> Result<PressureStep, String> {
    PressureStep::from_written(text).map_err(|error| error.to_string())
}

fn volume(text: &str) -> Result<Volume, String> {
    Volume::from_written(text).map_err(|error| error.to_string())
}

/// A mass above zero.
fn positive_mass(text: &str) -> Result<Mass, String> {
    let mass = Mass::from_written(text).map_err(|error| error.to_string())?;
    if mass.is_positive() { Ok(mass) } else { Err("must be above zero".to_owned()) }
}

/// A water capacity: a volume, or the mass of the water, 1 kg = 1 l. The flag says that it was written in pounds or ounces.
fn water_capacity(text: &str) -> Result<WaterCapacity, String> {
    let pounds = text.contains("lb") || text.trim_end().ends_with("oz");
    let is_mass = pounds || text.trim_end().ends_with("kg") || text.trim_end().ends_with('g');
    let volume = if is_mass {
        Volume::of_water(positive_mass(text)?).ok_or_else(|| "must be above zero".to_owned())?
    } else {
        Volume::from_written(text).map_err(|error: QuantityError| error.to_string())?
    };
    Ok(WaterCapacity { volume, pounds, written: text.trim().to_owned() })
}

#[derive(Debug, Clone)]
struct WaterCapacity {
    volume: Volume,
    pounds: bool,
    written: String,
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn unknown_gases_get_a_hint() {
        let message = |name: &str| find_gas(name).unwrap_err().to_string();
        assert_eq!(message("r-410"), "r-410 is not in the catalogue; there is R-410A");
        assert_eq!(message("propane"), "propane is not in the catalogue; names look like R-410A or R-1234ze(E)");
    }

    #[test]
    fn water_capacity_is_volume_or_mass_of_water() {
        assert_eq!(water_capacity("26.2l").unwrap().volume, water_capacity("26.2kg").unwrap().volume);
        assert!(water_capacity("47.7lb").unwrap().pounds && !water_capacity("26.2l").unwrap().pounds);
        for text in ["0kg", "-1lb", "0l", "26.2", "26.2x"] {
            assert!(water_capacity(text).is_err(), "{text}");
        }
    }
}
