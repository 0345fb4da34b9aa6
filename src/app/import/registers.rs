//! Register lines: new ones are added, known ones must agree or be dated.

use super::{ImportError, Imported, Parts};
use crate::app::IdSource;
use crate::exchange::csv::BadLine;
use crate::ledger::{Appliance, ApplianceId, Cylinder, CylinderId, Dated, Person, PersonId, Registers, Site, SiteId, Versions};
use crate::store::Writing;
use chrono::NaiveDate;
use serde::Serialize;
use serde_json::Value;
use std::collections::{BTreeMap, HashMap};

/// One register line of a file, with where it stands.
struct Line<'a, T> {
    file: &'a str,
    line: u64,
    from: Option<NaiveDate>,
    facts: &'a T,
}

pub(super) fn take(tx: &Writing<'_>, ids: &dyn IdSource, parts: &Parts, taken: &mut Imported) -> Result<(), ImportError> {
    let known = tx.registers()?;
    let mut bad = Vec::new();
    sites(tx, ids, parts, &known, taken, &mut bad)?;
    if bad.is_empty() {
        appliances(tx, ids, parts, taken, &mut bad)?;
    }
    cylinders(tx, ids, parts, &known, taken, &mut bad)?;
    people(tx, ids, parts, &known, taken, &mut bad)?;
    if bad.is_empty() { Ok(()) } else { Err(ImportError::BadLines(bad)) }
}

fn sites(
    tx: &Writing<'_>,
    ids: &dyn IdSource,
    parts: &Parts,
    known: &Registers,
    taken: &mut Imported,
    bad: &mut Vec<BadLine>,
) -> Result<(), ImportError> {
    let mut groups: BTreeMap<&str, Vec<Line<'_, _>>> = BTreeMap::new();
    for row in &parts.sites {
        groups.entry(&row.name).or_default().push(Line { file: &row.file, line: row.line, from: row.valid_from, facts: &row.facts });
    }
    for (name, lines) in groups {
        let site = known.site_named(name);
        let fresh = new_versions(site.map(|site| &site.versions), lines, bad);
        match (site, fresh) {
            (Some(site), fresh) => {
                for version in &fresh {
                    tx.add_site_version(site.id, version)?;
                }
            }
            (None, fresh) => {
                if let Some(versions) = Versions::new(fresh) {
                    tx.add_site(&Site { id: SiteId(ids.fresh(tx.now())), name: name.to_owned(), versions })?;
                    taken.sites += 1;
                }
            }
        }
    }
    Ok(())
}

fn appliances(
    tx: &Writing<'_>,
    ids: &dyn IdSource,
    parts: &Parts,
    taken: &mut Imported,
    bad: &mut Vec<BadLine>,
) -> Result<(), ImportError> {
    let known = tx.registers()?;
    let site_ids: HashMap<&str, SiteId> = known.sites.iter().map(|site| (site.name.as_str(), site.id)).collect();
    let mut groups: BTreeMap<(SiteId, &str), Vec<Line<'_, _>>> = BTreeMap::new();
    for row in &parts.appliances {
        let Some(&site) = site_ids.get(row.site.as_str()) else {
            let message = format!("there is no site \u{201c}{}\u{201d}; import its line together with this file", row.site);
            bad.push(BadLine { file: row.file.clone(), line: row.line, column: "site".to_owned(), message });
            continue;
        };
        groups.entry((site, &row.name)).or_default().push(Line {
            file: &row.file,
            line: row.line,
            from: row.valid_from,
            facts: &row.facts,
        });
    }
    let by_place: HashMap<(SiteId, &str), &Appliance> =
        known.appliances.iter().map(|appliance| ((appliance.site, appliance.name.as_str()), appliance)).collect();
    for ((site, name), lines) in groups {
        let appliance = by_place.get(&(site, name));
        let fresh = new_versions(appliance.map(|appliance| &appliance.versions), lines, bad);
        match appliance {
            Some(appliance) => {
                for version in &fresh {
                    tx.add_appliance_version(appliance.id, version)?;
                }
            }
            None => {
                if let Some(versions) = Versions::new(fresh) {
                    tx.add_appliance(&Appliance { id: ApplianceId(ids.fresh(tx.now())), site, name: name.to_owned(), versions })?;
                    taken.appliances += 1;
                }
            }
        }
    }
    Ok(())
}

fn cylinders(
    tx: &Writing<'_>,
    ids: &dyn IdSource,
    parts: &Parts,
    known: &Registers,
    taken: &mut Imported,
    bad: &mut Vec<BadLine>,
) -> Result<(), ImportError> {
    let mut groups: BTreeMap<&str, Vec<Line<'_, _>>> = BTreeMap::new();
    for row in &parts.cylinders {
        groups.entry(&row.name).or_default().push(Line { file: &row.file, line: row.line, from: None, facts: &row.facts });
    }
    for (name, lines) in groups {
        let cylinder = known.cylinder_named(name);
        let fresh = new_versions(cylinder.map(|cylinder| &cylinder.versions), lines, bad);
        if let (None, Some(versions)) = (cylinder, Versions::new(fresh)) {
            tx.add_cylinder(&Cylinder { id: CylinderId(ids.fresh(tx.now())), name: name.to_owned(), versions })?;
            taken.cylinders += 1;
        }
    }
    Ok(())
}

fn people(
    tx: &Writing<'_>,
    ids: &dyn IdSource,
    parts: &Parts,
    known: &Registers,
    taken: &mut Imported,
    bad: &mut Vec<BadLine>,
) -> Result<(), ImportError> {
    let mut seen: HashMap<&str, Person> = known.people.iter().map(|person| (person.name.as_str(), person.clone())).collect();
    for row in &parts.people {
        let id = seen.get(row.name.as_str()).map_or_else(|| PersonId(ids.fresh(tx.now())), |person| person.id);
        let person = Person {
            id,
            name: row.name.clone(),
            certificate: row.certificate.clone(),
            certificate_kind: row.certificate_kind.clone(),
            valid_from: row.valid_from,
            valid_to: row.valid_to,
            company: row.company.clone(),
            company_certificate: row.company_certificate.clone(),
        };
        match seen.get(row.name.as_str()) {
            None => {
                tx.add_person(&person)?;
                taken.people += 1;
                seen.insert(&row.name, person);
            }
            // A person known only from a log has a name and nothing else yet.
            Some(before) if before.certificate.is_empty() && before.company.is_empty() && *before != person => {
                tx.add_person_version(&Dated { from: row.valid_from, reason: Some("import".to_owned()), facts: person })?;
            }
            Some(before) if *before != person && before.valid_from == person.valid_from => {
                bad.extend(differences(before, &person).into_iter().map(|(column, message)| BadLine {
                    file: row.file.clone(),
                    line: row.line,
                    column,
                    message,
                }));
            }
            Some(before) if *before != person => {
                tx.add_person_version(&Dated { from: row.valid_from, reason: Some("import".to_owned()), facts: person })?;
            }
            Some(_) => {}
        }
    }
    Ok(())
}

/// The versions that are new. A line must agree with one of the same first
/// day; without a day it holds from the beginning.
fn new_versions<T: Clone + PartialEq + Serialize>(
    known: Option<&Versions<T>>,
    lines: Vec<Line<'_, T>>,
    bad: &mut Vec<BadLine>,
) -> Vec<Dated<T>> {
    let mut held: Vec<Dated<T>> = known.map(|versions| versions.all().to_vec()).unwrap_or_default();
    let mut fresh = Vec::new();
    for line in lines {
        let same_day = held.iter().find(|version| version.from == line.from);
        // Without a day, a line may also repeat what holds now.
        let repeats = line.from.is_none() && held.last().is_some_and(|version| version.facts == *line.facts);
        match same_day.or(if line.from.is_none() { held.last() } else { None }) {
            _ if repeats => {}
            Some(version) if version.facts != *line.facts => {
                for (column, message) in differences(&version.facts, line.facts) {
                    bad.push(BadLine { file: line.file.to_owned(), line: line.line, column, message });
                }
            }
            Some(_) => {}
            None => {
                let version = Dated { from: line.from, reason: None, facts: line.facts.clone() };
                held.push(version.clone());
                fresh.push(version);
            }
        }
    }
    fresh
}

/// Columns in which two register lines differ, with both values.
fn differences<T: Serialize>(before: &T, after: &T) -> Vec<(String, String)> {
    let fields = |value: &T| match serde_json::to_value(value) {
        Ok(Value::Object(fields)) => fields,
        _ => serde_json::Map::new(),
    };
    let (before, after) = (fields(before), fields(after));
    before
        .iter()
        .filter(|(name, old)| *name != "id" && after.get(*name) != Some(*old) && !name.ends_with("_written"))
        .map(|(name, old)| {
            let shown = |value: Option<&Value>| match value {
                None | Some(Value::Null) => "nothing".to_owned(),
                Some(Value::String(text)) => format!("\u{201c}{text}\u{201d}"),
                Some(Value::Array(items)) => items.iter().filter_map(Value::as_str).collect::<Vec<_>>().join(" "),
                Some(other) => other.to_string(),
            };
            let message = format!(
                "was {} and is now {}; date the change with valid_from, or correct the line",
                shown(Some(old)),
                shown(after.get(name))
            );
            (name.clone(), message)
        })
        .collect()
}
