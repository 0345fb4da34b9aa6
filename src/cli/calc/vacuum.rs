//! `calc vacuum`: a vacuum rise, judged by its shape.

use super::sheet::{Sheet, json_text, row, significant};
use super::{CalcError, CalcFormat, float, temperature, volume};
use crate::measure::{
    DRY_PASCAL, LEAST_MINUTES, LEAST_READINGS, STILL_PASCAL, VacuumAnswer, VacuumDoubt, VacuumReading, VacuumVerdict, leak_of_rise,
    vacuum_rise, water_vapour_pressure,
};
use crate::quantity::{Ratio, Temperature, Volume, WrittenPressure, decimal_text, parse_decimal, rounded_text};
use clap::Args;
use serde_json::{Value, json};
use std::path::{Path, PathBuf};

#[derive(Debug, Args)]
pub struct VacuumArgs {
    /// A CSV file: minutes since the pump was shut off, pressure with its unit (67Pa, 500micron)
    #[arg(long)]
    readings: PathBuf,
    /// Of the coldest part that is under vacuum
    #[arg(long, value_parser = temperature, allow_hyphen_values = true)]
    temperature: Temperature,
    /// What is under vacuum, to tell a leak: 20l
    #[arg(long, value_parser = volume)]
    volume: Option<Volume>,
    #[arg(long, value_enum, default_value_t)]
    format: CalcFormat,
}

const LIMITS: &str = "dry enough below 270 Pa, no rise up to 2 Pa: Spain, RD 552/2019, IF-09 1.6; EN 378-2:2016 (from memory)";
const SHAPE: &str = "shape: straight lines through the first and the second half by least squares; levels off where the second is at most a quarter as steep, keeps rising from 60 % (own choice)";
const WATER: &str = "water vapour: Magnus form with the coefficients of WMO-No. 8, annex 4.B (from memory); within 0.5 % of CoolProp 8.0.0";
const LEAK: &str = "leak: Q = V \u{394}p/\u{394}t";
const NO_PROOF: &str = "A vacuum is no proof of tightness: the pressure test is.";

/// The readings in a file, in its order.
fn read(path: &Path) -> Result<Vec<VacuumReading>, CalcError> {
    let cannot = |line: u64, what: &str| CalcError::Cannot(format!("{}, line {line}: {what}", path.display()));
    let mut rows = csv::ReaderBuilder::new()
        .has_headers(false)
        .flexible(true)
        .trim(csv::Trim::All)
        .from_path(path)
        .map_err(|error| CalcError::Cannot(format!("{} cannot be read: {error}", path.display())))?;
    let mut readings: Vec<VacuumReading> = Vec::new();
    for (place, record) in rows.records().enumerate() {
        let record = record.map_err(|error| CalcError::Cannot(format!("{} cannot be read: {error}", path.display())))?;
        let line = record.position().map_or(0, csv::Position::line);
        let cell = |column: usize| record.get(column).unwrap_or_default().trim_start_matches('\u{feff}');
        let Ok(minutes) = parse_decimal(cell(0)) else {
            // The first line may say what the columns are.
            if place == 0 {
                continue;
            }
            return Err(cannot(line, &format!("column 1, minutes: \"{}\" is not a number", cell(0))));
        };
        if record.len() != 2 {
            return Err(cannot(line, "there must be two columns, minutes and pressure: 5,67Pa"));
        }
        let pressure = WrittenPressure::from_written(cell(1)).map_err(|error| cannot(line, &format!("column 2, pressure: {error}")))?;
        let reading = VacuumReading { minutes: float(minutes), pascal: float(pressure.absolute().pascal()) };
        if readings.last().is_some_and(|last| last.minutes >= reading.minutes) {
            return Err(cannot(line, "column 1, minutes: later than the line before, please; put the readings in order of time"));
        }
        readings.push(reading);
    }
    Ok(readings)
}

pub(super) fn run(args: &VacuumArgs) -> Result<String, CalcError> {
    let readings = read(&args.readings)?;
    let answer = vacuum_rise(&readings)
        .ok_or_else(|| CalcError::Cannot(format!("{}: there must be at least two readings", args.readings.display())))?;
    Ok(match args.format {
        CalcFormat::Table => table(args, &readings, &answer),
        CalcFormat::Json => json_text(&json(args, &readings, &answer)),
    })
}

fn meaning(answer: &VacuumAnswer) -> String {
    match (answer.verdict, answer.doubt) {
        (VacuumVerdict::Holds, _) => "Dry enough and not rising.".to_owned(),
        (VacuumVerdict::LevelsOff, _) => {
            "Moisture, or refrigerant that leaves the oil: break the vacuum with dry nitrogen, evacuate again, watch again.".to_owned()
        }
        (VacuumVerdict::KeepsRising, _) => "A leak, or much gas still in the oil: look for the leak under nitrogen pressure.".to_owned(),
        (_, Some(VacuumDoubt::FewReadings)) => format!("Fewer than {LEAST_READINGS} readings show no shape: go on reading."),
        (_, Some(VacuumDoubt::TooShort)) => format!("Less than {LEAST_MINUTES:.0} minutes show no shape: go on reading."),
        (_, Some(VacuumDoubt::StillWet)) => format!("Not rising, but above {DRY_PASCAL:.0} Pa: evacuate deeper, then watch again."),
        (_, Some(VacuumDoubt::Falling)) => {
            "The pressure falls: the pump is still at work, or the system cools. Let it settle, then watch again.".to_owned()
        }
        (_, Some(VacuumDoubt::Between) | None) => "Neither straight nor levelling yet: go on reading.".to_owned(),
    }
}

/// What the level says beside the pressure at which water boils.
fn beside_water(args: &VacuumArgs, answer: &VacuumAnswer) -> Option<String> {
    let water = water_vapour_pressure(float(args.temperature.celsius()));
    let level = answer.level?;
    Some(if level <= water {
        format!("It would end near {level:.0} Pa, not above water vapour at this temperature, {water:.0} Pa: moisture can do that.")
    } else {
        format!("It would end near {level:.0} Pa, above water vapour at this temperature, {water:.0} Pa: not moisture alone.")
    })
}

fn table(args: &VacuumArgs, readings: &[VacuumReading], answer: &VacuumAnswer) -> String {
    let mut sheet = Sheet::titled(&format!("Vacuum rise: {}", answer.verdict.name()));
    let figure = |name: &str, value: f64, unit: &str| row([name, &significant(value, 4), unit]);
    let mut rows = Vec::new();
    if let [first, .., last] = readings {
        rows.push(figure("first reading", first.pascal, "Pa"));
        rows.push(figure("last reading", last.pascal, "Pa"));
        rows.push(figure("watched", last.minutes - first.minutes, "min"));
    }
    rows.push(figure("rise", answer.rise, "Pa"));
    rows.push(figure("slope, first half", answer.first_slope, "Pa/h"));
    rows.push(figure("slope, second half", answer.second_slope, "Pa/h"));
    sheet.rows("", &rows);
    sheet.note(&meaning(answer));
    if let Some(sentence) = beside_water(args, answer) {
        sheet.note(&sentence);
    }
    if let (VacuumVerdict::KeepsRising, Some(volume)) = (answer.verdict, args.volume) {
        let leak = leak_of_rise(answer.second_slope, float(volume.cubic_metres()));
        sheet.rows("", &[row(["leak of the second half's slope", &significant(leak, 3), "Pa\u{b7}m\u{b3}/s"])]);
        sheet.cite(LEAK);
    }
    sheet.note(NO_PROOF);
    sheet.cite(LIMITS);
    sheet.cite(SHAPE);
    if answer.level.is_some() {
        sheet.cite(WATER);
    }
    sheet.finish()
}

fn json(args: &VacuumArgs, readings: &[VacuumReading], answer: &VacuumAnswer) -> Value {
    let exact = |value: Ratio| decimal_text(value).unwrap_or_else(|| rounded_text(value, 6));
    let figure = |value: f64| significant(value, 6);
    json!({
        "input": {
            "readings": readings.iter().map(|reading| json!({ "minutes": figure(reading.minutes), "pa": figure(reading.pascal) })).collect::<Vec<_>>(),
            "temperature_k": exact(args.temperature.kelvin()),
            "volume_m3": args.volume.map(|volume| exact(volume.cubic_metres())),
        },
        "verdict": answer.verdict.name(),
        "rise_pa": figure(answer.rise),
        "slope_pa_per_hour": figure(answer.slope),
        "first_half_pa_per_hour": figure(answer.first_slope),
        "second_half_pa_per_hour": figure(answer.second_slope),
        "level_pa": answer.level.map(figure),
        "water_vapour_pa": figure(water_vapour_pressure(float(args.temperature.celsius()))),
        "rate_pa_m3_s": args.volume.map(|volume| figure(leak_of_rise(answer.slope, float(volume.cubic_metres())))),
        "limits": { "dry_pa": figure(DRY_PASCAL), "still_pa": figure(STILL_PASCAL) },
        "remarks": std::iter::once(meaning(answer)).chain(beside_water(args, answer)).chain([NO_PROOF.to_owned()]).collect::<Vec<_>>(),
        "sources": [LIMITS, SHAPE, WATER, LEAK],
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn judged(text: &str) -> Result<Value, String> {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("rise.csv");
        std::fs::write(&path, text).unwrap();
        let args = VacuumArgs {
            readings: path,
            temperature: temperature("20C").unwrap(),
            volume: Some(volume("20l").unwrap()),
            format: CalcFormat::Json,
        };
        run(&args).map(|text| serde_json::from_str(&text).unwrap()).map_err(|error| error.to_string())
    }

    #[test]
    fn a_file_of_readings_is_judged() {
        let json = judged("minutes,pressure\n0,500micron\n5,520micron\n10,540micron\n15,560micron\n20,580micron\n").unwrap();
        assert_eq!((json["verdict"].as_str(), json["input"]["readings"][0]["pa"].as_str()), (Some("keeps rising"), Some("66.6612")));
        assert_eq!(judged("0,67Pa\n10,68Pa\n20,68Pa\n30,68Pa\n40,68.5Pa\n").unwrap()["verdict"], "holds");
    }

    #[test]
    fn bad_lines_are_named() {
        for (text, part) in [
            ("0,67Pa\nten,68Pa\n", "line 2: column 1"),
            ("0,67Pa\n5,68\n", "line 2: column 2"),
            ("5,67Pa\n0,68Pa\n", "order of time"),
            ("0,67Pa,x\n", "two columns"),
            ("minutes,pressure\n", "two readings"),
        ] {
            let message = judged(text).unwrap_err();
            assert!(message.contains(part), "{text}: {message}");
        }
    }
}
