//! The motion: one train let go on one spine under one scenario.
//!
//! Lagrange's equation for one coordinate, the leading axle's station q
//! (Goldstein, *Classical Mechanics*, sec. 1.4): M q̈ + ½ M′ v² = −V′ + Q. It knows
//! neither seats' loads nor limits.

mod air;
mod bodies;
mod equation;
mod event;
mod history;
mod ledger;
mod run;
mod stretch;
mod zone;

pub use air::{density_kg_m3, wind_m_s};
pub use history::{History, Samples, State};
pub use ledger::Ledger;
pub use run::{Settings, simulate, simulate_with};

use crate::input::{Goal, Scenario, Train};
use crate::train::Poses;

/// One run to be made.
#[derive(Clone, Copy)]
pub struct Ride<'a> {
    /// The train on its spine.
    pub poses: &'a Poses,
    /// The masses of the same train.
    pub train: &'a Train,
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
    /// As it was meant to, without ever reversing.
    Completed,
    /// Past the finish.
    Overran,
    /// Held at its first standstill outside the finish.
    Stalled,
    /// Reversed at least once, whatever followed.
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

/// Why a run could not be made.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum MotionError {
    /// The integrator gave up.
    #[error(
        "the integration stopped at {time_s:.6} s with the leading axle at {station_m:.3} m: {reason}"
    )]
    Integration {
        /// s.
        time_s: f64,
        /// Leading axle, m (q).
        station_m: f64,
        /// The integrator's words.
        reason: String,
    },
}
