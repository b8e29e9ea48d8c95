//! What may be written in a study file.

use schemars::JsonSchema;
use serde::Deserialize;

use crate::input::dimension::{Acceleration, Frequency};
use crate::input::field::{Entries, Field, Text, WordOr};
use crate::input::quantity::Quantity;
use crate::input::written::alternatives;

/// A study: the designs under comparison, a train, an operation and the envelopes they are held against.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "study", transform = alternatives::study)]
pub(in crate::input) struct StudyFile {
    /// Version of the file format: 1.
    #[schemars(extend("const" = 1))]
    pub(in crate::input) crestfall: Field<u64>,
    /// Name of the study.
    pub(in crate::input) study: Field<Text>,
    /// Designs under comparison: a name and the path of its track file, or `{track, train}`.
    pub(in crate::input) variants: Field<Entries<WordOr<Text, VariantKeys>>>,
    /// The variant the others are compared with; the first where left out.
    pub(in crate::input) baseline: Option<Field<Text>>,
    /// Path of the train file; may be left out where every variant names its own.
    pub(in crate::input) train: Option<Field<Text>>,
    /// Path of the operation file.
    pub(in crate::input) operation: Field<Text>,
    /// Paths of the envelope files.
    #[schemars(extend("minItems" = 1))]
    pub(in crate::input) envelopes: Field<Vec<Field<Text>>>,
    /// Local gravity; 9.80665 m/s2 where left out.
    pub(in crate::input) gravity: Option<Field<Quantity<Acceleration>>>,
    /// Samples a second; 500 Hz where left out.
    pub(in crate::input) rate: Option<Field<Quantity<Frequency>>>,
}

/// A variant with a train of its own.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "variant")]
pub(in crate::input) struct VariantKeys {
    /// Path of the track file.
    pub(in crate::input) track: Field<Text>,
    /// Path of the train file; the study's where left out.
    pub(in crate::input) train: Option<Field<Text>>,
}
