//! Lowers scenarios, looking up what they name in the operation.

use crate::diagnostic::Place;
use crate::input::field::{At, Entries, Field, Located, Text, WordOr, optional};
use crate::input::lower::air::{named_resistance, plain_air, plain_wind, refuse_name};
use crate::input::lower::zone::{Kept, zones};
use crate::input::lower::{Lower, Names};
use crate::input::written::operation::{
    OperationFile, ReleaseKeys, RidersWord, ScenarioKeys, WrittenRiders, ZoneSettings,
};
use crate::input::{Air, Release, Resistance, Riders, Scenario, SeatName, Zone};

/// Most scenarios, and most cases of a grid.
pub(super) const CASES: usize = 10_000;
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
    pub(super) release: Start,
    pub(super) root: At,
}

/// A release as far as it is given.
#[derive(Clone, Default)]
pub(super) struct Start {
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

    pub(super) fn resistance(&self, name: &Located<Text>, lower: &mut Lower) -> Option<Resistance> {
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
    pub(super) fn air(&self, lower: &mut Lower) -> Option<Air> {
        self.air.unwrap_or_else(|| {
            let hint = "give `air` in the operation, or in every scenario";
            let mistake = lower.mistake(&self.root, "missing key `air`").key("air");
            lower.found.push(mistake.hint(hint));
            None
        })
    }

    pub(super) fn plain_zones(&self) -> Option<Vec<Zone>> {
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

    pub(super) fn complete(self, at: &At, root: &At, lower: &mut Lower) -> Option<Release> {
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

/// Who is aboard, in a word or seat by seat.
pub(super) fn lowered_riders(written: WrittenRiders, at: &At, lower: &mut Lower) -> Option<Riders> {
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
