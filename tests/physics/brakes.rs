//! Eddy-current and friction brakes.

use crestfall::input::Goal;
use crestfall::motion::RunEnd;
use crestfall::train::Poses;

use crate::fixture::*;

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
    // Half in the brake it has half the grip: with a little less than it needs the train slides on
    // into more and stops there.
    for (factor, at_once) in [(2.0 + 1e-6, true), (2.0 - 1e-6, false)] {
        let (poses, train) = slope(60.0, -10.0, 5000.0);
        let zones = vec![zone("brake", 20.0, 60.0, clamp(factor * weight_n, 0.0))];
        let scenario = zoned(20.5, 0.0, zones);
        let history = run_for(&poses, &train, &scenario, 60.0);
        assert_eq!(history.end, RunEnd::Stalled);
        assert_eq!(history.duration_s == 0.0, at_once);
        assert!(history.end_station_m - 20.5 < 1e-5);
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
