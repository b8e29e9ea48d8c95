//! Systems of linear equations whose matrix is a band.

/// A square matrix with `half` diagonals on either side of the main one.
#[derive(Clone, Debug)]
pub struct Banded {
    size: usize,
    half: usize,
    /// Row after row, `2 half + 1` entries each, the diagonal in the middle.
    entries: Vec<f64>,
}

impl Banded {
    /// A matrix of zeros.
    pub fn zeros(size: usize, half: usize) -> Self {
        Self {
            size,
            half,
            entries: vec![0.0; size * (2 * half + 1)],
        }
    }

    /// The entry in a row and column inside the band.
    pub fn entry_mut(&mut self, row: usize, column: usize) -> &mut f64 {
        let index = self.index(row, column);
        &mut self.entries[index]
    }

    /// Factors in place into L U without pivoting, which totally positive matrices
    /// (B-spline collocation: de Boor & Pinkus 1977) and positive definite ones allow.
    pub fn factored(mut self) -> BandedFactors {
        for pivot in 0..self.size {
            let inverse = 1.0 / self.entries[self.index(pivot, pivot)];
            for row in pivot + 1..self.size.min(pivot + self.half + 1) {
                let at = self.index(row, pivot);
                let factor = self.entries[at] * inverse;
                self.entries[at] = factor;
                for column in pivot + 1..self.size.min(pivot + self.half + 1) {
                    let upper = self.entries[self.index(pivot, column)];
                    let target = self.index(row, column);
                    self.entries[target] -= factor * upper;
                }
            }
        }
        BandedFactors(self)
    }

    fn index(&self, row: usize, column: usize) -> usize {
        row * (2 * self.half + 1) + column + self.half - row
    }
}

/// A factored matrix.
#[derive(Clone, Debug)]
pub struct BandedFactors(Banded);

impl BandedFactors {
    /// Solves for `N` right-hand sides in place; row i of `values` belongs to equation i.
    pub fn solve<const N: usize>(&self, values: &mut [[f64; N]]) {
        let Banded {
            size,
            half,
            ref entries,
        } = self.0;
        for row in 0..size {
            for column in row.saturating_sub(half)..row {
                subtract(values, row, column, entries[self.0.index(row, column)]);
            }
        }
        for row in (0..size).rev() {
            for column in row + 1..size.min(row + half + 1) {
                subtract(values, row, column, entries[self.0.index(row, column)]);
            }
            let diagonal = entries[self.0.index(row, row)];
            values[row].iter_mut().for_each(|v| *v /= diagonal);
        }
    }
}

/// values[row] −= factor values[other].
fn subtract<const N: usize>(values: &mut [[f64; N]], row: usize, other: usize, factor: f64) {
    let from = values[other];
    for (value, taken) in values[row].iter_mut().zip(from) {
        *value -= factor * taken;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Against the dense solution (nalgebra's LU with pivoting) of a diagonally dominant band.
    #[test]
    fn exact_solution_of_a_band() {
        let (size, half) = (12, 3);
        let entry = |i: usize, j: usize| {
            let spread = (i as f64 * 1.3 + j as f64 * 0.7).sin();
            if i == j { 6.0 + spread } else { spread }
        };
        let mut band = Banded::zeros(size, half);
        let mut dense = nalgebra::DMatrix::zeros(size, size);
        for i in 0..size {
            for j in i.saturating_sub(half)..size.min(i + half + 1) {
                *band.entry_mut(i, j) = entry(i, j);
                dense[(i, j)] = entry(i, j);
            }
        }
        let mut values = (0..size)
            .map(|i| [i as f64, 1.0 / (1.0 + i as f64)])
            .collect::<Vec<_>>();
        let right = nalgebra::DMatrix::from_fn(size, 2, |i, j| values[i][j]);
        let expected = dense.lu().solve(&right).expect("not singular");
        band.factored().solve(&mut values);
        for i in 0..size {
            for j in 0..2 {
                assert!((values[i][j] - expected[(i, j)]).abs() < 1e-13);
            }
        }
    }
}
