//! Account: a year per gas, losses by appliance, how duties were kept, export.

use super::plant;
use super::{Go, Office, Place};
use crate::app::{App, account_file_name, file_away};
use crate::ledger::{Visit, VisitState};
use crate::quantity::{Mass, MassUnit, Ratio, rounded_text};
use crate::record::{AccountLine, AnnualAccount, GasAccount, account_csv, account_json};
use crate::rules::rulebook;
use crate::store::VisitFilter;
use crate::view::shown::{Choice, Fact};
use crate::view::{format, words};
use chrono::{Datelike, NaiveDate};
use std::collections::BTreeSet;
use words::office as say;

#[derive(Debug, Default)]
pub struct State {
    /// `None` is this year.
    pub year: Option<i32>,
    /// Empty: all.
    pub owner: String,
    pub gas: String,
    account: Option<AnnualAccount>,
    visits: usize,
    first_year: Option<i32>,
    export: String,
    export_grave: bool,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    StepYear(i32),
    Owner(String),
    Gas(String),
    OpenAppliance(String),
    /// `pdf`, `csv` or `json`.
    Export(String),
    Begin,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Page {
    pub year: String,
    pub has_earlier: bool,
    pub has_later: bool,
    pub extent: String,
    pub owners: Vec<Choice>,
    pub owner: String,
    pub gases: Vec<Choice>,
    pub gas: String,
    pub choice_words: String,
    pub lost: String,
    pub lost_unit: String,
    pub co2e: String,
    pub odp: String,
    pub tables: String,
    pub plates: Vec<Plate>,
    pub losses: Vec<Share>,
    pub duties: Vec<Tally>,
    pub remarks: Vec<String>,
    pub export_words: String,
    pub export_grave: bool,
    pub empty_words: String,
}

/// One gas's account as an aligned column.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Plate {
    pub gas: String,
    pub unit: String,
    /// Caption, figure, whether it is a sum of those above.
    pub figures: Vec<(String, String, bool)>,
    pub weighted: Vec<Fact>,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Share {
    pub key: String,
    pub name: String,
    pub facts: String,
    pub value: String,
    /// Of the largest loss.
    pub share: f32,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Tally {
    pub name: String,
    pub source: String,
    pub in_time: String,
    pub late: String,
    pub not_done: String,
    pub shares: [f32; 3],
}

fn figure(mass: Mass, unit: MassUnit) -> String {
    rounded_text(mass.in_unit(unit), 2).replace('-', "\u{2212}")
}

/// A figure with its sign; nothing has none.
fn signed(mass: Mass, sign: char, unit: MassUnit) -> String {
    let text = figure(mass, unit);
    if mass.is_positive() { format!("{sign}{text}") } else { text }
}

fn weighted(value: Option<Ratio>, places: u32, unit: &str) -> String {
    value.map_or_else(words::not_known, |value| format!("{} {unit}", rounded_text(value, places)))
}

impl Office {
    pub(super) fn refresh_account(&mut self, app: &App) {
        let year = self.account.year.unwrap_or_else(|| self.today.year());
        let owner = Some(self.account.owner.as_str()).filter(|owner| !owner.is_empty());
        let read = app
            .annual_account(year, owner)
            .and_then(|account| Ok((account, app.store().visits(&VisitFilter::default())?, app.store().registers()?)));
        match read {
            Ok((account, visits, registers)) => {
                let to = account.to;
                let whose = |visit: &&Visit| {
                    let site = registers.site(visit.site);
                    let facts = site.map(|site| site.versions.on(visit.date).unwrap_or_else(|| site.versions.latest()));
                    owner.is_none_or(|owner| facts.is_some_and(|facts| facts.owner == owner))
                };
                let done = visits.iter().filter(|visit| visit.state != VisitState::Open).filter(whose);
                self.account.visits = done.filter(|visit| visit.date.year() == year && visit.date <= to).count();
                self.account.first_year = visits.iter().map(|visit| visit.date.year()).min();
                self.account.account = Some(account);
            }
            Err(error) => {
                // Another owner's or year's account must not stand under this choice.
                self.account.account = None;
                self.fail(&error);
            }
        }
    }

    pub(super) fn update_account(&mut self, app: &App, msg: Msg) -> Vec<Go> {
        match msg {
            Msg::StepYear(by) => {
                let year = self.account.year.unwrap_or_else(|| self.today.year()) + by;
                self.account.year = Some(year.min(self.today.year()));
                self.account.export.clear();
                self.refresh_account(app);
            }
            Msg::Owner(owner) => {
                self.account.owner = owner;
                self.account.export.clear();
                self.refresh_account(app);
            }
            Msg::Gas(gas) => self.account.gas = gas,
            Msg::OpenAppliance(key) => {
                self.place = Place::Plant;
                return self.update_plant(app, plant::Msg::Open(key));
            }
            Msg::Export(format) => self.export(app, &format),
            Msg::Begin => return self.lead(app),
        }
        Vec::new()
    }

    fn export(&mut self, app: &App, ending: &str) {
        let Some(account) = &self.account.account else { return };
        let path = self.documents.join(account.year.to_string()).join(account_file_name(account, ending));
        let bytes = match ending {
            "pdf" => app.account_pdf(account, None).map_err(|error| error.to_string()),
            "csv" => Ok(account_csv(account).into_bytes()),
            _ => account_json(account).map(String::into_bytes).map_err(|error| error.to_string()),
        };
        let done = bytes.and_then(|bytes| file_away(&path, &bytes).map_err(|error| error.to_string()));
        let shown = path.display().to_string();
        (self.account.export, self.account.export_grave) = match done {
            Ok(()) => (say::written_to(&shown), false),
            Err(cause) => (words::cannot_write(&shown, &cause), true),
        };
    }

    pub fn account_page(&self) -> Page {
        let state = &self.account;
        let year = state.year.unwrap_or_else(|| self.today.year());
        let registers = self.overview.as_ref().map(|overview| &overview.registers);
        let mut page = Page {
            year: year.to_string(),
            has_earlier: state.first_year.is_some_and(|first| first < year),
            has_later: year < self.today.year(),
            owner: state.owner.clone(),
            gas: state.gas.clone(),
            export_words: state.export.clone(),
            export_grave: state.export_grave,
            empty_words: say::account_empty(),
            ..Page::default()
        };
        let owners: BTreeSet<&str> =
            registers.iter().flat_map(|registers| &registers.sites).map(|site| site.versions.latest().owner.as_str()).collect();
        page.owners = [Choice::new("", say::all_owners(), "")]
            .into_iter()
            .chain(owners.into_iter().filter(|owner| !owner.is_empty()).map(Choice::word))
            .collect();
        let gases = state.account.iter().flat_map(|account| &account.gases).map(|gas| Choice::word(&gas.refrigerant));
        page.gases = [Choice::new("", say::all_gases(), "")].into_iter().chain(gases).collect();
        let word = |choices: &[Choice], key: &str| choices.iter().find(|c| c.key == key).map_or_else(|| key.to_owned(), |c| c.name.clone());
        page.choice_words = format!("{}, {}", word(&page.owners, &page.owner), word(&page.gases, &page.gas));
        let Some(account) = state.account.as_ref().filter(|account| account.year == year) else { return page };
        page.extent = say::account_extent(&format::day(account.to, NaiveDate::MIN), state.visits);
        if state.visits == 0 && account.gases.iter().all(|gas| gas.line.charged.is_zero() && gas.line.recovered.is_zero()) {
            return page;
        }
        let unit = self.units.mass;
        let unit = if unit == MassUnit::PoundOunce { MassUnit::Pound } else { unit };
        let wanted = |gas: &str| state.gas.is_empty() || state.gas == gas;
        let gases: Vec<&GasAccount> = account.gases.iter().filter(|gas| wanted(&gas.refrigerant)).collect();
        let zero = Ratio::from_integer(0);
        let sum = |part: fn(&GasAccount) -> Option<Ratio>| gases.iter().try_fold(zero, |sum, gas| part(gas).map(|value| sum + value));
        page.lost = figure(gases.iter().map(|gas| gas.line.lost).sum(), unit);
        page.lost_unit = format::unit(unit).to_owned();
        let bare = |value: Option<Ratio>, places| value.map_or_else(words::not_known, |value| rounded_text(value, places));
        page.co2e = bare(sum(|gas| gas.loss.co2e_t), 1);
        page.odp = bare(sum(|gas| gas.loss.odp_kg), 2);
        let tables = |part: fn(&GasAccount) -> &str| {
            let named: BTreeSet<&str> = gases.iter().map(|gas| part(gas)).filter(|table| !table.is_empty()).collect();
            named.into_iter().collect::<Vec<_>>().join(", ")
        };
        page.tables = say::tables(&tables(|gas| &gas.loss.gwp_table), &tables(|gas| &gas.loss.odp_table));
        page.plates = gases.iter().map(|gas| plate(gas, unit)).collect();
        let most = account.appliances.iter().filter(|one| wanted(&one.refrigerant)).map(|one| one.line.lost).max().unwrap_or(Mass::ZERO);
        let mut losses: Vec<_> = account.appliances.iter().filter(|one| wanted(&one.refrigerant) && one.line.lost.is_positive()).collect();
        losses.sort_by_key(|one| std::cmp::Reverse(one.line.lost));
        let key = |one: &crate::record::ApplianceAccount| {
            let found = registers?.sites.iter().find(|site| site.name == one.site)?;
            registers?.appliances_at(found.id).find(|appliance| appliance.name == one.appliance).map(|appliance| appliance.id.to_string())
        };
        page.losses = losses
            .into_iter()
            .map(|one| Share {
                key: key(one).unwrap_or_default(),
                name: one.appliance.clone(),
                facts: format::commas([one.site.as_str(), &one.refrigerant]),
                value: format!("{} {}", figure(one.line.lost, unit), format::unit(unit)),
                share: format::float(one.line.lost.kg() / most.kg()) as f32,
            })
            .collect();
        page.duties = account.duties.iter().filter_map(tally).collect();
        page.remarks = account.remarks.iter().map(|remark| remark.text.clone()).collect();
        page
    }
}

fn plate(gas: &GasAccount, unit: MassUnit) -> Plate {
    let line = &gas.line;
    let known = |mass: Option<Mass>, sign: Option<char>| match (mass, sign) {
        (None, _) => words::not_known(),
        (Some(mass), Some(sign)) => signed(mass, sign, unit),
        (Some(mass), None) => figure(mass, unit),
    };
    let mut figures = vec![
        ("opening".to_owned(), known(line.opening, None), false),
        ("bought".to_owned(), known(line.bought, Some('+')), false),
        ("recovered".to_owned(), signed(line.recovered, '+', unit), false),
        ("charged".to_owned(), signed(line.charged, '\u{2212}', unit), false),
        ("sent away".to_owned(), known(line.sent_away, Some('\u{2212}')), false),
        ("lost from cylinders".to_owned(), known(line.lost_from_cylinders.filter(|lost| !lost.is_zero()), Some('\u{2212}')), false),
    ];
    if !line.past_cylinders.is_zero() {
        let sign = if line.past_cylinders.is_negative() { '\u{2212}' } else { '+' };
        figures.push(("without a cylinder".to_owned(), signed(line.past_cylinders.magnitude(), sign, unit), false));
    }
    // What nobody keeps takes no line.
    figures.retain(|(caption, value, _)| *value != words::not_known() || caption == "opening");
    // Purchases, charges from elsewhere, gaps: told, so that the column adds up.
    if let Some(gap) = not_explained(line).filter(|gap| !gap.is_zero()) {
        let sign = if gap.is_negative() { '\u{2212}' } else { '+' };
        figures.push(("not explained by these".to_owned(), signed(gap.magnitude(), sign, unit), false));
    }
    figures.push(("closing".to_owned(), known(line.closing, None), true));
    figures.push(("lost from appliances".to_owned(), figure(line.lost, unit), false));
    Plate {
        gas: gas.refrigerant.clone(),
        unit: format::unit(unit).to_owned(),
        figures,
        weighted: vec![
            Fact::new("CO₂ equivalent lost", weighted(gas.loss.co2e_t, 1, "t")),
            Fact::new("ODP-weighted loss", weighted(gas.loss.odp_kg, 3, "kg")),
        ],
    }
}

/// What closing is more than the movements that are kept explain; `None`
/// where a holding is not known.
fn not_explained(line: &AccountLine) -> Option<Mass> {
    let kept = |mass: Option<Mass>| mass.unwrap_or(Mass::ZERO);
    let line = crate::record::AccountLine { bought: Some(kept(line.bought)), sent_away: Some(kept(line.sent_away)), ..*line };
    line.unexplained()
}

fn tally(tally: &crate::record::DutyTally) -> Option<Tally> {
    let counts = tally.counts;
    let whole = counts.in_time + counts.late + counts.not_done;
    let part = |count: u32| (f64::from(count) / f64::from(whole)) as f32;
    let told = |count: u32, word: &str| if count == 0 { String::new() } else { format!("{count} {word}") };
    (whole > 0).then(|| Tally {
        name: format::capital(&tally.duty),
        source: rulebook(&tally.rulebook).map_or_else(|| tally.rulebook.clone(), |book| book.title.clone()),
        in_time: told(counts.in_time, &say::in_time()),
        late: told(counts.late, &say::too_late()),
        not_done: told(counts.not_done, &say::not_done()),
        shares: [part(counts.in_time), part(counts.late), part(counts.not_done)],
    })
}
