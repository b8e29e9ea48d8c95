//! What riders feel.

use std::f64::consts::{FRAC_PI_2, PI, TAU};

use crestfall::input::{Change, Columns, Ease, Element, GravityTerm, Seat, Start};
use crestfall::loads::car_loads;
use crestfall::motion::Samples;
use crestfall::spine::Spine;
use crestfall::train::Poses;
use nalgebra::Vector3;

use crate::fixture::*;

/// Axle distance of the short car that stands for a point on curves that are no circles, m.
const SHORT_M: f64 = 0.01;

fn east() -> Start {
    Start {
        bearing_rad: FRAC_PI_2,
        ..Start::default()
    }
}

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

/// A flat circle to the left through points, banked to the left throughout.
fn banked_circle(radius_m: f64, bank_left_deg: f64) -> Spine {
    let circle = |t: f64| Vector3::new(t.cos(), t.sin(), 0.0) * radius_m;
    let centre_m = lap_points(TAU, 400, circle);
    let bank_left_rad = vec![bank_left_deg * DEG; 400];
    point_spine(
        Columns::Bank {
            centre_m,
            bank_left_rad,
        },
        true,
    )
}

/// C06 (Meriam & Kraige, *Dynamics*, sec. 3/5): lateral toward the centre (v²/R cos − g sin)/g, fz
/// (v²/R sin + g cos)/g. In a turn to the left the centre is to the left: fy > 0.
#[test]
fn exact_banked_turns() {
    for (radius_m, v, bank_deg, fy, fz) in [
        (25.0, 15.0, 30.0, 0.29479013058077405, 1.3248976996245064),
        (25.0, 15.0, 45.0, -0.058163357012244606, 1.3560502053608504),
        (18.0, 14.0, 60.0, -0.31084657671867771, 1.4615979357643933),
        (18.0, 14.0, 0.0, 1.1103576541315219, 1.0),
        (18.0, 14.0, 90.0, -1.0, 1.1103576541315219),
        (40.0, 12.0, -10.0, 0.53516897333557856, 0.92106188264863342),
        (25.0, 15.0, 42.543989516201973, 0.0, 1.357296996076444),
    ] {
        let train = point_train(SHORT_M, 900.0);
        let poses = Poses::new(&banked_circle(radius_m, bank_deg), &train).unwrap();
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), state(3.0, v, 0.0));
        close_vectors(felt, Vector3::new(0.0, fy, fz), 5e-7);
    }
}

/// C06: OpenStax *College Physics*, example 6.5: at R = 100 m, 65° and g = 9.80 m/s², 45.8 m/s need
/// no side force (printed to three digits).
#[test]
fn published_ideal_banking_speed() {
    let train = point_train(SHORT_M, 900.0);
    let poses = Poses::new(&banked_circle(100.0, 65.0), &train).unwrap();
    let side = |v: f64| {
        let samples = Samples {
            rate_hz: 1.0,
            train_station_m: vec![3.0],
            speed_m_s: vec![v],
            acceleration_m_s2: vec![0.0],
        };
        let seats = [seat(0.0, 0.0, 0.0)];
        let loads = car_loads(&poses, 0, &seats, &samples, 9.80, GravityTerm::Included);
        loads.seats[0][1][0]
    };
    assert!(side(45.75) < 0.0 && side(45.85) > 0.0);
    close(side(45.843394094453428), 0.0, 1e-6);
}

/// C06: FAA load-factor chart (second hand): a balanced turn banked 60° is felt as 2.000, 45° as 1.414, 30° as 1.154.
#[test]
fn published_load_factors() {
    for (bank_deg, factor) in [(30.0, 1.154), (45.0, 1.414), (60.0, 2.0)] {
        let radius_m = 50.0;
        let v = (G * radius_m * f64::tan(bank_deg * DEG)).sqrt();
        let train = point_train(SHORT_M, 900.0);
        let poses = Poses::new(&banked_circle(radius_m, bank_deg), &train).unwrap();
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), state(3.0, v, 0.0));
        close(felt.z, factor, 1e-3);
        close(felt.y, 0.0, 1e-6);
    }
}

/// A helix of radius a that climbs 2π b a turn to the left, banked to the left.
fn banked_helix(a: f64, b: f64, bank_left_deg: f64) -> Spine {
    let turns = 1.5;
    let start = Start {
        grade_rad: (b / a).atan(),
        bank_left_rad: bank_left_deg * DEG,
        ..east()
    };
    let turn = Element {
        turn_left_rad: TAU * turns,
        ease: Ease::Ramp(0.1),
        ..element(a.hypot(b) * TAU * turns / 0.9)
    };
    element_spine(start, vec![turn])
}

/// C06: a climbing helix: a_n = v² a/(a² + b²); fx = sin of the climb.
#[test]
fn exact_banked_helix() {
    for (bank_deg, fy, fz) in [
        (0.0, 1.2923136164472754, 0.99503719020998914),
        (40.0, 0.35037208760213637, 1.5929258907385951),
    ] {
        let train = point_train(SHORT_M, 900.0);
        let poses = Poses::new(&banked_helix(20.0, 2.0, bank_deg), &train).unwrap();
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), state(50.0, 16.0, 0.0));
        close_vectors(felt, Vector3::new(0.099503719020998914, fy, fz), 5e-7);
    }
}

/// C09 (e): the same with a seat 0.5 m left and 1.1 m up: all of it turns as a screw, ω = v/√(a² + b²).
#[test]
fn exact_offset_seat_on_a_banked_helix() {
    let train = point_train(SHORT_M, 900.0);
    let poses = Poses::new(&banked_helix(15.0, 2.0, 35.0), &train).unwrap();
    let felt = felt_g(&poses, 0, &seat(0.0, 0.5, 1.1), state(50.0, 14.0, 0.0));
    let expected = Vector3::new(0.13918718433847725, 0.43000007145191096, 1.5100119153956169);
    close_vectors(felt, expected, 1e-6);
}

/// C09 (c): valley and crest of R = 20 m with the rider 1.1 m above the rail: 1 ± v² (R ∓ h)/gR²,
/// and what the train's own acceleration makes of it there: a_t (R + h)/R.
#[test]
fn exact_rider_above_the_rail() {
    let train = point_train(1.0, 900.0);
    for (side, fz) in [(1.0, 2.5610835504479103), (-1.0, -0.74279697960057716)] {
        let arc = Arc3::new(20.0, -side * 30.0, side * 30.0);
        let poses = Poses::new(&arc.spine, &train).unwrap();
        let above = 1.1 + height_of_rail_m(1.0, side * 20.0);
        let place_m = arc.leading_m(1.0, 0.0);
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, above), state(place_m, 18.0, 0.0));
        close_vectors(felt, Vector3::new(0.0, 0.0, fz), 1e-10);
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, above), state(place_m, 0.0, -4.0));
        close(felt.x * G, -4.0 * (20.0 - side * 1.1) / 20.0, 1e-10);
    }
}

/// C09 (d): a flat turn to the left of R = 12 m at 11 m/s, seats 0.6 m outside and inside.
#[test]
fn exact_inner_and_outer_seat() {
    let (radius_m, train) = (12.0, point_train(1.0, 900.0));
    let poses = Poses::new(&banked_circle(radius_m, 0.0), &train).unwrap();
    // The middle of the chord lies inside the rail circle by this much.
    let inside_m = -height_of_rail_m(1.0, radius_m);
    for (left_m, fy) in [(-0.6, 1.0796245404903815), (0.6, 0.97680315568177376)] {
        let rider = seat(0.0, left_m - inside_m, 0.0);
        let felt = felt_g(&poses, 0, &rider, state(5.0, 11.0, 0.0));
        close_vectors(felt, Vector3::new(0.0, fy, 1.0), 1e-7);
    }
}

/// C09 (b): 360° of roll in 2 s about an axis 1.1 m below the rider, φ = 2π t/T − sin(2π t/T):
/// fy = sin φ − h φ″/g, fz = cos φ − h φ′²/g; the catalogue's roll lifts the left side.
#[test]
fn exact_roll_about_the_rail() {
    let (length_m, v) = (40.0, 20.0);
    let count = 801;
    let along = |i: usize| length_m * i as f64 / (count - 1) as f64 * 1.5 - 10.0;
    let roll = |s: f64| {
        let x = TAU * s / length_m;
        x - x.sin()
    };
    let centre_m = (0..count)
        .map(|i| Vector3::new(along(i), 0.0, 0.0))
        .collect();
    let bank_left_rad = (0..count).map(|i| left(roll(along(i)))).collect();
    let spine = point_spine(
        Columns::Bank {
            centre_m,
            bank_left_rad,
        },
        false,
    );
    let train = point_train(SHORT_M, 900.0);
    let poses = Poses::new(&spine, &train).unwrap();
    for (t, fy, fz) in [
        (0.25, -0.70459928195990145, 0.9019659309724493),
        (0.5, -0.56675921271346506, -0.26559053377370827),
        (1.0, 0.0, -5.4282460743264191),
        (1.5, 0.56675921271346506, -0.26559053377370827),
    ] {
        let at = state(10.0 + v * t + 0.5 * SHORT_M, v, 0.0);
        let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 1.1), at);
        close_vectors(felt, Vector3::new(0.0, fy, fz), 2e-6);
    }
    // On the axis only the turned weight is felt.
    let at = state(20.0 + 0.5 * SHORT_M, v, 0.0);
    let felt = felt_g(&poses, 0, &seat(0.0, 0.0, 0.0), at);
    close(felt.y, 0.54030230586813972, 1e-6);
}

/// C10 (ISO 8855 axes; Titterton & Weston sec. 3): straight slopes, standing, running, launched, braked.
#[test]
fn exact_straight_slopes() {
    let train = point_train(1.0, 900.0);
    let felt = |grade_deg: f64, accel: f64| {
        let poses = Poses::new(&straight(30.0, grade_deg * DEG), &train).unwrap();
        felt_g(&poses, 0, &seat(0.4, -0.3, 1.2), state(10.0, 7.0, accel))
    };
    let (half, cos30) = (0.5, 0.8660254037844386);
    close_vectors(felt(-30.0, half * G), Vector3::new(0.0, 0.0, cos30), 1e-12);
    close_vectors(felt(-60.0, cos30 * G), Vector3::new(0.0, 0.0, half), 1e-12);
    close_vectors(felt(-30.0, 0.0), Vector3::new(-half, 0.0, cos30), 1e-12);
    close_vectors(
        felt(0.0, 12.0),
        Vector3::new(1.22365945557, 0.0, 1.0),
        1e-11,
    );
    close_vectors(
        felt(0.0, -6.0),
        Vector3::new(-0.6118297277868, 0.0, 1.0),
        1e-12,
    );
}

/// A seat turned and reclined.
fn turned(faces_left_deg: f64, recline_deg: f64) -> Seat {
    Seat {
        faces_left_rad: faces_left_deg * DEG,
        recline_rad: recline_deg * DEG,
        ..seat(0.3, 0.4, 1.0)
    }
}

/// Seats at rest and launched at 1 g on the level: rider axes by hand. Reclined by ρ, a rider at
/// rest feels (sin ρ, 0, cos ρ); one who faces left feels a push forward at his right side, toward −y.
#[test]
fn exact_turned_and_reclined_seats() {
    let train = point_train(1.0, 900.0);
    let poses = Poses::new(&straight(30.0, 0.0), &train).unwrap();
    let felt = |seat: &Seat, accel: f64| felt_g(&poses, 0, seat, state(10.0, 3.0, accel));
    let (s, c) = (20.0 * DEG).sin_cos();
    for faces_deg in [0.0, 180.0, 90.0, -90.0, 35.0] {
        close_vectors(felt(&turned(faces_deg, 0.0), 0.0), Vector3::z(), 1e-13);
        close_vectors(
            felt(&turned(faces_deg, 20.0), 0.0),
            Vector3::new(s, 0.0, c),
            1e-13,
        );
    }
    let launched = [
        (0.0, Vector3::new(1.0, 0.0, 1.0)),
        (180.0, Vector3::new(-1.0, 0.0, 1.0)),
        (90.0, Vector3::new(0.0, -1.0, 1.0)),
        (-90.0, Vector3::new(0.0, 1.0, 1.0)),
    ];
    for (faces_deg, expected) in launched {
        close_vectors(felt(&turned(faces_deg, 0.0), G), expected, 1e-13);
    }
    // Reclined and launched: x takes cos ρ of the push and sin ρ of the weight, z the rest.
    let expected = Vector3::new(c + s, 0.0, c - s);
    close_vectors(felt(&turned(0.0, 20.0), G), expected, 1e-13);
    let backward = Vector3::new(-c + s, 0.0, c + s);
    close_vectors(felt(&turned(180.0, 20.0), G), backward, 1e-13);
}

/// Without gravity a load is the acceleration alone: at rest nothing.
#[test]
fn exact_without_gravity() {
    let train = point_train(1.0, 900.0);
    let poses = Poses::new(&straight(30.0, 25.0 * DEG), &train).unwrap();
    let samples = Samples {
        rate_hz: 1.0,
        train_station_m: vec![10.0; 2],
        speed_m_s: vec![0.0, 5.0],
        acceleration_m_s2: vec![0.0, G],
    };
    let seats = [turned(0.0, 0.0)];
    let loads = car_loads(&poses, 0, &seats, &samples, G, GravityTerm::Excluded);
    let at = |i: usize| {
        Vector3::new(
            loads.seats[0][0][i],
            loads.seats[0][1][i],
            loads.seats[0][2][i],
        )
    };
    close_vectors(at(0), Vector3::zeros(), 1e-13);
    close_vectors(at(1), Vector3::x(), 1e-13);
}

/// Local gravity weighs, loads stay in g₀ = 9.80665 m/s²: at rest a seat feels g/g₀.
#[test]
fn exact_local_gravity() {
    let train = point_train(1.0, 900.0);
    let poses = Poses::new(&straight(30.0, 0.0), &train).unwrap();
    let samples = Samples {
        rate_hz: 1.0,
        train_station_m: vec![10.0],
        speed_m_s: vec![0.0],
        acceleration_m_s2: vec![0.0],
    };
    let seats = [turned(0.0, 0.0)];
    let loads = car_loads(&poses, 0, &seats, &samples, 9.78, GravityTerm::Included);
    close(loads.seats[0][2][0], 9.78 / 9.80665, 1e-13);
}
