//! Loads in turns, banked and climbing, and of seats off the spine.

use std::f64::consts::TAU;

use crestfall::input::{Columns, Ease, Element, GravityTerm, Start};
use crestfall::loads::car_loads;
use crestfall::motion::Samples;
use crestfall::spine::Spine;
use crestfall::train::Poses;
use nalgebra::Vector3;

use crate::fixture::*;

/// A flat circle to the left through points, banked to the left throughout.
fn banked_circle(radius_m: f64, bank_left_deg: f64) -> Spine {
    let circle = |t: f64| Vector3::new(t.cos(), t.sin(), 0.0) * radius_m;
    let centre_m = lap_points(TAU, 400, circle);
    let bank_left_rad = vec![bank_left_deg * DEG; 400];
    point_spine(
        Columns::Bank {
            centre_m,
            bank_left_rad,
        },
        true,
    )
}

/// C06 (Meriam & Kraige, *Dynamics*, sec. 3/5): lateral toward the centre (v²/R cos − g sin)/g, fz
/// (v²/R sin + g cos)/g. In a turn to the left the centre is to the left: fy > 0.
#[test]
fn exact_banked_turns() {
    for (radius_m, v, bank_deg, fy, fz) in [
        (25.0, 15.0, 30.0, 0.29479013058077405, 1.3248976996245064),
        (25.0, 15.0, 45.0, -0.058163357012244606, 1.3560502053608504),
        (18.0, 14.0, 60.0, -0.31084657671867771, 1.4615979357643933),
        (18.0, 14.0, 0.0, 1.1103576541315219, 1.0),
        (18.0, 14.0, 90.0, -1.0, 1.1103576541315219),
        (40.0, 12.0, -10.0, 0.53516897333557856, 0.92106188264863342),
        (25.0, 15.0, 42.543989516201973, 0.0, 1.357296996076444),
    ] {
        let train = point_train(SHORT_M, 900.0);
        let poses = Poses::new(&banked_circle(radius_m, bank_deg), &train).unwrap();
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), state(3.0, v, 0.0));
        close_vectors(felt, Vector3::new(0.0, fy, fz), 5e-7);
    }
}

/// C06: OpenStax *College Physics*, example 6.5: at R = 100 m, 65° and g = 9.80 m/s², 45.8 m/s need
/// no side force (printed to three digits).
#[test]
fn published_ideal_banking_speed() {
    let train = point_train(SHORT_M, 900.0);
    let poses = Poses::new(&banked_circle(100.0, 65.0), &train).unwrap();
    let side = |v: f64| {
        let samples = Samples {
            rate_hz: 1.0,
            train_station_m: vec![3.0],
            speed_m_s: vec![v],
            acceleration_m_s2: vec![0.0],
        };
        let seats = [seat(0.0, 0.0, 0.0)];
        let loads = car_loads(&poses, 0, &seats, &samples, 9.80, GravityTerm::Included);
        loads.seats[0][1][0]
    };
    assert!(side(45.75) < 0.0 && side(45.85) > 0.0);
    close(side(45.843394094453428), 0.0, 1e-6);
}

/// C06: FAA load-factor chart (second hand): a balanced turn banked 60° is felt as 2.000, 45° as 1.414, 30° as 1.154.
#[test]
fn published_load_factors() {
    for (bank_deg, factor) in [(30.0, 1.154), (45.0, 1.414), (60.0, 2.0)] {
        let radius_m = 50.0;
        let v = (G * radius_m * f64::tan(bank_deg * DEG)).sqrt();
        let train = point_train(SHORT_M, 900.0);
        let poses = Poses::new(&banked_circle(radius_m, bank_deg), &train).unwrap();
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), state(3.0, v, 0.0));
        close(felt.z, factor, 1e-3);
        close(felt.y, 0.0, 1e-6);
    }
}

/// A helix of radius a that climbs 2π b a turn to the left, banked to the left.
fn banked_helix(a: f64, b: f64, bank_left_deg: f64) -> Spine {
    let turns = 1.5;
    let start = Start {
        grade_rad: (b / a).atan(),
        bank_left_rad: bank_left_deg * DEG,
        ..east()
    };
    let turn = Element {
        turn_left_rad: TAU * turns,
        ease: Ease::Ramp(0.1),
        ..element(a.hypot(b) * TAU * turns / 0.9)
    };
    element_spine(start, vec![turn])
}

/// C06: a climbing helix: a_n = v² a/(a² + b²); fx = sin of the climb.
#[test]
fn exact_banked_helix() {
    for (bank_deg, fy, fz) in [
        (0.0, 1.2923136164472754, 0.99503719020998914),
        (40.0, 0.35037208760213637, 1.5929258907385951),
    ] {
        let train = point_train(SHORT_M, 900.0);
        let poses = Poses::new(&banked_helix(20.0, 2.0, bank_deg), &train).unwrap();
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), state(50.0, 16.0, 0.0));
        close_vectors(felt, Vector3::new(0.099503719020998914, fy, fz), 5e-7);
    }
}

/// C09 (e): the same with a seat 0.5 m left and 1.1 m up: all of it turns as a screw, ω = v/√(a² + b²).
#[test]
fn exact_offset_seat_on_a_banked_helix() {
    let train = point_train(SHORT_M, 900.0);
    let poses = Poses::new(&banked_helix(15.0, 2.0, 35.0), &train).unwrap();
    let felt = felt_g(&poses, 0, &seat(0.0, 0.5, 1.1), state(50.0, 14.0, 0.0));
    let expected = Vector3::new(0.13918718433847725, 0.43000007145191096, 1.5100119153956169);
    close_vectors(felt, expected, 1e-6);
}

/// C09 (c): valley and crest of R = 20 m with the rider 1.1 m above the rail: 1 ± v² (R ∓ h)/gR²,
/// and what the train's own acceleration makes of it there: a_t (R + h)/R.
#[test]
fn exact_rider_above_the_rail() {
    let train = point_train(1.0, 900.0);
    for (side, fz) in [(1.0, 2.5610835504479103), (-1.0, -0.74279697960057716)] {
        let arc = Arc3::new(20.0, -side * 30.0, side * 30.0);
        let poses = Poses::new(&arc.spine, &train).unwrap();
        let above = 1.1 + height_of_rail_m(1.0, side * 20.0);
        let place_m = arc.leading_m(1.0, 0.0);
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, above), state(place_m, 18.0, 0.0));
        close_vectors(felt, Vector3::new(0.0, 0.0, fz), 1e-10);
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, above), state(place_m, 0.0, -4.0));
        close(felt.x * G, -4.0 * (20.0 - side * 1.1) / 20.0, 1e-10);
    }
}

/// C09 (d): a flat turn to the left of R = 12 m at 11 m/s, seats 0.6 m outside and inside.
#[test]
fn exact_inner_and_outer_seat() {
    let (radius_m, train) = (12.0, point_train(1.0, 900.0));
    let poses = Poses::new(&banked_circle(radius_m, 0.0), &train).unwrap();
    // The middle of the chord lies inside the rail circle by this much.
    let inside_m = -height_of_rail_m(1.0, radius_m);
    for (left_m, fy) in [(-0.6, 1.0796245404903815), (0.6, 0.97680315568177376)] {
        let rider = seat(0.0, left_m - inside_m, 0.0);
        let felt = felt_g(&poses, 0, &rider, state(5.0, 11.0, 0.0));
        close_vectors(felt, Vector3::new(0.0, fy, 1.0), 1e-7);
    }
}
