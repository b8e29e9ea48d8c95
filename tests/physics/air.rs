//! Density and wind.

use crestfall::input::{Air, Wind};
use crestfall::motion::{density_kg_m3, wind_m_s};
use nalgebra::Vector3;

use crate::fixture::*;

fn at_altitude(altitude_m: f64, temperature_k: Option<f64>) -> f64 {
    density_kg_m3(Air::Altitude {
        altitude_m,
        temperature_k,
    })
}

/// E01 (ISO 2533:1975): density at geopotential altitudes, R = 287.05287 J/(kg K).
#[test]
fn exact_standard_atmosphere() {
    for (altitude_m, density) in [
        (0.0, 1.22500001812),
        (500.0, 1.16726882786),
        (1000.0, 1.11164250031),
        (2000.0, 1.00649009746),
        (3000.0, 0.909121861216),
    ] {
        close(at_altitude(altitude_m, None), density, 1e-11);
    }
}

/// E01: MathWorks' page of `atmosisa` prints 1.1116 kg/m³ at 1000 m; ISO 2533 prints 1.2250 at 0.
#[test]
fn published_standard_atmosphere() {
    close(at_altitude(1000.0, None), 1.1116, 0.5e-4);
    close(at_altitude(0.0, None), 1.2250, 0.5e-4);
}

/// E02 (ideal gas; ICAO Doc 7488): standard pressure, another temperature.
#[test]
fn exact_other_temperatures() {
    for (altitude_m, offset_k, density) in [
        (0.0, 20.0, 1.14549328321),
        (500.0, 15.0, 1.1088859255),
        (1500.0, -25.0, 1.16245431983),
        (2000.0, 20.0, 0.9382881596369),
    ] {
        let standard_k = 288.15 - 0.0065 * altitude_m;
        close(
            at_altitude(altitude_m, Some(standard_k + offset_k)),
            density,
            2e-11,
        );
    }
}

/// E04: ½ ρ C_dA v² at 2000 m, 2.5 m², 30 m/s: 1132.30135965 N, and so it slows a train.
#[test]
fn exact_drag_at_altitude() {
    let train = point_train(1.0, 1000.0);
    let poses = crestfall::train::Poses::new(&straight(50.0, 0.0), &train).unwrap();
    let mut scenario = scenario(2.0, 30.0);
    scenario.air = Air::Altitude {
        altitude_m: 2000.0,
        temperature_k: None,
    };
    scenario.resistance.drag_area_m2 = 2.5;
    let history = run_for(&poses, &train, &scenario, 0.1);
    let force_n = -1000.0 * history.state_at(0.0).unwrap().acceleration_m_s2;
    close(force_n, 1132.30135965, 1e-8);
}

/// E05 (FAA, *Pilot's Handbook of Aeronautical Knowledge*, crosswind chart): head wind w cos and
/// cross wind from the right w sin of the angle between bearing and heading.
#[test]
fn exact_wind_components() {
    for (heading_deg, from_deg, speed, head, from_right) in [
        (40.0, 100.0, 12.0, 6.0, 10.3923048454),
        (90.0, 70.0, 20.0, 18.7938524157, -6.840402866513),
        (0.0, 180.0, 10.0, -10.0, 0.0),
        (270.0, 315.0, 15.0, 10.6066017178, 10.6066017178),
    ] {
        let wind = wind_m_s(Some(Wind {
            speed_m_s: speed,
            from_bearing_rad: from_deg * DEG,
        }));
        let (sin, cos) = (heading_deg * DEG).sin_cos();
        let (ahead, left) = (Vector3::new(sin, cos, 0.0), Vector3::new(-cos, sin, 0.0));
        close(-wind.dot(&ahead), head, 1e-10);
        // What comes from the right blows to the left.
        close(wind.dot(&left), from_right, 1e-10);
    }
}

/// E05: heading 40° and climbing 30°, wind from 100° at 12 m/s: 5.196 m/s against the train.
#[test]
fn exact_wind_on_a_climb() {
    let start = crestfall::input::Start {
        bearing_rad: 40.0 * DEG,
        grade_rad: 30.0 * DEG,
        ..Default::default()
    };
    let spine = element_spine(start, vec![element(50.0)]);
    let train = point_train(1.0, 1000.0);
    let poses = crestfall::train::Poses::new(&spine, &train).unwrap();
    let mut scenario = scenario(2.0, 3.0);
    scenario.air = Air::Density(1.0);
    scenario.resistance.drag_area_m2 = 2.0;
    scenario.wind = Some(Wind {
        speed_m_s: 12.0,
        from_bearing_rad: 100.0 * DEG,
    });
    let history = run_for(&poses, &train, &scenario, 0.1);
    let accel = history.state_at(0.0).unwrap().acceleration_m_s2;
    close(
        accel,
        -0.5 * G - (3.0 + 5.19615242271f64).powi(2) / 1000.0,
        1e-11,
    );
}
