//! Whether what a rule's `where` names is there: scenarios in the operation, seats and landmarks in a variant.

use crate::diagnostic::{Diagnostic, Place};
use crate::input::decode::{listed, nearest};
use crate::input::{Study, Track, TrackSource, Variant, Where};

/// Most names that a hint lists.
const LISTED: usize = 12;

/// Every name that is not there, each at its place.
pub(super) fn check(study: &Study) -> Vec<Diagnostic> {
    let names = Known::of(study);
    let rules = study.envelopes.iter().flat_map(|envelope| &envelope.rules);
    rules
        .flat_map(|rule| names.mistakes(&rule.holds, study))
        .collect()
}

/// Names that there are, of all variants together.
struct Known {
    scenarios: Vec<String>,
    landmarks: Vec<String>,
    seats: Vec<String>,
}

impl Known {
    fn of(study: &Study) -> Self {
        let scenarios = study.operation.scenarios.iter();
        let mut known = Self {
            scenarios: scenarios.map(|s| s.name.clone()).collect(),
            landmarks: Vec::new(),
            seats: Vec::new(),
        };
        for variant in &study.variants {
            add_new(&mut known.landmarks, landmarks(&variant.track));
            add_new(&mut known.seats, seats(variant));
        }
        known
    }

    fn mistakes(&self, holds: &Where, study: &Study) -> Vec<Diagnostic> {
        let scenarios = holds.scenarios.iter().flatten();
        let scenarios = scenarios.map(|n| ("scenario", n.name.clone(), &n.place, &self.scenarios));
        let landmarks = holds.landmarks.iter().flatten();
        let landmarks = landmarks.map(|n| ("landmark", n.name.clone(), &n.place, &self.landmarks));
        let seats = holds.seats.iter().flatten();
        let seats = seats.map(|n| {
            let name = format!("{}-{}", n.car, n.seat);
            ("seat", name, &n.place, &self.seats)
        });
        let unknown = scenarios.chain(landmarks).chain(seats);
        unknown
            .filter_map(|(what, name, place, known)| unknown_name(what, &name, place, known))
            .chain(backwards(holds, study))
            .collect()
    }
}

fn unknown_name(what: &str, name: &str, place: &Place, known: &[String]) -> Option<Diagnostic> {
    if known.iter().any(|k| k == name) {
        return None;
    }
    let hint = match nearest(name, known.iter().map(String::as_str)) {
        Some(near) => format!("did you mean `{near}`?"),
        None if known.is_empty() => format!("there is no {what} in this study"),
        None => {
            let first = known.iter().take(LISTED).map(String::as_str);
            let more = if known.len() > LISTED {
                " and more"
            } else {
                ""
            };
            format!("there is {}{more}", listed(first))
        }
    };
    let message = format!("unknown {what} `{name}`");
    Some(Diagnostic::error(message).at(place).hint(hint))
}

/// Only on a closed track may a stretch cross the start.
fn backwards(holds: &Where, study: &Study) -> Vec<Diagnostic> {
    let open = study.variants.iter().find(|v| !is_closed(&v.track));
    let Some(open) = open else {
        return Vec::new();
    };
    let ranges = holds.stations.iter().flatten();
    let backwards = ranges.filter(|range| range.to_m < range.from_m);
    let mistake = |range: &crate::input::StationRange| {
        let message = format!(
            "the stretch ends at {} m before it begins at {} m, and track `{}` is not closed",
            range.to_m, range.from_m, open.track.name
        );
        Diagnostic::error(message)
            .at(&range.place)
            .hint("exchange `from` and `to`; only on a closed track does a stretch cross the seam")
    };
    backwards.map(mistake).collect()
}

fn is_closed(track: &Track) -> bool {
    matches!(&track.source, TrackSource::Points(table) if table.closed)
}

/// Named elements, then landmarks.
fn landmarks(track: &Track) -> Vec<String> {
    let elements = match &track.source {
        TrackSource::Elements(source) => &source.elements[..],
        TrackSource::Points(_) => &[],
    };
    let elements = elements.iter().filter_map(|e| e.name.clone());
    let landmarks = track.landmarks.iter().map(|l| l.name.clone());
    elements.chain(landmarks).collect()
}

fn seats(variant: &Variant) -> Vec<String> {
    let cars = (1..).zip(&variant.train.cars);
    cars.flat_map(|(car, c)| c.seats.iter().map(move |s| format!("{car}-{}", s.name)))
        .collect()
}

fn add_new(names: &mut Vec<String>, more: Vec<String>) {
    for name in more {
        if !names.contains(&name) {
            names.push(name);
        }
    }
}
