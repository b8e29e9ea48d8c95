//! The maximal windows of a piecewise-linear signal: for each node's level, how long the signal stays at or above it.
//!
//! One pass with a stack of rising levels (the nearest-smaller-value method); windows come innermost first and,
//! where they do not hold one another, in order of time. Positions count samples of the record from 0 and may lie
//! between them.

use super::signal::Signal;

/// A stretch in which the signal stays at or above a level that one of its samples has.
#[derive(Clone, Copy, Debug)]
pub(super) struct Window {
    /// The level.
    pub(super) level: f64,
    /// First and last node inside.
    pub(super) nodes: (usize, usize),
    /// Begin and end, interpolated.
    pub(super) ends: (f64, f64),
    /// How far begin and end move outwards for each unit the level falls; 0 at an end of the record.
    pub(super) growth: (f64, f64),
    /// The next lower level of a neighbouring sample: growth is linear down to it; −∞ where the record ends on both sides.
    pub(super) lower: f64,
}

impl Window {
    /// Length in samples.
    pub(super) fn length(&self) -> f64 {
        self.ends.1 - self.ends.0
    }

    /// Begin and end where the level is lowered by `drop`, not below the next lower level.
    pub(super) fn ends_lowered(&self, drop: f64) -> (f64, f64) {
        (
            self.ends.0 - drop * self.growth.0,
            self.ends.1 + drop * self.growth.1,
        )
    }

    fn new(signal: &Signal<'_>, level: f64, first: usize, last: usize) -> Self {
        let outside_before = first
            .checked_sub(1)
            .map(|node| Side::new(signal, first, node));
        let outside_after = (last + 1 < signal.len()).then(|| Side::new(signal, last, last + 1));
        let (reach_before, growth_before) = reach(outside_before, level);
        let (reach_after, growth_after) = reach(outside_after, level);
        let outside = |side: Option<Side>| side.map_or(f64::NEG_INFINITY, |s| s.outside);
        Self {
            level,
            nodes: (first, last),
            ends: (
                signal.position(first) - reach_before,
                signal.position(last) + reach_after,
            ),
            growth: (growth_before, growth_after),
            lower: outside(outside_before).max(outside(outside_after)),
        }
    }
}

/// Visits the windows at the levels of all samples that are not below `least_level`.
pub(super) fn each_window(signal: &Signal<'_>, least_level: f64, mut visit: impl FnMut(Window)) {
    let mut open: Vec<(f64, usize)> = Vec::new();
    for sample in 0..signal.len() {
        let level = signal.at(sample);
        if open.is_empty() && level < least_level {
            continue;
        }
        let mut first = sample;
        while let Some((above, since)) = open.pop_if(|(above, _)| *above > level) {
            visit(Window::new(signal, above, since, sample - 1));
            first = since;
        }
        let already_open = open.last().is_some_and(|(same, _)| *same == level);
        if level >= least_level && !already_open {
            open.push((level, first));
        }
    }
    while let Some((level, since)) = open.pop() {
        visit(Window::new(signal, level, since, signal.len() - 1));
    }
}

/// The two nodes between which a window ends.
#[derive(Clone, Copy)]
struct Side {
    inside: f64,
    outside: f64,
    /// Distance of the nodes, samples.
    gap: f64,
}

impl Side {
    fn new(signal: &Signal<'_>, inside: usize, outside: usize) -> Self {
        Self {
            inside: signal.at(inside),
            outside: signal.at(outside),
            gap: (signal.position(outside) - signal.position(inside)).abs(),
        }
    }
}

/// How far a window reaches beyond its outermost node, and how that grows as the level falls.
fn reach(side: Option<Side>, level: f64) -> (f64, f64) {
    side.map_or((0.0, 0.0), |side| {
        let per_unit = side.gap / (side.inside - side.outside);
        ((side.inside - level) * per_unit, per_unit)
    })
}
