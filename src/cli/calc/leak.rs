//! `calc leak`: a leak in all its units.

use super::sheet::{Sheet, json_text, row, significant};
use super::{CalcError, CalcFormat, find_gas, float, temperature};
use crate::measure::{Leak, LeakUnit};
use crate::quantity::{Temperature, decimal_text};
use clap::Args;
use serde_json::{Map, Value, json};

#[derive(Debug, Args)]
pub struct LeakArgs {
    #[arg(long)]
    refrigerant: String,
    /// 1e-5Pa.m3/s, 1e-4mbar.l/s, 5g/yr, 0.5oz/yr
    #[arg(long, value_parser = rate)]
    rate: (f64, LeakUnit),
    #[arg(long, value_parser = temperature, default_value = "20C", allow_hyphen_values = true)]
    temperature: Temperature,
    #[arg(long, value_enum, default_value_t)]
    format: CalcFormat,
}

const FORMULA: &str = "q = Q M t / (R T): ideal gas, R = 8.314462618 J/(mol K), a year of 365 days";
const INDICATIVE: &str = "A real vapour leaks 1 to 2 % more by mass. A leak measured with another gas does not carry over like this.";

fn rate(text: &str) -> Result<(f64, LeakUnit), String> {
    let known = || format!("write a number and a unit: {}", LeakUnit::ALL.map(LeakUnit::name).join(", "));
    let plain = text.trim().replace('\u{b7}', ".").replace('\u{b3}', "3");
    let unit =
        LeakUnit::ALL.into_iter().filter(|unit| plain.ends_with(unit.name())).max_by_key(|unit| unit.name().len()).ok_or_else(known)?;
    let number = plain[..plain.len() - unit.name().len()].trim().replace(',', ".");
    let value: f64 = number.parse().map_err(|_| known())?;
    if value.is_finite() && value > 0.0 && value < 1e9 { Ok((value, unit)) } else { Err("must be above zero, and a leak".to_owned()) }
}

pub(super) fn run(args: &LeakArgs) -> Result<String, CalcError> {
    let gas = find_gas(&args.refrigerant)?;
    let kelvin = args.temperature.kelvin();
    let (rate, unit) = args.rate;
    let leak = Leak::new(gas, rate, unit, float(kelvin))
        .ok_or_else(|| CalcError::Cannot(format!("the catalogue has no molar mass of {}", gas.designation())))?;
    let celsius = decimal_text(args.temperature.celsius()).unwrap_or_else(|| crate::quantity::rounded_text(args.temperature.celsius(), 2));
    let molar = gas.molar_mass().and_then(|figure| decimal_text(figure.value)).unwrap_or_default();
    if args.format == CalcFormat::Json {
        let units = LeakUnit::ALL.map(|unit| (unit.name().to_owned(), json!(significant(leak.in_unit(unit), 6))));
        return Ok(json_text(&json!({
            "input": {
                "refrigerant": gas.designation(),
                "rate_pa_m3_s": significant(leak.pascal_m3_s, 6),
                "temperature_k": decimal_text(kelvin).unwrap_or_else(|| crate::quantity::rounded_text(kelvin, 6)),
            },
            "leak": Value::Object(Map::from_iter(units)),
            "grams_per_year": significant(leak.grams_per_year, 6),
            "molar_mass_g_mol": molar,
            "remarks": [INDICATIVE],
            "sources": [FORMULA, format!("molar mass: {}", gas.fluid_source())],
        })));
    }
    let mut sheet = Sheet::titled(&format!("A leak of {} at {celsius} \u{b0}C", gas.designation()));
    let rows: Vec<_> = LeakUnit::ALL.map(|unit| row([&significant(leak.in_unit(unit), 4), unit.name()])).into();
    sheet.rows("", &rows);
    sheet.note(INDICATIVE);
    sheet.cite(FORMULA);
    sheet.cite(&format!("molar mass {molar} g/mol: {}", gas.fluid_source()));
    Ok(sheet.finish())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rates_are_read_with_their_unit() {
        assert_eq!(rate("1e-5Pa.m3/s").unwrap(), (1e-5, LeakUnit::PascalM3S));
        assert_eq!(rate("1e-5 Pa·m³/s").unwrap(), (1e-5, LeakUnit::PascalM3S));
        assert_eq!(rate("5kg/yr").unwrap(), (5.0, LeakUnit::KilogramYear));
        assert_eq!(rate("0,5g/yr").unwrap(), (0.5, LeakUnit::GramYear));
        for text in ["5", "-1g/yr", "0g/yr", "NaNg/yr", "infg/yr", "g/yr", "5g/day"] {
            assert!(rate(text).is_err(), "{text}");
        }
    }

    #[test]
    fn the_answer_gives_grams_a_year() {
        let args = LeakArgs {
            refrigerant: "R-134a".into(),
            rate: (1e-5, LeakUnit::PascalM3S),
            temperature: temperature("20C").unwrap(),
            format: CalcFormat::Json,
        };
        let json: Value = serde_json::from_str(&run(&args).unwrap()).unwrap();
        assert_eq!(json["grams_per_year"], "13.2014");
        assert_eq!(json["leak"]["mbar.l/s"], "0.000100000");
        assert!(run(&LeakArgs { format: CalcFormat::Table, ..args }).unwrap().contains("13.20  g/yr"));
    }
}
