//! How a change is spread over an element: the part of it reached at x = s/L.

use crate::input::Ease;
use crate::numerics::jet::Jet;

/// One formula of an ease; a ramp has three, one after the other.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Phase {
    /// 10x³ − 15x⁴ + 6x⁵ all along.
    Smooth,
    /// The rate rises.
    Rise(f64),
    /// The rate stays.
    Level(f64),
    /// The rate falls.
    Fall(f64),
}

impl Phase {
    /// The formula in force at x.
    pub(super) fn at(ease: Ease, x: f64) -> Self {
        match ease {
            Ease::Smooth => Self::Smooth,
            Ease::Ramp(f) if x < f => Self::Rise(f),
            Ease::Ramp(f) if x <= 1.0 - f => Self::Level(f),
            Ease::Ramp(f) => Self::Fall(f),
        }
    }

    /// Part of the change reached at x, with its derivatives in x.
    pub(super) fn part(self, x: f64) -> Jet {
        match self {
            Self::Smooth => Jet::new(
                x * x * x * (10.0 + x * (-15.0 + 6.0 * x)),
                30.0 * x * x * (1.0 - x) * (1.0 - x),
                60.0 * x * (1.0 - x) * (1.0 - 2.0 * x),
            ),
            Self::Rise(f) => {
                let bend = 1.0 / ((1.0 - f) * f);
                Jet::new(0.5 * bend * x * x, bend * x, bend)
            }
            Self::Level(f) => {
                let rate = 1.0 / (1.0 - f);
                Jet::new(rate * (x - 0.5 * f), rate, 0.0)
            }
            Self::Fall(f) => {
                let (bend, rest) = (1.0 / ((1.0 - f) * f), 1.0 - x);
                Jet::new(1.0 - 0.5 * bend * rest * rest, bend * rest, -bend)
            }
        }
    }
}

/// Where the formula changes within (0, 1), increasing.
pub(super) fn corners(ease: Ease) -> Vec<f64> {
    match ease {
        Ease::Ramp(f) if f < 0.5 => vec![f, 1.0 - f],
        Ease::Ramp(_) => vec![0.5],
        Ease::Smooth => Vec::new(),
    }
}
