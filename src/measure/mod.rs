//! Field calculations: how sure a weighing is, what a cylinder may take, and the like.

mod cylinder_limit;
mod cylinder_pressure;
mod leak;
mod room;
mod weighing;

pub use cylinder_limit::{
    Cylinder, CylinderLaw, CylinderLimit, Limit, LimitKind, Missing, Rating, cylinder_limit, default_oil_factor, eighty_percent,
    is_near_critical, oil_factor_is_sound, room_for_vapour,
};
pub use cylinder_pressure::{PressureCheck, PressureVerdict, pressure_check};
pub use leak::{Leak, LeakUnit};
pub use room::{RoomCheck, RoomLimit, RoomLimitKind, parts_per_million, room_check};
pub use weighing::{Direction, Net, ScaleReading, Uncertainty, WeighingError, net};
