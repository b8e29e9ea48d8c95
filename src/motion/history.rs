//! A run that was made: how it ended, its books, and its state at any time.

use nalgebra::Vector2;
use ode_solvers::continuous_output_model::ContinuousOutputModel;

use super::equation::{Law, Model};
use super::{Ledger, Reversal, RunEnd};

/// One run.
pub struct History<'a> {
    /// How it ended.
    pub end: RunEnd,
    /// s.
    pub duration_s: f64,
    /// Leading axle at the end, m (q).
    pub end_station_m: f64,
    /// In order of time.
    pub reversals: Vec<Reversal>,
    /// The books.
    pub energy: Ledger,
    pub(super) model: Model<'a>,
    pub(super) segments: Vec<Segment>,
}

/// A stretch of time in which nothing switches.
pub(super) struct Segment {
    pub(super) from_s: f64,
    pub(super) to_s: f64,
    pub(super) law: Law,
    pub(super) states: ContinuousOutputModel<f64, Vector2<f64>>,
}

/// Where the train is and how it moves.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct State {
    /// Leading axle, m (q).
    pub station_m: f64,
    /// q̇, m/s; negative backward.
    pub speed_m_s: f64,
    /// q̈, m/s².
    pub acceleration_m_s2: f64,
}

/// A run at a uniform rate: samples at i/rate from 0 to before the end.
#[derive(Clone, Debug, PartialEq)]
pub struct Samples {
    /// Hz.
    pub rate_hz: f64,
    /// Leading axle, m (q).
    pub train_station_m: Vec<f64>,
    /// m/s.
    pub speed_m_s: Vec<f64>,
    /// m/s².
    pub acceleration_m_s2: Vec<f64>,
}

impl Samples {
    /// Some of the samples, by index; the rate is left as it is.
    pub fn picked(&self, indices: impl Iterator<Item = usize>) -> Self {
        let mut picked = Self {
            rate_hz: self.rate_hz,
            train_station_m: Vec::new(),
            speed_m_s: Vec::new(),
            acceleration_m_s2: Vec::new(),
        };
        for i in indices {
            picked.train_station_m.push(self.train_station_m[i]);
            picked.speed_m_s.push(self.speed_m_s[i]);
            picked.acceleration_m_s2.push(self.acceleration_m_s2[i]);
        }
        picked
    }
}

impl History<'_> {
    /// The state at a time from 0 to the duration, s; none outside, or where the run has no length.
    pub fn state_at(&self, time_s: f64) -> Option<State> {
        let index = self
            .segments
            .partition_point(|segment| segment.to_s <= time_s);
        let segment = self.segments.get(index).or(self.segments.last())?;
        segment.state_at(&self.model, time_s)
    }

    /// The run at a uniform rate, Hz.
    pub fn samples(&self, rate_hz: f64) -> Samples {
        let mut samples = Samples {
            rate_hz,
            train_station_m: Vec::new(),
            speed_m_s: Vec::new(),
            acceleration_m_s2: Vec::new(),
        };
        let mut index = 0;
        for segment in &self.segments {
            let time_s = |i: usize| i as f64 / rate_hz;
            while time_s(index) < segment.to_s {
                // A state that is not there leaves a gap that shows, not a record that is shorter.
                let state = segment.state_at(&self.model, time_s(index));
                let part = |of: fn(&State) -> f64| state.as_ref().map_or(f64::NAN, of);
                samples.train_station_m.push(part(|s| s.station_m));
                samples.speed_m_s.push(part(|s| s.speed_m_s));
                samples
                    .acceleration_m_s2
                    .push(part(|s| s.acceleration_m_s2));
                index += 1;
            }
        }
        samples
    }
}

impl Segment {
    fn state_at(&self, model: &Model<'_>, time_s: f64) -> Option<State> {
        let [station_m, speed_m_s] = self.states.evaluate(time_s.max(self.from_s))?.into();
        let terms = model.terms(station_m, speed_m_s);
        let acceleration_m_s2 = terms.acceleration_m_s2(station_m, speed_m_s, &self.law);
        Some(State {
            station_m,
            speed_m_s,
            acceleration_m_s2,
        })
    }
}
