//! A load counted the way a rule counts it, so that larger is always worse; cut out of the record where the rule holds.

use super::scope::{Stretch, value_at};
use crate::input::{Demand, Sign};
use std::borrow::Cow;

/// offset + factor × load, at the nodes of a stretch and straight between them.
///
/// Nodes are the samples inside the stretch, and its ends where those lie between samples.
#[derive(Clone, Debug)]
pub(super) struct Signal<'a> {
    load_g: Cow<'a, [f64]>,
    stretch: Stretch,
    offset: f64,
    factor: f64,
}

impl<'a> Signal<'a> {
    /// Positive: load. Negative: −load. Floor: 1 − load.
    ///
    /// The stretch lies within the record, which holds at least one sample.
    pub(super) fn new(load_g: &'a [f64], demand: Demand, stretch: Stretch) -> Self {
        let (offset, factor) = match demand {
            Demand::Limit(Sign::Positive) => (0.0, 1.0),
            Demand::Limit(Sign::Negative) => (0.0, -1.0),
            Demand::Floor => (1.0, -1.0),
        };
        Self {
            load_g: cut(load_g, stretch),
            stretch,
            offset,
            factor,
        }
    }

    /// Number of nodes.
    pub(super) fn len(&self) -> usize {
        self.load_g.len()
    }

    /// Value at a node.
    #[inline]
    pub(super) fn at(&self, node: usize) -> f64 {
        self.offset + self.factor * self.load_g[node]
    }

    /// Where a node lies in the record, in samples.
    pub(super) fn position(&self, node: usize) -> f64 {
        if node == 0 {
            self.stretch.from
        } else if node + 1 == self.len() {
            self.stretch.to
        } else {
            self.stretch.from.floor() + node as f64
        }
    }

    /// A value turned back into a load as felt.
    pub(super) fn as_felt(&self, value: f64) -> f64 {
        (value - self.offset) * self.factor
    }

    /// The first node with the largest value among `first..=last`.
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

/// The loads at the nodes of a stretch; the record itself where that is all of it.
fn cut(load_g: &[f64], stretch: Stretch) -> Cow<'_, [f64]> {
    let first = stretch.from.ceil() as usize;
    let last = stretch.to.floor() as usize;
    if stretch.from == first as f64 && stretch.to == last as f64 {
        return Cow::Borrowed(&load_g[first..=last]);
    }
    let inner = stretch.from.floor() as usize + 1..stretch.to.ceil() as usize;
    let inner = inner.map(|sample| load_g[sample]);
    let nodes = std::iter::once(value_at(load_g, stretch.from)).chain(inner);
    let last = (stretch.to > stretch.from).then(|| value_at(load_g, stretch.to));
    Cow::Owned(nodes.chain(last).collect())
}
