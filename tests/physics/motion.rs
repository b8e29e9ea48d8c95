//! Motion along the track under weight and resistance.
//!
//! Catalogue cases with a point mass are run with one car whose mass lies on the rail circle (exact
//! on circles), or with a car so short that what it differs from a point is below the tolerance.

use std::f64::consts::TAU;

use crestfall::input::{Goal, Resistance, Wind};
use crestfall::motion::{History, RunEnd};
use crestfall::spine::Spine;
use crestfall::train::Poses;
use nalgebra::Vector3;

use crate::fixture::*;

/// A slope, and a train of one car on it.
fn slope(length_m: f64, grade_deg: f64, mass_kg: f64) -> (Poses, crestfall::input::Train) {
    let train = point_train(1.0, mass_kg);
    let poses = Poses::new(&straight(length_m, grade_deg * DEG), &train).unwrap();
    (poses, train)
}

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
        close(history.end_station_m, 2.0 + 1019.7162129779282, 1e-8);
        close(history.duration_s, 101.97162129779282, 1e-8);
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
        close(last(&history).speed_m_s, v, 1e-9);
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
    close(history.end_station_m, 2.0 + 927.75734851392467, 1e-8);
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
    close(last(&history).speed_m_s, 126.88669807308256, 1e-7);
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
        close(last(&history).speed_m_s, v, 1e-9);
        if let Some(distance_m) = distance_m {
            close(history.end_station_m, 2.0 + distance_m, 1e-8);
        }
    }
}

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

/// A circle of R = 20 m with a bead on it.
fn bead(radius_m: f64, from_deg: f64, to_deg: f64) -> (Arc3, crestfall::input::Train, Poses) {
    let arc = Arc3::new(radius_m, from_deg, to_deg);
    let train = train(vec![car_on_circle(1.0, 1000.0, arc.radius_m)]);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    (arc, train, poses)
}

/// Angle of the middle of the car from the bottom at a time, rad.
fn angle_at(arc: &Arc3, history: &History<'_>, time_s: f64) -> f64 {
    let lead_m = history.state_at(time_s).unwrap().station_m;
    arc.grade_rad(lead_m - half_arc_m(arc.radius_m, 1.0))
}

/// B03 (DLMF 22.19(i); Abramowitz & Stegun table 17.1): large swings on a circle of R = 20 m take
/// 4 √(R/g) K(sin²(a/2)); a reversal is half of one.
#[test]
fn exact_large_swings() {
    for (amplitude_deg, period_s) in [
        (10.0, 8.9900482133374452),
        (30.0, 9.1291431494888904),
        (60.0, 9.6295925412403758),
        (90.0, 10.591119635522049),
        (120.0, 12.318767684043768),
        (150.0, 15.812139764484116),
        (170.0, 21.888243461280979),
    ] {
        let (arc, train, poses) = bead(20.0, -178.0, 178.0);
        let release = scenario(arc.leading_m(1.0, -amplitude_deg * DEG), 0.0);
        let history = run_for(&poses, &train, &release, 1.01 * period_s);
        let half = history.reversals[0];
        close(half.time_s, 0.5 * period_s, 2e-8 * period_s);
        close(
            half.station_m,
            arc.leading_m(1.0, amplitude_deg * DEG),
            1e-7,
        );
        close(history.reversals[1].time_s, period_s, 4e-8 * period_s);
    }
}

/// B03: released at 90°, θ(t) = 2 asin(k cd(ω₀ t, k)), k² = ½ (DLMF 22.19(i)).
#[test]
fn exact_angle_of_a_swing() {
    let (arc, train, poses) = bead(20.0, -120.0, 120.0);
    let release = scenario(arc.leading_m(1.0, -90.0 * DEG), 0.0);
    let history = run_for(&poses, &train, &release, 6.0);
    for (time_s, angle) in [
        (1.0, -1.3261198086725185),
        (2.0, -0.62013929985188208),
        (3.0, 0.34529399129631375),
        (5.0, 1.5493800079196137),
    ] {
        close(angle_at(&arc, &history, time_s), angle, 1e-8);
    }
}

/// B03: a full turn at 6gR takes (4R/v0) K(4gR/v0²), and on the separatrix θ = 2 asin(tanh ω₀ t).
#[test]
fn exact_full_turn_and_separatrix() {
    let (arc, train, poses) = bead(20.0, -20.0, 380.0);
    let from_m = arc.leading_m(1.0, 0.0);
    let (whole, goal) = (
        scenario(from_m, (6.0 * G * 20.0).sqrt()),
        until(arc.leading_m(1.0, TAU)),
    );
    let history = run(&poses, &train, &whole, &goal);
    close(history.duration_s, 4.7316468070439379, 1e-8);
    let edge = scenario(from_m, (4.0 * G * 20.0).sqrt());
    let history = run_for(&poses, &train, &edge, 3.0);
    close(angle_at(&arc, &history, 3.0), 2.6545372185773354, 1e-8);
}

/// B13 (Kufel & Sokal, arXiv:2003.02178): μN in a loop of R = 8 m from 23 m/s, μ = 0.02:
/// w′ = −2gR sin θ − 2μ (gR cos θ + w), w = v².
#[test]
fn exact_friction_in_a_loop() {
    let (arc, train, poses) = bead(8.0, -20.0, 380.0);
    let scenario = running(arc.leading_m(1.0, 0.0), 23.0, 0.02);
    let goal = until(arc.leading_m(1.0, TAU));
    let history = run(&poses, &train, &scenario, &goal);
    let rider = seat(0.0, 0.0, height_of_rail_m(1.0, 8.0));
    for (deg, v) in [
        (90.0, 18.449589183323307),
        (180.0, 13.113150994619859),
        (270.0, 17.829195256103261),
        (360.0, 21.124043698499239),
    ] {
        let state = state_when_at(&history, arc.leading_m(1.0, deg * DEG));
        close(state.speed_m_s, v, 1e-8);
        let felt = felt_g(&poses, 0, &rider, state);
        let fz = v * v / (G * 8.0) + (deg * DEG).cos();
        close(felt.z, fz, 1e-8);
        // Friction is all that is felt along the track: fx = −μ fz.
        close(felt.x, -0.02 * fz, 1e-8);
    }
}

/// B13: over a crest of R = 15 m at 16 m/s the normal load is negative throughout and friction
/// takes its magnitude; a signed law would give 16.225 m/s at the end instead.
#[test]
fn exact_friction_with_lift_off_loads() {
    let (arc, train, poses) = bead(15.0, 40.0, -40.0);
    let scenario = running(arc.leading_m(1.0, 0.35), 16.0, 0.05);
    let goal = until(arc.leading_m(1.0, -0.35));
    let history = run(&poses, &train, &scenario, &goal);
    let top = state_when_at(&history, arc.leading_m(1.0, 0.0));
    close(top.speed_m_s, 15.320772557102447, 1e-8);
    let rider = seat(0.0, 0.0, height_of_rail_m(1.0, -15.0));
    close(felt_g(&poses, 0, &rider, top).z, -0.59569320645659451, 1e-8);
    close(last(&history).speed_m_s, 15.787274245663379, 1e-8);
}

/// B12, a circle with μN from 60°, μ = 0.03: linear in v² (Gonzalez-Cataldo et al., arXiv:1512.00515).
#[test]
fn exact_swing_with_normal_friction() {
    let (arc, train, poses) = bead(20.0, -70.0, 70.0);
    let scenario = running(arc.leading_m(1.0, -60.0 * DEG), 0.0, 0.03);
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    let first = history.reversals[0];
    close(
        arc.grade_rad(first.station_m - half_arc_m(20.0, 1.0)),
        0.94465529818152229,
        1e-8,
    );
    let bottom_m = arc.leading_m(1.0, 0.0);
    let (mut low, mut high) = (0.0, first.time_s);
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        let short = history.state_at(middle).unwrap().station_m < bottom_m;
        if short { low = middle } else { high = middle }
    }
    close(
        history.state_at(low).unwrap().speed_m_s,
        13.354716417591607,
        1e-8,
    );
}

/// B13 with this program's law, c_run |F_u| + c_side |F_l| where the catalogue has the magnitude of
/// both: on a flat circle dw/ds = −2 (c_run g + c_side w/R), w = v², is solved by
/// w = (w0 + b) e^(−2 c_side s/R) − b, b = c_run g R/c_side (derived here).
#[test]
fn exact_side_friction_on_a_flat_circle() {
    let radius_m = 30.0;
    let circle = |t: f64| Vector3::new(t.cos(), t.sin(), 0.0) * radius_m;
    let spine = level_points(lap_points(TAU, 400, circle), true);
    let mut car = car(1.0, 800.0);
    car.mass_centre_m.y = -(radius_m - (radius_m * radius_m - 0.25).sqrt());
    let train = train(vec![car]);
    let poses = Poses::new(&spine, &train).unwrap();
    let (run_c, side_c) = (0.012, 0.02);
    let mut scenario = running(10.0, 25.0, run_c);
    scenario.resistance.side = side_c;
    let goal = until(110.0);
    let history = run(&poses, &train, &scenario, &goal);
    let b = run_c * G * radius_m / side_c;
    let w = (625.0 + b) * (-2.0 * side_c * 100.0 / radius_m).exp() - b;
    close(last(&history).speed_m_s, w.sqrt(), 1e-7);
}

/// B13, helix a = 12 m, b = −0.6 m, with this program's law: unbanked, the speed at which
/// g sin = c_run g cos + c_side v² a/(a² + b²) is kept (derived here).
#[test]
fn exact_steady_speed_down_a_helix() {
    let (a, b, run_c, side_c) = (12.0f64, -0.6f64, 0.01, 0.02);
    let start = crestfall::input::Start {
        grade_rad: (b / a).atan(),
        ..Default::default()
    };
    let turn = crestfall::input::Element {
        turn_left_rad: 3.0 * TAU,
        ease: crestfall::input::Ease::Ramp(0.05),
        ..element(3.0 * TAU * a.hypot(b) / 0.95)
    };
    let train = point_train(0.01, 1000.0);
    let poses = Poses::new(&element_spine(start, vec![turn]), &train).unwrap();
    let (sin, cos) = (b / a).atan().sin_cos();
    let v = ((-sin - run_c * cos) * G / side_c * (a * a + b * b) / a).sqrt();
    let mut scenario = running(15.0, v, run_c);
    scenario.resistance.side = side_c;
    let goal = until(200.0);
    let history = run(&poses, &train, &scenario, &goal);
    close(last(&history).speed_m_s, v, 1e-6);
    close(last(&history).acceleration_m_s2, 0.0, 1e-6);
    assert!(v > 10.0);
}

/// B11 (Meriam & Kraige, *Statics*, sec. 5/3): seven cars, 2.5 m of arc apart, over a crest of
/// R = 20 m, no friction. On a circle equal chords are equal arcs, so the chained train coincides.
#[test]
fn exact_train_over_a_crest() {
    let (radius_m, chord_m, pitch) = (20.0f64, 0.8, 2.5 / 20.0);
    let arc = Arc3::new(radius_m, 85.0, -85.0);
    let own = 2.0 * (0.5 * chord_m / radius_m).asin();
    let link_m = 2.0 * radius_m * (0.5 * (pitch - own)).sin();
    let mut cars = vec![car_on_circle(chord_m, 700.0, -radius_m); 7];
    cars.iter_mut()
        .for_each(|car| car.length_m = chord_m + link_m);
    let train = train(cars);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    let front_at = |grade_rad: f64| arc.leading_m(chord_m, grade_rad);
    // The leading car is three pitches ahead of the middle.
    let (release, goal) = (
        scenario(front_at(-3.0 * pitch), 6.0),
        until(front_at(-6.0 * pitch)),
    );
    let history = run(&poses, &train, &release, &goal);
    let rider = seat(0.0, 0.0, height_of_rail_m(chord_m, -radius_m));
    // When the rear car is on the crest, six pitches behind the leading one.
    let end = last(&history);
    close(end.speed_m_s, 7.900339837800855, 1e-9);
    close(end.acceleration_m_s2, 3.4806781977649456, 1e-9);
    let felt = |car: usize, state| felt_g(&poses, car, &rider, state);
    close(felt(6, end).z, 0.68177017864029388, 1e-9);
    close(felt(6, end).x, 0.35493039904197107, 1e-9);
    close(felt(0, end).x, -0.32670836098136309, 1e-9);
    close((0..7).map(|car| felt(car, end).x).sum::<f64>(), 0.0, 1e-9);
    let start = history.state_at(0.0).unwrap();
    close(felt(3, start).z, 0.81645108166397292, 1e-9);
}

/// B11: a train that climbs over the crest: when the front car is on it, the train is still climbing.
#[test]
fn exact_train_climbing_a_crest() {
    let arc = Arc3::new(20.0, 85.0, -85.0);
    let (chord_m, pitch) = (0.8f64, 2.5 / 20.0);
    let own = 2.0 * (0.5 * chord_m / 20.0).asin();
    let mut cars = vec![car_on_circle(chord_m, 700.0, -20.0); 7];
    let link_m = 40.0 * (0.5 * (pitch - own)).sin();
    cars.iter_mut()
        .for_each(|car| car.length_m = chord_m + link_m);
    let train = train(cars);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    let front_m = arc.leading_m(chord_m, 0.0);
    let (release, goal) = (
        scenario(front_m, 7.900339837800855),
        until(arc.leading_m(chord_m, -3.0 * pitch)),
    );
    let history = run(&poses, &train, &release, &goal);
    let start = history.state_at(0.0).unwrap();
    close(start.acceleration_m_s2, -3.4806781977649456, 1e-9);
    let rider = seat(0.0, 0.0, height_of_rail_m(chord_m, -20.0));
    close(
        felt_g(&poses, 0, &rider, start).x,
        -0.35493039904197107,
        1e-9,
    );
    close(last(&history).speed_m_s, 6.0, 1e-9);
}

/// B11: time of a single mass from the crest to 30° past, by quadrature: 1.478846844929870 s for the
/// seven-car train at 6 m/s centred; its centre's height factor is 0.96903363167208232.
#[test]
fn exact_time_over_a_crest() {
    let factor = 0.96903363167208232;
    let time = boole(0.0, 30.0 * DEG, 2000, |a| {
        20.0 / (36.0 + 2.0 * G * 20.0 * factor * (1.0 - a.cos())).sqrt()
    });
    let arc = Arc3::new(20.0, 85.0, -85.0);
    let (chord_m, pitch) = (0.8f64, 2.5 / 20.0);
    let own = 2.0 * (0.5 * chord_m / 20.0).asin();
    let mut cars = vec![car_on_circle(chord_m, 700.0, -20.0); 7];
    let link_m = 40.0 * (0.5 * (pitch - own)).sin();
    cars.iter_mut()
        .for_each(|car| car.length_m = chord_m + link_m);
    let train = train(cars);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    let release = scenario(arc.leading_m(chord_m, -3.0 * pitch), 6.0);
    let goal = until(arc.leading_m(chord_m, -3.0 * pitch - 30.0 * DEG));
    let history = run(&poses, &train, &release, &goal);
    close(history.duration_s, time, 1e-9);
    close(history.duration_s, 1.4788468449298698, 1e-9);
}

/// A train released from rest on a crest is held: nothing drives it.
#[test]
fn exact_balance_on_a_crest() {
    let (arc, train, poses) = bead(20.0, 30.0, -30.0);
    let mut scenario = running(arc.leading_m(1.0, 0.0), 0.0, 1e-6);
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    assert_eq!(history.end, RunEnd::Stalled);
    close(history.duration_s, 0.0, 0.0);
    scenario.release.station_m = arc.leading_m(1.0, -1e-3);
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    assert_eq!(history.end, RunEnd::Completed);
    scenario.release.station_m = arc.leading_m(1.0, 1e-3);
    let history = run(&poses, &train, &scenario, &Goal::TrackEnd);
    assert_eq!(history.end, RunEnd::RolledBack);
    close(history.reversals[0].time_s, 0.0, 0.0);
}
