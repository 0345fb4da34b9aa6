//! `calc hold`: what a pressure hold with dry nitrogen shows.

use super::sheet::{Sheet, json_text, row, significant};
use super::{CalcError, CalcFormat, find_gas, float, pressure, pressure_step, temperature, temperature_step, volume};
use crate::gas::Gas;
use crate::measure::{Hold, HoldAnswer, HoldLeak, HoldVerdict, Leak, LeakUnit, NITROGEN_SOURCE, pressure_hold};
use crate::quantity::{
    PressureStep, Ratio, Temperature, TemperatureStep, Volume, WrittenPressure, decimal_text, parse_decimal, rounded_text,
};
use clap::Args;
use serde_json::{Value, json};

#[derive(Debug, Args)]
pub struct HoldArgs {
    /// Pressure at the start: 25barg, 360psig
    #[arg(long, value_parser = pressure)]
    start: WrittenPressure,
    #[arg(long, value_parser = temperature, allow_hyphen_values = true)]
    start_temperature: Temperature,
    /// Pressure at the end
    #[arg(long, value_parser = pressure)]
    end: WrittenPressure,
    #[arg(long, value_parser = temperature, allow_hyphen_values = true)]
    end_temperature: Temperature,
    #[arg(long, value_parser = hours)]
    hours: Ratio,
    /// What the nitrogen fills: 50l. Without it there is no leak to tell, only a drop
    #[arg(long, value_parser = volume)]
    volume: Option<Volume>,
    /// The appliance's gas, to tell the leak in grams a year of it
    #[arg(long)]
    refrigerant: Option<String>,
    /// One step of the gauge
    #[arg(long, value_parser = pressure_step, default_value = "0.1bar")]
    division: PressureStep,
    /// How far each temperature may be off; 2K unless a sensor sits on the pipe
    #[arg(long, value_parser = temperature_step, default_value = "2K")]
    temperature_error: TemperatureStep,
    #[arg(long, value_enum, default_value_t)]
    format: CalcFormat,
}

const ATMOSPHERE: &str = "gauge pressures are against the standard atmosphere, 1.01325 bar, at start and end";
const BAND: &str = "band: each pressure one division, each temperature its error to both sides, rectangular; k = 2 (JCGM 100:2008)";
const LEAK: &str = "leak: lost moles \u{d7} R \u{d7} 293.15 K / time (pressure decay in a fixed volume)";
const INDICATIVE: &str = "Indicative: a leak of nitrogen at test pressure is not the leak of the gas at working pressure.";
const CAUTION: &str =
    "Nitrogen through a regulator, in steps, never above the test pressure of the weakest part; never oxygen or compressed air.";
const ATM_BAR: f64 = 1.01325;

fn hours(text: &str) -> Result<Ratio, String> {
    let hours = parse_decimal(text.trim()).map_err(|error| error.to_string())?;
    let most = Ratio::from_integer(100_000);
    if hours > Ratio::from_integer(0) && hours <= most { Ok(hours) } else { Err("write hours above zero, such as 24".to_owned()) }
}

pub(super) fn run(args: &HoldArgs) -> Result<String, CalcError> {
    let gas = args.refrigerant.as_deref().map(find_gas).transpose()?;
    let hold = Hold {
        start: float(args.start.absolute().pascal()),
        start_temperature: float(args.start_temperature.kelvin()),
        end: float(args.end.absolute().pascal()),
        end_temperature: float(args.end_temperature.kelvin()),
        hours: float(args.hours),
        division: float(args.division.pascal()),
        temperature_error: float(args.temperature_error.kelvin()),
        volume: args.volume.map(|volume| float(volume.cubic_metres())),
    };
    let answer = pressure_hold(&hold).ok_or_else(|| {
        CalcError::Cannot("nitrogen is known here from -40 to 80 \u{b0}C and up to 60 bar absolute; give readings within that".to_owned())
    })?;
    Ok(match args.format {
        CalcFormat::Table => table(gas, &hold, &answer),
        CalcFormat::Json => json_text(&json(args, gas, &hold, &answer)),
    })
}

/// Grams a year of the appliance's gas, where it is named and its molar mass known.
fn grams(gas: Option<&Gas>, rate: f64) -> Option<f64> {
    Leak::new(gas?, rate, LeakUnit::PascalM3S, 293.15).map(|leak| leak.grams_per_year)
}

fn meaning(answer: &HoldAnswer) -> String {
    let (drop, band) = (answer.drop / 1e5, answer.band / 1e5);
    match answer.verdict {
        HoldVerdict::Holds => format!(
            "No drop that these readings could tell from none: {drop:.3} bar, within \u{b1} {band:.3} bar. A leak smaller than that stays hidden."
        ),
        HoldVerdict::Drops => {
            format!("A drop of {drop:.3} bar that the temperatures do not explain, beyond \u{b1} {band:.3} bar: look for the leak.")
        }
        HoldVerdict::Rises => format!(
            "{:.3} bar higher than the temperatures explain, beyond \u{b1} {band:.3} bar: not settled, a wrong reading, or gas coming in. Read again.",
            -drop
        ),
    }
}

fn table(gas: Option<&Gas>, hold: &Hold, answer: &HoldAnswer) -> String {
    let mut sheet = Sheet::titled(&format!("Pressure hold with nitrogen: {}", answer.verdict.name()));
    let at = |name: &str, pascal: f64| row([name, &format!("{:.3}", pascal / 1e5 - ATM_BAR), "bar gauge"]);
    let step = |name: &str, pascal: f64| row([name, &format!("{:.3}", pascal / 1e5), "bar"]);
    sheet.rows(
        "",
        &[
            at("start", hold.start),
            at("end, as read", hold.end),
            at("end, had nothing been lost", answer.expected),
            step("unexplained drop", answer.drop),
            step("band", answer.band),
        ],
    );
    sheet.note(&meaning(answer));
    if let Some(leak) = &answer.leak {
        let mut rows = vec![row([
            "",
            "Pa\u{b7}m\u{b3}/s at 20 \u{b0}C",
            &gas.map_or_else(String::new, |gas| format!("g/yr of {}", gas.designation())),
        ])];
        let of = |name: &str, rate: f64| {
            row([name, &significant(rate, 3), &grams(gas, rate).map_or_else(String::new, |grams| significant(grams, 3))])
        };
        rows.push(of("leak from this drop", leak.rate));
        rows.push(of("smallest leak this hold could show", leak.smallest));
        sheet.rows("", &rows);
        sheet.rows("", &[row(["nitrogen lost", &significant(leak.grams, 3), "g"])]);
        sheet.note(INDICATIVE);
    }
    sheet.note(CAUTION);
    sheet.cite(NITROGEN_SOURCE);
    sheet.cite(ATMOSPHERE);
    sheet.cite(BAND);
    if answer.leak.is_some() {
        sheet.cite(LEAK);
    }
    sheet.finish()
}

fn json(args: &HoldArgs, gas: Option<&Gas>, hold: &Hold, answer: &HoldAnswer) -> Value {
    let exact = |value: Ratio| decimal_text(value).unwrap_or_else(|| rounded_text(value, 6));
    let bar = |pascal: f64| format!("{:.4}", pascal / 1e5);
    let leak = |leak: &HoldLeak| {
        json!({
            "nitrogen_lost_g": significant(leak.grams, 5),
            "rate_pa_m3_s": significant(leak.rate, 5),
            "grams_per_year": grams(gas, leak.rate).map(|grams| significant(grams, 5)),
            "smallest_rate_pa_m3_s": significant(leak.smallest, 5),
            "smallest_grams_per_year": grams(gas, leak.smallest).map(|grams| significant(grams, 5)),
        })
    };
    json!({
        "input": {
            "start_pa_absolute": exact(args.start.absolute().pascal()),
            "start_temperature_k": exact(args.start_temperature.kelvin()),
            "end_pa_absolute": exact(args.end.absolute().pascal()),
            "end_temperature_k": exact(args.end_temperature.kelvin()),
            "hours": exact(args.hours),
            "volume_m3": args.volume.map(|volume| exact(volume.cubic_metres())),
            "refrigerant": gas.map(Gas::designation),
            "division_pa": exact(args.division.pascal()),
            "temperature_error_k": exact(args.temperature_error.kelvin()),
        },
        "expected_bar_absolute": bar(answer.expected),
        "expected_bar_gauge": format!("{:.4}", answer.expected / 1e5 - ATM_BAR),
        "end_bar_absolute": bar(hold.end),
        "unexplained_drop_bar": bar(answer.drop),
        "band_bar": bar(answer.band),
        "verdict": answer.verdict.name(),
        "leak": answer.leak.as_ref().map(leak),
        "remarks": [meaning(answer), INDICATIVE, CAUTION],
        "sources": [NITROGEN_SOURCE, ATMOSPHERE, BAND, LEAK],
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn args(end: &str, volume: Option<&str>, format: CalcFormat) -> HoldArgs {
        HoldArgs {
            start: pressure("25barg").unwrap(),
            start_temperature: temperature("20C").unwrap(),
            end: pressure(end).unwrap(),
            end_temperature: temperature("15C").unwrap(),
            hours: hours("24").unwrap(),
            volume: volume.map(|text| super::volume(text).unwrap()),
            refrigerant: Some("R-134a".to_owned()),
            division: pressure_step("0.1bar").unwrap(),
            temperature_error: temperature_step("0.2K").unwrap(),
            format,
        }
    }

    #[test]
    fn a_hold_tells_drop_and_leak() {
        let json: Value = serde_json::from_str(&run(&args("24.2barg", Some("50l"), CalcFormat::Json)).unwrap()).unwrap();
        assert_eq!((json["verdict"].as_str(), json["expected_bar_gauge"].as_str()), (Some("drops"), Some("24.5283")));
        assert!(json["leak"]["grams_per_year"].as_str().unwrap().parse::<f64>().unwrap() > 20_000.0);
        let table = run(&args("24.2barg", None, CalcFormat::Table)).unwrap();
        assert!(table.contains("had nothing been lost  24.528") && !table.contains("smallest leak"), "{table}");
    }

    #[test]
    fn readings_outside_the_table_are_told() {
        let message = run(&args("80barg", None, CalcFormat::Table)).unwrap_err().to_string();
        assert!(message.contains("60 bar"), "{message}");
        assert!(hours("0").is_err() && hours("-1").is_err() && hours("x").is_err());
    }
}
