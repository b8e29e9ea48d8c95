//! A load counted the way a rule counts it, so that larger is always worse.

use crate::input::{Demand, Sign};

/// offset + factor × load, at the record's samples and straight between them.
#[derive(Clone, Copy, Debug)]
pub(super) struct Signal<'a> {
    load_g: &'a [f64],
    offset: f64,
    factor: f64,
}

impl<'a> Signal<'a> {
    /// Positive: load. Negative: −load. Floor: 1 − load.
    pub(super) fn new(load_g: &'a [f64], demand: Demand) -> Self {
        let (offset, factor) = match demand {
            Demand::Limit(Sign::Positive) => (0.0, 1.0),
            Demand::Limit(Sign::Negative) => (0.0, -1.0),
            Demand::Floor => (1.0, -1.0),
        };
        Self {
            load_g,
            offset,
            factor,
        }
    }

    /// Number of samples.
    pub(super) fn len(&self) -> usize {
        self.load_g.len()
    }

    /// Value at a sample.
    #[inline]
    pub(super) fn at(&self, sample: usize) -> f64 {
        self.offset + self.factor * self.load_g[sample]
    }

    /// A value turned back into a load as felt.
    pub(super) fn as_felt(&self, value: f64) -> f64 {
        (value - self.offset) * self.factor
    }

    /// The first sample with the largest value among `first..=last`.
    pub(super) fn peak(&self, first: usize, last: usize) -> usize {
        let mut peak = first;
        for sample in first + 1..=last {
            if self.at(sample) > self.at(peak) {
                peak = sample;
            }
        }
        peak
    }

    /// The smallest value among `first..=last`.
    pub(super) fn least(&self, first: usize, last: usize) -> f64 {
        (first..=last)
            .map(|sample| self.at(sample))
            .fold(f64::INFINITY, f64::min)
    }
}
