//! What the rulebooks say of an appliance beside rates and duties: what an
//! office must know to keep them, each point with its article.

use super::assess::Assessment;
use super::ban::{equipment, installation_bans, service_bans};
use super::book::{Detection, Disposal, InForce, Release, Rulebook};
use super::duty::DutyState;
use super::loss::loss_entries;
use super::own::rulebook;
use super::scope::amount;
use crate::gas;
use crate::ledger::{Act, ApplianceFacts, GasStatus, RecoveryPurpose};
use crate::quantity::{Mass, MassUnit, Ratio, decimal_text, rounded_text};
use chrono::{Datelike, NaiveDate};

/// One point: which rulebook, what it says here, where that stands.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Point {
    pub rulebook: String,
    pub text: String,
    pub source: String,
}

/// Every point of an assessment, rulebook by rulebook.
pub fn points(assessment: &Assessment) -> Vec<Point> {
    let mut points = Vec::new();
    for judgement in &assessment.rulebooks {
        let Some(book) = rulebook(&judgement.id) else { continue };
        let mut say = |text: String, source: &str| {
            points.push(Point { rulebook: book.id.clone(), text, source: source.to_owned() });
        };
        exempt_subsector(assessment, book, &mut say);
        if judgement.applies {
            method_lock(assessment, book, &mut say);
            for row in book.detections.iter().filter(|row| row.holds_on(assessment.on)) {
                detection(book, row, assessment, &mut say);
            }
            for row in book.practices.iter().filter(|row| row.holds_on(assessment.on)) {
                say(row.text.clone(), &row.source);
            }
            if let Some(row) = book.retention(assessment.on) {
                say(format!("kept for {} years: {}", row.years, row.what), &row.source);
            }
        }
        later_due_days(assessment, book, &mut say);
        disposals(assessment, book, &mut say);
        releases(assessment, book, &mut say);
    }
    points.extend(bans(assessment));
    points
}

/// The declaration that takes an appliance out of 84.106, with the reason that was given for it.
fn exempt_subsector(assessment: &Assessment, book: &Rulebook, say: &mut impl FnMut(String, &str)) {
    let row = book.scopes.iter().find(|row| row.holds_on(assessment.on) && row.not_residential_or_light_commercial_ac);
    let Some(row) = row.filter(|_| assessment.facts.residential_or_light_commercial_ac) else { return };
    let versions = assessment.history.appliance.versions.all();
    let declared = versions.iter().find(|version| version.facts.residential_or_light_commercial_ac);
    let since = declared.and_then(|version| version.from).map(|from| format!(" from {from} on")).unwrap_or_default();
    let reason = declared.and_then(|version| version.reason.as_deref()).filter(|reason| !reason.trim().is_empty());
    let reason = reason.unwrap_or("none was written down");
    say(
        format!(
            "the residential or light commercial subsector was declared{since}; it is not checked against the category; reason: {reason}"
        ),
        &row.source,
    );
}

/// One method for a facility, and every change of it since the rule began.
fn method_lock(assessment: &Assessment, book: &Rulebook, say: &mut impl FnMut(String, &str)) {
    let Some(row) = book.rate_row(assessment.on).filter(|row| !row.method_lock.is_empty()) else { return };
    let mut changes = Vec::new();
    for pair in assessment.site.versions.all().windows(2) {
        let [before, after] = pair else { continue };
        let Some(from) = after.from.filter(|&from| from <= assessment.on && from > row.from) else { continue };
        if before.facts.rate_method != after.facts.rate_method {
            let reason =
                after.reason.as_deref().filter(|reason| !reason.is_empty()).map(|reason| format!(" ({reason})")).unwrap_or_default();
            changes.push(format!("{} to {} on {from}{reason}", before.facts.rate_method, after.facts.rate_method));
        }
    }
    let changed = if changes.is_empty() { String::new() } else { format!("; here it was changed from {}", changes.join(", then from ")) };
    say(format!("{}{changed}", row.method_lock), &row.method_lock_source);
}

/// A leakage detection system: that it must be there, or at which loss it must raise its alarm.
fn detection(book: &Rulebook, row: &Detection, assessment: &Assessment, say: &mut impl FnMut(String, &str)) {
    let facts = &assessment.facts;
    if !detection_takes(book, row, facts) {
        return;
    }
    let asks_for_one = row.charge_at_least.is_some() || row.basis.is_some();
    // A row that asks for none speaks of those there are.
    if !asks_for_one && !facts.leakage_detection_system {
        return;
    }
    let declared = match facts.leakage_detection_system {
        true => "",
        false => "; none is declared in the register",
    };
    let alarm = alert_mass(row, facts).map(|mass| format!("; one that measures losses alerts at {} lb", pounds(mass))).unwrap_or_default();
    say(format!("{}{declared}{alarm}", row.why), &row.source);
}

fn detection_takes(book: &Rulebook, row: &Detection, facts: &ApplianceFacts) -> bool {
    let Some(gas) = gas::find(&facts.refrigerant) else { return false };
    let installed_within =
        |day: NaiveDate| row.installed_from.is_none_or(|from| from <= day) && row.installed_to.is_none_or(|to| day <= to);
    let dated = row.installed_from.is_some() || row.installed_to.is_some();
    (row.categories.is_empty() || row.categories.contains(&facts.category))
        && (row.equipment.is_empty() || row.equipment.contains(&equipment(facts)))
        && row.charge_at_least.is_none_or(|least| facts.full_charge.is_some_and(|charge| charge >= least))
        && row.basis.zip(row.at_least).is_none_or(|(basis, least)| amount(basis, gas, facts, book).is_some_and(|amount| amount >= least))
        && (!dated || facts.installed_on.is_some_and(installed_within))
}

/// The smaller of a mass and a share of the full charge.
pub fn alert_mass(row: &Detection, facts: &ApplianceFacts) -> Option<Mass> {
    let share = row.alerts_at_percent.zip(facts.full_charge).map(|(percent, charge)| {
        // Cut off below: an alarm may come early, not late.
        Mass::from_units((percent * Ratio::from_integer(charge.units()) / Ratio::from_integer(100)).floor().to_integer())
    });
    [row.alerts_at, share].into_iter().flatten().min()
}

/// Later due days that hold where somebody can show their reason.
fn later_due_days(assessment: &Assessment, book: &Rulebook, say: &mut impl FnMut(String, &str)) {
    let open = |state| matches!(state, DutyState::Open | DutyState::Late);
    for duty in assessment.duties.iter().filter(|duty| duty.rulebook == book.id && open(duty.state(assessment.on))) {
        for (day, extension) in duty.extensions() {
            let due = duty.due.map(|due| due.to_string()).unwrap_or_default();
            say(format!("{} due {due}; {day} where {}", duty.kind.name(), extension.when), &extension.source);
        }
    }
}

/// What was recovered for good, where the law adds it up by month.
fn disposals(assessment: &Assessment, book: &Rulebook, say: &mut impl FnMut(String, &str)) {
    let history = &assessment.history;
    let Some(retired) = history.retired_on() else { return };
    let Some(row) = book.disposals.iter().find(|row| row.holds_on(retired)) else { return };
    let Some(facts) = history.facts_on(retired).filter(|facts| disposal_takes(row, facts)) else { return };
    let recovered: Mass = history.lines.iter().filter_map(|line| recovered_to_retire(&line.act)).sum();
    say(
        format!(
            "disposed of in {}: {} lb of {} recovered, part of that month's total of this gas",
            retired.format("%Y-%m"),
            pounds(recovered),
            facts.refrigerant
        ),
        &row.source,
    );
}

fn disposal_takes(row: &Disposal, facts: &ApplianceFacts) -> bool {
    facts
        .full_charge
        .is_some_and(|charge| row.charge_over.is_none_or(|limit| charge > limit) && row.charge_below.is_none_or(|limit| charge < limit))
}

fn recovered_to_retire(act: &Act) -> Option<Mass> {
    match act {
        Act::Recover { purpose: RecoveryPurpose::Retire, transfer } => Some(transfer.mass),
        _ => None,
    }
}

/// What was recovered in a month from appliances that were disposed of, by gas.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct MonthlyDisposal {
    /// First day of the month.
    pub month: NaiveDate,
    pub refrigerant: String,
    pub recovered: Mass,
    pub appliances: usize,
    pub rulebook: String,
    pub source: String,
}

/// The monthly totals over many appliances (82.156(a)(3)(ii)), by month, gas and rulebook.
pub fn monthly_disposals(assessments: &[Assessment]) -> Vec<MonthlyDisposal> {
    let mut totals: Vec<MonthlyDisposal> = Vec::new();
    for assessment in assessments {
        let history = &assessment.history;
        let Some(retired) = history.retired_on() else { continue };
        let Some(facts) = history.facts_on(retired) else { continue };
        let month = retired.with_day(1).unwrap_or(retired);
        let recovered: Mass = history.lines.iter().filter_map(|line| recovered_to_retire(&line.act)).sum();
        for book in assessment.rulebooks.iter().filter_map(|judgement| rulebook(&judgement.id)) {
            let Some(row) = book.disposals.iter().find(|row| row.holds_on(retired) && disposal_takes(row, facts)) else { continue };
            let same = |total: &&mut MonthlyDisposal| {
                (total.month, total.refrigerant.as_str(), total.rulebook.as_str()) == (month, facts.refrigerant.as_str(), book.id.as_str())
            };
            match totals.iter_mut().find(same) {
                Some(total) => {
                    total.recovered += recovered;
                    total.appliances += 1;
                }
                None => totals.push(MonthlyDisposal {
                    month,
                    refrigerant: facts.refrigerant.clone(),
                    recovered,
                    appliances: 1,
                    rulebook: book.id.clone(),
                    source: row.source.clone(),
                }),
            }
        }
    }
    totals.sort_by(|a, b| (a.month, &a.refrigerant, &a.rulebook).cmp(&(b.month, &b.refrigerant, &b.rulebook)));
    totals
}

/// Losses of this year that come to a release to be reported.
fn releases(assessment: &Assessment, book: &Rulebook, say: &mut impl FnMut(String, &str)) {
    let history = &assessment.history;
    for loss in loss_entries(history) {
        let day = history.date(loss.line);
        if day.year() != assessment.on.year() {
            continue;
        }
        if let Some(row) = release_row(book, loss.mass, day) {
            let kg = rounded_text(loss.mass.kg(), 2);
            say(format!("{kg} kg of {} lost, as found on {day}: {}", loss.refrigerant, row.report), &row.source);
        }
    }
}

/// The row that asks for a report of a release of this mass; `None` where none does.
pub fn release_row(book: &Rulebook, mass: Mass, day: NaiveDate) -> Option<&Release> {
    let kg = mass.kg();
    let takes = |row: &&Release| {
        row.holds_on(day)
            && row.kg_over.is_none_or(|limit| kg > limit)
            && row.kg_at_least.is_none_or(|limit| kg >= limit)
            && row.kg_below.is_none_or(|limit| kg < limit)
    };
    book.releases.iter().find(takes)
}

/// What may not be used to service it today, and what spoke against putting it into operation.
fn bans(assessment: &Assessment) -> Vec<Point> {
    let ids: Vec<String> = assessment.rulebooks.iter().map(|judgement| judgement.id.clone()).collect();
    let facts = &assessment.facts;
    let mut points = Vec::new();
    let forbidden = |status| service_bans(&ids, facts, &facts.refrigerant, status, assessment.on);
    let used = forbidden(GasStatus::Reclaimed);
    for row in forbidden(GasStatus::Virgin) {
        let last = row.used_gas_to.map(|last| format!(" to {last}")).unwrap_or_default();
        let spared = used.iter().all(|other| !std::ptr::eq(*other, row));
        let allowed = if spared { format!("; reclaimed or recycled gas does{last}") } else { String::new() };
        points.push(Point { rulebook: row_book(&ids, &row.source), text: format!("{}{allowed}", row.forbids), source: row.source.clone() });
    }
    if let Some(installed) = facts.installed_on {
        for row in installation_bans(&ids, facts, installed) {
            let text = format!("installed on {installed}, where {}", row.forbids);
            points.push(Point { rulebook: row_book(&ids, &row.source), text, source: row.source.clone() });
        }
    }
    points
}

/// Which of the books a ban stands in.
fn row_book(ids: &[String], source: &str) -> String {
    let holds = |book: &&Rulebook| {
        book.service_bans.iter().any(|row| row.source == source) || book.installation_bans.iter().any(|row| row.source == source)
    };
    ids.iter().filter_map(|id| rulebook(id)).find(|book| holds(book)).map_or_else(String::new, |book| book.id.clone())
}

fn pounds(mass: Mass) -> String {
    let pounds = mass.in_unit(MassUnit::Pound);
    decimal_text(pounds).filter(|text| text.len() <= 12).unwrap_or_else(|| rounded_text(pounds, 2))
}
