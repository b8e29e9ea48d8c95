//! Lowers a train file: cars written out, axles in order, seats with unique names.

use nalgebra::Vector3;

use crate::input::dimension::{Length, MomentOfInertia};
use crate::input::field::{At, Field, Located, optional};
use crate::input::lower::{Lower, Names};
use crate::input::quantity::Quantity;
use crate::input::written::train::{CarKeys, InertiaKeys, OffsetKeys, SeatKeys, TrainFile};
use crate::input::{Car, Inertia, SHARED_AXLE_M, Seat, Train};

/// Most cars that are read.
const CARS: u64 = 1000;
/// Most seats of a car.
const SEATS: usize = 100;
/// A train from its file.
pub(in crate::input) fn train(file: Located<TrainFile>, lower: &mut Lower) -> Option<Train> {
    let (root, file) = (file.at, file.value);
    lower.version(file.crestfall, &root);
    let name = lower.require(file.train, &root, "train");
    let cars = lower
        .require(file.cars, &root, "cars")
        .and_then(|cars| all_cars(cars, lower));
    let mut mass = |field| optional(field).map_or(0.0, |mass| lower.not_negative(&mass));
    let rolling_mass_kg = mass(file.rolling_mass);
    let axle_mass_kg = mass(file.axle_mass);
    let name = name?;
    Some(Train {
        place: lower.place(&name.at),
        name: name.value.0,
        cars: cars?,
        rolling_mass_kg,
        axle_mass_kg,
    })
}

fn all_cars(list: Located<Vec<Field<CarKeys>>>, lower: &mut Lower) -> Option<Vec<Car>> {
    let list_at = list.at.clone();
    let entries = list.value.len();
    let mut cars = Vec::new();
    let mut read = 0;
    for entry in lower.items(list, CARS as usize, "cars") {
        let (count, car) = one_entry(entry, CARS - cars.len() as u64, lower);
        let Some(car) = car else { continue };
        read += 1;
        cars.extend(std::iter::repeat_n(car, count));
    }
    if read < entries {
        return None;
    }
    check_neighbours(&cars, lower);
    if !cars.is_empty() && cars.iter().all(|car| car.seats.is_empty()) {
        lower.error(
            &list_at,
            "no car has a seat, expected at least one seat in the train",
        );
    }
    Some(cars)
}

/// A car with how often it follows itself.
fn one_entry(entry: Located<CarKeys>, room: u64, lower: &mut Lower) -> (usize, Option<Car>) {
    let (at, mut keys) = (entry.at, entry.value);
    let count = match keys.count.take().and_then(Field::given) {
        None => 1,
        Some(count) => match count.value {
            0 => {
                lower.error(&count.at, "found `0`, expected at least one car");
                1
            }
            many if many > room => {
                let all = (CARS - room).saturating_add(many);
                let message = format!("found {all} cars, expected at most {CARS} in a train");
                lower.error(&count.at, message);
                1
            }
            some => some as usize,
        },
    };
    if room == 0 {
        lower.error(
            &at,
            format!("found more than {CARS} cars, expected at most {CARS} in a train"),
        );
        return (0, None);
    }
    (count, car(&at, keys, lower))
}

fn car(at: &At, keys: CarKeys, lower: &mut Lower) -> Option<Car> {
    let length = lower.require(keys.length, at, "length");
    let length_m = length.map(|length| lower.above_zero(&length));
    let axles_m = lower
        .require(keys.axles, at, "axles")
        .and_then(|axles| checked_axles(axles, length_m, lower));
    let mass = lower.require(keys.mass, at, "mass");
    let mass_kg = mass.map(|mass| lower.above_zero(&mass));
    let mass_centre = lower.require(keys.mass_centre, at, "mass_centre");
    let mass_centre_m = mass_centre.and_then(|offset| {
        let OffsetKeys {
            forward,
            left,
            right,
            up,
        } = offset.value;
        position(forward, [left, right], up, &offset.at, lower)
    });
    let inertia = optional(keys.inertia).map(|inertia| lowered_inertia(inertia, lower));
    let seats = lower
        .require(keys.seats, at, "seats")
        .and_then(|seats| all_seats(seats, lower));
    Some(Car {
        length_m: length_m?,
        axles_m: axles_m?,
        mass_kg: mass_kg?,
        mass_centre_m: mass_centre_m?,
        inertia: match inertia {
            Some(inertia) => Some(inertia?),
            None => None,
        },
        seats: seats?,
        place: lower.place(at),
    })
}

type LengthField = Field<Quantity<Length>>;

fn checked_axles(
    axles: Located<(LengthField, LengthField)>,
    length_m: Option<f64>,
    lower: &mut Lower,
) -> Option<[f64; 2]> {
    let (front, rear) = (axles.value.0.given()?, axles.value.1.given()?);
    let (front_m, rear_m) = (front.value.si, rear.value.si);
    if rear_m - front_m <= SHARED_AXLE_M {
        let (front, rear) = (lower.text(&front.at), lower.text(&rear.at));
        let message = format!(
            "found axles {front} and {rear} behind the nose, expected the front axle first, and the rear one more than 1 mm behind it"
        );
        lower.error(&axles.at, message);
    } else if let Some(length_m) = length_m.filter(|length_m| *length_m > 0.0)
        && !(front_m > -length_m && rear_m < 2.0 * length_m)
    {
        let message = format!("found axles far outside the car, which is {length_m} m long");
        lower.error(&axles.at, message);
    }
    Some([front_m, rear_m])
}

/// Axles stay in order from car to car.
fn check_neighbours(cars: &[Car], lower: &mut Lower) {
    for pair in cars.windows(2) {
        let (rear_m, next_m) = (pair[0].axles_m[1], pair[0].length_m + pair[1].axles_m[0]);
        if rear_m <= next_m + SHARED_AXLE_M {
            continue;
        }
        let message = format!(
            "rear axle {rear_m} m behind the car's nose is behind the next car's front axle at {next_m} m"
        );
        let mistake = crate::diagnostic::Diagnostic::error(message).at(&pair[0].place);
        lower
            .found
            .push(mistake.hint("`length` is from a car's nose to the nose of the next car"));
        return;
    }
}

/// A position in car axes; left and right are one axis with two names.
fn position(
    forward: LengthField,
    sides: [Option<LengthField>; 2],
    up: LengthField,
    at: &At,
    lower: &mut Lower,
) -> Option<Vector3<f64>> {
    let forward = lower.require(forward, at, "forward");
    let up = lower.require(up, at, "up");
    let left_m = match sides {
        [None, None] => {
            lower.missing(at, "left");
            None
        }
        [Some(left), None] => left.given().map(|left| left.value.si),
        [None, Some(right)] => right.given().map(|right| -right.value.si),
        [Some(_), Some(right)] => {
            let right_at = right.given().map_or(at.clone(), |right| right.at);
            lower.error(
                &right_at,
                "found both `left` and `right`, expected one of them",
            );
            None
        }
    };
    Some(Vector3::new(forward?.value.si, left_m?, up?.value.si))
}

fn lowered_inertia(inertia: Located<InertiaKeys>, lower: &mut Lower) -> Option<Inertia> {
    let (at, keys) = (inertia.at, inertia.value);
    let mut moment = |field: Field<Quantity<MomentOfInertia>>, key| {
        let moment = lower.require(field, &at, key)?;
        Some(lower.not_negative(&moment))
    };
    let (roll, pitch, yaw) = (
        moment(keys.roll, "roll"),
        moment(keys.pitch, "pitch"),
        moment(keys.yaw, "yaw"),
    );
    Some(Inertia {
        roll_kg_m2: roll?,
        pitch_kg_m2: pitch?,
        yaw_kg_m2: yaw?,
    })
}

fn all_seats(list: Located<Vec<Field<SeatKeys>>>, lower: &mut Lower) -> Option<Vec<Seat>> {
    let count = list.value.len();
    if count > SEATS {
        lower.count(&list.at, count, SEATS, "seats");
        return None;
    }
    let mut names = Names::of("seat");
    let given = list.value.into_iter().filter_map(Field::given);
    let seats: Vec<Seat> = given
        .filter_map(|entry| seat(entry, &mut names, lower))
        .collect();
    (seats.len() == count).then_some(seats)
}

fn seat(entry: Located<SeatKeys>, names: &mut Names, lower: &mut Lower) -> Option<Seat> {
    let (at, keys) = (entry.at, entry.value);
    let name = lower.require(keys.name, &at, "name");
    if let Some(name) = &name {
        names.add(name, lower);
    }
    let position_m = position(keys.forward, [keys.left, keys.right], keys.up, &at, lower);
    let rider = lower.require(keys.rider, &at, "rider");
    let rider_kg = rider.map(|rider| lower.not_negative(&rider));
    let recline = optional(keys.recline);
    let half_turn = -std::f64::consts::PI..=std::f64::consts::PI;
    let recline_rad = recline.map_or(0.0, |recline| {
        lower.within(&recline, half_turn, "from -180 deg to 180 deg")
    });
    Some(Seat {
        name: name?.value.0,
        position_m: position_m?,
        rider_kg: rider_kg?,
        faces_left_rad: optional(keys.faces).map_or(0.0, |faces| faces.value.left_rad),
        recline_rad,
        place: lower.place(&at),
    })
}
