//! Field calculations: how sure a weighing is, what a cylinder may take, and the like.

mod cylinder_limit;
mod cylinder_pressure;
mod leak;
mod nitrogen;
mod pressure_hold;
mod room;
mod vacuum_rise;
mod weighing;

pub use cylinder_limit::{
    Cylinder, CylinderLaw, CylinderLimit, Limit, LimitKind, Missing, Rating, cylinder_limit, default_oil_factor, eighty_percent,
    is_near_critical, oil_factor_is_sound, room_for_vapour,
};
pub use cylinder_pressure::{PressureCheck, PressureVerdict, pressure_check};
pub use leak::{Leak, LeakUnit};
pub use nitrogen::NITROGEN_SOURCE;
pub use pressure_hold::{Hold, HoldAnswer, HoldLeak, HoldVerdict, pressure_hold};
pub use room::{RoomCheck, RoomLimit, RoomLimitKind, parts_per_million, room_check};
pub use vacuum_rise::{
    DRY_PASCAL, LEAST_MINUTES, LEAST_READINGS, STILL_PASCAL, VacuumAnswer, VacuumDoubt, VacuumReading, VacuumVerdict, leak_of_rise,
    vacuum_rise, water_vapour_pressure,
};
pub use weighing::{Direction, Net, ScaleReading, Uncertainty, WeighingError, net};
