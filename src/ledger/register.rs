//! Registers: companies, people, sites, appliances, cylinders, instruments.
//! Each keeps every version with its first day; nothing is overwritten.

use super::{
    ApplianceId, Category, ChargeMethod, CylinderId, CylinderKind, Equipment, GasStatus, InstrumentId, Moment, PersonId, Position,
    RateMethod, SiteId,
};
use crate::quantity::{Mass, Weighing};
use chrono::{DateTime, NaiveDate, Utc};
use serde::{Deserialize, Serialize};

/// One version of a register line.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Dated<T> {
    /// First day; `None` holds from the beginning.
    pub from: Option<NaiveDate>,
    /// Why it changed, where someone said.
    pub reason: Option<String>,
    pub facts: T,
}

/// All versions of a register line, by first day.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[serde(transparent)]
pub struct Versions<T>(Vec<Dated<T>>);

impl<T> Versions<T> {
    /// Holds from the beginning.
    pub fn always(facts: T) -> Self {
        Self(vec![Dated { from: None, reason: None, facts }])
    }

    /// `None` when there is no version at all. Of two versions with the same
    /// first day the one given later wins.
    pub fn new(mut versions: Vec<Dated<T>>) -> Option<Self> {
        versions.sort_by_key(|version| version.from);
        (!versions.is_empty()).then_some(Self(versions))
    }

    /// The facts on a day; `None` before the first version's first day.
    pub fn on(&self, day: NaiveDate) -> Option<&T> {
        self.0.iter().rev().find(|version| version.from.is_none_or(|from| from <= day)).map(|version| &version.facts)
    }

    /// The facts of the last version, whatever its day.
    pub fn latest(&self) -> &T {
        // `new` and `always` refuse to be empty.
        &self.0[self.0.len() - 1].facts
    }

    pub fn first(&self) -> &Dated<T> {
        &self.0[0]
    }

    pub fn all(&self) -> &[Dated<T>] {
        &self.0
    }
}

/// The service company that keeps this store.
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct Company {
    pub name: String,
    pub address: String,
    pub certificate: String,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Person {
    pub id: PersonId,
    pub name: String,
    pub certificate: String,
    pub certificate_kind: String,
    pub valid_from: Option<NaiveDate>,
    pub valid_to: Option<NaiveDate>,
    pub company: String,
    pub company_certificate: String,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Site {
    pub id: SiteId,
    /// Identification; unique in a store.
    pub name: String,
    pub versions: Versions<SiteFacts>,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct SiteFacts {
    /// Ids of rulebooks, in the order in which they were given.
    pub rulebooks: Vec<String>,
    pub owner: String,
    pub operator: String,
    pub address: String,
    pub rate_method: RateMethod,
    /// IANA name; empty means that of the device.
    pub time_zone: String,
}

impl SiteFacts {
    /// A site under these rulebooks; all else is *to complete*.
    pub fn under(rulebooks: Vec<String>) -> Self {
        Self {
            rulebooks,
            owner: String::new(),
            operator: String::new(),
            address: String::new(),
            rate_method: RateMethod::Annualizing,
            time_zone: String::new(),
        }
    }
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Appliance {
    pub id: ApplianceId,
    pub site: SiteId,
    /// Identification; unique at its site.
    pub name: String,
    pub versions: Versions<ApplianceFacts>,
}

impl Appliance {
    /// The first day on which it can have been there: the earliest day of
    /// installation that any version states. A correction states the right
    /// day; a successor of the same identification leaves its predecessor's
    /// history be.
    pub fn there_since(&self) -> Option<NaiveDate> {
        self.versions.all().iter().filter_map(|version| version.facts.installed_on).min()
    }
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct ApplianceFacts {
    pub category: Category,
    /// Designation in the gas catalogue, as `R-448A`.
    pub refrigerant: String,
    /// `None`: not determined yet. No rate can be calculated.
    pub full_charge: Option<Mass>,
    /// The full charge as it was written, for paper.
    pub full_charge_written: Option<Weighing>,
    pub charge_method: Option<ChargeMethod>,
    pub installed_on: Option<NaiveDate>,
    pub equipment: Option<Equipment>,
    pub assembly: String,
    pub description: String,
    pub serial: String,
    /// Where on the site it stands.
    pub place: String,
    pub labelled_hermetically_sealed: bool,
    pub residential: bool,
    pub leakage_detection_system: bool,
    pub residential_or_light_commercial_ac: bool,
    pub product_below_minus_50c: bool,
    pub military: bool,
    /// As written, in cubic metres.
    pub room_volume_m3: Option<String>,
}

impl ApplianceFacts {
    /// What must be known; all else is *to complete*, and nothing is declared.
    pub fn new(category: Category, refrigerant: impl Into<String>) -> Self {
        Self {
            category,
            refrigerant: refrigerant.into(),
            full_charge: None,
            full_charge_written: None,
            charge_method: None,
            installed_on: None,
            equipment: None,
            assembly: String::new(),
            description: String::new(),
            serial: String::new(),
            place: String::new(),
            labelled_hermetically_sealed: false,
            residential: false,
            leakage_detection_system: false,
            residential_or_light_commercial_ac: false,
            product_below_minus_50c: false,
            military: false,
            room_volume_m3: None,
        }
    }
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Cylinder {
    pub id: CylinderId,
    /// Serial or fleet number; unique in a store.
    pub name: String,
    pub versions: Versions<CylinderFacts>,
}

/// When something was read off a cylinder, between the movements of its gas:
/// what moved before is in the reading, what moved after is not.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub struct ReadAt {
    /// On the clock of the device.
    pub at: Moment,
    /// The same to the minute, for sites on another clock.
    pub instant: DateTime<Utc>,
    /// The last entry that was written by then.
    pub after: Position,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct CylinderFacts {
    pub kind: CylinderKind,
    pub tare: Mass,
    pub tare_written: Weighing,
    /// Empty cylinders may hold none yet.
    pub refrigerant: Option<String>,
    pub gas_status: Option<GasStatus>,
    /// When gas and status were last said to be so; `None`: from the version's first day.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub gas_told: Option<ReadAt>,
    /// The last weighing that was not part of an entry.
    pub gross: Option<Mass>,
    pub gross_written: Option<Weighing>,
    /// When that was; `None`: as the version's first day began.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub weighed: Option<ReadAt>,
    /// Water capacity in litres, exact decimal as written or converted (1 kg of water = 1 l).
    pub water_capacity_l: Option<String>,
    /// Stamped maximum: net mass of gas.
    pub stamped_maximum: Option<Mass>,
    pub service_pressure_psig: Option<String>,
    pub test_pressure_bar: Option<String>,
    pub requalify_by: Option<NaiveDate>,
    /// What a look at it found wrong: crack, leak, dent, bulge, bad valve, rust, fire or heat. Empty: nothing.
    #[serde(default, skip_serializing_if = "String::is_empty")]
    pub damage: String,
    /// What it weighed when it was last weighed empty, beside the tare stamped on it.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub tare_found: Option<Weighing>,
    /// Whose cylinder.
    pub owner: String,
    /// Whose gas.
    pub gas_owner: String,
    /// Shop, van, site or person.
    pub location: String,
    /// Reclaimed or recycled gas: facility, address, batch and certificate.
    pub gas_source: String,
    /// Out of use, with the reason.
    pub scrapped: Option<String>,
}

impl CylinderFacts {
    /// What must be known of a cylinder; all else is *to complete*.
    pub fn new(kind: CylinderKind, tare: Mass, tare_written: Weighing) -> Self {
        Self {
            kind,
            tare,
            tare_written,
            refrigerant: None,
            gas_status: None,
            gas_told: None,
            gross: None,
            gross_written: None,
            weighed: None,
            water_capacity_l: None,
            stamped_maximum: None,
            service_pressure_psig: None,
            test_pressure_bar: None,
            requalify_by: None,
            damage: String::new(),
            tare_found: None,
            owner: String::new(),
            gas_owner: String::new(),
            location: String::new(),
            gas_source: String::new(),
            scrapped: None,
        }
    }
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub enum InstrumentKind {
    #[serde(rename = "scale")]
    Scale,
    #[serde(rename = "detector")]
    Detector,
    #[serde(rename = "gauge")]
    Gauge,
    #[serde(rename = "recovery machine")]
    RecoveryMachine,
    #[serde(rename = "hoses")]
    Hoses,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Instrument {
    pub id: InstrumentId,
    pub kind: InstrumentKind,
    pub name: String,
    pub serial: String,
    /// A scale's division, as written on it.
    pub division: Option<Weighing>,
    /// What a set of hoses can hold when it is not emptied.
    pub holds: Option<Weighing>,
    pub checked_on: Option<NaiveDate>,
    pub check_due: Option<NaiveDate>,
}
