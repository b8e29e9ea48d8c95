//! An acceptance envelope, transcribed by the user.

use crate::diagnostic::Place;

/// A set of rules from one document.
#[derive(Clone, Debug)]
pub struct Envelope {
    /// The name given in the file.
    pub name: String,
    /// What kind of numbers it holds.
    pub status: Status,
    /// The document.
    pub source: Document,
    /// Whether its loads hold gravity.
    pub gravity: GravityTerm,
    /// What its loads are filtered with.
    pub filter: Filter,
    /// In file order; at least one.
    pub rules: Vec<Rule>,
    /// The value of the `envelope` key.
    pub place: Place,
}

/// What kind of numbers an envelope holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Status {
    /// Invented, to show the tool.
    Illustrative,
    /// Copied from a published document.
    Transcribed,
    /// Set by the project.
    Project,
}

/// The document an envelope comes from.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Document {
    /// Its number or title.
    pub document: String,
    /// Its edition.
    pub edition: String,
    /// A remark.
    pub note: Option<String>,
}

/// Whether a load holds gravity.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum GravityTerm {
    /// What an accelerometer reads: (acceleration − gravity)/g₀.
    Included,
    /// acceleration/g₀.
    Excluded,
}

/// The filter an envelope asks for.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Filter {
    /// None.
    None,
    /// Butterworth low-pass, one pass, started in the steady state of the first sample.
    Butterworth {
        /// 1 to 8.
        poles: u32,
        /// Hz.
        corner_hz: f64,
    },
}

/// One requirement.
#[derive(Clone, Debug)]
pub struct Rule {
    /// Unique in its envelope.
    pub id: String,
    /// Clause of the document.
    pub clause: Option<String>,
    /// A remark.
    pub note: Option<String>,
    /// What it demands.
    pub kind: RuleKind,
    /// The whole entry.
    pub place: Place,
}

/// What a rule demands.
#[derive(Clone, Debug)]
pub enum RuleKind {
    /// A limit against duration.
    Sustained(Sustained),
}

/// A limit on one axis against the duration of an unbroken spell.
#[derive(Clone, Debug)]
pub struct Sustained {
    /// The axis.
    pub axis: Axis,
    /// Limit or floor.
    pub demand: Demand,
    /// Durations (s, never decreasing) and values (g) as written; at least one.
    ///
    /// Under [`Demand::Limit`] values are magnitudes above 0 that never rise; under
    /// [`Demand::Floor`] they are the least load, below 1, and never fall.
    pub curve: Vec<(f64, f64)>,
    /// How the curve runs between its points.
    pub between: Between,
    /// Spells shorter than this are listed, not judged, s; 0 where not given.
    pub ignore_below_s: f64,
}

/// Rider axes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Axis {
    /// Forward (eyes back).
    X,
    /// Left.
    Y,
    /// Headward (eyes down).
    Z,
}

/// Which way a load counts.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sign {
    /// Load.
    Positive,
    /// −load.
    Negative,
}

/// What a sustained rule demands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Demand {
    /// No load of this sign beyond the curve.
    Limit(Sign),
    /// No load below the curve.
    Floor,
}

/// How a curve runs between its points.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Between {
    /// Straight in duration.
    Linear,
    /// The value of the last point at or before the duration.
    Step,
    /// Straight in the logarithm of duration; durations are above 0.
    LogTime,
}
