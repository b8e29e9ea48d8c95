//! What may be written in an envelope file.

use schemars::JsonSchema;
use serde::Deserialize;

use crate::input::dimension::{Frequency, Length, Speed, Time};
use crate::input::field::{Field, Text, WordOr};
use crate::input::quantity::Quantity;
use crate::input::written::{Curve, Later, alternatives};

/// An acceptance envelope: rules from one document, transcribed by the user.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "envelope", transform = alternatives::envelope)]
pub(in crate::input) struct EnvelopeFile {
    /// Version of the file format: 1.
    #[schemars(extend("const" = 1))]
    pub(in crate::input) crestfall: Field<u64>,
    /// Name of the envelope.
    pub(in crate::input) envelope: Field<Text>,
    /// What kind of numbers it holds.
    pub(in crate::input) status: Field<StatusWord>,
    /// The document it comes from.
    pub(in crate::input) source: Field<SourceKeys>,
    /// Whether its loads hold gravity.
    pub(in crate::input) gravity: Field<GravityWord>,
    /// What its loads are filtered with: `none`, or `{butterworth: {poles, corner, passes}}`.
    pub(in crate::input) filter: Field<WordOr<FilterWord, FilterKeys>>,
    /// Its rules.
    #[schemars(extend("minItems" = 1))]
    pub(in crate::input) rules: Field<Vec<Field<RuleKeys>>>,
}

/// What kind of numbers an envelope holds.
#[derive(Clone, Copy, Debug, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "status")]
pub(in crate::input) enum StatusWord {
    /// Invented, to show the tool.
    Illustrative,
    /// Copied from a published document.
    Transcribed,
    /// Set by the project.
    Project,
}

/// The document an envelope comes from.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "source")]
pub(in crate::input) struct SourceKeys {
    /// Its number or title.
    pub(in crate::input) document: Field<Text>,
    /// Its edition.
    pub(in crate::input) edition: Field<Text>,
    /// A remark.
    pub(in crate::input) note: Option<Field<Text>>,
}

/// Whether loads hold gravity.
#[derive(Clone, Copy, Debug, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "gravity")]
pub(in crate::input) enum GravityWord {
    /// As an accelerometer reads: 1 g headward at rest.
    Included,
    /// Acceleration alone: 0 at rest.
    Excluded,
}

/// No filter.
#[derive(Clone, Copy, Debug, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "no_filter")]
pub(in crate::input) enum FilterWord {
    /// Loads are judged as they are.
    None,
}

/// A filter by family.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "filter", extend("required" = ["butterworth"]))]
pub(in crate::input) struct FilterKeys {
    /// Butterworth low-pass.
    pub(in crate::input) butterworth: Option<Field<ButterworthKeys>>,
    #[schemars(skip)]
    pub(in crate::input) moving_average: Option<Field<Later>>,
}

/// A Butterworth low-pass.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "butterworth")]
pub(in crate::input) struct ButterworthKeys {
    /// 1 to 8.
    #[schemars(extend("minimum" = 1, "maximum" = 8))]
    pub(in crate::input) poles: Field<u64>,
    /// Corner frequency (half the power).
    pub(in crate::input) corner: Field<Quantity<Frequency>>,
    /// `one`: forward only.
    pub(in crate::input) passes: Field<PassesWord>,
}

/// How often a filter runs.
#[derive(Clone, Copy, Debug, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "passes")]
pub(in crate::input) enum PassesWord {
    /// Forward only.
    One,
    #[schemars(skip)]
    ZeroPhase,
}

/// One requirement.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "rule", transform = alternatives::rule)]
pub(in crate::input) struct RuleKeys {
    /// Its name, unique in the envelope.
    pub(in crate::input) id: Field<Text>,
    /// What it demands.
    pub(in crate::input) kind: Field<KindWord>,
    /// Clause of the document.
    pub(in crate::input) clause: Option<Field<Text>>,
    /// A remark.
    pub(in crate::input) note: Option<Field<Text>>,
    /// Axis of the rider: x forward, y left, z headward.
    pub(in crate::input) axis: Option<Field<AxisWord>>,
    /// Which way a load counts; needed with `limits`.
    pub(in crate::input) sign: Option<Field<SignWord>>,
    /// Limits in g, above 0, against duration; or give `floor`.
    #[schemars(transform = alternatives::limits)]
    pub(in crate::input) limits: Option<Field<Curve>>,
    /// Least loads in g, below 1, against duration; in place of `limits` and `sign`.
    #[schemars(transform = alternatives::floor)]
    pub(in crate::input) floor: Option<Field<Curve>>,
    /// How the curve runs between its points.
    pub(in crate::input) between: Option<Field<BetweenWord>>,
    /// Spells shorter than this are listed, not judged.
    pub(in crate::input) ignore_below: Option<Field<Quantity<Time>>>,
    /// How duration is read: `spell`, the default.
    pub(in crate::input) reading: Option<Field<ReadingWord>>,
    /// Least speed of the train.
    pub(in crate::input) min: Option<Field<Quantity<Speed>>>,
    /// Largest speed of the train.
    pub(in crate::input) max: Option<Field<Quantity<Speed>>>,
    /// Whether the train must come to rest, or must not.
    pub(in crate::input) stop: Option<Field<StopWord>>,
    /// Where, when and for whom it holds; everywhere, always and for all where left out.
    #[serde(rename = "where")]
    pub(in crate::input) holds: Option<Field<WhereKeys>>,
    /// What its limits are multiplied by.
    pub(in crate::input) scale: Option<Field<ScaleKeys>>,
    #[schemars(skip)]
    pub(in crate::input) only_if: Option<Field<Later>>,
    #[schemars(skip)]
    pub(in crate::input) outcome: Option<Field<Later>>,
}

/// Where, when and for whom a rule holds: different keys are and-ed, the entries of one or-ed.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "where", extend("minProperties" = 1))]
pub(in crate::input) struct WhereKeys {
    /// Stretches by station: the seat's own, for a `speed` rule the leading axle's.
    #[schemars(extend("minItems" = 1))]
    pub(in crate::input) stations: Option<Field<Vec<Field<StationsKeys>>>>,
    /// Names of elements or landmarks.
    #[schemars(extend("minItems" = 1))]
    pub(in crate::input) landmarks: Option<Field<Vec<Field<Text>>>>,
    /// Names of scenarios.
    #[schemars(extend("minItems" = 1))]
    pub(in crate::input) scenarios: Option<Field<Vec<Field<Text>>>>,
    /// Car and seat, such as `1-front-left`.
    #[schemars(extend("minItems" = 1))]
    pub(in crate::input) seats: Option<Field<Vec<Field<Text>>>>,
}

/// A stretch of stations.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "stations")]
pub(in crate::input) struct StationsKeys {
    /// First station.
    pub(in crate::input) from: Field<Quantity<Length>>,
    /// Last station; below `from` across the seam of a closed track.
    pub(in crate::input) to: Field<Quantity<Length>>,
}

/// What limits are multiplied by, and why.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "scale")]
pub(in crate::input) struct ScaleKeys {
    /// Above 0.
    #[schemars(extend("minimum" = 1e-6, "maximum" = 1e6))]
    pub(in crate::input) factor: Field<f64>,
    /// Why; it is shown with every result.
    pub(in crate::input) reason: Field<Text>,
}

/// Whether the train must come to rest, or must not.
#[derive(Clone, Copy, Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "stop")]
pub(in crate::input) enum StopWord {
    /// It must neither come to rest nor reverse.
    Never,
    /// It must come to rest.
    Required,
}

/// What a rule demands.
#[derive(Clone, Copy, Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "rule_kind")]
pub(in crate::input) enum KindWord {
    /// A limit on one axis against duration.
    Sustained,
    #[schemars(skip)]
    Combined,
    #[schemars(skip)]
    Resultant,
    #[schemars(skip)]
    Onset,
    #[schemars(skip)]
    Reversal,
    #[schemars(skip)]
    After,
    #[schemars(skip)]
    Index,
    /// Bounds on the speed of the train.
    Speed,
}

/// Axes of the rider.
#[derive(Clone, Copy, Debug, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "axis")]
pub(in crate::input) enum AxisWord {
    /// Forward (eyes back).
    X,
    /// Left.
    Y,
    /// Headward (eyes down).
    Z,
}

/// Which way a load counts.
#[derive(Clone, Copy, Debug, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "sign")]
pub(in crate::input) enum SignWord {
    /// The load.
    Positive,
    /// Its opposite.
    Negative,
}

/// How a curve runs between its points.
#[derive(Clone, Copy, Debug, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "between")]
pub(in crate::input) enum BetweenWord {
    /// Straight in duration.
    Linear,
    /// The value of the last point at or before the duration.
    Step,
    /// Straight in the logarithm of duration.
    LogTime,
}

/// How duration is read.
#[derive(Clone, Copy, Debug, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "reading")]
pub(in crate::input) enum ReadingWord {
    /// No unbroken spell above a level longer than the curve allows.
    Spell,
    #[schemars(skip)]
    Event,
    #[schemars(skip)]
    WindowMean,
}
