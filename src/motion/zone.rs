//! Zones: how much of the train one holds, and what its device does.

use crate::input::{Device, Zone};

/// A zone at one lap of a closed track, or the zone itself on an open one.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Window {
    /// Index in the scenario's zones.
    pub(super) zone: usize,
    /// Which lap.
    pub(super) lap: i64,
    /// First and last station, m (q).
    from_m: f64,
    to_m: f64,
    /// Nominal distance from the first to the last axle, m.
    train_m: f64,
    pub(super) device: Device,
    pub(super) mode: Mode,
    line: ShareLine,
}

/// The share as a straight line in q, which it is between two edges. It is carried on beyond them,
/// so that an integration step across an edge sees no corner before the edge has been located.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
struct ShareLine {
    through_m: f64,
    share: f64,
    slope_1_m: f64,
}

/// What a device is doing.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Mode {
    /// `push` and `hold` below their speed, `eddy` and `clamp` at work.
    Working,
    /// `push` and `hold` keep their speed.
    Keeping,
    /// `push` and `hold` above their speed; a `clamp` that has let go.
    Past,
}

impl Window {
    /// Part of the train inside: clip(min(q, b) − max(q − T, a), 0)/T.
    pub(super) fn part_inside(&self, q: f64) -> f64 {
        if self.train_m > 0.0 {
            let inside_m = q.min(self.to_m) - (q - self.train_m).max(self.from_m);
            inside_m.max(0.0) / self.train_m
        } else {
            f64::from(self.from_m <= q && q <= self.to_m)
        }
    }

    /// The same for a stretch between two edges, of which `middle_m` is the middle.
    pub(super) fn on_stretch(self, middle_m: f64) -> Self {
        let rises = middle_m < self.to_m && self.train_m > 0.0;
        let falls = middle_m - self.train_m > self.from_m && self.train_m > 0.0;
        let share = self.part_inside(middle_m);
        let slope_1_m = if share > 0.0 && rises != falls {
            (f64::from(rises) - f64::from(falls)) / self.train_m
        } else {
            0.0
        };
        let line = ShareLine {
            through_m: middle_m,
            share,
            slope_1_m,
        };
        Self { line, ..self }
    }

    /// Part of the train inside, by the line of the present stretch.
    pub(super) fn share(&self, q: f64) -> f64 {
        self.line.share + self.line.slope_1_m * (q - self.line.through_m)
    }

    /// Where the share's slope changes, m.
    pub(super) fn edges_m(&self) -> [f64; 4] {
        let (a, b, t) = (self.from_m, self.to_m, self.train_m);
        [a, b, a + t, b + t]
    }

    /// Whether the leading axle stands in the zone.
    pub(super) fn holds_leading_axle(&self, q: f64) -> bool {
        (self.from_m..=self.to_m).contains(&q)
    }

    /// Last station, m.
    pub(super) fn end_m(&self) -> f64 {
        self.to_m
    }

    /// Speed at which `push`, `hold` and `clamp` change what they do, m/s.
    pub(super) fn turning_speed_m_s(&self) -> Option<f64> {
        match self.device {
            Device::Push { cap_m_s, .. } => Some(cap_m_s),
            Device::Hold { speed_m_s, .. } => Some(speed_m_s),
            Device::Clamp {
                release_speed_m_s, ..
            } if release_speed_m_s > 0.0 => Some(release_speed_m_s),
            Device::Clamp { .. } | Device::Eddy { .. } => None,
        }
    }

    /// Force on a train moving in `direction` (±1) at speed v, N; 0 while it keeps a speed.
    pub(super) fn force_n(&self, q: f64, v: f64, direction: f64) -> f64 {
        let force_n = match (self.device, self.mode) {
            (_, Mode::Keeping) => 0.0,
            (Device::Push { thrust_n, .. }, Mode::Working) => thrust_n,
            (Device::Push { .. } | Device::Clamp { .. }, Mode::Past) => 0.0,
            (Device::Hold { force_n, .. }, Mode::Working) => force_n,
            (Device::Hold { force_n, .. }, Mode::Past) => -force_n,
            (
                Device::Eddy {
                    peak_force_n,
                    critical_speed_m_s,
                },
                _,
            ) => {
                let ratio = v / critical_speed_m_s;
                -2.0 * peak_force_n * ratio / (1.0 + ratio * ratio)
            }
            (Device::Clamp { force_n, .. }, Mode::Working) => -direction * force_n,
        };
        force_n * self.share(q)
    }

    /// Smallest and largest force with which a `push` or `hold` can keep its speed, N.
    pub(super) fn keeping_range_n(&self, q: f64) -> (f64, f64) {
        let share = self.share(q).max(0.0);
        match self.device {
            Device::Push { thrust_n, .. } => (0.0, thrust_n * share),
            Device::Hold { force_n, .. } => (-force_n * share, force_n * share),
            Device::Eddy { .. } | Device::Clamp { .. } => (0.0, 0.0),
        }
    }

    /// Force with which a clamp holds a train at rest, N.
    pub(super) fn grip_n(&self, q: f64) -> f64 {
        match (self.device, self.mode) {
            (Device::Clamp { force_n, .. }, Mode::Working) => force_n * self.share(q).max(0.0),
            _ => 0.0,
        }
    }
}

/// The windows whose edges lie within one lap of q, or all of them on an open track.
pub(super) fn windows_near(
    zones: &[Zone],
    train_m: f64,
    lap_m: Option<f64>,
    q: f64,
) -> Vec<Window> {
    let mut windows = Vec::new();
    for (zone, entry) in zones.iter().enumerate() {
        let mut to_m = entry.to_m;
        let laps = match lap_m {
            None => 0..=0,
            Some(lap_m) => {
                to_m += if to_m < entry.from_m { lap_m } else { 0.0 };
                let reach_m = lap_m + train_m;
                let first = ((q - reach_m - to_m) / lap_m).floor() as i64;
                first..=((q + reach_m - entry.from_m) / lap_m).ceil() as i64
            }
        };
        for lap in laps {
            let shift_m = lap as f64 * lap_m.unwrap_or(0.0);
            windows.push(Window {
                zone,
                lap,
                from_m: entry.from_m + shift_m,
                to_m: to_m + shift_m,
                train_m,
                device: entry.device,
                mode: Mode::Working,
                line: ShareLine::default(),
            });
        }
    }
    windows
}
