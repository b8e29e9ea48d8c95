//! How the end of a track lies to its start.

use std::f64::consts::TAU;

use super::points::Survey;
use crate::spine::{Spine, SpinePoint};

/// The end of an open track against its start; on a closed one the last point against the first.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Ends {
    /// Between them, m.
    pub distance_m: f64,
    /// The same over the median spacing of points.
    pub spacings: Option<f64>,
    /// Between the directions of travel, rad, 0..π.
    pub direction_rad: f64,
    /// Bank at the start less that at the end, to the left, rad, in [−π, π]; none where either stands
    /// on end.
    pub bank_left_rad: Option<f64>,
    /// Whether an open track of points looks like a circuit: its ends within three spacings and 30 deg.
    pub meet: bool,
}

/// Spacings within which ends meet.
const NEAR_SPACINGS: f64 = 3.0;

/// Angle within which they do, rad.
const NEAR_RAD: f64 = std::f64::consts::FRAC_PI_6;

pub(super) fn of_curve(spine: &Spine) -> Ends {
    between(&spine.at(spine.length_m()), &spine.at(0.0))
}

pub(super) fn of_points(spine: &Spine, survey: &Survey<'_>) -> Ends {
    let last_m = match survey.stations_m.last() {
        Some(&last_m) if spine.is_closed() => last_m,
        _ => spine.length_m(),
    };
    let mut ends = between(&spine.at(last_m), &spine.at(0.0));
    let (first, last) = (
        survey.centre_m[0],
        survey.centre_m[survey.centre_m.len() - 1],
    );
    ends.distance_m = (first - last).norm();
    let spacings = ends.distance_m / survey.median_m();
    ends.spacings = Some(spacings);
    ends.meet = !spine.is_closed() && spacings < NEAR_SPACINGS && ends.direction_rad < NEAR_RAD;
    ends
}

fn between(end: &SpinePoint, start: &SpinePoint) -> Ends {
    let bank = |(a, b): (f64, f64)| a - b - TAU * ((a - b) / TAU).round();
    Ends {
        distance_m: (start.position_m - end.position_m).norm(),
        spacings: None,
        direction_rad: end.tangent.value.angle(&start.tangent.value),
        bank_left_rad: start.bank_left_rad().zip(end.bank_left_rad()).map(bank),
        meet: false,
    }
}
