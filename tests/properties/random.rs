//! Random signals and rules.

use crestfall::input::{Axis, Between, Demand, Sign, Sustained};
use proptest::prelude::*;

/// Plateaus, ties, spikes and changes of sign: whole numbers and arbitrary ones, each held for some samples.
pub(crate) fn signals() -> impl Strategy<Value = Vec<f64>> {
    let value = prop_oneof![
        2 => (-6i32..7).prop_map(|v| f64::from(v) / 2.0),
        1 => -3.0..3.0f64,
        1 => Just(0.0),
    ];
    prop::collection::vec(
        (value, prop_oneof![3 => Just(1usize), 1 => 2..6usize]),
        1..18,
    )
    .prop_map(|runs| {
        runs.iter()
            .flat_map(|&(v, n)| std::iter::repeat_n(v, n))
            .collect()
    })
}

/// Limits only: a floor counts from 1 g, which scaling would have to move too.
pub(crate) fn limits() -> impl Strategy<Value = Sustained> {
    demands().prop_filter("a floor does not scale", |rule| {
        rule.demand != Demand::Floor
    })
}

pub(crate) fn demands() -> impl Strategy<Value = Sustained> {
    let between = prop_oneof![
        Just(Between::Linear),
        Just(Between::Step),
        Just(Between::LogTime)
    ];
    let demand = prop_oneof![
        Just(Demand::Limit(Sign::Positive)),
        Just(Demand::Limit(Sign::Negative)),
        Just(Demand::Floor),
    ];
    let steps = prop::collection::vec(
        (prop_oneof![4 => 0.05..1.5f64, 1 => Just(0.0)], 0.0..0.6f64),
        0..4,
    );
    let ignore = prop_oneof![Just(0.0), 0.01..1.5f64];
    (between, demand, 0.05..0.5f64, 0.2..1.5f64, steps, ignore).prop_map(
        |(between, demand, first_s, last, steps, ignore_below_s)| Sustained {
            axis: Axis::Z,
            demand,
            curve: curve(demand, first_s, last, &steps),
            between,
            ignore_below_s,
        },
    )
}

/// Magnitudes that never rise, the last one `last`; as floors, 1 less each.
fn curve(demand: Demand, first_s: f64, last: f64, steps: &[(f64, f64)]) -> Vec<(f64, f64)> {
    let mut magnitude = last + steps.iter().map(|s| s.1).sum::<f64>();
    let mut points = vec![(first_s, magnitude)];
    let mut duration_s = first_s;
    for &(later_s, lower) in steps {
        duration_s += later_s;
        magnitude -= lower;
        points.push((duration_s, magnitude));
    }
    if demand == Demand::Floor {
        points.iter_mut().for_each(|p| p.1 = 1.0 - p.1);
    }
    points
}
