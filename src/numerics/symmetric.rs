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
