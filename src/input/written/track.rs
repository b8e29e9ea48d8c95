//! What may be written in a track file.

use schemars::JsonSchema;
use serde::Deserialize;

use crate::input::dimension::{Angle, Length};
use crate::input::field::{Field, Text, WordOr};
use crate::input::quantity::{Quantity, SidedAngle};
use crate::input::written::{Later, alternatives};

/// A track: design elements laid end to end, or a table of points.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "track", transform = alternatives::track)]
pub(in crate::input) struct TrackFile {
    /// Version of the file format: 1.
    #[schemars(extend("const" = 1))]
    pub(in crate::input) crestfall: Field<u64>,
    /// Name of the track.
    pub(in crate::input) track: Field<Text>,
    /// Where the elements begin; the origin, level, heading north where left out.
    pub(in crate::input) start: Option<Field<StartKeys>>,
    /// Design elements in order of travel.
    #[schemars(extend("minItems" = 1))]
    pub(in crate::input) elements: Option<Field<Vec<Field<ElementKeys>>>>,
    /// A table of points, in place of elements.
    pub(in crate::input) points: Option<Field<PointsKeys>>,
    /// Named stretches of stations.
    pub(in crate::input) landmarks: Option<Field<Vec<Field<LandmarkKeys>>>>,
    #[schemars(skip)]
    pub(in crate::input) formula: Option<Field<Later>>,
}

/// Position and attitude at station 0.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "start")]
pub(in crate::input) struct StartKeys {
    /// East.
    pub(in crate::input) x: Option<Field<Quantity<Length>>>,
    /// North.
    pub(in crate::input) y: Option<Field<Quantity<Length>>>,
    /// Up.
    pub(in crate::input) z: Option<Field<Quantity<Length>>>,
    /// Compass bearing of the direction of travel: 0 deg north, 90 deg east.
    pub(in crate::input) heading: Option<Field<Quantity<Angle>>>,
    /// Inclination above horizontal.
    pub(in crate::input) grade: Option<Field<Quantity<Angle>>>,
    /// Bank, with its side.
    pub(in crate::input) bank: Option<Field<SidedAngle>>,
}

/// A stretch over which direction, grade and bank change.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "element", transform = alternatives::element)]
pub(in crate::input) struct ElementKeys {
    /// Its name, which is also a landmark.
    pub(in crate::input) name: Option<Field<Text>>,
    /// Arc length; or give `radius`.
    pub(in crate::input) length: Option<Field<Quantity<Length>>>,
    /// Smallest radius reached, from which the length follows; or give `length`.
    pub(in crate::input) radius: Option<Field<Quantity<Length>>>,
    /// Grade at its end.
    pub(in crate::input) grade_to: Option<Field<Quantity<Angle>>>,
    /// Change of grade over it.
    pub(in crate::input) grade_by: Option<Field<Quantity<Angle>>>,
    /// Change of direction over it, with its side.
    pub(in crate::input) turn: Option<Field<SidedAngle>>,
    /// Bank at its end, with its side.
    pub(in crate::input) bank_to: Option<Field<SidedAngle>>,
    /// Change of bank over it, with its side.
    pub(in crate::input) bank_by: Option<Field<SidedAngle>>,
    /// How direction and grade change: `smooth`, the default, or `{ramp: 0.3}`.
    pub(in crate::input) ease: Option<Field<WrittenEase>>,
    /// How bank changes; as `ease` where left out.
    pub(in crate::input) bank_ease: Option<Field<WrittenEase>>,
}

/// An ease as written.
pub(in crate::input) type WrittenEase = WordOr<EaseWord, RampKeys>;

/// An ease without settings.
#[derive(Clone, Copy, Debug, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "ease")]
pub(in crate::input) enum EaseWord {
    /// The fifth-degree ease.
    Smooth,
}

/// A rate that rises linearly, is constant and falls linearly.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "ramp")]
pub(in crate::input) struct RampKeys {
    /// Part of the length over which it rises, and over which it falls; above 0, at most 0.5.
    #[schemars(extend("exclusiveMinimum" = 0, "maximum" = 0.5))]
    pub(in crate::input) ramp: Field<f64>,
}

/// A table of points.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "points")]
pub(in crate::input) struct PointsKeys {
    /// Path of the table (CSV).
    pub(in crate::input) file: Field<Text>,
    /// How the curve is laid through the points: `exact`, `auto`, or within a stated error.
    pub(in crate::input) fit: Field<WordOr<FitWord, FitKeys>>,
    /// Whether the last point is followed by the first; `false` where left out.
    pub(in crate::input) closed: Option<Field<bool>>,
    /// Rows of the table that are left out, counted from 1 below the header; say why in a comment.
    #[schemars(transform = alternatives::rows)]
    pub(in crate::input) except: Option<Field<Vec<Field<u64>>>>,
}

/// A fit without settings.
#[derive(Clone, Copy, Debug, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "fit")]
pub(in crate::input) enum FitWord {
    /// Through every point.
    Exact,
    /// The smoothest curve that honours the points' error, which is found: the column `error_mm`,
    /// else the rounding of the coordinates' decimal grid, else by cross-validation.
    Auto,
}

/// A fit within a stated error.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "fit_within")]
pub(in crate::input) struct FitKeys {
    /// Standard deviation of a point (of each rail where the rails are given) in each coordinate.
    pub(in crate::input) within: Field<Quantity<Length>>,
    /// Standard deviation of the bank, or of an up vector's direction; found where left out.
    pub(in crate::input) bank_within: Option<Field<Quantity<Angle>>>,
}

/// A named stretch of stations.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "landmark")]
pub(in crate::input) struct LandmarkKeys {
    /// Its name.
    pub(in crate::input) name: Field<Text>,
    /// First station.
    pub(in crate::input) from: Field<Quantity<Length>>,
    /// Last station.
    pub(in crate::input) to: Field<Quantity<Length>>,
}
