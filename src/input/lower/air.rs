//! Lowers what slows a train: kinds of resistance, the air and the wind.

use crate::input::field::{Field, Located, Text};
use crate::input::lower::Lower;
use crate::input::written::operation::{AirKeys, ResistanceKeys, WindKeys};
use crate::input::{Air, Resistance, Wind};

/// A resistance with its name, which is kept where the rest cannot be read.
pub(super) fn named_resistance(
    (name, keys): (Field<Text>, Field<ResistanceKeys>),
    lower: &mut Lower,
) -> Option<(String, Option<Resistance>)> {
    let name = name.given()?.value.0;
    Some((name, keys.given().and_then(|keys| resistance(keys, lower))))
}

fn resistance(written: Located<ResistanceKeys>, lower: &mut Lower) -> Option<Resistance> {
    let (at, keys) = (written.at, written.value);
    let mut coefficient = |field, key| {
        let number = lower.require(field, &at, key)?;
        Some(lower.coefficient(&number))
    };
    let running = coefficient(keys.running, "running");
    let side = coefficient(keys.side, "side");
    let bearings = match keys.bearings {
        Some(field) => coefficient(field, "bearings"),
        None => Some(0.0),
    };
    let area = lower.require(keys.drag_area, &at, "drag_area");
    let drag_area_m2 = area.map(|area| lower.not_negative(&area));
    Some(Resistance {
        running: running?,
        side: side?,
        bearings: bearings?,
        drag_area_m2: drag_area_m2?,
    })
}

/// The air of an entry that is not in a grid.
pub(super) fn plain_air(written: Located<AirKeys>, lower: &mut Lower) -> Option<Air> {
    refuse_name(written.value.name.as_ref(), lower);
    air(written, lower)
}

/// The air of any entry.
pub(super) fn air(written: Located<AirKeys>, lower: &mut Lower) -> Option<Air> {
    let (at, keys) = (written.at, written.value);
    let temperature_k = keys.temperature.map(|field| {
        let temperature = field.given()?;
        Some(lower.within(&temperature, 193.15..=333.15, "from -80 degC to 60 degC"))
    });
    match (keys.density, keys.altitude) {
        (Some(density), None) => {
            let density = density.given()?;
            if temperature_k.is_some() {
                lower.error(
                    &at,
                    "found both `density` and `temperature`, expected one of them",
                );
            }
            Some(Air::Density(lower.not_negative(&density)))
        }
        (None, Some(altitude)) => {
            let altitude = altitude.given()?;
            // The first layer of ISO 2533.
            let altitude_m = lower.within(&altitude, -2000.0..=11_000.0, "from -2000 m to 11000 m");
            let temperature_k = match temperature_k {
                Some(temperature) => Some(temperature?),
                None => None,
            };
            Some(Air::Altitude {
                altitude_m,
                temperature_k,
            })
        }
        (Some(_), Some(_)) => {
            lower.error(
                &at,
                "found both `density` and `altitude`, expected one of them",
            );
            None
        }
        (None, None) => {
            let hint = "give the air's `density`, or its `altitude` and perhaps `temperature`";
            lower.error_with_hint(&at, "missing key `density`", hint);
            None
        }
    }
}

/// The wind of an entry that is not in a grid.
pub(super) fn plain_wind(written: Located<WindKeys>, lower: &mut Lower) -> Option<Wind> {
    refuse_name(written.value.name.as_ref(), lower);
    wind(written, lower)
}

/// The wind of any entry, which must be complete.
pub(super) fn wind(written: Located<WindKeys>, lower: &mut Lower) -> Option<Wind> {
    let (at, keys) = (written.at, written.value);
    let speed = lower.require(keys.speed.unwrap_or(Field::Missing), &at, "speed");
    let from = lower.require(keys.from.unwrap_or(Field::Missing), &at, "from");
    let speed = speed?;
    Some(Wind {
        speed_m_s: lower.not_negative(&speed),
        from_bearing_rad: from?.value.si,
    })
}

/// Only the values of a grid have names.
pub(super) fn refuse_name(name: Option<&Field<Text>>, lower: &mut Lower) {
    if let Some(Field::Given(name)) = name {
        lower.error(
            &name.at,
            "a `name` stands here, expected one only in a `grid`",
        );
    }
}
