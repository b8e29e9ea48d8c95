//! Functions that are a polynomial of degree 5 on each interval of a grid.

/// The nodes between which polynomials run, with a fast way from x to its interval.
#[derive(Clone, Debug)]
pub struct Grid {
    nodes: Vec<f64>,
    /// Interval of the left edge of each bucket of equal width.
    buckets: Vec<u32>,
    per_unit: f64,
}

impl Grid {
    /// A grid over strictly increasing nodes, at least two.
    pub fn new(nodes: Vec<f64>) -> Self {
        let (first, last) = (nodes[0], nodes[nodes.len() - 1]);
        let count = 2 * nodes.len();
        let per_unit = count as f64 / (last - first);
        let mut interval = 0;
        let buckets = (0..count)
            .map(|bucket| {
                let edge = first + bucket as f64 / per_unit;
                while interval + 2 < nodes.len() && nodes[interval + 1] <= edge {
                    interval += 1;
                }
                interval as u32
            })
            .collect();
        Self {
            nodes,
            buckets,
            per_unit,
        }
    }

    /// The nodes.
    pub fn nodes(&self) -> &[f64] {
        &self.nodes
    }

    /// The interval that holds x (the first or last one beyond the ends) and x minus its left node.
    pub fn locate(&self, x: f64) -> (usize, f64) {
        let last = self.nodes.len() - 2;
        let bucket =
            ((x - self.nodes[0]) * self.per_unit).clamp(0.0, self.buckets.len() as f64 - 1.0);
        let mut interval = self.buckets[bucket as usize] as usize;
        while interval < last && self.nodes[interval + 1] <= x {
            interval += 1;
        }
        while interval > 0 && self.nodes[interval] > x {
            interval -= 1;
        }
        (interval, x - self.nodes[interval])
    }
}

/// `N` functions on the same intervals: Taylor coefficients at each left node.
#[derive(Clone, Debug, Default)]
pub struct Quintic<const N: usize> {
    coefficients: Vec<[[f64; N]; 6]>,
}

/// A value with its first and second derivative, for `N` functions.
pub type Jets<const N: usize> = [[f64; N]; 3];

impl<const N: usize> Quintic<N> {
    /// No interval yet.
    pub fn new() -> Self {
        Self {
            coefficients: Vec::new(),
        }
    }

    /// Whether there is no interval yet.
    pub fn is_empty(&self) -> bool {
        self.coefficients.is_empty()
    }

    /// Adds the next interval by its Taylor coefficients at the left node.
    pub fn push_taylor(&mut self, coefficients: [[f64; N]; 6]) {
        self.coefficients.push(coefficients);
    }

    /// Adds the next interval, of width `h`, from values and derivatives at its ends.
    ///
    /// Two-point Hermite interpolation (Davis, *Interpolation and Approximation*, sec. 2.5);
    /// error h⁶ f⁽⁶⁾/46080 in the value, O(h⁴) in the second derivative.
    pub fn push_hermite(&mut self, h: f64, left: &Jets<N>, right: &Jets<N>) {
        let mut c = [[0.0; N]; 6];
        for i in 0..N {
            let (f, d, a) = (left[0][i], left[1][i], 0.5 * left[2][i]);
            // What the right end has beyond the Taylor polynomial of the left end, over powers of h.
            let value = (right[0][i] - f - h * (d + h * a)) / (h * h * h);
            let slope = (right[1][i] - d - 2.0 * h * a) / (h * h);
            let bend = (right[2][i] - 2.0 * a) / h;
            c[0][i] = f;
            c[1][i] = d;
            c[2][i] = a;
            c[3][i] = 10.0 * value - 4.0 * slope + 0.5 * bend;
            c[4][i] = (-15.0 * value + 7.0 * slope - bend) / h;
            c[5][i] = (6.0 * value - 3.0 * slope + 0.5 * bend) / (h * h);
        }
        self.coefficients.push(c);
    }

    /// Values and two derivatives at `d` beyond the left node of an interval.
    ///
    /// Horner's scheme for a polynomial and its derivatives, all `N` functions side by side.
    pub fn jets(&self, interval: usize, d: f64) -> Jets<N> {
        let c = &self.coefficients[interval];
        let (mut value, mut first, mut half_second) = (c[5], [0.0; N], [0.0; N]);
        for row in c[..5].iter().rev() {
            for i in 0..N {
                half_second[i] = half_second[i] * d + first[i];
                first[i] = first[i] * d + value[i];
                value[i] = value[i] * d + row[i];
            }
        }
        [value, first, half_second.map(|h| 2.0 * h)]
    }

    /// Third derivatives at `d` beyond the left node of an interval.
    pub fn third(&self, interval: usize, d: f64) -> [f64; N] {
        let c = &self.coefficients[interval];
        std::array::from_fn(|i| 6.0 * c[3][i] + d * (24.0 * c[4][i] + d * 60.0 * c[5][i]))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// f and its first three derivatives for f = x⁵ − 2x³ + x − 1.
    fn polynomial(x: f64) -> [f64; 4] {
        [
            x.powi(5) - 2.0 * x.powi(3) + x - 1.0,
            5.0 * x.powi(4) - 6.0 * x * x + 1.0,
            20.0 * x.powi(3) - 12.0 * x,
            60.0 * x * x - 12.0,
        ]
    }

    /// Two-point Hermite interpolation repeats polynomials of degree 5 (Davis, sec. 2.5).
    #[test]
    fn exact_polynomial_of_degree_five() {
        let jets = |x: f64| {
            let [f, d, a, _] = polynomial(x);
            [[f], [d], [a]]
        };
        let mut quintic = Quintic::new();
        quintic.push_hermite(0.7, &jets(0.4), &jets(1.1));
        for d in [0.0, 0.2, 0.35, 0.7] {
            let (found, exact) = (quintic.jets(0, d), polynomial(0.4 + d));
            for k in 0..3 {
                assert!((found[k][0] - exact[k]).abs() < 1e-12);
            }
            assert!((quintic.third(0, d)[0] - exact[3]).abs() < 1e-11);
        }
    }

    /// The bucketed search finds what a plain one finds, nodes and places beyond the ends included.
    #[test]
    fn exact_location_on_uneven_nodes() {
        let nodes = vec![-3.0, -2.999, -1.0, 0.0, 1e-3, 2e-3, 5.0, 5.5, 40.0];
        let grid = Grid::new(nodes.clone());
        let mut places = nodes.clone();
        places.extend((0..500).map(|i| -5.0 + 0.1 * f64::from(i)));
        for x in places {
            let last = nodes.len() - 2;
            let plain = nodes.iter().rposition(|&n| n <= x).unwrap_or(0).min(last);
            let (interval, offset) = grid.locate(x);
            assert_eq!(interval, plain, "at {x}");
            assert_eq!(offset, x - nodes[plain]);
        }
    }
}
