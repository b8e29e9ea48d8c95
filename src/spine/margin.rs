//! How far a spine may lie from the track it stands for, given the error of its points.

use std::sync::LazyLock;

use super::smooth::Spread;
use crate::numerics::bspline::Curve;

/// Half-widths that hold the truth about nineteen times in twenty: two standard deviations, and
/// near the ends of a smoothed curve the bias there.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Margin {
    /// Of each component of t = r′.
    pub direction: f64,
    /// Of each component of r″, 1/m.
    pub bend_1_m: f64,
    /// Of the rotation about the tangent, rad.
    pub roll_rad: f64,
    /// Of its first derivative, rad/m.
    pub roll_rate_rad_m: f64,
    /// Of its second derivative, rad/m².
    pub roll_bend_rad_m2: f64,
}

impl Margin {
    /// The larger of each.
    pub fn larger(&self, other: &Self) -> Self {
        Self {
            direction: self.direction.max(other.direction),
            bend_1_m: self.bend_1_m.max(other.bend_1_m),
            roll_rad: self.roll_rad.max(other.roll_rad),
            roll_rate_rad_m: self.roll_rate_rad_m.max(other.roll_rate_rad_m),
            roll_bend_rad_m2: self.roll_bend_rad_m2.max(other.roll_bend_rad_m2),
        }
    }
}

/// Half-widths of a value and its first two derivatives over a parameter.
#[derive(Clone, Debug)]
pub(super) enum Noise {
    /// None is known.
    Unknown,
    /// Points of this standard deviation, interpolated at these parameters.
    Interpolated {
        deviation: f64,
        parameters: Vec<f64>,
    },
    /// A smoothed curve.
    Smoothed(Box<Spread>),
}

/// Standard deviations that make up a half-width.
pub(super) const DEVIATIONS: f64 = 2.0;

impl Noise {
    /// Half-width of derivative `order` (0..=2) of one coordinate.
    pub(super) fn half_width(&self, x: f64, order: usize) -> f64 {
        match self {
            Self::Unknown => 0.0,
            Self::Interpolated {
                deviation,
                parameters,
            } => {
                let at = Between::new(parameters, x);
                DEVIATIONS * deviation * at.gain(order) / at.spacing.powi(order as i32)
            }
            Self::Smoothed(spread) => {
                DEVIATIONS * spread.deviation(x, order) + spread.bias(x, order)
            }
        }
    }
}

/// The place of a parameter among the points of an interpolation.
struct Between {
    /// Points from the nearer end.
    from_end: f64,
    /// Smallest of the spacings around.
    spacing: f64,
}

impl Between {
    fn new(parameters: &[f64], x: f64) -> Self {
        let last = parameters.len() - 2;
        let left = parameters
            .partition_point(|&p| p <= x)
            .saturating_sub(1)
            .min(last);
        let width = |i: usize| parameters[i + 1] - parameters[i];
        let part = ((x - parameters[left]) / width(left)).clamp(0.0, 1.0);
        let from_end = (left as f64 + part).min((last - left + 1) as f64 - part);
        let around = left.saturating_sub(1)..=(left + 1).min(last);
        Self {
            from_end,
            spacing: around.map(width).fold(f64::INFINITY, f64::min),
        }
    }

    /// What an interpolation at spacing 1 makes of independent errors of deviation 1 here: the
    /// larger of the two nearest entries of the table.
    fn gain(&self, order: usize) -> f64 {
        let gains = &GAINS[order];
        let place = (2.0 * self.from_end).min((gains.len() - 1) as f64);
        gains[place.floor() as usize].max(gains[place.ceil() as usize])
    }
}

/// Points of the interpolation from which the gains are taken, and half-steps from an end in them.
const POINTS: usize = 41;
const HALF_STEPS: usize = POINTS;

/// Root sums of squares of the responses to a unit error at each point, by order of derivative and
/// half-steps from an end.
static GAINS: LazyLock<[[f64; HALF_STEPS]; 3]> = LazyLock::new(|| {
    let parameters = (0..POINTS).map(|i| i as f64).collect::<Vec<_>>();
    let mut squares = [[0.0; HALF_STEPS]; 3];
    for point in 0..POINTS {
        let mut values = vec![[0.0]; POINTS];
        values[point] = [1.0];
        let response = Curve::interpolating(&parameters, &values);
        for (order, row) in squares.iter_mut().enumerate() {
            for (half_step, square) in row.iter_mut().enumerate() {
                let value = response.at(0.5 * half_step as f64)[order][0];
                *square += value * value;
            }
        }
    }
    squares.map(|row| row.map(f64::sqrt))
});
