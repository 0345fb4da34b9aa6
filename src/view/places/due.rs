//! Due: what is late, what is due within the chosen days, what comes later,
//! open leaks, what was met lately; the open visits on top.

use super::overview::Judged;
use super::{First, Go, Office, Place, id, plant};
use crate::app::App;
use crate::ledger::{OpenLeak, VisitId};
use crate::rules::{self, Duty, DutyKind, DutyState, InForce as _};
use crate::view::shown::{Choice, Fact, Line, Verdict};
use crate::view::{format, words};
use chrono::{Days, NaiveDate};
use words::office as say;

const HORIZONS: [u32; 3] = [7, 30, 90];
/// Days for which a met duty stays on the day's page.
const LATELY: i64 = 30;

#[derive(Debug, Clone)]
pub struct State {
    pub horizon: u32,
    /// Key of the duty or leak that is read in full.
    pub open: Option<String>,
}

impl Default for State {
    fn default() -> Self {
        Self { horizon: HORIZONS[0], open: None }
    }
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Horizon(String),
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
}

/// A duty's key outlives a new reading of the store.
pub fn duty_key(judged: &Judged, duty: &Duty) -> String {
    let due = duty.due.map(|due| due.to_string()).unwrap_or_default();
    format!("duty|{}|{}|{}|{}|{due}", judged.appliance.id, duty.rulebook, duty.kind.name(), duty.from)
}

pub fn leak_key(judged: &Judged, leak: &OpenLeak) -> String {
    format!("leak|{}|{}|{}", judged.appliance.id, leak.found_by, leak.place)
}

fn subject(judged: &Judged) -> String {
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
            let row = row.state(day(duty.due), duty.due.map(|due| say::until(due, judged.on)).unwrap_or_default());
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
        })
    }

    fn duty_item(&self, judged: &Judged, index: usize) -> Item {
        let duty = &judged.duties[index];
        let row = duty_row(judged, duty, self.today, self.soon());
        let mut facts = vec![Fact::new("due", duty.due.map_or_else(|| no_day(duty), format::full_day))];
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
        let title = rules::rulebook(&duty.rulebook).map_or_else(|| duty.rulebook.clone(), |book| book.title.clone());
        facts.push(Fact::new("rulebook", title));
        let word = match duty.state(judged.on) {
            DutyState::Late | DutyState::Open if !row.aside.is_empty() => row.aside,
            DutyState::Open => no_day(duty),
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
        }
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
        let groups = self.groups(overview.appliances.as_slice());
        page.summary = say::due_summary(groups.late.len(), groups.soon.len(), &format::day(self.soon(), self.today));
        page.lines = groups.rows(&format::day(self.soon(), self.today));
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

    /// A leak's row among those of other appliances.
    fn leak_at(&self, judged: &Judged, leak: &OpenLeak) -> Line {
        Line { name: say::leak_of(&judged.appliance.name), ..leak_row(judged, leak, self.today) }
    }

    fn groups(&self, appliances: &[Judged]) -> Groups {
        let soon = self.soon();
        let mut groups = Groups::default();
        for judged in appliances {
            for duty in &judged.duties {
                let row = Line { facts: subject(judged), ..duty_row(judged, duty, self.today, soon) };
                match duty.state(judged.on) {
                    DutyState::Late => groups.late.push((duty.due, row)),
                    DutyState::Open if duty.due.is_none_or(|due| due <= soon) => groups.soon.push((duty.due, row)),
                    DutyState::Open => groups.later.push((duty.due, row)),
                    DutyState::Suspended => groups.suspended.push((duty.due, row)),
                    DutyState::Met | DutyState::MetLate if duty.met_on.is_some_and(|met| (judged.on - met).num_days() <= LATELY) => {
                        groups.met.push((duty.met_on, row));
                    }
                    _ => {}
                }
            }
            for leak in &judged.leaks {
                groups.leaks.push((Some(leak.since), self.leak_at(judged, leak)));
            }
        }
        groups
    }
}

type Dated = Vec<(Option<NaiveDate>, Line)>;

#[derive(Default)]
struct Groups {
    late: Dated,
    soon: Dated,
    later: Dated,
    suspended: Dated,
    leaks: Dated,
    met: Dated,
}

impl Groups {
    fn rows(mut self, soon: &str) -> Vec<Line> {
        let mut rows = Vec::new();
        // What was met last stands first.
        self.met.sort_by_key(|(day, _)| std::cmp::Reverse(*day));
        let named = [
            (say::late(), self.late, true),
            (format::capital(&words::by_day(soon)), self.soon, true),
            (say::open_leaks(), self.leaks, true),
            (say::later(), self.later, true),
            (format::capital(&words::suspended()), self.suspended, true),
            (say::met_lately(), self.met, false),
        ];
        for (name, mut group, sort) in named {
            if group.is_empty() {
                continue;
            }
            if sort {
                group.sort_by_key(|(day, _)| *day);
            }
            rows.push(Line::group(name, group.len().to_string()));
            rows.extend(group.into_iter().map(|(_, row)| row));
        }
        rows
    }
}
