//! The whole judgement of one appliance as of a day.

use super::book::Rulebook;
use super::duty::{Duty, DutySource, duties};
use super::history::History;
use super::loss::{Loss, loss_between};
use super::own::rulebook;
use super::rate::{LeakRate, Verdict, leak_rates};
use super::scope::applicability;
use crate::gas::Weighting;
use crate::ledger::{Appliance, ApplianceFacts, Line, RateMethod, Site, SiteFacts};
use chrono::{Datelike, NaiveDate};

/// What the rules say of an appliance as of a day.
#[derive(Debug)]
pub struct Assessment<'a> {
    pub on: NaiveDate,
    pub site: &'a Site,
    pub history: History<'a>,
    /// Facts in force on the day.
    pub facts: ApplianceFacts,
    /// The site's rulebooks on the day, in the register's order.
    pub rulebooks: Vec<Judgement>,
    /// Sorted by due day (null last), name, first day, rulebook.
    pub duties: Vec<Duty>,
    /// From 1 January to the day.
    pub this_year: Loss,
    pub weights: Weighting,
}

/// What one rulebook says.
#[derive(Debug)]
pub struct Judgement {
    pub id: String,
    pub applies: bool,
    pub why: String,
    /// The site's method, where the rulebook has a leak rate.
    pub method: Option<RateMethod>,
    /// Every rate on or before the day, oldest first.
    pub rates: Vec<LeakRate>,
}

impl Judgement {
    /// The latest rate, where the rulebook applies on the day asked about.
    pub fn rate(&self) -> Option<&LeakRate> {
        self.rates.last().filter(|_| self.applies)
    }
}

/// Judges one appliance; `None` where no version of it or its site holds on
/// the day. `lines` are the appliance's own, struck ones left out.
pub fn assess<'a>(site: &'a Site, appliance: &'a Appliance, lines: &'a [Line], on: NaiveDate) -> Option<Assessment<'a>> {
    let site_now = site.versions.on(on)?;
    let history = History::new(appliance, lines, on);
    let facts = history.facts_on(on)?.clone();
    let mut all_duties = Vec::new();
    let mut rulebooks = Vec::new();
    for book in books_of(site, on) {
        let at_site = |day: NaiveDate| site.versions.on(day).is_some_and(|facts| names(facts, &book.id));
        let method = |day: NaiveDate| site.versions.on(day).map(|facts| (names(facts, &book.id), facts.rate_method));
        let rates = leak_rates(book, &history, &method);
        let over: Vec<NaiveDate> = rates.iter().filter(|rate| rate.verdict == Verdict::Over).map(|rate| rate.on).collect();
        all_duties.extend(duties(&DutySource { book, history: &history, rates: &rates, over: &over, on, at_site: &at_site }));
        if names(site_now, &book.id) {
            let answer = applicability(book, &facts, on);
            rulebooks.push(Judgement {
                id: book.id.clone(),
                applies: answer.applies,
                why: answer.why,
                method: (!book.rates.is_empty()).then_some(site_now.rate_method),
                rates,
            });
        }
    }
    rulebooks.sort_by_key(|judgement| site_now.rulebooks.iter().position(|id| *id == judgement.id));
    all_duties.sort_by(|a, b| {
        let key = |duty: &Duty| (duty.due.is_none(), duty.due, duty.kind.name(), duty.from);
        key(a).cmp(&key(b)).then_with(|| a.rulebook.cmp(&b.rulebook))
    });
    let weights = weights(site_now);
    let new_year = NaiveDate::from_ymd_opt(on.year(), 1, 1).unwrap_or(on);
    let this_year = loss_between(&history, weights, new_year, on);
    Some(Assessment { on, site, facts, rulebooks, duties: all_duties, this_year, weights, history })
}

/// The tables that weight losses at a site: those of its first rulebook.
pub fn weights(site: &SiteFacts) -> Weighting {
    site.rulebooks.iter().find_map(|id| rulebook(id)).map_or(Weighting::UnitedStates, |book| book.weights)
}

fn names(site: &SiteFacts, id: &str) -> bool {
    site.rulebooks.iter().any(|named| named == id)
}

/// Every rulebook that the site has been under up to the day.
fn books_of(site: &Site, on: NaiveDate) -> Vec<&'static Rulebook> {
    let mut books: Vec<&'static Rulebook> = Vec::new();
    for version in site.versions.all().iter().filter(|version| version.from.is_none_or(|from| from <= on)) {
        for book in version.facts.rulebooks.iter().filter_map(|id| rulebook(id)) {
            if !books.iter().any(|known| known.id == book.id) {
                books.push(book);
            }
        }
    }
    books
}
