//! How a curve was laid through points, and which points lie far from it.

use crate::input::PointTable;

/// Beyond this many of its own standard deviations a point's residual is a blunder: of twenty
/// thousand points with Gaussian errors in two directions, exp(−18) each, none lies so far.
const BLUNDER: f64 = 6.0;

/// How a curve was laid through points.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FitMethod {
    /// Through every point.
    Exact,
    /// Smoothed to a stated error.
    Within,
    /// Smoothed to the rounding of the decimal grid on which the coordinates sit.
    Grid,
    /// Smoothed by generalized cross-validation.
    CrossValidated,
}

/// The account of a fit.
#[derive(Clone, Debug, PartialEq)]
pub struct FitReport {
    /// Of the centre line.
    pub method: FitMethod,
    /// Standard deviation of a point of the centre line, per coordinate, stated or found, m; none
    /// where nothing is known of it.
    pub error_m: Option<f64>,
    /// Likewise of the roll, rad.
    pub roll_error_rad: Option<f64>,
    /// Root mean square of the residuals across the track, m.
    pub residual_rms_m: f64,
    /// The points farthest from the curve for their error, farthest first, at most ten.
    pub worst: Vec<Outlier>,
    /// All points too far off to be errors of the kind stated or found, in order.
    pub blunders: Vec<Outlier>,
}

/// A point that lies off the curve.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Outlier {
    /// From 0.
    pub point: usize,
    /// Row of the table, from 1.
    pub row: usize,
    /// Distance across the track, m.
    pub residual_m: f64,
    /// The same over its own standard deviation.
    pub studentised: f64,
}

/// Residuals of the centre line.
pub(super) struct Residuals<'a> {
    pub(super) method: FitMethod,
    pub(super) error_m: Option<f64>,
    pub(super) residuals_m: &'a [f64],
    pub(super) studentised: &'a [f64],
}

impl FitReport {
    pub(super) fn new(
        table: &PointTable,
        found: &Residuals<'_>,
        roll_error_rad: Option<f64>,
    ) -> Self {
        let outlier = |point: usize| Outlier {
            point,
            row: table.row_number(point),
            residual_m: found.residuals_m[point],
            studentised: found.studentised[point],
        };
        let mut worst = (0..table.len()).map(outlier).collect::<Vec<_>>();
        let blunders = worst
            .iter()
            .filter(|o| o.studentised > BLUNDER)
            .copied()
            .collect();
        worst.sort_by(|a, b| {
            b.studentised
                .total_cmp(&a.studentised)
                .then(a.point.cmp(&b.point))
        });
        worst.truncate(10);
        let squares = found.residuals_m.iter().map(|r| r * r).sum::<f64>();
        Self {
            method: found.method,
            error_m: found.error_m,
            roll_error_rad,
            residual_rms_m: (squares / table.len() as f64).sqrt(),
            worst,
            blunders,
        }
    }
}
