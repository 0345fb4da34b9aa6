//! One substance and what the treaty, the IPCC and the laws say of it.

use super::source::Figure;
use super::table::{self, Row};
use std::sync::LazyLock;

/// A table of global warming potentials over 100 years, relative to CO₂.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum GwpSet {
    IpccAr4,
    IpccAr5,
    IpccAr6,
    /// Regulation (EU) 2024/573, Annexes I, II and VI.
    Eu573,
    /// Regulation (EU) 2024/590, Annex I: ozone-depleting substances.
    Eu590,
    /// Regulation (EU) No 517/2014, still the basis in Great Britain.
    Gb517,
    /// 40 CFR 84.64(b) and 42 U.S.C. 7675(c).
    Us84,
}

impl GwpSet {
    pub const ALL: [Self; 7] = [Self::IpccAr4, Self::IpccAr5, Self::IpccAr6, Self::Eu573, Self::Eu590, Self::Gb517, Self::Us84];

    /// The set's name as records print it.
    pub fn name(self) -> &'static str {
        match self {
            Self::IpccAr4 => "IPCC AR4",
            Self::IpccAr5 => "IPCC AR5",
            Self::IpccAr6 => "IPCC AR6",
            Self::Eu573 => "Regulation (EU) 2024/573",
            Self::Eu590 => "Regulation (EU) 2024/590",
            Self::Gb517 => "Regulation (EU) No 517/2014",
            Self::Us84 => "40 CFR 84.64",
        }
    }

    fn column(self) -> &'static str {
        match self {
            Self::IpccAr4 => "ar4",
            Self::IpccAr5 => "ar5",
            Self::IpccAr6 => "ar6",
            Self::Eu573 => "eu573",
            Self::Eu590 => "eu590",
            Self::Gb517 => "gb517",
            Self::Us84 => "us84",
        }
    }
}

/// Where Regulation (EU) 2024/573 lists a substance.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum EuListing {
    /// Annex I: HFCs and PFCs.
    AnnexI,
    /// Annex II, section 1: unsaturated HFCs and HCFCs.
    AnnexIiSection1,
    /// Neither.
    None,
}

/// A substance of which a gas consists.
#[derive(Debug)]
pub struct Substance {
    designation: String,
    name: String,
    formula: String,
    cas: String,
    annex: Option<String>,
    odp: Figure,
    gwps: [Option<Figure>; GwpSet::ALL.len()],
    eu_listing: EuListing,
    us_regulated: bool,
}

impl Substance {
    /// `R-22`.
    pub fn designation(&self) -> &str {
        &self.designation
    }

    pub fn name(&self) -> &str {
        &self.name
    }

    pub fn formula(&self) -> &str {
        &self.formula
    }

    /// Chemical Abstracts Service number.
    pub fn cas(&self) -> &str {
        &self.cas
    }

    /// Annex and group of the Montreal Protocol: `C/I`.
    pub fn annex(&self) -> Option<&str> {
        self.annex.as_deref()
    }

    /// kg CFC-11 equivalent per kg.
    pub fn odp(&self) -> Figure {
        self.odp
    }

    /// kg CO₂ equivalent per kg; `None` where the set has no value.
    pub fn gwp(&self, set: GwpSet) -> Option<Figure> {
        self.gwps[set as usize]
    }

    pub fn eu_listing(&self) -> EuListing {
        self.eu_listing
    }

    /// Listed in 42 U.S.C. 7675(c).
    pub fn us_regulated(&self) -> bool {
        self.us_regulated
    }

    /// Controlled by Annex A, B, C or E of the Montreal Protocol. Annex F lists the HFCs, which do not harm the ozone layer.
    pub fn is_ods(&self) -> bool {
        self.annex().is_some_and(|annex| !annex.starts_with('F'))
    }

    /// Has chlorine or bromine in its formula.
    pub fn has_chlorine_or_bromine(&self) -> bool {
        self.formula.contains("Cl") || self.formula.contains("Br")
    }

    /// Has chlorine or bromine, yet the treaty lists it in no annex, so that it counts as 0.
    pub fn left_out_by_the_treaty(&self) -> bool {
        self.has_chlorine_or_bromine() && self.annex.is_none()
    }

    fn read(row: &Row) -> Option<Self> {
        Some(Self {
            designation: row.get("designation").to_owned(),
            name: row.get("name").to_owned(),
            formula: row.get("formula").to_owned(),
            cas: row.get("cas").to_owned(),
            annex: Some(row.get("annex")).filter(|annex| !annex.is_empty()).map(str::to_owned),
            odp: row.figure("odp", "odp_source")?,
            gwps: GwpSet::ALL.map(|set| row.figure(set.column(), &format!("{}_source", set.column()))),
            eu_listing: match row.get("eu573_listing") {
                "annex I" => EuListing::AnnexI,
                "annex II section 1" => EuListing::AnnexIiSection1,
                _ => EuListing::None,
            },
            us_regulated: row.get("us_regulated") == "yes",
        })
    }
}

static SUBSTANCES: LazyLock<Vec<Substance>> =
    LazyLock::new(|| table::rows(include_str!("data/substances.csv")).iter().filter_map(Substance::read).collect());

/// Every substance in the catalogue, pure refrigerants and parts of blends.
pub fn substances() -> &'static [Substance] {
    &SUBSTANCES
}

pub(super) fn substance(designation: &str) -> Option<&'static Substance> {
    SUBSTANCES.iter().find(|substance| substance.designation == designation)
}

#[cfg(test)]
mod tests {
    use super::*;
    use num_traits::Zero;

    #[test]
    fn all_are_read() {
        assert_eq!(substances().len(), 40);
    }

    /// Common practice: what has no chlorine and no bromine leaves the ozone layer alone, and what has, does not.
    #[test]
    fn chlorine_and_bromine_decide_the_odp() {
        let mut left_out = Vec::new();
        for substance in substances() {
            if substance.left_out_by_the_treaty() {
                left_out.push(substance.designation());
                assert!(substance.odp().value.is_zero(), "{}", substance.designation());
                continue;
            }
            assert_eq!(substance.has_chlorine_or_bromine(), !substance.odp().value.is_zero(), "{}", substance.designation());
            assert_eq!(substance.is_ods(), !substance.odp().value.is_zero(), "{}", substance.designation());
        }
        // In no annex of the Montreal Protocol; their scientific ODP is small but not zero.
        assert_eq!(left_out, ["R-1233zd(E)", "R-1130(E)"]);
    }

    /// 40 CFR 84.64 lists no ozone-depleting substance, so that the account falls back to IPCC AR4 for them.
    #[test]
    fn the_us_table_has_no_ozone_depleting_substance() {
        for substance in substances().iter().filter(|substance| substance.is_ods()) {
            assert_eq!(substance.gwp(GwpSet::Us84), None, "{}", substance.designation());
            assert!(substance.gwp(GwpSet::IpccAr4).is_some(), "{}", substance.designation());
            assert!(substance.gwp(GwpSet::Eu590).is_some(), "{}", substance.designation());
        }
    }

    #[test]
    fn the_listed_hfcs_have_their_exchange_values() {
        let listed: Vec<_> = substances().iter().filter(|s| s.us_regulated()).map(Substance::designation).collect();
        assert_eq!(listed, ["R-23", "R-32", "R-125", "R-134a", "R-143a", "R-152a", "R-227ea", "R-236fa", "R-245fa"]);
        assert!(substances().iter().filter(|s| s.us_regulated()).all(|s| s.gwp(GwpSet::Us84).is_some()));
    }
}
