//! Entering what was done: readings become masses, the rules for new entries
//! are asked, and the entry is on disk when this returns.

use super::inputs::{
    ChargeInput, Common, GapAnswerInput, NewEntry, PressureInput, RecoverInput, RecycleInput, RepairInput, RetrofitInput, SimpleAct,
    TestInput,
};
use super::refusals::{self, Refusal};
use super::standing::{ApplianceStanding, CylinderStanding, WeighingGap, appliance_standing, cylinder_standing};
use super::weighing::{Weighed, weigh};
use super::{App, AppError, Setting};
use crate::gas;
use crate::ledger::{
    Act, ApplianceId, CylinderFacts, CylinderId, Dated, Detail, Entry, EntryId, GAP_UNKNOWN, GasStatus, InstrumentId, Line, Moment,
    PersonId, Reading, Transfer, Visit, VisitId, VisitState, open_gaps,
};
use crate::measure::{Direction, Uncertainty, default_oil_factor};
use crate::quantity::{Mass, Ratio, parse_decimal};
use crate::store::{Store, Writing};
use chrono::NaiveDate;

/// An entry worked out and judged, not saved.
#[derive(Debug, Clone)]
pub struct Prepared {
    pub entry: Entry,
    /// Why it would not be saved; empty when it would.
    pub refusals: Vec<Refusal>,
    /// Of the net mass, for transfers.
    pub uncertainty: Option<Uncertainty>,
    /// The first gross differs from the last one known.
    pub gap: Option<WeighingGap>,
}

impl Prepared {
    /// Nothing forbids it, or all that is left to judgement has its reason.
    pub fn may_be_saved(&self) -> bool {
        let has_reason = !self.entry.detail.reason.trim().is_empty();
        self.refusals.iter().all(|refusal| refusal.judgement && has_reason)
    }
}

impl App {
    /// Works an entry out and judges it without saving: what a page shows
    /// while it is being filled in.
    ///
    /// # Errors
    /// [`AppError::Input`] where something cannot be read yet.
    pub fn prepare(&self, visit: VisitId, appliance: ApplianceId, new: &NewEntry) -> Result<Prepared, AppError> {
        self.prepare_in(&self.store, visit, appliance, new, None)
    }

    /// Saves an entry and clears its draft. It is on disk when this returns.
    ///
    /// # Errors
    /// [`AppError::Refused`] with every reason; [`AppError::Input`]; the store's own.
    pub fn enter(&self, visit: VisitId, appliance: ApplianceId, new: &NewEntry) -> Result<Entry, AppError> {
        let mut entered = self.enter_all(visit, appliance, std::slice::from_ref(new))?;
        entered.pop().ok_or(AppError::Unknown { what: "entry" })
    }

    /// Saves entries that belong together in their order: all of them or none.
    ///
    /// # Errors
    /// As [`App::enter`], for the first one that something stands against.
    pub fn enter_all(&self, visit: VisitId, appliance: ApplianceId, new: &[NewEntry]) -> Result<Vec<Entry>, AppError> {
        let entered = self.store.write(self.now(), |tx| {
            let mut entered = Vec::new();
            for new in new {
                let prepared = self.prepare_in(tx, visit, appliance, new, None)?;
                let entry = allowed(prepared)?;
                let position = tx.add_entry(&entry)?;
                keep_gas_source(tx, &entry)?;
                tx.clear_draft(visit, new.action())?;
                entered.push(Entry { line: Line { position, ..entry.line }, ..entry });
            }
            Ok::<_, AppError>(entered)
        })?;
        // What the drafts' thread still holds is older than the entries.
        for new in new {
            self.clear_draft(visit, new.action())?;
        }
        Ok(entered)
    }

    /// Why nothing can be entered on an appliance for this moment: what a page
    /// shows while day and time are chosen.
    ///
    /// # Errors
    /// Unknown visit or appliance; the store's own.
    pub fn refusals_at(&self, visit: VisitId, appliance: ApplianceId, at: Moment) -> Result<Vec<Refusal>, AppError> {
        let visit = open_visit(&self.store, visit)?;
        let standing = appliance_standing(&self.store, appliance, at.date, None)?;
        Ok(refusals::of_entry(&standing, &Act::Note, at, self.moment_of(&visit)))
    }

    /// # Errors
    /// As [`App::enter`]; likewise below.
    pub fn charge(&self, visit: VisitId, appliance: ApplianceId, input: ChargeInput) -> Result<Entry, AppError> {
        self.enter(visit, appliance, &NewEntry::Charge(input))
    }

    pub fn recover(&self, visit: VisitId, appliance: ApplianceId, input: RecoverInput) -> Result<Entry, AppError> {
        self.enter(visit, appliance, &NewEntry::Recover(input))
    }

    pub fn recycle(&self, visit: VisitId, appliance: ApplianceId, input: RecycleInput) -> Result<Entry, AppError> {
        self.enter(visit, appliance, &NewEntry::Recycle(input))
    }

    /// A leak test, leak inspection or verification test.
    pub fn test(&self, visit: VisitId, appliance: ApplianceId, input: TestInput) -> Result<Entry, AppError> {
        self.enter(visit, appliance, &NewEntry::Test(input))
    }

    pub fn repair(&self, visit: VisitId, appliance: ApplianceId, input: RepairInput) -> Result<Entry, AppError> {
        self.enter(visit, appliance, &NewEntry::Repair(input))
    }

    pub fn retrofit(&self, visit: VisitId, appliance: ApplianceId, input: RetrofitInput) -> Result<Entry, AppError> {
        self.enter(visit, appliance, &NewEntry::Retrofit(input))
    }

    /// A pressure hold or vacuum rise, with its readings.
    pub fn pressure(&self, visit: VisitId, appliance: ApplianceId, input: PressureInput) -> Result<Entry, AppError> {
        self.enter(visit, appliance, &NewEntry::Pressure(input))
    }

    /// A note, or an act that says all by its name.
    pub fn simple(&self, visit: VisitId, appliance: ApplianceId, act: SimpleAct, common: Common) -> Result<Entry, AppError> {
        self.enter(visit, appliance, &NewEntry::Simple(act, common))
    }

    /// Strikes a wrong entry of an open visit: it stays, struck through, and counts no more.
    /// `by` is who strikes it; `None` is the one who began the visit.
    ///
    /// # Errors
    /// A reason is missing; the entry is of a closed visit, or struck already.
    pub fn strike(&self, entry: EntryId, why: &str, by: Option<PersonId>) -> Result<Entry, AppError> {
        let why = why.trim();
        if why.is_empty() {
            return Err(AppError::input("why", "Write why this entry is struck."));
        }
        self.store.write(self.now(), |tx| {
            let struck = tx.entry(entry)?.ok_or(AppError::Unknown { what: "entry" })?;
            let visit = open_visit(tx, struck.visit)?;
            let strike = Entry {
                line: Line {
                    entry: EntryId(self.new_id()),
                    appliance: struck.line.appliance,
                    at: self.moment_of(&visit),
                    position: 0,
                    job: struck.line.job.clone(),
                    act: Act::Note,
                },
                visit: visit.id,
                written: self.now(),
                strikes: Some(entry),
                struck_by: None,
                detail: Detail { person: by.or(visit.people.first().copied()), reason: why.to_owned(), ..Detail::default() },
            };
            let position = tx.add_entry(&strike)?;
            Ok(Entry { line: Line { position, ..strike.line }, ..strike })
        })
    }

    /// `correcting` is an entry that the new one replaces: it is left out of
    /// what stands, and its moment is taken where no other is given.
    pub(super) fn prepare_in(
        &self,
        store: &Store,
        visit: VisitId,
        appliance: ApplianceId,
        new: &NewEntry,
        correcting: Option<&Entry>,
    ) -> Result<Prepared, AppError> {
        let visit = open_visit(store, visit)?;
        let common = new.common();
        let at = common.at.or(correcting.map(|entry| entry.line.at)).unwrap_or_else(|| self.moment_of(&visit));
        let without = correcting.map(|entry| entry.line.entry);
        let standing = appliance_standing(store, appliance, at.date, without)?;
        if standing.appliance.site != visit.site {
            return Err(AppError::input("appliance", format!("{} is not at the site of this visit.", standing.appliance.name)));
        }
        let person = match common.person {
            Some(person) => store.person(person)?.ok_or(AppError::Unknown { what: "person" })?.id,
            None => *visit.people.first().ok_or(AppError::Unknown { what: "person" })?,
        };
        let desk = Desk { store, standing: &standing, at, without, oil_factor: self.oil_factor()? };
        let mut work = desk.work(new)?;
        let mut refused = refusals::of_entry(&standing, &work.act, at, self.moment_of(&visit));
        refused.append(&mut work.refusals);
        // The gravest first.
        refused.sort_by_key(|refusal| refusal.judgement);
        let job = common.job.as_deref().map(str::trim).filter(|job| !job.is_empty());
        let note = if work.note.is_empty() { common.note.trim().to_owned() } else { work.note };
        let entry = Entry {
            line: Line { entry: EntryId(self.new_id()), appliance, at, position: 0, job: job.map(Into::into), act: work.act },
            visit: visit.id,
            written: self.now(),
            strikes: without,
            struck_by: None,
            detail: Detail { person: Some(person), note, reason: common.reason.trim().to_owned(), ..work.detail },
        };
        Ok(Prepared { entry, refusals: refused, uncertainty: work.uncertainty, gap: work.gap })
    }

    /// Now, on the clock of a visit's site.
    pub(super) fn moment_of(&self, visit: &Visit) -> Moment {
        self.moment_in(visit.time_zone.parse().unwrap_or_else(|_| self.clock.zone()))
    }

    /// Share of a cylinder's limit left for gas when it is recovered with oil of unknown amount.
    ///
    /// # Errors
    /// The store's own.
    pub fn oil_factor(&self) -> Result<Ratio, AppError> {
        let setting = self.setting(Setting::OilFactor)?;
        Ok(setting
            .and_then(|text| parse_decimal(&text).ok())
            .filter(|factor| crate::measure::oil_factor_is_sound(*factor))
            .unwrap_or_else(default_oil_factor))
    }
}

/// The entry, if nothing stands against it.
pub(super) fn allowed(prepared: Prepared) -> Result<Entry, AppError> {
    if prepared.may_be_saved() { Ok(prepared.entry) } else { Err(AppError::Refused(prepared.refusals)) }
}

pub(super) fn open_visit(store: &Store, visit: VisitId) -> Result<Visit, AppError> {
    let visit = store.visit(visit)?.ok_or(AppError::Unknown { what: "visit" })?;
    if visit.state == VisitState::Open {
        return Ok(visit);
    }
    Err(AppError::input("visit", "This visit is closed. What is wrong in it is mended by a correction."))
}

/// What an entry comes to before its common part is added.
struct Work {
    act: Act,
    detail: Detail,
    note: String,
    refusals: Vec<Refusal>,
    uncertainty: Option<Uncertainty>,
    gap: Option<WeighingGap>,
}

impl Work {
    fn plain(act: Act, detail: Detail) -> Self {
        Self { act, detail, note: String::new(), refusals: Vec::new(), uncertainty: None, gap: None }
    }
}

/// Where entries are worked out: what stands, and when.
struct Desk<'a> {
    store: &'a Store,
    standing: &'a ApplianceStanding,
    at: Moment,
    without: Option<EntryId>,
    oil_factor: Ratio,
}

impl Desk<'_> {
    fn work(&self, new: &NewEntry) -> Result<Work, AppError> {
        match new {
            NewEntry::Charge(input) => self.charge(input),
            NewEntry::Recover(input) => self.recover(input),
            NewEntry::Recycle(input) => self.recycle(input),
            NewEntry::Test(input) => self.test(input),
            NewEntry::Repair(input) => self.repair(input),
            NewEntry::Retrofit(input) => retrofit(input),
            NewEntry::Pressure(input) => pressure(input),
            NewEntry::GapAnswer(input) => self.gap_answer(input),
            NewEntry::Simple(act, common) => simple(*act, common),
        }
    }

    fn charge(&self, input: &ChargeInput) -> Result<Work, AppError> {
        let cylinder = input.cylinder.map(|id| self.cylinder(id)).transpose()?;
        if self.is_new() && cylinder.is_none() && input.purpose != crate::ledger::ChargePurpose::FactoryCharge {
            return Err(AppError::input("cylinder", "Choose the cylinder; only a factory charge comes without one."));
        }
        let weighed = self.weighed(&input.reading, Direction::Out, cylinder.is_some() && self.without.is_none(), input.full_hoses)?;
        let mut refused =
            refusals::of_charge(self.standing, cylinder.as_ref(), input.purpose, weighed.transfer.mass, weighed.gross_after, self.at.date);
        let gap = self.gap(cylinder.as_ref(), &weighed, &input.weighing_gap, &mut refused);
        let gas_status = cylinder.as_ref().and_then(|cylinder| cylinder.balance.status);
        let gas_source = cylinder.as_ref().map(|cylinder| source_of(cylinder, &input.gas_source)).unwrap_or_default();
        if self.is_new() {
            refused.extend(refusals::missing::of_charge(input, gas_status, &gas_source));
        }
        self.same_leak(input.same_leak_as)?;
        let detail = Detail {
            reading: Some(input.reading.clone()),
            gas_status,
            gas_source,
            phase: input.phase.clone(),
            short_by: input.short_by.clone(),
            same_leak_as: input.same_leak_as,
            weighing_gap: input.weighing_gap.trim().to_owned(),
            ..Detail::default()
        };
        let act = Act::Charge { purpose: input.purpose, transfer: Transfer { cylinder: input.cylinder, ..weighed.transfer } };
        Ok(Work { refusals: refused, uncertainty: Some(weighed.uncertainty), gap, ..Work::plain(act, detail) })
    }

    fn recover(&self, input: &RecoverInput) -> Result<Work, AppError> {
        let cylinder = self.cylinder(input.cylinder)?;
        let weighed = self.weighed(&input.reading, Direction::Into, self.without.is_none(), input.full_hoses)?;
        let mut refused =
            refusals::of_recovery(self.standing, &cylinder, weighed.transfer.mass, weighed.gross_after, self.oil_factor, self.at.date);
        let gap = self.gap(Some(&cylinder), &weighed, &input.weighing_gap, &mut refused);
        let detail = Detail {
            reading: Some(input.reading.clone()),
            gas_status: Some(GasStatus::Recovered),
            level_reached: input.level_reached.trim().to_owned(),
            weighing_gap: input.weighing_gap.trim().to_owned(),
            ..Detail::default()
        };
        let act = Act::Recover { purpose: input.purpose, transfer: Transfer { cylinder: Some(input.cylinder), ..weighed.transfer } };
        Ok(Work { refusals: refused, uncertainty: Some(weighed.uncertainty), gap, ..Work::plain(act, detail) })
    }

    fn recycle(&self, input: &RecycleInput) -> Result<Work, AppError> {
        let cylinder = self.cylinder(input.cylinder)?;
        let detail = Detail { method: input.method.trim().to_owned(), instrument: input.instrument, ..Detail::default() };
        let refused = refusals::of_recycling(&cylinder);
        Ok(Work { refusals: refused, ..Work::plain(Act::Recycle { cylinder: Some(input.cylinder) }, detail) })
    }

    fn test(&self, input: &TestInput) -> Result<Work, AppError> {
        let mut refused = Vec::new();
        if self.is_new() {
            refusals::missing::of_test(input)?;
            refused.extend(refusals::of_inspection(input.kind, &input.method));
        }
        if let Some(repair) = input.repair {
            self.earlier("repair", repair, |act| matches!(act, Act::Repair { .. }))?;
        }
        Ok(Work { refusals: refused, ..test(input)? })
    }

    fn repair(&self, input: &RepairInput) -> Result<Work, AppError> {
        if self.is_new() {
            refusals::missing::of_repair(input)?;
        }
        Ok(repair(input))
    }

    fn same_leak(&self, charge: Option<EntryId>) -> Result<(), AppError> {
        charge.map_or(Ok(()), |charge| self.earlier("charge of the same leak", charge, |act| matches!(act, Act::Charge { .. })))
    }

    /// What is named is an entry of this appliance, and of the right act.
    fn earlier(&self, what: &'static str, entry: EntryId, is_right: impl Fn(&Act) -> bool) -> Result<(), AppError> {
        let found = self.store.entry(entry)?;
        let fits = |entry: &Entry| entry.line.appliance == self.standing.appliance.id && is_right(&entry.line.act);
        if found.as_ref().is_some_and(fits) { Ok(()) } else { Err(AppError::Unknown { what }) }
    }

    /// A gap that was left open is explained by an entry of its own.
    fn gap_answer(&self, input: &GapAnswerInput) -> Result<Work, AppError> {
        let why = input.why.trim();
        if why.is_empty() || why == GAP_UNKNOWN {
            return Err(AppError::input("why", "Say why the cylinder weighed otherwise."));
        }
        let entries = self.store.entries_of_appliance(self.standing.appliance.id)?;
        let asked = open_gaps(&entries).into_iter().find(|entry| entry.line.entry == input.entry);
        let asked = asked.ok_or(AppError::Unknown { what: "open weighing gap" })?;
        let cylinder = asked.line.act.cylinder().map(|id| self.store.cylinder(id)).transpose()?.flatten();
        let name = cylinder.map(|cylinder| cylinder.name).unwrap_or_default();
        let note = format!("cylinder {name} weighed otherwise on {}: {why}", asked.line.at.date);
        let detail = Detail { weighing_gap: why.to_owned(), answers: Some(input.entry), ..Detail::default() };
        Ok(Work { note, ..Work::plain(Act::Note, detail) })
    }

    /// Not a correction.
    fn is_new(&self) -> bool {
        self.without.is_none()
    }

    fn cylinder(&self, id: CylinderId) -> Result<CylinderStanding, AppError> {
        cylinder_standing(self.store, id, self.at.date, self.without)
    }

    /// Gas from or into a cylinder is weighed twice; a correction may state the right net alone.
    fn weighed(
        &self,
        reading: &Reading,
        direction: Direction,
        with_cylinder: bool,
        full_hoses: Option<InstrumentId>,
    ) -> Result<Weighed, AppError> {
        let scale = match reading.scale {
            Some(scale) => Some(self.store.instrument(scale)?.ok_or(AppError::Unknown { what: "scale" })?),
            None => None,
        };
        let hoses = match full_hoses {
            Some(hoses) => {
                let hoses = self.store.instrument(hoses)?.ok_or(AppError::Unknown { what: "set of hoses" })?;
                let holds = hoses.holds.as_ref().and_then(|holds| holds.mass().ok());
                holds.ok_or_else(|| AppError::input("hoses", format!("Write down first what {} can hold.", hoses.name)))?
            }
            None => Mass::ZERO,
        };
        weigh(reading, direction, with_cylinder, scale.as_ref(), hoses)
    }

    /// Corrections mend an old reading; the gap was asked about then.
    fn gap(
        &self,
        cylinder: Option<&CylinderStanding>,
        weighed: &Weighed,
        explanation: &str,
        refused: &mut Vec<Refusal>,
    ) -> Option<WeighingGap> {
        let (cylinder, (before, division)) = cylinder.zip(weighed.gross_before)?;
        if self.without.is_some() {
            return None;
        }
        refused.extend(refusals::of_gap(cylinder, before, division, !explanation.trim().is_empty()));
        cylinder.gap(before, division)
    }
}

/// Facility, batch and certificate belong to recycled and reclaimed gas alone.
fn source_of(cylinder: &CylinderStanding, typed: &str) -> String {
    let used = matches!(cylinder.balance.status, Some(GasStatus::Recycled | GasStatus::Reclaimed));
    let known = cylinder.facts.gas_source.trim();
    match (used, typed.trim()) {
        (false, _) => String::new(),
        (true, "") => known.to_owned(),
        (true, typed) => typed.to_owned(),
    }
}

/// What was written of the gas is a fact of its cylinder from then on.
fn keep_gas_source(tx: &Writing<'_>, entry: &Entry) -> Result<(), AppError> {
    let (source, day) = (&entry.detail.gas_source, entry.line.at.date);
    let Some(cylinder) = entry.line.act.cylinder().filter(|_| !source.is_empty()) else { return Ok(()) };
    let facts = cylinder_standing(tx, cylinder, day, None)?.facts;
    if facts.gas_source.trim() == source {
        return Ok(());
    }
    let facts = CylinderFacts { gas_source: source.clone(), ..facts };
    let reason = Some("written down when it was charged from".to_owned());
    Ok(tx.add_cylinder_version(cylinder, &Dated { from: Some(day), reason, facts })?)
}

fn test(input: &TestInput) -> Result<Work, AppError> {
    let hours = input.running_hours.trim();
    let running_hundredths = if hours.is_empty() { None } else { Some(hundredths(hours)?) };
    let act = Act::Test { kind: input.kind, result: input.result, scope: input.scope, partial: input.partial, running_hundredths };
    let detail = Detail {
        method: input.method.trim().to_owned(),
        instrument: input.instrument,
        parts: input.parts.trim().to_owned(),
        place: input.place.trim().to_owned(),
        leaks: input.leaks.clone(),
        repair: input.repair,
        running_hours: hours.to_owned(),
        ..Detail::default()
    };
    // The log's own way of saying so.
    let note = if input.partial { format!("partial {}", input.common.note.trim()).trim_end().to_owned() } else { String::new() };
    let refusals = refusals::of_inspection(input.kind, &input.method).into_iter().collect();
    Ok(Work { note, refusals, ..Work::plain(act, detail) })
}

/// Hours as hundredths, exactly.
fn hundredths(hours: &str) -> Result<i64, AppError> {
    let refuse = || AppError::input("running hours", format!("\u{201c}{hours}\u{201d} is not a number of hours such as 26.5."));
    let exact = parse_decimal(hours).map_err(|_| refuse())? * Ratio::from_integer(100);
    let whole = exact.is_integer().then(|| exact.to_integer()).filter(|hundredths| *hundredths >= 0);
    whole.and_then(|hundredths| i64::try_from(hundredths).ok()).ok_or_else(refuse)
}

fn repair(input: &RepairInput) -> Work {
    let detail = Detail { place: input.place.trim().to_owned(), parts: input.parts.trim().to_owned(), ..Detail::default() };
    let note = [input.done.trim(), input.common.note.trim()].into_iter().filter(|text| !text.is_empty()).collect::<Vec<_>>().join("; ");
    Work { note, ..Work::plain(Act::Repair { temporary: input.temporary }, detail) }
}

fn retrofit(input: &RetrofitInput) -> Result<Work, AppError> {
    let gas = known_gas(&input.refrigerant)?;
    let full_charge = input.full_charge.as_ref().map(|written| written.mass().map_err(|e| AppError::input("full charge", e.to_string())));
    let full_charge = full_charge.transpose()?;
    if full_charge.is_some_and(|mass| !mass.is_positive()) {
        return Err(AppError::input("full charge", "A full charge is more than nothing; leave it empty where it stays as it was."));
    }
    let detail = Detail { new_full_charge: input.full_charge.clone(), ..Detail::default() };
    Ok(Work::plain(Act::Retrofit { refrigerant: Some(gas.to_owned()), full_charge }, detail))
}

/// The catalogue's name of a gas.
pub(super) fn known_gas(name: &str) -> Result<&'static str, AppError> {
    gas::find(name).map(gas::Gas::designation).ok_or_else(|| {
        let like = gas::like(name);
        let hint = if like.is_empty() { String::new() } else { format!(" Like it are: {}.", like.join(", ")) };
        AppError::input("refrigerant", format!("\u{201c}{name}\u{201d} is not in the gas catalogue.{hint}"))
    })
}

fn pressure(input: &PressureInput) -> Result<Work, AppError> {
    if input.level_reached.trim().is_empty() && input.common.note.trim().is_empty() {
        return Err(AppError::input("readings", "Write down the readings."));
    }
    let detail = Detail {
        method: input.method.trim().to_owned(),
        level_reached: input.level_reached.trim().to_owned(),
        instrument: input.instrument,
        place: input.place.trim().to_owned(),
        ..Detail::default()
    };
    Ok(Work::plain(Act::Note, detail))
}

fn simple(act: SimpleAct, common: &Common) -> Result<Work, AppError> {
    let act = match act {
        SimpleAct::NormalOperation => Act::NormalOperation,
        SimpleAct::DetectionSystemCheck => Act::DetectionSystemCheck,
        SimpleAct::Mothball => Act::Mothball,
        SimpleAct::Retire => Act::Retire,
        SimpleAct::PlanMade => Act::PlanMade,
        SimpleAct::ReportSent => Act::ReportSent,
        SimpleAct::Note if common.note.trim().is_empty() => return Err(AppError::input("note", "The note is empty.")),
        SimpleAct::Note => Act::Note,
    };
    Ok(Work::plain(act, Detail::default()))
}

impl App {
    /// Today on the clock of the visit's site: nothing is entered for a day after it.
    pub fn today_at(&self, visit: VisitId) -> Result<NaiveDate, AppError> {
        let visit = self.store.visit(visit)?.ok_or(AppError::Unknown { what: "visit" })?;
        Ok(self.moment_of(&visit).date)
    }
}
