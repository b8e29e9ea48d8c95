//! A bracketed root of one unknown.

/// The point in [`a`, `b`] where `f` changes sign, to `tolerance` in x.
///
/// Bisection with secant steps in between (the safeguarded rule of Dekker, 1969); `f(a)` and
/// `f(b)` are of opposite sign or 0. Returns the end of the final bracket on the side of `b`.
pub fn bracketed(mut a: f64, mut b: f64, tolerance: f64, f: impl Fn(f64) -> f64) -> f64 {
    let (mut f_a, mut f_b) = (f(a), f(b));
    let mut bisect = false;
    while (b - a).abs() > tolerance {
        let middle = 0.5 * (a + b);
        if middle == a || middle == b {
            break;
        }
        let secant = b - f_b * (b - a) / (f_b - f_a);
        let inside = (secant - a) * (secant - b) < 0.0;
        let x = if bisect || !inside { middle } else { secant };
        bisect = !bisect;
        let f_x = f(x);
        if (f_x > 0.0) == (f_b > 0.0) && f_b != 0.0 {
            (b, f_b) = (x, f_x);
        } else {
            (a, f_a) = (x, f_x);
        }
    }
    b
}

#[cfg(test)]
mod tests {
    use super::*;

    /// cos x = x at 0.739085133215160641655312087674 (the Dottie number, OEIS A003957).
    #[test]
    fn published_fixed_point_of_cosine() {
        let x = bracketed(0.0, 1.0, 1e-15, |x| x.cos() - x);
        assert!((x - 0.739_085_133_215_160_6).abs() < 1e-14, "{x}");
    }
}
