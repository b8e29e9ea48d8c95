//! Lowers scenarios and grids, looking up what they name in the operation.

use crate::diagnostic::Place;
use crate::input::field::{At, Entries, Field, Located, Text, WordOr, optional};
use crate::input::lower::zone::{Kept, zones};
use crate::input::lower::{Lower, Names};
use crate::input::written::operation::{
    AirKeys, GridKeys, OperationFile, ReleaseKeys, ResistanceKeys, RidersWord, ScenarioKeys,
    WindKeys, WrittenRiders, ZoneSettings,
};
use crate::input::{Air, Release, Resistance, Riders, Scenario, SeatName, Wind, Zone};

/// Most scenarios, and most cases of a grid.
const CASES: usize = 10_000;
/// Most kinds of resistance.
const RESISTANCES: usize = 1000;
/// Most zones.
const ZONES: usize = 1000;

/// What all scenarios of an operation share.
pub(super) struct Common {
    resistance: Vec<(String, Option<Resistance>)>,
    resistance_whole: bool,
    air: Option<Option<Air>>,
    pub(super) zones: Vec<Kept>,
    pub(super) zones_whole: bool,
    release: Start,
    root: At,
}

/// A release as far as it is given.
#[derive(Clone, Default)]
struct Start {
    station: Option<(f64, Place)>,
    speed_m_s: Option<f64>,
    /// Something in it could not be read, so nothing is said to be missing.
    wrong: bool,
}

impl Common {
    pub(super) fn new(file: OperationFile, root: &At, lower: &mut Lower) -> Self {
        let written = lower.require(file.resistance, root, "resistance");
        let resistance_whole = written.is_some();
        let list = written.map_or(Vec::new(), |written| {
            lower.count(
                &written.at,
                written.value.0.len(),
                RESISTANCES,
                "resistances",
            );
            written.value.0
        });
        let resistance = list
            .into_iter()
            .take(RESISTANCES)
            .filter_map(|entry| named_resistance(entry, lower));
        let resistance = resistance.collect();
        let air = file
            .air
            .map(|air| air.given().and_then(|air| plain_air(air, lower)));
        let zone_list = file.zones.map_or(Field::Missing, |field| field);
        let bad = matches!(zone_list, Field::Bad);
        let list = zone_list.given().map_or(Vec::new(), |list| {
            if list.value.len() > ZONES {
                lower.count(&list.at, list.value.len(), ZONES, "zones");
            }
            list.value
        });
        let (zones, whole) = zones(list.into_iter().take(ZONES).collect(), lower);
        Self {
            resistance,
            resistance_whole,
            air,
            zones,
            zones_whole: whole && !bad,
            release: Start::default().with(file.release, lower),
            root: root.clone(),
        }
    }

    fn resistance(&self, name: &Located<Text>, lower: &mut Lower) -> Option<Resistance> {
        let known = self
            .resistance
            .iter()
            .find(|(known, _)| *known == name.value.0);
        match known {
            Some((_, resistance)) => *resistance,
            None => {
                if self.resistance_whole {
                    let names: Vec<&str> =
                        self.resistance.iter().map(|(n, _)| n.as_str()).collect();
                    lower.unknown(&name.at, "resistance", &name.value.0, &names);
                }
                None
            }
        }
    }

    /// The air of a scenario that has none of its own.
    fn air(&self, lower: &mut Lower) -> Option<Air> {
        self.air.unwrap_or_else(|| {
            let hint = "give `air` in the operation, or in every scenario";
            let mistake = lower.mistake(&self.root, "missing key `air`").key("air");
            lower.found.push(mistake.hint(hint));
            None
        })
    }

    fn plain_zones(&self) -> Option<Vec<Zone>> {
        let zones = self.zones.iter().map(|kept| kept.zone.clone()).collect();
        self.zones_whole.then_some(zones)
    }

    /// Records a zone that is not there, unless its own entry could not be read.
    fn unknown_zone(&self, at: &At, name: &str, lower: &mut Lower) {
        if self.zones_whole {
            let names: Vec<&str> = self
                .zones
                .iter()
                .map(|kept| kept.zone.name.as_str())
                .collect();
            lower.unknown(at, "zone", name, &names);
        }
    }
}

impl Start {
    /// This release with what another entry sets.
    fn with(mut self, field: Option<Field<ReleaseKeys>>, lower: &mut Lower) -> Self {
        let Some(field) = field else { return self };
        let Some(release) = field.given() else {
            self.wrong = true;
            return self;
        };
        let ReleaseKeys { station, speed } = release.value;
        self.wrong |= matches!(station, Some(Field::Bad)) || matches!(speed, Some(Field::Bad));
        if let Some(station) = optional(station) {
            self.station = Some((station.value.si, lower.place(&release.at)));
        }
        if let Some(speed) = optional(speed) {
            self.speed_m_s = Some(lower.not_negative(&speed));
        }
        self
    }

    fn complete(self, at: &At, root: &At, lower: &mut Lower) -> Option<Release> {
        if !self.wrong && self.station.is_none() && self.speed_m_s.is_none() {
            lower.missing(root, "release");
        } else if !self.wrong {
            if self.station.is_none() {
                lower.missing(at, "release.station");
            }
            if self.speed_m_s.is_none() {
                lower.missing(at, "release.speed");
            }
        }
        let (station_m, place) = self.station?;
        Some(Release {
            station_m,
            speed_m_s: self.speed_m_s?,
            place,
        })
    }
}

fn named_resistance(
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
fn plain_air(written: Located<AirKeys>, lower: &mut Lower) -> Option<Air> {
    refuse_name(written.value.name.as_ref(), lower);
    air(written, lower)
}

fn air(written: Located<AirKeys>, lower: &mut Lower) -> Option<Air> {
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
fn plain_wind(written: Located<WindKeys>, lower: &mut Lower) -> Option<Wind> {
    refuse_name(written.value.name.as_ref(), lower);
    wind(written, lower)
}

fn wind(written: Located<WindKeys>, lower: &mut Lower) -> Option<Wind> {
    let (at, keys) = (written.at, written.value);
    let speed = lower.require(keys.speed.unwrap_or(Field::Missing), &at, "speed");
    let from = lower.require(keys.from.unwrap_or(Field::Missing), &at, "from");
    let speed = speed?;
    Some(Wind {
        speed_m_s: lower.not_negative(&speed),
        from_bearing_rad: from?.value.si,
    })
}

fn refuse_name(name: Option<&Field<Text>>, lower: &mut Lower) {
    if let Some(Field::Given(name)) = name {
        lower.error(
            &name.at,
            "a `name` stands here, expected one only in a `grid`",
        );
    }
}

/// Scenarios in written order.
pub(super) fn scenarios(
    field: Field<Entries<ScenarioKeys>>,
    common: &Common,
    lower: &mut Lower,
) -> Option<Vec<Scenario>> {
    let list = field.given()?;
    let count = list.value.0.len();
    lower.count(&list.at, count, CASES, "scenarios");
    let mut lowered = Vec::new();
    for (name, keys) in list.value.given().into_iter().take(CASES) {
        lowered.extend(scenario(name, keys, common, lower));
    }
    (lowered.len() == count && count > 0).then_some(lowered)
}

fn scenario(
    name: Located<String>,
    entry: Located<ScenarioKeys>,
    common: &Common,
    lower: &mut Lower,
) -> Option<Scenario> {
    let (at, keys) = (entry.at, entry.value);
    let riders = lower.require(keys.riders, &at, "riders");
    let riders = riders.and_then(|riders| {
        if let WordOr::Keys(keys) = &riders.value {
            refuse_name(keys.name.as_ref(), lower);
        }
        lowered_riders(riders.value, &riders.at, lower)
    });
    let resistance = lower.require(keys.resistance, &at, "resistance");
    let resistance = resistance.and_then(|name| common.resistance(&name, lower));
    let air = match keys.air {
        Some(field) => field.given().and_then(|air| plain_air(air, lower)),
        None => common.air(lower),
    };
    let wind = match keys.wind {
        Some(field) => field
            .given()
            .and_then(|wind| plain_wind(wind, lower))
            .map(Some),
        None => Some(None),
    };
    let zones = scenario_zones(keys.without, keys.zones, common, lower);
    let release =
        common
            .release
            .clone()
            .with(keys.release, lower)
            .complete(&at, &common.root, lower);
    Some(Scenario {
        place: lower.place(&name.at),
        name: name.value,
        riders: riders?,
        resistance: resistance?,
        air: air?,
        wind: wind?,
        zones: zones?,
        release: release?,
    })
}

fn lowered_riders(written: WrittenRiders, at: &At, lower: &mut Lower) -> Option<Riders> {
    let keys = match written {
        WordOr::Word(word) => return Some(riders_of(word)),
        WordOr::Keys(keys) => keys,
    };
    let seats = lower.require(keys.seats, at, "seats")?;
    let count = seats.value.len();
    let items = lower.items(seats, 1000, "seats");
    let names: Vec<SeatName> = items
        .into_iter()
        .filter_map(|item| seat_name(item, lower))
        .collect();
    (names.len() == count).then_some(Riders::Seats(names))
}

fn riders_of(word: RidersWord) -> Riders {
    match word {
        RidersWord::All => Riders::All,
        RidersWord::None => Riders::None,
        RidersWord::FrontHalf => Riders::FrontHalf,
        RidersWord::RearHalf => Riders::RearHalf,
        RidersWord::Left => Riders::Left,
        RidersWord::Right => Riders::Right,
    }
}

pub(super) fn seat_name(written: Located<Text>, lower: &mut Lower) -> Option<SeatName> {
    let text = &written.value.0;
    let parts = text.split_once('-').filter(|(_, seat)| !seat.is_empty());
    match parts.and_then(|(car, seat)| Some((car.parse::<usize>().ok()?, seat))) {
        Some((car, seat)) if car > 0 => Some(SeatName {
            car,
            seat: seat.to_owned(),
            place: lower.place(&written.at),
        }),
        _ => {
            let message = format!("`{text}` names no seat, expected a car, `-` and a seat");
            lower.error_with_hint(
                &written.at,
                message,
                "cars count from 1 at the front: `1-front-left`",
            );
            None
        }
    }
}

fn scenario_zones(
    without: Option<Field<Vec<Field<Text>>>>,
    settings: Option<Field<Entries<ZoneSettings>>>,
    common: &Common,
    lower: &mut Lower,
) -> Option<Vec<Zone>> {
    let mut off = Vec::new();
    let mut names = Names::of("zone");
    let list = optional(without).map_or(Vec::new(), |list| list.value);
    for name in list.into_iter().filter_map(Field::given) {
        names.add(&name, lower);
        if !common.zones.iter().any(|kept| kept.is(&name)) {
            common.unknown_zone(&name.at, &name.value.0, lower);
        }
        off.push(name.value.0);
    }
    let mut kept = common.zones.clone();
    let entries = optional(settings).map_or(Vec::new(), |entries| entries.value.given());
    for (name, settings) in entries {
        if off.contains(&name.value) {
            let message = format!(
                "zone `{}` is both set and switched off, expected one of them",
                name.value
            );
            lower.error(&name.at, message);
        }
        match kept.iter_mut().find(|kept| kept.zone.name == name.value) {
            Some(zone) => zone.set(settings, lower),
            None => common.unknown_zone(&name.at, &name.value, lower),
        }
    }
    let zones = kept.into_iter().map(|kept| kept.zone);
    let on = zones.filter(|zone| !off.contains(&zone.name)).collect();
    common.zones_whole.then_some(on)
}

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
        if let Some((name, value)) = choice(item, lower) {
            if names.add_text(&name, &item_at, lower) {
                values.push((name, value));
            }
        }
    }
    (values.len() == count && count > 0).then_some(Choices { at, values })
}

fn riders_choice(written: Located<WrittenRiders>, lower: &mut Lower) -> Option<(String, Choice)> {
    let name = match &written.value {
        WordOr::Word(_) => Some(lower.text(&written.at).to_owned()),
        WordOr::Keys(keys) => value_name(keys.name.clone(), &written.at, lower),
    };
    let riders = lowered_riders(written.value, &written.at, lower);
    Some((name?, Choice::Riders(riders?)))
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
