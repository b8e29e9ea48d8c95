//! An acceptance envelope, transcribed by the user.

use crate::diagnostic::Place;
use crate::input::SeatName;

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
    /// Where, when and for whom it holds.
    pub holds: Where,
    /// What its limits are multiplied by.
    pub scale: Option<Scale>,
    /// The whole entry.
    pub place: Place,
}

/// Where, when and for whom a rule holds.
///
/// Different keys are and-ed, the entries of one are or-ed; `None` restricts nothing, a list has
/// at least one entry.
#[derive(Clone, Debug, Default)]
pub struct Where {
    /// Stretches by station: the seat's own, for `speed` the leading axle's.
    pub stations: Option<Vec<StationRange>>,
    /// Stretches by name; each is on the track of at least one variant.
    pub landmarks: Option<Vec<NameAt>>,
    /// Names of scenarios of the operation.
    pub scenarios: Option<Vec<NameAt>>,
    /// Seats, each in the train of at least one variant.
    pub seats: Option<Vec<SeatName>>,
}

/// A stretch of stations.
#[derive(Clone, Debug)]
pub struct StationRange {
    /// First station, m.
    pub from_m: f64,
    /// Last station, m; below `from_m` across the seam of a closed track.
    pub to_m: f64,
    /// The whole entry.
    pub place: Place,
}

/// A name and where it is written.
#[derive(Clone, Debug)]
pub struct NameAt {
    /// The name.
    pub name: String,
    /// Where it is written.
    pub place: Place,
}

/// What the limits of a rule are multiplied by, and why; a floor's 1 − value is.
#[derive(Clone, Debug, PartialEq)]
pub struct Scale {
    /// Above 0.
    pub factor: f64,
    /// In the user's words.
    pub reason: String,
}

impl Rule {
    /// What its limits are multiplied by: 1 where no scale is given.
    pub fn factor(&self) -> f64 {
        self.scale.as_ref().map_or(1.0, |scale| scale.factor)
    }
}

/// What a rule demands.
#[derive(Clone, Debug)]
pub enum RuleKind {
    /// A limit against duration.
    Sustained(Sustained),
    /// Bounds on the speed of the train.
    Speed(SpeedBounds),
}

/// Bounds on the speed of the train within a stretch; at least one.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SpeedBounds {
    /// Least speed, m/s, above 0; never beside [`Stop::Required`], and never scaled.
    pub min_m_s: Option<f64>,
    /// Largest speed, m/s, above 0.
    pub max_m_s: Option<f64>,
    /// Whether the train may or must come to rest.
    pub stop: Option<Stop>,
}

/// Whether the train may or must come to rest.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stop {
    /// It must neither come to rest nor reverse.
    Never,
    /// It must come to rest.
    Required,
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
