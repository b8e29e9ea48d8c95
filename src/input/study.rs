//! A study: variants, a train, an operation and envelopes, with all files it names.

use crate::diagnostic::Place;
use crate::input::{Envelope, Operation, Track, Train};

/// All that a run needs.
#[derive(Clone, Debug)]
pub struct Study {
    /// The name given in the file.
    pub name: String,
    /// In file order; at least one.
    pub variants: Vec<Variant>,
    /// Index of the variant others are compared with.
    pub baseline: usize,
    /// How the ride is operated.
    pub operation: Operation,
    /// In file order; at least one.
    pub envelopes: Vec<Envelope>,
    /// Local gravity, m/s².
    pub gravity_m_s2: f64,
    /// Samples a second.
    pub rate_hz: f64,
    /// Every file that was read, in reading order.
    pub files: Vec<InputFile>,
    /// The value of the `study` key.
    pub place: Place,
}

/// One design under comparison.
#[derive(Clone, Debug)]
pub struct Variant {
    /// Its name.
    pub name: String,
    /// Its track.
    pub track: Track,
    /// Its train.
    pub train: Train,
    /// Its name in the file.
    pub place: Place,
}

/// A file that was read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct InputFile {
    /// Path relative to the study's folder, with forward slashes.
    pub name: String,
    /// SHA-256 of its bytes, lower-case hexadecimal.
    pub sha256: String,
}
