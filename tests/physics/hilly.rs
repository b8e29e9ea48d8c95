//! A ride with everything on it, for comparisons of the program with itself and for its books.

use crestfall::input::{
    Air, Car, Change, Element, Inertia, Resistance, Riders, Scenario, Start, Train, Wind, Zone,
};
use crestfall::spine::Spine;
use nalgebra::Vector3;

use crate::fixture::*;

/// Elements of the hilly track; `side` −1 mirrors it.
pub fn elements(side: f64) -> Vec<Element> {
    let go = |length_m: f64, grade_to: f64, turn: f64, bank_to: f64| Element {
        grade: Some(Change::To(grade_to * DEG)),
        turn_left_rad: side * turn * DEG,
        bank: Some(Change::To(side * bank_to * DEG)),
        ..element(length_m)
    };
    vec![
        go(25.0, 0.0, 0.0, 0.0),
        go(30.0, -48.0, 0.0, 0.0),
        go(30.0, 0.0, 20.0, 25.0),
        go(35.0, 25.0, 60.0, 55.0),
        go(40.0, -25.0, 70.0, 20.0),
        go(30.0, 0.0, -30.0, -40.0),
        go(30.0, 18.0, -60.0, -10.0),
        go(30.0, 0.0, 0.0, 0.0),
        go(30.0, 0.0, 0.0, 0.0),
    ]
}

pub fn start() -> Start {
    Start {
        z_m: 30.0,
        bearing_rad: 0.7,
        ..Start::default()
    }
}

pub fn spine() -> Spine {
    element_spine(start(), elements(1.0))
}

/// Two cars with inertia and three seats, one of them turned and reclined; `side` −1 mirrors it.
pub fn hilly_train(side: f64) -> Train {
    let mut odd = seat(-0.2, side * 0.1, 1.1);
    odd.faces_left_rad = side * 1.1;
    odd.recline_rad = 0.3;
    let one = Car {
        length_m: 2.6,
        axles_m: [0.4, 2.0],
        mass_centre_m: Vector3::new(0.05, side * 0.06, 0.45),
        inertia: Some(Inertia {
            roll_kg_m2: 180.0,
            pitch_kg_m2: 420.0,
            yaw_kg_m2: 430.0,
        }),
        seats: vec![seat(0.5, side * 0.4, 0.9), seat(0.5, side * -0.4, 0.9), odd],
        ..car(1.6, 640.0)
    };
    Train {
        rolling_mass_kg: 25.0,
        axle_mass_kg: 40.0,
        ..train(vec![one; 3])
    }
}

/// All four kinds of zone.
pub fn zones() -> Vec<Zone> {
    vec![
        zone("tyres", 5.0, 27.0, hold(4.0, 12e3)),
        zone("booster", 80.0, 95.0, push(9e3, 24.0)),
        zone("trim", 130.0, 142.0, eddy(5e3, 9.0)),
        zone("brake", 225.0, 240.0, clamp(11e3, 5.5)),
    ]
}

/// Friction, drag, wind and zones.
pub fn scenario_with_all() -> Scenario {
    Scenario {
        riders: Riders::All,
        resistance: Resistance {
            running: 0.012,
            side: 0.02,
            bearings: 0.001,
            drag_area_m2: 3.2,
        },
        air: Air::Altitude {
            altitude_m: 300.0,
            temperature_k: Some(295.0),
        },
        wind: Some(Wind {
            speed_m_s: 7.0,
            from_bearing_rad: 2.0,
        }),
        ..zoned(12.0, 1.5, zones())
    }
}
