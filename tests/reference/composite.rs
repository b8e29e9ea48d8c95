//! One whole ride against an independent reference (`composite/SOURCE.md`), read from its files.
#![allow(missing_docs, clippy::unwrap_used)]

use std::path::Path;

use crestfall::input::{GravityTerm, Study, read_study};
use crestfall::loads::{car_loads, filtered};
use crestfall::motion::{History, Ride, RunEnd, Samples, simulate};
use crestfall::spine::Spine;
use crestfall::study::{Selection, assess};
use crestfall::train::Poses;
use serde_json::Value;

/// Tolerances, m/s, g, and of utilisations: the reference itself asks for 2e-4, 2e-3 and 2e-3.
const SPEED_M_S: f64 = 2e-6;
const FELT_G: f64 = 2e-5;
const UTILISATION: f64 = 1e-5;

fn folder() -> &'static Path {
    Path::new(concat!(
        env!("CARGO_MANIFEST_DIR"),
        "/tests/reference/composite"
    ))
}

fn reference() -> Value {
    let text = std::fs::read_to_string(folder().join("reference.json")).unwrap();
    serde_json::from_str(&text).unwrap()
}

fn numbers(value: &Value) -> Vec<f64> {
    value
        .as_array()
        .unwrap()
        .iter()
        .map(|v| v.as_f64().unwrap())
        .collect()
}

/// Calls `check` with each scenario's run and its part of the reference.
fn each_case(check: impl Fn(&Study, &Poses, &History<'_>, &Value)) {
    let study = read_study(&folder().join("study.study.yaml")).unwrap();
    let variant = &study.variants[0];
    let spine = Spine::from_track(&variant.track).unwrap();
    let poses = Poses::new(&spine, &variant.train).unwrap();
    assert_eq!(study.operation.scenarios.len(), 2);
    for scenario in &study.operation.scenarios {
        let ride = Ride {
            poses: &poses,
            train: &variant.train,
            scenario,
            goal: &study.operation.goal,
            time_limit_s: study.operation.time_limit_s,
            gravity_m_s2: study.gravity_m_s2,
        };
        check(
            &study,
            &poses,
            &simulate(&ride).unwrap(),
            &reference()["cases"][&scenario.name],
        );
    }
}

/// The run's states at the times the reference gives.
fn states(history: &History<'_>, times_s: &[f64]) -> Samples {
    let states = times_s
        .iter()
        .map(|&t| history.state_at(t).unwrap())
        .collect::<Vec<_>>();
    Samples {
        rate_hz: f64::NAN,
        train_station_m: states.iter().map(|s| s.station_m).collect(),
        speed_m_s: states.iter().map(|s| s.speed_m_s).collect(),
        acceleration_m_s2: states.iter().map(|s| s.acceleration_m_s2).collect(),
    }
}

fn assert_near(found: f64, expected: f64, tolerance: f64, what: &str) {
    assert!(
        (found - expected).abs() <= tolerance,
        "{what}: {found}, reference {expected}"
    );
}

/// Speed at 60 stations; the same at the same time, which the reference also gives.
#[test]
fn independent_speeds_of_the_composite_ride() {
    each_case(|_, _, history, expected| {
        assert_eq!(history.end, RunEnd::Completed);
        assert_near(
            history.duration_s,
            expected["duration_s"].as_f64().unwrap(),
            1e-5,
            "duration",
        );
        let at = states(history, &numbers(&expected["time"]));
        let (stations, speeds) = (&expected["train_station_m"], &expected["speed"]);
        for (i, (s, v)) in numbers(stations).iter().zip(numbers(speeds)).enumerate() {
            assert_near(at.train_station_m[i], *s, 1e-4, "station");
            assert_near(at.speed_m_s[i], v, SPEED_M_S, "speed");
        }
        assert!(history.energy.closure_j.abs() <= 1e-6 * history.energy.turned_over_j);
    });
}

/// Felt loads of every seat at 60 stations.
#[test]
fn independent_felt_loads_of_the_composite_ride() {
    each_case(|study, poses, history, expected| {
        let at = states(history, &numbers(&expected["time"]));
        for (car, entry) in study.variants[0].train.cars.iter().enumerate() {
            let loads = car_loads(
                poses,
                car,
                &entry.seats,
                &at,
                9.80665,
                GravityTerm::Included,
            );
            for (axes, seat) in loads.seats.iter().zip(&entry.seats) {
                let name = format!("{}-{}", car + 1, seat.name);
                let felt = expected["seats"][&name]["felt"].as_array().unwrap();
                assert_eq!(felt.len(), 60);
                for (i, row) in felt.iter().enumerate() {
                    for (axis, value) in numbers(row).into_iter().enumerate() {
                        assert_near(axes[axis][i], value, FELT_G, &name);
                    }
                }
            }
        }
    });
}

/// Largest and smallest load of every seat over the run at 500 Hz, unfiltered and filtered.
#[test]
fn independent_extremes_of_the_composite_ride() {
    each_case(|study, poses, history, expected| {
        let samples = history.samples(study.rate_hz);
        for (car, entry) in study.variants[0].train.cars.iter().enumerate() {
            let loads = car_loads(
                poses,
                car,
                &entry.seats,
                &samples,
                9.80665,
                GravityTerm::Included,
            );
            for (axes, seat) in loads.seats.iter().zip(&entry.seats) {
                let name = format!("{}-{}", car + 1, seat.name);
                let smooth = filtered(axes, study.rate_hz, study.envelopes[0].filter);
                let rows = [("max", "min", axes), ("fmax", "fmin", &smooth.axes_g)];
                for (largest, smallest, axes) in rows {
                    for (axis, load) in axes.iter().enumerate() {
                        let reference =
                            |key: &str| expected["seats"][&name][key][axis].as_f64().unwrap();
                        let max = load.iter().copied().fold(f64::MIN, f64::max);
                        let min = load.iter().copied().fold(f64::MAX, f64::min);
                        assert_near(max, reference(largest), FELT_G, &name);
                        assert_near(min, reference(smallest), FELT_G, &name);
                    }
                }
            }
        }
    });
}

/// Utilisation of every rule in every seat and scenario.
#[test]
fn independent_utilisations_of_the_composite_ride() {
    let study = read_study(&folder().join("study.study.yaml")).unwrap();
    let assessment = assess(&study, &Selection::default(), &|_, _| ()).unwrap();
    let mut compared = 0;
    for case in &assessment.cases {
        for seat in &case.seats {
            let name = format!("{}-{}", seat.car, seat.seat);
            for rule in seat.rules.iter().map(|rule| &rule.judgement) {
                let expected =
                    &reference()["cases"][&case.scenario]["seats"][&name]["rules"][&rule.rule];
                let found = rule.utilisation.unwrap();
                assert_near(found, expected.as_f64().unwrap(), UTILISATION, &rule.rule);
                compared += 1;
            }
        }
    }
    assert_eq!(compared, 2 * 6 * 4);
}
