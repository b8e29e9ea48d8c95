//! An audit as machines read it: fixed keys in a fixed order, null for what does not exist.
//!
//! ```text
//! {"crestfall": "0.1.0", "track": "...", "length_m": 0, "closed": false,
//!  "extremes": {"radius_m": {"min": 0, "min_station_m": 0}, "bend_rate_1_m2": {"max": 0, "max_station_m": 0},
//!     "height_m": {"max": 0, "max_station_m": 0, "min": 0, "min_station_m": 0}, "grade_deg": {}, "bank_left_deg": {},
//!     "roll_rate_rad_m": {}, "pitch_rate_rad_m": {}, "yaw_rate_rad_m": {}},
//!  "corners": {"count": 0, "bend_rate_1_m2": {"max": 0, "max_station_m": 0}, "roll_acceleration_rad_m2": {}},
//!  "ends": {"distance_m": 0, "spacings": 0, "direction_deg": 0, "bank_left_deg": 0, "meet": false},
//!  "points": {"count": 0, "left_out": [57], "spacing_m": {"least": 0, "median": 0, "largest": 0}},
//!  "fit": {"method": "exact|within|grid|cross-validated", "error_m": 0, "roll_error_deg": 0,
//!     "cross_validated_m": 0, "residual_rms_m": 0, "worst": [{"row": 0, "residual_m": 0, "studentised": 0}]},
//!  "noise": {"speed_m_s": 0, "wanted_g": 0.05,
//!     "spine": {"largest_g": 0, "largest_station_m": 0, "most_g": 0, "median_g": 0, "above": 0}, "interpolated": {},
//!     "remedy": {"error_m": 0, "spacing_m": 0, "law": "interpolated|measured", "power": 0}},
//!  "findings": [{"kind": "...", "row": 0, "station_m": 0, "size": 0, "against": 0, "unit": "..."}]}
//! ```
//!
//! `corners` is null for points; `points`, `fit` and `noise` are null for elements. `most_g` is what
//! nineteen twentieths of the track lie below, `above` the part of it beyond `wanted_g`; loads of noise are
//! two standard deviations. The kinds of findings are `curvature-jump` and `roll-rate-jump` (1/m and
//! rad/m), `gap`, `near-duplicate`, `blunder`, `error-overstated` and `error-understated` (m), `kink` (deg),
//! `noise-floor` (g) and `error-unknown`; `against` is what `size` was held against, in the same unit.

use serde_json::{Value, json};

use crate::report::number::{json as number, json_or_null};
use crate::spine::{
    Audit, Corners, Ends, Extreme, Extremes, Finding, FindingKind, FitMethod, FitReport, Floor,
    Law, NoiseFloor, Outlier, Points, Range, Remedy, WANTED_G,
};

/// The whole audit, indented, with a line end.
pub fn spine_json(audit: &Audit) -> String {
    let fit = audit.fit.as_ref();
    let value = json!({
        "crestfall": env!("CARGO_PKG_VERSION"),
        "track": audit.track,
        "length_m": number(audit.length_m),
        "closed": audit.closed,
        "extremes": extremes(&audit.extremes),
        "corners": audit.corners.as_ref().map(corners),
        "ends": ends(&audit.ends),
        "points": audit.points.as_ref().map(points),
        "fit": fit.map(|report| self::fit(report, audit.cross_validated_m)),
        "noise": audit.noise.as_ref().map(noise),
        "findings": audit.findings.iter().map(finding).collect::<Vec<_>>(),
    });
    format!("{value:#}\n")
}

fn extremes(extremes: &Extremes) -> Value {
    json!({
        "radius_m": {
            "min": json_or_null(extremes.radius_m.map(|e| e.value)),
            "min_station_m": json_or_null(extremes.radius_m.map(|e| e.station_m)),
        },
        "bend_rate_1_m2": largest(Some(extremes.bend_rate_1_m2)),
        "height_m": range(Some(extremes.height_m), as_is),
        "grade_deg": range(Some(extremes.grade_rad), f64::to_degrees),
        "bank_left_deg": range(extremes.bank_left_rad, f64::to_degrees),
        "roll_rate_rad_m": range(Some(extremes.roll_rate_rad_m), as_is),
        "pitch_rate_rad_m": range(Some(extremes.pitch_rate_rad_m), as_is),
        "yaw_rate_rad_m": range(Some(extremes.yaw_rate_rad_m), as_is),
    })
}

fn as_is(value: f64) -> f64 {
    value
}

fn largest(extreme: Option<Extreme>) -> Value {
    json!({
        "max": json_or_null(extreme.map(|e| e.value)),
        "max_station_m": json_or_null(extreme.map(|e| e.station_m)),
    })
}

fn range(range: Option<Range>, in_unit: fn(f64) -> f64) -> Value {
    json!({
        "max": json_or_null(range.map(|r| in_unit(r.max.value))),
        "max_station_m": json_or_null(range.map(|r| r.max.station_m)),
        "min": json_or_null(range.map(|r| in_unit(r.min.value))),
        "min_station_m": json_or_null(range.map(|r| r.min.station_m)),
    })
}

fn corners(corners: &Corners) -> Value {
    json!({
        "count": corners.count,
        "bend_rate_1_m2": largest(corners.bend_rate_1_m2),
        "roll_acceleration_rad_m2": largest(corners.roll_acceleration_rad_m2),
    })
}

fn ends(ends: &Ends) -> Value {
    json!({
        "distance_m": number(ends.distance_m),
        "spacings": json_or_null(ends.spacings),
        "direction_deg": number(ends.direction_rad.to_degrees()),
        "bank_left_deg": json_or_null(ends.bank_left_rad.map(f64::to_degrees)),
        "meet": ends.meet,
    })
}

fn points(points: &Points) -> Value {
    json!({
        "count": points.count,
        "left_out": points.left_out,
        "spacing_m": {
            "least": number(points.spacing_m.least),
            "median": number(points.spacing_m.median),
            "largest": number(points.spacing_m.largest),
        },
    })
}

fn fit(report: &FitReport, cross_validated_m: Option<f64>) -> Value {
    json!({
        "method": method(report.method),
        "error_m": json_or_null(report.error_m),
        "roll_error_deg": json_or_null(report.roll_error_rad.map(f64::to_degrees)),
        "cross_validated_m": json_or_null(cross_validated_m),
        "residual_rms_m": number(report.residual_rms_m),
        "worst": report.worst.iter().map(outlier).collect::<Vec<_>>(),
    })
}

fn method(method: FitMethod) -> &'static str {
    match method {
        FitMethod::Exact => "exact",
        FitMethod::Within => "within",
        FitMethod::Grid => "grid",
        FitMethod::CrossValidated => "cross-validated",
    }
}

fn outlier(outlier: &Outlier) -> Value {
    json!({
        "row": outlier.row,
        "residual_m": number(outlier.residual_m),
        "studentised": number(outlier.studentised),
    })
}

fn noise(noise: &NoiseFloor) -> Value {
    json!({
        "speed_m_s": number(noise.speed_m_s),
        "wanted_g": number(WANTED_G),
        "spine": floor(&noise.spine),
        "interpolated": floor(&noise.interpolated),
        "remedy": noise.remedy.as_ref().map(remedy),
    })
}

fn floor(floor: &Floor) -> Value {
    json!({
        "largest_g": number(floor.largest_g.value),
        "largest_station_m": number(floor.largest_g.station_m),
        "most_g": number(floor.most_g),
        "median_g": number(floor.median_g),
        "above": number(floor.above),
    })
}

fn remedy(remedy: &Remedy) -> Value {
    let (law, power) = match remedy.law {
        Law::Interpolated => ("interpolated", 1.0),
        Law::Measured { power } => ("measured", power),
    };
    json!({
        "error_m": json_or_null(remedy.error_m),
        "spacing_m": json_or_null(remedy.spacing_m),
        "law": law,
        "power": number(power),
    })
}

fn finding(finding: &Finding) -> Value {
    let (kind, unit) = match finding.kind {
        FindingKind::CurvatureJump => ("curvature-jump", Some("1/m")),
        FindingKind::RollRateJump => ("roll-rate-jump", Some("rad/m")),
        FindingKind::Gap => ("gap", Some("m")),
        FindingKind::NearDuplicate => ("near-duplicate", Some("m")),
        FindingKind::Kink => ("kink", Some("deg")),
        FindingKind::Blunder => ("blunder", Some("m")),
        FindingKind::ErrorOverstated => ("error-overstated", Some("m")),
        FindingKind::ErrorUnderstated => ("error-understated", Some("m")),
        FindingKind::ErrorUnknown => ("error-unknown", None),
        FindingKind::NoiseFloor => ("noise-floor", Some("g")),
    };
    let in_unit = |value: f64| match finding.kind {
        FindingKind::Kink => value.to_degrees(),
        _ => value,
    };
    json!({
        "kind": kind,
        "row": finding.row,
        "station_m": json_or_null(finding.station_m),
        "size": json_or_null(finding.size.map(in_unit)),
        "against": json_or_null(finding.against.map(in_unit)),
        "unit": unit,
    })
}
