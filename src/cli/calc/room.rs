//! `calc room`: the whole charge let into a room.

use super::sheet::{Sheet, json_text, row, significant};
use super::{CalcError, CalcFormat, find_gas, float, positive_mass, volume};
use crate::gas::Gas;
use crate::measure::{RoomCheck, RoomLimit, RoomLimitKind, parts_per_million, room_check};
use crate::quantity::{Mass, Ratio, Volume, decimal_text, rounded_text};
use clap::Args;
use serde_json::{Value, json};

#[derive(Debug, Args)]
pub struct RoomArgs {
    #[arg(long)]
    refrigerant: String,
    /// The whole charge of the circuit
    #[arg(long, value_parser = positive_mass)]
    charge: Mass,
    /// The smallest space the gas can reach with the doors shut: 40m3
    #[arg(long, value_parser = volume)]
    volume: Volume,
    #[arg(long, value_enum, default_value_t)]
    format: CalcFormat,
}

const PERMISSION: &str = "Passing is no permission: local codes, the maker's manual and the place itself come first.";
const CHECK: &str = "Limits from memory or second-hand: check against your own copy of the standard.";
const PPM: &str = "ppm by volume: ideal gas at 25 \u{b0}C and 1 atm, 24.465 l/mol";

pub(super) fn run(args: &RoomArgs) -> Result<String, CalcError> {
    let gas = find_gas(&args.refrigerant)?;
    let check = room_check(gas, args.charge, args.volume);
    Ok(match args.format {
        CalcFormat::Table => table(args, gas, &check),
        CalcFormat::Json => json_text(&json(args, gas, &check)),
    })
}

fn ppm(gas: &Gas, kg_per_m3: Ratio) -> String {
    parts_per_million(gas, float(kg_per_m3)).map_or_else(|| "\u{2013}".to_owned(), |ppm| format!("{ppm:.0}"))
}

/// The RCL's own figure by volume, where its source prints one.
fn limit_ppm(gas: &Gas, limit: &RoomLimit) -> String {
    let printed = gas.limits().rcl_ppm.filter(|_| limit.kind == RoomLimitKind::Rcl);
    printed.and_then(|figure| decimal_text(figure.value)).unwrap_or_else(|| ppm(gas, limit.limit))
}

fn table(args: &RoomArgs, gas: &Gas, check: &RoomCheck) -> String {
    let title = format!(
        "{} kg of {} let into {} m\u{b3}",
        significant(float(args.charge.kg()), 4),
        gas.designation(),
        decimal_text(args.volume.cubic_metres()).unwrap_or_default()
    );
    let mut sheet = Sheet::titled(&title);
    let mut rows = vec![row(["", "kg/m\u{b3}", "ppm", "largest charge", "", ""])];
    rows.push(row(["this charge", &significant(float(check.concentration), 4), &ppm(gas, check.concentration)]));
    for limit in &check.limits {
        let mark = sheet.cite(&format!("{}: {}", limit.kind.name(), limit.source));
        let word = if limit.passes { "passes" } else { "OVER" };
        let largest = format!("{} kg", rounded_text(limit.largest.kg(), 3));
        rows.push(row([limit.kind.name(), &decimal_text(limit.limit).unwrap_or_default(), &limit_ppm(gas, limit), &largest, word, &mark]));
    }
    sheet.rows("", &rows);
    match check.largest {
        Some(largest) => sheet.note(&format!("Largest charge that passes every limit: {} kg.", rounded_text(largest.kg(), 3))),
        None => sheet.note("The catalogue has no limit for this gas."),
    }
    sheet.note(PERMISSION);
    if check.limits.iter().any(|limit| limit.source.asks_for_a_check()) {
        sheet.note(CHECK);
    }
    sheet.cite(PPM);
    sheet.finish()
}

fn json(args: &RoomArgs, gas: &Gas, check: &RoomCheck) -> Value {
    let exact = |value: Ratio| decimal_text(value).unwrap_or_else(|| rounded_text(value, 9));
    let limits: Vec<Value> = check
        .limits
        .iter()
        .map(|limit| {
            json!({
                "limit": limit.kind.name(),
                "kg_m3": exact(limit.limit),
                "ppm": limit_ppm(gas, limit),
                "passes": limit.passes,
                "largest_charge_kg": limit.largest.kg_text(),
                "source": limit.source.to_string(),
            })
        })
        .collect();
    json!({
        "input": {
            "refrigerant": gas.designation(),
            "charge_kg": args.charge.kg_text(),
            "volume_m3": exact(args.volume.cubic_metres()),
        },
        "concentration_kg_m3": exact(check.concentration),
        "concentration_ppm": ppm(gas, check.concentration),
        "molar_mass_g_mol": gas.molar_mass().map(|figure| exact(figure.value)),
        "limits": limits,
        "passes_all": (!check.limits.is_empty()).then(|| check.limits.iter().all(|limit| limit.passes)),
        "largest_charge_kg": check.largest.map(Mass::kg_text),
        "remarks": [PERMISSION],
        "sources": ["concentration: charge over volume", PPM, "largest charge rounded down to the gram"],
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_room_is_judged_against_each_limit() {
        let args = |format| RoomArgs {
            refrigerant: "r410a".into(),
            charge: Mass::from_kg(20),
            volume: Volume::from_written("40m3").unwrap(),
            format,
        };
        let json: Value = serde_json::from_str(&run(&args(CalcFormat::Json)).unwrap()).unwrap();
        assert_eq!(json["concentration_kg_m3"], "0.5");
        assert_eq!(json["passes_all"], false);
        assert_eq!(json["largest_charge_kg"], "16.8");
        assert_eq!(json["limits"][0]["ppm"], "140000");
        let table = run(&args(CalcFormat::Table)).unwrap();
        assert!(table.contains("OVER") && table.contains(PERMISSION) && table.contains(CHECK), "{table}");
    }
}
