//! The train: cars on axles chained along the spine, as functions of the leading axle's station.

use crate::input;
use crate::spine::Spine;

/// Poses of all cars of a train on a spine.
pub struct Poses {}

/// Why a train cannot be set on a spine.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum PoseError {
    /// Longer than the track.
    #[error("the train's axles span {train_m:.3} m, the track is {track_m:.3} m long")]
    TrainTooLong {
        /// First to last axle, m.
        train_m: f64,
        /// Length of the spine, m.
        track_m: f64,
    },
    /// No place behind an axle at the right straight distance.
    #[error("no place for axle {axle} behind the one at station {station_m:.3} m")]
    NoPlaceForAxle {
        /// From 1 at the front.
        axle: usize,
        /// Station of the axle ahead, m.
        station_m: f64,
    },
}

impl Poses {
    /// Sets a train on a spine.
    ///
    /// # Errors
    /// [`PoseError`] where the chain of axles cannot be laid along the spine.
    pub fn new(_spine: &Spine, _train: &input::Train) -> Result<Self, PoseError> {
        todo!()
    }
    /// Stations of the leading axle for which the whole train is on the track, m: first and last;
    /// unbounded on a closed spine.
    pub fn stations_m(&self) -> (f64, f64) {
        todo!()
    }
}
