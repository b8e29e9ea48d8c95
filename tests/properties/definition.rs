//! The definition of a sustained utilisation, word for word and without any cleverness.

use crestfall::input::{Between, Demand, Sign, Sustained};

pub(crate) struct Definition<'a> {
    pub(crate) values: Vec<f64>,
    demand: &'a Sustained,
    rate_hz: f64,
}

impl<'a> Definition<'a> {
    pub(crate) fn new(signal: &[f64], demand: &'a Sustained, rate_hz: f64) -> Self {
        let count = |load: f64| match demand.demand {
            Demand::Limit(Sign::Positive) => load,
            Demand::Limit(Sign::Negative) => -load,
            Demand::Floor => 1.0 - load,
        };
        Self {
            values: signal.iter().map(|&load| count(load)).collect(),
            demand,
            rate_hz,
        }
    }

    /// Durations worth a look: an even grid, those of all windows around samples, and the curve's own.
    pub(crate) fn durations_s(&self, length_s: f64) -> Vec<f64> {
        let least_s = self.demand.ignore_below_s;
        let grid = (0..=40).map(|i| least_s + (length_s - least_s) * f64::from(i) / 40.0);
        let windows = (0..self.values.len()).map(|i| {
            let (from, to) = self.window_around(i);
            (to - from) / self.rate_hz
        });
        let marks = self.demand.curve.iter().map(|p| p.0);
        grid.chain(windows)
            .chain(marks)
            .filter(|&t| t >= least_s && t <= length_s)
            .collect()
    }

    pub(crate) fn utilisation_at(&self, duration_s: f64) -> f64 {
        (self.sustained(duration_s * self.rate_hz) / self.limit(duration_s)).max(0.0)
    }

    /// Largest over t of the smallest value in [t, t + length], positions in samples.
    ///
    /// Between the places where an end meets a sample both ends run straight, so that the
    /// largest value lies there or where both ends are level.
    fn sustained(&self, length: f64) -> f64 {
        let last = (self.values.len() - 1) as f64;
        let latest = (last - length).max(0.0);
        let mut starts: Vec<f64> = (0..self.values.len())
            .flat_map(|i| [i as f64, i as f64 - length])
            .chain([0.0, latest])
            .filter(|&t| (0.0..=latest).contains(&t))
            .collect();
        starts.sort_by(f64::total_cmp);
        let rise = |t: f64| self.value(t + length) - self.value(t);
        let level_starts: Vec<f64> = starts
            .windows(2)
            .filter(|w| rise(w[0]) * rise(w[1]) < 0.0)
            .map(|w| w[0] + (w[1] - w[0]) * rise(w[0]) / (rise(w[0]) - rise(w[1])))
            .collect();
        starts
            .iter()
            .chain(&level_starts)
            .map(|&t| self.least(t, t + length))
            .fold(f64::NEG_INFINITY, f64::max)
    }

    fn least(&self, from: f64, to: f64) -> f64 {
        (0..self.values.len())
            .filter(|&i| (from..=to).contains(&(i as f64)))
            .map(|i| self.values[i])
            .fold(self.value(from).min(self.value(to)), f64::min)
    }

    fn value(&self, position: f64) -> f64 {
        let position = position.clamp(0.0, (self.values.len() - 1) as f64);
        let before = position.floor() as usize;
        let after = (before + 1).min(self.values.len() - 1);
        let part = position - before as f64;
        self.values[before] + (self.values[after] - self.values[before]) * part
    }

    /// The stretch around a sample in which the signal stays at or above its value, by walking outwards.
    pub(crate) fn window_around(&self, sample: usize) -> (f64, f64) {
        let level = self.values[sample];
        let (mut first, mut last) = (sample, sample);
        while first > 0 && self.values[first - 1] >= level {
            first -= 1;
        }
        while last + 1 < self.values.len() && self.values[last + 1] >= level {
            last += 1;
        }
        let part = |inside: f64, outside: f64| (inside - level) / (inside - outside);
        let before = if first > 0 {
            part(self.values[first], self.values[first - 1])
        } else {
            0.0
        };
        let after = if last + 1 < self.values.len() {
            part(self.values[last], self.values[last + 1])
        } else {
            0.0
        };
        (first as f64 - before, last as f64 + after)
    }

    pub(crate) fn limit(&self, duration_s: f64) -> f64 {
        let value = match self.demand.demand {
            Demand::Limit(_) => |v: f64| v,
            Demand::Floor => |v: f64| 1.0 - v,
        };
        let points = &self.demand.curve;
        let reached = points
            .iter()
            .rposition(|p| p.0 <= duration_s * (1.0 + 1e-12));
        let Some(before) = reached else {
            return value(points[0].1);
        };
        let Some(after) = points.get(before + 1) else {
            return value(points[before].1);
        };
        let (t0, t1) = (points[before].0, after.0);
        let part = match self.demand.between {
            Between::Step => 0.0,
            Between::Linear => (duration_s - t0) / (t1 - t0),
            Between::LogTime => (duration_s.ln() - t0.ln()) / (t1.ln() - t0.ln()),
        };
        value(points[before].1) + (value(after.1) - value(points[before].1)) * part.clamp(0.0, 1.0)
    }
}
