//! Register lines: new ones are added, known ones must agree or be dated.
//!
//! A line with a fault is taken with stand-ins, so that what refers to it is
//! looked at too; in the end nothing of it stays.

use super::columns::{Columns, differences};
use super::{ImportError, Imported, Parts};
use crate::app::App;
use crate::app::installation::entry_before;
use crate::exchange::csv::{ApplianceRow, BadLine, Kind};
use crate::ledger::{Appliance, ApplianceFacts, ApplianceId, Cylinder, CylinderId, Dated, Registers, Site, SiteFacts, SiteId, Versions};
use crate::store::Writing;
use chrono::NaiveDate;
use std::collections::{BTreeMap, HashMap, HashSet};

/// One register line of a file, with where it stands.
pub(super) struct Line<'a, T> {
    pub file: &'a str,
    pub line: u64,
    pub sound: bool,
    pub from: Option<NaiveDate>,
    pub facts: T,
}

impl<T> Line<'_, T> {
    fn fault(&self, column: &str, message: String) -> BadLine {
        BadLine { file: self.file.to_owned(), line: self.line, column: column.to_owned(), message }
    }
}

/// Takes sites, appliances and cylinders in, and says which appliances could not be placed.
pub(super) fn take<'a>(
    tx: &Writing<'_>,
    app: &App,
    parts: &'a Parts,
    bad: &mut Vec<BadLine>,
    taken: &mut Imported,
) -> Result<HashSet<&'a str>, ImportError> {
    let known = tx.registers()?;
    sites(tx, app, parts, &known, bad, taken)?;
    cylinders(tx, app, parts, &known, bad, taken)?;
    appliances(tx, app, parts, bad, taken)
}

fn sites(
    tx: &Writing<'_>,
    app: &App,
    parts: &Parts,
    known: &Registers,
    bad: &mut Vec<BadLine>,
    taken: &mut Imported,
) -> Result<(), ImportError> {
    let mut groups: BTreeMap<&str, Vec<Line<'_, SiteFacts>>> = BTreeMap::new();
    for row in parts.sites.iter().filter(|row| !row.name.is_empty()) {
        groups.entry(&row.name).or_default().push(Line {
            file: &row.file,
            line: row.line,
            sound: row.sound,
            from: row.valid_from,
            facts: row.facts.clone(),
        });
    }
    for (name, lines) in groups {
        let site = known.site_named(name);
        let fresh = new_versions(site.map(|site| &site.versions), lines, bad);
        if let Some(site) = site {
            for version in &fresh {
                tx.add_site_version(site.id, version)?;
            }
        } else if let Some(versions) = Versions::new(fresh) {
            tx.add_site(&Site { id: SiteId(app.new_id()), name: name.to_owned(), versions })?;
            taken.sites += 1;
        }
    }
    Ok(())
}

fn appliances<'a>(
    tx: &Writing<'_>,
    app: &App,
    parts: &'a Parts,
    bad: &mut Vec<BadLine>,
    taken: &mut Imported,
) -> Result<HashSet<&'a str>, ImportError> {
    let known = tx.registers()?;
    let sites: HashMap<&str, &Site> = known.sites.iter().map(|site| (site.name.as_str(), site)).collect();
    let mut strays: HashSet<&str> = HashSet::new();
    let mut groups: BTreeMap<(SiteId, &str), Vec<Line<'_, ApplianceFacts>>> = BTreeMap::new();
    for row in parts.appliances.iter().filter(|row| !row.name.is_empty()) {
        let Some(site) = sites.get(row.site.as_str()) else {
            strays.insert(&row.name);
            if !row.site.is_empty() && !parts.may_miss(Kind::Sites) {
                let message = format!("there is no site \u{201c}{}\u{201d}; import its line together with this file", row.site);
                bad.push(BadLine { file: row.file.clone(), line: row.line, column: "site".to_owned(), message });
            }
            continue;
        };
        let line = Line { file: &row.file, line: row.line, sound: row.sound, from: row.valid_from, facts: row.facts.clone() };
        bad.extend(installed_after_today(app, site, row, &line));
        groups.entry((site.id, &row.name)).or_default().push(line);
    }
    let by_place: HashMap<(SiteId, &str), &Appliance> =
        known.appliances.iter().map(|appliance| ((appliance.site, appliance.name.as_str()), appliance)).collect();
    for ((site, name), lines) in groups {
        if let Some(appliance) = by_place.get(&(site, name)) {
            installed_after_entries(tx, appliance, &lines, bad)?;
            for version in &new_versions(Some(&appliance.versions), lines, bad) {
                tx.add_appliance_version(appliance.id, version)?;
            }
        } else if let Some(versions) = Versions::new(new_versions(None, lines, bad)) {
            tx.add_appliance(&Appliance { id: ApplianceId(app.new_id()), site, name: name.to_owned(), versions })?;
            taken.appliances += 1;
        }
    }
    Ok(strays)
}

fn installed_after_today(app: &App, site: &Site, row: &ApplianceRow, line: &Line<'_, ApplianceFacts>) -> Option<BadLine> {
    let today = app.today_there(site);
    let installed = row.facts.installed_on.filter(|installed| *installed > today)?;
    Some(line.fault("installed_on", format!("{installed} is after today, {today}; leave it empty until the appliance stands")))
}

/// Where nobody had said since when an appliance is there, a line that now
/// says so must not come after what was done to it.
fn installed_after_entries(
    tx: &Writing<'_>,
    appliance: &Appliance,
    lines: &[Line<'_, ApplianceFacts>],
    bad: &mut Vec<BadLine>,
) -> Result<(), ImportError> {
    let stated = lines.iter().filter_map(|line| line.facts.installed_on.map(|installed| (installed, line)));
    let Some((installed, line)) = stated.min_by_key(|(installed, _)| *installed).filter(|_| appliance.there_since().is_none()) else {
        return Ok(());
    };
    if let Some(first) = entry_before(installed, appliance, &tx.lines_of(appliance.id)?) {
        let message = format!("{installed} is after {}, when the store has a {}; correct the day", first.at.date, first.act.name());
        bad.push(line.fault("installed_on", message));
    }
    Ok(())
}

fn cylinders(
    tx: &Writing<'_>,
    app: &App,
    parts: &Parts,
    known: &Registers,
    bad: &mut Vec<BadLine>,
    taken: &mut Imported,
) -> Result<(), ImportError> {
    // A gross weight is the weighing on the day of import.
    let weighed = app.reading_now(tx)?;
    let mut groups: BTreeMap<&str, Vec<Line<'_, _>>> = BTreeMap::new();
    for row in parts.cylinders.iter().filter(|row| !row.name.is_empty()) {
        groups.entry(&row.name).or_default().push(Line {
            file: &row.file,
            line: row.line,
            sound: row.sound,
            from: None,
            facts: row.facts.clone(),
        });
    }
    for (name, lines) in groups {
        let cylinder = known.cylinder_named(name);
        let mut fresh = new_versions(cylinder.map(|cylinder| &cylinder.versions), lines, bad);
        for version in &mut fresh {
            version.facts.weighed = version.facts.gross.map(|_| weighed);
        }
        if let (None, Some(versions)) = (cylinder, Versions::new(fresh)) {
            tx.add_cylinder(&Cylinder { id: CylinderId(app.new_id()), name: name.to_owned(), versions })?;
            taken.cylinders += 1;
        }
    }
    Ok(())
}

/// The versions that are new, whatever the order of the lines.
fn new_versions<T: Clone + Columns>(known: Option<&Versions<T>>, lines: Vec<Line<'_, T>>, bad: &mut Vec<BadLine>) -> Vec<Dated<T>> {
    let mut fresh = Vec::new();
    for line in one_a_day(lines, bad) {
        match known.and_then(|known| standing_against(known, &line)) {
            Some(version) => bad.extend(changed(version, &line)),
            None => fresh.push(Dated { from: line.from, reason: None, facts: line.facts }),
        }
    }
    fresh
}

/// The version in the store that a line must agree with. A dated line stands
/// against the one of its day. An undated one repeats what holds from the
/// beginning, or else what holds now.
fn standing_against<'a, T: Columns>(known: &'a Versions<T>, line: &Line<'_, T>) -> Option<&'a T> {
    let of_its_day = known.all().iter().rev().find(|version| version.from == line.from).map(|version| &version.facts);
    if line.from.is_some() {
        return of_its_day;
    }
    Some(of_its_day.filter(|facts| differences(*facts, &line.facts).is_empty()).unwrap_or_else(|| known.latest()))
}

/// One line for each first day; further ones must say the same. Of two that
/// do, the one from the file first in order of name stands.
pub(super) fn one_a_day<'a, T: Columns>(mut lines: Vec<Line<'a, T>>, bad: &mut Vec<BadLine>) -> Vec<Line<'a, T>> {
    lines.sort_by_key(|line| (line.from, !line.sound, line.file, line.line));
    let mut days: Vec<Line<'a, T>> = Vec::with_capacity(lines.len());
    for line in lines {
        match days.last() {
            Some(first) if first.from == line.from => {
                // Of a line with a fault nobody knows what it means to say.
                let different = if line.sound { differences(&first.facts, &line.facts) } else { Vec::new() };
                bad.extend(different.into_iter().map(|told| {
                    let message =
                        format!("is {} here and {} in {}, line {}; {}", told.after, told.before, first.file, first.line, T::ADVICE);
                    line.fault(told.column, message)
                }));
            }
            _ => days.push(line),
        }
    }
    days
}

/// What a line changes of what the store has.
pub(super) fn changed<T: Columns>(before: &T, line: &Line<'_, T>) -> Vec<BadLine> {
    let different = if line.sound { differences(before, &line.facts) } else { Vec::new() };
    let told = different.into_iter().map(|told| {
        let message = format!("was {} and is now {}; {}", told.before, told.after, T::ADVICE);
        line.fault(told.column, message)
    });
    told.collect()
}
