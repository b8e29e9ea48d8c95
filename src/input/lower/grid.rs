//! Lowers a grid: every combination of its values, each a scenario.

use crate::diagnostic::Place;
use crate::input::field::{At, Field, Located, Text, WordOr};
use crate::input::lower::air::{air, wind};
use crate::input::lower::scenario::{CASES, Common, lowered_riders};
use crate::input::lower::{Lower, Names};
use crate::input::written::operation::{AirKeys, GridKeys, RidersWord, WindKeys, WrittenRiders};
use crate::input::{Air, Release, Resistance, Riders, Scenario, Wind, Zone};

/// One value of a grid's list.
#[derive(Clone)]
enum Choice {
    Riders(Riders),
    Resistance(Resistance),
    Air(Air),
    Wind(Option<Wind>),
}

/// The values of one key, with their names and where the list stands.
struct Choices {
    at: At,
    values: Vec<(String, Choice)>,
}

/// Every combination, the first key written varying slowest.
pub(super) fn grid(
    field: Field<GridKeys>,
    common: &Common,
    lower: &mut Lower,
) -> Option<Vec<Scenario>> {
    let grid = field.given()?;
    let (at, keys) = (grid.at, grid.value);
    let mut lists = vec![
        choices(
            lower.require(keys.riders, &at, "riders"),
            "riders",
            lower,
            riders_choice,
        ),
        choices(
            lower.require(keys.resistance, &at, "resistance"),
            "resistance",
            lower,
            |name, lower| {
                let resistance = common.resistance(&name, lower)?;
                Some((name.value.0, Choice::Resistance(resistance)))
            },
        ),
    ];
    if let Some(air) = keys.air {
        lists.push(choices(air.given(), "air", lower, air_choice));
    }
    if let Some(wind) = keys.wind {
        lists.push(choices(wind.given(), "wind", lower, wind_choice));
    }
    let has_air = lists.iter().flatten().any(|list| list.is_air());
    let air = match has_air {
        true => None,
        false => Some(common.air(lower)),
    };
    let release = common
        .release
        .clone()
        .complete(&common.root, &common.root, lower);
    let mut lists = lists.into_iter().collect::<Option<Vec<_>>>()?;
    lists.sort_by_key(|list| list.at.span.start);
    let base = Base {
        air: match air {
            Some(air) => Some(air?),
            None => None,
        },
        zones: common.plain_zones()?,
        release: release?,
        place: lower.place(&at),
    };
    combine(&lists, &base, &at, lower)
}

impl Choices {
    fn is_air(&self) -> bool {
        self.at.key.ends_with(".air")
    }
}

fn choices<T>(
    list: Option<Located<Vec<Field<T>>>>,
    what: &'static str,
    lower: &mut Lower,
    mut choice: impl FnMut(Located<T>, &mut Lower) -> Option<(String, Choice)>,
) -> Option<Choices> {
    let list = list?;
    let (at, count) = (list.at.clone(), list.value.len());
    let mut names = Names::of(what);
    let mut values = Vec::new();
    for item in lower.items(list, CASES, "values") {
        let item_at = item.at.clone();
        if let Some((name, value)) = choice(item, lower)
            && names.add_text(&name, &item_at, lower)
        {
            values.push((name, value));
        }
    }
    (values.len() == count && count > 0).then_some(Choices { at, values })
}

fn riders_choice(written: Located<WrittenRiders>, lower: &mut Lower) -> Option<(String, Choice)> {
    let name = match &written.value {
        WordOr::Word(word) => Some(word_name(*word).to_owned()),
        WordOr::Keys(keys) => value_name(keys.name.clone(), &written.at, lower),
    };
    let riders = lowered_riders(written.value, &written.at, lower);
    Some((name?, Choice::Riders(riders?)))
}

fn word_name(word: RidersWord) -> &'static str {
    match word {
        RidersWord::All => "all",
        RidersWord::None => "none",
        RidersWord::FrontHalf => "front-half",
        RidersWord::RearHalf => "rear-half",
        RidersWord::Left => "left",
        RidersWord::Right => "right",
    }
}

fn air_choice(written: Located<AirKeys>, lower: &mut Lower) -> Option<(String, Choice)> {
    let name = value_name(written.value.name.clone(), &written.at, lower);
    let air = air(written, lower);
    Some((name?, Choice::Air(air?)))
}

fn wind_choice(written: Located<WindKeys>, lower: &mut Lower) -> Option<(String, Choice)> {
    let name = value_name(written.value.name.clone(), &written.at, lower);
    let is_calm = written.value.speed.is_none() && written.value.from.is_none();
    let wind = match is_calm {
        true => Some(None),
        false => wind(written, lower).map(Some),
    };
    Some((name?, Choice::Wind(wind?)))
}

fn value_name(field: Option<Field<Text>>, at: &At, lower: &mut Lower) -> Option<String> {
    let name = lower.require(field.unwrap_or(Field::Missing), at, "name")?;
    Some(name.value.0)
}

/// What all cases of a grid share.
struct Base {
    air: Option<Air>,
    zones: Vec<Zone>,
    release: Release,
    place: Place,
}

fn combine(lists: &[Choices], base: &Base, at: &At, lower: &mut Lower) -> Option<Vec<Scenario>> {
    let lengths = lists.iter().map(|list| list.values.len());
    let count = lengths.fold(1_usize, usize::saturating_mul);
    if count > CASES {
        let message = format!("a grid of {count} cases, expected at most {CASES}");
        lower.error(at, message);
        return None;
    }
    (0..count).map(|index| case(lists, index, base)).collect()
}

fn case(lists: &[Choices], index: usize, base: &Base) -> Option<Scenario> {
    let mut rest = index;
    let mut picked = Vec::new();
    for list in lists.iter().rev() {
        picked.push(&list.values[rest % list.values.len()]);
        rest /= list.values.len();
    }
    picked.reverse();
    let names: Vec<&str> = picked.iter().map(|(name, _)| name.as_str()).collect();
    let (mut riders, mut resistance, mut air, mut wind) = (None, None, base.air, None);
    for (_, choice) in &picked {
        match choice {
            Choice::Riders(value) => riders = Some(value.clone()),
            Choice::Resistance(value) => resistance = Some(*value),
            Choice::Air(value) => air = Some(*value),
            Choice::Wind(value) => wind = *value,
        }
    }
    Some(Scenario {
        name: names.join("+"),
        riders: riders?,
        resistance: resistance?,
        air: air?,
        wind,
        zones: base.zones.clone(),
        release: base.release.clone(),
        place: base.place.clone(),
    })
}
