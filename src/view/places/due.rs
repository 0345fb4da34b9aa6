//! Due: the open visits, the list of what is due, and one duty or leak read in full.

use super::due_list::{Group, Grouping};
use super::overview::Judged;
use super::{First, Go, Office, Place, id, plant};
use crate::app::App;
use crate::ledger::{OpenLeak, VisitId};
use crate::rules::{self, Duty, DutyKind, DutyState, InForce as _};
use crate::view::shown::{Choice, Fact, Line, Reason, Verdict};
use crate::view::{format, why, words};
use chrono::{Days, NaiveDate};
use words::office as say;

const HORIZONS: [u32; 3] = [7, 30, 90];

#[derive(Debug, Clone)]
pub struct State {
    pub grouping: Grouping,
    pub horizon: u32,
    /// Key of the duty or leak that is read in full.
    pub open: Option<String>,
    /// Where the list or the calendar was written, or why not.
    pub written: String,
    pub written_grave: bool,
}

impl Default for State {
    fn default() -> Self {
        Self { grouping: Grouping::Day, horizon: HORIZONS[0], open: None, written: String::new(), written_grave: false }
    }
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Grouping(String),
    Horizon(String),
    PrintList,
    WriteCalendar,
    Open(String),
    OpenVisit(String),
    Begin,
    ShowAppliance,
}

/// The day's page.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Page {
    pub today: String,
    pub summary: String,
    pub visits: Vec<Line>,
    pub groupings: Vec<Choice>,
    pub grouping: String,
    pub list_words: String,
    pub written: String,
    pub written_grave: bool,
    pub horizons: Vec<Choice>,
    pub horizon: String,
    pub lines: Vec<Line>,
    pub empty_words: String,
    /// The one large action: begins work, or on a first start the next thing needed.
    pub begin_words: String,
    pub item_key: String,
    pub item: Option<Item>,
}

/// A duty or an open leak read in full.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Item {
    pub name: String,
    pub subject: String,
    pub verdict: Verdict,
    pub word: String,
    pub facts: Vec<Fact>,
    pub text: String,
    pub source: String,
    /// The facts used, the sum worked through, the reading taken.
    pub reasons: Vec<Reason>,
}

/// A duty's key outlives a new reading of the store.
pub fn duty_key(judged: &Judged, duty: &Duty) -> String {
    let due = duty.due.map(|due| due.to_string()).unwrap_or_default();
    format!("duty|{}|{}|{}|{}|{due}", judged.appliance.id, duty.rulebook, duty.kind.name(), duty.from)
}

pub fn leak_key(judged: &Judged, leak: &OpenLeak) -> String {
    format!("leak|{}|{}|{}", judged.appliance.id, leak.found_by, leak.place)
}

pub fn subject(judged: &Judged) -> String {
    say::at_site(&judged.appliance.name, &judged.site.name)
}

/// A duty's row, apart from its facts.
pub fn duty_row(judged: &Judged, duty: &Duty, today: NaiveDate, soon: NaiveDate) -> Line {
    let row = Line::new(duty_key(judged, duty), say::duty_short(duty.kind), "");
    let day = |due: Option<NaiveDate>| due.map_or_else(|| no_day(duty), |due| format::day(due, today));
    match duty.state(judged.on) {
        DutyState::Late => {
            row.state(day(duty.due), duty.due.map(|due| say::until(due, judged.on)).unwrap_or_default()).judged(Verdict::Over)
        }
        DutyState::Open => {
            let near = duty.due.is_none_or(|due| due <= soon);
            // A row has room for a short state; why there is no day is said in small.
            let row = match duty.due {
                Some(due) => row.state(format::day(due, today), say::until(due, judged.on)),
                None => row.state(DutyState::Open.name(), no_day(duty)),
            };
            row.judged(if near { Verdict::At } else { Verdict::None })
        }
        DutyState::Met => row.state(DutyState::Met.name(), day(duty.met_on)).judged(Verdict::Under),
        DutyState::MetLate => row.state(DutyState::MetLate.name(), day(duty.met_on)).judged(Verdict::Under),
        DutyState::Suspended => row.state(words::suspended(), "").judged(Verdict::None),
        DutyState::Ended => row.state(DutyState::Ended.name(), day(duty.ended_on)).judged(Verdict::None),
    }
}

/// Where a duty has no due day: that it is without undue delay, or that its day is not known yet.
fn no_day(duty: &Duty) -> String {
    if duty.kind == DutyKind::RepairOfFoundLeak { words::without_undue_delay() } else { words::no_day_yet() }
}

/// `2 Apr 2026`, or why there is no day.
pub fn dated(duty: &Duty) -> String {
    duty.due.map_or_else(|| no_day(duty), format::full_day)
}

/// `repair 2 Apr`, `repair late`.
pub fn by_words(duty: &Duty, on: NaiveDate, today: NaiveDate) -> String {
    let name = say::duty_short(duty.kind).to_lowercase();
    match (duty.state(on), duty.due) {
        (DutyState::Late, _) => format!("{name} late"),
        (_, Some(due)) => format!("{name} {}", format::day(due, today)),
        (_, None) => format!("{name} {}", no_day(duty)),
    }
}

pub fn leak_row(judged: &Judged, leak: &OpenLeak, today: NaiveDate) -> Line {
    let place = format::capital(&words::leak_place(&leak.place));
    Line::new(leak_key(judged, leak), say::leak(), place)
        .state(words::leak_state(&leak.state), words::since(&format::day(leak.since, today)))
}

/// The share of the full charge that a duty's row in its rulebook names.
fn share_asked(duty: &Duty) -> String {
    let rows = rules::rulebook(&duty.rulebook).map(|book| book.duties.as_slice()).unwrap_or_default();
    let row = rows.iter().find(|row| row.duty == duty.kind && row.holds_on(duty.from));
    row.and_then(|row| row.percent).map(format::trigger).unwrap_or_default()
}

impl Office {
    pub(super) fn update_due(&mut self, app: &App, msg: Msg) -> Vec<Go> {
        match msg {
            Msg::Grouping(key) => {
                self.due.grouping = Grouping::of_key(&key);
                self.due.written.clear();
                Vec::new()
            }
            Msg::PrintList => {
                self.print_due_list(app);
                Vec::new()
            }
            Msg::WriteCalendar => {
                self.write_calendar(app);
                Vec::new()
            }
            Msg::Horizon(days) => {
                self.due.horizon = days.parse().ok().filter(|days| HORIZONS.contains(days)).unwrap_or(HORIZONS[0]);
                Vec::new()
            }
            Msg::Open(key) => {
                self.due.open = Some(key);
                Vec::new()
            }
            Msg::OpenVisit(key) => id(&key).map(|id| Go::Visit(VisitId(id))).into_iter().collect(),
            Msg::Begin if self.first() == First::Visit => {
                let open = self.open_item().map(|(judged, _)| (judged.site.id, judged.appliance.id));
                vec![Go::Begin { site: open.map(|open| open.0), appliance: open.map(|open| open.1) }]
            }
            Msg::Begin => self.lead(app),
            Msg::ShowAppliance => match self.open_item().map(|(judged, _)| judged.appliance.id) {
                Some(appliance) => {
                    self.place = Place::Plant;
                    self.update_plant(app, plant::Msg::Open(appliance.to_string()))
                }
                None => Vec::new(),
            },
        }
    }

    fn open_item(&self) -> Option<(&Judged, Item)> {
        let key = self.due.open.as_ref()?;
        self.overview.as_ref()?.appliances.iter().find_map(|judged| self.item_of(judged, key).map(|item| (judged, item)))
    }

    fn item_of(&self, judged: &Judged, key: &str) -> Option<Item> {
        if let Some(index) = judged.duties.iter().position(|duty| duty_key(judged, duty) == key) {
            return Some(self.duty_item(judged, index));
        }
        let leak = judged.leaks.iter().find(|leak| leak_key(judged, leak) == key)?;
        let row = leak_row(judged, leak, self.today);
        Some(Item {
            name: if leak.place.is_empty() { row.name } else { row.facts },
            subject: subject(judged),
            verdict: Verdict::None,
            word: row.state,
            facts: vec![Fact::new("since", format::full_day(leak.since)), Fact::new("gas", judged.facts.refrigerant.clone())],
            text: say::leak_asks(),
            source: String::new(),
            reasons: Vec::new(),
        })
    }

    fn duty_item(&self, judged: &Judged, index: usize) -> Item {
        let duty = &judged.duties[index];
        let row = duty_row(judged, duty, self.today, self.soon());
        let mut facts = vec![Fact::new("due", dated(duty))];
        let from = judged.origins.get(index).copied().flatten();
        facts.push(Fact::new(
            "from",
            from.map_or_else(|| format::full_day(duty.from), |(act, day)| format!("{act}, {}", format::full_day(day))),
        ));
        if let Some(met) = duty.met_on {
            facts.push(Fact::new("met on", format::full_day(met)));
        }
        if let Some(rate) = judged.rate_behind(duty) {
            facts.push(Fact::new("leak rate then", format!("{} {}", format::percent(rate.percent), words::percent_a_year())));
            facts.push(Fact::new("trigger", format::trigger(rate.trigger)));
        }
        let same: Vec<String> = judged.pending().filter(|other| other.kind == duty.kind && *other != duty).map(dated).collect();
        if !same.is_empty() {
            facts.push(Fact::new("also open", same.join(", ")));
        }
        let title = rules::rulebook(&duty.rulebook).map_or_else(|| duty.rulebook.clone(), |book| book.title.clone());
        facts.push(Fact::new("rulebook", title));
        let word = match duty.state(judged.on) {
            DutyState::Late | DutyState::Open => row.aside,
            _ => row.state,
        };
        Item {
            name: format::capital(duty.kind.name()),
            subject: subject(judged),
            verdict: row.verdict.unwrap_or_default(),
            word,
            facts,
            text: say::duty_asks(duty.kind, &share_asked(duty)),
            source: duty.source.clone(),
            reasons: self.why(judged, duty),
        }
    }

    /// The rate that a duty follows from, worked through, and why its rulebook applies.
    fn why(&self, judged: &Judged, duty: &Duty) -> Vec<Reason> {
        let Some(judgement) = judged.books.iter().find(|book| book.id == duty.rulebook) else { return Vec::new() };
        let rate = judged.rate_behind(duty);
        why::of_rate(judgement, rate, judged.readings_for(&duty.rulebook, rate), self.units.mass)
    }

    /// Last day of the chosen horizon.
    pub(super) fn soon(&self) -> NaiveDate {
        self.today.checked_add_days(Days::new(self.due.horizon.into())).unwrap_or(self.today)
    }

    pub fn due_page(&self) -> Page {
        let mut page = Page {
            today: say::weekday(self.today),
            horizons: HORIZONS.iter().map(|days| Choice::new(days.to_string(), say::days(*days), "")).collect(),
            horizon: self.due.horizon.to_string(),
            groupings: Grouping::ALL.iter().map(|grouping| Choice::word(grouping.key())).collect(),
            grouping: self.due.grouping.key().to_owned(),
            list_words: say::list_words(self.due.grouping.key(), (self.due.grouping == Grouping::Day).then_some(self.due.horizon)),
            written: self.due.written.clone(),
            written_grave: self.due.written_grave,
            begin_words: say::begin(),
            ..Page::default()
        };
        let Some(overview) = &self.overview else {
            page.empty_words = say::reading_store();
            return page;
        };
        page.visits = overview
            .open
            .iter()
            .map(|open| {
                let since =
                    words::since(&format::moment(crate::ledger::Moment { date: open.visit.date, minute: open.visit.minute }, self.today));
                let facts = format::commas([since.as_str(), &open.appliances.join(", ")]);
                Line::new(open.visit.id.to_string(), &open.site, facts).state(words::entries(open.entries), "")
            })
            .collect();
        let (late, soon) = self.due_counts(overview);
        page.summary = say::due_summary(late, soon, &format::day(self.soon(), self.today));
        page.lines = self.due_groups(overview).into_iter().flat_map(Group::lines).collect();
        (page.empty_words, page.begin_words) = match self.first() {
            First::Company => say::first_company(),
            First::Person => say::first_person(),
            First::Site => say::first_site(),
            First::Appliance => say::first_appliance(),
            First::Cylinder => say::first_cylinder(),
            First::Visit if overview.visits == 0 => say::first_visit(),
            First::Visit => (say::nothing_due(), say::begin()),
        };
        if let Some((_, item)) = self.open_item() {
            page.item_key = self.due.open.clone().unwrap_or_default();
            page.item = Some(item);
        }
        page
    }
}
