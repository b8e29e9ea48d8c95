//! The places where a limit is left: findings of all seats and scenarios that overlap along the track are one place.

use super::layout::{counted, list};
use crate::envelope::Unit;
use crate::report::number::{Units, seconds, utilisation};
use crate::study::{Assessment, Change, Finding};

/// No more places are printed: a list that nobody reads to its end hides what leads it.
const MOST_PLACES: usize = 40;

/// An item a place, worst first; nothing where there is no finding.
pub(super) fn places(assessment: &Assessment, units: Units) -> String {
    let places = gathered(assessment);
    let shown = places.iter().take(MOST_PLACES);
    let more = places.len().saturating_sub(MOST_PLACES);
    let more = (more > 0).then(|| {
        let places = counted(more, "more place");
        format!("{places} less far beyond; `--format json` has them all")
    });
    let items = shown.map(|place| item(place, units)).chain(more);
    list("where it leaves the envelope", items)
}

/// Overlapping findings of one variant and rule.
struct Place<'a> {
    worst: &'a Finding,
    from_m: f64,
    to_m: f64,
    count: usize,
}

fn gathered(assessment: &Assessment) -> Vec<Place<'_>> {
    let mut findings: Vec<&Finding> = assessment.findings.iter().collect();
    findings.sort_by(|a, b| a.from_station_m.total_cmp(&b.from_station_m));
    let mut places: Vec<Place<'_>> = Vec::new();
    for finding in findings {
        match places.iter_mut().find(|place| place.takes(finding)) {
            Some(place) => place.take(finding),
            None => places.push(Place {
                worst: finding,
                from_m: finding.from_station_m,
                to_m: finding.to_station_m,
                count: 1,
            }),
        }
    }
    let used = |place: &Place<'_>| place.worst.breach.worst.utilisation;
    places.sort_by(|a, b| used(b).total_cmp(&used(a)));
    places
}

impl<'a> Place<'a> {
    /// Findings come by where they begin; one across the seam of a closed track ends before it begins and stays alone.
    fn takes(&self, finding: &Finding) -> bool {
        let same_rule = (&self.worst.envelope, &self.worst.rule, &self.worst.variant)
            == (&finding.envelope, &finding.rule, &finding.variant);
        let straight = finding.from_station_m <= finding.to_station_m && self.from_m <= self.to_m;
        same_rule && straight && finding.from_station_m <= self.to_m
    }

    fn take(&mut self, finding: &'a Finding) {
        self.count += 1;
        self.to_m = self.to_m.max(finding.to_station_m);
        if finding.breach.worst.utilisation > self.worst.breach.worst.utilisation {
            self.worst = finding;
        }
    }
}

fn item(place: &Place<'_>, units: Units) -> String {
    let finding = place.worst;
    let landmark = finding.landmark.as_ref();
    format!(
        "{}, {}{}: {}; worst {}{} / {}{}{}; {}",
        finding.rule,
        units.stretch(place.from_m, place.to_m),
        landmark.map_or_else(String::new, |name| format!(" ({name})")),
        extent(finding, units),
        seat(finding),
        finding.variant,
        finding.scenario,
        speed(finding, units),
        at_limit(finding, units),
        counted(place.count, "finding"),
    )
}

/// How far beyond the limit, and for how long.
fn extent(finding: &Finding, units: Units) -> String {
    let spell = &finding.breach.worst;
    let used = utilisation(spell.utilisation);
    let load = units.measured(finding.unit, spell.load);
    let limit = units.measured(finding.unit, spell.limit);
    match finding.unit {
        Unit::StandardGravity => format!(
            "{used} of the limit, {load} for {} against {limit}",
            seconds(spell.duration_s)
        ),
        Unit::MetreASecond if spell.limit == 0.0 && spell.duration_s == 0.0 => {
            "the train stops or reverses".to_owned()
        }
        Unit::MetreASecond if spell.limit == 0.0 => {
            format!("the train does not stop, slowest {load}")
        }
        Unit::MetreASecond if used == "-" => format!("{load} against {limit}"),
        Unit::MetreASecond => format!("{used} of the limit, {load} against {limit}"),
    }
}

fn seat(finding: &Finding) -> String {
    let rider = finding.rider.as_ref();
    rider.map_or_else(String::new, |r| format!("in seat {}-{}, ", r.car, r.seat))
}

/// The speed at the worst load; where the load is the speed it has been said.
fn speed(finding: &Finding, units: Units) -> String {
    match finding.unit {
        Unit::StandardGravity => format!(", at {}", units.speed(finding.why.speed_m_s)),
        Unit::MetreASecond => String::new(),
    }
}

/// The speed that would bring the load to its limit, where there is one.
fn at_limit(finding: &Finding, units: Units) -> String {
    let mut remedies = finding.remedies.iter();
    let speed = remedies.find(|remedy| remedy.change == Change::Speed);
    speed.map_or_else(String::new, |remedy| {
        format!(" (at the limit with {})", units.speed(remedy.to))
    })
}
