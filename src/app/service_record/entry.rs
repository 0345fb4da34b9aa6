//! One entry as a record says it.

use super::{instrument_text, wording};
use crate::ledger::{
    Act, ApplianceFacts, Detail, Entry, EntryId, Instrument, LeakMethod, LeakPlace, RecoveryPurpose, Registers, Scope, Site, TestKind,
    Transfer, WeighingMode,
};
use crate::quantity::Weighing;
use crate::record::{self, EntryFacts, Fingerprint, RepairFacts, TestFacts, TransferFacts, Way, Work};
use crate::rules::{History, recovery_level};
use chrono::NaiveDate;
use std::collections::HashMap;

/// Where names are looked up.
pub struct Names<'a> {
    pub registers: &'a Registers,
    pub site: &'a Site,
    /// All entries on the appliance.
    pub all: &'a [Entry],
    /// In force on the visit's last day.
    pub facts: &'a ApplianceFacts,
    /// The facts in force at each entry, within the day too.
    pub history: &'a History<'a>,
    /// Tests that do not count as what they are named, and why.
    pub does_not_count: &'a HashMap<EntryId, String>,
}

impl Names<'_> {
    /// What the appliance was when this was done: a retrofit changes gas and charge between two entries of one day.
    fn facts_at(&self, entry: &Entry) -> &ApplianceFacts {
        let line = self.history.lines.iter().position(|line| line.entry == entry.line.entry);
        line.and_then(|line| self.history.facts_at(line)).unwrap_or(self.facts)
    }
}

/// `struck_by` is the entry that strikes this one, `mends` the closed one
/// that this one corrects, with the fingerprint of its record.
pub fn facts(
    entry: &Entry,
    struck_by: Option<&Entry>,
    mends: Option<&Entry>,
    mended_record: Option<String>,
    names: &Names<'_>,
) -> EntryFacts {
    let detail = &entry.detail;
    let person = detail.person.and_then(|id| names.registers.person(id)).map(|person| person.name.clone());
    let struck_because = struck_by.map(|by| {
        let reason = if by.detail.reason.is_empty() { "no reason was given" } else { &by.detail.reason };
        format!("struck {}: {reason}", wording::at(by.line.at.date, by.line.at.minute))
    });
    let corrects = mends.map(|wrong| {
        let record = mended_record.map(|full| format!(", record {}", Fingerprint { full }.short())).unwrap_or_default();
        format!("{}{record}: {}", wording::entry_name(wrong), detail.reason)
    });
    EntryFacts {
        on: entry.line.at.date,
        at: wording::clock(entry.line.at.minute),
        person: person.unwrap_or_default(),
        job: entry.line.job.as_deref().unwrap_or_default().to_owned(),
        work: work(entry, names),
        parts: detail.parts.clone(),
        note: note(entry),
        reason: if corrects.is_some() { String::new() } else { detail.reason.clone() },
        corrects: corrects.unwrap_or_default(),
        struck: struck_by.is_some(),
        struck_because: struck_because.unwrap_or_default(),
        imported_from: detail.imported_from.clone(),
    }
}

/// A repair's note is what was done, and stands there.
fn note(entry: &Entry) -> String {
    if matches!(entry.line.act, Act::Repair { .. }) { String::new() } else { entry.detail.note.clone() }
}

fn work(entry: &Entry, names: &Names<'_>) -> Work {
    let detail = &entry.detail;
    match &entry.line.act {
        Act::Charge { purpose, transfer } => {
            Work::Transfer(Box::new(moved(entry, Way::Charge, purpose.name(), transfer, String::new(), names)))
        }
        Act::Recover { purpose, transfer } => {
            let level = level_to_reach(entry, *purpose, names);
            Work::Transfer(Box::new(moved(entry, Way::Recover, purpose.name(), transfer, level, names)))
        }
        Act::Test { kind, result, scope, .. } => Work::Test(Box::new(TestFacts {
            kind: kind.name().to_owned(),
            method: detail.method.clone(),
            direct: LeakMethod::is_direct(&detail.method),
            scope: match scope {
                Some(Scope::Whole) => "whole appliance".to_owned(),
                Some(Scope::Part) => "part".to_owned(),
                None => String::new(),
            },
            instrument: instrument(detail, entry.line.at.date, names),
            place: detail.place.clone(),
            result: result.map(|result| result.name().to_owned()).unwrap_or_default(),
            leaks: detail.leaks.iter().map(leak).collect(),
            running_hours: if detail.running_hours.is_empty() { String::new() } else { format!("{} h", detail.running_hours) },
            of_repair: detail
                .repair
                .and_then(|id| names.all.iter().find(|entry| entry.line.entry == id))
                .map(wording::entry_name)
                .unwrap_or_default(),
            certification: certification(*kind, *scope),
            does_not_count: names.does_not_count.get(&entry.line.entry).cloned().unwrap_or_default(),
        })),
        Act::Repair { temporary } => {
            Work::Repair(RepairFacts { place: detail.place.clone(), done: detail.note.clone(), temporary: *temporary })
        }
        Act::Retrofit { refrigerant, full_charge } => {
            let gas = refrigerant.as_ref().map_or("Gas as before".to_owned(), |gas| format!("Now {gas}"));
            let charge = match (&detail.new_full_charge, full_charge) {
                (Some(written), _) => written.text(),
                (None, Some(charge)) => format!("{} kg", charge.kg_text()),
                (None, None) => "as before".to_owned(),
            };
            other(entry, format!("{gas}, full charge {charge}."), String::new())
        }
        Act::Recycle { cylinder } => {
            let cylinder = cylinder.and_then(|id| names.registers.cylinder(id)).map(|cylinder| format!("Cylinder {}", cylinder.name));
            let text = [cylinder, Some(detail.method.clone()), Some(instrument(detail, entry.line.at.date, names))];
            let text = text.into_iter().flatten().filter(|text| !text.is_empty()).collect::<Vec<_>>().join(", ");
            other(entry, text, String::new())
        }
        Act::Note if !detail.level_reached.is_empty() => readings(entry, names),
        _ => other(entry, detail.method.clone(), detail.level_reached.clone()),
    }
}

fn other(entry: &Entry, text: String, figure: String) -> Work {
    Work::Other { name: entry.line.act.name().to_owned(), text, figure, fields: Vec::new() }
}

/// A pressure hold or a vacuum rise: a series of readings. Pressure is read
/// against the air, vacuum against nothing, as their page asks for them.
fn readings(entry: &Entry, names: &Names<'_>) -> Work {
    let detail = &entry.detail;
    let field = |caption: &str, value: String| record::Named { caption: caption.to_owned(), value };
    let caption = match detail.method.as_str() {
        "pressure hold" => "readings, gauge pressure",
        "vacuum rise" => "readings, absolute pressure",
        _ => "readings",
    };
    let fields = [
        field(caption, detail.level_reached.clone()),
        field("gauge", instrument(detail, entry.line.at.date, names)),
        field("place", detail.place.clone()),
    ];
    Work::Other {
        name: if detail.method.is_empty() { "readings".to_owned() } else { detail.method.clone() },
        text: "kept as read, not judged".to_owned(),
        figure: String::new(),
        fields: fields.into_iter().filter(|field| !field.value.is_empty()).collect(),
    }
}

/// The level that the site's law of that day asks for, with its article.
fn level_to_reach(entry: &Entry, purpose: RecoveryPurpose, names: &Names<'_>) -> String {
    let day = entry.line.at.date;
    let Some(site) = names.site.versions.on(day) else { return String::new() };
    let level = recovery_level(&site.rulebooks, names.facts_at(entry), purpose, day);
    level.map(|level| format!("{} ({}: {})", level.level, level.source, level.why)).unwrap_or_default()
}

fn moved(entry: &Entry, way: Way, purpose: &str, transfer: &Transfer, level_required: String, names: &Names<'_>) -> TransferFacts {
    let detail = &entry.detail;
    let unit = wording::unit_of(entry);
    let reading = detail.reading.as_ref();
    let written = |weighing: Option<&Weighing>| weighing.map(Weighing::text).unwrap_or_default();
    let cylinder = transfer.cylinder.and_then(|id| names.registers.cylinder(id));
    let division = transfer.division.map(|division| format!("division {}", wording::mass(division, unit)));
    let scale = reading.and_then(|reading| reading.scale).and_then(|id| names.registers.instrument(id));
    let scale = scale.map_or_else(|| division.clone().unwrap_or_default(), |scale| instrument_text(scale, division.clone()));
    let hoses = match (transfer.hoses.is_positive(), reading.is_some_and(|reading| reading.mode != WeighingMode::NetOnly)) {
        (true, _) => format!("hoses up to {}", wording::mass(transfer.hoses, unit)),
        (false, true) => "hoses emptied".to_owned(),
        (false, false) => String::new(),
    };
    let fill = match (way, &detail.short_by, reading) {
        (Way::Charge, Some(short), _) => format!("short by about {}", short.text()),
        (Way::Charge, None, Some(reading)) if reading.mode != WeighingMode::NetOnly => "to full charge".to_owned(),
        _ => String::new(),
    };
    TransferFacts {
        way,
        refrigerant: names.facts_at(entry).refrigerant.clone(),
        purpose: purpose.to_owned(),
        cylinder: cylinder.map(|cylinder| cylinder.name.clone()).unwrap_or_default(),
        gas_status: detail.gas_status.map(|status| status.name().to_owned()).unwrap_or_default(),
        gas_source: detail.gas_source.clone(),
        phase: detail.phase.clone(),
        weighing: reading.map_or(WeighingMode::NetOnly, |reading| reading.mode),
        before: written(reading.and_then(|reading| reading.before.as_ref())),
        after: written(reading.and_then(|reading| reading.after.as_ref())),
        scale,
        net: wording::mass(transfer.mass, unit),
        net_mass: transfer.mass,
        error: transfer.division.map(|division| wording::error(division, transfer.hoses, unit)).unwrap_or_default(),
        hoses,
        fill,
        level_required,
        level_reached: detail.level_reached.clone(),
        weighing_gap: detail.weighing_gap.clone(),
    }
}

/// With its last check, and that the next was overdue on the day of use.
fn instrument(detail: &Detail, on: NaiveDate, names: &Names<'_>) -> String {
    let found = detail.instrument.and_then(|id| names.registers.instrument(id));
    found.map(|instrument| instrument_text(instrument, check_of(instrument, on))).unwrap_or_default()
}

fn check_of(instrument: &Instrument, on: NaiveDate) -> Option<String> {
    let checked = instrument.checked_on.map(|checked| format!("checked {}", wording::day(checked)));
    let overdue = instrument.check_due.filter(|due| *due < on).map(|due| format!("check overdue since {}", wording::day(due)));
    let told: Vec<String> = [checked, overdue].into_iter().flatten().collect();
    (!told.is_empty()).then(|| told.join(", "))
}

fn leak(leak: &LeakPlace) -> String {
    if leak.state.is_empty() { leak.place.clone() } else { format!("{}: {}", leak.place, leak.state) }
}

/// 40 CFR 82.157(l)(3)(iv), 84.106(l)(5): a leak inspection certifies its reach.
fn certification(kind: TestKind, scope: Option<Scope>) -> String {
    if kind == TestKind::LeakInspection && scope == Some(Scope::Whole) {
        "All visible and accessible parts were inspected.".to_owned()
    } else {
        String::new()
    }
}
