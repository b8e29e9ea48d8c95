//! The places where a limit is left: findings of all seats and scenarios that overlap along the track are one place.

use std::cmp::Ordering;
use std::collections::BTreeSet;

use super::layout::{counted, glued, list_of_blocks};
use crate::envelope::{Outcome, Unit};
use crate::report::number::{Units, angle, bank, load, part, seconds, utilisation_with_band};
use crate::study::{Assessment, Change, Finding, Parts, Remedy};

/// No more places are printed: a list that nobody reads to its end hides what leads it.
const MOST_PLACES: usize = 20;

/// An item a place, worst first; nothing where there is no finding.
pub(super) fn places(assessment: &Assessment, units: Units) -> String {
    let places = gathered(assessment);
    let shown = places.iter().take(MOST_PLACES);
    let more = places.len().saturating_sub(MOST_PLACES);
    let more = (more > 0).then(|| {
        let places = counted(more, "more place");
        vec![format!(
            "{places} less far beyond; `--format json` has them all"
        )]
    });
    let items = shown.map(|place| item(place, units)).chain(more);
    let all_told = places.iter().all(|p| p.worst.outcome == Outcome::Outside);
    let title = if all_told {
        "where it leaves the envelope"
    } else {
        "where it leaves the envelope, or where that is not certain"
    };
    list_of_blocks(title, items)
}

/// Overlapping findings of one variant and rule.
struct Place<'a> {
    worst: &'a Finding,
    from_m: f64,
    to_m: f64,
    count: usize,
    seats: BTreeSet<(usize, &'a str)>,
    scenarios: BTreeSet<&'a str>,
}

fn gathered(assessment: &Assessment) -> Vec<Place<'_>> {
    let mut findings: Vec<&Finding> = assessment.findings.iter().collect();
    findings.sort_by(|a, b| a.from_station_m.total_cmp(&b.from_station_m));
    let mut places: Vec<Place<'_>> = Vec::new();
    for finding in findings {
        match places.iter_mut().find(|place| place.takes(finding)) {
            Some(place) => place.take(finding),
            None => places.push(Place::of(finding)),
        }
    }
    places.sort_by(|a, b| order(b.worst, a.worst));
    places
}

/// Outcome first, then utilisation.
fn order(a: &Finding, b: &Finding) -> Ordering {
    let used = |finding: &Finding| finding.breach.worst.utilisation;
    a.outcome.cmp(&b.outcome).then(used(a).total_cmp(&used(b)))
}

impl<'a> Place<'a> {
    fn of(finding: &'a Finding) -> Self {
        let mut place = Self {
            worst: finding,
            from_m: finding.from_station_m,
            to_m: finding.to_station_m,
            count: 0,
            seats: BTreeSet::new(),
            scenarios: BTreeSet::new(),
        };
        place.take(finding);
        place
    }

    /// Findings come by where they begin; one across the seam of a closed track ends before it begins and stays alone.
    fn takes(&self, finding: &Finding) -> bool {
        let same_rule = (&self.worst.envelope, &self.worst.rule, &self.worst.variant)
            == (&finding.envelope, &finding.rule, &finding.variant);
        let straight = finding.from_station_m <= finding.to_station_m && self.from_m <= self.to_m;
        same_rule && straight && finding.from_station_m <= self.to_m
    }

    fn take(&mut self, finding: &'a Finding) {
        self.count += 1;
        let riders = finding.rider.iter();
        self.seats.extend(riders.map(|r| (r.car, r.seat.as_str())));
        self.scenarios.insert(&finding.scenario);
        self.to_m = self.to_m.max(finding.to_station_m);
        if order(finding, self.worst).is_gt() {
            self.worst = finding;
        }
    }
}

/// How far, then who and when, why, and what would mend it.
fn item(place: &Place<'_>, units: Units) -> Vec<String> {
    let finding = place.worst;
    let felt = finding.unit == Unit::StandardGravity;
    [
        Some(headline(place, units)),
        Some(worst(place, units)),
        felt.then(|| state(finding, units)),
        finding
            .why
            .parts_g
            .as_ref()
            .filter(|_| felt)
            .map(|parts| split(finding, parts)),
        remedies(finding, units),
    ]
    .into_iter()
    .flatten()
    .collect()
}

fn headline(place: &Place<'_>, units: Units) -> String {
    let finding = place.worst;
    let landmark = finding.landmark.as_ref();
    let outcome = match finding.outcome {
        Outcome::Outside => String::new(),
        other => format!(", {other}"),
    };
    format!(
        "{}, {}{}{outcome}: {}",
        finding.rule,
        glued(&units.stretch(place.from_m, place.to_m)),
        landmark.map_or_else(String::new, |name| format!(" ({name})")),
        extent(finding, units),
    )
}

/// How far beyond the limit, and for how long.
fn extent(finding: &Finding, units: Units) -> String {
    let spell = &finding.breach.worst;
    let used = glued(&utilisation_with_band(spell.utilisation, finding.band));
    let load = glued(&units.measured(finding.unit, spell.load));
    let limit = glued(&units.measured(finding.unit, spell.limit));
    match finding.unit {
        Unit::StandardGravity => format!(
            "{used} of the limit, {load} for {} against {limit}",
            glued(&seconds(spell.duration_s))
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

fn worst(place: &Place<'_>, units: Units) -> String {
    let finding = place.worst;
    let who = match &finding.rider {
        Some(rider) => format!("{}-{}", rider.car, rider.seat),
        None => "train".to_owned(),
    };
    format!(
        "worst: {who}, {} / {}, at {}; {}",
        finding.variant,
        finding.scenario,
        glued(&units.station(finding.station_m)),
        spread(place),
    )
}

/// How many findings, and over how many seats and scenarios where there are several.
fn spread(place: &Place<'_>) -> String {
    let findings = counted(place.count, "finding");
    let scenarios = counted(place.scenarios.len(), "scenario");
    match (place.count, place.seats.len()) {
        (1, _) => findings,
        (_, 0) => format!("{findings} ({scenarios})"),
        (_, seats) => format!("{findings} ({}, {scenarios})", counted(seats, "seat")),
    }
}

/// The train and the track at the worst instant.
fn state(finding: &Finding, units: Units) -> String {
    let why = &finding.why;
    let radius = why.radius_m.map(|r| format!("radius {}", units.station(r)));
    let banked = why.bank_left_rad.map(|b| format!("bank {}", bank(b)));
    let parts = [
        Some(units.speed(why.speed_m_s)),
        radius,
        Some(format!("grade {}", angle(why.grade_rad))),
        banked,
    ];
    let parts: Vec<String> = parts.iter().flatten().map(|part| glued(part)).collect();
    format!("there: {}", parts.join(", "))
}

/// What the load is made of at its peak.
fn split(finding: &Finding, parts: &Parts) -> String {
    let parts = [
        ("gravity", parts.gravity),
        ("v²/radius", parts.normal),
        ("tangential", parts.tangential),
        ("seat offset", parts.offset),
    ];
    let parts = parts.map(|(name, value_g)| glued(&format!("{name} {}", part(value_g))));
    let peak = glued(&load(finding.breach.worst.peak));
    format!("peak {peak}: {}", parts.join(", "))
}

/// Single changes that would, to first order, bring the load to the limit.
fn remedies(finding: &Finding, units: Units) -> Option<String> {
    let changes: Vec<String> = finding.remedies.iter().map(|r| change(r, units)).collect();
    (!changes.is_empty()).then(|| format!("at the limit with {}", changes.join(", or ")))
}

fn change(remedy: &Remedy, units: Units) -> String {
    glued(&match remedy.change {
        Change::Speed => units.speed(remedy.to),
        Change::Radius => format!("radius {}", units.station(remedy.to)),
        Change::Bank => format!("bank {}", bank(remedy.to)),
    })
}
