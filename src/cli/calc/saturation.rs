//! `calc saturation`: between liquid and vapour, and what a cylinder's pressure means.

use super::sheet::{Sheet, json_text, row};
use super::{CalcError, CalcFormat, find_gas, float, pressure, pressure_step, temperature, temperature_step};
use crate::gas::Gas;
use crate::measure::{PressureCheck, PressureVerdict, pressure_check};
use crate::quantity::{PressureStep, Ratio, Temperature, TemperatureStep, WrittenPressure, rounded_text};
use clap::Args;
use serde_json::{Value, json};

#[derive(Debug, Args)]
pub struct SaturationArgs {
    #[arg(long)]
    refrigerant: String,
    #[arg(long, value_parser = temperature, allow_hyphen_values = true)]
    temperature: Temperature,
    /// Pressure of the still cylinder: 9.6barg, 150psig
    #[arg(long, value_parser = pressure, allow_hyphen_values = true)]
    reading: Option<WrittenPressure>,
    /// How far the temperature may be off
    #[arg(long, value_parser = temperature_step, default_value = "2K")]
    temperature_error: TemperatureStep,
    /// One step of the gauge
    #[arg(long, value_parser = pressure_step, default_value = "0.1bar")]
    division: PressureStep,
    #[arg(long, value_enum, default_value_t)]
    format: CalcFormat,
}

const ATMOSPHERE: &str = "gauge pressures are against the standard atmosphere, 1.01325 bar";
const BUBBLE: &str = "a still cylinder with liquid in it shows the bubble pressure, also for a blend with glide";

const ATM_BAR: f64 = 1.01325;
const BAR_PER_PSI: f64 = 0.068_947_572_931_683_6;

pub(super) fn run(args: &SaturationArgs) -> Result<String, CalcError> {
    let gas = find_gas(&args.refrigerant)?;
    let celsius = float(args.temperature.celsius());
    let found = [gas.bubble_pressure(celsius), gas.dew_pressure(celsius), gas.liquid_density(celsius)];
    if found.iter().all(Option::is_none) {
        return Err(CalcError::Cannot(format!(
            "the catalogue has no saturation figures of {} at {} \u{b0}C; its table goes from -40 to 65 \u{b0}C, and not above the critical temperature",
            gas.designation(),
            rounded_text(args.temperature.celsius(), 1)
        )));
    }
    let check = match args.reading {
        None => None,
        Some(reading) => {
            let reading = float(reading.absolute().bar());
            let (error, division) = (float(args.temperature_error.kelvin()), float(args.division.pascal()) / 1e5);
            let check = pressure_check(gas, celsius, reading, error, division);
            Some((
                reading,
                check.ok_or_else(|| CalcError::Cannot(format!("the catalogue has no bubble pressure of {} there", gas.designation())))?,
            ))
        }
    };
    Ok(match args.format {
        CalcFormat::Table => table(args, gas, found, check),
        CalcFormat::Json => json_text(&json(args, gas, found, check)),
    })
}

fn meaning(verdict: PressureVerdict, gas: &Gas) -> String {
    let name = gas.designation();
    match verdict {
        PressureVerdict::Fits => format!("Fits {name}. Other gases may fit too: pressure alone proves nothing."),
        PressureVerdict::TooHigh => {
            format!("Too high for {name}: air in the cylinder, or another gas. Cool it, let it stand, read again; identify before use.")
        }
        PressureVerdict::TooLow => {
            format!("Too low for {name}: no liquid left, a colder cylinder than measured, or another gas. Identify before use.")
        }
    }
}

type Found = [Option<f64>; 3];

fn table(args: &SaturationArgs, gas: &Gas, found: Found, check: Option<(f64, PressureCheck)>) -> String {
    let mut sheet = Sheet::titled(&format!("{} at {} \u{b0}C", gas.designation(), rounded_text(args.temperature.celsius(), 1)));
    let pressures = |name: &str, bar: f64| {
        row([name, &format!("{bar:.3}"), &format!("{:.3}", bar - ATM_BAR), &format!("{:.1}", (bar - ATM_BAR) / BAR_PER_PSI)])
    };
    let mut rows = vec![row(["", "bar absolute", "bar gauge", "psi gauge"])];
    rows.extend(found[0].map(|bar| pressures("bubble pressure", bar)));
    rows.extend(found[1].map(|bar| pressures("dew pressure", bar)));
    if let Some((reading, check)) = check {
        rows.push(pressures("reading", reading));
        rows.push(pressures("lowest that fits", check.lowest));
        rows.push(pressures("highest that fits", check.highest));
    }
    sheet.rows("", &rows);
    if let Some(density) = found[2] {
        sheet.rows("", &[row(["density of the liquid", &format!("{density:.1}"), "kg/m\u{b3}"])]);
    }
    if let Some((_, check)) = check {
        sheet.note(&meaning(check.verdict, gas));
    }
    sheet.cite(&gas.fluid_source().to_string());
    sheet.cite(ATMOSPHERE);
    sheet.cite(BUBBLE);
    sheet.finish()
}

fn json(args: &SaturationArgs, gas: &Gas, found: Found, check: Option<(f64, PressureCheck)>) -> Value {
    let exact = |value: Ratio| crate::quantity::decimal_text(value).unwrap_or_else(|| rounded_text(value, 6));
    let bar = |value: f64| format!("{value:.4}");
    json!({
        "input": {
            "refrigerant": gas.designation(),
            "temperature_k": exact(args.temperature.kelvin()),
            "reading_pa_absolute": args.reading.map(|reading| exact(reading.absolute().pascal())),
            "temperature_error_k": exact(args.temperature_error.kelvin()),
            "division_pa": exact(args.division.pascal()),
        },
        "bubble_pressure_bar_absolute": found[0].map(bar),
        "dew_pressure_bar_absolute": found[1].map(bar),
        "liquid_density_kg_m3": found[2].map(|density| format!("{density:.2}")),
        "reading": check.map(|(reading, check)| json!({
            "bar_absolute": bar(reading),
            "expected_bar_absolute": bar(check.expected),
            "lowest_bar_absolute": bar(check.lowest),
            "highest_bar_absolute": bar(check.highest),
            "verdict": check.verdict.name(),
            "meaning": meaning(check.verdict, gas),
        })),
        "sources": [gas.fluid_source().to_string(), ATMOSPHERE, BUBBLE],
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn args(gas: &str, at: &str, reading: Option<&str>) -> SaturationArgs {
        SaturationArgs {
            refrigerant: gas.into(),
            temperature: temperature(at).unwrap(),
            reading: reading.map(|text| pressure(text).unwrap()),
            temperature_error: temperature_step("2K").unwrap(),
            division: pressure_step("0.1bar").unwrap(),
            format: CalcFormat::Json,
        }
    }

    fn answer(gas: &str, at: &str, reading: Option<&str>) -> Value {
        serde_json::from_str(&run(&args(gas, at, reading)).unwrap()).unwrap()
    }

    #[test]
    fn readings_get_their_meaning() {
        assert_eq!(answer("R-22", "25C", Some("9.6barg"))["reading"]["verdict"], "fits the gas");
        assert_eq!(answer("R-22", "77F", Some("11barg"))["reading"]["verdict"], "too high");
        assert_eq!(answer("R-22", "25C", Some("120psig"))["reading"]["verdict"], "too low");
        assert_eq!(answer("R-22", "25C", None)["bubble_pressure_bar_absolute"], "10.4392");
    }

    #[test]
    fn outside_the_table_the_answer_says_why() {
        let error = run(&args("R-744", "40C", None)).unwrap_err().to_string();
        assert!(error.contains("R-744 at 40.0 °C") && error.contains("critical"), "{error}");
        assert!(run(&args("R-403B", "25C", Some("9barg"))).unwrap_err().to_string().contains("no bubble pressure"));
    }
}
