//! Everything in the store judged as of today: what Due, Plant and the pages
//! of appliances show. Read whole, by a worker where the store is a file, so
//! that the first frame does not wait for it.

use crate::ledger::{
    Act, Appliance, ApplianceFacts, ApplianceId, Line, OpenLeak, Registers, Site, TestResult, Visit, VisitId, by_appliance, open_leaks,
};
use crate::quantity::Ratio;
use crate::rules::{self, Duty, DutyState, Judgement, LeakRate, Point, assess, points, readings};
use crate::store::{Store, StoreError};
use chrono::{DateTime, NaiveDate, Utc};
use chrono_tz::Tz;
use std::collections::{BTreeSet, HashMap};

/// One reading of the store.
#[derive(Debug)]
pub struct Overview {
    pub registers: Registers,
    /// In the order of the register: by site, then identification.
    pub appliances: Vec<Judged>,
    /// Visits that are open, the latest first.
    pub open: Vec<OpenVisit>,
    /// Visits of any kind.
    pub visits: usize,
}

#[derive(Debug, Clone)]
pub struct OpenVisit {
    pub visit: Visit,
    pub site: String,
    pub appliances: Vec<String>,
    pub entries: usize,
}

/// What is known of an appliance on its site's own day.
#[derive(Debug)]
pub struct Judged {
    pub appliance: Appliance,
    pub site: Site,
    pub on: NaiveDate,
    /// With what retrofits changed.
    pub facts: ApplianceFacts,
    pub duties: Vec<Duty>,
    pub books: Vec<Judgement>,
    /// Per duty, the entry it comes from: what, and on which day.
    pub origins: Vec<Option<(&'static str, NaiveDate)>>,
    pub leaks: Vec<OpenLeak>,
    /// Days of lasting repairs.
    pub repairs: Vec<NaiveDate>,
    pub jobs: BTreeSet<String>,
    pub state: LifeState,
    /// Readings of the law taken for the rates that are shown: rulebook, charge, texts.
    pub readings: Vec<(String, usize, Vec<String>)>,
    /// What else the rulebooks ask of it.
    pub points: Vec<Point>,
    /// Who worked on it last; empty where nobody is known.
    pub person: String,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum LifeState {
    InUse,
    Mothballed,
    Retired,
}

impl Overview {
    /// Reads and judges all. A site's day is that of its own zone at `now`; `today` where it names none.
    ///
    /// # Errors
    /// The store's own.
    pub fn read(store: &Store, now: DateTime<Utc>, today: NaiveDate) -> Result<Self, StoreError> {
        let registers = store.registers()?;
        let lines = by_appliance(store.lines()?);
        let sites: HashMap<_, &Site> = registers.sites.iter().map(|site| (site.id, site)).collect();
        let people = store.last_people()?;
        let mut appliances = Vec::with_capacity(registers.appliances.len());
        for appliance in &registers.appliances {
            let Some(site) = sites.get(&appliance.site) else { continue };
            let zone = site.versions.on(today).unwrap_or_else(|| site.versions.latest()).time_zone.parse::<Tz>();
            let on = zone.map_or(today, |zone| now.with_timezone(&zone).date_naive());
            let own = lines.get(&appliance.id).map(Vec::as_slice).unwrap_or_default();
            let mut judged = Judged::of(site, appliance, own, on);
            let person = people.get(&appliance.id).and_then(|id| registers.person(*id));
            judged.person = person.map(|person| person.name.clone()).unwrap_or_default();
            let leaked = |line: &Line| matches!(line.act, Act::Test { result: Some(TestResult::LeakFound), .. });
            if own.iter().any(leaked) {
                judged.leaks = open_leaks(&store.entries_of_appliance(appliance.id)?, on);
            }
            appliances.push(judged);
        }
        let names: HashMap<ApplianceId, &str> = registers.appliances.iter().map(|a| (a.id, a.name.as_str())).collect();
        let mut open = Vec::new();
        for visit in store.open_visits()?.into_iter().rev() {
            let entries: Vec<_> = store.entries_of_visit(visit.id)?.into_iter().filter(|entry| entry.struck_by.is_none()).collect();
            let at: BTreeSet<&str> = entries.iter().filter_map(|entry| names.get(&entry.line.appliance).copied()).collect();
            open.push(OpenVisit {
                site: sites.get(&visit.site).map(|site| site.name.clone()).unwrap_or_default(),
                appliances: at.into_iter().map(str::to_owned).collect(),
                entries: entries.len(),
                visit,
            });
        }
        let visits = store.visits(&crate::store::VisitFilter::default())?.len();
        Ok(Self { appliances, open, visits, registers })
    }

    pub fn judged(&self, id: ApplianceId) -> Option<&Judged> {
        self.appliances.iter().find(|judged| judged.appliance.id == id)
    }

    pub fn open_visit(&self, id: VisitId) -> Option<&OpenVisit> {
        self.open.iter().find(|open| open.visit.id == id)
    }
}

impl Judged {
    fn of(site: &Site, appliance: &Appliance, lines: &[Line], on: NaiveDate) -> Self {
        let live = |line: &&Line| line.at.date <= on;
        let repairs =
            lines.iter().filter(live).filter(|line| matches!(line.act, Act::Repair { temporary: false })).map(|line| line.at.date);
        let mut judged = Self {
            appliance: appliance.clone(),
            site: site.clone(),
            on,
            facts: appliance.versions.on(on).unwrap_or_else(|| &appliance.versions.first().facts).clone(),
            duties: Vec::new(),
            books: Vec::new(),
            origins: Vec::new(),
            leaks: Vec::new(),
            repairs: repairs.collect(),
            jobs: lines.iter().filter_map(|line| line.job.as_deref().map(str::to_owned)).collect(),
            state: life(lines, on),
            readings: Vec::new(),
            points: Vec::new(),
            person: String::new(),
        };
        if let Some(assessment) = assess(site, appliance, lines, on) {
            let origin =
                |duty: &Duty| duty.from_line.map(|line| (assessment.history.lines[line].act.name(), assessment.history.date(line)));
            judged.origins = assessment.duties.iter().map(origin).collect();
            let shown = |judgement: &&Judgement, rate: &&LeakRate| {
                judgement.rates.last() == Some(*rate) || assessment.duties.iter().any(|duty| duty.from_line == Some(rate.charge))
            };
            for judgement in &assessment.rulebooks {
                for rate in judgement.rates.iter().filter(|rate| shown(&judgement, rate)) {
                    // The first reading is the method's own, which the window says anyway.
                    let texts = readings(&assessment.history, rate).into_iter().skip(1).map(|reading| reading.text).collect();
                    judged.readings.push((judgement.id.clone(), rate.charge, texts));
                }
            }
            judged.points = points(&assessment);
            judged.facts = assessment.facts;
            judged.duties = assessment.duties;
            judged.books = assessment.rulebooks;
        }
        judged
    }

    /// The rulebook whose latest rate stands worst to its trigger.
    pub fn foremost(&self) -> Option<&Judgement> {
        let share = |judgement: &Judgement| judgement.rate().map_or_else(|| Ratio::from_integer(0), |rate| rate.percent / rate.trigger);
        self.books.iter().filter(|judgement| judgement.rate().is_some()).max_by(|a, b| share(a).cmp(&share(b)))
    }

    pub fn rate(&self) -> Option<&LeakRate> {
        self.foremost().and_then(Judgement::rate)
    }

    /// The duty that is due first, late ones before all.
    pub fn next(&self) -> Option<&Duty> {
        self.pending().next()
    }

    /// The same, of one rulebook.
    pub fn next_of(&self, rulebook: &str) -> Option<&Duty> {
        self.pending().find(|duty| duty.rulebook == rulebook)
    }

    /// Open and late duties, by due day.
    pub fn pending(&self) -> impl Iterator<Item = &Duty> {
        self.duties.iter().filter(|duty| matches!(duty.state(self.on), DutyState::Open | DutyState::Late))
    }

    /// The rate that a duty followed from, where it came from one.
    pub fn rate_behind(&self, duty: &Duty) -> Option<&LeakRate> {
        let line = duty.from_line?;
        self.books.iter().filter(|book| book.id == duty.rulebook).flat_map(|book| &book.rates).find(|rate| rate.charge == line)
    }

    /// The readings of the law that were taken for a rate.
    pub fn readings_for(&self, rulebook: &str, rate: Option<&LeakRate>) -> &[String] {
        let own = self.readings.iter().find(|(id, charge, _)| id == rulebook && rate.is_some_and(|rate| rate.charge == *charge));
        own.map_or(&[], |(.., texts)| texts.as_slice())
    }

    /// The titles of the rulebooks that apply.
    pub fn applying(&self) -> Vec<String> {
        let title = |judgement: &Judgement| rules::rulebook(&judgement.id).map_or_else(|| judgement.id.clone(), |book| book.title.clone());
        self.books.iter().filter(|judgement| judgement.applies).map(title).collect()
    }
}

fn life(lines: &[Line], on: NaiveDate) -> LifeState {
    let mut state = LifeState::InUse;
    let mut lines: Vec<&Line> = lines.iter().filter(|line| line.at.date <= on).collect();
    lines.sort_by_key(|line| (line.at.date, line.position));
    for line in lines {
        match line.act {
            Act::Retire => return LifeState::Retired,
            Act::Mothball => state = LifeState::Mothballed,
            Act::Charge { .. } => state = LifeState::InUse,
            _ => {}
        }
    }
    state
}
