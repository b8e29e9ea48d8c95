//! Devices along the track, and the events at which they switch.

use std::f64::consts::{FRAC_PI_2, TAU};

use crestfall::input::{Air, Goal, Scenario, Train, Wind};
use crestfall::motion::RunEnd;
use crestfall::train::Poses;
use nalgebra::Vector3;

use crate::fixture::*;

/// A straight slope with a train of one car, 1 m from axle to axle.
fn slope(length_m: f64, grade_deg: f64, mass_kg: f64) -> (Poses, Train) {
    let train = point_train(1.0, mass_kg);
    let poses = Poses::new(&straight(length_m, grade_deg * DEG), &train).unwrap();
    (poses, train)
}

/// B08 (Smythe 1942; Wouterse 1991): F = 2 F_pk (v/v_c)/(1 + (v/v_c)²), both sides of its peak:
/// s = (m v_c/2F) [(v0 − v1) + (v0³ − v1³)/3v_c²]. The whole train is in the brake.
#[test]
fn exact_eddy_brake() {
    let (poses, train) = slope(100.0, 0.0, 5000.0);
    let zones = vec![zone("brake", 0.0, 100.0, eddy(30e3, 8.0))];
    let scenario = zoned(2.0, 20.0, zones);
    let history = run_for(&poses, &train, &scenario, 20.0);
    for (distance_m, time_s, v) in [
        (30.972222222222222, 2.0245981203732969, 10.0),
        (34.0, 2.3608604879161034, 8.0),
        (39.75, 3.5975567286626971, 2.0),
    ] {
        let at = history.state_at(time_s).unwrap();
        close(at.speed_m_s, v, 1e-8);
        close(at.station_m, 2.0 + distance_m, 1e-8);
    }
    let peak = history.state_at(2.3608604879161034).unwrap();
    close(peak.acceleration_m_s2, -6.0, 1e-9);
    // It never stops a train: 41.11 m are the limit.
    let left_m = 2.0 + 41.111111111111111 - history.end_station_m;
    let v = last(&history).speed_m_s;
    close(left_m, 5000.0 * 8.0 / 60e3 * (v + v.powi(3) / 192.0), 1e-7);
    let twelve = state_when_at(&history, 14.0);
    close(twelve.speed_m_s, 17.193654515499988, 1e-9);
}

/// B08 on a slope of 15°: steady speeds v_c (q ∓ √(q² − 1)), q = F_pk/(m g sin): the lower is
/// stable, the upper is not.
#[test]
fn exact_eddy_equilibrium() {
    let (poses, train) = slope(4000.0, -15.0, 5000.0);
    let zones = vec![zone("brake", 0.0, 4000.0, eddy(30e3, 8.0))];
    let speed_after = |v0: f64, time_s: f64| {
        let scenario = zoned(2.0, v0, zones.clone());
        last(&run_for(&poses, &train, &scenario, time_s)).speed_m_s
    };
    for v0 in [0.0, 1.0, 6.0, 30.0] {
        close(speed_after(v0, 60.0), 1.7754392576938285, 1e-8);
    }
    let upper = 36.047417405387063;
    close(speed_after(upper, 1.0), upper, 1e-8);
    assert!(speed_after(upper + 0.1, 10.0) > upper + 0.15);
    assert!(speed_after(upper - 0.1, 10.0) < upper - 0.15);
}

/// The catalogue's train of B09: four cars of 1250 kg, 3 m apart.
fn four_cars() -> Train {
    let mut cars = vec![car(1.0, 1250.0); 4];
    cars.iter_mut().for_each(|car| car.length_m = 3.0);
    train(cars)
}

/// B09 (work and energy): a brake of 16 kN on the whole train, 10 m long, felt share by share, takes
/// F L whatever the overlap: 12 m/s become √(v0² − 2 F L/M) = 8.944 m/s. The catalogue's cars enter
/// one by one; here the share grows evenly, so while they enter, x¨ = −ω² x with ω² = F/(T M).
#[test]
fn exact_brake_by_shares() {
    let train = four_cars();
    let poses = Poses::new(&straight(60.0, 0.0), &train).unwrap();
    let length_m = poses.layout().length_m();
    close(length_m, 10.0, 1e-12);
    let zones = vec![zone("brake", 20.0, 30.0, clamp(16e3, 0.0))];
    let scenario = zoned(15.0, 12.0, zones);
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    close(last(&history).speed_m_s, 80f64.sqrt(), 1e-9);
    close(history.energy.zones_j[0].1, -160e3, 1e-3);
    let omega = (16e3 / (10.0 * 5000.0f64)).sqrt();
    // Entering: x = (v0/ω) sin ωt until x = 10 m; leaving mirrors it with the share falling.
    let entry_s = 5.0 / 12.0 + (10.0 * omega / 12.0).asin() / omega;
    close(time_at(&history, 30.0), entry_s, 1e-9);
    close(
        state_when_at(&history, 30.0).speed_m_s,
        (144.0f64 - 0.32 * 100.0).sqrt(),
        1e-9,
    );
    // Leaving: the rest y of the overlap falls from 10 m to 0 and y¨ = +ω² y.
    let leaving_s = (10.0 * omega / 112f64.sqrt()).atanh() / omega;
    close(time_at(&history, 40.0), entry_s + leaving_s, 1e-8);
    let exit = state_when_at(&history, 40.0);
    close(exit.speed_m_s, 80f64.sqrt(), 1e-9);
    close(exit.acceleration_m_s2, 0.0, 1e-8);
}

/// B09: 18 m/s at 5 m/s² stop after 32.4 m in 3.6 s; a clamp that holds at rest keeps the train.
#[test]
fn exact_stop_in_a_clamp() {
    let (poses, train) = slope(60.0, 0.0, 5000.0);
    let scenario = zoned(2.0, 18.0, vec![zone("brake", 0.0, 60.0, clamp(25e3, 0.0))]);
    for (goal, end) in [
        (Goal::TrackEnd, RunEnd::Stalled),
        (finish("brake"), RunEnd::Completed),
    ] {
        let history = run(&poses, &train, &scenario, &goal);
        assert_eq!(history.end, end);
        close(history.end_station_m, 34.4, 1e-9);
        close(history.duration_s, 3.6, 1e-9);
        close(last(&history).speed_m_s, 0.0, 1e-9);
    }
}

/// A clamp that holds at rest does so on a slope if, and only if, its force suffices: m g sin 10°
/// = 8514.6 N for 5000 kg (statics).
#[test]
fn exact_clamp_on_a_slope() {
    let weight_n = 5000.0 * G * (10.0 * DEG).sin();
    for (force_n, end) in [
        (weight_n * (1.0 + 1e-9), RunEnd::Stalled),
        (weight_n * (1.0 - 1e-9), RunEnd::TimeLimit),
    ] {
        let (poses, train) = slope(60.0, -10.0, 5000.0);
        let scenario = zoned(
            10.0,
            0.0,
            vec![zone("brake", 0.0, 60.0, clamp(force_n, 0.0))],
        );
        let history = run_for(&poses, &train, &scenario, 5.0);
        assert_eq!(history.end, end, "{force_n} N");
    }
    // Half in the brake it has half the grip.
    let (poses, train) = slope(60.0, -10.0, 5000.0);
    for (factor, end) in [
        (2.0 + 1e-9, RunEnd::Stalled),
        (2.0 - 1e-9, RunEnd::Completed),
    ] {
        let zones = vec![zone("brake", 20.0, 60.0, clamp(factor * weight_n, 0.0))];
        let scenario = zoned(20.5, 0.0, zones);
        let history = run_for(&poses, &train, &scenario, 60.0);
        let expected = if factor > 2.0 { RunEnd::Stalled } else { end };
        // Short of half, it slides on into more grip and stops there.
        let stops = history.end == RunEnd::Stalled;
        assert!(stops || history.end == expected);
        assert_eq!(history.duration_s == 0.0, factor > 2.0);
    }
}

/// A clamp with a release speed lets go at it, and stays let go until the train has left: down a
/// slope, v² = v0² − 2 (F/m − g sin) s to 5 m/s, then v² = 25 + 2 g sin s.
#[test]
fn exact_clamp_lets_go() {
    let (poses, train) = slope(200.0, -10.0, 5000.0);
    let zones = vec![zone("brake", 0.0, 80.0, clamp(30e3, 5.0))];
    let scenario = zoned(5.0, 15.0, zones);
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    let pull = G * (10.0 * DEG).sin();
    let slowing = 6.0 - pull;
    let (release_s, release_m) = (10.0 / slowing, (225.0 - 25.0) / (2.0 * slowing));
    let at = history.state_at(release_s - 1e-6).unwrap();
    close(at.acceleration_m_s2, -slowing, 1e-9);
    let after = history.state_at(release_s + 1e-6).unwrap();
    close(after.acceleration_m_s2, pull, 1e-9);
    close(after.speed_m_s, 5.0, 1e-5);
    close(time_at(&history, 5.0 + release_m), release_s, 1e-7);
    let speed = state_when_at(&history, 70.0).speed_m_s;
    close(speed, (25.0 + 2.0 * pull * (65.0 - release_m)).sqrt(), 1e-8);
    close(history.energy.zones_j[0].1, -30e3 * release_m, 1e-3);
}

/// A clamp entered at or below its release speed does nothing.
#[test]
fn exact_clamp_below_its_speed() {
    let (poses, train) = slope(100.0, -10.0, 5000.0);
    let zones = vec![zone("brake", 20.0, 80.0, clamp(30e3, 8.0))];
    let scenario = zoned(10.0, 2.0, zones);
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    let pull = G * (10.0 * DEG).sin();
    close(
        last(&history).speed_m_s,
        (4.0 + 2.0 * pull * 90.0).sqrt(),
        1e-8,
    );
    close(history.energy.zones_j[0].1, 0.0, 0.0);
}

/// B10 (OpenStax sec. 6.4): 72 kN on 6000 kg, C_dA = 3 m², ρ = 1.2, μ = 0.015:
/// v² = (F/k)(1 − e^(−2ks/m)), and tanh in time.
#[test]
fn exact_launch_with_drag() {
    let (poses, train) = slope(100.0, 0.0, 6000.0);
    let mut scenario = zoned(
        2.0,
        0.0,
        vec![zone("launch", 0.0, 100.0, push(72e3, 100.0))],
    );
    scenario.air = Air::Density(1.2);
    scenario.resistance.drag_area_m2 = 3.0;
    scenario.resistance.running = 0.015;
    let goal = until(99.0);
    let history = run(&poses, &train, &scenario, &goal);
    let at = state_when_at(&history, 52.0);
    close(at.speed_m_s, 34.171437526658822, 1e-8);
    close(time_at(&history, 52.0), 2.9118759832309814, 1e-9);
    let at = history.state_at(2.999).unwrap();
    assert!(at.speed_m_s < 35.184168102641237);
    let third = history.state_at(3.0).unwrap();
    close(third.speed_m_s, 35.184168102641237, 1e-8);
    close(third.station_m, 2.0 + 53.055960913335008, 1e-8);
}

/// B10, no losses: √(2 · 12 · 50) m/s; and with a cap at 20 m/s it is reached at m v/F = 5/3 s and kept.
#[test]
fn exact_launch_to_its_cap() {
    let (poses, train) = slope(100.0, 0.0, 6000.0);
    let free = zoned(
        2.0,
        0.0,
        vec![zone("launch", 0.0, 100.0, push(72e3, 100.0))],
    );
    let goal = until(52.0);
    let history = run(&poses, &train, &free, &goal);
    close(last(&history).speed_m_s, 34.641016151377546, 1e-9);
    close(history.energy.zones_j[0].1, 72e3 * 50.0, 1e-3);
    let mut capped = zoned(2.0, 0.0, vec![zone("launch", 0.0, 100.0, push(72e3, 20.0))]);
    let history = run(&poses, &train, &capped, &goal);
    close(last(&history).speed_m_s, 20.0, 1e-12);
    close(
        history.duration_s,
        20.0 / 12.0 + (50.0 - 400.0 / 24.0) / 20.0,
        1e-9,
    );
    close(history.energy.zones_j[0].1, 0.5 * 6000.0 * 400.0, 1e-3);
    // With resistance the push gives, once at its cap, just what is lost.
    capped.resistance.running = 0.02;
    let history = run(&poses, &train, &capped, &goal);
    close(last(&history).speed_m_s, 20.0, 1e-12);
    close(last(&history).acceleration_m_s2, 0.0, 1e-12);
    let losses_j = 0.02 * 6000.0 * G * 50.0;
    close(
        history.energy.zones_j[0].1,
        0.5 * 6000.0 * 400.0 + losses_j,
        1e-2,
    );
    close(history.energy.rolling_j, -losses_j, 1e-2);
}

/// A push is 0 above its cap: entered faster, the train coasts; when it has slowed to the cap it is kept.
#[test]
fn exact_push_entered_fast() {
    let (poses, train) = slope(400.0, 0.0, 6000.0);
    let mut scenario = zoned(
        2.0,
        20.0,
        vec![zone("launch", 0.0, 400.0, push(72e3, 18.0))],
    );
    scenario.resistance.running = 0.05;
    let goal = until(300.0);
    let history = run(&poses, &train, &scenario, &goal);
    let slowing = 0.05 * G;
    let kept_s = 2.0 / slowing;
    let before = history.state_at(kept_s - 0.5).unwrap();
    close(before.acceleration_m_s2, -slowing, 1e-10);
    let after = history.state_at(kept_s + 1e-6).unwrap();
    close(after.speed_m_s, 18.0, 1e-10);
    close(after.acceleration_m_s2, 0.0, 1e-12);
    close(last(&history).speed_m_s, 18.0, 1e-12);
}

/// B15 (elementary statics): a lift at 35°, 2.5 m/s, 6000 kg, μ = 0.015 takes m g v (sin + μ cos)
/// = 86 180 W; the speed is kept exactly and the rider feels (sin, 0, cos).
#[test]
fn exact_lift() {
    let (poses, train) = slope(60.0, 35.0, 6000.0);
    let mut scenario = zoned(2.0, 2.5, vec![zone("lift", 0.0, 60.0, hold(2.5, 60e3))]);
    scenario.resistance.running = 0.015;
    let goal = until(52.0);
    let history = run(&poses, &train, &scenario, &goal);
    close(history.duration_s, 20.0, 1e-10);
    close(last(&history).speed_m_s, 2.5, 0.0);
    close(history.energy.zones_j[0].1 / 20.0, 86180.406307033287, 1e-4);
    let felt = felt_g(&poses, 0, &seat(0.2, 0.3, 0.9), last(&history));
    close_vectors(
        felt,
        Vector3::new(0.5735764363510461, 0.0, 0.81915204428899179),
        1e-12,
    );
}

/// A hold drives to its speed from below and brakes to it from above, at ±F/m, and holds a train
/// back downhill: its work is then negative.
#[test]
fn exact_hold_from_both_sides() {
    let (poses, train) = slope(200.0, 0.0, 5000.0);
    for (v0, sign) in [(0.0, 1.0), (11.0, -1.0)] {
        let scenario = zoned(2.0, v0, vec![zone("tyres", 0.0, 200.0, hold(5.0, 10e3))]);
        let goal = until(150.0);
        let history = run(&poses, &train, &scenario, &goal);
        let reached_s = (v0 - 5.0f64).abs() / 2.0;
        close(
            history.state_at(0.5 * reached_s).unwrap().acceleration_m_s2,
            2.0 * sign,
            1e-10,
        );
        let reached_m = 0.5 * (v0 + 5.0) * reached_s;
        close(
            history.duration_s,
            reached_s + (148.0 - reached_m) / 5.0,
            1e-9,
        );
        close(
            history.energy.zones_j[0].1,
            0.5 * 5000.0 * (25.0 - v0 * v0),
            1e-3,
        );
    }
    let (poses, train) = slope(200.0, -5.0, 5000.0);
    let scenario = zoned(2.0, 5.0, vec![zone("tyres", 0.0, 200.0, hold(5.0, 10e3))]);
    let goal = until(150.0);
    let history = run(&poses, &train, &scenario, &goal);
    close(last(&history).speed_m_s, 5.0, 0.0);
    let work_j = -5000.0 * G * 148.0 * (5.0 * DEG).sin();
    close(history.energy.zones_j[0].1, work_j, 1e-3);
}

/// A hold too weak for the slope gives all it has: a = F/m − g sin.
#[test]
fn exact_hold_overcome() {
    for (grade_deg, v0) in [(20.0, 5.0), (-20.0, 5.0)] {
        let (poses, train) = slope(200.0, grade_deg, 5000.0);
        let scenario = zoned(20.0, v0, vec![zone("tyres", 0.0, 200.0, hold(5.0, 10e3))]);
        let history = run_for(&poses, &train, &scenario, 1.0);
        let pull = G * (grade_deg * DEG).sin();
        let expected = 2.0 * pull.signum() - pull;
        close(last(&history).acceleration_m_s2, expected, 1e-10);
        close(last(&history).speed_m_s, v0 + expected, 1e-9);
    }
}

/// B15: a chain that only pushes lets the train go where it no longer needs it: on a crest of
/// R = 20 m, μ = 0.015, atan(μ) R past the top. Our friction is on |N|, which is less by v²/R:
/// sin θ = μ (cos θ − v²/gR), which at 1 cm/s is the catalogue's angle.
#[test]
fn exact_hand_over_at_a_crest() {
    let arc = Arc3::new(20.0, 50.0, -50.0);
    let train = train(vec![car_on_circle(1.0, 5000.0, -20.0)]);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    for v in [0.01, 2.5f64] {
        let from_m = arc.leading_m(1.0, 0.02);
        let zones = vec![zone("chain", 0.0, 100.0, push(60e3, v))];
        let mut scenario = zoned(from_m, v, zones);
        scenario.resistance.running = 0.015;
        let goal = until(arc.leading_m(1.0, -0.03));
        let history = run(&poses, &train, &scenario, &goal);
        let mu = 0.015f64;
        let past = mu.atan() - (mu * v * v / (G * 20.0) / mu.hypot(1.0)).asin();
        if v < 0.1 {
            close(past * 20.0, 0.29997750303701192, 2e-7);
        }
        let release_s = (0.02 + past) * 20.0 / v;
        let (on, off) = (
            history.state_at(release_s - 1e-4).unwrap(),
            history.state_at(release_s + 1e-4).unwrap(),
        );
        close(on.acceleration_m_s2, 0.0, 1e-12);
        close(on.speed_m_s, v, 1e-12);
        let slope = G / 20.0 * v * 1e-4;
        close(off.acceleration_m_s2, slope, 0.05 * slope + 1e-9);
    }
}

/// B14: a train kept at 15 m/s round a flat circle of R = 30 m in a wind of 5 m/s: the drag's work
/// a lap, and so the drive's, is m k ∫ (v − w cos)|v − w cos| ds = 13.4303 m per kg at k = 3e-4.
/// The wind along the car is its part along the chord, which turns with the circle's own tangent.
#[test]
fn exact_work_against_wind_round_a_circle() {
    let circle = |t: f64| Vector3::new(t.cos(), t.sin(), 0.0) * 30.0;
    let spine = level_points(lap_points(TAU, 300, circle), true);
    let lap_m = spine.length_m();
    let train = point_train(1.0, 2000.0);
    let poses = Poses::new(&spine, &train).unwrap();
    let mut scenario = zoned(0.0, 15.0, vec![zone("tyres", 0.0, lap_m, hold(15.0, 50e3))]);
    scenario.air = Air::Density(1.2);
    scenario.resistance.drag_area_m2 = 2.0 * 3e-4 * 2000.0 / 1.2;
    scenario.wind = Some(Wind {
        speed_m_s: 5.0,
        from_bearing_rad: 1.234,
    });
    let goal = until(3.0 * lap_m);
    let history = run(&poses, &train, &scenario, &goal);
    assert_eq!(history.end, RunEnd::Completed);
    close(history.duration_s, 3.0 * lap_m / 15.0, 1e-7);
    close(last(&history).speed_m_s, 15.0, 0.0);
    // The catalogue integrates 3e-4 (v − w cos)² over the lap of 2πR: 13.430308594096366.
    close(
        history.energy.air_j,
        -3.0 * 2000.0 * 13.430308594096366,
        1e-2,
    );
    close(
        history.energy.zones_j[0].1,
        3.0 * 2000.0 * 13.430308594096366,
        1e-2,
    );
}

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
