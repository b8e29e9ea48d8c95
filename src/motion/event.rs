//! What ends a stretch of time in which nothing switches, and when.

use super::equation::{Law, Model};
use super::zone::{Mode, Window};
use crate::input::Device;
use crate::numerics::root::bracketed;

/// Times of events are located to this, s.
pub(super) const EVENT_TIME_S: f64 = 1e-12;

/// What ends a stretch of time in which nothing switches.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Event {
    /// The leading axle reaches the next edge or stop.
    Edge,
    /// The train comes to rest.
    Standstill,
    /// A zone (index in the law's windows) meets the speed at which it does something else.
    Speed(usize),
    /// The zones that keep a speed can do so no longer.
    Beyond,
    /// The time is up.
    TimeLimit,
}

/// How far each event is off: positive before it, negative after it.
pub(super) struct Gaps<'a> {
    pub(super) model: &'a Model<'a>,
    pub(super) law: &'a Law,
    pub(super) edge_m: f64,
}

impl Gaps<'_> {
    /// The events that can end this stretch of time.
    fn events(&self) -> Vec<Event> {
        let mut events = vec![Event::Edge, Event::Standstill];
        for (index, window) in self.law.windows.iter().enumerate() {
            let clamp_open =
                matches!(window.device, Device::Clamp { .. }) && window.mode == Mode::Past;
            if window.turning_speed_m_s().is_some() && window.mode != Mode::Keeping && !clamp_open {
                events.push(Event::Speed(index));
            }
        }
        if self.law.keeps_speed() {
            events.push(Event::Beyond);
        }
        events
    }

    fn gap(&self, event: Event, q: f64, v: f64) -> f64 {
        match event {
            Event::Edge => (self.edge_m - q) * self.law.direction,
            Event::Standstill => v * self.law.direction,
            Event::Speed(index) => self.speed_gap(&self.law.windows[index], v),
            Event::Beyond => {
                let beyond_n = self.model.terms(q, v).beyond_keeping_n(q, v, self.law);
                self.law.slack_n(q) - beyond_n.abs()
            }
            Event::TimeLimit => f64::INFINITY,
        }
    }

    fn speed_gap(&self, window: &Window, v: f64) -> f64 {
        let turning = window.turning_speed_m_s().unwrap_or(f64::INFINITY);
        match (window.device, window.mode) {
            (Device::Clamp { .. }, _) => v.abs() - turning,
            (_, Mode::Past) => v - turning,
            _ => turning - v,
        }
    }

    /// Whether any event has happened at a state.
    pub(super) fn any(&self, q: f64, v: f64) -> bool {
        self.events()
            .into_iter()
            .any(|event| self.gap(event, q, v) < 0.0)
    }

    /// The first event within the last step, with its time.
    pub(super) fn first(
        &self,
        steps: &[f64],
        state: impl Fn(f64) -> (f64, f64),
    ) -> Option<(Event, f64)> {
        let &[.., from_s, to_s] = steps else {
            return None;
        };
        let gap_at = |event: Event, t: f64| {
            let (q, v) = state(t);
            self.gap(event, q, v)
        };
        let time_of = |event: Event| {
            if gap_at(event, from_s) < 0.0 {
                from_s
            } else {
                bracketed(from_s, to_s, EVENT_TIME_S, |t| gap_at(event, t))
            }
        };
        let happened = self
            .events()
            .into_iter()
            .filter(|&event| gap_at(event, to_s) < 0.0);
        happened
            .map(|event| (event, time_of(event)))
            .min_by(|a, b| a.1.total_cmp(&b.1))
    }
}
