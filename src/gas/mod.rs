//! The refrigerant catalogue: what each gas is made of, what it does to the ozone layer and the climate by each set
//! of values, how it can hurt, and its pressures and densities. Every value carries its source (`data/`).
//!
//! A blend's ODP and GWP are computed from its nominal composition and never rounded.

mod blend;
mod safety;
mod saturation;
mod source;
mod substance;
mod table;
mod weight;

pub use blend::{Gas, Part, Role, all, find, like, mixture};
pub use safety::{Limits, SafetyClass};
pub use source::{Figure, Source, Standing};
pub use substance::{EuListing, GwpSet, Substance, substances};
pub use weight::{UsGwp, Weighting};
