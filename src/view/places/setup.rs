//! Setup: who we are, who works, what we measure with, how the program looks,
//! and where the store lies.

use super::plant::FormMsg;
use super::site::titles;
use super::{Form, Go, Office, Place, id};
use crate::app::{App, Appearance, Look, Setting, paper_name};
use crate::ledger::{Instrument, InstrumentId, InstrumentKind, PersonId, SiteFacts, SiteId, VisitState};
use crate::print::Paper;
use crate::quantity::{MassUnit, PressureUnit, TemperatureUnit, VacuumUnit};
use crate::rules::known;
use crate::store::VisitFilter;
use crate::view::format;
use crate::view::shown::{Choice, Fact, Line, Verdict};
use crate::view::words::{self, office as say};
use chrono::NaiveDate;

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Pane {
    #[default]
    None,
    Company,
    People,
    PersonForm,
    Instruments,
    InstrumentForm,
    Rulebooks,
    Units,
    Appearance,
    Store,
    About,
}

#[derive(Debug, Default)]
pub struct State {
    pub pane: Pane,
    pub company: Form,
    pub person: Form,
    /// Who is changed; `None`: one is added.
    pub changed_person: Option<PersonId>,
    pub instrument: Form,
    pub changed_instrument: Option<InstrumentId>,
    pub store: StorePage,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Open(Pane),
    /// A person, an instrument, or a site by its rulebooks.
    OpenLine(String),
    Add,
    Company(FormMsg),
    Person(FormMsg),
    Instrument(FormMsg),
    /// What is set, and the key that was chosen.
    Set(Setting, String),
    Appearance(Appearance),
    /// In percent.
    TextSize(u32),
    BackUp,
    Check,
    ShowFolder,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct SetupLine {
    pub pane: Pane,
    pub name: String,
    pub facts: String,
    pub state: String,
}

/// People, instruments, or sites with their rulebooks.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Register {
    pub title: String,
    pub lines: Vec<Line>,
    pub empty: String,
    pub add: String,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct StorePage {
    pub path: String,
    pub facts: Vec<Fact>,
    pub answer: String,
    pub grave: bool,
}

impl State {
    pub(super) fn back(&mut self) -> bool {
        let moved = self.pane != Pane::None;
        self.pane = match self.pane {
            Pane::PersonForm => Pane::People,
            Pane::InstrumentForm => Pane::Instruments,
            _ => Pane::None,
        };
        moved
    }
}

pub fn mass_units() -> Vec<Choice> {
    MassUnit::ALL
        .iter()
        .map(|unit| if *unit == MassUnit::PoundOunce { Choice::new(unit.name(), "lb and oz", "") } else { Choice::word(unit.name()) })
        .collect()
}

pub fn pressure_units() -> Vec<Choice> {
    PressureUnit::ALL.iter().map(|unit| Choice::new(unit.name(), say::gauge(unit.name()), "")).collect()
}

pub fn vacuum_units() -> Vec<Choice> {
    VacuumUnit::ALL.iter().map(|unit| Choice::word(unit.name())).collect()
}

pub fn temperature_units() -> Vec<Choice> {
    TemperatureUnit::ALL.iter().map(|unit| Choice::word(unit.name())).collect()
}

pub fn papers() -> Vec<Choice> {
    let named = [Paper::A4, Paper::Letter].map(|paper| {
        let key = paper_name(Some(paper));
        Choice::new(key, format::capital(key), "")
    });
    [Choice::new(paper_name(None), say::paper_by_law(), "")].into_iter().chain(named).collect()
}

/// The titles of every rulebook and the tables of gas values, for About.
pub fn sources() -> Vec<Fact> {
    vec![
        Fact::new("rulebooks", known().into_iter().map(|book| book.title.as_str()).collect::<Vec<_>>().join("; ")),
        Fact::new("ODP", "Montreal Protocol, annexes A to E"),
        Fact::new("GWP", "IPCC AR4, AR5, AR6; tables of the rulebooks"),
    ]
}

impl Office {
    pub(super) fn update_setup(&mut self, app: &App, msg: Msg) -> Vec<Go> {
        match msg {
            Msg::Open(pane) => {
                self.setup.pane = pane;
                match pane {
                    Pane::Company => self.begin_company_form(),
                    Pane::Store => self.refresh_store_facts(app),
                    _ => {}
                }
            }
            Msg::OpenLine(key) => {
                let Some(id) = id(&key) else { return Vec::new() };
                match self.setup.pane {
                    Pane::People => self.begin_person_form(Some(PersonId(id))),
                    Pane::Instruments => self.begin_instrument_form(Some(InstrumentId(id))),
                    Pane::Rulebooks => {
                        self.place = Place::Plant;
                        self.begin_site_form(app, Some(SiteId(id)));
                    }
                    _ => {}
                }
            }
            Msg::Add => match self.setup.pane {
                Pane::People => self.begin_person_form(None),
                Pane::Instruments => self.begin_instrument_form(None),
                _ => {}
            },
            Msg::Company(msg) => return self.update_company_form(app, msg),
            Msg::Person(msg) => return self.update_person_form(app, msg),
            Msg::Instrument(msg) => return self.update_instrument_form(app, msg),
            Msg::Set(setting, key) => self.choose_unit(app, setting, &key),
            Msg::Appearance(appearance) => return self.set_look(app, Setting::Appearance, appearance.name()),
            Msg::TextSize(percent) => return self.set_look(app, Setting::TextSize, &percent.to_string()),
            Msg::BackUp => self.back_up(app),
            Msg::Check => self.check(app),
            Msg::ShowFolder => {
                let folder = app.store().path().and_then(std::path::Path::parent);
                return folder.map(|folder| Go::Open(folder.to_owned())).into_iter().collect();
            }
        }
        Vec::new()
    }

    fn choose_unit(&mut self, app: &App, setting: Setting, key: &str) {
        match app.set(setting, key).and_then(|()| app.units()) {
            Ok(units) => {
                self.units = units;
                self.refresh_cylinders(app);
                self.refresh_pages(app);
            }
            Err(error) => self.fail(&error),
        }
    }

    fn set_look(&mut self, app: &App, setting: Setting, value: &str) -> Vec<Go> {
        match app.set(setting, value).and_then(|()| Look::read(app)) {
            Ok(look) => vec![Go::Appear(look)],
            Err(error) => {
                self.fail(&error);
                Vec::new()
            }
        }
    }

    fn now_text(&self, app: &App) -> String {
        let at = app.moment_in(device_zone(app));
        format!("{} {}", format::full_day(at.date), format::clock(at.minute))
    }

    fn back_up(&mut self, app: &App) {
        let at = app.moment_in(device_zone(app));
        let clock = format::clock(at.minute).replace(':', "");
        let folder = self.documents.join("Backups");
        let target = folder.join(format!("bubblepoint {} {clock}.db", at.date));
        let done = std::fs::create_dir_all(&folder)
            .map_err(|error| words::cannot_write(&folder.display().to_string(), &error.to_string()))
            .and_then(|()| app.store().backup(&target).map_err(|error| error.to_string()))
            .and_then(|()| app.set(Setting::LastBackup, &at.date.to_string()).map_err(|error| error.to_string()));
        self.refresh_store_facts(app);
        (self.setup.store.answer, self.setup.store.grave) = match done {
            Ok(()) => (say::backed_up(&target.display().to_string()), false),
            Err(sentence) => (words::sentence(&sentence), true),
        };
    }

    fn check(&mut self, app: &App) {
        let at = self.now_text(app);
        (self.setup.store.answer, self.setup.store.grave) = match app.store().check() {
            Ok(report) if report.sound() => (say::checked_sound(&at, report.records.len()), false),
            Ok(report) => {
                let records = report.records.iter().filter(|record| !record.sound).count();
                (say::checked_unsound(&at, report.damage.len() + report.dangling.len() + report.without_record.len() + records), true)
            }
            Err(error) => (words::sentence(&error.to_string()), true),
        };
    }

    pub(super) fn refresh_store_facts(&mut self, app: &App) {
        let store = app.store();
        let path = store.path();
        let size = path.and_then(|path| std::fs::metadata(path).ok()).map(|file| size_text(file.len()));
        let closed = store.visits(&VisitFilter { state: Some(VisitState::Closed), ..VisitFilter::default() });
        let entries = store.last_position().map(|position| position.to_string());
        let backup = app.setting(Setting::LastBackup).ok().flatten().and_then(|day| day.parse::<NaiveDate>().ok());
        self.setup.store.path = path.map_or_else(say::only_in_memory, |path| path.display().to_string());
        self.setup.store.facts = vec![
            Fact::new("size", size.unwrap_or_else(say::only_in_memory)),
            Fact::new("entries", entries.unwrap_or_default()),
            Fact::new("closed visits", closed.map(|visits| visits.len().to_string()).unwrap_or_default()),
            Fact::new("last backup", backup.map_or_else(|| "none yet".to_owned(), format::full_day)),
        ];
    }

    pub fn setup_lines(&self, look: &Look) -> Vec<SetupLine> {
        let registers = self.overview.as_ref().map(|overview| &overview.registers);
        let company = registers.map(|registers| registers.company().name).unwrap_or_default();
        let people = registers.map(|registers| registers.people.as_slice()).unwrap_or_default();
        let names: Vec<&str> = people.iter().take(2).map(|person| person.name.as_str()).collect();
        let instruments = registers.map(|registers| registers.instruments.as_slice()).unwrap_or_default();
        let late = instruments.iter().filter(|instrument| self.check_late(instrument)).count();
        let sites = registers.map_or(0, |registers| registers.sites.len());
        let or_empty = |text: String| if text.is_empty() { words::to_complete() } else { text };
        let line = |pane, name: &str, facts: String, state: String| SetupLine { pane, name: name.to_owned(), facts, state };
        let number = |count: usize| if count == 0 { String::new() } else { count.to_string() };
        let late = if late == 0 { number(instruments.len()) } else { format!("{late} overdue") };
        let unit =
            mass_units().into_iter().find(|choice| choice.key == self.units.mass.name()).map(|choice| choice.name).unwrap_or_default();
        vec![
            line(Pane::Company, "Company", or_empty(company), String::new()),
            line(Pane::People, "People", or_empty(names.join(", ")), number(people.len())),
            line(Pane::Instruments, "Instruments", or_empty(counted(instruments)), late),
            line(
                Pane::Rulebooks,
                "Rulebooks",
                "by site".to_owned(),
                if sites == 0 { String::new() } else { say::count(sites, "site", "sites") },
            ),
            line(Pane::Units, "Units", say::units(&unit, self.units.pressure.name(), self.units.temperature.name()), String::new()),
            line(Pane::Appearance, "Appearance", say::look(look.appearance.name(), look.text_size), String::new()),
            line(Pane::Store, "Store", "backup and check".to_owned(), String::new()),
            line(Pane::About, "About", "cautions and limits, licences".to_owned(), String::new()),
        ]
    }

    pub(super) fn check_late(&self, instrument: &Instrument) -> bool {
        instrument.check_due.is_some_and(|due| due < self.today)
    }

    /// The register that is open.
    pub fn register(&self) -> Register {
        let Some(registers) = self.overview.as_ref().map(|overview| &overview.registers) else { return Register::default() };
        match self.setup.pane {
            Pane::Instruments | Pane::InstrumentForm => Register {
                title: "Instruments".to_owned(),
                lines: registers.instruments.iter().map(|instrument| self.instrument_row(instrument)).collect(),
                empty: say::instruments_empty(),
                add: "Add an instrument".to_owned(),
            },
            Pane::Rulebooks => {
                let row = |site: &crate::ledger::Site| {
                    let facts = site.versions.on(self.today).unwrap_or_else(|| site.versions.latest());
                    let listed = titles(&facts.rulebooks);
                    Line::new(site.id.to_string(), &site.name, if listed.is_empty() { "no rulebook".to_owned() } else { listed })
                };
                Register {
                    title: "Rulebooks".to_owned(),
                    lines: registers.sites.iter().map(row).collect(),
                    empty: say::rulebooks_empty(),
                    add: String::new(),
                }
            }
            _ => Register {
                title: "People".to_owned(),
                lines: registers.people.iter().map(|person| self.person_row(person)).collect(),
                empty: say::people_empty(),
                add: "Add a person".to_owned(),
            },
        }
    }

    fn person_row(&self, person: &crate::ledger::Person) -> Line {
        let facts = format::commas([person.certificate_kind.as_str(), &person.certificate]);
        let row = Line::new(person.id.to_string(), &person.name, if facts.is_empty() { words::to_complete() } else { facts });
        match (person.valid_from, person.valid_to) {
            (_, Some(to)) if to < self.today => row.state("expired", format::day(to, self.today)).judged(Verdict::Over),
            (Some(from), _) if from > self.today => row.state("not yet", format::day(from, self.today)),
            (_, Some(to)) => row.state("valid", format!("to {}", format::day(to, self.today))),
            (Some(_), None) => row.state("valid", ""),
            (None, None) => row,
        }
    }

    fn instrument_row(&self, instrument: &Instrument) -> Line {
        let division = instrument.division.as_ref().map(|division| format!("division {}", division.text())).unwrap_or_default();
        let holds = instrument.holds.as_ref().map(|holds| format!("holds {}", holds.text())).unwrap_or_default();
        let due = instrument.check_due.filter(|due| *due >= self.today);
        let due = due.map(|due| say::check_due(&format::day(due, self.today))).unwrap_or_default();
        let facts = format::commas([kind_name(instrument.kind), &division, &holds, &due]);
        let row = Line::new(instrument.id.to_string(), &instrument.name, facts);
        match instrument.check_due {
            Some(late) if late < self.today => row.state("overdue", format::day(late, self.today)).judged(Verdict::Over),
            _ => row,
        }
    }
}

/// The device's own zone: that of a site that names none.
fn device_zone(app: &App) -> chrono_tz::Tz {
    app.zone_of(&SiteFacts::under(Vec::new()))
}

fn size_text(bytes: u64) -> String {
    let tenths = bytes.div_ceil(100_000);
    format!("{}.{} MB", tenths / 10, tenths % 10)
}

pub fn kind_name(kind: InstrumentKind) -> &'static str {
    match kind {
        InstrumentKind::Scale => "scale",
        InstrumentKind::Detector => "detector",
        InstrumentKind::Gauge => "gauge",
        InstrumentKind::RecoveryMachine => "recovery machine",
        InstrumentKind::Hoses => "hoses",
    }
}

/// `2 scales, 1 detector`.
fn counted(instruments: &[Instrument]) -> String {
    let kinds = [
        (InstrumentKind::Scale, "scale", "scales"),
        (InstrumentKind::Detector, "detector", "detectors"),
        (InstrumentKind::Gauge, "gauge", "gauges"),
        (InstrumentKind::RecoveryMachine, "recovery machine", "recovery machines"),
        (InstrumentKind::Hoses, "set of hoses", "sets of hoses"),
    ];
    let count = |kind| instruments.iter().filter(|instrument| instrument.kind == kind).count();
    let told = kinds.iter().map(|(kind, one, many)| (count(*kind), one, many)).filter(|(number, ..)| *number > 0);
    let mut told: Vec<String> = told.map(|(number, one, many)| say::count(number, one, many)).collect();
    if told.len() > 2 {
        told.truncate(2);
        told.push(say::and_more());
    }
    told.join(", ")
}
