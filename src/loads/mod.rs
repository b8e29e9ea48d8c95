//! The loads: what an accelerometer fixed in each seat reads, on rider axes.

use nalgebra::Vector3;

use crate::input::{Filter, GravityTerm, Seat};
use crate::motion::Samples;
use crate::train::Poses;

/// Three axes (x, y, z) of equally many samples, g.
pub type AxesG = [Vec<f64>; 3];

/// What the seats of one car feel during a run.
pub struct CarLoads {
    /// Mean station of the car's axles at each sample, m (q, not wrapped).
    pub station_m: Vec<f64>,
    /// By seat, in file order.
    pub seats: Vec<AxesG>,
}

/// Loads of all seats of car `car` (from 0).
pub fn car_loads(
    _poses: &Poses,
    _car: usize,
    _seats: &[Seat],
    _samples: &Samples,
    _gravity_m_s2: f64,
    _term: GravityTerm,
) -> CarLoads {
    todo!()
}

/// Positions of a seat's reference point at each sample, world axes, m.
pub fn seat_positions(
    _poses: &Poses,
    _car: usize,
    _seat: &Seat,
    _samples: &Samples,
) -> Vec<Vector3<f64>> {
    todo!()
}

/// Loads after an envelope's filter.
pub struct Filtered {
    /// Hz.
    pub rate_hz: f64,
    /// The filter's delay at zero frequency, s.
    pub delay_s: f64,
    /// Filtered loads.
    pub axes_g: AxesG,
}

/// Runs an envelope's filter over three axes.
pub fn filtered(_axes_g: &AxesG, _rate_hz: f64, _filter: Filter) -> Filtered {
    todo!()
}
