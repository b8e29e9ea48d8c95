//! A limit against duration, and where a load that falls off linearly stands worst against it.

use crate::input::{Between, Demand, Sustained};

/// Durations that differ by less than this part are the same duration.
///
/// Rounding must never make a spell that lasts exactly as long as a point of the curve a hair too short for it.
const SAME_DURATION: f64 = 1e-12;

/// Limit against duration; never rises.
#[derive(Clone, Debug)]
pub(super) struct LimitCurve {
    /// Duration, s, and limit.
    points: Vec<(f64, f64)>,
    between: Between,
    ignore_below_s: f64,
}

/// A level that falls linearly as the window around a peak grows.
#[derive(Clone, Copy, Debug)]
pub(super) struct Falling {
    /// Length of the window at `level`, s.
    pub(super) duration_s: f64,
    /// Level of that window.
    pub(super) level: f64,
    /// How much the level falls for each second more.
    pub(super) fall_per_s: f64,
}

impl Falling {
    /// Level of the window of this length.
    pub(super) fn level_at(&self, duration_s: f64) -> f64 {
        self.level - (duration_s - self.duration_s) * self.fall_per_s
    }
}

impl LimitCurve {
    /// The curve of a rule times a factor, counted like its signal: a floor `v` is the limit 1 − v.
    pub(super) fn new(rule: &Sustained, factor: f64) -> Self {
        let counted = |value: f64| match rule.demand {
            Demand::Limit(_) => value,
            Demand::Floor => 1.0 - value,
        };
        Self {
            points: rule
                .curve
                .iter()
                .map(|&(t, v)| (t, factor * counted(v)))
                .collect(),
            between: rule.between,
            ignore_below_s: rule.ignore_below_s,
        }
    }

    /// Whether a window of this length is judged.
    pub(super) fn judges(&self, duration_s: f64) -> bool {
        duration_s >= self.ignore_below_s * (1.0 - SAME_DURATION)
    }

    /// Shortest duration that is judged, s.
    pub(super) fn ignore_below_s(&self) -> f64 {
        self.ignore_below_s
    }

    /// Durations at which the worst window may lie without a sample at its level: rising, each once.
    pub(super) fn marked_durations_s(&self) -> Vec<f64> {
        let mut durations: Vec<f64> = self.points.iter().map(|p| p.0).collect();
        durations.push(self.ignore_below_s);
        durations.sort_by(f64::total_cmp);
        durations.dedup();
        durations
    }

    /// The smallest limit: that of the longest duration.
    pub(super) fn least(&self) -> f64 {
        self.points.last().map_or(f64::NAN, |p| p.1)
    }

    /// Limit for a duration: the first before the first point, the last beyond the last, the lower at a drop.
    pub(super) fn limit(&self, duration_s: f64) -> f64 {
        let next = self.points_up_to(duration_s);
        match (
            next.checked_sub(1).and_then(|i| self.points.get(i)),
            self.points.get(next),
        ) {
            (Some(&before), Some(&after)) => self.between_points(before, after, duration_s),
            (Some(only), None) | (None, Some(only)) => only.1,
            (None, None) => f64::NAN,
        }
    }

    /// The duration in `from_s..to_s` at which a falling level stands worst against a `log-time` limit, if inside.
    ///
    /// `from_s..to_s` lies between two neighbouring points. With the level c − m T and the limit
    /// a + b ln T, b ≤ 0, the ratio's derivative has the sign of −h, h(T) = m T (limit(T) − b) + b c,
    /// and h′(T) = m limit(T) > 0: the ratio has at most one stationary point, a maximum, at the root
    /// of h. For the other curves the ratio is that of two straight lines, so that it has none.
    pub(super) fn worst_between(&self, load: Falling, from_s: f64, to_s: f64) -> Option<f64> {
        if self.between != Between::LogTime {
            return None;
        }
        let next = self.points_up_to(from_s);
        let ((t0, v0), (t1, v1)) = (
            *self.points.get(next.checked_sub(1)?)?,
            *self.points.get(next)?,
        );
        let b = (v1 - v0) / (t1 / t0).ln();
        let c = load.level_at(0.0);
        let h = |t: f64| load.fall_per_s * t * (v0 + b * (t / t0).ln() - b) + b * c;
        (h(from_s) < 0.0 && h(to_s) > 0.0).then(|| bisect(h, from_s, to_s))
    }

    fn between_points(&self, (t0, v0): (f64, f64), (t1, v1): (f64, f64), t: f64) -> f64 {
        let part = match self.between {
            Between::Step => 0.0,
            Between::Linear => (t - t0) / (t1 - t0),
            Between::LogTime => (t / t0).ln() / (t1 / t0).ln(),
        };
        v0 + (v1 - v0) * part.clamp(0.0, 1.0)
    }

    /// How many points stand at or before a duration.
    fn points_up_to(&self, duration_s: f64) -> usize {
        let reach_s = duration_s * (1.0 + SAME_DURATION);
        self.points.partition_point(|p| p.0 <= reach_s)
    }
}

/// Root of a rising function between `low` (below 0) and `high` (above 0), to the last digit.
fn bisect(rising: impl Fn(f64) -> f64, mut low: f64, mut high: f64) -> f64 {
    loop {
        let middle = low + 0.5 * (high - low);
        if middle <= low || middle >= high {
            return low;
        }
        if rising(middle) < 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
}
