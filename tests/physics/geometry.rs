//! Shapes made from elements.

use std::f64::consts::{FRAC_PI_2, PI, TAU};

use crestfall::input::{Change, Ease, Element, Extent, Start};
use crestfall::spine::{Spine, SpinePoint};
use nalgebra::Vector3;

use crate::fixture::*;

/// A turn to the left whose rate rises and falls over a part of it.
fn turn(length_m: f64, left_rad: f64, ramp: f64) -> Element {
    Element {
        turn_left_rad: left_rad,
        ease: Ease::Ramp(ramp),
        ..element(length_m)
    }
}

/// Where `to` lies as seen from `from`, looking along its level tangent: ahead, to the left, turned.
fn seen_from(from: &SpinePoint, to: &SpinePoint) -> (f64, f64, f64) {
    let t = from.tangent.value;
    let left = Vector3::new(-t.y, t.x, 0.0);
    let d = to.position_m - from.position_m;
    let heading = to.tangent.value.dot(&left).atan2(to.tangent.value.dot(&t));
    (d.dot(&t), d.dot(&left), heading)
}

/// A01: circle of R = 25 m; chord and sagitta of an arc of 2 m (any handbook of mensuration).
#[test]
fn exact_circle() {
    let (radius_m, ramp) = (25.0, 0.25);
    let spine = element_spine(east(), vec![turn(50.0 / 0.75, 2.0, ramp)]);
    let (a, b) = (spine.at(30.0), spine.at(32.0));
    close(a.curvature_1_m(), 0.04, 1e-16);
    close(a.radius_m().unwrap(), radius_m, 1e-12);
    close(
        (b.position_m - a.position_m).norm(),
        1.999466709331708,
        1e-12,
    );
    let middle = 0.5 * (a.position_m + b.position_m);
    let sagitta_m = (spine.at(31.0).position_m - middle).norm();
    close(sagitta_m, 0.019997333475551492, 1e-12);
}

/// A stated radius is the smallest one reached: 1/max κ, κ² = θ′² + ψ′² cos² θ, found here by
/// looking at ten thousand stations.
#[test]
fn exact_smallest_radius() {
    for ease in [Ease::Smooth, Ease::Ramp(0.3), Ease::Ramp(0.5)] {
        let element = Element {
            extent: Extent::SmallestRadius(25.0),
            grade: Some(Change::By(-70.0 * DEG)),
            turn_left_rad: 110.0 * DEG,
            ease,
            ..element(0.0)
        };
        let start = Start {
            grade_rad: 40.0 * DEG,
            ..Start::default()
        };
        let spine = element_spine(start, vec![element]);
        let station = |i: usize| spine.length_m() * i as f64 / 10_000.0;
        let sharpest = (0..=10_000)
            .map(|i| spine.at(station(i)).curvature_1_m())
            .fold(0.0, f64::max);
        close(1.0 / sharpest, 25.0, 1e-5);
    }
}

/// A circle stated by its radius alone: 90° of R = 25 m with ramps of a quarter are 52.36 m long.
#[test]
fn exact_length_from_radius() {
    let arc = Element {
        extent: Extent::SmallestRadius(25.0),
        ..turn(0.0, FRAC_PI_2, 0.25)
    };
    let spine = element_spine(east(), vec![arc]);
    close(spine.length_m(), 25.0 * FRAC_PI_2 / 0.75, 1e-11);
    close(spine.at(26.0).curvature_1_m(), 0.04, 1e-14);
}

/// A helix of radius `a` that climbs 2π `b` a turn, to the left or (`side` −1) the right.
fn helix(a: f64, b: f64, turns: f64, side: f64) -> Spine {
    let start = Start {
        grade_rad: (b / a).atan(),
        ..east()
    };
    let length_m = a.hypot(b) * TAU * turns / 0.9;
    element_spine(start, vec![turn(length_m, side * TAU * turns, 0.1)])
}

/// A02: κ = a/(a² + b²), τ = b/(a² + b²) (do Carmo, *Differential Geometry of Curves and
/// Surfaces*, sec. 1-5, exercise 1): a = 10, b = 3; to the right the torsion turns its sign.
#[test]
fn exact_helix() {
    for (side, b) in [(1.0, 3.0), (-1.0, 3.0), (1.0, -3.0)] {
        let spine = helix(10.0, b, 1.5, side);
        let point = spine.at(20.0);
        close(point.curvature_1_m(), 0.091743119266055046, 1e-15);
        let torsion = 0.027522935779816514 * side * b.signum();
        close(point.torsion_1_m().unwrap(), torsion, 1e-15);
        close(point.grade_rad().abs(), 0.29145679447786709, 1e-15);
        let turned = spine.at(20.0 + 65.598380459238171).position_m - point.position_m;
        close_vectors(turned, Vector3::new(0.0, 0.0, TAU * b), 1e-11);
    }
}

/// A02, after Bishop (Amer. Math. Monthly 82, 1975): a frame that does not turn about the tangent
/// turns by −τ s against the normal; so a frame fixed to the normal rolls by τ per metre.
#[test]
fn exact_roll_of_the_level_frame_on_a_helix() {
    let point = helix(10.0, 3.0, 1.5, 1.0).at(40.0);
    close_vectors(point.left().value, normal(&point), 1e-14);
    let rotation = point.rotation_rad_m();
    close(rotation.x, 0.027522935779816514, 1e-15);
    close(rotation.y, 0.0, 1e-15);
    close(rotation.z, 0.091743119266055046, 1e-15);
}

/// A03: a clothoid of length L to radius R is the first half of an element of length 2L with ramp
/// 0.5. End point A√π C, A√π S of L/(A√π), A² = RL (DLMF 7.2(iii)), and heading L/2R.
#[test]
fn exact_clothoids() {
    let cases = [
        (300.0, 60.0, 59.940027771368397, 1.9985718830375267),
        (30.0, 25.0, 24.569446799450801, 3.4294010449750407),
        (12.0, 18.0, 17.013527536885344, 4.3224008149025725),
    ];
    for (radius_m, length_m, x_m, y_m) in cases {
        let spine = element_spine(east(), vec![turn(2.0 * length_m, length_m / radius_m, 0.5)]);
        let (x, y, heading) = seen_from(&spine.at(0.0), &spine.at(length_m));
        close(x, x_m, 1e-11);
        close(y, y_m, 1e-11);
        close(heading, length_m / (2.0 * radius_m), 1e-14);
        close(spine.at(length_m).curvature_1_m(), 1.0 / radius_m, 1e-14);
        close(
            spine.at(0.25 * length_m).curvature_1_m(),
            0.25 / radius_m,
            1e-14,
        );
    }
}

/// Abramowitz & Stegun, *Handbook of Mathematical Functions*, table 7.7, prints C(1) = 0.7798934 and
/// S(1) = 0.4382591: the clothoid with A√π = 100 m, 100 m along it.
#[test]
fn published_fresnel_integrals_at_one() {
    let spine = element_spine(east(), vec![turn(200.0, PI, 0.5)]);
    let (x, y, _) = seen_from(&spine.at(0.0), &spine.at(100.0));
    close(x / 100.0, 0.7798934, 0.5e-7);
    close(y / 100.0, 0.4382591, 0.5e-7);
}

/// A03: curvature linear between two radii, and through zero: end points by quadrature of the
/// heading's sine and cosine to 40 digits (mpmath).
#[test]
fn exact_linear_curvature() {
    let rising = element_spine(east(), vec![turn(90.0, 45.0 / 20.0, 0.5)]);
    let (x, y, heading) = seen_from(&rising.at(15.0), &rising.at(45.0));
    close(x, 26.303241265960581, 1e-11);
    close(y, 11.59639039766559, 1e-11);
    close(heading, 1.0, 1e-14);
    let through = element_spine(
        east(),
        vec![turn(40.0, -20.0 / 25.0, 0.5), turn(40.0, 20.0 / 25.0, 0.5)],
    );
    let (x, y, _) = seen_from(&through.at(20.0), &through.at(60.0));
    close(x, 38.310593499204762, 1e-11);
    close(y, -10.472875831324916, 1e-11);
}

/// Position over a kilometre of smooth elements that climb, turn and bank at once, against Boole's
/// rule over twenty thousand panels of our own formula for the tangent: to 1e-9 m.
#[test]
fn exact_position_over_a_kilometre() {
    let changes = [
        (60.0, 140.0),
        (-110.0, -200.0),
        (50.0, 170.0),
        (360.0, -90.0),
        (0.0, 250.0),
    ];
    let length_m = 200.0;
    let elements = changes.map(|(grade_deg, turn_deg)| Element {
        grade: Some(Change::By(grade_deg * DEG)),
        turn_left_rad: turn_deg * DEG,
        bank: Some(Change::By(30.0 * DEG)),
        ..element(length_m)
    });
    let spine = element_spine(east(), elements.to_vec());
    let (mut position, mut grade, mut direction) = (Vector3::zeros(), 0.0, 0.0);
    for (index, (grade_deg, turn_deg)) in changes.into_iter().enumerate() {
        let angles = |s: f64| {
            let x = s / length_m;
            let part = x.powi(3) * (10.0 - 15.0 * x + 6.0 * x * x);
            (
                grade + grade_deg * DEG * part,
                direction + turn_deg * DEG * part,
            )
        };
        let tangent: [&dyn Fn(f64) -> f64; 3] = [
            &|s| angles(s).1.cos() * angles(s).0.cos(),
            &|s| angles(s).1.sin() * angles(s).0.cos(),
            &|s| angles(s).0.sin(),
        ];
        position += Vector3::from(tangent.map(|t| boole(0.0, length_m, 4000, t)));
        (grade, direction) = (grade + grade_deg * DEG, direction + turn_deg * DEG);
        let station_m = length_m * (index + 1) as f64;
        close_vectors(spine.at(station_m).position_m, position, 1e-9);
    }
}

/// A loop is a grade that goes through 360°: at its top the grade reads 0 and the bank 180°.
#[test]
fn exact_attitude_over_a_loop() {
    let circle = Arc3::new(8.0, -5.0, 365.0);
    let at = |grade_deg: f64| circle.spine.at(circle.station_m(grade_deg * DEG));
    close(at(60.0).grade_rad(), 60.0 * DEG, 1e-13);
    close(at(60.0).bank_left_rad().unwrap(), 0.0, 1e-13);
    assert_eq!(at(90.0).bank_left_rad(), None);
    close(at(180.0).grade_rad(), 0.0, 1e-13);
    close(at(180.0).bank_left_rad().unwrap().abs(), PI, 1e-13);
    close_vectors(at(180.0).up.value, -Vector3::z(), 1e-13);
    close(at(180.0).position_m.z - at(0.0).position_m.z, 16.0, 1e-12);
    close(at(360.0).bank_left_rad().unwrap(), 0.0, 1e-12);
}

/// Bank to the left lowers the left side: up leans left by its sine, and the roll rate about the
/// tangent is negative (right-handed about forward is left side up).
#[test]
fn exact_bank_to_the_left() {
    let roll = Element {
        bank: Some(Change::To(30.0 * DEG)),
        bank_ease: Ease::Ramp(0.25),
        ..element(20.0)
    };
    let spine = element_spine(east(), vec![roll]);
    let end = spine.at(20.0);
    close_vectors(end.up.value, Vector3::new(0.0, 0.5, 0.75f64.sqrt()), 1e-14);
    close_vectors(
        end.left().value,
        Vector3::new(0.0, 0.75f64.sqrt(), -0.5),
        1e-14,
    );
    close(end.bank_left_rad().unwrap(), 30.0 * DEG, 1e-14);
    let rate = left(30.0 * DEG / 15.0);
    close_vectors(
        spine.at(10.0).rotation_rad_m(),
        Vector3::new(rate, 0.0, 0.0),
        1e-14,
    );
}

/// A08 (Bishop 1975): where a plane curve inflects, the normal jumps; the frame must not.
#[test]
fn exact_frame_through_an_inflection() {
    let bend = |by_deg: f64| Element {
        grade: Some(Change::By(by_deg * DEG)),
        ..element(20.0)
    };
    let spine = element_spine(east(), vec![bend(40.0), bend(-60.0)]);
    for step in -100..=100 {
        let point = spine.at(20.0 + 0.01 * f64::from(step));
        close_vectors(point.left().value, Vector3::y(), 1e-15);
        assert!(point.up.value.z > 0.7);
    }
    assert_eq!(spine.at(20.0).torsion_1_m(), None);
    assert_eq!(spine.at(20.0).radius_m(), None);
    let jump = normal(&spine.at(19.0)).angle(&normal(&spine.at(21.0)));
    assert!(jump > 3.0, "the normal itself turns over, by {jump}");
}

/// First and second derivatives of tangent and up against central differences of the values.
#[test]
fn exact_derivatives_by_station() {
    let twisted = Element {
        grade: Some(Change::By(-50.0 * DEG)),
        turn_left_rad: 80.0 * DEG,
        bank: Some(Change::By(65.0 * DEG)),
        bank_ease: Ease::Ramp(0.5),
        ..element(30.0)
    };
    let spine = element_spine(east(), vec![twisted]);
    check_derivatives(&spine, [3.0, 8.0, 17.5, 29.0]);
}

/// Central differences over half a centimetre leave an error of h² f‴/6, below 1e-6 here.
pub fn check_derivatives<const N: usize>(spine: &Spine, stations_m: [f64; N]) {
    let h = 5e-3;
    for s in stations_m {
        let [behind, here, ahead] = [s - h, s, s + h].map(|s| spine.at(s));
        let slope = (ahead.position_m - behind.position_m) / (2.0 * h);
        close_vectors(slope, here.tangent.value, 1e-6);
        let pairs = [
            (behind.tangent, here.tangent, ahead.tangent),
            (behind.up, here.up, ahead.up),
        ];
        for (b, m, a) in pairs {
            close_vectors((a.value - b.value) / (2.0 * h), m.d1, 2e-6);
            close_vectors((a.d1 - b.d1) / (2.0 * h), m.d2, 2e-6);
        }
        close(here.tangent.value.dot(&here.up.value), 0.0, 1e-14);
        close(here.tangent.value.norm(), 1.0, 1e-14);
        close(here.up.value.norm(), 1.0, 1e-14);
    }
}
