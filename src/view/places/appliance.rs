//! The page of one appliance: its leak rate now and at each addition, its
//! duties, open leaks and records, its facts with their history.

use super::overview::{Judged, LifeState};
use super::{Office, RateHistory, due, rates};
use crate::app::{App, AppError};
use crate::gas;
use crate::ledger::{Act, ApplianceFacts, ApplianceId, Entry, VisitState};
use crate::quantity::{MassUnit, Ratio};
use crate::rules::{self, DutyState};
use crate::store::VisitFilter;
use crate::view::shown::{Fact, Line, Rate, Reason};
use crate::view::{format, why, words};
use words::office as say;

#[derive(Debug, Clone, Default, PartialEq)]
pub struct AppliancePage {
    pub title: String,
    pub site: String,
    pub name: String,
    pub state: String,
    pub rates: Vec<Rate>,
    pub reasons: Vec<Reason>,
    pub history: Option<RateHistory>,
    pub duties: Vec<Line>,
    pub leaks: Vec<Line>,
    pub records: Vec<Line>,
    /// An empty value is to complete.
    pub facts: Vec<Fact>,
    pub changes: Vec<Line>,
}

/// One entry in a few words: `charge 2.1 kg`.
pub fn told(entry: &Entry, unit: MassUnit) -> String {
    match &entry.line.act {
        Act::Charge { transfer, .. } | Act::Recover { transfer, .. } => {
            format!("{} {}", entry.line.act.name(), format::mass(transfer.mass, unit))
        }
        act => act.name().to_owned(),
    }
}

/// The first eight digits of a fingerprint, in two groups.
pub fn short_print(full: &str) -> String {
    let digits: Vec<char> = full.chars().take(8).collect();
    digits.chunks(4).map(|group| group.iter().collect::<String>()).collect::<Vec<_>>().join(" ")
}

/// What differs between two versions: fact, new value, old value.
fn differences(before: &ApplianceFacts, after: &ApplianceFacts) -> Vec<(&'static str, String, String)> {
    let listed = |facts: &ApplianceFacts| {
        let yes = |fact: bool| if fact { "yes" } else { "no" }.to_owned();
        vec![
            ("Gas", facts.refrigerant.clone()),
            ("Full charge", if facts.full_charge.is_some() { format::full_charge(facts) } else { String::new() }),
            ("Determined by", facts.charge_method.map(|method| method.name().to_owned()).unwrap_or_default()),
            ("Category", facts.category.name().to_owned()),
            ("Equipment", facts.equipment.map(|equipment| equipment.name().to_owned()).unwrap_or_default()),
            ("Installed", facts.installed_on.map(format::full_day).unwrap_or_default()),
            ("Place", facts.place.clone()),
            ("Serial", facts.serial.clone()),
            ("Description", facts.description.clone()),
            ("Assembly", facts.assembly.clone()),
            ("Room volume", facts.room_volume_m3.clone().map(|volume| volume + " m³").unwrap_or_default()),
            ("Hermetically sealed", yes(facts.labelled_hermetically_sealed)),
            ("Residential", yes(facts.residential)),
            ("Leakage detection system", yes(facts.leakage_detection_system)),
            ("Residential or light commercial air conditioning", yes(facts.residential_or_light_commercial_ac)),
            ("Product below \u{2212}50 °C", yes(facts.product_below_minus_50c)),
            ("Military", yes(facts.military)),
        ]
    };
    let (before, after) = (listed(before), listed(after));
    before.into_iter().zip(after).filter(|((_, was), (_, is))| was != is).map(|((name, was), (_, is))| (name, is, was)).collect()
}

impl Office {
    pub(super) fn read_appliance(&self, app: &App, appliance: ApplianceId) -> Result<Option<AppliancePage>, AppError> {
        let Some(judged) = self.overview.as_ref().and_then(|overview| overview.judged(appliance)) else { return Ok(None) };
        let facts = &judged.facts;
        let soon = self.soon();
        let is_listed = |state: DutyState| matches!(state, DutyState::Late | DutyState::Open | DutyState::Suspended);
        let duties = judged.duties.iter().filter(|duty| is_listed(duty.state(judged.on)));
        Ok(Some(AppliancePage {
            title: judged.appliance.name.clone(),
            site: format::commas([judged.site.name.as_str(), &facts.place]),
            name: format!("{}   {}   {}", judged.appliance.name, facts.refrigerant, format::full_charge(facts)),
            state: match judged.state {
                LifeState::InUse => say::in_use(),
                LifeState::Mothballed => say::mothballed(),
                LifeState::Retired => say::retired(),
            },
            rates: self.rates(judged),
            reasons: {
                let rates = judged
                    .books
                    .iter()
                    .flat_map(|book| why::of_rate(book, book.rate(), judged.readings_for(&book.id, book.rate()), self.units.mass));
                rates.chain(why::of_points(&judged.points)).collect()
            },
            history: rates::history(judged),
            duties: duties.map(|duty| Line { facts: duty.source.clone(), ..due::duty_row(judged, duty, self.today, soon) }).collect(),
            leaks: judged.leaks.iter().map(|leak| due::leak_row(judged, leak, self.today)).collect(),
            records: self.records_of(app, judged)?,
            facts: self.facts_of(judged),
            changes: changes(judged),
        }))
    }

    /// Rulebooks that apply and have a rate; where none applies, why the first does not.
    fn rates(&self, judged: &Judged) -> Vec<Rate> {
        let bars = |applies: bool| {
            let fitting = judged.books.iter().enumerate().filter(move |(_, book)| book.applies == applies);
            fitting.filter_map(|(index, _)| rates::bar(judged, index, self.today)).collect::<Vec<_>>()
        };
        let applying = bars(true);
        if applying.is_empty() { bars(false).into_iter().take(1).collect() } else { applying }
    }

    fn records_of(&self, app: &App, judged: &Judged) -> Result<Vec<Line>, AppError> {
        let entries = app.store().entries_of_appliance(judged.appliance.id)?;
        let visits = app.store().visits(&VisitFilter { appliance: Some(judged.appliance.id), ..VisitFilter::default() })?;
        let row = |visit: &crate::ledger::Visit| {
            let own = entries.iter().filter(|entry| entry.visit == visit.id);
            let corrected = own.clone().any(|entry| entry.struck_by.is_some()) && visit.state != VisitState::Open;
            let facts: Vec<String> = own.filter(|entry| entry.strikes.is_none()).map(|entry| told(entry, self.units.mass)).collect();
            let state = match (&visit.fingerprint, visit.state) {
                (Some(fingerprint), _) => short_print(fingerprint),
                (None, VisitState::Imported) => say::from_a_file(),
                (None, state) => state.name().to_owned(),
            };
            let aside = if corrected { say::corrected_later() } else { String::new() };
            Line::new(visit.id.to_string(), format::full_day(visit.date), facts.join(", ")).state(state, aside)
        };
        Ok(visits.iter().rev().map(row).collect())
    }

    fn facts_of(&self, judged: &Judged) -> Vec<Fact> {
        let facts = &judged.facts;
        let words = |word: Option<&str>| word.unwrap_or_default().to_owned();
        let mut list = vec![
            Fact::new("category", facts.category.name()),
            Fact::new("equipment", words(facts.equipment.map(|equipment| equipment.name()))),
            Fact::new("full charge", if facts.full_charge.is_some() { format::full_charge(facts) } else { String::new() }),
            Fact::new("determined by", words(facts.charge_method.map(|method| method.name()))),
            Fact::new("installed", facts.installed_on.map(format::full_day).unwrap_or_default()),
            Fact::new("serial", &facts.serial),
        ];
        if let (Some(charge), Some(gas)) = (facts.full_charge, gas::find(&facts.refrigerant)) {
            let site = judged.site.versions.on(judged.on).unwrap_or_else(|| judged.site.versions.latest());
            let weights = rules::weights(site);
            if let Some(weight) = gas.weight(weights) {
                let tonnes = charge.kg() * weight / Ratio::from_integer(1000);
                list.push(Fact::new("CO₂ equivalent", format!("{} t ({})", format::figure(tonnes, 1), weights.name())));
            }
            if gas.has_ods() {
                list.push(Fact::new("ODP-weighted", format!("{} kg", format::figure(charge.kg() * gas.odp(), 3))));
            }
        }
        list.push(Fact::new("room volume", facts.room_volume_m3.clone().map(|volume| volume + " m³").unwrap_or_default()));
        let optional = [("description", &facts.description), ("assembly", &facts.assembly)];
        list.extend(optional.into_iter().filter(|(_, text)| !text.is_empty()).map(|(caption, text)| Fact::new(caption, text)));
        let declared = [
            ("labelled hermetically sealed", facts.labelled_hermetically_sealed),
            ("residential", facts.residential),
            ("leakage detection system", facts.leakage_detection_system),
            ("residential or light commercial air conditioning", facts.residential_or_light_commercial_ac),
            ("product below \u{2212}50 °C", facts.product_below_minus_50c),
            ("military", facts.military),
        ];
        let declared: Vec<&str> = declared.into_iter().filter(|(_, on)| *on).map(|(name, _)| name).collect();
        if !declared.is_empty() {
            list.push(Fact::new("declared", declared.join(", ")));
        }
        list
    }
}

/// Dated changes of a fact, the latest first.
fn changes(judged: &Judged) -> Vec<Line> {
    let versions = judged.appliance.versions.all();
    let mut rows = Vec::new();
    for pair in versions.windows(2) {
        let day = pair[1].from.map(format::full_day).unwrap_or_default();
        for (name, is, was) in differences(&pair[0].facts, &pair[1].facts) {
            let value = if is.is_empty() { words::to_complete() } else { is };
            let facts = [Some(say::was(&was)), pair[1].reason.clone()].into_iter().flatten().collect::<Vec<_>>().join("; ");
            rows.push(Line::new("", format!("{name} {value}"), facts).state(day.clone(), ""));
        }
    }
    rows.reverse();
    rows
}
