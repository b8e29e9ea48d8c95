//! How runs end, and what closed tracks make of stations and zones.

use std::f64::consts::TAU;

use crestfall::input::{Columns, Fit, Goal, PointTable, Track, TrackSource, Train, Zone};
use crestfall::motion::{Ride, RunEnd, simulate};
use crestfall::spine::Spine;
use crestfall::train::{PoseError, Poses};
use nalgebra::Vector3;

use crate::fixture::*;

fn level(length_m: f64) -> (Poses, Train) {
    let train = point_train(1.0, 5000.0);
    let poses = Poses::new(&straight(length_m, 0.0), &train).unwrap();
    (poses, train)
}

/// An open track without a goal of its own ends where the leading axle reaches L; `until` before.
#[test]
fn exact_ends_ahead() {
    let (poses, train) = level(100.0);
    let scenario = scenario(3.0, 10.0);
    for (goal, station_m) in [(Goal::TrackEnd, 100.0), (until(61.5), 61.5)] {
        let history = run(&poses, &train, &scenario, &goal);
        assert_eq!(history.end, RunEnd::Completed);
        close(history.end_station_m, station_m, 0.0);
        close(history.duration_s, (station_m - 3.0) / 10.0, 1e-10);
        assert!(history.reversals.is_empty());
    }
}

/// A finish: rest in it is completed, rest before it is a stall, and past it L is an overrun.
#[test]
fn exact_finish_on_an_open_track() {
    let (poses, train) = level(100.0);
    for (force_n, stops_m, end) in [
        (50e3, 75.0, RunEnd::Completed),
        (5e3, 100.0, RunEnd::Overran),
    ] {
        let zones = vec![zone("final", 60.0, 90.0, clamp(force_n, 0.0))];
        let scenario = zoned(3.0, 17.0, zones);
        let goal = finish("final");
        let history = run(&poses, &train, &scenario, &goal);
        assert_eq!(history.end, end);
        // Half a metre of brake is lost while the share of the one-metre train grows.
        let expected = if end == RunEnd::Overran {
            stops_m
        } else {
            60.5 + 0.5 * 289.0 / 10.0
        };
        close(history.end_station_m, expected, 1e-9);
    }
    let mut early = zoned(3.0, 17.0, vec![zone("final", 60.0, 90.0, clamp(50e3, 0.0))]);
    early.resistance.running = 0.4;
    let goal = finish("final");
    let history = run(&poses, &train, &early, &goal);
    assert_eq!(history.end, RunEnd::Stalled);
    close(history.end_station_m, 3.0 + 289.0 / (0.8 * G), 1e-9);
}

/// Still moving when the time is up.
#[test]
fn exact_time_limit() {
    let (poses, train) = level(100.0);
    let scenario = scenario(3.0, 10.0);
    let history = run_for(&poses, &train, &scenario, 2.5);
    assert_eq!(history.end, RunEnd::TimeLimit);
    close(history.duration_s, 2.5, 0.0);
    close(history.end_station_m, 28.0, 1e-9);
}

/// Without resistance a train swings in a valley until the time is up: rolled back, not time limit.
#[test]
fn exact_swinging_to_the_time_limit() {
    let arc = Arc3::new(20.0, -80.0, 80.0);
    let train = train(vec![car_on_circle(1.0, 1000.0, 20.0)]);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    let release = scenario(arc.leading_m(1.0, -30.0 * DEG), 0.0);
    let history = run_for(&poses, &train, &release, 20.0);
    assert_eq!(history.end, RunEnd::RolledBack);
    // Half swings of 4.5645715744 s (B03, 30°).
    assert_eq!(history.reversals.len(), 4);
    close(history.reversals[3].time_s, 2.0 * 9.1291431494888904, 1e-6);
}

/// A train released from rest on a climb reverses at once, and rests at last in the valley: it has
/// rolled back, though it was released forward, and into the finish.
#[test]
fn exact_reversal_at_the_release() {
    let arc = Arc3::new(20.0, -60.0, 60.0);
    let train = train(vec![car_on_circle(1.0, 1000.0, 20.0)]);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    let zones = vec![zone(
        "final",
        arc.station_m(-0.1),
        arc.station_m(0.1),
        clamp(8e3, 0.0),
    )];
    let release = zoned(arc.leading_m(1.0, 30.0 * DEG), 0.0, zones);
    let goal = finish("final");
    let history = run(&poses, &train, &release, &goal);
    assert_eq!(history.end, RunEnd::RolledBack);
    close(history.reversals[0].time_s, 0.0, 0.0);
    close(last(&history).speed_m_s, 0.0, 1e-9);
    let lowest_m = arc.leading_m(1.0, 0.0);
    assert!(
        (history.end_station_m - lowest_m).abs() < 2.5,
        "{}",
        history.end_station_m
    );
}

/// A long train that rolls back ends where its last axle reaches station 0, its leading axle a
/// train's length (chained by chords) ahead.
#[test]
fn exact_last_axle_at_the_start() {
    let mut cars = vec![car(1.0, 1000.0); 4];
    cars.iter_mut().for_each(|car| car.length_m = 2.5);
    let train = train(cars);
    let poses = Poses::new(&straight(60.0, 25.0 * DEG), &train).unwrap();
    close(poses.stations_m().0, 8.5, 1e-10);
    let release = scenario(20.0, 5.0);
    let history = run(&poses, &train, &release, &Goal::TrackEnd);
    assert_eq!(history.end, RunEnd::RolledBack);
    close(history.end_station_m, 8.5, 1e-10);
    let pull = G * (25.0 * DEG).sin();
    close(
        history.reversals[0].station_m,
        20.0 + 25.0 / (2.0 * pull),
        1e-9,
    );
    close(
        last(&history).speed_m_s,
        -(25.0 + 2.0 * pull * 11.5).sqrt(),
        1e-9,
    );
}

/// Radius of the closed tracks here, m.
const RADIUS_M: f64 = 25.0;

fn ring() -> Spine {
    let circle = |t: f64| Vector3::new(t.cos(), t.sin(), 0.0) * RADIUS_M;
    level_points(lap_points(TAU, 240, circle), true)
}

/// Ten metres from first to last axle.
fn ring_train() -> Train {
    let mut cars = vec![car(1.0, 1250.0); 4];
    cars.iter_mut().for_each(|car| car.length_m = 3.0);
    train(cars)
}

/// M at unit speed of a train on the ring: chords lie inside the rail circle.
fn ring_mass_kg() -> f64 {
    5000.0 * (1.0 - 0.25 / (RADIUS_M * RADIUS_M))
}

fn after_laps(zones: Vec<Zone>, from_m: f64, v0: f64, laps: f64) -> (f64, f64) {
    let (spine, train) = (ring(), ring_train());
    let poses = Poses::new(&spine, &train).unwrap();
    let release = zoned(from_m, v0, zones);
    let goal = until(from_m + laps * spine.length_m());
    let history = run(&poses, &train, &release, &goal);
    assert_eq!(history.end, RunEnd::Completed);
    close(history.end_station_m, from_m + laps * spine.length_m(), 0.0);
    let works = history.energy.zones_j.iter().map(|z| z.1).sum();
    (last(&history).speed_m_s, works)
}

/// Work and energy over laps of a closed track: a brake of 2 kN on 20 m takes 40 kJ a lap, on the
/// seam or off it; the station runs on without wrapping.
#[test]
fn exact_laps_with_a_zone_on_the_seam() {
    for (from_m, to_m) in [(60.0, 80.0), (147.07963267948966, 10.0)] {
        let zones = vec![zone("trim", from_m, to_m, clamp(2e3, 0.0))];
        let (v, work_j) = after_laps(zones, 40.0, 18.0, 3.0);
        close(work_j, -120e3, 1e-1);
        let expected = (324.0 - 2.0 * 120e3 / ring_mass_kg()).sqrt();
        close(v, expected, 1e-7);
    }
}

/// A zone that leaves but 5 m of the lap free, with a train of 10 m: leaving it behind, the train is
/// already in it again, and the shares add up. F (L − 5 m) a lap.
#[test]
fn exact_shares_over_a_short_gap() {
    let zones = vec![zone("tyres", 45.0, 40.0, clamp(500.0, 0.0))];
    let (_, work_j) = after_laps(zones, 42.0, 18.0, 3.0);
    close(work_j, -3.0 * 500.0 * (TAU * RADIUS_M - 5.0), 1e-2);
    // Over the whole lap but for nothing it is the full force all the way.
    let zones = vec![zone("tyres", 40.0, 40.0 - 1e-6, clamp(500.0, 0.0))];
    let (_, work_j) = after_laps(zones, 42.0, 18.0, 2.0);
    close(work_j, -2.0 * 500.0 * TAU * RADIUS_M, 1e-2);
}

/// A clamp that has let go in one lap works again in the next.
#[test]
fn exact_release_is_forgotten_by_the_next_lap() {
    let (spine, train) = (ring(), ring_train());
    let poses = Poses::new(&spine, &train).unwrap();
    let zones = vec![
        zone("brake", 30.0, 60.0, clamp(30e3, 6.0)),
        zone("launch", 100.0, 130.0, push(30e3, 15.0)),
    ];
    let release = zoned(10.0, 15.0, zones);
    let lap_m = spine.length_m();
    let goal = until(3.0 * lap_m + 10.0);
    let history = run(&poses, &train, &release, &goal);
    assert_eq!(history.end, RunEnd::Completed);
    for lap in 0..3 {
        let shift_m = f64::from(lap) * lap_m;
        close(state_when_at(&history, 80.0 + shift_m).speed_m_s, 6.0, 1e-9);
        close(
            state_when_at(&history, 145.0 + shift_m).speed_m_s,
            15.0,
            1e-9,
        );
    }
    let lap_j = 0.5 * ring_mass_kg() * (225.0 - 36.0);
    close(history.energy.zones_j[0].1, -3.0 * lap_j, 1e-1);
    close(history.energy.zones_j[1].1, 3.0 * lap_j, 1e-1);
}

/// A finish on a closed track: rest in it is completed; beyond its far end it is overrun, there and then.
#[test]
fn exact_finish_on_a_closed_track() {
    let (spine, train) = (ring(), ring_train());
    let poses = Poses::new(&spine, &train).unwrap();
    let goal = finish("final");
    for (force_n, end) in [(40e3, RunEnd::Completed), (4e3, RunEnd::Overran)] {
        let zones = vec![zone("final", 140.0, 12.0, clamp(force_n, 0.0))];
        let release = zoned(30.0, 10.0, zones);
        let history = run(&poses, &train, &release, &goal);
        assert_eq!(history.end, end);
        let far_m = spine.length_m() + 12.0;
        if end == RunEnd::Overran {
            close(history.end_station_m, far_m, 0.0);
        } else {
            // F (x − 5 m) = ½ M v² once the whole train is in.
            let stop_m = 140.0 + 5.0 + 0.5 * ring_mass_kg() * 100.0 / 40e3;
            close(history.end_station_m, stop_m, 1e-7);
        }
    }
}

/// A train longer than its track is refused with both lengths, on an open and on a closed one; so is
/// an axle that has no place.
#[test]
fn exact_refusals() {
    let mut cars = vec![car(1.0, 1000.0); 4];
    cars.iter_mut().for_each(|car| car.length_m = 20.0);
    // First to last axle: three cars of 20 m and a wheelbase of 1 m.
    let too_long = |spine: &Spine, track_m: f64| {
        let refused = Poses::new(spine, &train(cars.clone())).unwrap_err();
        let PoseError::TrainTooLong {
            train_m,
            track_m: found_m,
        } = refused
        else {
            panic!("{refused}");
        };
        close(train_m, 61.0, 1e-9);
        close(found_m, track_m, 1e-3);
    };
    too_long(&straight(50.0, 0.0), 50.0);
    let radius_m = 8.0;
    let point = |i: usize| {
        let (sin, cos) = (std::f64::consts::TAU * i as f64 / 200.0).sin_cos();
        nalgebra::Vector3::new(radius_m * cos, radius_m * sin, 0.0)
    };
    let centre_m = (0..200).map(point).collect();
    let columns = Columns::Bank {
        centre_m,
        bank_left_rad: vec![0.0; 200],
    };
    let table = PointTable::new(columns, true, Fit::Exact, place());
    let source = TrackSource::Points(table);
    let track = Track {
        name: "ring".into(),
        source,
        landmarks: vec![],
        place: place(),
    };
    let ring = Spine::from_track(&track).unwrap();
    too_long(&ring, std::f64::consts::TAU * radius_m);
    let tight = Arc3::new(2.0, -80.0, 80.0);
    let refused = Poses::new(&tight.spine, &point_train(4.5, 1000.0)).unwrap_err();
    assert!(
        matches!(refused, PoseError::NoPlaceForAxle { .. }),
        "{refused}"
    );
}

/// The time limit is where a train that was caught by nothing stops being looked at: the same run
/// cut short is the same run.
#[test]
fn exact_prefix_of_a_run() {
    let arc = Arc3::new(20.0, -80.0, 80.0);
    let train = train(vec![car_on_circle(1.0, 1000.0, 20.0)]);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    let release = running(arc.leading_m(1.0, -70.0 * DEG), 0.0, 0.02);
    let whole = run(&poses, &train, &release, &Goal::TrackEnd);
    let base = ride(&poses, &train, &release, &Goal::TrackEnd);
    let cut = simulate(&Ride {
        time_limit_s: 7.3,
        ..base
    })
    .unwrap();
    for t in [0.0, 1.7, 5.2, 7.3] {
        let (a, b) = (whole.state_at(t).unwrap(), cut.state_at(t).unwrap());
        close(a.station_m, b.station_m, 1e-8);
        close(a.speed_m_s, b.speed_m_s, 1e-8);
    }
}

/// A closed track with a dip of 8 m, whose points begin `from_rad` after its lowest place.
fn dipping_ring(from_rad: f64) -> Spine {
    let curve = |t: f64| {
        let (sin, cos) = (t + from_rad).sin_cos();
        Vector3::new(25.0 * cos, 25.0 * sin, -4.0 * cos)
    };
    level_points(lap_points(TAU, 480, curve), true)
}

/// Rocking to rest over the seam, with stations below 0, is rocking to rest anywhere: a train let go
/// in the dip at the seam does what it does when the points begin half a lap away.
#[test]
fn exact_rest_over_the_seam() {
    let train = ring_train();
    let (seam, off) = (dipping_ring(0.0), dipping_ring(std::f64::consts::PI));
    let half_m = 0.5 * seam.length_m();
    let ends = [(&seam, 2.0), (&off, 2.0 + half_m)].map(|(spine, from_m)| {
        let poses = Poses::new(spine, &train).unwrap();
        let mut release = zoned(from_m, 6.0, vec![]);
        release.resistance.running = 0.02;
        let goal = until(from_m + spine.length_m());
        let history = run(&poses, &train, &release, &goal);
        assert_eq!(history.end, RunEnd::RolledBack);
        assert!(history.energy.closure_j.abs() <= 1e-6 * history.energy.turned_over_j);
        let rest_m = history.end_station_m - from_m;
        (history.reversals, rest_m, history.duration_s)
    });
    assert!(
        ends[0].0.len() >= 3 && ends[0].0[1].station_m < 0.0,
        "{:?}",
        ends[0].0
    );
    assert_eq!(ends[0].0.len(), ends[1].0.len());
    for (a, b) in ends[0].0.iter().zip(&ends[1].0) {
        close(a.time_s, b.time_s, 1e-6);
        close(a.station_m, b.station_m - half_m, 1e-6);
    }
    close(ends[0].1, ends[1].1, 1e-6);
    close(ends[0].2, ends[1].2, 1e-5);
}
