//! The rules for new entries: what protects people or law. Pure functions of
//! what stands and what is to be entered; window and commands ask them alike.
//!
//! History that is imported is taken as it happened and does not pass here.

pub(super) mod missing;

use super::cylinder_entries::RETURNED;
use super::limits::LimitRules;
use super::standing::{ApplianceStanding, CylinderStanding};
use crate::gas::{self, Gas};
use crate::ledger::{Act, ChargePurpose, CylinderAct, CylinderKind, GAP_REASONS, GasStatus, LeakMethod, Line, Moment, TestKind};
use crate::measure::{CylinderLimit, Limit, Missing, Rating, is_near_critical};
use crate::quantity::{GaugePressure, Mass, Ratio, rounded_text};
use crate::rules::service_bans;
use chrono::NaiveDate;
use std::fmt;

/// What a refusal is about.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Kind {
    InTheFuture,
    BeforeInstallation,
    Retired,
    AlreadyMothballed,
    UnknownGas,
    OtherGas,
    MixedGas,
    RecoveredGas,
    ServiceBan,
    BelowTare,
    MoreThanHeld,
    MoreThanFull,
    OutOfUse,
    NotRefillable,
    Overdue,
    Damaged,
    TareLost,
    OtherOwner,
    OverLimit,
    NoLimit,
    ContentUnknown,
    NotRated,
    RatingUnknown,
    NothingToRecycle,
    /// Something that the entry has to say is missing.
    NotSaid,
    WeighingGap,
    IndirectMethod,
}

/// Why something is not entered.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Refusal {
    pub kind: Kind,
    pub sentence: String,
    /// Article or other basis; empty where it is plain sense.
    pub source: &'static str,
    /// The law leaves it to judgement: a reason, which is printed, lets it pass.
    pub judgement: bool,
}

impl fmt::Display for Refusal {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.sentence)?;
        if !self.source.is_empty() {
            write!(f, " ({})", self.source)?;
        }
        if self.judgement {
            f.write_str(" Going on needs a reason, which is printed.")?;
        }
        Ok(())
    }
}

impl Refusal {
    fn firm(kind: Kind, sentence: String, source: &'static str) -> Self {
        Self { kind, sentence, source, judgement: false }
    }

    fn judgement(kind: Kind, sentence: String, source: &'static str) -> Self {
        Self { kind, sentence, source, judgement: true }
    }
}

/// What to do about a filling over the limit; nothing to say of one long past.
pub(super) const STOP_BEFORE: &str = " Stop before that; if it has happened, write why and empty it at once.";
const SAME_OWNER: &str = "40 CFR 82.156(h), 82.154(d)";
const EU_RECOVERED: &str = "Regulation (EU) 2024/573 Art. 8(6)";
const INDIRECT: &str = "common practice";
const DAMAGED: &str = "49 CFR 173.301(a)(2), 180.205(d)";
const TARE_LOST: &str = "49 CFR 180.209(c)";
const OVERDUE: &str = "49 CFR 180.205(c), 173.301(a)(6)";
const NON_REFILLABLE: &str = "49 CFR 178.65";

/// What holds for every entry on an appliance.
pub fn of_entry(standing: &ApplianceStanding, act: &Act, at: Moment, now: Moment) -> Vec<Refusal> {
    let mut refusals = Vec::new();
    let name = &standing.appliance.name;
    if at.date > now.date {
        let sentence = format!("{} has not come yet at this site; today is {}. Correct the date.", at.date, now.date);
        refusals.push(Refusal::firm(Kind::InTheFuture, sentence, ""));
    } else if let (Some(minute), Some(this)) = (at.minute.filter(|_| at.date == now.date), now.minute)
        && minute > this
    {
        let sentence = format!("{} has not come yet at this site; it is {}. Correct the time.", clock(minute), clock(this));
        refusals.push(Refusal::firm(Kind::InTheFuture, sentence, ""));
    }
    if let Some(installed) = standing.installed_on.filter(|installed| at.date < *installed) {
        let sentence = format!("{name} was installed on {installed}, after {}. Correct one of the two.", at.date);
        refusals.push(Refusal::firm(Kind::BeforeInstallation, sentence, ""));
    }
    // A chronic leak report is still due after retirement; a note harms nobody.
    let may_follow = matches!(act, Act::ReportSent | Act::Note);
    if let Some(retired) = standing.retired_on.filter(|retired| *retired <= at.date && !may_follow) {
        let sentence = format!("{name} was retired on {retired}; nothing more is done to it. If that was wrong, correct that entry first.");
        refusals.push(Refusal::firm(Kind::Retired, sentence, ""));
    }
    if let (Act::Mothball, Some(since)) = (act, standing.mothballed_on) {
        let sentence = format!("{name} is mothballed since {since}.");
        refusals.push(Refusal::firm(Kind::AlreadyMothballed, sentence, ""));
    }
    refusals.extend(before_what_is_known(standing, act, at));
    refusals
}

/// An entry of an earlier day must go together with what was entered for later days.
fn before_what_is_known(standing: &ApplianceStanding, act: &Act, at: Moment) -> Option<Refusal> {
    let name = &standing.appliance.name;
    let mut later: Vec<&Line> = standing.lines.iter().filter(|line| line.at.date > at.date).collect();
    later.sort_by_key(|line| (line.at.date, line.position));
    match act {
        Act::Retire => {
            let known = later.into_iter().find(|line| !matches!(line.act, Act::ReportSent | Act::Note))?;
            let sentence = format!(
                "{name} cannot have been retired on {}: there is a {} on {}. Correct one of the two.",
                at.date,
                known.act.name(),
                known.at.date
            );
            Some(Refusal::firm(Kind::Retired, sentence, ""))
        }
        Act::Mothball => {
            let known = later.into_iter().find(|line| matches!(line.act, Act::Charge { .. } | Act::Mothball))?;
            let again = known.act == Act::Mothball;
            again.then(|| {
                let sentence = format!("{name} is mothballed on {} already, and was not charged before that.", known.at.date);
                Refusal::firm(Kind::AlreadyMothballed, sentence, "")
            })
        }
        _ => None,
    }
}

fn clock(minute: u16) -> String {
    format!("{:02}:{:02}", minute / 60, minute % 60)
}

/// What holds for gas that goes into an appliance. `cylinder` is `None` for a factory charge.
pub fn of_charge(
    standing: &ApplianceStanding,
    cylinder: Option<&CylinderStanding>,
    purpose: ChargePurpose,
    net: Mass,
    gross_after: Option<Mass>,
    day: NaiveDate,
) -> Vec<Refusal> {
    let mut refusals = Vec::new();
    let facts = &standing.facts;
    if gas::find(&facts.refrigerant).is_none() {
        refusals.push(unknown_gas(&facts.refrigerant));
    }
    if let Some(full) = facts.full_charge.filter(|full| net > *full) {
        let sentence = format!("{} kg is more than the full charge of {}, {} kg.", net.kg_text(), standing.appliance.name, full.kg_text());
        refusals.push(Refusal::judgement(Kind::MoreThanFull, sentence, ""));
    }
    let Some(cylinder) = cylinder else { return refusals };
    let name = &cylinder.cylinder.name;
    let balance = &cylinder.balance;
    if balance.is_mixed() {
        let sentence = format!("Cylinder {name} holds mixed gas, which is never charged. It goes for reclamation or destruction.");
        refusals.push(Refusal::firm(Kind::MixedGas, sentence, "40 CFR 82.154(d); common practice"));
    } else if let Some(gas) = balance.gas.as_ref().filter(|gas| !same_gas(gas, &facts.refrigerant)) {
        let sentence = format!("Cylinder {name} holds {gas}, {} takes {}.", standing.appliance.name, facts.refrigerant);
        refusals.push(Refusal::firm(Kind::OtherGas, sentence, ""));
    } else if balance.gas.is_none() {
        let sentence = format!("Nothing is known to be in cylinder {name}. Write down its gas first.");
        refusals.push(Refusal::firm(Kind::OtherGas, sentence, ""));
    }
    if balance.status == Some(GasStatus::Recovered) {
        refusals.extend(recovered_gas(standing, cylinder, purpose));
    }
    refusals.extend(banned(standing, balance.status, day));
    refusals.extend(below_tare(cylinder, gross_after));
    if let Some(held) = balance.content.mass().filter(|held| gross_after.is_none() && net > *held) {
        let sentence = format!("Cylinder {name} held {} kg, {} kg is more.", held.kg_text(), net.kg_text());
        refusals.push(Refusal::judgement(Kind::MoreThanHeld, sentence, ""));
    }
    refusals
}

/// What the law forbids to be charged here, whatever it is charged from.
/// Gas of unknown origin, `None`, is taken as virgin: the safe side.
pub(super) fn banned(standing: &ApplianceStanding, status: Option<GasStatus>, day: NaiveDate) -> Vec<Refusal> {
    let facts = &standing.facts;
    let gas = match status {
        Some(status) => format!("{status} {}", facts.refrigerant),
        None => format!("{} of unknown origin, which is taken as virgin", facts.refrigerant),
    };
    service_bans(&standing.site_facts.rulebooks, facts, &facts.refrigerant, status.unwrap_or(GasStatus::Virgin), day)
        .into_iter()
        .map(|ban| {
            let sentence = format!("{} takes no {gas}: {}.", standing.appliance.name, ban.forbids);
            Refusal { kind: Kind::ServiceBan, sentence, source: &ban.source, judgement: ban.leaves_room() }
        })
        .collect()
}

/// What holds for a leak inspection: it looks for the place of a leak. A
/// method that nobody knows is taken at its word.
pub fn of_inspection(kind: TestKind, method: &str) -> Option<Refusal> {
    let indirect = kind == TestKind::LeakInspection && LeakMethod::is_direct(method) == Some(false);
    indirect.then(|| {
        let sentence = format!(
            "\u{201c}{}\u{201d} is an indirect method: it shows that gas is missing, not where. It is no leak inspection.",
            method.trim()
        );
        Refusal::firm(Kind::IndirectMethod, sentence, INDIRECT)
    })
}

fn recovered_gas(standing: &ApplianceStanding, cylinder: &CylinderStanding, purpose: ChargePurpose) -> Option<Refusal> {
    let name = &cylinder.cylinder.name;
    let under = |start: &str| standing.site_facts.rulebooks.iter().any(|id| id.starts_with(start));
    if under("eu-") {
        let sentence = format!("Cylinder {name} holds recovered gas, which is not charged before it is recycled or reclaimed.");
        return Some(Refusal::firm(Kind::RecoveredGas, sentence, EU_RECOVERED));
    }
    if under("us-") {
        let owner = standing.site_facts.owner.trim();
        if cylinder.owners.len() > 1 {
            let owners = cylinder.owners.iter().map(String::as_str).collect::<Vec<_>>().join(" and ");
            let sentence = format!("Cylinder {name} holds gas recovered from {owners}, which goes only to a reclaimer.");
            return Some(Refusal::firm(Kind::RecoveredGas, sentence, SAME_OWNER));
        }
        let known = cylinder.owners.first().map(|known| known.trim());
        if purpose == ChargePurpose::Returned && known.is_none_or(|known| owner.is_empty() || known.eq_ignore_ascii_case(owner)) {
            return None;
        }
        let stated = cylinder.facts.gas_owner.trim();
        let gas_owner = if stated.is_empty() { cylinder.recovered_from.as_deref().unwrap_or("") } else { stated };
        if !owner.is_empty() && owner.eq_ignore_ascii_case(gas_owner) {
            return None;
        }
        if owner.is_empty() || gas_owner.is_empty() {
            let sentence = format!(
                "Cylinder {name} holds recovered gas, which goes back only to the owner it came from, and whose it is was not written down."
            );
            return Some(Refusal::judgement(Kind::RecoveredGas, sentence, SAME_OWNER));
        }
        let sentence =
            format!("Cylinder {name} holds gas recovered from {gas_owner}; it is not charged for {owner} before it is reclaimed.");
        return Some(Refusal::firm(Kind::RecoveredGas, sentence, SAME_OWNER));
    }
    let sentence = format!("Cylinder {name} holds recovered gas. Make sure that the law here lets it be charged.");
    Some(Refusal::judgement(Kind::RecoveredGas, sentence, ""))
}

/// What holds for gas that goes from an appliance into a cylinder.
pub fn of_recovery(
    standing: &ApplianceStanding,
    cylinder: &CylinderStanding,
    net: Mass,
    gross_after: Option<Mass>,
    oil_factor: Ratio,
    day: NaiveDate,
) -> Vec<Refusal> {
    let mut refusals = Vec::new();
    let name = &cylinder.cylinder.name;
    let refrigerant = &standing.facts.refrigerant;
    if let Some(reason) = &cylinder.facts.scrapped {
        let sentence = format!("Cylinder {name} is out of use: {reason}. It may be emptied, not filled.");
        refusals.push(Refusal::firm(Kind::OutOfUse, sentence, "49 CFR 173.301(a)(2)"));
    }
    if cylinder.facts.kind == CylinderKind::NonRefillable {
        let sentence = format!("Cylinder {name} is non-refillable and is never filled again.");
        refusals.push(Refusal::firm(Kind::NotRefillable, sentence, NON_REFILLABLE));
    }
    if let Some(due) = cylinder.facts.requalify_by.filter(|due| day > *due) {
        let sentence = format!("Cylinder {name} was to be requalified by {due}. It may be emptied, not filled.");
        refusals.push(Refusal::firm(Kind::Overdue, sentence, OVERDUE));
    }
    refusals.extend(of_condition(cylinder));
    let holds_some = cylinder.balance.content.mass().is_none_or(Mass::is_positive);
    refusals.extend(of_owners(standing, cylinder).filter(|_| holds_some));
    if cylinder.balance.is_mixed() && holds_some {
        let sentence = format!("Cylinder {name} holds mixed gas: what is added to it cannot be used again.");
        refusals.push(Refusal::judgement(Kind::MixedGas, sentence, "common practice"));
    } else if let Some(gas) = cylinder.balance.gas.as_ref().filter(|gas| holds_some && !same_gas(gas, refrigerant)) {
        let sentence = format!("Cylinder {name} holds {gas}; {refrigerant} on top would make a mix. Take another cylinder.");
        refusals.push(Refusal::firm(Kind::OtherGas, sentence, "49 CFR 173.301(d); common practice"));
    }
    refusals.extend(below_tare(cylinder, gross_after));
    match gas::find(refrigerant) {
        None => refusals.push(unknown_gas(refrigerant)),
        Some(gas) => {
            let content =
                gross_after.map(|gross| gross - cylinder.facts.tare).or_else(|| cylinder.balance.content.mass().map(|held| held + net));
            let rules = LimitRules::under(&standing.site_facts.rulebooks, oil_factor);
            refusals.extend(of_limit(name, cylinder, gas, content, rules));
        }
    }
    refusals
}

/// A cylinder that a look or its own weight says is not sound: tested first, never filled before.
pub fn of_condition(cylinder: &CylinderStanding) -> Vec<Refusal> {
    let mut refusals = Vec::new();
    let (name, facts) = (&cylinder.cylinder.name, &cylinder.facts);
    let damage = facts.damage.trim();
    if !damage.is_empty() {
        let sentence = format!("Cylinder {name} is damaged: {damage}. It is tested before it is filled again; it may be emptied.");
        refusals.push(Refusal::firm(Kind::Damaged, sentence, DAMAGED));
    }
    let found = facts.tare_found.as_ref().and_then(|found| found.mass().ok());
    // Five per cent or more of the stamped tare.
    if let Some(found) = found.filter(|found| (facts.tare - *found).units() * 20 >= facts.tare.units()) {
        let sentence = format!(
            "Cylinder {name} weighs {} kg empty, 5 % or more below its stamped tare of {} kg. It is requalified before it is filled again.",
            found.kg_text(),
            facts.tare.kg_text(),
        );
        refusals.push(Refusal::firm(Kind::TareLost, sentence, TARE_LOST));
    }
    refusals
}

/// Gas of several owners in one cylinder can be given back to none of them.
fn of_owners(standing: &ApplianceStanding, cylinder: &CylinderStanding) -> Option<Refusal> {
    let united_states = standing.site_facts.rulebooks.iter().any(|id| id.starts_with("us-"));
    let owner = standing.site_facts.owner.trim();
    let others: Vec<&str> = cylinder.owners.iter().map(String::as_str).filter(|other| !other.trim().eq_ignore_ascii_case(owner)).collect();
    if !united_states || owner.is_empty() || others.is_empty() {
        return None;
    }
    let sentence = format!(
        "Cylinder {} holds gas of {}; with gas of {owner} in it, it goes only to a reclaimer.",
        cylinder.cylinder.name,
        others.join(" and "),
    );
    Some(Refusal::judgement(Kind::OtherOwner, sentence, SAME_OWNER))
}

/// Filled too full, or with a gas whose pressure it is not made for, a cylinder bursts. What cannot be shown to
/// hold is refused; where only a figure was not written down, a reason lets it pass.
fn of_limit(name: &str, cylinder: &CylinderStanding, gas: &Gas, content: Option<Mass>, rules: LimitRules) -> Vec<Refusal> {
    let limit = rules.limit_of(gas, cylinder, true);
    let mut refusals: Vec<Refusal> = match (&limit.binding, content) {
        (None, _) => Some(no_limit(name, gas, &limit)),
        (Some(binding), None) => Some(content_unknown(name, binding)),
        (Some(binding), Some(content)) if content > binding.net => Some(over_limit(name, content, binding)),
        (Some(_), Some(_)) => None,
    }
    .into_iter()
    .collect();
    refusals.extend(of_rating(name, gas, &limit.rating));
    refusals
}

fn over_limit(name: &str, content: Mass, binding: &Limit) -> Refusal {
    let sentence = format!(
        "Cylinder {name} would hold {} kg, over its limit of {} kg ({}).{STOP_BEFORE}",
        content.kg_text(),
        binding.net.kg_text(),
        binding.name(),
    );
    Refusal::judgement(Kind::OverLimit, sentence, binding.kind.basis())
}

fn content_unknown(name: &str, binding: &Limit) -> Refusal {
    let sentence = format!(
        "What cylinder {name} held before is not known, so nor is what it holds now; its limit is {} kg ({}). Weigh it with its tare.",
        binding.net.kg_text(),
        binding.name(),
    );
    Refusal::judgement(Kind::ContentUnknown, sentence, "49 CFR 173.304a(c)")
}

fn no_limit(name: &str, gas: &Gas, limit: &CylinderLimit) -> Refusal {
    let designation = gas.designation();
    if is_near_critical(gas) {
        let sentence = format!(
            "No limit can be worked out for {designation} in cylinder {name}: near its critical temperature no density tells it. \
             Take a cylinder made and stamped for {designation}."
        );
        return Refusal::firm(Kind::NoLimit, sentence, "49 CFR 173.304a(a)(2); ADR 4.1.4.1, P200");
    }
    let sentence = if limit.missing.contains(&Missing::WaterCapacity) {
        format!("How much cylinder {name} may take is not known: write down its water capacity or stamped maximum.")
    } else {
        format!(
            "How much {designation} cylinder {name} may take is not known: no density of it is at hand. Write down its stamped maximum."
        )
    };
    Refusal::judgement(Kind::NoLimit, sentence, "49 CFR 173.304(b)")
}

fn of_rating(name: &str, gas: &Gas, rating: &Rating) -> Option<Refusal> {
    let designation = gas.designation();
    let bar = |pressure: &GaugePressure| rounded_text(pressure.bar(), 1);
    match rating {
        Rating::Judged { suffices: true, .. } | Rating::Named { suffices: true, .. } => None,
        Rating::Judged { pressure, allowed, basis, at, .. } => {
            let (pressure, allowed) = (bar(pressure), bar(allowed));
            let sentence =
                format!("Cylinder {name} is not rated for {designation}: {pressure} bar gauge at {at} °C, {allowed} bar are allowed.");
            Some(Refusal::firm(Kind::NotRated, sentence, basis))
        }
        Rating::Named { needed, given, basis, .. } => {
            let (needed, given) = (bar(needed), bar(given));
            let sentence =
                format!("Cylinder {name} is not made for {designation}: {needed} bar gauge are asked for, it is stamped {given}.");
            Some(Refusal::firm(Kind::NotRated, sentence, basis))
        }
        Rating::NotGiven | Rating::NoPressure if is_near_critical(gas) => {
            let sentence = format!(
                "Nothing shows that cylinder {name} is made for {designation}, which is near its critical temperature when warm. \
                 Take a cylinder made for it, with its service or test pressure written down."
            );
            Some(Refusal::firm(Kind::NotRated, sentence, "49 CFR 173.304a(a)(2); ADR 4.1.4.1, P200"))
        }
        Rating::NotGiven => {
            let sentence =
                format!("Whether cylinder {name} is made for {designation} is not known: write down its service or test pressure.");
            Some(Refusal::judgement(Kind::RatingUnknown, sentence, "49 CFR 173.301(a)(8); ADR 4.1.4.1, P200"))
        }
        Rating::NoPressure => {
            let sentence = format!(
                "Whether cylinder {name} is made for {designation} is not known: the catalogue has no pressure of it in a warm cylinder."
            );
            Some(Refusal::judgement(Kind::RatingUnknown, sentence, "49 CFR 173.301(a)(8); ADR 4.1.4.1, P200"))
        }
    }
}

/// What holds for a cylinder apart from any appliance. What comes from a supplier is taken as it came; what it
/// breaks asks for a reason.
pub fn of_cylinder_entry(
    cylinder: &CylinderStanding,
    act: &CylinderAct,
    gross: Option<Mass>,
    rules: LimitRules,
    day: NaiveDate,
    today: NaiveDate,
) -> Vec<Refusal> {
    let mut refusals = Vec::new();
    let name = &cylinder.cylinder.name;
    if day > today {
        let sentence = format!("{day} has not come yet; today is {today}. Correct the date.");
        refusals.push(Refusal::firm(Kind::InTheFuture, sentence, ""));
    }
    refusals.extend(below_tare(cylinder, gross));
    let held = cylinder.balance.content.mass();
    match act {
        CylinderAct::Bought { refrigerant, mass, .. } => refusals.extend(of_purchase(cylinder, refrigerant, *mass, gross, rules, day)),
        CylinderAct::SentAway { mass } | CylinderAct::Lost { mass } => {
            if let Some(held) = held.filter(|held| gross.is_none() && mass > held) {
                let sentence = format!("Cylinder {name} held {} kg, {} kg is more.", held.kg_text(), mass.kg_text());
                refusals.push(Refusal::judgement(Kind::MoreThanHeld, sentence, ""));
            }
        }
        CylinderAct::Returned { .. } if cylinder.facts.scrapped.is_some() => {
            let sentence = format!("Cylinder {name} is out of use already.");
            refusals.push(Refusal::firm(Kind::OutOfUse, sentence, ""));
        }
        CylinderAct::Returned { .. } | CylinderAct::Weighed | CylinderAct::Strike => {}
    }
    refusals
}

fn of_purchase(
    cylinder: &CylinderStanding,
    refrigerant: &str,
    mass: Mass,
    gross: Option<Mass>,
    rules: LimitRules,
    day: NaiveDate,
) -> Vec<Refusal> {
    let mut refusals = Vec::new();
    let name = &cylinder.cylinder.name;
    let facts = &cylinder.facts;
    let balance = &cylinder.balance;
    let held = balance.content.mass();
    if let Some(reason) = facts.scrapped.as_ref().filter(|reason| !reason.starts_with(RETURNED)) {
        let sentence = format!("Cylinder {name} is out of use: {reason}. It may be emptied, not filled.");
        refusals.push(Refusal::firm(Kind::OutOfUse, sentence, "49 CFR 173.301(a)(2)"));
    }
    if facts.kind == CylinderKind::NonRefillable && (held.is_some() || balance.last_gross.is_some()) {
        let sentence = format!("Cylinder {name} is non-refillable and came filled once. Another of its make is a cylinder of its own.");
        refusals.push(Refusal::firm(Kind::NotRefillable, sentence, NON_REFILLABLE));
    }
    if let Some(due) = facts.requalify_by.filter(|due| day > *due) {
        let sentence = format!("Cylinder {name} was to be requalified by {due} and is not filled before.");
        refusals.push(Refusal::judgement(Kind::Overdue, sentence, OVERDUE));
    }
    let holds_some = held.is_none_or(Mass::is_positive);
    if let Some(gas) = balance.gas.as_ref().filter(|gas| holds_some && !same_gas(gas, refrigerant)) {
        let sentence = format!("Cylinder {name} holds {gas}; {refrigerant} on top makes a mix, which is never charged.");
        refusals.push(Refusal::judgement(Kind::OtherGas, sentence, "49 CFR 173.301(d); common practice"));
    }
    let content = gross.map(|gross| gross - facts.tare).or_else(|| held.map(|held| held + mass));
    let limit = gas::find(refrigerant).map(|gas| rules.limit_of(gas, cylinder, cylinder.holds_recovered()));
    if let Some((binding, content)) = limit.and_then(|limit| limit.binding).zip(content)
        && content > binding.net
    {
        refusals.push(over_limit(name, content, &binding));
    }
    refusals
}

/// What holds for making recovered gas fit for use.
pub fn of_recycling(cylinder: &CylinderStanding) -> Vec<Refusal> {
    if cylinder.balance.status == Some(GasStatus::Recovered) {
        return Vec::new();
    }
    let holds = cylinder.balance.status.map_or("nothing that was recovered".to_owned(), |status| format!("{status} gas"));
    let sentence = format!("Cylinder {} holds {holds}; only recovered gas is recycled.", cylinder.cylinder.name);
    vec![Refusal::firm(Kind::NothingToRecycle, sentence, "")]
}

/// A gross reading that differs from the last one known by more than both scales' error asks for its reason.
pub fn of_gap(cylinder: &CylinderStanding, before: Mass, division: Mass, explained: bool) -> Option<Refusal> {
    let gap = cylinder.gap(before, division).filter(|_| !explained)?;
    let sentence = format!(
        "Cylinder {} weighed {} kg when last known, now {} kg. Say why: {}.",
        cylinder.cylinder.name,
        gap.known.gross.kg_text(),
        before.kg_text(),
        GAP_REASONS.join(", "),
    );
    Some(Refusal::judgement(Kind::WeighingGap, sentence, ""))
}

fn below_tare(cylinder: &CylinderStanding, gross_after: Option<Mass>) -> Option<Refusal> {
    let gross = gross_after.filter(|gross| *gross < cylinder.facts.tare)?;
    let sentence = format!(
        "{} kg is less than cylinder {} weighs empty, {} kg. Look at the reading and the tare.",
        gross.kg_text(),
        cylinder.cylinder.name,
        cylinder.facts.tare.kg_text(),
    );
    Some(Refusal::firm(Kind::BelowTare, sentence, ""))
}

fn unknown_gas(name: &str) -> Refusal {
    let like = gas::like(name);
    let hint = if like.is_empty() { String::new() } else { format!(" Like it are: {}.", like.join(", ")) };
    Refusal::firm(Kind::UnknownGas, format!("\u{201c}{name}\u{201d} is not in the gas catalogue.{hint}"), "")
}

/// Names of the catalogue are compared there, others as written.
fn same_gas(a: &str, b: &str) -> bool {
    match (gas::find(a), gas::find(b)) {
        (Some(a), Some(b)) => a.designation() == b.designation(),
        _ => a == b,
    }
}

#[cfg(test)]
pub(super) mod tests {
    use super::*;
    use crate::ledger::{
        Appliance, ApplianceFacts, ApplianceId, Category, Content, Cylinder, CylinderBalance, CylinderFacts, CylinderId, Site, SiteFacts,
        SiteId, Versions,
    };
    use crate::quantity::{MassUnit, Weighing};
    use uuid::Uuid;

    pub fn appliance_facts(refrigerant: &str) -> ApplianceFacts {
        ApplianceFacts {
            full_charge: Some(kg("45")),
            installed_on: Some(day("2020-05-01")),
            ..ApplianceFacts::new(Category::CommercialRefrigeration, refrigerant)
        }
    }

    fn kg(text: &str) -> Mass {
        Mass::parse(text, MassUnit::Kilogram).unwrap()
    }

    fn day(text: &str) -> NaiveDate {
        text.parse().unwrap()
    }

    fn standing(rulebook: &str, gas: &str) -> ApplianceStanding {
        let site_facts = SiteFacts { owner: "Harbour Fish Ltd".to_owned(), ..SiteFacts::under(vec![rulebook.to_owned()]) };
        let site = Site { id: SiteId(Uuid::nil()), name: "Quay".to_owned(), versions: Versions::always(site_facts.clone()) };
        let facts = appliance_facts(gas);
        let appliance =
            Appliance { id: ApplianceId(Uuid::nil()), site: site.id, name: "R-1".to_owned(), versions: Versions::always(facts.clone()) };
        ApplianceStanding {
            site,
            site_facts,
            appliance,
            facts,
            lines: Vec::new(),
            installed_on: Some(day("2020-05-01")),
            retired_on: None,
            mothballed_on: None,
        }
    }

    fn cylinder(gas: Option<&str>, status: Option<GasStatus>, content: &str) -> CylinderStanding {
        let facts = CylinderFacts {
            refrigerant: gas.map(str::to_owned),
            gas_status: status,
            water_capacity_l: Some("26.2".to_owned()),
            service_pressure_psig: Some("400".to_owned()),
            ..CylinderFacts::new(CylinderKind::Recovery, kg("10"), Weighing::new("10", MassUnit::Kilogram))
        };
        let cylinder = Cylinder { id: CylinderId(Uuid::nil()), name: "S-204".to_owned(), versions: Versions::always(facts.clone()) };
        let balance =
            CylinderBalance { content: Content::Known(kg(content)), gas: gas.map(str::to_owned), status, ..CylinderBalance::UNKNOWN };
        CylinderStanding { cylinder, facts, balance, recovered_from: None, owners: std::collections::BTreeSet::new() }
    }

    impl CylinderStanding {
        fn gas_is(mut self, gas: &str) -> Self {
            self.balance.gas = Some(gas.to_owned());
            self
        }
    }

    fn kinds(refusals: Vec<Refusal>) -> Vec<(Kind, bool)> {
        refusals.into_iter().map(|refusal| (refusal.kind, refusal.judgement)).collect()
    }

    fn charge(standing: &ApplianceStanding, cylinder: &CylinderStanding, net: &str) -> Vec<(Kind, bool)> {
        kinds(of_charge(standing, Some(cylinder), ChargePurpose::Leak, kg(net), None, day("2026-06-01")))
    }

    fn recover(standing: &ApplianceStanding, cylinder: &CylinderStanding, net: &str) -> Vec<(Kind, bool)> {
        kinds(of_recovery(standing, cylinder, kg(net), None, crate::measure::default_oil_factor(), day("2026-06-01")))
    }

    #[test]
    fn days_that_cannot_be_are_refused() {
        let standing = ApplianceStanding { retired_on: Some(day("2026-04-01")), ..standing("us-82f", "R-22") };
        let on = |act: &Act, text| {
            kinds(of_entry(&standing, act, Moment { date: day(text), minute: None }, Moment { date: day("2026-06-01"), minute: Some(600) }))
        };
        let repair = Act::Repair { temporary: false };
        assert_eq!(on(&repair, "2026-06-02"), [(Kind::InTheFuture, false), (Kind::Retired, false)]);
        assert_eq!(on(&repair, "2020-04-30"), [(Kind::BeforeInstallation, false)]);
        assert_eq!(on(&repair, "2026-04-01"), [(Kind::Retired, false)]);
        assert_eq!(on(&repair, "2026-03-31"), []);
        assert_eq!(on(&Act::ReportSent, "2026-05-01"), []);
    }

    #[test]
    fn an_earlier_day_goes_together_with_the_later_ones() {
        let line = |text: &str, act: Act| Line {
            entry: crate::ledger::EntryId(Uuid::nil()),
            appliance: ApplianceId(Uuid::nil()),
            at: Moment { date: day(text), minute: None },
            position: 1,
            job: None,
            act,
        };
        let on = |lines: Vec<Line>, act: Act| {
            let standing = ApplianceStanding { lines, ..standing("us-82f", "R-22") };
            kinds(of_entry(
                &standing,
                &act,
                Moment { date: day("2026-04-01"), minute: None },
                Moment { date: day("2026-06-01"), minute: None },
            ))
        };
        assert_eq!(on(vec![line("2026-05-01", Act::NormalOperation)], Act::Retire), [(Kind::Retired, false)]);
        assert_eq!(on(vec![line("2026-05-01", Act::ReportSent), line("2026-03-01", Act::NormalOperation)], Act::Retire), []);
        assert_eq!(on(vec![line("2026-05-01", Act::Mothball)], Act::Mothball), [(Kind::AlreadyMothballed, false)]);
        let transfer = crate::ledger::Transfer { mass: kg("1"), cylinder: None, division: None, hoses: Mass::ZERO };
        let charged = line("2026-04-20", Act::Charge { purpose: ChargePurpose::Mothball, transfer });
        assert_eq!(on(vec![line("2026-05-01", Act::Mothball), charged], Act::Mothball), []);
    }

    #[test]
    fn gas_that_does_not_belong_is_not_charged() {
        let plant = standing("us-82f", "R-22");
        assert_eq!(charge(&plant, &cylinder(Some("R-22"), Some(GasStatus::Virgin), "5"), "4"), []);
        assert_eq!(charge(&plant, &cylinder(Some("r22"), Some(GasStatus::Virgin), "5"), "4"), []);
        assert_eq!(charge(&plant, &cylinder(Some("R-410A"), Some(GasStatus::Virgin), "5"), "4"), [(Kind::OtherGas, false)]);
        assert_eq!(charge(&plant, &cylinder(Some("R-22"), Some(GasStatus::Mixed), "5"), "4"), [(Kind::MixedGas, false)]);
        assert_eq!(charge(&plant, &cylinder(None, None, "0"), "4"), [(Kind::OtherGas, false), (Kind::MoreThanHeld, true)]);
    }

    #[test]
    fn recovered_gas_goes_back_to_its_owner_in_the_united_states() {
        let plant = standing("us-82f", "R-22");
        let mut recovered = cylinder(Some("R-22"), Some(GasStatus::Recovered), "5");
        assert_eq!(charge(&plant, &recovered, "4"), [(Kind::RecoveredGas, true)]);
        recovered.recovered_from = Some("harbour fish ltd".to_owned());
        assert_eq!(charge(&plant, &recovered, "4"), []);
        recovered.facts.gas_owner = "Ice Rink Trust".to_owned();
        assert_eq!(charge(&plant, &recovered, "4"), [(Kind::RecoveredGas, false)]);
        let back = |cylinder: &CylinderStanding| {
            kinds(of_charge(&plant, Some(cylinder), ChargePurpose::Returned, kg("4"), None, day("2026-06-01")))
        };
        assert_eq!(back(&recovered), []);
        // Gas that is known to be another's is not given back to this one.
        recovered.owners = ["Ice Rink Trust".to_owned()].into();
        assert_eq!(back(&recovered), [(Kind::RecoveredGas, false)]);
        recovered.owners = ["Harbour Fish Ltd".to_owned()].into();
        assert_eq!(back(&recovered), []);
        // 40 CFR 82.154(d): gas of two owners goes to a reclaimer alone.
        recovered.owners = ["Harbour Fish Ltd".to_owned(), "Ice Rink Trust".to_owned()].into();
        recovered.facts.gas_owner.clear();
        assert_eq!(
            (back(&recovered), charge(&plant, &recovered, "4")),
            (vec![(Kind::RecoveredGas, false)], vec![(Kind::RecoveredGas, false)])
        );
    }

    #[test]
    fn recovered_gas_is_recycled_first_in_the_union() {
        let plant = standing("eu-573", "R-410A");
        assert_eq!(charge(&plant, &cylinder(Some("R-410A"), Some(GasStatus::Recovered), "5"), "4"), [(Kind::RecoveredGas, false)]);
        assert_eq!(charge(&plant, &cylinder(Some("R-410A"), Some(GasStatus::Recycled), "5"), "4"), []);
    }

    #[test]
    fn service_bans_reach_the_charge() {
        assert_eq!(
            charge(&standing("eu-590", "R-22"), &cylinder(Some("R-22"), Some(GasStatus::Reclaimed), "5"), "4"),
            [(Kind::ServiceBan, false)]
        );
        assert_eq!(charge(&standing("eu-573", "R-404A"), &cylinder(Some("R-404A"), None, "5"), "4"), [(Kind::ServiceBan, false)]);
    }

    #[test]
    fn masses_that_cannot_be_are_refused() {
        let plant = standing("us-82f", "R-22");
        let bottle = cylinder(Some("R-22"), Some(GasStatus::Virgin), "60");
        assert_eq!(charge(&plant, &bottle, "45.001"), [(Kind::MoreThanFull, true)]);
        assert_eq!(charge(&plant, &cylinder(Some("R-22"), Some(GasStatus::Virgin), "3"), "4"), [(Kind::MoreThanHeld, true)]);
        let below = of_charge(&plant, Some(&bottle), ChargePurpose::Leak, kg("4"), Some(kg("9.99")), day("2026-06-01"));
        assert_eq!(kinds(below), [(Kind::BelowTare, false)]);
    }

    #[test]
    fn a_cylinder_that_is_not_to_be_filled_is_not() {
        let plant = standing("us-82f", "R-410A");
        let good = cylinder(Some("R-410A"), Some(GasStatus::Recovered), "2");
        assert_eq!(recover(&plant, &good, "4"), []);
        let with = |change: &dyn Fn(&mut CylinderStanding)| {
            let mut changed = good.clone();
            change(&mut changed);
            recover(&plant, &changed, "4")
        };
        assert_eq!(with(&|c| c.facts.requalify_by = Some(day("2026-05-31"))), [(Kind::Overdue, false)]);
        assert_eq!(with(&|c| c.facts.requalify_by = Some(day("2026-06-01"))), []);
        assert_eq!(with(&|c| c.facts.kind = CylinderKind::NonRefillable), [(Kind::NotRefillable, false)]);
        assert_eq!(with(&|c| c.facts.scrapped = Some("valve bent".to_owned())), [(Kind::OutOfUse, false)]);
        assert_eq!(with(&|c| c.facts.damage = "dent at the foot".to_owned()), [(Kind::Damaged, false)]);
        // 5 % of a tare of 10 kg.
        let found = |kilograms: &str| Some(Weighing::new(kilograms, MassUnit::Kilogram));
        assert_eq!(with(&|c| c.facts.tare_found = found("9.5")), [(Kind::TareLost, false)]);
        assert_eq!(with(&|c| c.facts.tare_found = found("9.51")), []);
        assert_eq!(with(&|c| c.owners = ["Ice Rink Trust".to_owned()].into()), [(Kind::OtherOwner, true)]);
        assert_eq!(with(&|c| c.owners = ["harbour fish ltd".to_owned()].into()), []);
        assert_eq!(with(&|c| c.balance.gas = Some("R-22".to_owned())), [(Kind::OtherGas, false)]);
        assert_eq!(with(&|c| c.balance.status = Some(GasStatus::Mixed)), [(Kind::MixedGas, true)]);
        // 49 CFR 173.301(a)(8): R-410A reaches 484 psig at 55 °C; 350 psig allow 437.5.
        assert_eq!(with(&|c| c.facts.service_pressure_psig = Some("350".to_owned())), [(Kind::NotRated, false)]);
        // 0.8 × 1.0589 kg/l × 26.2 l × 0.9 = 19.97 kg.
        assert_eq!(recover(&plant, &good, "17.9"), []);
        assert_eq!(recover(&plant, &good, "18.1"), [(Kind::OverLimit, true)]);
    }

    #[test]
    fn gas_near_its_critical_point_goes_into_no_ordinary_cylinder() {
        let ordinary = |gas| cylinder(None, None, "0").gas_is(gas);
        for gas in ["R-744", "R-13", "R-23", "R-116", "R-503", "R-508B"] {
            for rulebook in ["us-82f", "eu-573"] {
                let plant = standing(rulebook, gas);
                let firm = |change: &dyn Fn(&mut CylinderStanding)| {
                    let mut changed = ordinary(gas);
                    change(&mut changed);
                    let refused = recover(&plant, &changed, "0.1");
                    assert!(refused.iter().any(|(kind, judgement)| *kind == Kind::NotRated && !judgement), "{gas} {rulebook} {refused:?}");
                };
                firm(&|_| {});
                firm(&|c| c.facts.service_pressure_psig = None);
                firm(&|c| (c.facts.service_pressure_psig, c.facts.test_pressure_bar) = (None, Some("48".to_owned())));
                firm(&|c| c.facts.stamped_maximum = Some(kg("5")));
            }
        }
        // What a table names is the way in.
        let mut made_for_it = ordinary("R-744");
        made_for_it.facts.test_pressure_bar = Some("250".to_owned());
        assert_eq!(recover(&standing("eu-573", "R-744"), &made_for_it, "15.5"), []);
        assert_eq!(recover(&standing("eu-573", "R-744"), &made_for_it, "15.6"), [(Kind::OverLimit, true)]);
        made_for_it.facts.service_pressure_psig = Some("1800".to_owned());
        assert_eq!(recover(&standing("us-84c", "R-744"), &made_for_it, "10"), []);
        // 40 CFR names no filling density for it, so nothing says how much is too much.
        made_for_it.balance.gas = Some("R-23".to_owned());
        assert!(recover(&standing("us-84c", "R-23"), &made_for_it, "1").contains(&(Kind::NoLimit, false)));
    }

    #[test]
    fn what_was_not_written_down_asks_for_a_reason() {
        let plant = standing("us-82f", "R-410A");
        let with = |change: &dyn Fn(&mut CylinderStanding)| {
            let mut changed = cylinder(Some("R-410A"), Some(GasStatus::Recovered), "2");
            change(&mut changed);
            recover(&plant, &changed, "4")
        };
        assert_eq!(with(&|c| c.facts.service_pressure_psig = None), [(Kind::RatingUnknown, true)]);
        assert_eq!(with(&|c| c.facts.water_capacity_l = None), [(Kind::NoLimit, true)]);
        assert_eq!(with(&|c| c.balance.content = Content::NotWeighed), [(Kind::ContentUnknown, true)]);
        // Weighed with its tare when it was over, it is known.
        let mut unknown = cylinder(Some("R-410A"), Some(GasStatus::Recovered), "2");
        unknown.balance.content = Content::NotWeighed;
        let factor = crate::measure::default_oil_factor();
        assert_eq!(kinds(of_recovery(&plant, &unknown, kg("4"), Some(kg("20")), factor, day("2026-06-01"))), []);
    }

    #[test]
    fn only_recovered_gas_is_recycled() {
        assert_eq!(kinds(of_recycling(&cylinder(Some("R-22"), Some(GasStatus::Recovered), "5"))), []);
        assert_eq!(kinds(of_recycling(&cylinder(Some("R-22"), Some(GasStatus::Virgin), "5"))), [(Kind::NothingToRecycle, false)]);
    }

    #[test]
    fn a_weighing_gap_asks_why() {
        use crate::ledger::KnownGross;
        let mut bottle = cylinder(Some("R-22"), Some(GasStatus::Virgin), "5");
        bottle.balance.last_gross = Some(KnownGross { gross: kg("15"), at: None, read: true, division: Some(kg("0.01")) });
        // Error of two readings of 0.01 kg: 2 √2 × 0.01/√12 = 0.0082 kg.
        assert!(of_gap(&bottle, kg("14.992"), kg("0.01"), false).is_none());
        assert!(of_gap(&bottle, kg("14.99"), kg("0.01"), false).is_some());
        assert!(of_gap(&bottle, kg("14.99"), kg("0.01"), true).is_none());
    }
}
