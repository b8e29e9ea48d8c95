//! Launches, lifts and tyres, and the events at which they switch.

use std::f64::consts::TAU;

use crestfall::input::{Air, Wind};
use crestfall::motion::RunEnd;
use crestfall::train::Poses;
use nalgebra::Vector3;

use crate::fixture::*;

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
