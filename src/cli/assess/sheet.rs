//! The answer for reading: a sheet per appliance, or one table.

use super::answer::{exact, moved};
use crate::cli::table::TextTable;
use crate::ledger::Act;
use crate::quantity::{Ratio, rounded_text};
use crate::rules::{Assessment, LeakRate, monthly_disposals, points, readings, why_no_rate};
use chrono::NaiveDate;

pub fn text(on: NaiveDate, assessments: &[Assessment], explain: bool) -> String {
    if assessments.is_empty() {
        return format!("no appliances on {on}\n");
    }
    let mut text = format!("as of {on}\n");
    for assessment in assessments {
        one(&mut text, assessment, on, explain);
    }
    if explain {
        for total in monthly_disposals(assessments) {
            text.push_str(&format!(
                "\ndisposals in {}: {} kg of {} recovered from {}, {} ({})\n",
                total.month.format("%Y-%m"),
                rounded_text(total.recovered.kg(), 3),
                total.refrigerant,
                if total.appliances == 1 { "1 appliance".to_owned() } else { format!("{} appliances", total.appliances) },
                total.rulebook,
                total.source,
            ));
        }
    }
    text
}

fn one(text: &mut String, assessment: &Assessment, on: NaiveDate, explain: bool) {
    let appliance = &assessment.history.appliance.name;
    let charge = assessment
        .facts
        .full_charge
        .map_or_else(|| "full charge to complete".to_owned(), |mass| format!("{} kg", rounded_text(mass.kg(), 2)));
    text.push_str(&format!("\n{appliance}  {}  {charge}  {}\n", assessment.facts.refrigerant, assessment.site.name));
    for judgement in &assessment.rulebooks {
        let said = match (judgement.applies, judgement.rate()) {
            (false, _) => format!("does not apply: {}", judgement.why),
            (true, Some(rate)) => format!("{} on {}: {}", percent(rate.percent), rate.on, verdict(rate)),
            (true, None) if judgement.method.is_some() => "applies; no rate due yet".to_owned(),
            (true, None) => format!("applies: {}", judgement.why),
        };
        text.push_str(&format!("  {:<14}{said}\n", judgement.id));
    }
    if !assessment.duties.is_empty() {
        let mut table = TextTable::new(&["state", "due", "duty", "since", "met", "rulebook", "article"]);
        for duty in &assessment.duties {
            let due = duty.due.map_or_else(|| "no day set".to_owned(), |due| due.to_string());
            let met = duty.met_on.map(|met| met.to_string()).unwrap_or_default();
            let state = duty.state(on).name().to_owned();
            table.row([state, due, duty.kind.name().to_owned(), duty.from.to_string(), met, duty.rulebook.clone(), duty.source.clone()]);
        }
        for line in table.text().lines() {
            text.push_str(&format!("  {line}\n"));
        }
    }
    let year = &assessment.this_year;
    let shown = |value: Option<Ratio>, unit: &str| {
        value.map_or_else(|| "not known".to_owned(), |value| format!("{} {unit}", rounded_text(value, 3)))
    };
    text.push_str(&format!(
        "  this year     charged {} kg, recovered {} kg, lost {} kg: {} weighted by ODP, {} of CO\u{2082}e ({})\n",
        rounded_text(year.charged.kg(), 3),
        rounded_text(year.recovered.kg(), 3),
        rounded_text(year.lost.kg(), 3),
        shown(year.odp_kg, "kg"),
        shown(year.co2e_t, "t"),
        assessment.weights.name(),
    ));
    if explain {
        for line in explanations(assessment) {
            text.push_str(&format!("    {line}\n"));
        }
    }
}

fn percent(value: Ratio) -> String {
    format!("{} %", rounded_text(value, 2))
}

fn verdict(rate: &LeakRate) -> String {
    let band = match &rate.error {
        Some(band) if band.holds_trigger => ", by less than the weighing error",
        _ => "",
    };
    format!("{} of {} %{band}", rate.verdict.name(), exact(rate.trigger))
}

/// Each rate with its sum worked through, each charge that asked for none with the reason.
pub fn explanations(assessment: &Assessment) -> Vec<String> {
    let history = &assessment.history;
    let mut lines = Vec::new();
    for judgement in &assessment.rulebooks {
        lines.push(format!("{}: {}", judgement.id, judgement.why));
        for rate in &judgement.rates {
            let sum = match rate.days {
                Some(days) => {
                    format!(
                        "{} \u{d7} 100 \u{d7} {} kg / ({} kg \u{d7} {days} days)",
                        rate.longest_days,
                        rate.added.kg_text(),
                        rate.full_charge.kg_text()
                    )
                }
                None => format!("100 \u{d7} {} kg / {} kg", rate.added.kg_text(), rate.full_charge.kg_text()),
            };
            let band = rate
                .error
                .as_ref()
                .map_or_else(|| "weighing error unknown".to_owned(), |band| format!("weighing error \u{b1} {} %", band.percent));
            lines.push(format!(
                "{}: {} {}: {sum} = {} = {}; trigger {} ({}); {band}; {}",
                judgement.id,
                rate.on,
                rate.method.name(),
                rate.percent,
                percent(rate.percent),
                format_args!("{} %", exact(rate.trigger)),
                rate.trigger_source,
                rate.source,
            ));
            let readings = readings(history, rate).into_iter();
            lines.extend(readings.map(|reading| format!("{}: {} {} ({})", judgement.id, rate.on, reading.text, reading.source)));
            lines.extend(rate.notes.iter().map(|note| format!("{}: {} {note}", judgement.id, rate.on)));
        }
    }
    lines.extend(points(assessment).into_iter().map(|point| format!("{}: {} ({})", point.rulebook, point.text, point.source)));
    for (index, line) in history.lines.iter().enumerate() {
        if let (Act::Charge { purpose, .. }, false, Some(mass)) = (&line.act, history.counted[index], moved(&line.act)) {
            let (because, source) = why_no_rate(*purpose);
            lines.push(format!("{} charge of {} kg asked for no rate: {purpose}; {because} ({source})", line.at.date, mass.kg_text()));
        }
    }
    lines
}

/// One line an appliance and rulebook.
pub fn csv(assessments: &[Assessment]) -> anyhow::Result<String> {
    let mut table = TextTable::new(&[
        "site",
        "appliance",
        "refrigerant",
        "full charge kg",
        "rulebook",
        "applies",
        "rate on",
        "percent",
        "trigger percent",
        "verdict",
        "lost kg this year",
        "odp kg this year",
        "co2e t this year",
    ]);
    for assessment in assessments {
        for judgement in &assessment.rulebooks {
            let rate = judgement.rate();
            let year = &assessment.this_year;
            table.row([
                assessment.site.name.clone(),
                assessment.history.appliance.name.clone(),
                assessment.facts.refrigerant.clone(),
                assessment.facts.full_charge.map(|mass| mass.kg_text()).unwrap_or_default(),
                judgement.id.clone(),
                if judgement.applies { "yes" } else { "no" }.to_owned(),
                rate.map(|rate| rate.on.to_string()).unwrap_or_default(),
                rate.map(|rate| rounded_text(rate.percent, 2)).unwrap_or_default(),
                rate.map(|rate| exact(rate.trigger)).unwrap_or_default(),
                rate.map(|rate| rate.verdict.name().to_owned()).unwrap_or_default(),
                year.lost.kg_text(),
                year.odp_kg.map(exact).unwrap_or_default(),
                year.co2e_t.map(exact).unwrap_or_default(),
            ]);
        }
    }
    table.csv()
}
