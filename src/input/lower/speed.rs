//! Lowers a `speed` rule, and refuses keys of one rule kind in another.

use crate::input::dimension::Speed;
use crate::input::field::{At, Field, Located};
use crate::input::lower::Lower;
use crate::input::quantity::Quantity;
use crate::input::written::envelope::{KindWord, RuleKeys, StopWord};
use crate::input::{Scale, SpeedBounds, Stop, Where};

/// The bounds of a speed rule.
pub(super) fn speed(keys: RuleKeys, at: &At, lower: &mut Lower) -> Option<SpeedBounds> {
    if keys.min.is_none() && keys.max.is_none() && keys.stop.is_none() {
        let hint = "a speed rule has `min`, `max`, `stop`, or several of them";
        lower.error_with_hint(at, "missing key `max`", hint);
        return None;
    }
    let stop = written(keys.stop)?;
    let (min, max) = (written(keys.min)?, written(keys.max)?);
    let bounds = SpeedBounds {
        min_m_s: min.as_ref().map(|min| lower.above_zero(min)),
        max_m_s: max.as_ref().map(|max| lower.above_zero(max)),
        stop: stop.as_ref().map(|stop| match stop.value {
            StopWord::Never => Stop::Never,
            StopWord::Required => Stop::Required,
        }),
    };
    check_order(min.as_ref(), max.as_ref(), lower);
    if let (Some(_), Some(stop), Some(Stop::Required)) = (&min, &stop, bounds.stop) {
        let message = "`stop: required` stands beside `min`, expected one of them: a train that stops is slower";
        lower.error(&stop.at, message);
    }
    Some(bounds)
}

fn check_order(
    min: Option<&Located<Quantity<Speed>>>,
    max: Option<&Located<Quantity<Speed>>>,
    lower: &mut Lower,
) {
    if let (Some(min), Some(max)) = (min, max)
        && max.value.si > 0.0
        && min.value.si > max.value.si
    {
        let (least, largest) = (lower.text(&min.at), lower.text(&max.at));
        let message = format!("found `max: {largest}`, expected at least `min: {least}`");
        lower.error(&max.at, message);
    }
}

/// What does not go together with bounds on the speed of a train.
pub(super) fn check_speed(
    bounds: &SpeedBounds,
    holds: &Where,
    scale: Option<&Located<Scale>>,
    lower: &mut Lower,
) {
    if let Some(seat) = holds.seats.iter().flatten().next() {
        let message =
            "`seats` stand in a rule of kind `speed`, expected none: the speed is the train's";
        lower
            .found
            .push(crate::diagnostic::Diagnostic::error(message).at(&seat.place));
    }
    let Some(scale) = scale else { return };
    if bounds.min_m_s.is_some() {
        lower.error_with_hint(
            &scale.at,
            "a `scale` stands beside `min`, expected none: a factor below 1 would ask for less",
            "write the least speed itself, or give `max` a rule of its own",
        );
    } else if bounds.max_m_s.is_none() {
        lower.error(
            &scale.at,
            "a `scale` stands in a rule without a limit, expected none",
        );
    }
}

/// A key that may be left out; `None` where it is there and could not be read.
fn written<T>(field: Option<Field<T>>) -> Option<Option<Located<T>>> {
    match field {
        None => Some(None),
        Some(field) => field.given().map(Some),
    }
}

/// Keys that belong to another kind of rule.
pub(super) fn refuse_foreign_keys(kind: KindWord, keys: &RuleKeys, lower: &mut Lower) {
    let of_speed = [place(&keys.min), place(&keys.max), place(&keys.stop)];
    let of_sustained = [
        place(&keys.axis),
        place(&keys.sign),
        place(&keys.limits),
        place(&keys.floor),
        place(&keys.between),
        place(&keys.ignore_below),
        place(&keys.reading),
    ];
    let (kind, foreign) = match kind {
        KindWord::Sustained => ("sustained", &of_speed[..]),
        KindWord::Speed => ("speed", &of_sustained[..]),
        _ => return,
    };
    for at in foreign.iter().flatten() {
        let key = at.key.rsplit('.').next().unwrap_or("");
        let message = format!("`{key}` stands in a rule of kind `{kind}`, expected none");
        lower.error(at, message);
    }
}

fn place<T>(field: &Option<Field<T>>) -> Option<At> {
    match field {
        Some(Field::Given(located)) => Some(located.at.clone()),
        _ => None,
    }
}
