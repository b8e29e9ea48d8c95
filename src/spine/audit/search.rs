//! The largest value of a quantity along a spine: dense samples, then golden sections around the best.

use crate::spine::{Spine, SpinePoint};

/// A sample and the stretch in which its neighbours lie, all on one smooth piece.
#[derive(Clone, Copy, Debug)]
struct Spot {
    piece: usize,
    station_m: f64,
    from_m: f64,
    to_m: f64,
}

/// A quantity of a point; none where it is not defined.
pub(super) type Quantity = fn(&SpinePoint) -> Option<f64>;

/// Steps on the shortest piece.
const LEAST_STEPS: f64 = 8.0;

/// A sample becomes the best only by this part of it, so that rounding does not choose among equals.
const BETTER: f64 = 1e-9;

/// Largest value and its station for each quantity, by samples no farther apart than `step_m`.
pub(super) fn largest(spine: &Spine, step_m: f64, of: &[Quantity]) -> Vec<Option<(f64, f64)>> {
    let mut best: Vec<Option<(f64, Spot)>> = vec![None; of.len()];
    for spot in spots(spine, step_m) {
        let point = spine.at_on(spot.piece, spot.station_m);
        for (best, of) in best.iter_mut().zip(of) {
            let Some(value) = of(&point) else { continue };
            let beats =
                |b: &(f64, Spot)| value > b.0 + BETTER * (1.0 + b.0.abs()).min(b.0.abs() + 1e-6);
            if best.as_ref().is_none_or(beats) {
                *best = Some((value, spot));
            }
        }
    }
    let refine =
        |(best, of): (&Option<(f64, Spot)>, &Quantity)| best.map(|b| refined(spine, b, *of));
    best.iter().zip(of).map(refine).collect()
}

fn spots(spine: &Spine, step_m: f64) -> impl Iterator<Item = Spot> + '_ {
    let mut cuts = vec![0.0];
    cuts.extend(spine.breaks_m());
    cuts.push(spine.length_m());
    let pieces = (0..cuts.len() - 1).map(move |i| (i, cuts[i], cuts[i + 1]));
    pieces.flat_map(move |(piece, from_m, to_m)| {
        let steps = ((to_m - from_m) / step_m).ceil().max(LEAST_STEPS);
        let at = move |i: f64| from_m + (to_m - from_m) * (i / steps).clamp(0.0, 1.0);
        (0..=steps as usize).map(move |i| Spot {
            piece,
            station_m: at(i as f64),
            from_m: at(i as f64 - 1.0),
            to_m: at(i as f64 + 1.0),
        })
    })
}

/// The best near a sample, never worse than the sample.
fn refined(spine: &Spine, (sampled, spot): (f64, Spot), of: Quantity) -> (f64, f64) {
    const GOLDEN: f64 = 0.618_033_988_749_894_9;
    let value = |s: f64| of(&spine.at_on(spot.piece, s)).unwrap_or(f64::NEG_INFINITY);
    let (mut low, mut high) = (spot.from_m, spot.to_m);
    for _ in 0..40 {
        let width = GOLDEN * (high - low);
        if value(high - width) < value(low + width) {
            low = high - width;
        } else {
            high = low + width;
        }
    }
    let station_m = 0.5 * (low + high);
    let found = value(station_m);
    if found > sampled + BETTER * sampled.abs() {
        (found, station_m)
    } else {
        (sampled, spot.station_m)
    }
}
