//! Field calculations: how sure a weighing is, what a cylinder may take, and the like.

mod cylinder_limit;
mod weighing;

pub use cylinder_limit::{
    Cylinder, CylinderLaw, CylinderLimit, Limit, LimitKind, Missing, Rating, cylinder_limit, default_oil_factor, oil_factor_is_sound,
};
pub use weighing::{Direction, Net, ScaleReading, Uncertainty, WeighingError, net};
