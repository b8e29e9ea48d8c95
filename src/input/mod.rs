//! The files a user writes, read into values with nothing optional left.
//!
//! Two levels: what may be written, with positions (private), and what the
//! program runs (the public types here). Only this stage opens files. It knows
//! nothing of geometry or physics.

mod envelope;
mod operation;
mod points;
mod study;
mod track;
mod train;

pub use envelope::{
    Axis, Between, Demand, Document, Envelope, Filter, GravityTerm, Rule, RuleKind, Sign, Status,
    Sustained,
};
pub use operation::{
    Air, Device, Goal, Operation, Release, Resistance, Riders, Scenario, SeatName, Wind, Zone,
};
pub use points::{Columns, Fit, PointTable};
pub use study::{InputFile, Study, Variant};
pub use track::{Change, Ease, Element, ElementTrack, Extent, Landmark, Start, Track, TrackSource};
pub use train::{Car, Inertia, Seat, Train};
