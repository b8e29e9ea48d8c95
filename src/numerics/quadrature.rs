//! Gauss–Legendre quadrature.

use std::sync::LazyLock;

/// Points in a rule.
const POINTS: usize = 5;

/// Abscissae and weights on [0, 1].
static RULE: LazyLock<[(f64, f64); POINTS]> = LazyLock::new(rule);

/// ∫ f over [from, to], exact for polynomials of degree 9.
pub fn integrate<T>(from: f64, to: f64, zero: T, f: impl Fn(f64) -> T) -> T
where
    T: std::ops::Add<Output = T> + std::ops::Mul<f64, Output = T>,
{
    let width = to - from;
    RULE.iter().fold(zero, |sum, &(x, weight)| {
        sum + f(from + x * width) * (weight * width)
    })
}

/// ∫ f over a short step [from, to] by three points, exact for polynomials of degree 5.
pub fn integrate_step<T>(from: f64, to: f64, zero: T, f: impl Fn(f64) -> T) -> T
where
    T: std::ops::Add<Output = T> + std::ops::Mul<f64, Output = T>,
{
    let (middle, half) = (0.5 * (from + to), 0.5 * (to - from));
    let outer = half * 0.6f64.sqrt();
    let ends = (f(middle - outer) + f(middle + outer)) * (half * 5.0 / 9.0);
    zero + ends + f(middle) * (half * 8.0 / 9.0)
}

/// Roots of the Legendre polynomial by Newton's method (Davis & Rabinowitz,
/// *Methods of Numerical Integration*, sec. 2.7), moved to [0, 1].
fn rule() -> [(f64, f64); POINTS] {
    std::array::from_fn(|i| {
        let mut x = (std::f64::consts::PI * (i as f64 + 0.75) / (POINTS as f64 + 0.5)).cos();
        for _ in 0..20 {
            let (p, slope) = legendre(x);
            x -= p / slope;
        }
        let slope = legendre(x).1;
        (0.5 * (1.0 - x), 1.0 / ((1.0 - x * x) * slope * slope))
    })
}

/// Legendre polynomial of degree [`POINTS`] and its derivative.
fn legendre(x: f64) -> (f64, f64) {
    let (mut before, mut p) = (1.0, x);
    for n in 1..POINTS {
        let n = n as f64;
        (before, p) = (p, ((2.0 * n + 1.0) * x * p - n * before) / (n + 1.0));
    }
    (p, POINTS as f64 * (x * p - before) / (x * x - 1.0))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// ∫₀² x⁹ dx = 102.4; a rule of five points is exact to degree 9 (Abramowitz & Stegun 25.4.30).
    #[test]
    fn exact_for_degree_nine() {
        let integral = integrate(0.0, 2.0, 0.0, |x| x.powi(9));
        assert!((integral - 102.4).abs() < 1e-12, "{integral}");
    }

    /// ∫₀² x⁵ dx = 32/3; a rule of three points is exact to degree 5 (Abramowitz & Stegun 25.4.30).
    #[test]
    fn exact_for_degree_five_by_three_points() {
        let integral = integrate_step(0.0, 2.0, 0.0, |x| x.powi(5));
        assert!((integral - 32.0 / 3.0).abs() < 1e-12, "{integral}");
    }
}
