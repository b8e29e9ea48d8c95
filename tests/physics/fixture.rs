//! Tracks, trains and runs made in a line or two.

use std::sync::Arc;

use crestfall::diagnostic::{Place, Source};
use crestfall::input::{
    Air, Car, Change, Device, Ease, Element, ElementTrack, Extent, Goal, Inertia, Release,
    Resistance, Riders, Scenario, Seat, Start, Track, TrackSource, Train, Zone,
};
use crestfall::motion::{History, Ride, simulate};
use crestfall::spine::Spine;
use crestfall::train::Poses;
use nalgebra::Vector3;

pub fn place() -> Place {
    let source = Source {
        name: "test".into(),
        text: String::new(),
    };
    Place {
        source: Arc::new(source),
        span: 0..0,
    }
}

pub fn element(length_m: f64) -> Element {
    Element {
        name: None,
        extent: Extent::Length(length_m),
        grade: None,
        turn_left_rad: 0.0,
        bank: None,
        ease: Ease::Smooth,
        bank_ease: Ease::Smooth,
        place: place(),
    }
}

/// A change of grade over a length at an even rate but for its first and last millionth.
pub fn arc_by(length_m: f64, grade_by_rad: f64) -> Element {
    let grade = Some(Change::By(grade_by_rad));
    Element {
        grade,
        ease: Ease::Ramp(1e-6),
        ..element(length_m)
    }
}

pub fn element_spine(start: Start, elements: Vec<Element>) -> Spine {
    let source = TrackSource::Elements(ElementTrack { start, elements });
    Spine::from_track(&Track {
        name: "test".into(),
        source,
        landmarks: vec![],
        place: place(),
    })
    .unwrap()
}

/// One car without seats whose axles lie `wheelbase_m` apart, all its mass at the origin of its axes.
pub fn point_train(wheelbase_m: f64, mass_kg: f64) -> Train {
    train(vec![car(wheelbase_m, mass_kg)])
}

pub fn car(wheelbase_m: f64, mass_kg: f64) -> Car {
    Car {
        length_m: 2.0 * wheelbase_m,
        axles_m: [0.0, wheelbase_m],
        mass_kg,
        mass_centre_m: Vector3::zeros(),
        inertia: None::<Inertia>,
        seats: vec![],
        place: place(),
    }
}

pub fn train(cars: Vec<Car>) -> Train {
    Train {
        name: "test".into(),
        cars,
        rolling_mass_kg: 0.0,
        axle_mass_kg: 0.0,
        place: place(),
    }
}

pub fn seat(forward_m: f64, left_m: f64, up_m: f64) -> Seat {
    Seat {
        name: "seat".into(),
        position_m: Vector3::new(forward_m, left_m, up_m),
        rider_kg: 80.0,
        faces_left_rad: 0.0,
        recline_rad: 0.0,
        place: place(),
    }
}

pub fn zone(name: &str, from_m: f64, to_m: f64, device: Device) -> Zone {
    Zone {
        name: name.into(),
        from_m,
        to_m,
        device,
        place: place(),
    }
}

/// A release without any resistance.
pub fn scenario(station_m: f64, speed_m_s: f64) -> Scenario {
    Scenario {
        name: "test".into(),
        riders: Riders::None,
        resistance: Resistance {
            running: 0.0,
            side: 0.0,
            bearings: 0.0,
            drag_area_m2: 0.0,
        },
        air: Air::Density(1.225),
        wind: None,
        zones: vec![],
        release: Release {
            station_m,
            speed_m_s,
            place: place(),
        },
        place: place(),
    }
}

pub fn until(station_m: f64) -> Goal {
    Goal::Until {
        station_m,
        place: place(),
    }
}

pub fn ride<'a>(
    poses: &'a Poses,
    train: &'a Train,
    scenario: &'a Scenario,
    goal: &'a Goal,
) -> Ride<'a> {
    Ride {
        poses,
        train,
        scenario,
        goal,
        time_limit_s: 600.0,
        gravity_m_s2: 9.80665,
    }
}

pub fn run<'a>(
    poses: &'a Poses,
    train: &'a Train,
    scenario: &'a Scenario,
    goal: &'a Goal,
) -> History<'a> {
    simulate(&ride(poses, train, scenario, goal)).unwrap()
}
