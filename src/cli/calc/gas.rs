//! `calc gas`: what the catalogue knows of a gas.

use super::sheet::{Sheet, distinct, json_sources, json_text, row};
use super::{CalcError, CalcFormat, find_gas};
use crate::gas::{Figure, Gas, GwpSet, Source, Weighting};
use crate::quantity::{Ratio, decimal_text};
use clap::Args;
use num_traits::{One, Zero};
use serde_json::{Map, Value, json};

#[derive(Debug, Args)]
pub struct GasArgs {
    /// R-448A, r448a, R-1234ze(E)
    refrigerant: String,
    #[arg(long, value_enum, default_value_t)]
    format: CalcFormat,
}

const CHECK: &str = "Figures from memory or second-hand: check against your own copy of the standard before you rely on them.";

pub(super) fn run(args: &GasArgs) -> Result<String, CalcError> {
    let gas = find_gas(&args.refrigerant)?;
    Ok(match args.format {
        CalcFormat::Table => table(gas),
        CalcFormat::Json => json_text(&json(gas, &args.refrigerant)),
    })
}

/// Decimals of the catalogue always end; a share of them does too.
fn text(value: Ratio) -> String {
    decimal_text(value).unwrap_or_else(|| value.to_string())
}

fn percent(fraction: Ratio) -> String {
    format!("{} %", text(fraction * 100))
}

fn gwp_sources(gas: &Gas, set: GwpSet) -> Vec<&'static Source> {
    distinct(gas.parts().iter().filter_map(|part| part.substance.gwp(set)).map(|figure| figure.source))
}

fn weight_sources(gas: &Gas, weighting: Weighting) -> Vec<&'static Source> {
    distinct(gas.parts().iter().filter_map(|part| weighting.value(part.substance)).map(|figure| figure.source))
}

fn odp_sources(gas: &Gas) -> Vec<&'static Source> {
    distinct(gas.parts().iter().map(|part| part.substance.odp().source))
}

fn region(weighting: Weighting) -> &'static str {
    match weighting {
        Weighting::UnitedStates => "United States, Canada",
        Weighting::EuropeanUnion => "European Union",
        Weighting::GreatBritain => "Great Britain",
    }
}

/// Common practice beside the treaty: chlorine and bromine are what harms the ozone layer.
fn ozone_remark(gas: &Gas) -> String {
    let left_out: Vec<_> = gas.parts().iter().map(|part| part.substance).filter(|one| one.left_out_by_the_treaty()).collect();
    if let [one, ..] = left_out.as_slice() {
        let holds = if one.formula().contains("Cl") { "chlorine" } else { "bromine" };
        return format!("{} holds {holds}, but the Montreal Protocol lists it in no annex; its ODP counts as 0.", one.designation());
    }
    if gas.has_ods() {
        let parts: Vec<_> = gas.parts().iter().filter(|part| part.substance.is_ods()).collect();
        let names: Vec<_> = parts.iter().map(|part| part.substance.designation()).collect();
        return format!("Depletes ozone: {}.", names.join(", "));
    }
    "No chlorine and no bromine in it: does not deplete ozone (common practice, and the treaty agrees).".to_owned()
}

fn table(gas: &Gas) -> String {
    let kind = if gas.is_blend() { "blend".to_owned() } else { gas.parts()[0].substance.name().to_owned() };
    let mut sheet = Sheet::titled(&format!("{}, {kind}", gas.designation()));

    let mark = sheet.cite(&gas.composition_source().to_string());
    let mut rows = Vec::new();
    for part in gas.parts() {
        let one = part.substance;
        rows.push(row([one.designation(), &percent(part.fraction), one.name(), one.formula(), &format!("CAS {}", one.cas())]));
    }
    sheet.rows(&format!("Composition by mass {mark}"), &rows);

    let marks = sheet.cite_all(odp_sources(gas));
    sheet.rows("Ozone depletion, kg CFC-11 equivalent per kg", &[row(["ODP", &text(gas.odp()), &marks])]);
    sheet.note(&ozone_remark(gas));

    let mut rows = Vec::new();
    for set in GwpSet::ALL {
        let marks = sheet.cite_all(gwp_sources(gas, set));
        let (sum, missing) = gas.gwp_at_least(set);
        let (value, remark) = if missing.is_zero() {
            (text(sum), String::new())
        } else if missing.is_one() {
            ("\u{2013}".to_owned(), "not listed".to_owned())
        } else {
            (text(sum), format!("at least; {} of the mass is not listed", percent(missing)))
        };
        rows.push(row([set.name(), &value, &marks, &remark]));
    }
    sheet.rows("Global warming over 100 years, kg CO\u{2082} equivalent per kg, not rounded", &rows);

    let mut rows = Vec::new();
    for weighting in Weighting::ALL {
        let marks = sheet.cite_all(weight_sources(gas, weighting));
        let value = gas.weight(weighting).map_or_else(|| "\u{2013}".to_owned(), text);
        rows.push(row([region(weighting), &value, &marks, weighting.name()]));
    }
    sheet.rows("An account weighs it with", &rows);

    let mut rows = Vec::new();
    if let Some(class) = gas.safety_class() {
        rows.push(row(["safety class", class.name(), "", &sheet.cite(&class.source().to_string())]));
    }
    for (name, figure, unit) in limits(gas) {
        if let Some(figure) = figure {
            rows.push(row([name, &text(figure.value), unit, &sheet.cite(&figure.source.to_string())]));
        }
    }
    sheet.rows("Safety", &rows);

    let mut rows = Vec::new();
    for (name, figure, unit) in fluid(gas) {
        if let Some(figure) = figure {
            rows.push(row([name, &text(figure.value), unit, &sheet.cite(&figure.source.to_string())]));
        }
    }
    let mark = sheet.cite(&gas.fluid_source().to_string());
    let at_25 = [
        ("bubble pressure at 25 \u{b0}C", gas.bubble_pressure(25.0), "bar absolute"),
        ("dew pressure at 25 \u{b0}C", gas.dew_pressure(25.0), "bar absolute"),
        ("liquid density at 25 \u{b0}C", gas.liquid_density(25.0), "kg/m\u{b3}"),
    ];
    for (name, value, unit) in at_25 {
        if let Some(value) = value {
            rows.push(row([name, &format!("{value:.2}"), unit, &mark]));
        }
    }
    sheet.rows("Fluid", &rows);
    if !gas.note().is_empty() {
        sheet.note(&format!("Note: {}", gas.note()));
    }
    if doubtful(gas) {
        sheet.note(CHECK);
    }
    sheet.finish()
}

type Named = (&'static str, Option<Figure>, &'static str);

fn limits(gas: &Gas) -> [Named; 5] {
    let limits = gas.limits();
    [
        ("RCL by volume", limits.rcl_ppm, "ppm"),
        ("RCL by mass", limits.rcl_g_m3, "g/m\u{b3}"),
        ("toxicity or oxygen limit", limits.toxic_kg_m3, "kg/m\u{b3}"),
        ("lower flammability limit", limits.lfl_kg_m3, "kg/m\u{b3}"),
        ("practical limit", limits.practical_kg_m3, "kg/m\u{b3}"),
    ]
}

fn fluid(gas: &Gas) -> [Named; 4] {
    [
        ("molar mass", gas.molar_mass(), "g/mol"),
        ("critical temperature", gas.t_crit(), "\u{b0}C"),
        ("first bubble at 1 atm", gas.boiling_bubble(), "\u{b0}C"),
        ("last drop at 1 atm", gas.boiling_dew(), "\u{b0}C"),
    ]
}

fn doubtful(gas: &Gas) -> bool {
    let class = gas.safety_class().is_some_and(|class| class.source().asks_for_a_check());
    class || limits(gas).iter().any(|(_, figure, _)| figure.is_some_and(|figure| figure.source.asks_for_a_check()))
}

fn figure_json(figure: Option<Figure>) -> Value {
    figure.map_or(Value::Null, |figure| json!({ "value": text(figure.value), "source": figure.source.to_string() }))
}

fn set_key(set: GwpSet) -> &'static str {
    match set {
        GwpSet::IpccAr4 => "ipcc_ar4",
        GwpSet::IpccAr5 => "ipcc_ar5",
        GwpSet::IpccAr6 => "ipcc_ar6",
        GwpSet::Eu573 => "eu_2024_573",
        GwpSet::Eu590 => "eu_2024_590",
        GwpSet::Gb517 => "eu_517_2014",
        GwpSet::Us84 => "us_40_cfr_84_64",
    }
}

fn region_key(weighting: Weighting) -> &'static str {
    match weighting {
        Weighting::UnitedStates => "us",
        Weighting::EuropeanUnion => "eu",
        Weighting::GreatBritain => "gb",
    }
}

fn json(gas: &Gas, asked: &str) -> Value {
    let part_gwps = |substance: &crate::gas::Substance| {
        let gwps = GwpSet::ALL.map(|set| (set_key(set).to_owned(), figure_json(substance.gwp(set))));
        Value::Object(Map::from_iter(gwps))
    };
    let composition: Vec<Value> = gas
        .parts()
        .iter()
        .map(|part| {
            json!({
                "refrigerant": part.substance.designation(),
                "name": part.substance.name(),
                "formula": part.substance.formula(),
                "cas": part.substance.cas(),
                "mass_fraction": text(part.fraction),
                "montreal_annex": part.substance.annex(),
                "odp": figure_json(Some(part.substance.odp())),
                "gwp": part_gwps(part.substance),
            })
        })
        .collect();
    let gwp = GwpSet::ALL.map(|set| {
        let (sum, missing) = gas.gwp_at_least(set);
        let value = json!({
            "set": set.name(),
            "value": gas.gwp(set).map(text),
            "at_least": (!missing.is_one()).then(|| text(sum)),
            "missing_mass_fraction": text(missing),
            "sources": json_sources(gwp_sources(gas, set)),
        });
        (set_key(set).to_owned(), value)
    });
    let account = Weighting::ALL.map(|weighting| {
        let value = json!({
            "value": gas.weight(weighting).map(text),
            "tables": weighting.name(),
            "sources": json_sources(weight_sources(gas, weighting)),
        });
        (region_key(weighting).to_owned(), value)
    });
    let limits = gas.limits();
    let at_25 = |value: Option<f64>, unit: &str| {
        value.map(|value| json!({ unit: format!("{value:.4}"), "source": gas.fluid_source().to_string() }))
    };
    json!({
        "input": { "refrigerant": asked },
        "refrigerant": gas.designation(),
        "composition": composition,
        "composition_source": gas.composition_source().to_string(),
        "odp": { "value": text(gas.odp()), "sources": json_sources(odp_sources(gas)), "remark": ozone_remark(gas) },
        "gwp": Map::from_iter(gwp),
        "account": Map::from_iter(account),
        "safety_class": gas.safety_class().map(|class| json!({ "value": class.name(), "source": class.source().to_string() })),
        "limits": {
            "rcl_ppm": figure_json(limits.rcl_ppm),
            "rcl_g_m3": figure_json(limits.rcl_g_m3),
            "toxicity_or_oxygen_kg_m3": figure_json(limits.toxic_kg_m3),
            "lfl_kg_m3": figure_json(limits.lfl_kg_m3),
            "practical_limit_kg_m3": figure_json(limits.practical_kg_m3),
        },
        "molar_mass_g_mol": figure_json(gas.molar_mass()),
        "critical_temperature_c": figure_json(gas.t_crit()),
        "boiling_bubble_c": figure_json(gas.boiling_bubble()),
        "boiling_dew_c": figure_json(gas.boiling_dew()),
        "at_25_c": {
            "bubble_pressure": at_25(gas.bubble_pressure(25.0), "bar_absolute"),
            "dew_pressure": at_25(gas.dew_pressure(25.0), "bar_absolute"),
            "liquid_density": at_25(gas.liquid_density(25.0), "kg_m3"),
        },
        "note": gas.note(),
        "check": doubtful(gas).then_some(CHECK),
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn answer(name: &str, format: CalcFormat) -> String {
        run(&GasArgs { refrigerant: name.to_owned(), format }).unwrap()
    }

    #[test]
    fn every_gas_prints_both_ways() {
        for gas in crate::gas::all() {
            let table = answer(gas.designation(), CalcFormat::Table);
            assert!(table.starts_with(gas.designation()) && table.contains("Sources"), "{table}");
            let json: Value = serde_json::from_str(&answer(gas.designation(), CalcFormat::Json)).unwrap();
            assert_eq!(json["refrigerant"], gas.designation());
        }
    }

    #[test]
    fn what_is_from_memory_says_so() {
        let table = answer("r454b", CalcFormat::Table).replace('\n', " ");
        assert!(table.contains("ANSI/ASHRAE Standard 34-2019 (from memory)") && table.contains(CHECK), "{table}");
        let json: Value = serde_json::from_str(&answer("r454b", CalcFormat::Json)).unwrap();
        assert_eq!(json["limits"]["rcl_g_m3"]["source"], "ANSI/ASHRAE Standard 34-2019 (from memory)");
    }

    #[test]
    fn gaps_are_named() {
        let json: Value = serde_json::from_str(&answer("R-448A", CalcFormat::Json)).unwrap();
        assert_eq!(json["gwp"]["ipcc_ar4"]["value"], Value::Null);
        assert_eq!(json["gwp"]["ipcc_ar4"]["at_least"], "1385.8");
        assert_eq!(json["gwp"]["eu_2024_573"]["value"], "1385.9961");
        let json: Value = serde_json::from_str(&answer("R-1233zd(E)", CalcFormat::Json)).unwrap();
        assert_eq!(
            json["odp"]["remark"],
            "R-1233zd(E) holds chlorine, but the Montreal Protocol lists it in no annex; its ODP counts as 0."
        );
    }
}
