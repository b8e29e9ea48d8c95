//! Lowers curves of limits or floors, checked point by point.

use crate::input::dimension::Time;
use crate::input::field::{At, Field, Located, optional};
use crate::input::lower::Lower;
use crate::input::quantity::Quantity;
use crate::input::written::Curve;
use crate::input::written::envelope::{AxisWord, BetweenWord, SignWord};
use crate::input::{Between, Demand, GravityTerm, Sign};

/// One point of a curve.
#[derive(Debug)]
pub(super) struct Point {
    pub(super) duration: Located<Quantity<Time>>,
    pub(super) level: Located<f64>,
}

/// Limits: magnitudes above 0 that do not rise.
pub(super) fn limits_of(
    limits: Field<Curve>,
    sign: Option<Field<SignWord>>,
    at: &At,
    lower: &mut Lower,
) -> Option<(Demand, Vec<Point>)> {
    let sign = lower.require(sign.unwrap_or(Field::Missing), at, "sign");
    let curve = points(limits.given()?, lower)?;
    for point in &curve {
        if point.level.value <= 0.0 {
            let message = format!(
                "found a limit of `{}` g, expected one above 0 g",
                point.level.value
            );
            lower.error_with_hint(
                &point.level.at,
                message,
                "limits are magnitudes; `sign: negative` makes them count the other way",
            );
        }
    }
    check_order(
        &curve,
        "limit",
        |before, after| after > before,
        "rise",
        lower,
    );
    let sign = match sign?.value {
        SignWord::Positive => Sign::Positive,
        SignWord::Negative => Sign::Negative,
    };
    Some((Demand::Limit(sign), curve))
}

/// Floors: least loads below 1 that do not fall.
pub(super) fn floor_of(
    floor: Field<Curve>,
    sign: Option<Field<SignWord>>,
    lower: &mut Lower,
) -> Option<(Demand, Vec<Point>)> {
    if let Some(sign) = optional(sign) {
        lower.error(&sign.at, "a `sign` stands beside `floor`, expected none");
    }
    let curve = points(floor.given()?, lower)?;
    for point in &curve {
        if point.level.value >= 1.0 {
            let message = format!(
                "found a floor of `{}` g, expected one below 1 g",
                point.level.value
            );
            lower.error(&point.level.at, message);
        }
    }
    check_order(
        &curve,
        "floor",
        |before, after| after < before,
        "fall",
        lower,
    );
    Some((Demand::Floor, curve))
}

/// A floor is for the headward axis with gravity in it.
pub(super) fn check_floor_axis(
    axis: Option<&Located<AxisWord>>,
    gravity: Option<GravityTerm>,
    floor: &Field<Curve>,
    lower: &mut Lower,
) {
    if let Some(axis) = axis
        && !matches!(axis.value, AxisWord::Z)
    {
        lower.error(
            &axis.at,
            "a `floor` stands beside this axis, expected `axis: z`",
        );
    }
    if let (Some(GravityTerm::Excluded), Field::Given(floor)) = (gravity, floor) {
        lower.error(
            &floor.at,
            "a `floor` stands under `gravity: excluded`, expected `gravity: included`",
        );
    }
}

fn points(curve: Located<Curve>, lower: &mut Lower) -> Option<Vec<Point>> {
    let written = curve.value.0;
    let count = written.len();
    if count == 0 {
        lower.error(
            &curve.at,
            "found a curve without points, expected at least one",
        );
        return None;
    }
    let mut points: Vec<Point> = Vec::new();
    for (duration, level) in written {
        if let (Some(duration), Some(level)) = (duration.given(), level.given()) {
            lower.not_negative(&duration);
            points.push(Point { duration, level });
        }
    }
    (points.len() == count).then_some(points)
}

/// Durations never decrease, and levels go one way.
fn check_order(
    curve: &[Point],
    what: &str,
    is_wrong: fn(f64, f64) -> bool,
    way: &str,
    lower: &mut Lower,
) {
    for pair in curve.windows(2) {
        let (before, after) = (&pair[0], &pair[1]);
        if after.duration.value.si < before.duration.value.si {
            let (first, second) = (
                lower.text(&before.duration.at),
                lower.text(&after.duration.at),
            );
            let message = format!("found `{second}` after `{first}`, expected durations that rise");
            lower.error(&after.duration.at, message);
        } else if is_wrong(before.level.value, after.level.value) {
            let (first, second) = (before.level.value, after.level.value);
            let message = format!(
                "found a {what} of `{second}` g after `{first}` g, expected one that does not {way} with duration"
            );
            lower.error(&after.level.at, message);
        }
    }
}

/// How a curve runs; one point needs no word for it.
pub(super) fn lowered_between(
    field: Option<Field<BetweenWord>>,
    curve: &[Point],
    at: &At,
    lower: &mut Lower,
) -> Option<Between> {
    if field.is_none() && curve.len() == 1 {
        // One point is the same curve whichever way it runs.
        return Some(Between::Linear);
    }
    let word = lower.require(field.unwrap_or(Field::Missing), at, "between")?;
    match word.value {
        BetweenWord::Linear => Some(Between::Linear),
        BetweenWord::Step => Some(Between::Step),
        BetweenWord::LogTime => {
            for point in curve.iter().filter(|point| point.duration.value.si == 0.0) {
                lower.error(
                    &point.duration.at,
                    "found a duration of 0 s under `between: log-time`, expected one above 0 s",
                );
            }
            Some(Between::LogTime)
        }
    }
}
