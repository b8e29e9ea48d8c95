//! The loads: what an accelerometer fixed in each seat reads, on rider axes, in g.
//!
//! P(q) = O + d_x x + d_y l + d_z u is the path of a point of a car, a = P″ v² + P′ q̈ its
//! acceleration: the normal and tangential parts and the offset's rotation in one formula.
//! Nothing here knows a limit or a file.

mod felt;
mod filtered;
mod margin;

pub use felt::{AxesG, CarLoads, car_from_rider, car_loads, seat_positions};
pub use filtered::{Filtered, filtered, filtered_to_the_end, held_on, memory_s};
pub use margin::{held_back, seat_margins};
