//! What an engineer has to know of a spine before trusting loads to it: extremes, jumps, faults of
//! the points, how well its ends meet, how it was fitted and what noise that leaves.
//!
//! A function from a track and its spine to a value; nothing is mended and nothing left out.

mod ends;
mod extremes;
mod jumps;
mod noise;
mod points;
mod search;

pub use ends::Ends;
pub use extremes::{Extreme, Extremes, Range};
pub use jumps::Corners;
pub use noise::{Floor, Law, NoiseFloor, Remedy, WANTED_G};
pub use points::{Points, Spacing};

use super::report::FitReport;
use super::{Shape, Spine};
use crate::input::{PointTable, Track, TrackSource};

/// The audit of a spine.
#[derive(Clone, Debug, PartialEq)]
pub struct Audit {
    /// Name of the track.
    pub track: String,
    /// Length, m.
    pub length_m: f64,
    /// Whether the end joins the start.
    pub closed: bool,
    /// Largest and smallest values along it.
    pub extremes: Extremes,
    /// Where third derivatives jump, which is allowed; none for points.
    pub corners: Option<Corners>,
    /// How the end lies to the start.
    pub ends: Ends,
    /// The table; none for elements.
    pub points: Option<Points>,
    /// How the curve was laid through points; none for elements.
    pub fit: Option<FitReport>,
    /// Standard deviation of a point of the centre line that cross-validation finds, m, beside a
    /// stated one.
    pub cross_validated_m: Option<f64>,
    /// What the points' error makes of loads; none for elements and where nothing is known of it.
    pub noise: Option<NoiseFloor>,
    /// What has to be looked at, by kind and station.
    pub findings: Vec<Finding>,
}

/// What a finding is about.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FindingKind {
    /// r″ jumps, 1/m; against what passes for none.
    CurvatureJump,
    /// The roll rate jumps, rad/m; against what passes for none.
    RollRateJump,
    /// A spacing, m, more than 3 times the median of the eight around it.
    Gap,
    /// A spacing, m, less than a tenth of the median of the eight around it.
    NearDuplicate,
    /// A turn between chords, rad, more than 3 times what the curvature two to five
    /// points away would make of it, and beyond what the points' error makes.
    Kink,
    /// A residual, m; against its own standard deviation.
    Blunder,
    /// A stated error, m, more than 10 times the one that cross-validation finds.
    ErrorOverstated,
    /// A stated error, m, less than a third of the one that cross-validation finds.
    ErrorUnderstated,
    /// Nothing is known of the error of points that are interpolated.
    ErrorUnknown,
    /// Largest noise floor, g; against the one that is wanted, exceeded on more than a twentieth of the
    /// track.
    NoiseFloor,
}

/// Something that has to be looked at.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Finding {
    /// What it is about.
    pub kind: FindingKind,
    /// Row of the table, from 1: of a gap the one before it.
    pub row: Option<usize>,
    /// Where.
    pub station_m: Option<f64>,
    /// How large, in the unit of its kind.
    pub size: Option<f64>,
    /// What it was held against, in the same unit.
    pub against: Option<f64>,
}

/// Times the found error beyond which a stated one is a finding: an engineer may add errors that
/// neighbours share, which cross-validation cannot see.
const OVERSTATED: f64 = 10.0;

/// Part of the found error below which a stated one is a finding: the curve follows the noise, and its
/// margin does not tell.
const UNDERSTATED: f64 = 1.0 / 3.0;

/// Gaps in the points of a track: nothing is known of it there, and no margin tells.
pub fn gaps(table: &PointTable, spine: &Spine) -> Vec<Finding> {
    match &spine.shape {
        Shape::Fitted(fitted) => points::Survey::new(table, fitted).gaps(),
        Shape::Elements(_) => Vec::new(),
    }
}

/// Audits the spine of a track, with noise at a speed above 0.
pub fn audit(track: &Track, spine: &Spine, speed_m_s: f64) -> Audit {
    let (corners, mut findings) = jumps::between_pieces(spine);
    let mut audit = Audit {
        track: track.name.clone(),
        length_m: spine.length_m(),
        closed: spine.is_closed(),
        extremes: extremes::of(spine, extremes::STEP_M),
        corners: None,
        ends: ends::of_curve(spine),
        points: None,
        fit: spine.fit().cloned(),
        cross_validated_m: None,
        noise: None,
        findings: Vec::new(),
    };
    if let (TrackSource::Points(table), Shape::Fitted(fitted)) = (&track.source, &spine.shape) {
        let survey = points::Survey::new(table, fitted);
        audit.extremes = extremes::of(spine, survey.step_m());
        audit.ends = ends::of_points(spine, &survey);
        audit.points = Some(survey.summary());
        findings.extend(survey.faults(fitted.report.error_m));
        findings.extend(survey.blunders(&fitted.report));
        audit.cross_validated_m = noise::cross_validated(table);
        audit.noise = noise::floor(spine, &survey, &fitted.report, speed_m_s);
        findings.extend(misstated(&fitted.report, audit.cross_validated_m));
        findings.extend(noise::finding(audit.noise.as_ref()));
    } else {
        audit.corners = Some(corners);
    }
    audit.findings = findings;
    audit
}

/// A stated error far beyond what the points show smooths away what they say; one far below takes
/// their noise for the track.
fn misstated(report: &FitReport, found_m: Option<f64>) -> Option<Finding> {
    let (stated_m, found_m) = (report.error_m?, found_m?);
    let kind = if stated_m > OVERSTATED * found_m {
        FindingKind::ErrorOverstated
    } else if is_understated(stated_m, found_m) {
        FindingKind::ErrorUnderstated
    } else {
        return None;
    };
    Some(Finding {
        kind,
        row: None,
        station_m: None,
        size: Some(stated_m),
        against: Some(found_m),
    })
}

fn is_understated(stated_m: f64, found_m: f64) -> bool {
    stated_m < UNDERSTATED * found_m
}

/// The stated error of a point of the centre line and the far larger one that its points show, m.
pub fn understated_error(table: &PointTable, report: &FitReport) -> Option<(f64, f64)> {
    let (stated_m, found_m) = (report.error_m?, noise::cross_validated(table)?);
    is_understated(stated_m, found_m).then_some((stated_m, found_m))
}
