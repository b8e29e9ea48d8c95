//! The cycloid valley, with a car so short that what it differs from a point by is below the tolerance.

use std::f64::consts::TAU;

use crestfall::input::Goal;
use crestfall::motion::RunEnd;
use crestfall::spine::Spine;
use crestfall::train::Poses;
use nalgebra::Vector3;

use crate::fixture::*;

/// Generating radius of the cycloid, m.
const CYCLOID_M: f64 = 10.0;

/// The inverted cycloid x = r (φ + sin φ), z = r (1 − cos φ), s = 4 r sin(φ/2), through points a
/// fifth of a metre apart, and the station of its lowest point.
fn cycloid() -> (Spine, f64) {
    let point = |phi: f64| Vector3::new(phi + phi.sin(), 0.0, 1.0 - phi.cos()) * CYCLOID_M;
    let phi = 2.0 * (25.0f64 / 40.0).asin();
    let spine = level_points(curve_points((-phi, phi), 251, point), false);
    close(spine.length_m(), 50.0, 1e-8);
    (spine, 25.0)
}

/// B01 (Huygens, *Horologium Oscillatorium*, 1673): from any height the bottom is reached after π√(r/g).
/// The car is 2 cm long, so the tolerance is that of a quintic through points 0.2 m apart.
#[test]
fn exact_tautochrone() {
    let (spine, bottom_m) = cycloid();
    let train = point_train(0.02, 1000.0);
    let poses = Poses::new(&spine, &train).unwrap();
    for height_m in [0.1f64, 2.0, 7.0] {
        let s = (8.0 * CYCLOID_M * height_m).sqrt();
        let middle_m = bottom_m + 0.01;
        let (scenario, goal) = (scenario(middle_m - s, 0.0), until(middle_m));
        let history = run(&poses, &train, &scenario, &goal);
        close(history.duration_s, 3.172411641554282, 2e-7);
        close(last(&history).speed_m_s, (2.0 * G * height_m).sqrt(), 1e-6);
        let fz = felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), last(&history)).z;
        close(fz, 1.0 + height_m / (2.0 * CYCLOID_M), 2e-6);
    }
}

/// B01, a train: five cars 3 m apart keep the period, for z is quadratic in s. Here axles are
/// chained by straight links, not by arcs: 3 m of chord are 3 (1 + 9κ²/24) m of arc, 0.02 %, and the
/// links turn; the period moves by less than 1e-3 of itself.
#[test]
fn exact_tautochrone_of_a_train() {
    let (spine, bottom_m) = cycloid();
    let mut cars = vec![car(0.02, 1000.0); 5];
    cars.iter_mut().for_each(|car| car.length_m = 3.0);
    let train = train(cars);
    let poses = Poses::new(&spine, &train).unwrap();
    let lead_m = bottom_m + 6.01;
    let (scenario, goal) = (scenario(lead_m - 17.0, 0.0), until(lead_m));
    let history = run(&poses, &train, &scenario, &goal);
    close(history.duration_s, 3.172411641554282, 3e-3);
    let expected = 17.0 * (G / (4.0 * CYCLOID_M)).sqrt();
    close(last(&history).speed_m_s, expected, 1e-3 * expected);
}

/// B12 (Lapidus, Am. J. Phys. 38, 1360; Marchewka et al., Am. J. Phys. 72, 477): constant friction
/// μ m g, which `bearings` is, takes 8 μ r off each half swing: from 15 m it turns at −12.6, 10.2,
/// −7.8, … and rests after six at 0.6 m from the bottom, 6 · 2π √(r/g) later.
#[test]
fn exact_rest_in_a_valley() {
    let (spine, bottom_m) = cycloid();
    let train = point_train(0.02, 1000.0);
    let poses = Poses::new(&spine, &train).unwrap();
    let middle_m = bottom_m + 0.01;
    let mut scenario = scenario(middle_m - 15.0, 0.0);
    scenario.resistance.bearings = 0.03;
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    assert_eq!(history.end, RunEnd::RolledBack);
    let turns = [12.6, -10.2, 7.8, -5.4, 3.0];
    assert_eq!(history.reversals.len(), turns.len());
    for (n, (reversal, s)) in history.reversals.iter().zip(turns).enumerate() {
        close(reversal.station_m - middle_m, s, 1e-6);
        let half_s = TAU * (CYCLOID_M / G).sqrt();
        close(reversal.time_s, (n + 1) as f64 * half_s, 3e-6);
    }
    close(history.end_station_m - middle_m, -0.6, 1e-6);
    close(history.duration_s, 38.068939698651384, 3e-6);
    let travelled_m = -history.energy.rolling_j / (0.03 * 1000.0 * G);
    close(travelled_m, 93.6, 1e-5);
}
