//! Quintic smoothing splines: the least Σ wᵢ |yᵢ − f(xᵢ)|² + λ ∫ |f‴|².
//!
//! Woltring, *A Fortran package for generalized, cross-validatory spline smoothing and
//! differentiation*, Adv. Eng. Software 8 (1986) 104–113; Craven & Wahba, Numer. Math. 31 (1979)
//! 377–403; the posterior after Wahba, J. R. Stat. Soc. B 45 (1983) 133–150. All work is banded.

use super::bspline::{Curve, basis_derivatives, knot_span};
use super::quadrature::integrate;
use super::symmetric::{HALF, SymmetricBand};

/// Splines over fixed points, weights and knots; only λ and the values are still open.
#[derive(Clone, Debug)]
pub struct Smoother {
    knots: Vec<f64>,
    points: Vec<Point>,
    gram: SymmetricBand,
    penalty: SymmetricBand,
}

/// A point's basis functions.
#[derive(Clone, Debug)]
struct Point {
    first: usize,
    basis: [f64; HALF + 1],
    slopes: [f64; HALF + 1],
    weight: f64,
}

/// A spline for one λ.
#[derive(Clone, Debug)]
pub struct Smoothed<const N: usize> {
    coefficients: Vec<[f64; N]>,
    /// Fitted values at the points.
    pub fitted: Vec<[f64; N]>,
    /// First derivatives at the points.
    pub slopes: Vec<[f64; N]>,
    /// Diagonal of the influence matrix H at the points.
    pub leverages: Vec<f64>,
    /// Its spread.
    pub posterior: Posterior,
}

/// (BᵀWB + λΩ)⁻¹ in its band: times the variance of a point of weight 1 it is the posterior
/// covariance of the coefficients.
#[derive(Clone, Debug)]
pub struct Posterior {
    knots: Vec<f64>,
    inverse: SymmetricBand,
}

impl Smoother {
    /// Knots at strictly increasing `parameters` (at least three); `weights` above 0.
    pub fn new(parameters: &[f64], weights: &[f64]) -> Self {
        let knots = end_knots(parameters);
        let count = parameters.len() + HALF - 1;
        let point = |(&x, &weight): (&f64, &f64)| {
            let span = knot_span(&knots, count, x);
            let of_order = |order| basis_derivatives(&knots, span, x, order);
            Point {
                first: span - HALF,
                basis: of_order(0),
                slopes: of_order(1),
                weight,
            }
        };
        let points = parameters
            .iter()
            .zip(weights)
            .map(point)
            .collect::<Vec<_>>();
        let mut gram = SymmetricBand::zeros(count);
        for point in &points {
            add_outer(&mut gram, point.first, &point.basis, point.weight);
        }
        let penalty = penalty(&knots, count);
        Self {
            knots,
            points,
            gram,
            penalty,
        }
    }

    /// λ at which data and roughness weigh the same in the mean: a scale to search around.
    pub fn balanced(&self) -> f64 {
        self.gram.trace() / self.penalty.trace()
    }

    /// The spline for one λ above 0; none where the equations are too ill-conditioned to solve.
    pub fn smoothed<const N: usize>(
        &self,
        lambda: f64,
        values: &[[f64; N]],
    ) -> Option<Smoothed<N>> {
        let factors = self.gram.plus_scaled(&self.penalty, lambda).factored()?;
        let mut coefficients = vec![[0.0; N]; self.gram.0.len()];
        for (point, value) in self.points.iter().zip(values) {
            for (k, b) in point.basis.iter().enumerate() {
                (0..N)
                    .for_each(|c| coefficients[point.first + k][c] += point.weight * b * value[c]);
            }
        }
        factors.solve(&mut coefficients);
        let sums = |basis: fn(&Point) -> &[f64; HALF + 1]| {
            self.points
                .iter()
                .map(|p| sum(&coefficients[p.first..], basis(p)))
                .collect()
        };
        let (fitted, slopes) = (sums(|p| &p.basis), sums(|p| &p.slopes));
        let inverse = factors.inverse_band();
        let leverage = |p: &Point| p.weight * quadratic(&inverse, p.first, &p.basis);
        let leverages = self.points.iter().map(leverage).collect();
        let posterior = Posterior {
            knots: self.knots.clone(),
            inverse,
        };
        Some(Smoothed {
            coefficients,
            fitted,
            slopes,
            leverages,
            posterior,
        })
    }
}

impl<const N: usize> Smoothed<N> {
    /// The fitted curve.
    pub fn curve(&self) -> Curve<N> {
        Curve::from_coefficients(&self.posterior.knots, &self.coefficients)
    }

    /// The periodic curve over the points `first..first + count`, the middle of data that repeat
    /// on both sides: its coefficients are those of that lap, wrapped.
    pub fn lap(&self, first: usize, count: usize) -> Curve<N> {
        // The basis function that peaks at point i has index i + 2.
        let at_point = |i: usize| self.coefficients[first + (i + count - 2) % count + 2];
        let coefficients = (0..count + HALF).map(at_point).collect::<Vec<_>>();
        let knots = &self.posterior.knots[first..=first + count + 2 * HALF];
        Curve::from_coefficients(knots, &coefficients)
    }
}

impl Posterior {
    /// Variance of derivative `order` (0..=4) at a parameter, for points of weight 1 and variance 1.
    pub fn variance(&self, x: f64, order: usize) -> f64 {
        let span = knot_span(&self.knots, self.inverse.0.len(), x);
        let basis = basis_derivatives(&self.knots, span, x, order);
        quadratic(&self.inverse, span - HALF, &basis).max(0.0)
    }
}

/// Σ bₖ cₖ.
fn sum<const N: usize>(coefficients: &[[f64; N]], basis: &[f64; HALF + 1]) -> [f64; N] {
    let mut sum = [0.0; N];
    for (b, coefficient) in basis.iter().zip(coefficients) {
        (0..N).for_each(|c| sum[c] += b * coefficient[c]);
    }
    sum
}

/// Knots at the points, the ends six-fold.
fn end_knots(x: &[f64]) -> Vec<f64> {
    let ends = |v: f64| std::iter::repeat_n(v, HALF);
    ends(x[0])
        .chain(x.iter().copied())
        .chain(ends(x[x.len() - 1]))
        .collect()
}

/// Ω: ∫ B‴ᵢ B‴ⱼ, exact, as the products are of degree 4.
fn penalty(knots: &[f64], count: usize) -> SymmetricBand {
    let mut penalty = SymmetricBand::zeros(count);
    for span in HALF..count {
        let (from, to) = (knots[span], knots[span + 1]);
        let products = |x: f64| Outer::of(&basis_derivatives(knots, span, x, 3));
        let sum = integrate(from, to, Outer::default(), products);
        for (i, row) in sum.0.iter().enumerate() {
            for (k, value) in row[i..].iter().enumerate() {
                penalty.0[span - HALF + i][k] += value;
            }
        }
    }
    penalty
}

/// Products of all pairs of six numbers.
#[derive(Clone, Copy, Default)]
struct Outer([[f64; HALF + 1]; HALF + 1]);

impl Outer {
    fn of(b: &[f64; HALF + 1]) -> Self {
        Self(b.map(|x| b.map(|y| x * y)))
    }
}

impl std::ops::Add for Outer {
    type Output = Self;
    fn add(mut self, other: Self) -> Self {
        let rows = self.0.iter_mut().flatten().zip(other.0.iter().flatten());
        rows.for_each(|(a, b)| *a += b);
        self
    }
}

impl std::ops::Mul<f64> for Outer {
    type Output = Self;
    fn mul(mut self, factor: f64) -> Self {
        self.0.iter_mut().flatten().for_each(|a| *a *= factor);
        self
    }
}

/// Adds weight b bᵀ to a band matrix.
fn add_outer(matrix: &mut SymmetricBand, first: usize, b: &[f64; HALF + 1], weight: f64) {
    for i in 0..=HALF {
        for k in 0..=HALF - i {
            matrix.0[first + i][k] += weight * b[i] * b[i + k];
        }
    }
}

/// bᵀ Z b over the band of a symmetric matrix.
fn quadratic(matrix: &SymmetricBand, first: usize, b: &[f64; HALF + 1]) -> f64 {
    let mut sum = 0.0;
    for i in 0..=HALF {
        for k in 0..=HALF - i {
            let twice = if k == 0 { 1.0 } else { 2.0 };
            sum += twice * b[i] * b[i + k] * matrix.0[first + i][k];
        }
    }
    sum
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    /// Points 0.3 to 0.7 apart.
    fn uneven(count: usize) -> Vec<f64> {
        let at = |i: usize| 0.5 * i as f64 + 0.1 * (1.7 * i as f64).sin();
        (0..count).map(at).collect()
    }

    /// Largest distance of fitted values from others.
    fn apart(smoothed: &Smoothed<1>, values: &[[f64; 1]]) -> f64 {
        let pairs = smoothed.fitted.iter().zip(values);
        pairs.fold(0.0, |most, (a, b)| (a[0] - b[0]).abs().max(most))
    }

    /// A parabola has no third derivative: it passes unchanged whatever λ is. With much larger λ the equations lose
    /// digits, as normal equations do.
    #[test]
    fn exact_parabolas_pass_at_any_lambda() {
        for n in [60, 2000, 20_000] {
            let parameters = uneven(n);
            let smoother = Smoother::new(&parameters, &vec![1.0; n]);
            let end = parameters[n - 1];
            let values = parameters.iter().map(|x| [(x / end).powi(2)]);
            let values = values.collect::<Vec<_>>();
            for (ln, most) in [(-20.0, 1e-13), (0.0, 1e-12), (8.0, 1e-9), (16.0, 1e-6)] {
                let lambda = smoother.balanced() * f64::exp(ln);
                let found = smoother.smoothed(lambda, &values).unwrap();
                let apart = apart(&found, &values);
                assert!(apart < most, "{n} points, ln {ln}: {apart:e}");
            }
        }
    }

    /// The limits of λ: interpolation, where every point is its own, and a parabola, which has three parameters.
    #[test]
    fn exact_freedom_at_either_end() {
        let parameters = uneven(60);
        let smoother = Smoother::new(&parameters, &[1.0; 60]);
        let values = parameters.iter().map(|x| [x.sin()]).collect::<Vec<_>>();
        let freedom = |ln: f64| {
            let found = smoother.smoothed(smoother.balanced() * ln.exp(), &values);
            found.unwrap().leverages.iter().sum::<f64>()
        };
        assert!((freedom(-20.0) - 60.0).abs() < 1e-5);
        assert!((freedom(28.0) - 3.0).abs() < 1e-2);
    }
}
