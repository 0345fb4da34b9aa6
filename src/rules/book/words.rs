//! The words of rulebooks: which gases, which equipment, what is measured,
//! which duties there are.

use serde::Deserialize;

/// Which gases a scope row takes.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
pub enum GasTest {
    /// Every gas of the catalogue.
    #[serde(rename = "any")]
    Any,
    /// A gas with a CFC, HCFC or halon part.
    #[serde(rename = "ozone-depleting")]
    OzoneDepleting,
    /// A gas with an HFC, PFC or HFO part.
    #[serde(rename = "substitute")]
    Substitute,
    /// A listed HFC in any proportion (42 U.S.C. 7675(c)), or a substitute with
    /// a GWP over the row's; not solely ozone-depleting.
    #[serde(rename = "regulated or substitute")]
    RegulatedOrSubstitute,
    /// An HFC, PFC or HFO part and no ozone-depleting one.
    #[serde(rename = "fluorinated")]
    Fluorinated,
    /// An HFC or PFC part and no ozone-depleting one.
    #[serde(rename = "fluorinated, Annex I")]
    FluorinatedAnnexI,
    /// An ozone-depleting, HFC or PFC part.
    #[serde(rename = "halocarbon")]
    Halocarbon,
}

/// Which equipment a scope row takes.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Deserialize)]
pub enum EquipmentTest {
    #[default]
    #[serde(rename = "any")]
    Any,
    /// Refrigeration, air conditioning, heat pumps, fire protection.
    #[serde(rename = "stationary")]
    Stationary,
    #[serde(rename = "stationary, trucks and trailers")]
    StationaryTrucksAndTrailers,
    #[serde(rename = "other mobile")]
    OtherMobile,
}

/// What a band of leak check intervals measures.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
pub enum Basis {
    /// Tonnes of CO₂ equivalent of the whole gas, where it has an HFC or PFC part.
    #[serde(rename = "t CO2e")]
    TonnesCo2e,
    /// Kilograms of the parts listed in 2024/573 Annex II section 1.
    #[serde(rename = "kg of Annex II section 1 gas")]
    KgOfHfo,
    /// Kilograms of the whole gas.
    #[serde(rename = "kg")]
    Kg,
}

/// The kinds of duty this program can follow.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Deserialize)]
pub enum DutyKind {
    #[serde(rename = "repair")]
    Repair,
    #[serde(rename = "initial verification test")]
    InitialVerification,
    #[serde(rename = "follow-up verification test")]
    FollowUpVerification,
    #[serde(rename = "retrofit or retirement plan")]
    Plan,
    #[serde(rename = "leak inspection")]
    LeakInspection,
    #[serde(rename = "chronic leak report")]
    ChronicLeakReport,
    #[serde(rename = "leak check")]
    LeakCheck,
    #[serde(rename = "re-check")]
    ReCheck,
    #[serde(rename = "repair of a found leak")]
    RepairOfFoundLeak,
    #[serde(rename = "leakage detection system check")]
    DetectionSystemCheck,
    #[serde(rename = "determine full charge")]
    DetermineFullCharge,
}

/// From which event a duty's months are counted.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
pub enum CountedFrom {
    #[serde(rename = "rate")]
    Rate,
    #[serde(rename = "repair")]
    Repair,
    #[serde(rename = "follow-up verification test")]
    FollowUpVerification,
}

impl DutyKind {
    pub const fn name(self) -> &'static str {
        match self {
            Self::Repair => "repair",
            Self::InitialVerification => "initial verification test",
            Self::FollowUpVerification => "follow-up verification test",
            Self::Plan => "retrofit or retirement plan",
            Self::LeakInspection => "leak inspection",
            Self::ChronicLeakReport => "chronic leak report",
            Self::LeakCheck => "leak check",
            Self::ReCheck => "re-check",
            Self::RepairOfFoundLeak => "repair of a found leak",
            Self::DetectionSystemCheck => "leakage detection system check",
            Self::DetermineFullCharge => "determine full charge",
        }
    }
}
