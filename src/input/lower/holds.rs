//! Lowers what any rule may have: where it holds, and what its limits are multiplied by.
//!
//! Whether the names are there is checked when all files are read: see `input/holds.rs`.

use crate::input::field::{Field, Located, Text};
use crate::input::lower::scenario::seat_name;
use crate::input::lower::{Lower, Names};
use crate::input::written::envelope::{ScaleKeys, StationsKeys, WhereKeys};
use crate::input::{NameAt, Scale, SeatName, StationRange, Where};

/// Most entries of a list.
const ENTRIES: usize = 1000;

/// Factors that leave a limit a finite number above 0.
const FACTORS: std::ops::RangeInclusive<f64> = 1e-6..=1e6;

/// Where a rule holds: everywhere where it does not say.
pub(super) fn holds(written: Option<Field<WhereKeys>>, lower: &mut Lower) -> Option<Where> {
    let Some(written) = written else {
        return Some(Where::default());
    };
    let Located { value: keys, at } = written.given()?;
    let empty = keys.stations.is_none()
        && keys.landmarks.is_none()
        && keys.scenarios.is_none()
        && keys.seats.is_none();
    // Keys that are unknown have been named already.
    let wrote_none = lower.text(&at).chars().all(|c| "{} \n".contains(c));
    if empty && wrote_none {
        lower.error_with_hint(
            &at,
            "found no key in `where`, expected at least one",
            "it has `stations`, `landmarks`, `scenarios`, `seats`; without `where` a rule holds everywhere",
        );
    }
    let stations = list(keys.stations, "stretches", lower, station_range);
    let mut names = Names::of("landmark");
    let landmarks = list(keys.landmarks, "landmarks", lower, |n, l| {
        name(n, &mut names, l)
    });
    let mut names = Names::of("scenario");
    let scenarios = list(keys.scenarios, "scenarios", lower, |n, l| {
        name(n, &mut names, l)
    });
    let mut names = Names::of("seat");
    let seats = list(keys.seats, "seats", lower, |n, l| seat(n, &mut names, l));
    Some(Where {
        stations: stations?,
        landmarks: landmarks?,
        scenarios: scenarios?,
        seats: seats?,
    })
}

/// What limits are multiplied by, if anything.
pub(super) fn scale(
    written: Option<Field<ScaleKeys>>,
    lower: &mut Lower,
) -> Option<Option<Located<Scale>>> {
    let Some(written) = written else {
        return Some(None);
    };
    let Located { value: keys, at } = written.given()?;
    let factor = lower.require(keys.factor, &at, "factor");
    let reason = lower.require(keys.reason, &at, "reason");
    let factor = factor?;
    if !FACTORS.contains(&factor.value) {
        let found = lower.text(&factor.at);
        let (least, most) = (FACTORS.start(), FACTORS.end());
        let message = format!("found `{found}`, expected a factor above 0, from {least} to {most}");
        lower.error(&factor.at, message);
    }
    let value = Scale {
        factor: factor.value,
        reason: reason?.value.0,
    };
    Some(Some(Located { value, at }))
}

/// A list that may be left out; `None` where something in it could not be read.
fn list<W, T>(
    written: Option<Field<Vec<Field<W>>>>,
    what: &str,
    lower: &mut Lower,
    mut one: impl FnMut(Located<W>, &mut Lower) -> Option<T>,
) -> Option<Option<Vec<T>>> {
    let Some(written) = written else {
        return Some(None);
    };
    let written = written.given()?;
    let count = written.value.len();
    let items = lower.items(written, ENTRIES, what);
    let items: Vec<T> = items
        .into_iter()
        .filter_map(|item| one(item, lower))
        .collect();
    (items.len() == count).then_some(Some(items))
}

fn station_range(written: Located<StationsKeys>, lower: &mut Lower) -> Option<StationRange> {
    let Located { value: keys, at } = written;
    let from = lower.require(keys.from, &at, "from");
    let to = lower.require(keys.to, &at, "to");
    let (from, to) = (from?, to?);
    let (from_m, to_m) = (lower.not_negative(&from), lower.not_negative(&to));
    if from_m == to_m {
        let (from, to) = (lower.text(&from.at), lower.text(&to.at));
        let message =
            format!("found `from: {from}` and `to: {to}`, expected a stretch with a length");
        lower.error(&at, message);
    }
    Some(StationRange {
        from_m,
        to_m,
        place: lower.place(&at),
    })
}

fn name(written: Located<Text>, names: &mut Names, lower: &mut Lower) -> Option<NameAt> {
    names.add(&written, lower);
    Some(NameAt {
        place: lower.place(&written.at),
        name: written.value.0,
    })
}

fn seat(written: Located<Text>, names: &mut Names, lower: &mut Lower) -> Option<SeatName> {
    names.add(&written, lower);
    seat_name(written, lower)
}
