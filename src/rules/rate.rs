//! Leak rates: both methods of 40 CFR 82.152, exact.

use super::book::{InForce, RateRow, Rulebook, Trigger};
use super::history::History;
use super::scope::taking;
use crate::ledger::{Act, ApplianceFacts, RateMethod};
use crate::quantity::{Mass, Ratio, days_between, square_root_text};
use chrono::{Days, Months, NaiveDate};
use num_bigint::{BigInt, BigUint};

/// How a leak rate stands to its trigger. Nothing rounded is compared.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Verdict {
    Under,
    At,
    Over,
}

impl Verdict {
    /// How a rate in percent stands to a trigger in percent.
    pub fn of(rate: Ratio, trigger: Ratio) -> Self {
        match rate.cmp(&trigger) {
            std::cmp::Ordering::Less => Self::Under,
            std::cmp::Ordering::Equal => Self::At,
            std::cmp::Ordering::Greater => Self::Over,
        }
    }

    pub const fn name(self) -> &'static str {
        match self {
            Self::Under => "under trigger",
            Self::At => "at trigger",
            Self::Over => "over trigger",
        }
    }
}

/// The leak rate of one day under one rulebook.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct LeakRate {
    pub on: NaiveDate,
    /// The first counted charge of that day: index into the history's lines.
    pub charge: usize,
    pub method: RateMethod,
    /// Percent of full charge a year, exactly.
    pub percent: Ratio,
    pub added: Mass,
    pub full_charge: Mass,
    /// Days of the annualizing method; `None` with a rolling average.
    pub days: Option<i64>,
    /// The most days that count, which are also the year of the annualizing method.
    pub longest_days: i64,
    /// First day of a rolling average's window.
    pub window_from: Option<NaiveDate>,
    pub trigger: Ratio,
    pub trigger_source: String,
    pub source: String,
    pub verdict: Verdict,
    pub error: Option<WeighingBand>,
    /// What was taken for granted, as `history unknown`.
    pub notes: Vec<String>,
}

/// The expanded weighing error (k = 2) of a leak rate, in percent.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct WeighingBand {
    /// Two decimals, rounded half up.
    pub percent: String,
    /// The trigger lies within the band around the rate.
    pub holds_trigger: bool,
    /// The band as a share of a percent, for drawing only: the digits above.
    pub hundredths: u64,
}

/// The annualizing method: percent of full charge a year, `longest` days being
/// the year. More days count as that many; masses and days must be above zero.
pub fn annualized(added: Mass, full_charge: Mass, days: i64, longest: i64) -> Ratio {
    Ratio::new(100 * i128::from(longest) * added.units(), full_charge.units() * i128::from(days.min(longest)))
}

/// All leak rates of an appliance under a rulebook, oldest first.
pub fn leak_rates(book: &Rulebook, history: &History, sites: &dyn Fn(NaiveDate) -> Option<(bool, RateMethod)>) -> Vec<LeakRate> {
    let mut rates = Vec::new();
    if book.rates.is_empty() {
        return rates;
    }
    let mut index = 0;
    while index < history.lines.len() {
        let day = history.date(index);
        let end = (index..history.lines.len()).find(|&i| history.date(i) != day).unwrap_or(history.lines.len());
        if let Some(first) = (index..end).find(|&i| history.counted[i])
            && let Some((true, method)) = sites(day)
            // 84.106(b)(1) and (2) speak of the first use of each method.
            && let first_of_method = !rates.iter().any(|rate: &LeakRate| rate.method == method)
            && let Some(rate) = leak_rate(book, history, method, first, end, first_of_method)
        {
            rates.push(rate);
        }
        index = end;
    }
    rates
}

/// The rate of the day on which `first` is the first counted charge; `end` is
/// the line after that day's last.
fn leak_rate(book: &Rulebook, history: &History, method: RateMethod, first: usize, end: usize, first_rate: bool) -> Option<LeakRate> {
    let day = history.date(first);
    let rules = book.rate_row(day)?;
    let longest = rules.longest_days;
    let last_counted = (first..end).rev().find(|&i| history.counted[i])?;
    let facts = history.facts_at(last_counted)?;
    taking(book, facts, day)?;
    let full_charge = facts.full_charge?;
    let trigger = trigger(book, facts, day)?;
    let mut notes = Vec::new();
    let (added, days, window_from, weighed) = match method {
        RateMethod::Annualizing => {
            let lines: Vec<usize> = history.chain(first).flat_map(|work| work.lines.iter().copied()).filter(|&i| i < end).collect();
            let added = lines.iter().map(|&i| history.added[i]).sum::<Mass>();
            let days = match rules.first_days.filter(|_| first_rate) {
                Some(days) => {
                    notes.push(format!("first calculation: {days} days ({})", rules.first_days_source));
                    days
                }
                None => days_since(history, first, longest, &mut notes),
            };
            (added, Some(days), None, lines)
        }
        RateMethod::RollingAverage => {
            let (mut from, after) = window(history, first, rules);
            if let Some(earliest) = rules.first_added_from.filter(|_| first_rate).filter(|&earliest| earliest > from) {
                notes.push(format!("first calculation: what was added from {earliest} ({})", rules.first_added_from_source));
                from = earliest;
            }
            let start = after.map_or(0, |test| test + 1);
            let lines: Vec<usize> = (start..end).filter(|&i| history.date(i) >= from).collect();
            let added = lines.iter().map(|&i| history.added[i]).sum::<Mass>();
            (added, None, Some(from), lines)
        }
    };
    let percent = match days {
        Some(days) => annualized(added, full_charge, days, longest),
        None => Ratio::new(100 * added.units(), full_charge.units()),
    };
    let verdict = Verdict::of(percent, trigger.percent);
    // Percent per unit of mass, as numerator and denominator.
    let factor = match days {
        Some(days) => (100 * longest, full_charge.units() * i128::from(days)),
        None => (100, full_charge.units()),
    };
    let error = weighing_band(history, &weighed, factor, percent - trigger.percent);
    Some(LeakRate {
        on: day,
        charge: first,
        method,
        percent,
        added,
        full_charge,
        days,
        longest_days: longest,
        window_from,
        trigger: trigger.percent,
        trigger_source: trigger.source.clone(),
        source: rules.source.clone(),
        verdict,
        error,
        notes,
    })
}

/// The trigger rate for an appliance's category on a day.
pub fn trigger<'b>(book: &'b Rulebook, facts: &ApplianceFacts, day: NaiveDate) -> Option<&'b Trigger> {
    book.triggers.iter().find(|row| row.holds_on(day) && row.category.is_none_or(|category| category == facts.category))
}

/// Days from the last charge before the work or chain to the rate's day.
fn days_since(history: &History, first: usize, longest: i64, notes: &mut Vec<String>) -> i64 {
    let day = history.date(first);
    let start = history.first_charge_of_chain(first).unwrap_or(first);
    let since = history
        .last_charge_before(start)
        .map(|charge| history.date(charge))
        .or_else(|| history.facts_at(first).and_then(|facts| facts.installed_on).filter(|&installed| installed < history.date(start)));
    match since {
        Some(since) => days_between(since, day).clamp(1, longest),
        None => {
            notes.push("history unknown".to_owned());
            longest
        }
    }
}

/// First day of the rolling window, and the follow-up test it starts after.
fn window(history: &History, first: usize, rules: &RateRow) -> (NaiveDate, Option<usize>) {
    let day = history.date(first);
    let too_old = day.checked_sub_months(Months::new(rules.follow_up_months)).unwrap_or(NaiveDate::MIN);
    let test = (0..first).rev().find(|&i| history.is_follow_up_that_counts(i)).filter(|&i| history.date(i) > too_old);
    match test {
        Some(test) => (history.date(test), Some(test)),
        // The day itself is one of the longest period's days.
        None => (day.checked_sub_days(Days::new(rules.longest_days.unsigned_abs().saturating_sub(1))).unwrap_or(NaiveDate::MIN), None),
    }
}

/// The expanded error of the transfers among `lines`; `None` where any of
/// them was taken without a known scale.
///
/// Each reading has a rectangular distribution of one division (d²/12), each
/// net two of them, hoses that were not emptied one of what they hold
/// (m²/12); k = 2 (JCGM 100:2008).
fn weighing_band(history: &History, lines: &[usize], factor: (i64, i128), distance: Ratio) -> Option<WeighingBand> {
    let mut twelvefold = BigUint::default();
    let mut transfers = 0_u32;
    for &index in lines {
        let transfer = match &history.lines[index].act {
            Act::Charge { transfer, .. } if history.counted[index] || history.added[index].is_positive() => transfer,
            Act::Charge { purpose, transfer } if purpose.nets_recovered() => transfer,
            Act::Recover { purpose: crate::ledger::RecoveryPurpose::Repair, transfer } => transfer,
            _ => continue,
        };
        let division = BigUint::from(transfer.division?.units().unsigned_abs());
        let hoses = BigUint::from(transfer.hoses.units().unsigned_abs());
        twelvefold += &division * &division * 2_u32 + &hoses * &hoses;
        transfers += 1;
    }
    if transfers == 0 {
        return None;
    }
    // band² = 4 · twelvefold / 12 · (factor)² = twelvefold · n² / (3 · d²)
    let numerator = twelvefold * BigUint::from(factor.0.unsigned_abs()).pow(2);
    let denominator = BigUint::from(factor.1.unsigned_abs()).pow(2) * 3_u32;
    let percent = square_root_text(&numerator, &denominator, 2);
    let gap = BigInt::from(*distance.numer()).magnitude().pow(2) * &denominator;
    let holds_trigger = gap <= &numerator * BigUint::from(distance.denom().unsigned_abs()).pow(2);
    let hundredths = percent.replace('.', "").parse().unwrap_or(u64::MAX);
    Some(WeighingBand { percent, holds_trigger, hundredths })
}
