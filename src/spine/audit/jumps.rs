//! What jumps between the pieces of a spine: curvature and roll rate may not, their derivatives may.

use super::extremes::{Extreme, bend_rate};
use super::{Finding, FindingKind};
use crate::spine::Spine;

/// Jumps of r″, 1/m, and of the roll rate, rad/m, that pass for rounding: 6e-5 g at 25 m/s.
const NO_JUMP: f64 = 1e-6;

/// Jumps of derivatives, 1/m², that pass for none.
const NO_CORNER: f64 = 1e-6;

/// Where curvature or roll rate change their own rate at once: a kink in the load, not a jump.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Corners {
    /// How many there are.
    pub count: usize,
    /// Largest jump of r‴ across the track, 1/m².
    pub bend_rate_1_m2: Option<Extreme>,
    /// Largest jump of the roll rate's derivative, rad/m².
    pub roll_acceleration_rad_m2: Option<Extreme>,
}

/// The corners between the pieces, and the jumps.
pub(super) fn between_pieces(spine: &Spine) -> (Corners, Vec<Finding>) {
    let mut findings = Vec::new();
    let mut corners = Corners {
        count: 0,
        bend_rate_1_m2: None,
        roll_acceleration_rad_m2: None,
    };
    for (left, station_m) in spine.breaks_m().into_iter().enumerate() {
        let (before, after) = (
            spine.at_on(left, station_m),
            spine.at_on(left + 1, station_m),
        );
        let bend = (after.tangent.d1 - before.tangent.d1).norm();
        let roll = (after.rotation_rad_m().x - before.rotation_rad_m().x).abs();
        findings.extend(jump(FindingKind::CurvatureJump, station_m, bend));
        findings.extend(jump(FindingKind::RollRateJump, station_m, roll));
        let bend_rate = (bend_rate(&after) - bend_rate(&before)).norm();
        let roll_acceleration = (after.up.d2 - before.up.d2).dot(&after.left().value).abs();
        corners.count += usize::from(bend_rate.max(roll_acceleration) > NO_CORNER);
        raise(&mut corners.bend_rate_1_m2, bend_rate, station_m);
        raise(
            &mut corners.roll_acceleration_rad_m2,
            roll_acceleration,
            station_m,
        );
    }
    (corners, findings)
}

fn jump(kind: FindingKind, station_m: f64, size: f64) -> Option<Finding> {
    (size > NO_JUMP).then_some(Finding {
        kind,
        row: None,
        station_m: Some(station_m),
        size: Some(size),
        against: Some(NO_JUMP),
    })
}

fn raise(largest: &mut Option<Extreme>, value: f64, station_m: f64) {
    if value > NO_CORNER && largest.is_none_or(|l| value > l.value) {
        *largest = Some(Extreme { value, station_m });
    }
}
