//! Curves through points.

use std::f64::consts::{PI, TAU};

use crestfall::input::Columns;
use crestfall::numerics::bspline::Curve;
use crestfall::spine::Spine;
use nalgebra::Vector3;

use crate::fixture::*;
use crate::geometry::check_derivatives;

/// Station of a curve's parameter: its arc length from `from`, by Boole's rule over its speed.
fn arc_m(from: f64, to: f64, speed: impl Fn(f64) -> f64) -> f64 {
    boole(from, to, 4000, speed)
}

/// Length of the derivative of a curve by central differences.
fn speed_of(curve: impl Fn(f64) -> Vector3<f64>) -> impl Fn(f64) -> f64 {
    let h = 1e-3;
    // Richardson: two central differences leave h⁴.
    move |p| {
        let slope = |h: f64| (curve(p + h) - curve(p - h)) / (2.0 * h);
        ((slope(h) * 4.0 - slope(2.0 * h)) / 3.0).norm()
    }
}

fn helix(t: f64) -> Vector3<f64> {
    Vector3::new(10.0 * t.cos(), 10.0 * t.sin(), 3.0 * t)
}

/// Largest errors of a spline through `n` intervals of two turns of the helix, in the value and
/// the first three derivatives, over the inner half.
fn helix_errors(n: usize) -> [f64; 4] {
    let width = 2.0 * TAU;
    let parameters = (0..=n)
        .map(|i| width * i as f64 / n as f64)
        .collect::<Vec<_>>();
    let values = parameters
        .iter()
        .map(|&t| helix(t).into())
        .collect::<Vec<[f64; 3]>>();
    let curve = Curve::interpolating(&parameters, &values);
    let mut worst = [0.0; 4];
    for i in 0..=4000 {
        let t = width * (0.25 + 0.5 * f64::from(i) / 4000.0);
        let (s, c) = t.sin_cos();
        let exact = [
            helix(t),
            Vector3::new(-10.0 * s, 10.0 * c, 3.0),
            Vector3::new(-10.0 * c, -10.0 * s, 0.0),
            Vector3::new(10.0 * s, -10.0 * c, 0.0),
        ];
        for (k, found) in curve.at(t).into_iter().enumerate() {
            worst[k] = f64::max(worst[k], (Vector3::from(found) - exact[k]).norm());
        }
    }
    worst
}

/// A10: degree 5 gives orders 6, 5, 4 and 3 in the value and its derivatives (de Boor, *A Practical
/// Guide to Splines*, ch. XII); at n = 128 SciPy 1.17.1 (`make_interp_spline`, exact end
/// derivatives) leaves 8.222e-10, 2.442e-8, 1.380e-6 and 8.789e-5. Ours has not-a-knot ends, so the
/// inner half is looked at.
#[test]
fn converges_quintic_interpolation() {
    let (coarse, fine) = (helix_errors(64), helix_errors(128));
    let scipy = [
        8.222479877365e-10,
        2.441722680009e-8,
        1.38043604216e-6,
        8.789174120552e-5,
    ];
    for k in 0..4 {
        close(order(coarse[k], fine[k]), 6.0 - k as f64, 0.15);
        assert!(fine[k] < 2.0 * scipy[k], "derivative {k}: {:e}", fine[k]);
    }
}

/// A quintic spline repeats a quintic polynomial (de Boor, ch. IX: Marsden's identity), ends
/// included, whatever the spacing.
#[test]
fn exact_polynomials_of_degree_five() {
    let parameters = (0..15)
        .map(|i| 0.3 * f64::from(i) + 0.02 * f64::from(i * i))
        .collect::<Vec<_>>();
    let p = |x: f64| 1.0 + x * (-2.0 + x * (0.5 + x * (0.25 + x * (-0.1 + x * 0.01))));
    let d3 = |x: f64| 1.5 - 2.4 * x + 0.6 * x * x;
    let values = parameters.iter().map(|&x| [p(x)]).collect::<Vec<_>>();
    let curve = Curve::interpolating(&parameters, &values);
    for i in 0..=100 {
        let x = parameters[14] * f64::from(i) / 100.0;
        close(curve.at(x)[0][0], p(x), 1e-11);
        close(curve.at(x)[3][0], d3(x), 1e-9);
    }
}

/// Largest errors of the periodic spline through n points of an ellipse, seam included.
fn ellipse_errors(n: usize) -> [f64; 4] {
    let parameters = (0..n)
        .map(|i| TAU * i as f64 / n as f64)
        .collect::<Vec<_>>();
    let values = parameters
        .iter()
        .map(|t| [30.0 * t.cos(), 12.0 * t.sin()])
        .collect::<Vec<_>>();
    let curve = Curve::periodic(&parameters, TAU, &values);
    let mut worst = [0.0; 4];
    for i in 0..4000 {
        let t = TAU * f64::from(i) / 4000.0;
        for (k, found) in curve.at(t).into_iter().enumerate() {
            let turned = t + 0.5 * PI * k as f64;
            let off = (found[0] - 30.0 * turned.cos()).hypot(found[1] - 12.0 * turned.sin());
            worst[k] = f64::max(worst[k], off);
        }
    }
    worst
}

/// The periodic spline has the same orders everywhere (de Boor, ch. XII; no ends).
#[test]
fn converges_periodic_interpolation() {
    let (coarse, fine) = (ellipse_errors(32), ellipse_errors(64));
    for k in 0..4 {
        close(order(coarse[k], fine[k]), 6.0 - k as f64, 0.15);
    }
}

/// The value and four derivatives of a periodic spline are equal over the seam, unevenly spaced
/// points and the fewest points included.
#[test]
fn exact_periodic_seam() {
    for n in [6usize, 7, 8, 9, 20] {
        let parameters = (0..n)
            .map(|i| i as f64 + 0.3 * (i as f64).sin())
            .collect::<Vec<_>>();
        let period = n as f64 + 0.1;
        let values = parameters
            .iter()
            .map(|p| [(p * 1.7).cos() + 0.1 * p])
            .collect::<Vec<_>>();
        let curve = Curve::periodic(&parameters, period, &values);
        for (p, v) in parameters.iter().zip(&values) {
            close(curve.at(*p)[0][0], v[0], 1e-10);
        }
        let (first, last) = (curve.at(0.0), curve.at(period));
        for k in 0..4 {
            close(first[k][0], last[k][0], 1e-8);
        }
        let fourth = |p: f64, h: f64| (curve.at(p + h)[3][0] - curve.at(p)[3][0]) / h;
        let (right, left) = (fourth(0.0, 1e-4), fourth(period, -1e-4));
        close(right, left, 2e-2 * (1.0 + right.abs()));
    }
}

/// A01, closed: circumference and curvature of a circle of R = 25 m through 240 points, on the seam
/// and off it, and look-ups that wrap.
#[test]
fn exact_closed_circle() {
    let circle = |t: f64| Vector3::new(25.0 * t.cos(), 25.0 * t.sin(), 0.0);
    let spine = level_points(lap_points(TAU, 240, circle), true);
    close(spine.length_m(), 157.07963267948966, 1e-8);
    for s in [0.0, 1e-9, 0.3, 78.0, 157.0] {
        let point = spine.at(s);
        close(point.curvature_1_m(), 0.04, 1e-8);
        close_vectors(point.position_m, circle(s / 25.0), 1e-8);
        close_vectors(point.up.value, Vector3::z(), 1e-12);
    }
    let length_m = spine.length_m();
    for (s, wrapped) in [
        (-1.0, length_m - 1.0),
        (length_m + 2.0, 2.0),
        (length_m, 0.0),
    ] {
        close(spine.wrapped_m(s), wrapped, 1e-9);
        close_vectors(spine.at(s).position_m, spine.at(wrapped).position_m, 1e-9);
    }
    let (before, after) = (spine.at(-1e-7), spine.at(1e-7));
    close_vectors(before.tangent.d1, after.tangent.d1, 1e-7);
    close_vectors(before.tangent.d2, after.tangent.d2, 1e-6);
    close_vectors(before.up.d2, after.up.d2, 1e-6);
}

/// A04: twisted cubic (t, t², t³) (do Carmo, sec. 1-5), here from −0.2 to 1.2 in metres times ten.
#[test]
fn exact_twisted_cubic() {
    let curve = |t: f64| Vector3::new(t, t * t, t * t * t) * 10.0;
    let points = curve_points((-0.2, 1.2), 141, curve);
    let up = vec![Vector3::new(-0.3, -0.2, 1.0); points.len()];
    let spine = point_spine(
        Columns::Up {
            centre_m: points,
            up,
        },
        false,
    );
    let speed = |t: f64| 10.0 * (1.0 + 4.0 * t * t + 9.0 * t.powi(4)).sqrt();
    close(0.1 * arc_m(0.0, 1.0, speed), 1.8630229825122514, 1e-12);
    close(spine.length_m(), arc_m(-0.2, 1.2, speed), 1e-8);
    let expected = [
        (0.0, 2.0, 3.0, [1.0, 0.0, 0.0], [0.0, 1.0, 0.0]),
        (
            0.5,
            0.95200474003949935,
            0.78688524590163934,
            [0.62469504755442426, 0.62469504755442426, 0.4685212856658182],
            [
                -0.67986404078640476,
                0.13997200839720098,
                0.71985604318560504,
            ],
        ),
        (
            1.0,
            0.16642353500306215,
            0.15789473684210526,
            [
                0.26726124191242438,
                0.53452248382484877,
                0.80178372573727315,
            ],
            [
                -0.67445327343346239,
                -0.49051147158797265,
                0.55182540553646923,
            ],
        ),
    ];
    for (t, curvature, torsion, tangent, n) in expected {
        let point = spine.at(arc_m(-0.2, t, speed));
        close_vectors(point.position_m, curve(t), 1e-7);
        close(10.0 * point.curvature_1_m(), curvature, 2e-6);
        close(10.0 * point.torsion_1_m().unwrap(), torsion, 2e-4);
        close_vectors(point.tangent.value, tangent.into(), 1e-7);
        close_vectors(normal(&point), n.into(), 2e-6);
    }
}

/// Viviani's curve with a = 20 m, its parameter from 0 to 4π.
fn viviani(t: f64) -> Vector3<f64> {
    Vector3::new(1.0 + t.cos(), t.sin(), 2.0 * (0.5 * t).sin()) * 20.0
}

/// A05: Viviani's curve, closed (Gray, *Modern Differential Geometry of Curves and Surfaces*, sec.
/// 7.6): curvature, torsion, length 8√2 a E(½) (DLMF 19.2(ii)), and total torsion 0 (Fenchel 1951).
#[test]
fn exact_viviani() {
    let centre_m = lap_points(2.0 * TAU, 1200, viviani);
    // Outward from the sphere's centre is at right angles to any curve on it.
    let up = centre_m.clone();
    let spine = point_spine(Columns::Up { centre_m, up }, true);
    close(spine.length_m(), 20.0 * 15.280791156110848, 1e-7);
    let speed = |t: f64| 20.0 * (1.0 + (0.5 * t).cos().powi(2)).sqrt();
    for (t, curvature, torsion) in [
        (0.0, 0.5, 0.375),
        (0.5, 0.69388866648871091, 0.3263569759322527),
        (1.0, 1.1180339887498948, 0.0),
        (1.5, 0.69388866648871091, -0.3263569759322527),
    ] {
        let point = spine.at(arc_m(0.0, t * PI, speed));
        close(20.0 * point.curvature_1_m(), curvature, 1e-6);
        close(20.0 * point.torsion_1_m().unwrap(), torsion, 1e-5);
    }
    let torsion = |s: f64| spine.at(s).torsion_1_m().unwrap();
    close(boole(0.0, spine.length_m(), 3000, torsion), 0.0, 1e-6);
    let curvature = |s: f64| spine.at(s).curvature_1_m();
    close(
        boole(0.0, spine.length_m(), 3000, curvature),
        11.062465391441208,
        1e-6,
    );
}

/// A06: a closed curve on a torus: length, curvature, torsion and their totals, by quadrature to 40
/// digits (mpmath); formulas of do Carmo sec. 1-5.
#[test]
fn exact_torus_curve() {
    let torus = |u: f64| {
        let ring = 20.0 + 5.0 * (3.0 * u).cos();
        Vector3::new(ring * u.cos(), ring * u.sin(), 5.0 * (3.0 * u).sin())
    };
    let centre_m = lap_points(TAU, 1000, torus);
    let up = centre_m.iter().map(|r| outward(*r)).collect();
    let spine = point_spine(Columns::Up { centre_m, up }, true);
    close(spine.length_m(), 157.65449242425581, 1e-8);
    for (u, curvature, torsion) in [
        (0.0, 0.082352941176470588, -0.016386554621848739),
        (1.0, 0.067405975172881321, -0.27669189730940142),
    ] {
        let point = spine.at(arc_m(0.0, u, speed_of(torus)));
        close(point.curvature_1_m(), curvature, 1e-7);
        close(point.torsion_1_m().unwrap(), torsion, 1e-5);
    }
    let torsion = |s: f64| spine.at(s).torsion_1_m().unwrap();
    close(
        boole(0.0, spine.length_m(), 3000, torsion),
        -15.216151112210381,
        1e-5,
    );
    check_derivatives(&spine, [0.0, 0.001, 31.0, 157.65]);
}

/// From the middle of the torus' tube.
fn outward(r: Vector3<f64>) -> Vector3<f64> {
    let ring = Vector3::new(r.x, r.y, 0.0).normalize() * 20.0;
    r - ring
}

/// A08: z = x³/100 (do Carmo, sec. 1-5): the curvature on the up side has its sign, and the lateral axis stays.
#[test]
fn exact_inflection_through_points() {
    let curve = |x: f64| Vector3::new(x, 0.0, x.powi(3) / 100.0);
    let spine = level_points(curve_points((-7.0, 7.0), 281, curve), false);
    let speed = |x: f64| (3e-2 * x * x).hypot(1.0);
    for (x, signed) in [
        (-5.0, -0.1536),
        (-1.0, -0.059919091029415531),
        (0.0, 0.0),
        (1.0, 0.059919091029415531),
        (5.0, 0.1536),
    ] {
        let point = spine.at(arc_m(-7.0, x, speed));
        close(point.tangent.d1.dot(&point.up.value), signed, 1e-7);
        close_vectors(point.left().value, Vector3::y(), 1e-12);
    }
}

fn open_length_m(range: (f64, f64), count: usize, curve: impl Fn(f64) -> Vector3<f64>) -> f64 {
    level_points(curve_points(range, count, curve), false).length_m()
}

/// A09: arc lengths of parabola, ellipse, catenary, cosine wave and cycloid (DLMF 19.30(i), 19.2(ii)).
#[test]
fn exact_arc_lengths() {
    let plane = |x: f64, z: f64| Vector3::new(x, 0.0, z);
    let parabola = open_length_m((0.0, 20.0), 101, |x| plane(x, x * x / 40.0));
    close(parabola, 22.955871493926381, 1e-8);
    let catenary = open_length_m((0.0, 20.0), 101, |x| plane(x, 15.0 * (x / 15.0).cosh()));
    close(catenary, 26.475530674255882, 1e-8);
    let wave = open_length_m((0.0, 50.0), 251, |x| plane(x, 3.0 * (TAU * x / 50.0).cos()));
    close(wave, 51.731791276358489, 1e-8);
    let ellipse = lap_points(TAU, 800, |t| {
        Vector3::new(30.0 * t.cos(), 12.0 * t.sin(), 0.0)
    });
    close(
        level_points(ellipse, true).length_m(),
        138.07867557398906,
        1e-7,
    );
}

/// Stations are arc lengths: |r′| from neighbouring stations of a fitted curve is 1 to 1e-9, and
/// derivatives are those of the values, for each of the three column sets.
#[test]
fn exact_arc_length_of_a_fit() {
    let curve = |t: f64| Vector3::new(30.0 * t, 8.0 * t.sin() * t, 5.0 * (1.3 * t).cos());
    let centre_m = curve_points((0.0, 3.0), 400, curve);
    let bank = |t: f64| 0.9 * (t - 0.5).sin();
    let bank_left_rad = (0..400).map(|i| bank(3.0 * f64::from(i) / 399.0)).collect();
    let banked = point_spine(
        Columns::Bank {
            centre_m: centre_m.clone(),
            bank_left_rad,
        },
        false,
    );
    let point = |i: usize| banked.at(banked.length_m() * i as f64 / 399.0);
    let leaning = |r: &Vector3<f64>| Vector3::new(0.1, 0.4 * (0.2 * r.x).sin(), 1.0);
    let up = centre_m.iter().map(leaning).collect();
    let upped = point_spine(Columns::Up { centre_m, up }, false);
    let rail = |side: f64| {
        (0..400)
            .map(|i| point(i).position_m + point(i).left().value * side)
            .collect()
    };
    let railed = point_spine(
        Columns::Rails {
            left_m: rail(0.5),
            right_m: rail(-0.5),
        },
        false,
    );
    for spine in [&banked, &upped, &railed] {
        check_derivatives(spine, [0.4, 22.0, 51.3, 90.0]);
        chords_are_arcs(spine);
    }
    close_vectors(railed.at(51.3).up.value, banked.at(51.3).up.value, 1e-6);
}

fn chords_are_arcs(spine: &Spine) {
    let speed = |s: f64| {
        let h = 1e-3;
        (spine.at(s + h).position_m - spine.at(s - h).position_m).norm() / (2.0 * h)
    };
    for s in [0.4, 22.0, 51.3, 90.0] {
        close(speed(s), 1.0, 1e-7);
    }
}

/// Bank given beyond ±180° or wrapped is the same bank; a lap that rolls once over closes.
#[test]
fn exact_unwrapped_bank() {
    let circle = |t: f64| Vector3::new(25.0 * t.cos(), 25.0 * t.sin(), 0.0);
    let centre_m = lap_points(TAU, 240, circle);
    let wrap = |bank: f64| bank - TAU * (bank / TAU).round();
    let bank_left_rad = (0..240).map(|i| wrap(TAU * f64::from(i) / 240.0)).collect();
    let spine = point_spine(
        Columns::Bank {
            centre_m,
            bank_left_rad,
        },
        true,
    );
    for s in [0.0, 40.0, 78.5, 120.0, 157.0] {
        let bank = spine.at(s).bank_left_rad().unwrap();
        close(wrap(bank - s / 25.0), 0.0, 1e-8);
        close(spine.at(s).rotation_rad_m().x, left(1.0 / 25.0), 1e-8);
    }
}
