//! The train: cars on axles chained along the spine, as functions of the leading axle's station q.
//!
//! Poses are worked out on a grid in q once per track and train, with exact derivatives at the
//! nodes, and run as quintics in between (`poses`).

mod chain;
mod layout;
mod poses;

pub use crate::spine::Margin;
pub use layout::{Layout, occupied};
pub use poses::{AxlePose, CarPose, Instant, Poses, PosesSettings};

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
    #[error(
        "the track bends too sharply for axle {axle}: nothing lies {spacing_m:.3} m behind the axle \
         ahead of it at station {station_m:.3} m"
    )]
    NoPlaceForAxle {
        /// From 1 at the front.
        axle: usize,
        /// Straight distance to the axle ahead, m.
        spacing_m: f64,
        /// Station of the axle ahead, m.
        station_m: f64,
    },
    /// The tables would need too much memory.
    #[error(
        "the poses of this train on this track need {needed_mb} MB, the bound is {bound_mb} MB"
    )]
    TooLarge {
        /// Megabytes needed.
        needed_mb: u64,
        /// Megabytes allowed.
        bound_mb: u64,
    },
}
