//! Circles with one car whose mass lies on the rail circle, which makes it a point mass exactly.

use std::f64::consts::TAU;

use crestfall::input::Goal;
use crestfall::motion::{History, RunEnd};
use crestfall::train::Poses;
use nalgebra::Vector3;

use crate::fixture::*;

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
