//! What a user may write, key for key, each value with its place.
//!
//! Decoding and the JSON Schema both come from these types; their doc comments
//! are the descriptions an editor shows.

mod alternatives;
mod curve;
pub(super) mod envelope;
pub(super) mod operation;
pub(super) mod study;
pub(super) mod track;
pub(super) mod train;

pub(super) use curve::Curve;

use std::fmt;

use serde::de::{Deserialize, Deserializer, IgnoredAny};

/// A value of a key that has its meaning fixed but is not built yet.
#[derive(Clone, Copy)]
pub(super) struct Later;

impl fmt::Debug for Later {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("later")
    }
}

impl<'de> Deserialize<'de> for Later {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer
            .deserialize_ignored_any(IgnoredAny)
            .map(|_| Self)
    }
}
