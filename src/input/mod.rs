//! The files a user writes, read into values with nothing optional left.
//!
//! Two levels: what may be written, with positions (private), and what the
//! program runs (the public types here). Only this stage opens files. It knows
//! nothing of geometry or physics.

mod access;
mod argument;
mod decode;
mod dimension;
mod document;
mod envelope;
mod field;
mod files;
mod holds;
mod keys;
mod lower;
mod operation;
mod point_file;
mod point_header;
mod points;
mod quantity;
mod read;
mod schema;
mod shape;
mod study;
mod study_file;
mod text;
mod track;
mod train;
mod written;

#[cfg(test)]
mod quantity_tests;
#[cfg(test)]
mod schema_tests;
#[cfg(test)]
mod tests;

pub use argument::speed_m_s;
pub use envelope::{
    Axis, Between, Demand, Document, Envelope, Filter, GravityTerm, NameAt, Rule, RuleKind, Scale,
    Sign, SpeedBounds, StationRange, Status, Stop, Sustained, Where,
};
pub use operation::{
    Air, Device, Goal, Operation, Release, Resistance, Riders, Scenario, SeatName, Wind, Zone,
};
pub use points::{Columns, Fit, Grids, PointTable};
pub use read::{read_envelope, read_study, read_track};
pub use schema::schema;
pub use study::{InputFile, Study, Variant};
pub use track::{Change, Ease, Element, ElementTrack, Extent, Landmark, Start, Track, TrackSource};
pub use train::{Car, Inertia, SHARED_AXLE_M, Seat, Train};

/// The kinds of YAML files.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FileKind {
    /// Variants, a train, an operation and envelopes.
    Study,
    /// Elements or points, and landmarks.
    Track,
    /// Cars and seats.
    Train,
    /// Release, zones, resistance, air and scenarios.
    Operation,
    /// Rules from one document.
    Envelope,
}
