//! Largest and smallest radius, grade, bank, rates and height, each with its station.

use nalgebra::Vector3;

use super::search::{Quantity, largest};
use crate::spine::{Spine, SpinePoint};

/// Distance of samples on elements, m: well below the length over which a ride changes.
pub(super) const STEP_M: f64 = 0.1;

/// Curvature below which a track counts as straight, 1/m (6e-8 g at 25 m/s).
const STRAIGHT_1_M: f64 = 1e-9;

/// A value and its place.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Extreme {
    /// In the unit of the quantity.
    pub value: f64,
    /// Where it is reached first, m.
    pub station_m: f64,
}

/// Both extremes of a quantity.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Range {
    /// The largest.
    pub max: Extreme,
    /// The smallest.
    pub min: Extreme,
}

/// Extremes along a spine.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Extremes {
    /// Smallest radius, m; none on a straight track.
    pub radius_m: Option<Extreme>,
    /// Fastest change of r″ across the track, 1/m².
    pub bend_rate_1_m2: Extreme,
    /// z, m.
    pub height_m: Range,
    /// Inclination above horizontal, rad.
    pub grade_rad: Range,
    /// Bank to the left, rad, in (−π, π]; none where the whole track stands on end.
    pub bank_left_rad: Option<Range>,
    /// Rotation of the frame about the forward axis, rad/m.
    pub roll_rate_rad_m: Range,
    /// About the left axis.
    pub pitch_rate_rad_m: Range,
    /// About the up axis.
    pub yaw_rate_rad_m: Range,
}

/// By samples no farther apart than a step.
pub(super) fn of(spine: &Spine, step_m: f64) -> Extremes {
    const BOTH: usize = 6;
    let both: [(Quantity, Quantity); BOTH] = [
        (|p| Some(p.position_m.z), |p| Some(-p.position_m.z)),
        (|p| Some(p.grade_rad()), |p| Some(-p.grade_rad())),
        (SpinePoint::bank_left_rad, |p| p.bank_left_rad().map(|b| -b)),
        (
            |p| Some(p.rotation_rad_m().x),
            |p| Some(-p.rotation_rad_m().x),
        ),
        (
            |p| Some(p.rotation_rad_m().y),
            |p| Some(-p.rotation_rad_m().y),
        ),
        (
            |p| Some(p.rotation_rad_m().z),
            |p| Some(-p.rotation_rad_m().z),
        ),
    ];
    let mut wanted: Vec<Quantity> = both.iter().flat_map(|&(max, min)| [max, min]).collect();
    wanted.push(|p| Some(p.curvature_1_m()));
    wanted.push(|p| Some(bend_rate(p).norm()));
    let found = largest(spine, step_m, &wanted);
    let extreme = |i: usize, sign: f64| {
        found[i].map(|(value, station_m)| Extreme {
            value: sign * value,
            station_m,
        })
    };
    let range = |i: usize| {
        let (max, min) = (extreme(2 * i, 1.0)?, extreme(2 * i + 1, -1.0)?);
        Some(Range { max, min })
    };
    // Every quantity but the bank is defined at the first sample.
    let nowhere = Extreme {
        value: f64::NAN,
        station_m: 0.0,
    };
    let always = |i: usize| {
        range(i).unwrap_or(Range {
            max: nowhere,
            min: nowhere,
        })
    };
    let bend = extreme(2 * BOTH, 1.0).filter(|e| e.value > STRAIGHT_1_M);
    Extremes {
        radius_m: bend.map(|e| Extreme {
            value: 1.0 / e.value,
            ..e
        }),
        bend_rate_1_m2: extreme(2 * BOTH + 1, 1.0).unwrap_or(nowhere),
        height_m: always(0),
        grade_rad: always(1),
        bank_left_rad: range(2),
        roll_rate_rad_m: always(3),
        pitch_rate_rad_m: always(4),
        yaw_rate_rad_m: always(5),
    }
}

/// r‴ less its part along the track, which is −κ² t on any curve.
pub(super) fn bend_rate(point: &SpinePoint) -> Vector3<f64> {
    let t = &point.tangent;
    t.d2 - t.value * t.value.dot(&t.d2)
}
