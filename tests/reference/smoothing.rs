//! Smoothing splines against dense linear algebra (`smoothing/SOURCE.md`), read from its file.
#![allow(missing_docs, clippy::unwrap_used)]

use std::path::Path;

use approx::assert_relative_eq;
use crestfall::numerics::bspline::Curve;
use crestfall::numerics::smoothing::{Smoothed, Smoother};
use serde::Deserialize;

#[derive(Deserialize)]
struct Reference {
    open: Data,
    closed: Data,
}

#[derive(Deserialize)]
struct Data {
    x: Vec<f64>,
    weights: Vec<f64>,
    y: Vec<[f64; 2]>,
    /// Where curves and variances are given.
    at: Vec<f64>,
    #[serde(default)]
    period: f64,
    fits: Vec<Fit>,
}

#[derive(Deserialize)]
struct Fit {
    name: String,
    lambda: f64,
    fitted: Vec<[f64; 2]>,
    /// First component at the points, from 60 digits.
    #[serde(default)]
    kernel: Vec<f64>,
    /// By order of derivative.
    curve: Vec<Vec<[f64; 2]>>,
    leverages: Vec<f64>,
    variances: Vec<Vec<f64>>,
}

fn reference() -> Reference {
    let file =
        Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference/smoothing/reference.json");
    serde_json::from_str(&std::fs::read_to_string(file).unwrap()).unwrap()
}

/// Open data: each fit of the reference with ours.
fn each_open(check: impl Fn(&Data, &Fit, &Smoothed<2>)) {
    let data = reference().open;
    let smoother = Smoother::new(&data.x, &data.weights);
    assert_eq!(data.fits.len(), 5);
    for fit in &data.fits {
        check(&data, fit, &smoother.smoothed(fit.lambda, &data.y).unwrap());
    }
}

/// Whole laps before and after the one that counts.
const LAPS: usize = 3;

/// Closed data, repeated so that the middle lap feels no end.
fn each_closed(check: impl Fn(&Data, &Fit, &Smoothed<2>, &Curve<2>)) {
    let data = reference().closed;
    let n = data.x.len();
    let all = 0..(2 * LAPS + 1) * n;
    let turn = |i: usize| (i / n) as f64 - LAPS as f64;
    let parameters = all
        .clone()
        .map(|i| data.x[i % n] + turn(i) * data.period)
        .collect::<Vec<_>>();
    let weights = all.clone().map(|i| data.weights[i % n]).collect::<Vec<_>>();
    let values = all.map(|i| data.y[i % n]).collect::<Vec<_>>();
    let smoother = Smoother::new(&parameters, &weights);
    assert_eq!(data.fits.len(), 4);
    for fit in &data.fits {
        let smoothed = smoother.smoothed(fit.lambda, &values).unwrap();
        check(&data, fit, &smoothed, &smoothed.lap(LAPS * n, n));
    }
}

/// Largest difference of two components over all points.
fn apart<'a>(
    ours: impl IntoIterator<Item = [f64; 2]>,
    theirs: impl IntoIterator<Item = &'a [f64; 2]>,
) -> f64 {
    let pairs = ours.into_iter().zip(theirs);
    let each = pairs.map(|(a, b)| (a[0] - b[0]).abs().max((a[1] - b[1]).abs()));
    each.fold(0.0, f64::max)
}

/// The largest value, which scales the rounding errors of its kind.
fn size(values: &[[f64; 2]]) -> f64 {
    values
        .iter()
        .flatten()
        .fold(1.0, |size, v| v.abs().max(size))
}

#[test]
fn published_fitted_values_are_those_of_dense_algebra() {
    each_open(|_, fit, ours| {
        let apart = apart(ours.fitted.iter().copied(), &fit.fitted);

        assert!(apart < 1e-8, "{}: {apart:e}", fit.name);
        assert_eq!(fit.kernel.len(), ours.fitted.len());
        for (ours, kernel) in ours.fitted.iter().zip(&fit.kernel) {
            assert_relative_eq!(ours[0], kernel, epsilon = 1e-8);
        }
    });
}

#[test]
fn published_curves_are_those_of_dense_algebra() {
    each_open(|data, fit, ours| expect_curve(data, fit, &ours.curve()));
}

/// Value and three derivatives between the points too.
fn expect_curve(data: &Data, fit: &Fit, curve: &Curve<2>) {
    for order in 0..4 {
        let ours = data.at.iter().map(|&x| curve.at(x)[order]);
        let apart = apart(ours, &fit.curve[order]) / size(&fit.curve[order]);

        assert!(apart < 1e-8, "{}, order {order}: {apart:e}", fit.name);
    }
}

#[test]
fn published_leverages_and_variances_are_those_of_the_dense_inverse() {
    each_open(|data, fit, ours| {
        expect_leverages(fit, &ours.leverages);
        for (order, variances) in fit.variances.iter().enumerate() {
            for (&x, &variance) in data.at.iter().zip(variances) {
                assert_relative_eq!(
                    ours.posterior.variance(x, order),
                    variance,
                    max_relative = 1e-8
                );
            }
        }
    });
}

fn expect_leverages(fit: &Fit, ours: &[f64]) {
    assert_eq!(fit.leverages.len(), ours.len());
    for (&ours, &theirs) in ours.iter().zip(&fit.leverages) {
        assert_relative_eq!(ours, theirs, max_relative = 1e-8);
    }
}

#[test]
fn published_periodic_fits_are_those_of_the_dense_periodic_equations() {
    each_closed(|data, fit, ours, lap| {
        let n = data.x.len();
        let middle = LAPS * n..(LAPS + 1) * n;
        let apart = apart(ours.fitted[middle.clone()].iter().copied(), &fit.fitted);
        assert!(apart < 1e-8, "{}: {apart:e}", fit.name);
        expect_curve(data, fit, lap);
        expect_leverages(fit, &ours.leverages[middle]);
        for (order, variances) in fit.variances.iter().enumerate() {
            for (&x, &variance) in data.at.iter().zip(variances) {
                assert_relative_eq!(
                    ours.posterior.variance(x, order),
                    variance,
                    max_relative = 1e-8
                );
            }
        }
    });
}

/// The fourth derivative by the third, which is a parabola between knots: exact differences.
#[test]
fn exact_periodic_curves_are_smooth_to_the_fourth_derivative_over_the_seam() {
    each_closed(|data, fit, _, lap| {
        let third = |x: f64| lap.at(x)[3];
        let fourth = |from: f64, step: f64| {
            let [a, b, c] = [0.0, 1.0, 2.0].map(|i| third(from + i * step));
            [0, 1].map(|k| (-1.5 * a[k] + 2.0 * b[k] - 0.5 * c[k]) / step)
        };
        let (first, last) = (data.x[0], data.x[0] + data.period);
        let scale = (0..4)
            .map(|order| size(&fit.curve[order]))
            .collect::<Vec<_>>();
        for (order, scale) in scale.iter().enumerate() {
            let (a, b) = (lap.at(first)[order], lap.at(last)[order]);
            assert!(
                apart([a], &[b]) < 1e-8 * scale,
                "{}, order {order}",
                fit.name
            );
        }
        let (a, b) = (fourth(first, 0.05), fourth(last, -0.05));
        assert!(
            apart([a], &[b]) < 1e-8 * scale[3] / 0.05,
            "{}: {a:?}, {b:?}",
            fit.name
        );
    });
}
