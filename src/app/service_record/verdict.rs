//! What the rules make of an appliance, as a record says it.

use super::wording;
use crate::gas::{self, Weighting};
use crate::ledger::{Act, Appliance, ApplianceFacts, ChargePurpose, Entry, EntryId, Line, RecoveryPurpose, Site, TestKind};
use crate::quantity::{Mass, MassUnit, Ratio, decimal_text, parse_decimal, rounded_text};
use crate::record::{DutyFacts, DutyStep, LeakRate, NoRate, Notice, RateInput, Verdict, WeightedAmount};
use crate::rules::{self, Assessment, Duty, DutyState, Judgement, assess, loss_entries};
use chrono::{Days, Months, NaiveDate};
use std::collections::{HashMap, HashSet};

/// What [`judge`] finds.
#[derive(Default)]
pub struct Judged {
    /// In force on the last day; `None` where nothing holds then.
    pub facts: Option<ApplianceFacts>,
    pub leak_rates: Vec<LeakRate>,
    pub no_rates: Vec<NoRate>,
    pub duties: Vec<DutyFacts>,
    pub amounts: Vec<WeightedAmount>,
    pub readings: Vec<Notice>,
    pub does_not_count: HashMap<EntryId, String>,
}

/// Where ODP comes from, as papers name it.
pub(in crate::app) const ODP_TABLE: &str = "Montreal Protocol, annexes A to E, by composition";

/// Judges an appliance as of the visit's last day. `own` are the visit's entries on it.
pub fn judge(site: &Site, appliance: &Appliance, lines: &[Line], own: &[&Entry], last_day: NaiveDate) -> Judged {
    let Some(assessment) = assess(site, appliance, lines, last_day) else { return Judged::default() };
    let here: HashSet<EntryId> = own.iter().filter(|entry| entry.struck_by.is_none()).map(|entry| entry.line.entry).collect();
    let sight = Sight { unit: unit(own, &assessment.facts), assessment: &assessment, here };
    Judged {
        leak_rates: sight.leak_rates(),
        no_rates: sight.no_rates(),
        duties: sight.duties(),
        amounts: sight.amounts(),
        readings: sight.readings(),
        does_not_count: sight.tests_that_do_not_count(),
        facts: Some(assessment.facts.clone()),
    }
}

/// The record speaks in the unit of its first weighing, else of the full charge.
fn unit(own: &[&Entry], facts: &ApplianceFacts) -> MassUnit {
    let weighed = own.iter().find(|entry| entry.line.act.transfer().is_some()).map(|entry| wording::unit_of(entry));
    weighed.or_else(|| facts.full_charge_written.as_ref().map(|written| written.unit)).unwrap_or(MassUnit::Kilogram)
}

struct Sight<'a> {
    assessment: &'a Assessment<'a>,
    here: HashSet<EntryId>,
    unit: MassUnit,
}

impl Sight<'_> {
    fn is_here(&self, line: usize) -> bool {
        self.assessment.history.lines.get(line).is_some_and(|line| self.here.contains(&line.entry))
    }

    fn mass(&self, mass: Mass) -> String {
        wording::mass(mass, self.unit)
    }

    /// The rates that this visit's additions asked for; where there was none, the latest.
    fn leak_rates(&self) -> Vec<LeakRate> {
        let mut found = Vec::new();
        for judgement in &self.assessment.rulebooks {
            let own: Vec<&rules::LeakRate> = judgement.rates.iter().filter(|rate| self.is_here(rate.charge)).collect();
            let chosen = if own.is_empty() { judgement.rate().into_iter().collect() } else { own };
            found.extend(chosen.into_iter().map(|rate| self.leak_rate(judgement, rate)));
        }
        found
    }

    fn leak_rate(&self, judgement: &Judgement, rate: &rules::LeakRate) -> LeakRate {
        let since = rate.window_from.map(|from| format!("from {} to {}", wording::day(from), wording::day(rate.on)));
        let mut inputs = vec![
            RateInput { caption: "added".to_owned(), value: self.mass(rate.added), from: since.unwrap_or_default() },
            RateInput { caption: "full charge".to_owned(), value: self.mass(rate.full_charge), from: String::new() },
        ];
        if let Some(days) = rate.days {
            let from = if rate.notes.is_empty() { since_day(rate.on, days, rate.longest_days) } else { rate.notes.join("; ") };
            inputs.push(RateInput { caption: "days".to_owned(), value: days.to_string(), from });
        }
        LeakRate {
            source: rate.source.clone(),
            applies_because: judgement.why.clone(),
            on: rate.on,
            method: rate.method,
            percent: rate.percent,
            trigger: rate.trigger,
            trigger_source: rate.trigger_source.clone(),
            band: rate.error.as_ref().and_then(|band| parse_decimal(&band.percent).ok()),
            verdict: match rate.verdict {
                rules::Verdict::Under => Verdict::Under,
                rules::Verdict::At => Verdict::At,
                rules::Verdict::Over => Verdict::Over,
            },
            within_weighing_error: rate.error.as_ref().is_some_and(|band| band.holds_trigger),
            working: self.working(rate),
            inputs,
        }
    }

    fn working(&self, rate: &rules::LeakRate) -> String {
        let sum = format!("{} ÷ {}", self.mass(rate.added), self.mass(rate.full_charge));
        let per_year = rate.days.map(|days| format!(" × {} ÷ {days}", rate.longest_days)).unwrap_or_default();
        let exact = decimal_text(rate.percent).map_or_else(
            || format!("{}/{} % = {} %", rate.percent.numer(), rate.percent.denom(), rounded_text(rate.percent, 2)),
            |decimal| format!("{decimal} %"),
        );
        format!("{sum}{per_year} × 100 % = {exact}")
    }

    /// Additions of this visit that asked for no rate, and why.
    fn no_rates(&self) -> Vec<NoRate> {
        let history = &self.assessment.history;
        let has_rates = self.assessment.rulebooks.iter().any(|judgement| judgement.method.is_some());
        let charges = history.lines.iter().enumerate().filter(|(index, _)| has_rates && self.is_here(*index) && !history.counted[*index]);
        let no_rate = |(index, line): (usize, &&Line)| {
            let Act::Charge { purpose, transfer } = &line.act else { return None };
            let (because, source) = rules::why_no_rate(*purpose);
            let removed = self.removed_for(*purpose, index);
            let because = if removed.is_empty() { because.to_owned() } else { format!("{because}: {}", removed.join(", ")) };
            Some(NoRate { on: line.at.date, amount: self.mass(transfer.mass), because, source: source.to_owned() })
        };
        charges.filter_map(no_rate).collect()
    }

    /// What was recovered before a return for the season or after mothballing,
    /// as `60 lb on 7 May 2026`: 82.157(l)(8), (10) and 84.106(l)(10), (12) ask for both amounts.
    fn removed_for(&self, purpose: ChargePurpose, charge: usize) -> Vec<String> {
        let history = &self.assessment.history;
        let on = history.date(charge);
        let (wanted, from) = match purpose {
            // Removal and return lie within one 12-month period.
            ChargePurpose::Seasonal => (RecoveryPurpose::Seasonal, on.checked_sub_months(Months::new(12))),
            ChargePurpose::Mothball => (RecoveryPurpose::Mothball, None),
            _ => return Vec::new(),
        };
        let before = history.lines.iter().take(charge).filter(|line| from.is_none_or(|from| line.at.date >= from));
        let removed = before.filter_map(|line| match &line.act {
            Act::Recover { purpose, transfer } if *purpose == wanted => Some((line.at.date, transfer.mass)),
            _ => None,
        });
        removed.map(|(day, mass)| format!("{} on {}", self.mass(mass), wording::day(day))).collect()
    }

    fn duties(&self) -> Vec<DutyFacts> {
        self.assessment.duties.iter().filter_map(|duty| self.duty(duty)).collect()
    }

    fn duty(&self, duty: &Duty) -> Option<DutyFacts> {
        let on = self.assessment.on;
        let state = duty.state(on);
        let here = |line: Option<usize>| line.is_some_and(|line| self.is_here(line));
        let own_days: HashSet<NaiveDate> =
            self.assessment.history.lines.iter().filter(|line| self.here.contains(&line.entry)).map(|line| line.at.date).collect();
        let step = if here(duty.met_by) {
            DutyStep::Met
        } else if duty.ended_on.is_some_and(|ended| own_days.contains(&ended)) && state == DutyState::Ended {
            DutyStep::Ended
        } else if matches!(state, DutyState::Open | DutyState::Late | DutyState::Suspended) {
            if here(duty.from_line) { DutyStep::Started } else { DutyStep::StillOpen }
        } else {
            return None;
        };
        let due_words = match (duty.due, state) {
            (Some(_), _) => "",
            (None, DutyState::Suspended) => "suspended",
            (None, _) if duty.rulebook.starts_with("us-") => "no day yet",
            (None, _) => "without undue delay",
        };
        Some(DutyFacts {
            duty: duty.kind.name().to_owned(),
            source: duty.source.clone(),
            step,
            from: duty.from,
            due: duty.due,
            due_words: due_words.to_owned(),
            met_on: duty.met_on,
            state: state.name().to_owned(),
        })
    }

    fn amounts(&self) -> Vec<WeightedAmount> {
        let history = &self.assessment.history;
        let mut charged = Vec::new();
        let mut recovered = Vec::new();
        for (index, line) in history.lines.iter().enumerate().filter(|(index, _)| self.is_here(*index)) {
            let gas = history.facts_at(index).map_or_else(String::new, |facts| facts.refrigerant.clone());
            match &line.act {
                Act::Charge { transfer, .. } => charged.push((gas, transfer.mass)),
                Act::Recover { transfer, .. } => recovered.push((gas, transfer.mass)),
                _ => {}
            }
        }
        let lost: Vec<(String, Mass)> =
            loss_entries(history).into_iter().filter(|loss| self.is_here(loss.line)).map(|loss| (loss.refrigerant, loss.mass)).collect();
        let mut amounts = Vec::new();
        for (what, masses) in [("charged", charged), ("recovered", recovered), ("lost, by what was added", lost)] {
            if !masses.is_empty() {
                amounts.push(self.weighted(what, &masses));
            }
        }
        let year = &self.assessment.this_year;
        let year_name = format!("lost in {}", self.assessment.on.format("%Y"));
        amounts.push(self.amount(&year_name, year.lost, year.odp_kg, year.co2e_t));
        // What the law's bands and thresholds measure (2024/573 Art. 5, 82.157(a)).
        if let Some(charge) = self.assessment.facts.full_charge {
            amounts.push(self.weighted("full charge", &[(self.assessment.facts.refrigerant.clone(), charge)]));
        }
        amounts
    }

    fn weighted(&self, what: &str, masses: &[(String, Mass)]) -> WeightedAmount {
        let sum = |weight: &dyn Fn(&gas::Gas) -> Option<Ratio>| -> Option<Ratio> {
            masses.iter().map(|(name, mass)| Some(mass.kg() * weight(gas::find(name)?)?)).sum()
        };
        let odp_kg = sum(&|gas| Some(gas.odp()));
        let co2e_t = sum(&|gas| gas.weight(self.assessment.weights)).map(|kg| kg / Ratio::from_integer(1000));
        self.amount(what, masses.iter().map(|(_, mass)| *mass).sum(), odp_kg, co2e_t)
    }

    fn amount(&self, what: &str, mass: Mass, odp_kg: Option<Ratio>, co2e_t: Option<Ratio>) -> WeightedAmount {
        WeightedAmount {
            what: what.to_owned(),
            mass,
            mass_written: self.mass(mass),
            odp_kg,
            co2e_t,
            odp_table: ODP_TABLE.to_owned(),
            gwp_table: Weighting::name(self.assessment.weights).to_owned(),
        }
    }

    /// Where the text allows more than one reading, the one that was taken.
    fn readings(&self) -> Vec<Notice> {
        let mut notices: Vec<Notice> = Vec::new();
        for rate in self.assessment.rulebooks.iter().flat_map(|judgement| &judgement.rates).filter(|rate| self.is_here(rate.charge)) {
            for reading in rules::readings(&self.assessment.history, rate) {
                let notice = Notice { text: wording::sentence(&reading.text), source: reading.source };
                if !notices.contains(&notice) {
                    notices.push(notice);
                }
            }
        }
        notices.extend(
            self.assessment.rulebooks.iter().filter(|judgement| judgement.applies).flat_map(|judgement| self.of_the_text(judgement)),
        );
        notices
    }

    /// Why the text applies, where no leak rate says so; how far it was read, and how long this record is kept.
    fn of_the_text(&self, judgement: &Judgement) -> Vec<Notice> {
        let Some(book) = rules::rulebook(&judgement.id) else { return Vec::new() };
        let applies = judgement
            .rate()
            .is_none()
            .then(|| Notice { text: format!("{} applies: {}.", book.title, judgement.why), source: String::new() });
        let unread =
            // The reason why the text applies, which is always printed, may say it already.
            (!book.confidence.is_empty() && !judgement.why.contains(&book.confidence)).then(|| Notice { text: wording::sentence(&book.confidence), source: book.title.clone() });
        let kept = book
            .retention(self.assessment.on)
            .map(|row| Notice { text: format!("Kept for {} years: {}.", row.years, row.what), source: row.source.clone() });
        applies.into_iter().chain(unread).chain(kept).collect()
    }

    fn tests_that_do_not_count(&self) -> HashMap<EntryId, String> {
        let history = &self.assessment.history;
        let follow_up = |line: &Line| matches!(line.act, Act::Test { kind: TestKind::FollowUpVerification, .. });
        let tests = history.lines.iter().enumerate().filter(|(index, line)| self.is_here(*index) && follow_up(line));
        tests
            .filter(|(index, _)| !history.is_follow_up_that_counts(*index))
            .map(|(_, line)| {
                let why = match &line.act {
                    Act::Test { partial: true, .. } => "does not count: not all identified leaks were tested",
                    Act::Test { result: Some(crate::ledger::TestResult::Pass), .. } => {
                        "does not count: no initial test that passed stands between the repair and it"
                    }
                    _ => "does not count: it was not passed",
                };
                (line.entry, why.to_owned())
            })
            .collect()
    }
}

/// `since 4 Sep 2025`: from when the days of a rate run, or that no more count.
fn since_day(on: NaiveDate, days: i64, longest: i64) -> String {
    if days >= longest {
        return "the most that count".to_owned();
    }
    let since = u64::try_from(days).ok().and_then(|days| on.checked_sub_days(Days::new(days)));
    since.map(|since| format!("since {}", wording::day(since))).unwrap_or_default()
}
