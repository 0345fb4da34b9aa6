//! What is done with a cylinder apart from any visit: bought, weighed where
//! it stands, sent away, returned, lost. Each is judged and is on disk when
//! its function returns.

use super::entries::known_gas;
use super::refusals::{self, Refusal};
use super::standing::{CylinderStanding, WeighingGap, cylinder_standing};
use super::{App, AppError, LimitRules};
use crate::ledger::{
    CylinderAct, CylinderDetail, CylinderEntry, CylinderFacts, CylinderId, Dated, EntryId, GasStatus, InstrumentId, Moment, PersonId,
};
use crate::quantity::{Mass, Weighing};
use crate::store::{Store, Writing};
use serde::{Deserialize, Serialize};

/// What every entry of a cylinder's own book has.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct NewCylinderEntry {
    pub cylinder: CylinderId,
    pub what: CylinderWork,
    /// On the device's clock; `None` is now.
    pub at: Option<Moment>,
    pub person: Option<PersonId>,
    /// The scale that a gross was read on; without it the last digit typed counts.
    pub scale: Option<InstrumentId>,
    /// Supplier, reclaimer, destruction plant, owner of the cylinder.
    pub party: String,
    /// Number of an invoice or consignment note.
    pub paper: String,
    pub certificate: String,
    /// Why gas was lost, or why it is done although a rule asks to think again; printed.
    pub reason: String,
    /// Why the gross differs from the last one known.
    pub weighing_gap: String,
    pub note: String,
}

impl NewCylinderEntry {
    pub fn of(cylinder: CylinderId, what: CylinderWork) -> Self {
        let nothing = String::new;
        Self {
            cylinder,
            what,
            at: None,
            person: None,
            scale: None,
            party: nothing(),
            paper: nothing(),
            certificate: nothing(),
            reason: nothing(),
            weighing_gap: nothing(),
            note: nothing(),
        }
    }
}

/// What was done, with the readings as typed.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum CylinderWork {
    /// `net` as the invoice has it; `gross` where it was weighed when it came.
    Bought {
        refrigerant: String,
        status: GasStatus,
        net: Weighing,
        gross: Option<Weighing>,
    },
    Weighed {
        gross: Weighing,
    },
    /// The whole content, by its gross before it left; or the net of a note.
    SentAway {
        to: Destination,
        amount: Amount,
    },
    /// With the heel that was in it; it is out of use here until gas is bought in it again.
    Returned {
        gross: Weighing,
    },
    /// By what the cylinder weighs now, or estimated.
    Lost {
        amount: Amount,
    },
}

/// How the mass of gas that left is known.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Amount {
    Gross(Weighing),
    Net(Weighing),
}

/// Where gas is sent.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub enum Destination {
    Reclaimer,
    Destruction,
}

impl Destination {
    pub const fn name(self) -> &'static str {
        match self {
            Self::Reclaimer => "reclaimer",
            Self::Destruction => "destruction",
        }
    }
}

/// An entry worked out and judged, not saved.
#[derive(Debug, Clone)]
pub struct PreparedCylinderEntry {
    pub entry: CylinderEntry,
    /// Why it would not be saved; empty when it would.
    pub refusals: Vec<Refusal>,
    /// The gross differs from the last one known.
    pub gap: Option<WeighingGap>,
}

impl PreparedCylinderEntry {
    /// Nothing forbids it, or all that is left to judgement has its reason.
    pub fn may_be_saved(&self) -> bool {
        let has_reason = !self.entry.detail.reason.is_empty();
        self.refusals.iter().all(|refusal| refusal.judgement && has_reason)
    }
}

impl App {
    /// Works an entry out and judges it without saving.
    ///
    /// # Errors
    /// [`AppError::Input`] where something cannot be read yet.
    pub fn prepare_cylinder_entry(&self, new: &NewCylinderEntry) -> Result<PreparedCylinderEntry, AppError> {
        self.prepare_cylinder_entry_in(&self.store, new)
    }

    /// # Errors
    /// [`AppError::Refused`] with every reason; [`AppError::Input`]; the store's own.
    pub fn enter_cylinder(&self, new: &NewCylinderEntry) -> Result<CylinderEntry, AppError> {
        self.store.write(self.now(), |tx| {
            let prepared = self.prepare_cylinder_entry_in(tx, new)?;
            if !prepared.may_be_saved() {
                return Err(AppError::Refused(prepared.refusals));
            }
            let position = tx.add_cylinder_entry(&prepared.entry)?;
            let entry = CylinderEntry { position, ..prepared.entry };
            self.change_facts_with(tx, &entry)?;
            Ok(entry)
        })
    }

    /// Strikes a wrong entry: it stays, struck through, and counts no more.
    ///
    /// # Errors
    /// A reason is missing; it is struck already.
    pub fn strike_cylinder_entry(&self, entry: EntryId, why: &str) -> Result<CylinderEntry, AppError> {
        let why = why.trim();
        if why.is_empty() {
            return Err(AppError::input("why", "Write why this entry is struck."));
        }
        self.store.write(self.now(), |tx| {
            let struck = tx.cylinder_entry(entry)?.ok_or(AppError::Unknown { what: "entry" })?;
            let detail = CylinderDetail { reason: why.to_owned(), ..CylinderDetail::default() };
            let strike = CylinderEntry { strikes: Some(entry), ..self.cylinder_entry_now(struck.cylinder, CylinderAct::Strike, detail) };
            let position = tx.add_cylinder_entry(&strike)?;
            if matches!(struck.act, CylinderAct::Returned { .. }) {
                self.put_in_use(tx, struck.cylinder, why)?;
            }
            Ok(CylinderEntry { position, ..strike })
        })
    }

    fn cylinder_entry_now(&self, cylinder: CylinderId, act: CylinderAct, detail: CylinderDetail) -> CylinderEntry {
        let zone = self.clock.zone();
        CylinderEntry {
            id: EntryId(self.new_id()),
            cylinder,
            at: self.moment_in(zone),
            time_zone: zone.name().to_owned(),
            position: 0,
            written: self.now(),
            act,
            gross_after: None,
            division: None,
            strikes: None,
            struck_by: None,
            detail,
        }
    }

    fn prepare_cylinder_entry_in(&self, store: &Store, new: &NewCylinderEntry) -> Result<PreparedCylinderEntry, AppError> {
        let at = new.at.unwrap_or_else(|| self.moment_in(self.clock.zone()));
        let cylinder = cylinder_standing(store, new.cylinder, at.date, None)?;
        if let Some(person) = new.person {
            store.person(person)?.ok_or(AppError::Unknown { what: "person" })?;
        }
        let scale = match new.scale {
            Some(scale) => store.instrument(scale)?.ok_or(AppError::Unknown { what: "scale" })?.division,
            None => None,
        };
        let figures = figures(&new.what, &cylinder)?;
        let division = figures
            .gross
            .as_ref()
            .map(|(_, written)| scale.and_then(|division| division.mass().ok()).unwrap_or_else(|| written.last_digit()));
        let reason = new.reason.trim();
        if matches!(new.what, CylinderWork::Lost { .. }) && reason.is_empty() {
            return Err(AppError::input("reason", "Write how the gas was lost."));
        }
        let explained = !new.weighing_gap.trim().is_empty();
        let sites = store.registers()?.sites;
        let rulebooks: Vec<String> = sites.iter().flat_map(|site| &site.versions.latest().rulebooks).cloned().collect();
        let rules = LimitRules::under(&rulebooks, self.oil_factor()?);
        let gross = figures.gross.as_ref().map(|(gross, _)| *gross);
        let mut refused = refusals::of_cylinder_entry(&cylinder, &figures.act, gross, rules, at.date, self.today());
        // What came from a supplier or is told to be lost explains itself.
        let asked = matches!(new.what, CylinderWork::Weighed { .. } | CylinderWork::SentAway { .. } | CylinderWork::Returned { .. });
        let read = gross.zip(division).filter(|_| asked);
        refused.extend(read.and_then(|(gross, division)| refusals::of_gap(&cylinder, gross, division, explained)));
        refused.sort_by_key(|refusal| refusal.judgement);
        let text = |text: &str| text.trim().to_owned();
        let detail = CylinderDetail {
            person: new.person,
            gross: figures.gross.map(|(_, written)| written),
            stated: figures.stated,
            party: text(&new.party),
            destination: match new.what {
                CylinderWork::SentAway { to, .. } => to.name().to_owned(),
                _ => String::new(),
            },
            paper: text(&new.paper),
            certificate: text(&new.certificate),
            reason: reason.to_owned(),
            weighing_gap: text(&new.weighing_gap),
            note: text(&new.note),
        };
        let entry =
            CylinderEntry { at, gross_after: figures.gross_after, division, ..self.cylinder_entry_now(new.cylinder, figures.act, detail) };
        Ok(PreparedCylinderEntry { entry, refusals: refused, gap: read.and_then(|(gross, division)| cylinder.gap(gross, division)) })
    }

    /// Whether the cylinder is in use here, and where its gas comes from.
    fn change_facts_with(&self, tx: &Writing<'_>, entry: &CylinderEntry) -> Result<(), AppError> {
        let last = tx.cylinder(entry.cylinder)?.ok_or(AppError::Unknown { what: "cylinder" })?.versions.latest().clone();
        let detail = &entry.detail;
        let facts = match &entry.act {
            CylinderAct::Returned { .. } => {
                let to = if detail.party.is_empty() { "its owner" } else { &detail.party };
                CylinderFacts { scrapped: Some(format!("{RETURNED} {to}")), ..last }
            }
            CylinderAct::Bought { status, .. } => {
                let used = matches!(status, GasStatus::Recycled | GasStatus::Reclaimed);
                let source = joined([&detail.party, &detail.certificate]);
                CylinderFacts {
                    scrapped: last.scrapped.clone().filter(|why| !why.starts_with(RETURNED)),
                    gas_source: if used && !source.is_empty() { source } else { last.gas_source.clone() },
                    ..last.clone()
                }
            }
            _ => return Ok(()),
        };
        let from = entry.at.date;
        if tx.cylinder(entry.cylinder)?.is_some_and(|known| *known.versions.latest() != facts) {
            tx.add_cylinder_version(entry.cylinder, &Dated { from: Some(from), reason: Some(entry.act.name().to_owned()), facts })?;
        }
        Ok(())
    }

    fn put_in_use(&self, tx: &Writing<'_>, cylinder: CylinderId, why: &str) -> Result<(), AppError> {
        let last = tx.cylinder(cylinder)?.ok_or(AppError::Unknown { what: "cylinder" })?.versions.latest().clone();
        let facts = CylinderFacts { scrapped: None, ..last };
        Ok(tx.add_cylinder_version(cylinder, &Dated { from: Some(self.today()), reason: Some(why.to_owned()), facts })?)
    }
}

/// Why a cylinder is out of use that went back to its owner begins so.
pub(super) const RETURNED: &str = "returned to";

fn joined<const N: usize>(parts: [&String; N]) -> String {
    parts.into_iter().map(String::as_str).filter(|part| !part.is_empty()).collect::<Vec<_>>().join("; ")
}

/// What the readings come to.
struct Figures {
    act: CylinderAct,
    /// As read, with what was typed.
    gross: Option<(Mass, Weighing)>,
    gross_after: Option<Mass>,
    stated: Option<Weighing>,
}

fn figures(what: &CylinderWork, cylinder: &CylinderStanding) -> Result<Figures, AppError> {
    let tare = cylinder.facts.tare;
    let plain = |act, gross_after, gross| Figures { act, gross: Some(gross), gross_after: Some(gross_after), stated: None };
    Ok(match what {
        CylinderWork::Bought { refrigerant, status, net, gross } => {
            let mass = positive("net", net)?;
            let gross = gross.as_ref().map(|gross| read("gross", gross)).transpose()?;
            let refrigerant = known_gas(refrigerant)?.to_owned();
            let act = CylinderAct::Bought { refrigerant, status: *status, mass };
            Figures { act, gross_after: gross.as_ref().map(|(mass, _)| *mass), gross, stated: Some(net.clone()) }
        }
        CylinderWork::Weighed { gross } => {
            let gross = read("gross", gross)?;
            plain(CylinderAct::Weighed, gross.0, gross)
        }
        CylinderWork::SentAway { amount: Amount::Gross(gross), .. } => {
            let gross = read("gross", gross)?;
            let mass = gross.0 - tare;
            if !mass.is_positive() {
                return Err(AppError::input("gross", "By this weight there is nothing in the cylinder to send away."));
            }
            plain(CylinderAct::SentAway { mass }, tare, gross)
        }
        CylinderWork::Returned { gross } => {
            let gross = read("gross", gross)?;
            plain(CylinderAct::Returned { heel: (gross.0 - tare).max(Mass::ZERO) }, tare, gross)
        }
        CylinderWork::Lost { amount: Amount::Gross(gross) } => {
            let gross = read("gross", gross)?;
            let unknown = || AppError::input("gross", "What was in the cylinder before is not known: write down how much was lost.");
            let mass = cylinder.balance.content.mass().ok_or_else(unknown)? - (gross.0 - tare);
            if !mass.is_positive() {
                return Err(AppError::input("gross", "By this weight nothing is missing from the cylinder."));
            }
            plain(CylinderAct::Lost { mass }, gross.0, gross)
        }
        CylinderWork::SentAway { amount: Amount::Net(net), .. } => {
            let act = CylinderAct::SentAway { mass: positive("net", net)? };
            Figures { act, gross: None, gross_after: None, stated: Some(net.clone()) }
        }
        CylinderWork::Lost { amount: Amount::Net(net) } => {
            let act = CylinderAct::Lost { mass: positive("net", net)? };
            Figures { act, gross: None, gross_after: None, stated: Some(net.clone()) }
        }
    })
}

fn read(field: &'static str, written: &Weighing) -> Result<(Mass, Weighing), AppError> {
    let mass = written.mass().map_err(|e| AppError::input(field, format!("{e}.")))?;
    if mass.is_negative() {
        return Err(AppError::input(field, format!("{} is no gross weight.", written.text())));
    }
    Ok((mass, written.clone()))
}

fn positive(field: &'static str, written: &Weighing) -> Result<Mass, AppError> {
    let mass = written.mass().map_err(|e| AppError::input(field, format!("{e}.")))?;
    if mass.is_positive() { Ok(mass) } else { Err(AppError::input(field, "This mass is more than nothing.")) }
}
