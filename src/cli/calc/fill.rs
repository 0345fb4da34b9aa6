//! `calc fill`: how much a cylinder may take.

use super::sheet::{Sheet, json_text, row};
use super::{CalcError, CalcFormat, WaterCapacity, find_gas, positive_mass, water_capacity};
use crate::gas::Gas;
use crate::measure::{Cylinder, CylinderLaw, CylinderLimit, Missing, Rating, cylinder_limit, oil_factor_is_sound};
use crate::quantity::{GaugePressure, Mass, MassUnit, Ratio, WrittenPressure, decimal_text, parse_decimal, rounded_text};
use clap::{Args, ValueEnum};
use serde_json::{Value, json};

#[derive(Debug, Args)]
pub struct FillArgs {
    /// The gas that goes in
    #[arg(long)]
    refrigerant: String,
    /// Volume, or mass of the water it holds: 26.2l, 47.7lb
    #[arg(long, value_parser = water_capacity)]
    water_capacity: WaterCapacity,
    /// Mass of the empty cylinder
    #[arg(long, value_parser = positive_mass)]
    tare: Option<Mass>,
    /// Net mass of gas stamped on the cylinder
    #[arg(long, value_parser = positive_mass)]
    stamped_maximum: Option<Mass>,
    /// As stamped under 49 CFR: 400psig
    #[arg(long, value_parser = gauge)]
    service_pressure: Option<GaugePressure>,
    /// As stamped under ADR: 42barg
    #[arg(long, value_parser = gauge)]
    test_pressure: Option<GaugePressure>,
    /// Which law the cylinder was stamped under; without it, pounds mean 49 CFR and litres or kilograms ADR
    #[arg(long, value_enum)]
    law: Option<Law>,
    /// Share of the room left for gas when oil came with it, 0.9 where the amount is unknown
    #[arg(long, value_parser = oil_factor, default_value = "1")]
    oil_factor: Ratio,
    #[arg(long, value_enum, default_value_t)]
    format: CalcFormat,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Law {
    #[value(name = "49cfr")]
    UnitedStates,
    Adr,
}

fn gauge(text: &str) -> Result<GaugePressure, String> {
    let pressure = WrittenPressure::from_written(text).map_err(|error| error.to_string())?.gauge();
    if pressure.pascal() > Ratio::from_integer(0) { Ok(pressure) } else { Err("must be above the air around".to_owned()) }
}

fn oil_factor(text: &str) -> Result<Ratio, String> {
    let factor = parse_decimal(text).map_err(|error| error.to_string())?;
    let short = *factor.denom() <= 1000;
    if oil_factor_is_sound(factor) && short { Ok(factor) } else { Err("must be above 0 and at most 1, such as 0.9".to_owned()) }
}

pub(super) fn run(args: &FillArgs) -> Result<String, CalcError> {
    let gas = find_gas(&args.refrigerant)?;
    let law = match args.law {
        Some(Law::UnitedStates) => CylinderLaw::UnitedStates,
        Some(Law::Adr) => CylinderLaw::Adr,
        None if args.water_capacity.pounds => CylinderLaw::UnitedStates,
        None => CylinderLaw::Adr,
    };
    let cylinder = Cylinder {
        water_capacity: Some(args.water_capacity.volume),
        tare: args.tare,
        stamped_maximum: args.stamped_maximum,
        service_pressure: args.service_pressure,
        test_pressure: args.test_pressure,
        law,
    };
    let limit = cylinder_limit(gas, &cylinder, args.oil_factor);
    Ok(match args.format {
        CalcFormat::Table => table(args, gas, &cylinder, &limit),
        CalcFormat::Json => json_text(&json(args, gas, &cylinder, &limit)),
    })
}

/// Rounded down to 0.01 lb: limits never round up.
fn pounds(mass: Mass) -> String {
    let hundredths = (mass.in_unit(MassUnit::Pound) * 100).floor();
    rounded_text(hundredths / 100, 2)
}

fn kilograms(mass: Mass) -> String {
    let grams = (mass.kg() * 1000).floor();
    rounded_text(grams / 1000, 3)
}

fn missing_sentence(missing: Missing, gas: &Gas) -> String {
    let name = gas.designation();
    match missing {
        Missing::EightyPercentNearCritical => {
            let critical = gas.t_crit().map(|figure| rounded_text(figure.value, 1)).unwrap_or_default();
            format!("The 80 % rule does not hold for {name}: its critical temperature of {critical} \u{b0}C is too near. Go by the stamp.")
        }
        Missing::Density(at) => format!("The catalogue has no liquid density of {name} at {at} \u{b0}C, so that limit is missing."),
        Missing::TestPressure => {
            format!("P200 names the filling ratio of {name} by the cylinder's test pressure: give it, and let ADR count.")
        }
        Missing::WaterCapacity => "Without the water capacity only the stamp counts.".to_owned(),
    }
}

fn verdict(suffices: bool) -> &'static str {
    if suffices { "The rating suffices." } else { "THE RATING DOES NOT SUFFICE: do not fill this cylinder with this gas." }
}

fn rating_sentence(rating: &Rating, gas: &Gas) -> String {
    match rating {
        Rating::Judged { pressure, at, allowed, suffices, .. } => format!(
            "{} at {at} \u{b0}C: {} psig ({} barg). Allowed: {} psig ({} barg). {}",
            gas.designation(),
            rounded_text(pressure.psi(), 1),
            rounded_text(pressure.bar(), 2),
            rounded_text(allowed.psi(), 1),
            rounded_text(allowed.bar(), 2),
            verdict(*suffices),
        ),
        Rating::Named { needed, given, suffices, .. } => format!(
            "For {} a table names {} psig ({} barg); this cylinder has {} psig ({} barg). {}",
            gas.designation(),
            rounded_text(needed.psi(), 0),
            rounded_text(needed.bar(), 1),
            rounded_text(given.psi(), 0),
            rounded_text(given.bar(), 1),
            verdict(*suffices),
        ),
        Rating::NotGiven => "Pressure rating not checked: give the service pressure or the test pressure.".to_owned(),
        Rating::NoPressure => format!(
            "Pressure rating not checked: the catalogue has no pressure of {} at that temperature. Use only a cylinder made for it.",
            gas.designation()
        ),
    }
}

fn table(args: &FillArgs, gas: &Gas, cylinder: &Cylinder, limit: &CylinderLimit) -> String {
    let litres = rounded_text(args.water_capacity.volume.litres(), 3);
    let stamped = match cylinder.law {
        CylinderLaw::UnitedStates => "49 CFR",
        CylinderLaw::Adr => "ADR",
    };
    let title = format!(
        "{} in a cylinder of {} water capacity ({litres} l, stamped under {stamped})",
        gas.designation(),
        args.water_capacity.written
    );
    let mut sheet = Sheet::titled(&title);
    let mut rows = vec![row(["limit", "net kg", "net lb", "", ""])];
    for one in &limit.limits {
        let binds = limit.binding.as_ref() == Some(one);
        let word = match (binds, one.counts, one.remark) {
            (true, _, _) => "binds",
            (_, false, _) => "does not count under 49 CFR",
            (_, _, Some(remark)) => remark,
            _ => "",
        };
        let mark = sheet.cite(&format!("{}: {}", one.kind.name(), one.kind.basis()));
        rows.push(row([one.kind.name(), &kilograms(one.net), &pounds(one.net), &mark, word]));
    }
    if !limit.limits.is_empty() {
        sheet.rows("", &rows);
    }
    let mut rows = Vec::new();
    match &limit.binding {
        Some(binding) => rows.push(row(["net", &format!("{} kg", kilograms(binding.net)), &format!("{} lb", pounds(binding.net))])),
        None => rows.push(row(["net", "no limit can be worked out: do not fill this cylinder with this gas"])),
    }
    if let (Some(gross), Some(tare)) = (limit.gross, args.tare) {
        rows.push(row(["tare", &format!("{} kg", kilograms(tare)), &format!("{} lb", pounds(tare))]));
        rows.push(row(["gross", &format!("{} kg", kilograms(gross)), &format!("{} lb", pounds(gross))]));
    }
    sheet.rows("Permitted, rounded down", &rows);
    if args.oil_factor < Ratio::from_integer(1) {
        let factor = decimal_text(args.oil_factor).unwrap_or_default();
        sheet.note(&format!("Limits from density are times {factor} to leave room for oil (own choice)."));
    }
    for missing in &limit.missing {
        sheet.note(&missing_sentence(*missing, gas));
    }
    sheet.note(&rating_sentence(&limit.rating, gas));
    if let Rating::Judged { basis, .. } | Rating::Named { basis, .. } = limit.rating {
        sheet.cite(basis);
    }
    sheet.cite(&format!("densities and pressures: {}; the lower density where sources differ", gas.fluid_source()));
    sheet.finish()
}

fn exact(value: Ratio) -> Value {
    json!(decimal_text(value).unwrap_or_else(|| rounded_text(value, 9)))
}

fn json(args: &FillArgs, gas: &Gas, cylinder: &Cylinder, limit: &CylinderLimit) -> Value {
    let limits: Vec<Value> = limit
        .limits
        .iter()
        .map(|one| {
            json!({
                "limit": one.kind.name(),
                "net_kg": one.net.kg_text(),
                "net_lb": pounds(one.net),
                "kg_per_litre": one.kg_per_litre.map(exact),
                "counts": one.counts,
                "binds": limit.binding.as_ref() == Some(one),
                "remark": one.remark,
                "source": one.kind.basis(),
            })
        })
        .collect();
    let rating = match &limit.rating {
        Rating::Judged { pressure, at, allowed, suffices, basis } => json!({
            "checked": true,
            "suffices": suffices,
            "at_c": at,
            "pressure_pa_gauge": exact(pressure.pascal()),
            "pressure_psig": rounded_text(pressure.psi(), 1),
            "allowed_pa_gauge": exact(allowed.pascal()),
            "allowed_psig": rounded_text(allowed.psi(), 1),
            "source": basis,
        }),
        Rating::Named { needed, given, suffices, basis } => json!({
            "checked": true,
            "suffices": suffices,
            "needed_pa_gauge": exact(needed.pascal()),
            "needed_psig": rounded_text(needed.psi(), 1),
            "given_pa_gauge": exact(given.pascal()),
            "given_psig": rounded_text(given.psi(), 1),
            "source": basis,
        }),
        other => json!({ "checked": false, "suffices": null, "remark": rating_sentence(other, gas) }),
    };
    json!({
        "input": {
            "refrigerant": gas.designation(),
            "water_capacity_l": exact(args.water_capacity.volume.litres()),
            "tare_kg": args.tare.map(Mass::kg_text),
            "stamped_maximum_kg": args.stamped_maximum.map(Mass::kg_text),
            "service_pressure_pa_gauge": args.service_pressure.map(|pressure| exact(pressure.pascal())),
            "test_pressure_pa_gauge": args.test_pressure.map(|pressure| exact(pressure.pascal())),
            "law": match cylinder.law { CylinderLaw::UnitedStates => "49 CFR", CylinderLaw::Adr => "ADR" },
            "oil_factor": exact(args.oil_factor),
        },
        "limits": limits,
        "binds": limit.binding.as_ref().map(|one| one.kind.name()),
        "permitted_net_kg": limit.binding.as_ref().map(|one| one.net.kg_text()),
        "permitted_net_lb": limit.binding.as_ref().map(|one| pounds(one.net)),
        "permitted_gross_kg": limit.gross.map(Mass::kg_text),
        "permitted_gross_lb": limit.gross.map(pounds),
        "rating": rating,
        "remarks": limit.missing.iter().map(|missing| missing_sentence(*missing, gas)).collect::<Vec<_>>(),
        "sources": [
            format!("densities and pressures: {}", gas.fluid_source()),
            "the lower density where sources differ; limits rounded down to the gram",
        ],
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use clap::Parser;

    #[derive(Debug, Parser)]
    struct Line {
        #[command(flatten)]
        args: FillArgs,
    }

    fn answer(line: &str) -> Value {
        let words = std::iter::once("fill").chain(line.split(' ')).chain(["--format", "json"]);
        serde_json::from_str(&run(&Line::try_parse_from(words).unwrap().args).unwrap()).unwrap()
    }

    #[test]
    fn the_answer_has_every_limit_and_what_binds() {
        let answer = answer("--refrigerant r410a --water-capacity 47.7lb --tare 27.4lb --stamped-maximum 50lb --service-pressure 400psig");
        assert_eq!(answer["binds"], "80 % of the volume at 25 °C");
        assert_eq!(answer["permitted_net_kg"], "18.323");
        assert_eq!(answer["permitted_gross_lb"], "67.79");
        assert_eq!(answer["limits"].as_array().unwrap().len(), 4);
        assert_eq!(answer["rating"]["suffices"], true);
        assert_eq!(answer["input"]["water_capacity_l"], "21.636356049");
    }

    #[test]
    fn the_binding_limit_is_named() {
        let binds = |gas: &str, water: &str| {
            let answer = answer(&format!("--refrigerant {gas} --water-capacity {water}"));
            (answer["binds"].as_str().unwrap_or("none").to_owned(), answer["permitted_net_kg"].as_str().unwrap_or("").to_owned())
        };
        let told = |name: &str, net: &str| (name.to_owned(), net.to_owned());
        // 0.872 kg/l by P200; 80 % at 25 °C would allow 24.9 kg and burst it.
        assert_eq!(binds("R-125", "26.2l"), told("ADR filling ratio", "22.848"));
        assert_eq!(binds("R-125", "47.7lb"), told("not full of liquid at 55 °C", "20.044"));
        for gas in ["R-404A", "R-410A", "R-507A", "R-143a"] {
            assert_eq!(binds(gas, "26.2l").0, "ADR filling ratio", "{gas}");
        }
        for gas in ["R-32", "R-134a", "R-22", "R-1234yf"] {
            assert_eq!(binds(gas, "26.2l").0, "80 % of the volume at 25 °C", "{gas}");
        }
        assert_eq!(binds("R-744", "20lb").0, "filling density for this gas");
        assert_eq!(binds("R-23", "20lb"), told("none", ""));
    }

    #[test]
    fn a_cylinder_that_a_table_names_for_the_gas() {
        let rating = |words: &str| answer(&format!("--refrigerant R-744 --water-capacity 26.2l {words}"))["rating"]["suffices"].clone();
        assert_eq!((rating("--test-pressure 250barg"), rating("--test-pressure 48barg")), (json!(true), json!(false)));
        assert_eq!((rating("--law 49cfr --service-pressure 1800psig"), rating("--law 49cfr")), (json!(true), Value::Null));
    }

    #[test]
    fn unsound_cylinders_are_refused() {
        for line in [
            "--refrigerant R-22 --water-capacity 0l",
            "--refrigerant R-22 --water-capacity 20l --tare -1kg",
            "--refrigerant R-22 --water-capacity 20l --service-pressure 400psi",
            "--refrigerant R-22 --water-capacity 20l --oil-factor 1.1",
            "--refrigerant R-22",
        ] {
            assert!(Line::try_parse_from(std::iter::once("fill").chain(line.split(' '))).is_err(), "{line}");
        }
    }

    #[test]
    fn a_weak_cylinder_is_named_loudly() {
        let words = "fill --refrigerant R-410A --water-capacity 47.7lb --service-pressure 350psig".split(' ');
        let text = run(&Line::try_parse_from(words).unwrap().args).unwrap().replace('\n', " ");
        assert!(text.contains("THE RATING DOES NOT SUFFICE"), "{text}");
    }
}
