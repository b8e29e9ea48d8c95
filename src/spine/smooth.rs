//! The smoothest curve that honours the error of its points, with what that error leaves open.
//!
//! λ is chosen so that the residuals match a stated error: Σ wᵢ|eᵢ|² = σ² (n − tr H) for each
//! coordinate, or by generalized cross-validation (Craven & Wahba 1979), which finds the error too.
//! Cumulative chords absorb the error along the track, so that only residuals across it count.

use nalgebra::SVector;

use crate::numerics::bspline::Curve;
use crate::numerics::root::bracketed;
use crate::numerics::smoothing::{Posterior, Smoothed, Smoother};

/// Data to be smoothed.
pub(super) struct Data<'a, const N: usize> {
    /// Parameters of the points, increasing.
    pub(super) parameters: &'a [f64],
    /// For a closed curve the parameter at which the first point comes again.
    pub(super) period: Option<f64>,
    /// By point.
    pub(super) values: &'a [[f64; N]],
    /// Mean error over each point's error, squared.
    pub(super) weights: &'a [f64],
    /// Whether residuals along the curve are left out.
    pub(super) across: bool,
}

/// A smoothed curve.
#[derive(Clone, Debug)]
pub(super) struct Smooth<const N: usize> {
    pub(super) curve: Curve<N>,
    pub(super) spread: Spread,
    /// Standard deviation of a point of weight 1, per coordinate, stated or found.
    pub(super) error: f64,
    /// Residual of each point (across the curve where asked), less the curve's bias near its ends, over
    /// its own standard deviation.
    pub(super) studentised: Vec<f64>,
    /// Length of each residual.
    pub(super) residuals: Vec<f64>,
}

/// What the points' error leaves open.
#[derive(Clone, Debug)]
pub(super) struct Spread {
    posterior: Posterior,
    variance: f64,
    ends: Option<Ends>,
}

/// What a smoothing spline does to a third derivative at the ends of open data, where its own is 0.
#[derive(Clone, Debug)]
struct Ends {
    /// The smoothed (x − middle)³/6.
    cubic: Curve<1>,
    middle: f64,
    /// Root mean square of the third derivative near the first and the last point.
    third: [f64; 2],
}

/// Logarithms of λ over the balanced one between which it is looked for.
const LOWEST: f64 = -25.0;
const HIGHEST: f64 = 28.0;

/// λ is found to this part: curves depend on its sixth root.
const LAMBDA_TOLERANCE: f64 = 1e-2;

/// Cross-validation looks no further where less than this part of the data is left as residual:
/// beyond, the score of correlated errors falls without end.
const LEAST_RESIDUAL_PART: f64 = 0.1;

/// Points repeated on either side of closed data.
const LEAST_REPEATED: usize = 200;

/// Part of the posterior variance of a derivative that is taken. In the interior 1/6 of that of a
/// second derivative is the points' noise (∫ω⁴/(1+ω⁶)² over ∫ω⁴/(1+ω⁶)); the rest is the
/// roughness of the prior, far above that of a track. Measured: see `tests/physics/noise.rs`.
const PRIOR_KEPT: f64 = 0.6;

/// Least part of a point's variance that its residual is held against. Where points lie far apart the
/// curve is drawn close to each, and its bias at sharp bends is far above the little noise that is left
/// in a residual there. More would hide slips: a curve follows a gross one to a tenth of its size.
const LEAST_LEFT: f64 = 0.25;

/// Why nothing could be fitted.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct IllConditioned;

impl<const N: usize> Data<'_, N> {
    /// The smoothest curve whose residuals match `error`, the standard deviation per coordinate of
    /// a point of weight 1.
    ///
    /// Residuals match anywhere on a plateau, and nowhere where chance made them a little larger
    /// than stated; so the curve is never rougher than the one of least expected error for that
    /// `error` (the unbiased risk of Craven & Wahba 1979, Mallows' C_L).
    pub(super) fn within(&self, error: f64) -> Result<Smooth<N>, IllConditioned> {
        let trials = Trials::new(self);
        let ln = trials.matching(error)?;
        trials.smooth(ln, Some(error))
    }

    /// The curve of the least generalized cross-validation score, with a known error of its points.
    pub(super) fn cross_validated_for(&self, error: f64) -> Result<Smooth<N>, IllConditioned> {
        let trials = Trials::new(self);
        let ln = trials.cross_validated()?;
        trials.smooth(ln, Some(error))
    }

    /// The curve of the least generalized cross-validation score, which finds the error itself.
    pub(super) fn cross_validated(&self) -> Result<Smooth<N>, IllConditioned> {
        let trials = Trials::new(self);
        let ln = trials.cross_validated()?;
        trials.smooth(ln, None)
    }
}

/// ln λ of the least score: a search in equal steps from the smoothest curve on until there is no
/// score any more, then thirds.
fn least(score: impl Fn(f64) -> Option<f64>) -> Result<f64, IllConditioned> {
    const STEP: f64 = 2.0;
    let steps = ((HIGHEST - LOWEST) / STEP) as usize;
    let tried = (0..=steps)
        .map(|i| HIGHEST - i as f64 * STEP)
        .map(|ln| (ln, score(ln)));
    let tried = tried.skip_while(|(_, s)| s.is_none());
    let tried = tried.map_while(|(ln, s)| s.map(|s| (ln, s)));
    let best = tried
        .min_by(|a, b| a.1.total_cmp(&b.1))
        .ok_or(IllConditioned)?
        .0;
    let (mut low, mut high) = (best - STEP, best + STEP);
    while high - low > LAMBDA_TOLERANCE {
        let (a, b) = (low + (high - low) / 3.0, high - (high - low) / 3.0);
        let value = |ln: f64| score(ln).unwrap_or(f64::INFINITY);
        if value(a) < value(b) {
            high = b
        } else {
            low = a
        }
    }
    Ok(low)
}

/// One set of equations, tried with several λ.
struct Trials<'a, const N: usize> {
    data: &'a Data<'a, N>,
    smoother: Smoother,
    values: Vec<[f64; N]>,
    parameters: Vec<f64>,
    /// Points repeated before the first.
    repeated: usize,
    balanced: f64,
}

/// What one λ makes of the data.
struct Trial<const N: usize> {
    smoothed: Smoothed<N>,
    /// Weighted squares of residuals of a mean coordinate.
    squares: f64,
    /// n − tr H.
    freedom: f64,
    count: usize,
}

impl<'a, const N: usize> Trials<'a, N> {
    fn new(data: &'a Data<'a, N>) -> Self {
        let n = data.parameters.len();
        let repeated = if data.period.is_some() {
            LEAST_REPEATED.max(n / 4)
        } else {
            0
        };
        let index = |i: usize| (i + n * (repeated / n + 1) - repeated) % n;
        let all = 0..n + 2 * repeated;
        let turn = |i: usize| {
            ((i + n * (repeated / n + 1) - repeated) / n) as f64 - (repeated / n + 1) as f64
        };
        let parameters = all
            .clone()
            .map(|i| data.parameters[index(i)] + turn(i) * data.period.unwrap_or(0.0))
            .collect::<Vec<_>>();
        let weights = all
            .clone()
            .map(|i| data.weights[index(i)])
            .collect::<Vec<_>>();
        let values = all.map(|i| data.values[index(i)]).collect();
        let smoother = Smoother::new(&parameters, &weights);
        let balanced = smoother.balanced();
        Self {
            data,
            smoother,
            values,
            parameters,
            repeated,
            balanced,
        }
    }

    /// ln λ at which the residuals match an error, or of the least risk where they do so nowhere beyond.
    fn matching(&self, error: f64) -> Result<f64, IllConditioned> {
        let least_risk = self.least_risk(error)?;
        let excess = |ln: f64| match self.at(ln) {
            Some(trial) => trial.squares - error * error * trial.freedom,
            // Equations too stiff to solve stand for a curve too smooth.
            None => f64::MAX,
        };
        if excess(least_risk) >= 0.0 {
            Ok(least_risk)
        } else if excess(HIGHEST) <= 0.0 {
            Ok(HIGHEST)
        } else {
            Ok(bracketed(least_risk, HIGHEST, LAMBDA_TOLERANCE, excess))
        }
    }

    fn least_risk(&self, error: f64) -> Result<f64, IllConditioned> {
        least(|ln| self.at(ln).map(|trial| trial.risk(error)))
    }

    fn cross_validated(&self) -> Result<f64, IllConditioned> {
        least(|ln| self.at(ln).and_then(|trial| trial.score()))
    }

    fn at(&self, ln: f64) -> Option<Trial<N>> {
        let smoothed = self
            .smoother
            .smoothed(self.balanced * ln.exp(), &self.values)?;
        let n = self.data.values.len();
        let residuals =
            (0..n).map(|i| self.residual(&smoothed, i).norm_squared() * self.data.weights[i]);
        let coordinates = if self.data.across { N - 1 } else { N };
        let squares = residuals.sum::<f64>() / coordinates as f64;
        let leverages = &smoothed.leverages[self.repeated..self.repeated + n];
        let freedom = n as f64 - leverages.iter().sum::<f64>();
        Some(Trial {
            smoothed,
            squares,
            freedom,
            count: n,
        })
    }

    fn residual(&self, smoothed: &Smoothed<N>, point: usize) -> SVector<f64, N> {
        let at = point + self.repeated;
        let residual = SVector::from(self.data.values[point]) - SVector::from(smoothed.fitted[at]);
        if !self.data.across {
            return residual;
        }
        let tangent = SVector::from(smoothed.slopes[at]).normalize();
        residual - tangent * tangent.dot(&residual)
    }

    /// The curve for one λ, with the error stated or found from its residuals.
    fn smooth(&self, ln: f64, stated: Option<f64>) -> Result<Smooth<N>, IllConditioned> {
        let trial = self.at(ln).ok_or(IllConditioned)?;
        let n = self.data.values.len();
        let error = stated.unwrap_or((trial.squares / trial.freedom).sqrt());
        let residuals = (0..n)
            .map(|i| self.residual(&trial.smoothed, i).norm())
            .collect::<Vec<_>>();
        let curve = match self.data.period {
            None => trial.smoothed.curve(),
            Some(_) => trial.smoothed.lap(self.repeated, n),
        };
        let ends = match self.data.period {
            None => Some(self.ends(self.balanced * ln.exp(), &curve)?),
            Some(_) => None,
        };
        let spread = Spread {
            posterior: trial.smoothed.posterior.clone(),
            variance: error * error,
            ends,
        };
        // Near the ends the curve is off by its bias, which is no fault of the points.
        let own = |i: usize| {
            let left = (1.0 - trial.smoothed.leverages[i + self.repeated]).max(LEAST_LEFT);
            error * (left / self.data.weights[i]).sqrt()
        };
        let beyond_bias = |(i, r): (usize, &f64)| {
            let bias = spread.bias(self.data.parameters[i], 0);
            (r - bias).max(0.0) / own(i)
        };
        let studentised = residuals.iter().enumerate().map(beyond_bias).collect();
        Ok(Smooth {
            curve,
            spread,
            error,
            studentised,
            residuals,
        })
    }

    fn ends(&self, lambda: f64, curve: &Curve<N>) -> Result<Ends, IllConditioned> {
        let (first, last) = (
            self.parameters[0],
            self.parameters[self.parameters.len() - 1],
        );
        let middle = 0.5 * (first + last);
        let cubic = self
            .parameters
            .iter()
            .map(|x| [(x - middle).powi(3) / 6.0])
            .collect::<Vec<_>>();
        let cubic = self
            .smoother
            .smoothed(lambda, &cubic)
            .ok_or(IllConditioned)?
            .curve();
        let spacing = (last - first) / (self.parameters.len() - 1) as f64;
        let kernel = (lambda * spacing).powf(1.0 / 6.0);
        // Beyond the reach of the ends, over a few widths of the kernel.
        let size = |from: f64, side: f64| {
            const STEPS: i32 = 20;
            let inside = (0..=STEPS).map(|i| from + side * kernel * (2.0 + 0.25 * f64::from(i)));
            let third = |x: f64| SVector::from(curve.at(x.clamp(first, last))[3]).norm_squared();
            (inside.map(third).sum::<f64>() / f64::from(STEPS + 1)).sqrt()
        };
        let third = [size(first, 1.0), size(last, -1.0)];
        Ok(Ends {
            cubic,
            middle,
            third,
        })
    }
}

impl<const N: usize> Trial<N> {
    /// Unbiased estimate of the squared error at the points for a known error, up to a constant.
    fn risk(&self, error: f64) -> f64 {
        self.squares - 2.0 * error * error * self.freedom
    }

    /// Generalized cross-validation score; none where too little residual is left to judge by.
    fn score(&self) -> Option<f64> {
        let part = self.freedom / self.count as f64;
        (part > LEAST_RESIDUAL_PART).then(|| self.squares / (part * part))
    }
}

impl Spread {
    /// Standard deviation of derivative `order` of one coordinate at a parameter.
    pub(super) fn deviation(&self, x: f64, order: usize) -> f64 {
        let kept = if order == 0 { 1.0 } else { PRIOR_KEPT };
        (kept * self.variance * self.posterior.variance(x, order)).sqrt()
    }

    /// Largest bias of derivative `order` (0..=3) near the ends, over all coordinates.
    pub(super) fn bias(&self, x: f64, order: usize) -> f64 {
        let Some(ends) = &self.ends else { return 0.0 };
        let d = x - ends.middle;
        let exact = [d * d * d / 6.0, d * d / 2.0, d, 1.0][order];
        let error = (ends.cubic.at(x)[order][0] - exact).abs();
        error * ends.third[usize::from(d > 0.0)]
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests;
