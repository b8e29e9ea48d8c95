//! Symmetric positive definite band matrices: factors, solutions, and the band of the inverse.

/// Diagonals beside the main one: the overlap of quintic B-splines.
pub const HALF: usize = 5;

/// A symmetric matrix by its main diagonal and [`HALF`] diagonals above it: entry (i, i + k) at `[i][k]`.
#[derive(Clone, Debug, PartialEq)]
pub struct SymmetricBand(pub Vec<[f64; HALF + 1]>);

/// L D Lᵀ with a unit lower band L: entry (i + k, i) of L at `[i][k − 1]`.
#[derive(Clone, Debug)]
pub struct Ldl {
    diagonal: Vec<f64>,
    lower: Vec<[f64; HALF]>,
}

impl SymmetricBand {
    /// A matrix of zeros.
    pub fn zeros(size: usize) -> Self {
        Self(vec![[0.0; HALF + 1]; size])
    }

    /// This plus `factor` times another of the same size.
    pub fn plus_scaled(&self, other: &Self, factor: f64) -> Self {
        let add = |(a, b): (&[f64; HALF + 1], &[f64; HALF + 1])| {
            std::array::from_fn(|k| a[k] + factor * b[k])
        };
        Self(self.0.iter().zip(&other.0).map(add).collect())
    }

    /// Sum of the main diagonal.
    pub fn trace(&self) -> f64 {
        self.0.iter().map(|row| row[0]).sum()
    }

    /// Factors the matrix (Golub & Van Loan, *Matrix Computations*, sec. 4.3.5); none where it is
    /// not positive definite to working accuracy.
    pub fn factored(&self) -> Option<Ldl> {
        let n = self.0.len();
        let (mut diagonal, mut lower) = (vec![0.0; n], vec![[0.0; HALF]; n]);
        for i in 0..n {
            let mut row = self.0[i];
            for back in 1..=HALF.min(i) {
                let j = i - back;
                let scaled = lower[j][back - 1] * diagonal[j];
                for (value, below) in row.iter_mut().zip(&lower[j][back - 1..]) {
                    *value -= scaled * below;
                }
            }
            if row[0].is_nan() || row[0] <= 0.0 {
                return None;
            }
            diagonal[i] = row[0];
            lower[i] = std::array::from_fn(|k| row[k + 1] / row[0]);
        }
        Some(Ldl { diagonal, lower })
    }
}

impl Ldl {
    /// Solves for `N` right-hand sides in place.
    pub fn solve<const N: usize>(&self, values: &mut [[f64; N]]) {
        let n = values.len();
        for i in 0..n {
            let known = values[i];
            for k in 1..=HALF.min(n - 1 - i) {
                let factor = self.lower[i][k - 1];
                (0..N).for_each(|c| values[i + k][c] -= factor * known[c]);
            }
        }
        for i in (0..n).rev() {
            let mut value = values[i].map(|v| v / self.diagonal[i]);
            for k in 1..=HALF.min(n - 1 - i) {
                let factor = self.lower[i][k - 1];
                (0..N).for_each(|c| value[c] -= factor * values[i + k][c]);
            }
            values[i] = value;
        }
    }

    /// The band of the inverse, in time and memory linear in the size (Hutchinson & de Hoog,
    /// *Smoothing noisy data with spline functions*, Numer. Math. 47 (1985) 99–106).
    pub fn inverse_band(&self) -> SymmetricBand {
        let n = self.diagonal.len();
        let mut inverse = SymmetricBand::zeros(n);
        for i in (0..n).rev() {
            let reach = HALF.min(n - 1 - i);
            for j in (1..=reach).rev() {
                let sum = (1..=reach).map(|k| {
                    let (low, high) = (j.min(k), j.max(k));
                    self.lower[i][k - 1] * inverse.0[i + low][high - low]
                });
                inverse.0[i][j] = -sum.sum::<f64>();
            }
            let sum = (1..=reach).map(|k| self.lower[i][k - 1] * inverse.0[i][k]);
            inverse.0[i][0] = 1.0 / self.diagonal[i] - sum.sum::<f64>();
        }
        inverse
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use nalgebra::DMatrix;

    /// Diagonally dominant, so positive definite (Gershgorin); entries without a pattern.
    fn band(size: usize) -> SymmetricBand {
        let entry = |i: usize, k: usize| {
            let wave = (1.3 * i as f64 + 2.1 * k as f64).sin();
            if k == 0 { 6.0 + wave } else { 0.5 * wave }
        };
        SymmetricBand(
            (0..size)
                .map(|i| std::array::from_fn(|k| entry(i, k)))
                .collect(),
        )
    }

    fn dense(band: &SymmetricBand) -> DMatrix<f64> {
        let size = band.0.len();
        DMatrix::from_fn(size, size, |i, j| {
            let (low, high) = (i.min(j), i.max(j));
            band.0[low].get(high - low).copied().unwrap_or(0.0)
        })
    }

    /// Against nalgebra's dense LU; sizes below the band too.
    #[test]
    fn exact_solutions_and_inverses_are_those_of_dense_algebra() {
        for size in [1, 3, 5, 6, 7, 40] {
            let band = band(size);
            let inverse = dense(&band).try_inverse().unwrap();
            let factors = band.factored().unwrap();
            let found = factors.inverse_band();
            for i in 0..size {
                for k in 0..=HALF.min(size - 1 - i) {
                    approx::assert_relative_eq!(
                        found.0[i][k],
                        inverse[(i, i + k)],
                        epsilon = 1e-14
                    );
                }
            }
            let right = (0..size).map(|i| [i as f64, 1.0]).collect::<Vec<_>>();
            let mut solved = right.clone();
            factors.solve(&mut solved);
            let right = DMatrix::from_fn(size, 2, |i, j| right[i][j]);
            let expected = inverse * right;
            for (i, row) in solved.iter().enumerate() {
                for (j, &value) in row.iter().enumerate() {
                    approx::assert_relative_eq!(value, expected[(i, j)], epsilon = 1e-12);
                }
            }
        }
    }

    #[test]
    fn exact_indefinite_matrices_have_no_factors() {
        let mut indefinite = band(9);
        indefinite.0[4][0] = -1.0;
        assert!(indefinite.factored().is_none());
        indefinite.0[4][0] = f64::NAN;
        assert!(indefinite.factored().is_none());
    }
}
