//! The motion: one train let go on one spine under one scenario.

use crate::input::{Goal, Scenario};
use crate::train::Poses;

/// One run to be made.
pub struct Ride<'a> {
    /// The train on its spine.
    pub poses: &'a Poses,
    /// The condition.
    pub scenario: &'a Scenario,
    /// Where it is meant to end.
    pub goal: &'a Goal,
    /// Longest run, s.
    pub time_limit_s: f64,
    /// Local gravity, m/s².
    pub gravity_m_s2: f64,
}

/// How a run ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RunEnd {
    /// As it was meant to.
    Completed,
    /// Past the finish zone.
    Overran,
    /// Held at its first standstill outside the finish.
    Stalled,
    /// Reversed at least once.
    RolledBack,
    /// Still moving at the time limit.
    TimeLimit,
}

/// A change of direction.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reversal {
    /// s.
    pub time_s: f64,
    /// Leading axle, m (q: not wrapped).
    pub station_m: f64,
}

/// Energy of a run, J; works are done on the train, losses negative.
#[derive(Clone, Debug, PartialEq)]
pub struct Ledger {
    /// Kinetic and potential at the start.
    pub start_j: f64,
    /// At the end.
    pub end_j: f64,
    /// Running, side and bearings.
    pub rolling_j: f64,
    /// Air.
    pub air_j: f64,
    /// By zone, in file order.
    pub zones_j: Vec<(String, f64)>,
    /// end − start − all works.
    pub closure_j: f64,
    /// Largest minus smallest kinetic energy plus the sum of the absolute works.
    pub turned_over_j: f64,
}

/// Why a run could not be made.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum MotionError {
    /// The integrator gave up.
    #[error("the integration stopped at {time_s:.6} s: {reason}")]
    Integration {
        /// s.
        time_s: f64,
        /// The integrator's words.
        reason: String,
    },
}

/// One run.
pub struct History {
    /// How it ended.
    pub end: RunEnd,
    /// s.
    pub duration_s: f64,
    /// Leading axle at the end, m (q).
    pub end_station_m: f64,
    /// In order of time.
    pub reversals: Vec<Reversal>,
    /// The books.
    pub energy: Ledger,
}

/// A run at a uniform rate: samples at i/rate from 0 to before the end.
pub struct Samples {
    /// Hz.
    pub rate_hz: f64,
    /// Leading axle, m (q).
    pub train_station_m: Vec<f64>,
    /// m/s.
    pub speed_m_s: Vec<f64>,
    /// m/s².
    pub acceleration_m_s2: Vec<f64>,
}

/// Runs a train.
///
/// # Errors
/// [`MotionError`] where the equation of motion cannot be integrated.
pub fn simulate(_ride: &Ride<'_>) -> Result<History, MotionError> {
    todo!()
}

impl History {
    /// The run at a uniform rate.
    pub fn samples(&self, _rate_hz: f64) -> Samples {
        todo!()
    }
}
