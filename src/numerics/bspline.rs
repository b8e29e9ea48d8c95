//! Interpolating quintic B-splines, in the form of a polynomial on each knot interval.
//!
//! de Boor, *A Practical Guide to Splines* (2001), ch. IX–XIII: basis by recurrence,
//! not-a-knot ends (as SciPy's `make_interp_spline(k=5)` has them) or periodic.

use crate::numerics::banded::Banded;
use crate::numerics::quintic::{Grid, Quintic};

const DEGREE: usize = 5;

/// Fewest points an interpolating quintic can be laid through.
pub const FEWEST_POINTS: usize = DEGREE + 1;

/// A curve of `N` components over one parameter, C⁴.
#[derive(Clone, Debug)]
pub struct Curve<const N: usize> {
    grid: Grid,
    pieces: Quintic<N>,
}

/// Value and three derivatives of `N` components.
pub type Derivatives<const N: usize> = [[f64; N]; 4];

impl<const N: usize> Curve<N> {
    /// Through `values` at strictly increasing `parameters`, at least [`FEWEST_POINTS`], with
    /// not-a-knot ends.
    pub fn interpolating(parameters: &[f64], values: &[[f64; N]]) -> Self {
        let knots = not_a_knot(parameters);
        let n = parameters.len();
        let mut matrix = Banded::zeros(n, DEGREE);
        for (row, &x) in parameters.iter().enumerate() {
            let span = knot_span(&knots, n, x);
            for (k, basis) in basis(&knots, span, x).into_iter().enumerate() {
                let column = span - DEGREE + k;
                if basis != 0.0 {
                    *matrix.entry_mut(row, column) = basis;
                }
            }
        }
        let mut coefficients = values.to_vec();
        matrix.factored().solve(&mut coefficients);
        Self::from_coefficients(&knots, &coefficients)
    }

    /// Through `values` at strictly increasing `parameters`, at least [`FEWEST_POINTS`], and
    /// again through the first one `period` after it, with all derivatives to the fourth equal there.
    pub fn periodic(parameters: &[f64], period: f64, values: &[[f64; N]]) -> Self {
        let n = parameters.len();
        let knots = periodic_knots(parameters, period);
        let coefficients = cyclic_coefficients(&knots, parameters, values);
        let wrapped = (0..n + DEGREE)
            .map(|i| coefficients[i % n])
            .collect::<Vec<_>>();
        Self::from_coefficients(&knots, &wrapped)
    }

    /// Knots at which polynomials join, first to last.
    pub fn knots(&self) -> &[f64] {
        self.grid.nodes()
    }

    /// Value and derivatives at a parameter (continued polynomially beyond the ends).
    pub fn at(&self, x: f64) -> Derivatives<N> {
        let (interval, d) = self.grid.locate(x);
        let [value, first, second] = self.pieces.jets(interval, d);
        [value, first, second, self.pieces.third(interval, d)]
    }

    /// Taylor coefficients at each left knot, from the B-spline coefficients.
    pub(super) fn from_coefficients(knots: &[f64], coefficients: &[[f64; N]]) -> Self {
        let spans = DEGREE..coefficients.len();
        let nodes = knots[DEGREE..=coefficients.len()].to_vec();
        let mut pieces = Quintic::new();
        for span in spans {
            pieces.push_taylor(taylor(knots, coefficients, span));
        }
        Self {
            grid: Grid::new(nodes),
            pieces,
        }
    }
}

/// Ends six-fold; interior knots at the points, the three next to each end left out.
fn not_a_knot(x: &[f64]) -> Vec<f64> {
    let n = x.len();
    let ends = |v: f64| std::iter::repeat_n(v, DEGREE + 1);
    ends(x[0])
        .chain(x[3..n - 3].iter().copied())
        .chain(ends(x[n - 1]))
        .collect()
}

/// Knots at the points, carried on by whole periods at both sides.
fn periodic_knots(x: &[f64], period: f64) -> Vec<f64> {
    let n = x.len() as isize;
    let knot = |i: isize| x[i.rem_euclid(n) as usize] + i.div_euclid(n) as f64 * period;
    (-(DEGREE as isize)..=n + DEGREE as isize)
        .map(knot)
        .collect()
}

/// B-spline coefficients c₀ … c₍n−1₎ of a periodic spline.
///
/// The matrix is a band with corners. Its last rows and columns are split off; what is left is a
/// band, and a small dense system joins the two (block elimination, Golub & Van Loan sec. 3.2).
fn cyclic_coefficients<const N: usize>(
    knots: &[f64],
    parameters: &[f64],
    values: &[[f64; N]],
) -> Vec<[f64; N]> {
    /// Columns split off; the basis functions of a point reach no further than this either side.
    const BORDER: usize = 4;
    let n = parameters.len();
    let inner = n - BORDER;
    // Rows are turned by two so that the largest basis value of each lies on the diagonal.
    let row_entries = |row: usize| {
        let point = (row + n - 2) % n;
        basis(knots, point + DEGREE, parameters[point])
            .into_iter()
            .enumerate()
            .map(move |(k, b)| ((point + k) % n, b))
            .filter(|&(_, b)| b != 0.0)
    };
    let mut band = Banded::zeros(inner, DEGREE);
    let mut right = vec![[0.0; BORDER]; inner];
    let mut below = [
        vec![0.0; inner],
        vec![0.0; inner],
        vec![0.0; inner],
        vec![0.0; inner],
    ];
    let mut corner = nalgebra::SMatrix::<f64, BORDER, BORDER>::zeros();
    for row in 0..n {
        for (column, b) in row_entries(row) {
            match (row < inner, column < inner) {
                (true, true) => *band.entry_mut(row, column) = b,
                (true, false) => right[row][column - inner] = b,
                (false, true) => below[row - inner][column] = b,
                (false, false) => corner[(row - inner, column - inner)] = b,
            }
        }
    }
    let value = |row: usize| values[(row + n - 2) % n];
    let factors = band.factored();
    let mut part = (0..inner).map(value).collect::<Vec<_>>();
    factors.solve(&mut part);
    factors.solve(&mut right);
    let mut rest = nalgebra::SMatrix::<f64, BORDER, N>::from_fn(|i, j| value(inner + i)[j]);
    for i in 0..BORDER {
        for k in 0..inner {
            for j in 0..BORDER {
                corner[(i, j)] -= below[i][k] * right[k][j];
            }
            for j in 0..N {
                rest[(i, j)] -= below[i][k] * part[k][j];
            }
        }
    }
    let border = corner
        .lu()
        .solve(&rest)
        .expect("a periodic quintic through distinct points exists");
    for k in 0..inner {
        for j in 0..N {
            for i in 0..BORDER {
                part[k][j] -= right[k][i] * border[(i, j)];
            }
        }
    }
    part.extend((0..BORDER).map(|i| std::array::from_fn(|j| border[(i, j)])));
    part
}

/// Index k with knots[k] ≤ x < knots[k+1], kept inside the spline's range.
pub(super) fn knot_span(knots: &[f64], coefficients: usize, x: f64) -> usize {
    (knots.partition_point(|&k| k <= x) - 1).clamp(DEGREE, coefficients - 1)
}

/// The six basis functions that do not vanish on a span.
fn basis(knots: &[f64], span: usize, x: f64) -> [f64; DEGREE + 1] {
    basis_derivatives(knots, span, x, 0)
}

/// A derivative (`order` 0..=5) of the six basis functions that do not vanish on a span
/// (de Boor, ch. X, algorithm BSPLVB, and eq. 8 for the derivatives).
pub(super) fn basis_derivatives(
    knots: &[f64],
    span: usize,
    x: f64,
    order: usize,
) -> [f64; DEGREE + 1] {
    let mut values = [0.0; DEGREE + 1];
    values[0] = 1.0;
    for degree in 1..=DEGREE {
        let differentiate = degree > DEGREE - order;
        let mut saved = 0.0;
        for r in 0..degree {
            let (right, left) = (knots[span + r + 1], knots[span + 1 + r - degree]);
            let term = values[r] / (right - left);
            if differentiate {
                values[r] = saved - degree as f64 * term;
                saved = degree as f64 * term;
            } else {
                values[r] = saved + (right - x) * term;
                saved = (x - left) * term;
            }
        }
        values[degree] = saved;
    }
    values
}

/// Taylor coefficients at the left end of a span, from the coefficients of the derivatives
/// (de Boor, ch. X, eq. 16).
fn taylor<const N: usize>(knots: &[f64], coefficients: &[[f64; N]], span: usize) -> [[f64; N]; 6] {
    let x = knots[span];
    let mut local: [[f64; N]; DEGREE + 1] =
        std::array::from_fn(|i| coefficients[span - DEGREE + i]);
    let mut out = [[0.0; N]; 6];
    let mut factorial = 1.0;
    for order in 0..=DEGREE {
        let degree = DEGREE - order;
        let values = local_value(knots, &local[order..], span, degree, x);
        out[order] = values.map(|v| v / factorial);
        factorial *= (order + 1) as f64;
        for i in (order + 1..=DEGREE).rev() {
            let width = knots[span + i - order] - knots[span + i - DEGREE];
            let before = local[i - 1];
            for (value, before) in local[i].iter_mut().zip(before) {
                *value = degree as f64 * (*value - before) / width;
            }
        }
    }
    out
}

/// Value of a spline of `degree` on a span from its local coefficients (de Boor's algorithm).
fn local_value<const N: usize>(
    knots: &[f64],
    local: &[[f64; N]],
    span: usize,
    degree: usize,
    x: f64,
) -> [f64; N] {
    let mut d = local.to_vec();
    for r in 1..=degree {
        for i in (r..=degree).rev() {
            let (left, right) = (knots[span + i - degree], knots[span + i + 1 - r]);
            let alpha = (x - left) / (right - left);
            let before = d[i - 1];
            for (value, before) in d[i].iter_mut().zip(before) {
                *value = (1.0 - alpha) * before + alpha * *value;
            }
        }
    }
    d[degree]
}
