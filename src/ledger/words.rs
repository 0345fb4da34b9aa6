//! The trade's closed lists of words, as written in files and on screen.

use serde::{Deserialize, Serialize};
use std::fmt;

/// A word that is not in its list.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("\u{201c}{found}\u{201d} is not a {what}; known are {known}")]
pub struct UnknownWord {
    pub what: &'static str,
    pub found: String,
    /// The words there are, parted by commas.
    pub known: String,
}

macro_rules! words {
    ($($(#[$doc:meta])* $name:ident, $what:literal { $($(#[$vdoc:meta])* $variant:ident = $word:literal,)* })*) => {$(
        $(#[$doc])*
        #[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
        pub enum $name { $($(#[$vdoc])* #[serde(rename = $word)] $variant,)* }

        impl $name {
            pub const ALL: &'static [Self] = &[$(Self::$variant,)*];

            /// The word as written in files and on screen.
            pub const fn name(self) -> &'static str {
                match self { $(Self::$variant => $word,)* }
            }

            /// # Errors
            /// [`UnknownWord`] lists the words there are.
            pub fn from_name(found: &str) -> Result<Self, UnknownWord> {
                match found {
                    $($word => Ok(Self::$variant),)*
                    _ => Err(UnknownWord {
                        what: $what,
                        found: found.to_owned(),
                        known: [$($word,)*].join(", "),
                    }),
                }
            }
        }

        impl fmt::Display for $name {
            fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
                f.write_str(self.name())
            }
        }
    )*};
}

words! {
    /// How a facility's leak rates are calculated (40 CFR 82.152, *leak rate*).
    RateMethod, "rate method" {
        Annualizing = "annualizing",
        RollingAverage = "rolling average",
    }
    /// What an appliance is to the United States rules (40 CFR 82.152).
    Category, "category" {
        ComfortCooling = "comfort cooling",
        CommercialRefrigeration = "commercial refrigeration",
        IndustrialProcessRefrigeration = "industrial process refrigeration",
        RefrigeratedTransport = "refrigerated transport",
        FireProtection = "fire protection",
        Other = "other",
    }
    /// What an appliance is to the European rules (2024/573 Art. 5(2), (3)).
    Equipment, "equipment" {
        Refrigeration = "refrigeration",
        Chiller = "chiller",
        AirConditioning = "air conditioning",
        HeatPump = "heat pump",
        FireProtection = "fire protection",
        OrganicRankineCycle = "organic Rankine cycle",
        Switchgear = "switchgear",
        RefrigeratedTruckOrTrailer = "refrigerated truck or trailer",
        OtherMobile = "other mobile",
    }
    /// How a full charge was determined (40 CFR 82.152, *full charge*).
    ChargeMethod, "charge method" {
        Manufacturer = "manufacturer",
        Calculation = "calculation",
        Measurement = "measurement",
        Range = "range",
    }
    CylinderKind, "kind of cylinder" {
        Supply = "supply",
        Recovery = "recovery",
        NonRefillable = "non-refillable",
    }
    /// What may be done with the gas in a cylinder.
    GasStatus, "gas status" {
        Virgin = "virgin",
        Recovered = "recovered",
        Recycled = "recycled",
        Reclaimed = "reclaimed",
        /// Two gases in one cylinder: never charged again.
        Mixed = "mixed",
    }
    /// Why gas was added.
    ChargePurpose, "purpose of a charge" {
        Leak = "leak",
        SameLeak = "same leak",
        Installation = "installation",
        FactoryCharge = "factory charge",
        Trim = "trim",
        Retrofit = "retrofit",
        Seasonal = "seasonal",
        Mothball = "mothball",
        Returned = "returned",
        Replacement = "replacement",
    }
    /// Why gas was taken out.
    RecoveryPurpose, "purpose of a recovery" {
        Repair = "repair",
        Seasonal = "seasonal",
        Retrofit = "retrofit",
        Retire = "retire",
        Mothball = "mothball",
        Surplus = "surplus",
    }
    TestKind, "kind of test" {
        LeakTest = "leak test",
        LeakInspection = "leak inspection",
        InitialVerification = "initial verification test",
        FollowUpVerification = "follow-up verification test",
    }
    TestResult, "result" {
        Pass = "pass",
        Fail = "fail",
        LeakFound = "leak found",
        NoLeak = "no leak",
    }
    Scope, "scope" {
        Whole = "whole",
        Part = "part",
    }
}

impl ChargePurpose {
    /// Gas recovered for a repair in the same work is used up by these.
    pub const fn nets_recovered(self) -> bool {
        matches!(self, Self::Leak | Self::SameLeak | Self::Returned | Self::Replacement)
    }
}
