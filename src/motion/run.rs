//! The run: integrated from event to event, each located on the dense output.
//!
//! Dormand–Prince 5(4) with dense output (Hairer, Nørsett & Wanner, *Solving Ordinary
//! Differential Equations I*, sec. II.5–6), restarted wherever the right-hand side switches.

use nalgebra::Vector2;

use super::equation::{Law, Model};
use super::event::{EVENT_TIME_S, Event, Gaps};
use super::history::{History, Segment};
use super::ledger::Books;
use super::stretch::Stretch;
use super::zone::{Mode, Window, windows_near};
use super::{MotionError, Reversal, Ride, RunEnd};
use crate::input::{Device, Goal};

/// Numbers that steer the integration.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Settings {
    /// Local error of a step, absolute, in m and m/s.
    pub tolerance: f64,
    /// Longest step, s, so that no short feature of the track is stepped over.
    pub longest_step_s: f64,
    /// Whether the works are booked; without them the ledger does not close.
    pub books: bool,
}

impl Default for Settings {
    fn default() -> Self {
        Self {
            tolerance: 1e-10,
            longest_step_s: 0.05,
            books: true,
        }
    }
}

/// Stations closer than this are one, m.
const SAME_STATION_M: f64 = 1e-9;

/// Part of a zone's largest force by which it may miss what keeps a speed, so that rounding does
/// not switch it.
const KEEPING_SLACK: f64 = 1e-9;

/// Switches without any time passing after which a run is given up.
const MOST_IDLE_SWITCHES: usize = 100;

/// Runs a train.
///
/// # Errors
/// [`MotionError`] where the equation of motion cannot be integrated.
pub fn simulate<'a>(ride: &Ride<'a>) -> Result<History<'a>, MotionError> {
    simulate_with(ride, Settings::default())
}

/// The same with the integration steered by the caller.
///
/// # Errors
/// As [`simulate`].
pub fn simulate_with<'a>(ride: &Ride<'a>, settings: Settings) -> Result<History<'a>, MotionError> {
    Runner::new(*ride, settings).run()
}

/// The state of a run between events.
struct Runner<'a> {
    model: Model<'a>,
    settings: Settings,
    time_s: f64,
    q: f64,
    v: f64,
    law: Law,
    reversals: Vec<Reversal>,
    segments: Vec<Segment>,
    stops: Stops,
    /// The next station in the direction of travel at which something changes, m.
    edge_m: f64,
    idle: usize,
}

/// Stations at which the run ends, m (q).
#[derive(Clone, Copy)]
struct Stops {
    ahead_m: f64,
    /// What reaching the station ahead means for a train that never reversed.
    ahead: RunEnd,
    behind_m: f64,
}

impl<'a> Runner<'a> {
    fn new(ride: Ride<'a>, settings: Settings) -> Self {
        let release = &ride.scenario.release;
        let law = Law {
            direction: 1.0,
            windows: Vec::new(),
        };
        Self {
            model: Model::new(ride),
            settings,
            time_s: 0.0,
            q: release.station_m,
            v: release.speed_m_s,
            law,
            reversals: Vec::new(),
            segments: Vec::new(),
            stops: Stops::new(&ride),
            edge_m: release.station_m,
            idle: 0,
        }
    }

    fn run(mut self) -> Result<History<'a>, MotionError> {
        let mut books = Books::open(&self.model, self.q, self.v);
        self.renew_windows();
        let mut end = if self.v == 0.0 {
            self.leave_rest()
        } else {
            None
        };
        while end.is_none() {
            let event = self.advance(&mut books)?;
            end = self.switch(event);
        }
        Ok(History {
            end: end.unwrap_or(RunEnd::TimeLimit),
            duration_s: self.time_s,
            end_station_m: self.q,
            reversals: self.reversals,
            energy: books.close(&self.model, self.q, self.v),
            model: self.model,
            segments: self.segments,
        })
    }

    /// Integrates to the next event and moves there.
    fn advance(&mut self, books: &mut Books) -> Result<Event, MotionError> {
        let limit_s = self.model.ride.time_limit_s;
        if self.time_s >= limit_s {
            return Ok(Event::TimeLimit);
        }
        let gaps = Gaps {
            model: &self.model,
            law: &self.law,
            edge_m: self.edge_m,
        };
        let stretch = Stretch::integrated(
            &gaps,
            (self.time_s, limit_s),
            Vector2::new(self.q, self.v),
            self.settings,
        );
        let (event, to_s) = match (
            gaps.first(&stretch.steps, |t| stretch.state(t)),
            &stretch.fault,
        ) {
            (Some(found), _) => found,
            (None, None) => (Event::TimeLimit, limit_s),
            (None, Some(reason)) => return Err(self.given_up(reason.clone())),
        };
        let passed_s = to_s - self.time_s;
        let (q, v) = match passed_s > 0.0 {
            true => stretch.state(to_s),
            false => (self.q, self.v),
        };
        if !(q.is_finite() && v.is_finite()) {
            return Err(self.given_up("the state is not a number".into()));
        }
        if passed_s > 0.0 {
            self.record(stretch, to_s, books);
        }
        self.idle = if passed_s > EVENT_TIME_S {
            0
        } else {
            self.idle + 1
        };
        if self.idle > MOST_IDLE_SWITCHES {
            return Err(self.given_up("zones switch to and fro without end".into()));
        }
        (self.time_s, self.q, self.v) = (to_s, q, v);
        Ok(event)
    }

    /// Keeps a stretch up to a time, and books its works.
    fn record(&mut self, stretch: Stretch, to_s: f64, books: &mut Books) {
        let before = stretch.steps.iter().copied().filter(|&t| t < to_s);
        let steps = before.chain([to_s]).collect::<Vec<_>>();
        for ends in steps.windows(2).filter(|_| self.settings.books) {
            books.add_step(&self.model, &self.law, (ends[0], ends[1]), |t| {
                stretch.state(t)
            });
        }
        self.segments.push(Segment {
            from_s: self.time_s,
            to_s,
            law: self.law.clone(),
            states: stretch.states,
        });
    }

    /// What an event changes; how the run ended, if it did.
    fn switch(&mut self, event: Event) -> Option<RunEnd> {
        match event {
            Event::TimeLimit => return Some(self.unless_reversed(RunEnd::TimeLimit)),
            Event::Edge => {
                self.q = self.edge_m;
                if self.q >= self.stops.ahead_m && self.law.direction > 0.0 {
                    return Some(self.unless_reversed(self.stops.ahead));
                }
                if self.q <= self.stops.behind_m && self.law.direction < 0.0 {
                    return Some(RunEnd::RolledBack);
                }
                self.renew_windows();
            }
            Event::Standstill => {
                self.v = 0.0;
                return self.leave_rest();
            }
            Event::Speed(index) => self.turn(index),
            Event::Beyond => self.release_kept(),
        }
        None
    }

    /// A train at rest is held, or sets off in the direction in which it is driven.
    fn leave_rest(&mut self) -> Option<RunEnd> {
        for window in &mut self.law.windows {
            if window.turning_speed_m_s().is_some() && matches!(window.device, Device::Clamp { .. })
            {
                window.mode = Mode::Past;
            }
        }
        let terms = self.model.terms(self.q, 0.0);
        let drive_n = terms.drive_at_rest_n(&self.law, self.q);
        if drive_n.abs() <= terms.hold_at_rest_n(&self.law, self.q) {
            let end = if self.in_finish() {
                RunEnd::Completed
            } else {
                RunEnd::Stalled
            };
            return Some(self.unless_reversed(end));
        }
        let direction = drive_n.signum();
        if direction != self.law.direction {
            self.reversals.push(Reversal {
                time_s: self.time_s,
                station_m: self.q,
            });
            self.law.direction = direction;
            if direction < 0.0 && self.q <= self.stops.behind_m {
                return Some(RunEnd::RolledBack);
            }
            self.renew_windows();
        }
        None
    }

    fn unless_reversed(&self, end: RunEnd) -> RunEnd {
        if self.reversals.is_empty() {
            end
        } else {
            RunEnd::RolledBack
        }
    }

    /// Whether the leading axle stands in the finish zone.
    fn in_finish(&self) -> bool {
        let Goal::Finish { zone, .. } = self.model.ride.goal else {
            return false;
        };
        let zones = &self.model.ride.scenario.zones;
        let windows = self.windows_here();
        windows
            .iter()
            .any(|w| zones[w.zone].name == *zone && w.holds_leading_axle(self.q))
    }

    fn windows_here(&self) -> Vec<Window> {
        let ride = &self.model.ride;
        let train_m = ride.poses.layout().length_m();
        windows_near(&ride.scenario.zones, train_m, ride.poses.lap_m(), self.q)
    }

    /// Keeps the windows that act before the next edge: those that acted already go on as they
    /// were, new ones start by the speed.
    fn renew_windows(&mut self) {
        let here = self.windows_here();
        let open_m = self.law.direction * f64::INFINITY;
        let edge_m = nearest_edge_m(&here, self.q, self.law.direction).unwrap_or(open_m);
        self.edge_m = self.bounded_m(edge_m);
        // Beyond the last edge no window acts, wherever the middle is taken.
        let middle_m = if edge_m.is_finite() {
            0.5 * (self.q + self.edge_m)
        } else {
            self.q
        };
        let before = std::mem::take(&mut self.law.windows);
        let mut fresh = Vec::new();
        for window in here.into_iter().filter(|w| w.part_inside(middle_m) > 0.0) {
            let mut window = window.on_stretch(middle_m);
            match before
                .iter()
                .find(|b| (b.zone, b.lap) == (window.zone, window.lap))
            {
                Some(known) => window.mode = known.mode,
                None => fresh.push(self.law.windows.len()),
            }
            self.law.windows.push(window);
        }
        for index in fresh {
            self.enter(index);
        }
    }

    /// What a zone does when the train comes to it.
    fn enter(&mut self, index: usize) {
        let Some(turning) = self.law.windows[index].turning_speed_m_s() else {
            return;
        };
        let window = &mut self.law.windows[index];
        match window.device {
            Device::Clamp { .. } if self.v.abs() <= turning => window.mode = Mode::Past,
            Device::Push { .. } | Device::Hold { .. } if self.v > turning => {
                window.mode = Mode::Past
            }
            Device::Push { .. } | Device::Hold { .. } if self.v == turning => self.turn(index),
            _ => {}
        }
    }

    /// A zone meets its turning speed: a clamp lets go, the others keep the speed if they can.
    fn turn(&mut self, index: usize) {
        let window = &mut self.law.windows[index];
        if let (Device::Clamp { .. }, Some(turning)) = (window.device, window.turning_speed_m_s()) {
            window.mode = Mode::Past;
            self.v = turning.copysign(self.v);
            return;
        }
        self.v = window.turning_speed_m_s().unwrap_or(self.v);
        window.mode = Mode::Keeping;
        self.release_kept();
    }

    /// Zones that keep a speed beyond their force go back to pushing or braking with all of it.
    fn release_kept(&mut self) {
        let terms = self.model.terms(self.q, self.v);
        let beyond_n = terms.beyond_keeping_n(self.q, self.v, &self.law);
        if beyond_n.abs() <= self.law.slack_n(self.q) {
            return;
        }
        let mode = if beyond_n > 0.0 {
            Mode::Working
        } else {
            Mode::Past
        };
        let keeping = self
            .law
            .windows
            .iter_mut()
            .filter(|w| w.mode == Mode::Keeping);
        keeping.for_each(|window| window.mode = mode);
    }

    /// A station, but not beyond the stop in the direction of travel.
    fn bounded_m(&self, station_m: f64) -> f64 {
        if self.law.direction > 0.0 {
            station_m.min(self.stops.ahead_m)
        } else {
            station_m.max(self.stops.behind_m)
        }
    }

    fn given_up(&self, reason: String) -> MotionError {
        MotionError::Integration {
            time_s: self.time_s,
            station_m: self.q,
            reason,
        }
    }
}

impl Stops {
    fn new(ride: &Ride<'_>) -> Self {
        let (behind_m, end_m) = ride.poses.stations_m();
        let (ahead_m, ahead) = match ride.goal {
            Goal::TrackEnd => (end_m, RunEnd::Completed),
            Goal::Until { station_m, .. } => (station_m.min(end_m), RunEnd::Completed),
            Goal::Finish { zone, .. } if ride.poses.lap_m().is_some() => {
                (far_end_m(ride, zone), RunEnd::Overran)
            }
            Goal::Finish { .. } => (end_m, RunEnd::Overran),
        };
        Self {
            ahead_m,
            ahead,
            behind_m,
        }
    }
}

/// The far end of the first passage of a zone after the release, m (q), on a closed track.
fn far_end_m(ride: &Ride<'_>, zone: &str) -> f64 {
    let q = ride.scenario.release.station_m;
    let zones = &ride.scenario.zones;
    let train_m = ride.poses.layout().length_m();
    windows_near(zones, train_m, ride.poses.lap_m(), q)
        .iter()
        .filter(|w| zones[w.zone].name == zone && w.end_m() > q)
        .map(Window::end_m)
        .fold(f64::INFINITY, f64::min)
}

/// The nearest edge of any window strictly ahead in the direction of travel, m.
fn nearest_edge_m(windows: &[Window], q: f64, direction: f64) -> Option<f64> {
    let edges = windows.iter().flat_map(Window::edges_m);
    let ahead = edges.filter(|edge| (edge - q) * direction > SAME_STATION_M);
    ahead.min_by(|a, b| ((a - q) * direction).total_cmp(&((b - q) * direction)))
}

impl Law {
    /// How far the zones that keep a speed may miss the force needed, N.
    pub(super) fn slack_n(&self, q: f64) -> f64 {
        let keeping = self.windows.iter().filter(|w| w.mode == Mode::Keeping);
        let widths = keeping
            .map(|w| w.keeping_range_n(q))
            .map(|(low, high)| high - low);
        KEEPING_SLACK * widths.sum::<f64>()
    }
}
