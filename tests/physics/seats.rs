//! Loads of seats that roll, stand on slopes, are turned and reclined.

use std::f64::consts::TAU;

use crestfall::input::{Columns, GravityTerm, Seat};
use crestfall::loads::car_loads;
use crestfall::motion::Samples;
use crestfall::train::Poses;
use nalgebra::Vector3;

use crate::fixture::*;

/// C09 (b): 360° of roll in 2 s about an axis 1.1 m below the rider, φ = 2π t/T − sin(2π t/T):
/// fy = sin φ − h φ″/g, fz = cos φ − h φ′²/g; the catalogue's roll lifts the left side.
#[test]
fn exact_roll_about_the_rail() {
    let (length_m, v) = (40.0, 20.0);
    let count = 801;
    let along = |i: usize| length_m * i as f64 / (count - 1) as f64 * 1.5 - 10.0;
    let roll = |s: f64| {
        let x = TAU * s / length_m;
        x - x.sin()
    };
    let centre_m = (0..count)
        .map(|i| Vector3::new(along(i), 0.0, 0.0))
        .collect();
    let bank_left_rad = (0..count).map(|i| left(roll(along(i)))).collect();
    let spine = point_spine(
        Columns::Bank {
            centre_m,
            bank_left_rad,
        },
        false,
    );
    let train = point_train(SHORT_M, 900.0);
    let poses = Poses::new(&spine, &train).unwrap();
    for (t, fy, fz) in [
        (0.25, -0.70459928195990145, 0.9019659309724493),
        (0.5, -0.56675921271346506, -0.26559053377370827),
        (1.0, 0.0, -5.4282460743264191),
        (1.5, 0.56675921271346506, -0.26559053377370827),
    ] {
        let at = state(10.0 + v * t + 0.5 * SHORT_M, v, 0.0);
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 1.1), at);
        close_vectors(felt, Vector3::new(0.0, fy, fz), 2e-6);
    }
    // On the axis only the turned weight is felt.
    let at = state(20.0 + 0.5 * SHORT_M, v, 0.0);
    let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), at);
    close(felt.y, 0.54030230586813972, 1e-6);
}

/// C10 (ISO 8855 axes; Titterton & Weston sec. 3): straight slopes, standing, running, launched, braked.
#[test]
fn exact_straight_slopes() {
    let train = point_train(1.0, 900.0);
    let felt = |grade_deg: f64, accel: f64| {
        let poses = Poses::new(&straight(30.0, grade_deg * DEG), &train).unwrap();
        felt_g(&poses, 0, &seat(0.4, -0.3, 1.2), state(10.0, 7.0, accel))
    };
    let (half, cos30) = (0.5, 0.8660254037844386);
    close_vectors(felt(-30.0, half * G), Vector3::new(0.0, 0.0, cos30), 1e-12);
    close_vectors(felt(-60.0, cos30 * G), Vector3::new(0.0, 0.0, half), 1e-12);
    close_vectors(felt(-30.0, 0.0), Vector3::new(-half, 0.0, cos30), 1e-12);
    close_vectors(
        felt(0.0, 12.0),
        Vector3::new(1.22365945557, 0.0, 1.0),
        1e-11,
    );
    close_vectors(
        felt(0.0, -6.0),
        Vector3::new(-0.6118297277868, 0.0, 1.0),
        1e-12,
    );
}

/// A seat turned and reclined.
fn turned(faces_left_deg: f64, recline_deg: f64) -> Seat {
    Seat {
        faces_left_rad: faces_left_deg * DEG,
        recline_rad: recline_deg * DEG,
        ..seat(0.3, 0.4, 1.0)
    }
}

/// Seats at rest and launched at 1 g on the level: rider axes by hand. Reclined by ρ, a rider at
/// rest feels (sin ρ, 0, cos ρ); one who faces left feels a push forward at his right side, toward −y.
#[test]
fn exact_turned_and_reclined_seats() {
    let train = point_train(1.0, 900.0);
    let poses = Poses::new(&straight(30.0, 0.0), &train).unwrap();
    let felt = |seat: &Seat, accel: f64| felt_g(&poses, 0, seat, state(10.0, 3.0, accel));
    let (s, c) = (20.0 * DEG).sin_cos();
    for faces_deg in [0.0, 180.0, 90.0, -90.0, 35.0] {
        close_vectors(felt(&turned(faces_deg, 0.0), 0.0), Vector3::z(), 1e-13);
        close_vectors(
            felt(&turned(faces_deg, 20.0), 0.0),
            Vector3::new(s, 0.0, c),
            1e-13,
        );
    }
    let launched = [
        (0.0, Vector3::new(1.0, 0.0, 1.0)),
        (180.0, Vector3::new(-1.0, 0.0, 1.0)),
        (90.0, Vector3::new(0.0, -1.0, 1.0)),
        (-90.0, Vector3::new(0.0, 1.0, 1.0)),
    ];
    for (faces_deg, expected) in launched {
        close_vectors(felt(&turned(faces_deg, 0.0), G), expected, 1e-13);
    }
    // Reclined and launched: x takes cos ρ of the push and sin ρ of the weight, z the rest.
    let expected = Vector3::new(c + s, 0.0, c - s);
    close_vectors(felt(&turned(0.0, 20.0), G), expected, 1e-13);
    let backward = Vector3::new(-c + s, 0.0, c + s);
    close_vectors(felt(&turned(180.0, 20.0), G), backward, 1e-13);
}

/// Without gravity a load is the acceleration alone: at rest nothing.
#[test]
fn exact_without_gravity() {
    let train = point_train(1.0, 900.0);
    let poses = Poses::new(&straight(30.0, 25.0 * DEG), &train).unwrap();
    let samples = Samples {
        rate_hz: 1.0,
        train_station_m: vec![10.0; 2],
        speed_m_s: vec![0.0, 5.0],
        acceleration_m_s2: vec![0.0, G],
    };
    let seats = [turned(0.0, 0.0)];
    let loads = car_loads(&poses, 0, &seats, &samples, G, GravityTerm::Excluded);
    let at = |i: usize| {
        Vector3::new(
            loads.seats[0][0][i],
            loads.seats[0][1][i],
            loads.seats[0][2][i],
        )
    };
    close_vectors(at(0), Vector3::zeros(), 1e-13);
    close_vectors(at(1), Vector3::x(), 1e-13);
}

/// Local gravity weighs, loads stay in g₀ = 9.80665 m/s²: at rest a seat feels g/g₀.
#[test]
fn exact_local_gravity() {
    let train = point_train(1.0, 900.0);
    let poses = Poses::new(&straight(30.0, 0.0), &train).unwrap();
    let samples = Samples {
        rate_hz: 1.0,
        train_station_m: vec![10.0],
        speed_m_s: vec![0.0],
        acceleration_m_s2: vec![0.0],
    };
    let seats = [turned(0.0, 0.0)];
    let loads = car_loads(&poses, 0, &seats, &samples, 9.78, GravityTerm::Included);
    close(loads.seats[0][2][0], 9.78 / 9.80665, 1e-13);
}
