//! Where a rule holds, as stretches of a record: stations become positions in time.
//!
//! The station runs straight between samples, so that a border falls between them. A station belongs to a
//! time with the filter's delay removed: its loads stand later in the filtered record by that delay.

use crate::envelope::{Scope, Stretch};
use crate::input::{Rule, Seat, Where};
use crate::spine::Spine;

/// Rounding of stations, m: stretches no further apart touch, shorter ones are none.
const SAME_STATION_M: f64 = 1e-9;

/// Whether a rule is about a scenario.
pub(super) fn in_scenario(rule: &Rule, scenario: &str) -> bool {
    let names = rule.holds.scenarios.as_ref();
    names.is_none_or(|names| names.iter().any(|n| n.name == scenario))
}

/// Whether a rule is about a seat; `car` counts from 0.
pub(super) fn for_seat(rule: &Rule, car: usize, seat: &Seat) -> bool {
    let names = rule.holds.seats.as_ref();
    names.is_none_or(|names| {
        names
            .iter()
            .any(|n| n.car == car + 1 && n.seat == seat.name)
    })
}

/// A way along a spine: a station for each node of a record, not wrapped, straight between them.
pub(super) struct Way<'a> {
    pub(super) spine: &'a Spine,
    /// m; not empty.
    pub(super) station_m: &'a [f64],
    /// How much later than its station the record stands, samples.
    pub(super) delay: f64,
}

impl Way<'_> {
    /// The part of the record in which a rule holds by its stations and landmarks.
    pub(super) fn scope(&self, holds: &Where) -> Scope {
        let Some(Asked {
            pieces,
            mut missing,
        }) = Asked::of(holds, self.spine)
        else {
            return Scope::Whole;
        };
        if pieces.is_empty() && missing.is_empty() {
            missing.push(
                "the stations and landmarks of `where` have nothing in common on this track"
                    .to_owned(),
            );
        }
        let unreached = pieces
            .iter()
            .filter(|piece| self.stretches(&piece.intervals_m).is_empty());
        missing.extend(unreached.map(|piece| format!("{} is never reached", piece.name)));
        let all: Vec<Interval> = pieces.iter().flat_map(|p| p.intervals_m.clone()).collect();
        Scope::Part {
            stretches: self.stretches(&all),
            missing: (!missing.is_empty()).then(|| missing.join("; ")),
        }
    }

    /// The stretches of the record whose stations lie in any of the intervals: in order and apart.
    fn stretches(&self, intervals_m: &[Interval]) -> Vec<Stretch> {
        let intervals_m = self.unrolled(intervals_m).into_iter();
        let all = intervals_m.flat_map(|interval_m| visits(self.station_m, interval_m));
        let mut all: Vec<Stretch> = all.filter_map(|visit| self.delayed(visit)).collect();
        all.sort_by(|a, b| a.from.total_cmp(&b.from));
        let mut apart: Vec<Stretch> = Vec::new();
        for visit in all {
            push_or_extend(&mut apart, visit);
        }
        apart
    }

    /// The intervals at every lap that the way comes to, merged where they touch.
    fn unrolled(&self, intervals_m: &[Interval]) -> Vec<Interval> {
        let stations = || self.station_m.iter().copied();
        let first_m = stations().fold(f64::INFINITY, f64::min);
        let last_m = stations().fold(f64::NEG_INFINITY, f64::max);
        if !(first_m.is_finite() && last_m.is_finite()) {
            return Vec::new();
        }
        let lap_m = self.spine.length_m();
        let lap = |station_m: f64| (station_m / lap_m).floor() as i64;
        let laps = if self.spine.is_closed() {
            lap(first_m) - 1..=lap(last_m) + 1
        } else {
            0..=0
        };
        let at_lap = |lap: i64| {
            let shift_m = lap as f64 * lap_m;
            intervals_m
                .iter()
                .map(move |i| (i.0 + shift_m, i.1 + shift_m))
        };
        let mut all: Vec<Interval> = laps.flat_map(at_lap).collect();
        all.sort_by(|a, b| a.0.total_cmp(&b.0));
        let mut merged: Vec<Interval> = Vec::new();
        for interval in all {
            match merged.last_mut() {
                Some(last) if interval.0 <= last.1 + SAME_STATION_M => {
                    last.1 = last.1.max(interval.1);
                }
                _ => merged.push(interval),
            }
        }
        merged
    }

    /// Where the record tells of a visit; none where it lasts no time or the record ends before.
    ///
    /// What the filter makes before its delay has passed belongs to the first instant of the ride.
    fn delayed(&self, visit: Stretch) -> Option<Stretch> {
        // The record goes on for the delay, so that the end of the ride is seen in full.
        let last = (self.station_m.len() - 1) as f64 + self.delay.ceil();
        let from = if visit.from > 0.0 {
            visit.from + self.delay
        } else {
            0.0
        };
        let to = (visit.to + self.delay).min(last);
        (visit.from < visit.to && from < to).then_some(Stretch { from, to })
    }
}

/// First and last station, m.
type Interval = (f64, f64);

/// A stretch of the track that a rule asks for.
struct Piece {
    name: String,
    /// Within [0, L], a stretch across the seam in two; not empty.
    intervals_m: Vec<Interval>,
}

/// What a rule asks for on a track.
struct Asked {
    pieces: Vec<Piece>,
    /// What it asks for and the track does not have.
    missing: Vec<String>,
}

impl Asked {
    /// `None` where the rule names neither stations nor landmarks.
    fn of(holds: &Where, spine: &Spine) -> Option<Self> {
        let mut missing = Vec::new();
        let stations = holds.stations.as_ref().map(|ranges| {
            let piece = |r: &crate::input::StationRange| Piece {
                name: format!("the stretch from {} m to {} m", r.from_m, r.to_m),
                intervals_m: without_seam(r.from_m, r.to_m, spine),
            };
            ranges.iter().map(piece).collect::<Vec<_>>()
        });
        let landmarks = holds.landmarks.as_ref().map(|names| {
            let piece = |name: &String| landmark(name, spine);
            let absent = names.iter().filter(|n| piece(&n.name).is_none());
            missing.extend(
                absent
                    .map(|n| format!("landmark `{}` is not on the track of this variant", n.name)),
            );
            names
                .iter()
                .filter_map(|n| piece(&n.name))
                .collect::<Vec<_>>()
        });
        let pieces = match (stations, landmarks) {
            (None, None) => return None,
            (Some(pieces), None) | (None, Some(pieces)) => pieces,
            (Some(stations), Some(landmarks)) => landmarks
                .iter()
                .flat_map(|landmark| stations.iter().map(|s| landmark.in_common(s)))
                .collect(),
        };
        let pieces = pieces.into_iter().filter(|p| !p.intervals_m.is_empty());
        Some(Self {
            pieces: pieces.collect(),
            missing,
        })
    }
}

impl Piece {
    fn in_common(&self, other: &Self) -> Self {
        let pairs = self.intervals_m.iter();
        let pairs = pairs.flat_map(|a| other.intervals_m.iter().map(move |b| (a, b)));
        let common = pairs.map(|(a, b)| (a.0.max(b.0), a.1.min(b.1)));
        Self {
            name: format!("{} within {}", self.name, other.name),
            intervals_m: common.filter(|i| i.1 - i.0 > SAME_STATION_M).collect(),
        }
    }
}

fn landmark(name: &str, spine: &Spine) -> Option<Piece> {
    let named = spine.stretches().iter().filter(|s| s.name == name);
    let intervals_m: Vec<Interval> = named
        .flat_map(|s| without_seam(s.from_m, s.to_m, spine))
        .collect();
    (!intervals_m.is_empty()).then(|| Piece {
        name: format!("landmark `{name}`"),
        intervals_m,
    })
}

fn without_seam(from_m: f64, to_m: f64, spine: &Spine) -> Vec<Interval> {
    if from_m <= to_m {
        return vec![(from_m, to_m)];
    }
    vec![(from_m, spine.length_m()), (0.0, to_m)]
}

/// When a way lies in an interval: every pass by itself, forward or backward, or at rest in it.
fn visits(station_m: &[f64], interval_m: Interval) -> Vec<Stretch> {
    let mut visits = Vec::new();
    for (sample, pair) in station_m.windows(2).enumerate() {
        if let Some((from, to)) = part_within((pair[0], pair[1]), interval_m) {
            let sample = sample as f64;
            let visit = Stretch {
                from: sample + from,
                to: sample + to,
            };
            push_or_extend(&mut visits, visit);
        }
    }
    visits
}

/// The part of a straight way between two stations that lies in an interval.
fn part_within((start_m, end_m): (f64, f64), (from_m, to_m): Interval) -> Option<(f64, f64)> {
    let within = |station_m: f64| (from_m..=to_m).contains(&station_m);
    let (low_m, high_m) = (start_m.min(end_m), start_m.max(end_m));
    if !(low_m <= to_m && from_m <= high_m) {
        return None;
    }
    let part = |border_m: f64| ((border_m - start_m) / (end_m - start_m)).clamp(0.0, 1.0);
    let (entry_m, exit_m) = if start_m <= end_m {
        (from_m, to_m)
    } else {
        (to_m, from_m)
    };
    let from = if within(start_m) { 0.0 } else { part(entry_m) };
    let to = if within(end_m) { 1.0 } else { part(exit_m) };
    Some((from, to))
}

/// Adds a later stretch, joined to the last one where they touch or overlap.
fn push_or_extend(stretches: &mut Vec<Stretch>, next: Stretch) {
    match stretches.last_mut() {
        Some(last) if next.from <= last.to => last.to = last.to.max(next.to),
        _ => stretches.push(next),
    }
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::{part_within, visits};
    use crate::study::why::read_at;

    proptest! {
        /// A look at every hundredth of the way: it lies in a visit where, and only where, its station lies in the interval.
        #[test]
        fn visits_agree_with_a_close_look(
            stations_m in prop::collection::vec(prop_oneof![-9.0..9.0f64, (-9..10i32).prop_map(f64::from)], 2..12),
            from_m in -9..9i32, length_m in 1..9i32,
        ) {
            let interval_m = (f64::from(from_m), f64::from(from_m + length_m));
            let visits = visits(&stations_m, interval_m);
            for pair in visits.windows(2) {
                prop_assert!(pair[0].to < pair[1].from);
            }
            for look in 0..=100 * (stations_m.len() - 1) {
                let position = look as f64 / 100.0;
                let station_m = read_at(&stations_m, position);
                let margin_m = (station_m - interval_m.0).min(interval_m.1 - station_m);
                let visited = visits.iter().any(|v| (v.from..=v.to).contains(&position));
                if margin_m.abs() > 1e-9 {
                    prop_assert_eq!(visited, margin_m > 0.0, "at {}", position);
                }
            }
        }
    }

    #[test]
    fn borders_cut_a_way_forward_and_backward() {
        assert_eq!(part_within((0.0, 10.0), (2.0, 4.0)), Some((0.2, 0.4)));
        assert_eq!(part_within((10.0, 0.0), (2.0, 4.0)), Some((0.6, 0.8)));
        assert_eq!(part_within((3.0, 3.0), (2.0, 4.0)), Some((0.0, 1.0)));
        assert_eq!(part_within((3.0, 10.0), (2.0, 10.0)), Some((0.0, 1.0)));
        assert_eq!(part_within((5.0, 6.0), (2.0, 4.0)), None);
        assert_eq!(part_within((f64::NAN, 6.0), (2.0, 4.0)), None);
    }
}
