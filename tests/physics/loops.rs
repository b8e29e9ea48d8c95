//! Loads in loops and over hills.

use std::f64::consts::{PI, TAU};

use crestfall::input::{Change, Ease, Element};
use crestfall::spine::Spine;
use crestfall::train::Poses;
use nalgebra::Vector3;

use crate::fixture::*;

/// C01 (Pendrill, Physics Education 40, 517; Kufel & Sokal): a circular loop without friction has
/// 6 g between bottom and top; fz = v0²/gR − 2 + 3 cos θ.
#[test]
fn exact_circular_loop() {
    let radius_m = 9.0;
    let arc = Arc3::new(radius_m, -20.0, 380.0);
    let train = train(vec![car_on_circle(1.0, 900.0, radius_m)]);
    let poses = Poses::new(&arc.spine, &train).unwrap();
    let rider = seat(0.0, 0.0, height_of_rail_m(1.0, radius_m));
    for (factor, loads) in [
        (5.0 + 1e-9, [6.0, 3.0, 0.0, 4.5]),
        (6.0, [7.0, 4.0, 1.0, 5.5]),
        (8.0, [9.0, 6.0, 3.0, 7.5]),
    ] {
        let scenario = scenario(arc.leading_m(1.0, 0.0), (factor * G * radius_m).sqrt());
        let goal = until(arc.leading_m(1.0, TAU));
        let history = run(&poses, &train, &scenario, &goal);
        for (deg, load) in [0.0, 90.0, 180.0, 60.0].into_iter().zip(loads) {
            let state = state_when_at(&history, arc.leading_m(1.0, deg * DEG));
            let felt = felt_g(&poses, 0, &rider, state);
            close_vectors(felt, Vector3::new(0.0, 0.0, load), 2e-8);
        }
    }
}

/// C02 (Pendrill 2005; Müller, Eur. J. Phys. 31, 835; DLMF 7.2(iii)): half loop with κ = s/A²,
/// A = 12 m, v0 = 24 m/s. A clothoid that turns by π in s_top = A√(2π) is half of a ramp-0.5 element.
#[test]
fn exact_clothoid_loop() {
    let top_m = 30.0795392956;
    let half = Element {
        grade: Some(Change::By(TAU)),
        ease: Ease::Ramp(0.5),
        ..element(2.0 * 12.0 * TAU.sqrt())
    };
    let spine = element_spine(east(), vec![element(5.0), half]);
    let top = spine.at(5.0 + 12.0 * TAU.sqrt());
    close(12.0 * TAU.sqrt(), top_m, 1e-9);
    close(top.position_m.z, 15.1857936022, 1e-9);
    close(top.position_m.x - 5.0, 11.2492313336, 1e-9);
    close(top.radius_m().unwrap(), 4.78730736482, 1e-9);
    let train = point_train(SHORT_M, 900.0);
    let poses = Poses::new(&spine, &train).unwrap();
    let lead = |s: f64| 5.0 + s + 0.5 * SHORT_M;
    let (scenario, goal) = (scenario(lead(0.0), 24.0), until(lead(31.0)));
    let history = run(&poses, &train, &scenario, &goal);
    let s_top = 12.0 * TAU.sqrt();
    for (part, height_m, v, fz) in [
        (0.25, 0.4908216219424, 23.7986001328, 3.99678186379),
        (0.5, 3.76728621323, 22.4078353554, 6.05469338251),
        (0.75, 10.6035843185, 19.1840746372, 5.6842823144),
        (0.9, 14.2995006244, 17.191265352, 4.83852334249),
        (1.0, 15.1857936022, 16.6780236941, 4.92484762345),
    ] {
        close(spine.at(5.0 + part * s_top).position_m.z, height_m, 1e-9);
        if part < 1.0 {
            let state = state_when_at(&history, lead(part * s_top));
            close(state.speed_m_s, v, 1e-5);
            let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), state);
            close_vectors(felt, Vector3::new(0.0, 0.0, fz), 2e-5);
        }
    }
    close(time_at(&history, lead(s_top)), 1.42541390663, 1e-6);
}

/// A loop in the x-z plane given by its radius of curvature over the heading θ from the level:
/// points dx = ρ cos θ dθ, dz = ρ sin θ dθ, by Boole's rule.
fn loop_points(
    count: usize,
    to_rad: f64,
    rho: impl Fn(f64) -> f64,
) -> (Vec<Vector3<f64>>, Vec<Vector3<f64>>) {
    let (mut x, mut z) = (0.0, 0.0);
    let (mut points, mut tangents) = (Vec::new(), Vec::new());
    for i in 0..count {
        let at = |k: usize| to_rad * k as f64 / (count - 1) as f64;
        let theta = at(i);
        points.push(Vector3::new(x, 0.0, z));
        tangents.push(Vector3::new(theta.cos(), 0.0, theta.sin()));
        x += boole(theta, at(i + 1), 8, |t| rho(t) * t.cos());
        z += boole(theta, at(i + 1), 8, |t| rho(t) * t.sin());
    }
    (points, tangents)
}

/// Runs a short car up a loop from the bottom and gives what it feels at headings.
fn felt_in_loop(spine: &Spine, v0: f64, stations: &[f64]) -> Vec<(f64, Vector3<f64>)> {
    let train = point_train(SHORT_M, 900.0);
    let poses = Poses::new(spine, &train).unwrap();
    let lead = |s: f64| s + 0.5 * SHORT_M;
    let furthest = stations.iter().copied().fold(0.0, f64::max);
    let (scenario, goal) = (scenario(lead(1e-3), v0), until(lead(furthest) + 1e-3));
    let history = run(&poses, &train, &scenario, &goal);
    let at = |&s: &f64| {
        let state = state_when_at(&history, lead(s));
        (
            state.speed_m_s,
            felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), state),
        )
    };
    stations.iter().map(at).collect()
}

/// C04 (Nordmark & Essén, Eur. J. Phys. 31, 1307, arXiv:1007.1394): the loop of constant load:
/// ρ = C²/(g (n − cos θ)³), C = v0 (n − 1); v (n − cos θ) = C. Through points 0.1 m apart or less.
#[test]
fn exact_loop_of_constant_load() {
    for (n, v0, top_z, top_s) in [
        (3.0f64, 22.0f64, 18.5078492655, 32.5486655574),
        (4.0, 25.0, 20.3943242596, 34.1198819952),
    ] {
        let c = v0 * (n - 1.0);
        let rho = |t: f64| c * c / (G * (n - t.cos()).powi(3));
        let (points, tangents) = loop_points(901, 1.1 * PI, rho);
        let spine = plane_points(points, &tangents);
        let s_of = |theta: f64| boole(0.0, theta, 2000, rho);
        close(s_of(PI), top_s, 1e-8);
        close(spine.at(s_of(PI)).position_m.z, top_z, 1e-7);
        let headings = [20.0, 45.0, 90.0, 135.0, 180.0].map(|d: f64| d * DEG);
        let stations = headings.map(s_of);
        for (theta, (v, felt)) in headings.iter().zip(felt_in_loop(&spine, v0, &stations)) {
            close(v, c / (n - theta.cos()), 5e-5);
            close_vectors(felt, Vector3::new(0.0, 0.0, n), 3e-5);
        }
    }
}

/// C03 (problem in Pendrill 2005): constant centripetal acceleration n g: v² = v0² e^(−(2/n)(1 − cos θ)), ρ = v²/ng, fz = n + cos θ.
#[test]
fn exact_loop_of_constant_acceleration() {
    let (n, v0) = (3.0, 22.0f64);
    let v = |t: f64| v0 * (-(1.0 - t.cos()) / n).exp();
    let rho = |t: f64| v(t).powi(2) / (n * G);
    let (points, tangents) = loop_points(901, 1.1 * PI, rho);
    let spine = plane_points(points, &tangents);
    let s_of = |theta: f64| boole(0.0, theta, 2000, rho);
    close(s_of(PI), 29.5665598915, 1e-8);
    close(spine.at(s_of(PI)).position_m.z, 18.1723108886, 1e-7);
    close(spine.at(s_of(PI)).position_m.x, 9.34567148301, 1e-7);
    let headings = [60.0, 90.0, 120.0, 180.0].map(|d: f64| d * DEG);
    let found = felt_in_loop(&spine, v0, &headings.map(s_of));
    for ((theta, (speed, felt)), fz) in headings.iter().zip(found).zip([3.5, 3.0, 2.5, 2.0]) {
        close(speed, v(*theta), 5e-5);
        close_vectors(felt, Vector3::new(0.0, 0.0, fz), 3e-5);
    }
}

/// C05 (OpenStax *University Physics* 1, sec. 4.3; Pendrill 2005): the hill z = −g x²/2v0² at its
/// design speed is felt as nothing; at another apex speed v, fz = (1 − (v/v0)²) cos³ of the slope.
#[test]
fn exact_ballistic_hill() {
    let curve = |x: f64| Vector3::new(x, 0.0, -G * x * x / (2.0 * 14.0 * 14.0));
    let spine = level_points(curve_points((-20.0, 20.0), 401, curve), false);
    let train = point_train(SHORT_M, 900.0);
    let poses = Poses::new(&spine, &train).unwrap();
    let speed = |x: f64| (G * x / 196.0).hypot(1.0);
    let lead = |x: f64| boole(-20.0, x, 2000, speed) + 0.5 * SHORT_M;
    for (apex, at, fz) in [
        (14.0, 0.0, 0.0),
        (14.0, 5.0, 0.0),
        (14.0, 15.0, 0.0),
        (12.0, 10.0, 0.18976031686911628),
        (12.0, 0.0, 0.26530612244897959),
        (16.0, 10.0, -0.21895421177205725),
        (16.0, 0.0, -0.30612244897959184),
    ] {
        let (scenario, goal) = (scenario(lead(0.0), apex), until(lead(at) + 0.01));
        let history = run(&poses, &train, &scenario, &goal);
        let state = state_when_at(&history, lead(at));
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), state);
        close_vectors(felt, Vector3::new(0.0, 0.0, fz), 1e-6);
    }
}
