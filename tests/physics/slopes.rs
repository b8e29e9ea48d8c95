//! Straight tracks under weight, friction and drag.

use crestfall::input::{Goal, Resistance, Wind};
use crestfall::motion::RunEnd;
use crestfall::train::Poses;

use crate::fixture::*;

/// B05 (Meriam & Kraige, *Dynamics*, sec. 3/4): a = g (sin − μ cos) on a 30° slope, μ = 0.02; 40 m
/// from rest.
#[test]
fn exact_incline_with_rolling_resistance() {
    let (poses, train) = slope(60.0, -30.0, 5000.0);
    let (scenario, goal) = (running(10.0, 0.0, 0.02), until(50.0));
    let history = run(&poses, &train, &scenario, &goal);
    assert_eq!(history.end, RunEnd::Completed);
    close(history.duration_s, 4.1110734133601087, 1e-10);
    close(last(&history).speed_m_s, 19.459637898952892, 1e-10);
    close(last(&history).acceleration_m_s2, 4.7334688394795467, 1e-12);
}

/// B05: up the same slope from 20 m/s it stops after 39.42 m, rolls back against the friction that
/// has turned round, and passes the start at 19.32 m/s; it ends where its last axle leaves the track.
#[test]
fn exact_stop_and_roll_back_on_an_incline() {
    let (poses, train) = slope(60.0, 30.0, 5000.0);
    let (scenario, goal) = (running(1.0, 20.0, 0.02), until(60.0));
    let history = run(&poses, &train, &scenario, &goal);
    assert_eq!(history.end, RunEnd::RolledBack);
    assert_eq!(history.reversals.len(), 1);
    let reversal = history.reversals[0];
    close(reversal.station_m, 1.0 + 39.42299588203197, 1e-9);
    close(
        reversal.time_s,
        20.0 / (G * (0.5 + 0.02 * 0.75f64.sqrt())),
        1e-9,
    );
    close(history.end_station_m, 1.0, 1e-12);
    close(last(&history).speed_m_s, -19.318774421092494, 1e-9);
}

/// B05: the angle of repose is atan μ (0.019997 rad for 0.02): a little steeper it rolls off.
#[test]
fn exact_angle_of_repose() {
    let goal = until(30.0);
    for (grade_rad, end) in [
        (-0.019997333973150533 + 1e-9, RunEnd::Stalled),
        (-0.019997333973150533 - 1e-9, RunEnd::TimeLimit),
        (0.019997333973150533 - 1e-9, RunEnd::Stalled),
        (0.019997333973150533 + 1e-9, RunEnd::RolledBack),
    ] {
        let train = point_train(1.0, 5000.0);
        let poses = Poses::new(&straight(40.0, grade_rad), &train).unwrap();
        let scenario = running(20.0, 0.0, 0.02);
        let history = run(&poses, &train, &scenario, &goal);
        assert_eq!(history.end, end, "grade {grade_rad}");
    }
}

/// B05: level coasting from 20 m/s stops after v²/2μg in v/μg, by running resistance and by bearings.
#[test]
fn exact_level_coasting() {
    let (poses, train) = slope(1100.0, 0.0, 5000.0);
    for bearings in [0.0, 0.005, 0.02] {
        let mut scenario = running(2.0, 20.0, 0.02 - bearings);
        scenario.resistance.bearings = bearings;
        let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
        assert_eq!(history.end, RunEnd::Stalled);
        // A kilometre from the origin positions are rounded to 1e-13 m, which over the grid of the
        // poses makes about 1e-10 of an acceleration.
        close(history.end_station_m, 2.0 + 1019.7162129779282, 2e-7);
        close(history.duration_s, 101.97162129779282, 2e-8);
        close(history.energy.rolling_j, -0.5 * 5000.0 * 400.0, 1e-3);
    }
}

/// B05 (Meriam & Kraige, sec. 6/5): 6000 kg of which 480 kg of wheels with I = 0.6 m r²: g sin 30° /(1 + 0.6·480/6000).
#[test]
fn exact_rolling_mass() {
    let (poses, mut train) = slope(60.0, -30.0, 6000.0);
    train.rolling_mass_kg = 0.5 * 0.6 * 480.0;
    let (scenario, goal) = (scenario(2.0, 0.0), until(50.0));
    let history = run(&poses, &train, &scenario, &goal);
    close(last(&history).acceleration_m_s2, 4.6787452290076336, 1e-12);
    // No weight: friction does not grow by it.
    let (rough, smooth) = (running(2.0, 0.0, 0.02), goal);
    let history = run(&poses, &train, &rough, &smooth);
    let expected = G * (0.5 - 0.02 * 0.75f64.sqrt()) / 1.048;
    close(last(&history).acceleration_m_s2, expected, 1e-12);
}

/// Axles shared by neighbouring cars count once: three cars of 2 m on axles 2 m apart have four.
#[test]
fn exact_shared_axles() {
    let mut cars = vec![car(2.0, 1000.0); 3];
    cars.iter_mut().for_each(|car| car.length_m = 2.0);
    let mut train = train(cars);
    train.rolling_mass_kg = 100.0;
    train.axle_mass_kg = 50.0;
    let poses = Poses::new(&straight(60.0, -30.0 * DEG), &train).unwrap();
    assert_eq!(poses.axle_count(), 4);
    let (scenario, goal) = (scenario(8.0, 0.0), until(50.0));
    let history = run(&poses, &train, &scenario, &goal);
    let expected = 0.5 * G * 3200.0 / 3600.0;
    close(last(&history).acceleration_m_s2, expected, 1e-12);
}

/// Axles of neighbouring cars within 1 mm are one, farther apart they are two (design 4.2).
#[test]
fn exact_distance_of_shared_axles() {
    for (length_m, axles) in [(2.0, 4), (2.0008, 4), (2.0015, 6), (2.3, 6)] {
        let mut cars = vec![car(2.0, 1000.0); 3];
        cars.iter_mut().for_each(|car| car.length_m = length_m);
        let poses = Poses::new(&straight(60.0, 0.0), &train(cars)).unwrap();
        assert_eq!(poses.axle_count(), axles, "cars of {length_m} m");
    }
}

/// B04: v² = v0² − 2 g Δz, whatever the way down.
#[test]
fn exact_energy() {
    let (poses, train) = slope(62.0, -30.0, 500.0);
    let (scenario, goal) = (scenario(1.5, 3.0), until(61.5));
    let history = run(&poses, &train, &scenario, &goal);
    close(last(&history).speed_m_s, (9.0 + 60.0 * G).sqrt(), 1e-9);
}

fn drag(drag_area_m2: f64, running: f64) -> Resistance {
    Resistance {
        drag_area_m2,
        running,
        ..NO_RESISTANCE
    }
}

/// B06 (OpenStax *University Physics* 1, sec. 6.4; Timmerman & van der Weele, Am. J. Phys. 67, 538):
/// 5000 kg, 2.4 m², 1.225 kg/m³, 30°, μ = 0.02: v² = v_t² (1 − e^(−2ks)) + v0² e^(−2ks).
#[test]
fn exact_drag_downhill() {
    let (poses, train) = slope(80.0, -30.0, 5000.0);
    for (v0, v, t) in [
        (0.0, 23.624420730050508, 5.0498320000612411),
        (5.0, 24.12978723373189, 4.1036610183604854),
    ] {
        let mut scenario = scenario(2.0, v0);
        scenario.resistance = drag(2.4, 0.02);
        let goal = until(62.0);
        let history = run(&poses, &train, &scenario, &goal);
        close(last(&history).speed_m_s, v, 1e-8);
        close(history.duration_s, t, 1e-9);
    }
}

/// B06: up 30° from 22 m/s; level to a stop; drag alone after 100 m and after 10 s.
#[test]
fn exact_drag_uphill_and_level() {
    let (up, train) = slope(80.0, 30.0, 5000.0);
    let mut scenario = scenario(2.0, 22.0);
    scenario.resistance = drag(2.4, 0.02);
    let history = run(&up, &train, &scenario, &Goal::TrackEnd);
    close(
        history.reversals[0].station_m,
        2.0 + 47.045090638663165,
        1e-9,
    );
    close(history.reversals[0].time_s, 4.2966538688322245, 1e-9);
    let (level, train) = slope(1000.0, 0.0, 5000.0);
    let history = run(&level, &train, &scenario, &Goal::TrackEnd);
    close(history.end_station_m, 2.0 + 927.75734851392467, 1e-7);
    close(history.duration_s, 92.909442943628029, 1e-8);
    scenario.resistance = drag(2.4, 0.0);
    let history = run(&level, &train, &scenario, &Goal::TrackEnd);
    let speed = state_when_at(&history, 102.0).speed_m_s;
    close(speed, 21.362615462843041, 1e-9);
    close(
        history.state_at(10.0).unwrap().speed_m_s,
        20.663485742194838,
        1e-9,
    );
}

/// B06, terminal speed: released at it, the train keeps it (126.887 m/s).
#[test]
fn exact_terminal_speed() {
    let (poses, train) = slope(1000.0, -30.0, 5000.0);
    let mut scenario = scenario(2.0, 126.88669807308256);
    scenario.resistance = drag(2.4, 0.02);
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    close(last(&history).speed_m_s, 126.88669807308256, 5e-7);
    close(last(&history).acceleration_m_s2, 0.0, 1e-8);
}

/// B14: level, drag alone, k = 3e-4 1/m, wind along the track: v = w + (v0 − w)/(1 + k (v0 − w) t).
/// Both winds are named by where they blow from; the track heads north.
#[test]
fn exact_tail_and_head_wind() {
    let (poses, train) = slope(1000.0, 0.0, 2000.0);
    for (v0, from_deg, v, distance_m) in [
        (20.0, 180.0, 18.830324909747292, Some(581.85529441697356)),
        (20.0, 0.0, 14.364217252396166, None),
        (2.0, 180.0, 2.3074003795066414, None),
        // A cross wind has no part along the train: v0/(1 + k v0 t).
        (25.0, 90.0, 25.0 / (1.0 + 3e-4 * 25.0 * 30.0), None),
    ] {
        let mut scenario = scenario(2.0, v0);
        scenario.air = crestfall::input::Air::Density(1.2);
        scenario.resistance = drag(2.0 * 3e-4 * 2000.0 / 1.2, 0.0);
        scenario.wind = Some(Wind {
            speed_m_s: 8.0,
            from_bearing_rad: from_deg * DEG,
        });
        let history = run_for(&poses, &train, &scenario, 30.0);
        assert_eq!(history.end, RunEnd::TimeLimit);
        close(history.duration_s, 30.0, 1e-12);
        close(last(&history).speed_m_s, v, 1e-8);
        if let Some(distance_m) = distance_m {
            close(history.end_station_m, 2.0 + distance_m, 1e-7);
        }
    }
}
