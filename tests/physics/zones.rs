//! Several zones, and zones met on the way back.

use std::f64::consts::FRAC_PI_2;

use crestfall::input::{Air, Goal, Scenario, Wind};
use crestfall::motion::RunEnd;
use crestfall::train::Poses;

use crate::fixture::*;

/// Zones side by side act together: two brakes of 10 kN are one of 20 kN; an edge between two
/// zones of one device does not show.
#[test]
fn exact_zones_together() {
    let (poses, train) = slope(100.0, 0.0, 5000.0);
    let end = |zones| {
        let scenario = zoned(2.0, 18.0, zones);
        run(&poses, &train, &scenario, &Goal::TrackEnd).end_station_m
    };
    let one = end(vec![zone("a", 10.0, 90.0, clamp(20e3, 0.0))]);
    let doubled = vec![
        zone("a", 10.0, 90.0, clamp(10e3, 0.0)),
        zone("b", 10.0, 90.0, clamp(10e3, 0.0)),
    ];
    close(end(doubled), one, 1e-9);
    let split = vec![
        zone("a", 10.0, 25.3, clamp(20e3, 0.0)),
        zone("b", 25.3, 90.0, clamp(20e3, 0.0)),
    ];
    close(end(split), one, 1e-9);
    // Work and energy: the share grows over the first metre, so half a metre is lost.
    close(one, 10.5 + 0.5 * 18.0 * 18.0 / 4.0, 1e-9);
}

/// Speed after a brake and distance of a stop do not depend on the time step: work is force times share.
#[test]
fn exact_brake_on_a_grade() {
    let train = four_cars();
    let poses = Poses::new(&straight(80.0, -8.0 * DEG), &train).unwrap();
    let zones = vec![zone("trim", 30.0, 42.0, clamp(20e3, 0.0))];
    let scenario = zoned(15.0, 9.0, zones);
    let goal = until(70.0);
    let history = run(&poses, &train, &scenario, &goal);
    let v2 = 81.0 + 2.0 * G * (8.0 * DEG).sin() * 55.0 - 2.0 * 20e3 * 12.0 / 5000.0;
    close(last(&history).speed_m_s, v2.sqrt(), 1e-9);
}

/// A track heading north with a bearing of 90° is one heading east: the wind from the west is a tail wind.
#[test]
fn exact_wind_by_compass() {
    let train = point_train(1.0, 1000.0);
    let start = crestfall::input::Start {
        bearing_rad: FRAC_PI_2,
        ..Default::default()
    };
    let spine = element_spine(start, vec![element(50.0)]);
    let poses = Poses::new(&spine, &train).unwrap();
    let accel = |from_deg: f64| {
        let base = scenario(2.0, 0.0);
        let scenario = Scenario {
            air: Air::Density(1.0),
            wind: Some(Wind {
                speed_m_s: 10.0,
                from_bearing_rad: from_deg * DEG,
            }),
            resistance: crestfall::input::Resistance {
                drag_area_m2: 2.0,
                ..NO_RESISTANCE
            },
            ..base
        };
        run_for(&poses, &train, &scenario, 1e-3)
            .state_at(0.0)
            .map(|s| s.acceleration_m_s2)
    };
    // ½ ρ C_dA v²/m = 0.1 m/s².
    close(accel(270.0).unwrap(), 0.1, 1e-12);
    close(accel(90.0).unwrap(), -0.1, 1e-12);
    close(accel(270.0 + 60.0).unwrap(), 0.1 * 0.25, 1e-12);
}

/// Two lifts of the same speed end to end on a slope hand the train over without a jerk.
#[test]
fn exact_lift_after_lift() {
    let train = four_cars();
    let poses = Poses::new(&straight(120.0, 25.0 * DEG), &train).unwrap();
    let zones = vec![
        zone("first", 0.0, 50.0, hold(2.0, 40e3)),
        zone("second", 50.0, 120.0, hold(2.0, 35e3)),
    ];
    let scenario = zoned(12.0, 2.0, zones);
    let goal = until(100.0);
    let history = run(&poses, &train, &scenario, &goal);
    assert_eq!(history.end, RunEnd::Completed);
    close(history.duration_s, 44.0, 1e-9);
    close(last(&history).speed_m_s, 2.0, 0.0);
    let work_j = history.energy.zones_j.iter().map(|z| z.1).sum::<f64>();
    close(work_j, 5000.0 * G * 88.0 * (25.0 * DEG).sin(), 1e-2);
}

/// A faster drive takes a train out of a slower one when it overpowers it: tyres at 2 m/s (±10 kN)
/// before tyres at 4 m/s (±30 kN), a train of 10 m. While the slow ones hold, their share falls as
/// the other's grows: x/10 · 30 kN = (1 − x/10) · 10 kN at x = 2.5 m, and from there the slow ones drag.
#[test]
fn exact_fast_drive_after_a_slow_one() {
    let train = four_cars();
    let poses = Poses::new(&straight(120.0, 0.0), &train).unwrap();
    let zones = vec![
        zone("slow", 0.0, 50.0, hold(2.0, 10e3)),
        zone("fast", 50.0, 120.0, hold(4.0, 30e3)),
    ];
    let scenario = zoned(12.0, 2.0, zones);
    let goal = until(100.0);
    let history = run(&poses, &train, &scenario, &goal);
    let taken_s = (52.5 - 12.0) / 2.0;
    close(
        history.state_at(taken_s - 1e-6).unwrap().speed_m_s,
        2.0,
        0.0,
    );
    close(time_at(&history, 52.5), taken_s, 1e-6);
    // From there q¨ = ω² (x − 2.5 m), ω² = 4 kN/m /5000 kg: v = v0 cosh ωt.
    let omega = 0.8f64.sqrt();
    let half_s = history.state_at(taken_s + 0.5).unwrap();
    close(half_s.speed_m_s, 2.0 * (omega * 0.5).cosh(), 1e-8);
    close(last(&history).speed_m_s, 4.0, 0.0);
}

/// A clamp that has let go stays so when the train reverses in it: it rolls back unbraked.
#[test]
fn exact_clamp_stays_open_on_the_way_back() {
    let (poses, train) = slope(100.0, 20.0, 5000.0);
    let zones = vec![zone("brake", 10.0, 90.0, clamp(20e3, 5.0))];
    let scenario = zoned(15.0, 12.0, zones);
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    assert_eq!(history.end, RunEnd::RolledBack);
    let pull = G * (20.0 * DEG).sin();
    let released_m = 15.0 + (144.0 - 25.0) / (2.0 * (pull + 4.0));
    let top_m = released_m + 25.0 / (2.0 * pull);
    close(history.reversals[0].station_m, top_m, 1e-8);
    close(
        last(&history).speed_m_s,
        -(2.0 * pull * (top_m - 1.0)).sqrt(),
        1e-8,
    );
    close(
        history.energy.zones_j[0].1,
        -20e3 * (released_m - 15.0),
        1e-3,
    );
}

/// A clamp that the train has left and comes back to works again, against the motion backward.
#[test]
fn exact_clamp_works_again_on_the_way_back() {
    let start = crestfall::input::Start {
        bearing_rad: FRAC_PI_2,
        ..Default::default()
    };
    let climb = crestfall::input::Element {
        grade: Some(crestfall::input::Change::To(40.0 * DEG)),
        ..element(20.0)
    };
    let spine = element_spine(start, vec![element(60.0), climb, element(40.0)]);
    let train = point_train(1.0, 5000.0);
    let poses = Poses::new(&spine, &train).unwrap();
    let zones = vec![zone("brake", 20.0, 40.0, clamp(4e3, 0.0))];
    let scenario = zoned(10.0, 20.0, zones);
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    assert_eq!(history.end, RunEnd::RolledBack);
    close(
        last(&history).speed_m_s,
        -(400.0f64 - 4.0 * 4e3 * 20.0 / 5000.0).sqrt(),
        1e-7,
    );
    close(history.energy.zones_j[0].1, -160e3, 1e-2);
}

/// A chain that only pushes does not hold a train that runs back, but slows it by its force; a hold
/// does both. Backward at −v in a push of F on a slope: a = F/m − g sin.
#[test]
fn exact_push_against_a_roll_back() {
    let (poses, train) = slope(200.0, 10.0, 5000.0);
    let pull = G * (10.0 * DEG).sin();
    for device in [push(5e3, 6.0), hold(6.0, 5e3)] {
        let scenario = zoned(100.0, 0.0, vec![zone("drive", 0.0, 200.0, device)]);
        let history = run_for(&poses, &train, &scenario, 2.0);
        assert_eq!(history.end, RunEnd::RolledBack);
        close(last(&history).acceleration_m_s2, 1.0 - pull, 1e-10);
        close(last(&history).speed_m_s, 2.0 * (1.0 - pull), 1e-10);
    }
}
