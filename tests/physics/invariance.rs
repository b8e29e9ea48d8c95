//! The program against itself: what must not change when a track is moved, turned, mirrored or
//! given in another way.

use crestfall::input::{Columns, GravityTerm, Scenario, Start, Train, Wind};
use crestfall::loads::{AxesG, car_loads};
use crestfall::spine::Spine;
use crestfall::train::Poses;
use nalgebra::{Rotation3, Vector3};

use crate::fixture::*;
use crate::hilly;

/// Rounding sends the adaptive integration along other steps, g.
const WITHIN_STEPS_G: f64 = 1e-6;

/// Loads of all seats of all cars at 100 Hz.
fn loads(spine: &Spine, train: &Train, scenario: &Scenario) -> Vec<AxesG> {
    let poses = Poses::new(spine, train).unwrap();
    let goal = until(265.0);
    let samples = run(&poses, train, scenario, &goal).samples(100.0);
    let of_car = |(car, its): (usize, &crestfall::input::Car)| {
        car_loads(&poses, car, &its.seats, &samples, G, GravityTerm::Included).seats
    };
    train.cars.iter().enumerate().flat_map(of_car).collect()
}

/// Largest difference between the loads of two runs, on axes multiplied by `signs` first.
fn apart(a: &[AxesG], b: &[AxesG], signs: [f64; 3]) -> f64 {
    assert_eq!(a.len(), b.len());
    let mut worst: f64 = 0.0;
    for (a, b) in a.iter().zip(b) {
        for axis in 0..3 {
            assert!(a[axis].len().abs_diff(b[axis].len()) <= 1);
            for (x, y) in a[axis].iter().zip(&b[axis]) {
                worst = worst.max((signs[axis] * x - y).abs());
            }
        }
    }
    worst
}

/// Moved and turned about the vertical with its wind, a track gives the same loads.
#[test]
fn exact_rigid_move_of_elements() {
    let train = hilly::hilly_train(1.0);
    let scenario = hilly::scenario_with_all();
    let here = loads(&hilly::spine(), &train, &scenario);
    let by_rad = 2.1;
    let moved = Start {
        x_m: 100.0,
        y_m: -40.0,
        z_m: 55.0,
        bearing_rad: hilly::start().bearing_rad + by_rad,
        ..hilly::start()
    };
    let turned = Scenario {
        wind: scenario.wind.map(|wind| Wind {
            from_bearing_rad: wind.from_bearing_rad + by_rad,
            ..wind
        }),
        ..scenario
    };
    let there = loads(&element_spine(moved, hilly::elements(1.0)), &train, &turned);
    let off = apart(&here, &there, [1.0; 3]);
    assert!(off < WITHIN_STEPS_G, "{off:e}");
}

/// Mirrored with its train and seats, a track gives loads that differ in the sign of y alone.
#[test]
fn exact_mirror_image() {
    let no_wind = |scenario| Scenario {
        wind: None,
        ..scenario
    };
    let scenario = no_wind(hilly::scenario_with_all());
    let image = element_spine(hilly::start(), hilly::elements(-1.0));
    let right = loads(&hilly::spine(), &hilly::hilly_train(1.0), &scenario);
    let left = loads(&image, &hilly::hilly_train(-1.0), &scenario);
    let off = apart(&right, &left, [1.0, -1.0, 1.0]);
    assert!(off < WITHIN_STEPS_G, "{off:e}");
    assert!(
        apart(&right, &left, [1.0; 3]) > 0.5,
        "the image is another track"
    );
}

/// The stations at which a spine is sampled, about `step_m` apart.
fn stations(spine: &Spine, step_m: f64) -> Vec<f64> {
    let count = (spine.length_m() / step_m).round() as usize;
    let at = |i: usize| spine.length_m() * i as f64 / count as f64;
    (0..=count).map(at).collect()
}

fn sampled<T>(
    spine: &Spine,
    step_m: f64,
    f: impl Fn(&crestfall::spine::SpinePoint) -> T,
) -> Vec<T> {
    stations(spine, step_m)
        .iter()
        .map(|&s| f(&spine.at(s)))
        .collect()
}

/// A spine again, from exact points with bank, with up vectors and as two rails.
fn three_ways(spine: &Spine, step_m: f64) -> [Spine; 3] {
    let centre = || sampled(spine, step_m, |p| p.position_m);
    let rail = |side: f64| sampled(spine, step_m, |p| p.position_m + p.left().value * side);
    [
        Columns::Bank {
            centre_m: centre(),
            bank_left_rad: sampled(spine, step_m, |p| p.bank_left_rad().unwrap()),
        },
        Columns::Up {
            centre_m: centre(),
            up: sampled(spine, step_m, |p| p.up.value * 2.5),
        },
        Columns::Rails {
            left_m: rail(0.55),
            right_m: rail(-0.55),
        },
    ]
    .map(|columns| point_spine(columns, false))
}

/// The same spine as elements and as exact points in three column sets gives the same loads, but
/// for the interpolation: r″ errs by O(h⁴) inside elements, and by O(h²) where r⁗ jumps at their
/// joints. At 0.25 m no load is off by more than 1e-3 g, at 0.5 m by more than 3e-3 g, and the three
/// differ from each other by less than a tenth of that.
#[test]
fn converges_elements_and_points() {
    let train = hilly::hilly_train(1.0);
    let scenario = hilly::scenario_with_all();
    let spine = hilly::spine();
    let exact = loads(&spine, &train, &scenario);
    let off = |step_m: f64| {
        three_ways(&spine, step_m).map(|s| apart(&exact, &loads(&s, &train, &scenario), [1.0; 3]))
    };
    let (coarse, fine) = (off(0.5), off(0.25));
    for way in 0..3 {
        assert!(
            coarse[way] < 3e-3 && fine[way] < 1e-3,
            "{coarse:?} {fine:?}"
        );
        assert!(fine[way] < 0.5 * coarse[way], "{coarse:?} {fine:?}");
        assert!((fine[way] - fine[0]).abs() < 1e-4, "{fine:?}");
    }
}

/// Points turned about the vertical and moved give the same loads.
#[test]
fn exact_rigid_move_of_points() {
    let train = hilly::hilly_train(1.0);
    let no_wind = Scenario {
        wind: None,
        ..hilly::scenario_with_all()
    };
    let spine = hilly::spine();
    let turn = Rotation3::from_axis_angle(&Vector3::z_axis(), 1.9);
    let shift = Vector3::new(-300.0, 80.0, 12.0);
    let rail = |side: f64, moved: bool| {
        sampled(&spine, 0.5, |p| {
            let r = p.position_m + p.left().value * side;
            if moved { turn * r + shift } else { r }
        })
    };
    let of = |moved: bool| {
        let columns = Columns::Rails {
            left_m: rail(0.5, moved),
            right_m: rail(-0.5, moved),
        };
        loads(&point_spine(columns, false), &train, &no_wind)
    };
    let off = apart(&of(false), &of(true), [1.0; 3]);
    assert!(off < WITHIN_STEPS_G, "{off:e}");
}

/// One element in two halves of the same shape: a straight cut changes nothing.
#[test]
fn exact_cut_of_a_straight() {
    let whole = straight(80.0, -10.0 * DEG);
    let start = Start {
        grade_rad: -10.0 * DEG,
        ..Start::default()
    };
    let cut = element_spine(start, vec![element(33.3), element(46.7)]);
    for s in [0.0, 20.0, 33.3, 50.0, 80.0] {
        close_vectors(whole.at(s).position_m, cut.at(s).position_m, 1e-12);
    }
}
