//! The annual account, from cylinders, entries and duties.

mod duties;

use super::service_record::ODP_TABLE;
use super::standing::held_before_entries;
use super::{App, AppError, CylinderStanding, PROGRAM};
use crate::gas::{self, Weighting};
use crate::ledger::{Act, Appliance, CylinderAct, CylinderId, Line, Registers, Site, SiteFacts, Transfer, VisitState, by_appliance};
use crate::quantity::{Mass, MassUnit, Ratio};
use crate::record::{AccountLine, AnnualAccount, ApplianceAccount, GasAccount, Notice, Party, WeightedLoss};
use crate::rules::{History, LossEntry, loss_entries, weights};
use crate::store::VisitFilter;
use chrono::NaiveDate;
use std::collections::{BTreeMap, BTreeSet, HashSet};

impl App {
    /// The account of a calendar year, of all owners or of one: up to its last
    /// day, or while it runs up to today.
    ///
    /// # Errors
    /// [`AppError::Input`] for a year that has not begun, or an owner of no site; the store's own.
    pub fn annual_account(&self, year: i32, owner: Option<&str>) -> Result<AnnualAccount, AppError> {
        let today = self.today();
        let span = Span::of(year, today)?;
        let registers = self.store().registers()?;
        let lines = by_appliance(self.store().lines()?);
        let plants = plants(&registers, owner, span)?;
        let mut gases: BTreeMap<String, GasSum> = BTreeMap::new();
        let mut account = AnnualAccount {
            year,
            to: span.to,
            owner: owner.map(str::to_owned),
            company: company(&registers, span.to),
            demonstration: self.is_demonstration()?,
            program: PROGRAM.to_owned(),
            unit: unit(&plants),
            gases: Vec::new(),
            appliances: Vec::new(),
            duties: Vec::new(),
            remarks: Vec::new(),
        };
        let mut unnamed = Unnamed::default();
        let mut tally = duties::Tally::default();
        for plant in &plants {
            let own = lines.get(&plant.appliance.id).map(Vec::as_slice).unwrap_or_default();
            for held in plant.account(own, span, &mut unnamed) {
                gases.entry(held.refrigerant.clone()).or_default().add(&held);
                account.appliances.push(held);
            }
            tally.add(plant.site, plant.appliance, own, span.from, span.to);
        }
        account.duties = tally.finish();
        self.cylinders_in(&mut gases, &mut account, span)?;
        let with_cylinders = account.owner.is_none();
        gases.retain(|_, sum| !sum.is_nothing(with_cylinders));
        account.gases = gases.into_iter().map(|(refrigerant, sum)| sum.finish(refrigerant)).collect();
        account.remarks.extend(unnamed.remarks());
        account.remarks.extend(self.unfinished(&registers, &plants, span)?);
        Ok(account)
    }

    /// What cylinders held on the first morning and the last evening.
    fn cylinders_in(&self, gases: &mut BTreeMap<String, GasSum>, account: &mut AnnualAccount, span: Span) -> Result<(), AppError> {
        if account.owner.is_some() {
            account.remarks.push(plain("Cylinders are left out of the account of one owner: they serve all."));
            return Ok(());
        }
        for sum in gases.values_mut() {
            (sum.opening, sum.closing) = (Some(Mass::ZERO), Some(Mass::ZERO));
        }
        let eve = span.from.pred_opt().unwrap_or(span.from);
        let mut unknown = BTreeSet::new();
        let mut worked_back = BTreeSet::new();
        for (on, opening) in [(eve, true), (span.to, false)] {
            for cylinder in self.cylinders(on)? {
                let Some((gas, held)) = held(&cylinder, on) else { continue };
                let zero = || GasSum { opening: Some(Mass::ZERO), closing: Some(Mass::ZERO), ..GasSum::default() };
                let sum = gases.entry(gas).or_insert_with(zero);
                let place = if opening { &mut sum.opening } else { &mut sum.closing };
                *place = place.zip(held).map(|(sum, held)| sum + held);
                if held.is_none() {
                    unknown.insert(cylinder.cylinder.name.clone());
                } else if cylinder.balance.worked_back {
                    worked_back.insert(cylinder.cylinder.name.clone());
                }
            }
        }
        if !unknown.is_empty() {
            let names = unknown.into_iter().collect::<Vec<_>>().join(", ");
            account.remarks.push(plain(&format!(
                "What these cylinders held is not known, so neither is the holding of their gas: {names}. Weigh them and write down the gross."
            )));
        }
        if !self.books_in(gases, span)? {
            account.remarks.push(plain("No gas bought, sent away or lost from a cylinder was ever written down in this store."));
        }
        if !worked_back.is_empty() {
            let names = worked_back.into_iter().collect::<Vec<_>>().join(", ");
            account.remarks.push(plain(&format!(
                "These cylinders were first weighed later; what they held before is worked back from that weighing by what went in and \
                 out since: {names}."
            )));
        }
        Ok(())
    }

    /// What was bought, sent away and lost, by the gas that the cylinder held. Says whether anyone ever wrote
    /// such a thing down; where nobody did, nothing is known of it.
    fn books_in(&self, gases: &mut BTreeMap<String, GasSum>, span: Span) -> Result<bool, AppError> {
        let entries = self.store().cylinder_books()?;
        if entries.iter().all(|entry| entry.act.mass().is_none()) {
            return Ok(false);
        }
        let registers = self.store().registers()?;
        let cylinders: HashSet<CylinderId> = entries.iter().map(|entry| entry.cylinder).collect();
        let held = held_before_entries(self.store(), &registers, &cylinders)?;
        for entry in entries.iter().filter(|entry| span.holds(entry.at.date)) {
            let before = held.get(&entry.id).map(|held| &held.balance);
            let inside = before.and_then(|balance| balance.gas.clone());
            // Gas on top of some is counted with what was there.
            let on_top = before.is_some_and(|balance| balance.content.mass().is_none_or(Mass::is_positive));
            let (mass, gas, place): (_, _, fn(&mut GasSum) -> &mut Mass) = match &entry.act {
                CylinderAct::Bought { refrigerant, mass, .. } => {
                    (*mass, inside.filter(|_| on_top).or(Some(refrigerant.clone())), |sum| &mut sum.bought)
                }
                CylinderAct::SentAway { mass } | CylinderAct::Returned { heel: mass } => (*mass, inside, |sum| &mut sum.sent_away),
                CylinderAct::Lost { mass } => (*mass, inside, |sum| &mut sum.lost_from_cylinders),
                CylinderAct::Weighed | CylinderAct::Strike => continue,
            };
            // Gas of no name has no line.
            let Some(gas) = gas else { continue };
            let zero = || GasSum { opening: Some(Mass::ZERO), closing: Some(Mass::ZERO), ..GasSum::default() };
            *place(gases.entry(gas).or_insert_with(zero)) += mass;
        }
        gases.values_mut().for_each(|sum| sum.with_books = true);
        Ok(true)
    }

    /// Visits of the year that are not closed can still change the account.
    fn unfinished(&self, registers: &Registers, plants: &[Plant], span: Span) -> Result<Vec<Notice>, AppError> {
        let sites: BTreeSet<_> = plants.iter().map(|plant| plant.site.id).collect();
        let open = VisitFilter { state: Some(VisitState::Open), to: Some(span.to), ..VisitFilter::default() };
        let mut remarks = Vec::new();
        for visit in self.store().visits(&open)?.into_iter().filter(|visit| sites.contains(&visit.site)) {
            let site = registers.site(visit.site).map(|site| site.name.clone()).unwrap_or_default();
            remarks.push(plain(&format!("The visit at {site} begun on {} is still open; what it has so far is counted.", visit.date)));
        }
        Ok(remarks)
    }
}

fn plain(text: &str) -> Notice {
    Notice { text: text.to_owned(), source: String::new() }
}

/// The days of an account.
#[derive(Debug, Clone, Copy)]
struct Span {
    from: NaiveDate,
    to: NaiveDate,
}

impl Span {
    fn of(year: i32, today: NaiveDate) -> Result<Self, AppError> {
        let none = || AppError::input("year", format!("{year} is not a year that an account can be made for."));
        let from = NaiveDate::from_ymd_opt(year, 1, 1).ok_or_else(none)?;
        let last = NaiveDate::from_ymd_opt(year, 12, 31).ok_or_else(none)?;
        if from > today {
            return Err(AppError::input("year", format!("{year} has not begun; today is {today}.")));
        }
        Ok(Self { from, to: last.min(today) })
    }

    fn holds(self, day: NaiveDate) -> bool {
        (self.from..=self.to).contains(&day)
    }
}

fn company(registers: &Registers, on: NaiveDate) -> Party {
    let versions = registers.company.as_ref();
    let company = versions.map(|versions| versions.on(on).unwrap_or_else(|| versions.latest()).clone()).unwrap_or_default();
    Party { name: company.name, address: company.address, certificate: company.certificate }
}

/// An appliance with the facts of its site on the last day.
struct Plant<'a> {
    site: &'a Site,
    facts: &'a SiteFacts,
    appliance: &'a Appliance,
}

/// The appliances of an account, by site and identification.
fn plants<'a>(registers: &'a Registers, owner: Option<&str>, span: Span) -> Result<Vec<Plant<'a>>, AppError> {
    let mut plants = Vec::new();
    for appliance in &registers.appliances {
        let Some(site) = registers.site(appliance.site) else { continue };
        let facts = site.versions.on(span.to).unwrap_or_else(|| &site.versions.first().facts);
        if owner.is_none_or(|owner| facts.owner == owner) {
            plants.push(Plant { site, facts, appliance });
        }
    }
    if let (Some(owner), true) = (owner, plants.is_empty()) {
        let known: BTreeSet<&str> = registers.sites.iter().map(|site| site.versions.latest().owner.as_str()).collect();
        let known = known.into_iter().filter(|owner| !owner.is_empty()).collect::<Vec<_>>().join("; ");
        let hint = if known.is_empty() { String::new() } else { format!(" Owners here are: {known}.") };
        return Err(AppError::input("owner", format!("\u{201c}{owner}\u{201d} owns no appliance in this store.{hint}")));
    }
    plants.sort_by(|a, b| (&a.site.name, &a.appliance.name).cmp(&(&b.site.name, &b.appliance.name)));
    Ok(plants)
}

/// Pounds where every site is under the rules of the United States.
fn unit(plants: &[Plant]) -> MassUnit {
    let pounds = plants.iter().all(|plant| plant.facts.rulebooks.iter().any(|id| id.starts_with("us-")));
    if pounds && !plants.is_empty() { MassUnit::Pound } else { MassUnit::Kilogram }
}

impl Plant<'_> {
    /// One line for each gas that the appliance held in the year; none where it was not there yet, or gone before.
    fn account(&self, lines: &[Line], span: Span, unnamed: &mut Unnamed) -> Vec<ApplianceAccount> {
        let history = History::new(self.appliance, lines, span.to);
        let weights = weights(self.facts);
        let losses = loss_entries(&history);
        let eve = span.from.pred_opt().unwrap_or(span.from);
        let (first, last) = (held_by_appliance(&history, eve), held_by_appliance(&history, span.to));
        let mut gases: Vec<String> = Vec::new();
        let mut note = |gas: &str| {
            if !gases.iter().any(|known| known == gas) {
                gases.push(gas.to_owned());
            }
        };
        for held in [&first, &last].into_iter().flatten() {
            note(&held.0);
        }
        for (index, line) in history.lines.iter().enumerate().filter(|(_, line)| span.holds(line.at.date)) {
            if let (Some(_), Some(facts)) = (line.act.transfer(), history.facts_at(index)) {
                note(&facts.refrigerant);
            }
        }
        for loss in losses.iter().filter(|loss| span.holds(history.date(loss.line))) {
            note(&loss.refrigerant);
        }
        let several = gases.len() > 1;
        gases
            .into_iter()
            .map(|gas| {
                let own: Vec<&LossEntry> =
                    losses.iter().filter(|loss| loss.refrigerant == gas && span.holds(history.date(loss.line))).collect();
                let mut line = AccountLine {
                    opening: full_of(&gas, first.as_ref()),
                    closing: full_of(&gas, last.as_ref()),
                    lost: own.iter().map(|loss| loss.mass).sum(),
                    ..AccountLine::default()
                };
                moved(&history, &gas, span, &mut line, unnamed);
                ApplianceAccount {
                    site: self.site.name.clone(),
                    appliance: self.appliance.name.clone(),
                    owner: self.facts.owner.clone(),
                    line,
                    loss: weighted(&gas, line.lost, weights),
                    remark: remark(&own, several, last.as_ref().is_some_and(|(_, full)| full.is_none())),
                    refrigerant: gas,
                }
            })
            .collect()
    }
}

/// Gas and full charge on a day; `None` before the appliance was there and after it was retired.
fn held_by_appliance(history: &History, on: NaiveDate) -> Option<(String, Option<Mass>)> {
    let retired = history.retired_on().is_some_and(|retired| retired <= on);
    let facts = history.facts_on(on).filter(|_| !retired)?;
    let there = facts.installed_on.is_none_or(|installed| installed <= on);
    there.then(|| (facts.refrigerant.clone(), facts.full_charge))
}

/// Nothing of any other gas than the one held; `None` where the full charge is not determined.
fn full_of(gas: &str, held: Option<&(String, Option<Mass>)>) -> Option<Mass> {
    match held {
        Some((held, full)) if held == gas => *full,
        _ => Some(Mass::ZERO),
    }
}

fn moved(history: &History, gas: &str, span: Span, line: &mut AccountLine, unnamed: &mut Unnamed) {
    for (index, entry) in history.lines.iter().enumerate().filter(|(_, entry)| span.holds(entry.at.date)) {
        let Some(transfer) = entry.act.transfer() else { continue };
        if history.facts_at(index).is_none_or(|facts| facts.refrigerant != gas) {
            continue;
        }
        match entry.act {
            Act::Charge { .. } => {
                line.charged += transfer.mass;
                line.past_cylinders += Unnamed::part(transfer);
                unnamed.charged += Unnamed::part(transfer);
            }
            _ => {
                line.recovered += transfer.mass;
                line.past_cylinders -= Unnamed::part(transfer);
                unnamed.recovered += Unnamed::part(transfer);
            }
        }
    }
}

fn weighted(refrigerant: &str, lost: Mass, weights: Weighting) -> WeightedLoss {
    let gas = gas::find(refrigerant);
    WeightedLoss {
        odp_kg: gas.map(|gas| lost.kg() * gas.odp()),
        co2e_t: gas.and_then(|gas| gas.weight(weights)).map(|weight| lost.kg() * weight / Ratio::from_integer(1000)),
        odp_table: ODP_TABLE.to_owned(),
        gwp_table: weights.name().to_owned(),
    }
}

fn remark(losses: &[&LossEntry], several: bool, to_complete: bool) -> String {
    let mut parts = Vec::new();
    if losses.iter().any(|loss| loss.assumed_full) {
        parts.push("assumed full before retirement or retrofit");
    }
    if several {
        parts.push("held more than one gas this year");
    }
    if to_complete {
        parts.push("full charge to complete");
    }
    parts.join("; ")
}

/// Gas and mass in a cylinder; the mass is `None` where it is not known.
/// Nothing for a cylinder that is empty, or came into the register later.
fn held(cylinder: &CylinderStanding, on: NaiveDate) -> Option<(String, Option<Mass>)> {
    let gas = cylinder.balance.gas.clone()?;
    cylinder.cylinder.versions.on(on)?;
    let content = cylinder.balance.content.mass();
    match content {
        Some(mass) if mass.is_zero() => None,
        // More came out than was ever weighed in: history is incomplete.
        Some(mass) if mass.is_negative() => Some((gas, None)),
        content => Some((gas, content)),
    }
}

/// What one gas comes to.
#[derive(Default)]
struct GasSum {
    opening: Option<Mass>,
    closing: Option<Mass>,
    charged: Mass,
    recovered: Mass,
    past_cylinders: Mass,
    /// Cylinders' own books are kept.
    with_books: bool,
    bought: Mass,
    sent_away: Mass,
    lost_from_cylinders: Mass,
    lost: Mass,
    odp_kg: Weight,
    co2e_t: Weight,
    odp_tables: BTreeSet<String>,
    gwp_tables: BTreeSet<String>,
}

/// A sum that is unknown as soon as a part is.
struct Weight(Option<Ratio>);

impl Default for Weight {
    fn default() -> Self {
        Self(Some(Ratio::from_integer(0)))
    }
}

impl Weight {
    fn add(&mut self, part: Option<Ratio>) {
        self.0 = self.0.zip(part).map(|(sum, part)| sum + part);
    }
}

impl GasSum {
    fn add(&mut self, held: &ApplianceAccount) {
        self.charged += held.line.charged;
        self.recovered += held.line.recovered;
        self.past_cylinders += held.line.past_cylinders;
        self.lost += held.line.lost;
        self.odp_kg.add(held.loss.odp_kg);
        self.co2e_t.add(held.loss.co2e_t);
        self.odp_tables.insert(held.loss.odp_table.clone());
        self.gwp_tables.insert(held.loss.gwp_table.clone());
    }

    /// A gas that nobody moved and, where cylinders are counted, none held.
    fn is_nothing(&self, with_cylinders: bool) -> bool {
        let nothing = Some(Mass::ZERO);
        let moved = [self.charged, self.recovered, self.lost, self.bought, self.sent_away, self.lost_from_cylinders];
        let still = moved.iter().all(|mass| mass.is_zero());
        still && (!with_cylinders || (self.opening, self.closing) == (nothing, nothing))
    }

    fn finish(self, refrigerant: String) -> GasAccount {
        let tables = |tables: BTreeSet<String>| tables.into_iter().collect::<Vec<_>>().join("; ");
        GasAccount {
            refrigerant,
            line: AccountLine {
                opening: self.opening,
                bought: self.with_books.then_some(self.bought),
                charged: self.charged,
                recovered: self.recovered,
                sent_away: self.with_books.then_some(self.sent_away),
                lost: self.lost,
                closing: self.closing,
                lost_from_cylinders: self.with_books.then_some(self.lost_from_cylinders),
                past_cylinders: self.past_cylinders,
            },
            loss: WeightedLoss {
                odp_kg: self.odp_kg.0,
                co2e_t: self.co2e_t.0,
                odp_table: tables(self.odp_tables),
                gwp_table: tables(self.gwp_tables),
            },
        }
    }
}

/// Gas that went into or came out of appliances without a cylinder of this store.
#[derive(Default)]
struct Unnamed {
    charged: Mass,
    recovered: Mass,
}

impl Unnamed {
    fn part(transfer: &Transfer) -> Mass {
        if transfer.cylinder.is_none() { transfer.mass } else { Mass::ZERO }
    }

    fn remarks(&self) -> Option<Notice> {
        if self.charged.is_zero() && self.recovered.is_zero() {
            return None;
        }
        Some(plain(&format!(
            "{} kg were charged and {} kg recovered without a cylinder of this store; no holding of a cylinder contains them.",
            self.charged.kg_text(),
            self.recovered.kg_text(),
        )))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::app::testing::{CountedIds, SetClock};
    use crate::record::DutyCounts;
    use crate::rules::loss_between;
    use crate::store::Store;

    const SITES: &str =
        "site,rulebooks,owner,time_zone\nFish market,us-82f us-84c,Harbour Estates,UTC\nFerry terminal,eu-573,Quays Company,UTC\n";
    const APPLIANCES: &str = "appliance,site,category,refrigerant,full_charge,unit,installed_on,equipment\n\
        R-1,Fish market,commercial refrigeration,R-22,100,lb,2020-01-01,refrigeration\n\
        H-1,Ferry terminal,comfort cooling,R-410A,26,kg,2020-01-01,heat pump\n";
    const CYLINDERS: &str =
        "cylinder,kind,tare,unit,refrigerant,gas_status,gross\nS-1,supply,10,kg,R-22,reclaimed,30\nS-2,supply,10,kg,R-410A,virgin,\n";
    const LOG: &str = "date,appliance,what,amount,unit,cylinder,purpose,result,scope,new_refrigerant,new_full_charge,new_unit\n\
        2025-06-01,R-1,charge,10,lb,S-1,leak,,,,,\n\
        2026-02-01,R-1,charge,5,lb,S-1,leak,,,,,\n\
        2026-03-01,R-1,recover,90,lb,,retrofit,,,,,\n\
        2026-03-02,R-1,retrofit,,,,,,,R-448A,95,lb\n\
        2026-03-02,R-1,charge,95,lb,,retrofit,,,,,\n\
        2025-01-10,H-1,leak inspection,,,,,no leak,whole,,,\n\
        2025-07-10,H-1,leak inspection,,,,,no leak,whole,,,\n\
        2026-02-10,H-1,leak inspection,,,,,no leak,whole,,,\n";

    fn app() -> App {
        let clock = SetClock::at("2026-11-30T10:00:00Z".parse().unwrap(), chrono_tz::UTC);
        let app = App::with(Store::in_memory().unwrap(), Box::new(clock), Box::new(CountedIds::default())).unwrap();
        let files: Vec<(String, Vec<u8>)> = [("s", SITES), ("a", APPLIANCES), ("c", CYLINDERS), ("l", LOG)]
            .into_iter()
            .map(|(name, text)| (name.to_owned(), text.as_bytes().to_vec()))
            .collect();
        app.import(&files).unwrap();
        app
    }

    fn lb(pounds: i64) -> Mass {
        Mass::from_lb(pounds)
    }

    #[test]
    fn a_retrofit_parts_the_year_by_gas() {
        let account = app().annual_account(2026, None).unwrap();
        assert_eq!(account.to, "2026-11-30".parse().unwrap());
        let of = |gas: &str| account.appliances.iter().find(|line| line.refrigerant == gas).unwrap();
        let (old, new) = (of("R-22"), of("R-448A"));
        assert_eq!((old.line.opening, old.line.closing), (Some(lb(100)), Some(Mass::ZERO)));
        // 5 lb added, and 10 of the 100 lb were not recovered for the retrofit.
        assert_eq!((old.line.charged, old.line.recovered, old.line.lost), (lb(5), lb(90), lb(15)));
        assert_eq!(old.loss.odp_kg, Some(lb(15).kg() * Ratio::new(55, 1000)));
        assert!(old.remark.contains("assumed full"));
        assert_eq!((new.line.opening, new.line.closing), (Some(Mass::ZERO), Some(lb(95))));
        assert_eq!((new.line.charged, new.line.lost), (lb(95), Mass::ZERO));
    }

    #[test]
    fn losses_are_those_of_the_rules() {
        let app = app();
        let registers = app.store().registers().unwrap();
        let account = app.annual_account(2026, None).unwrap();
        let mut sum = (Mass::ZERO, Ratio::from_integer(0));
        for appliance in &registers.appliances {
            let lines = app.store().lines_of(appliance.id).unwrap();
            let history = History::new(appliance, &lines, account.to);
            let weights = weights(registers.site(appliance.site).unwrap().versions.latest());
            let loss = loss_between(&history, weights, "2026-01-01".parse().unwrap(), account.to);
            sum = (sum.0 + loss.lost, sum.1 + loss.co2e_t.unwrap());
        }
        assert_eq!(account.gases.iter().map(|gas| gas.line.lost).sum::<Mass>(), sum.0);
        assert_eq!(account.weighted_loss().1, Some(sum.1));
    }

    #[test]
    fn cylinders_hold_what_was_weighed_and_before_that_what_left() {
        let account = app().annual_account(2026, None).unwrap();
        let gas = |name: &str| account.gases.iter().find(|gas| gas.refrigerant == name).unwrap().line;
        // Weighed when the register came, after all that its log tells.
        let kg20 = Mass::from_kg(20);
        assert_eq!((gas("R-22").opening, gas("R-22").closing), (Some(kg20 + lb(5)), Some(kg20)));
        // S-2 was never weighed.
        assert_eq!((gas("R-410A").opening, gas("R-410A").bought), (None, None));
        assert!(account.remarks.iter().any(|remark| remark.text.contains("worked back") && remark.text.contains("S-1")));
        assert!(account.remarks.iter().any(|remark| remark.text.contains("S-2")));
        assert!(account.remarks.iter().any(|remark| remark.text.contains("43.09127515 kg were charged")), "{:?}", account.remarks);
    }

    #[test]
    fn duties_are_counted_in_the_year_they_fell_due() {
        let app = app();
        let counts = |year| {
            let account = app.annual_account(year, Some("Quays Company")).unwrap();
            account.duties.iter().find(|tally| tally.duty == "leak check").map(|tally| tally.counts)
        };
        // Every six months: due 2025-07-10 (kept), 2026-01-10 (done a month late), 2026-08-10 (not done).
        assert_eq!(counts(2025), Some(DutyCounts { in_time: 1, late: 0, not_done: 0, open: 1 }));
        assert_eq!(counts(2026), Some(DutyCounts { in_time: 0, late: 1, not_done: 1, open: 0 }));
    }

    #[test]
    fn one_owner_alone() {
        let app = app();
        let account = app.annual_account(2026, Some("Quays Company")).unwrap();
        assert_eq!(account.appliances.iter().map(|line| line.appliance.as_str()).collect::<Vec<_>>(), ["H-1"]);
        assert_eq!((account.unit, account.gases.len()), (MassUnit::Kilogram, 0));
        assert_eq!(app.annual_account(2026, Some("Harbour Estates")).unwrap().unit, MassUnit::Pound);
        let unknown = app.annual_account(2026, Some("Nobody")).unwrap_err().to_string();
        assert!(unknown.contains("Harbour Estates; Quays Company"), "{unknown}");
        assert!(app.annual_account(2027, None).is_err());
    }
}
