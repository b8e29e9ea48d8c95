//! The worst entry of each rule, a table a variant.

use super::entry::{Entry, variants};
use super::layout::{glued, section};
use crate::envelope::{Outcome, Spell};
use crate::report::number::{Units, seconds, utilisation_with_band};
use crate::study::Assessment;

const HEADER: [&str; 8] = [
    "rule",
    "outcome",
    "of limit",
    "load",
    "limit",
    "for",
    "at",
    "seat, scenario",
];

pub(super) fn worst_of_each_rule(
    assessment: &Assessment,
    entries: &[Entry<'_>],
    units: Units,
) -> String {
    let of_variant = |variant: &str| {
        let own = entries.iter().filter(|e| e.case.variant == variant);
        let worst = worst_entries(own.copied());
        let rows: Vec<_> = worst.iter().map(|w| worst_row(w, units)).collect();
        section(&format!("worst of each rule, {variant}"), &HEADER, &rows)
    };
    variants(assessment).into_iter().map(of_variant).collect()
}

fn worst_row(worst: &Entry<'_>, units: Units) -> Vec<String> {
    let judgement = &worst.rule.judgement;
    let spell = counted_spell(worst);
    let held = spell.filter(|_| worst.is_felt());
    let used = judgement.utilisation;
    vec![
        judgement.rule.clone(),
        judgement.outcome.to_string(),
        shown(used.map(|u| utilisation_with_band(u, judgement.band))),
        shown(spell.map(|s| units.measured(judgement.unit, s.load))),
        shown(spell.map(|s| units.measured(judgement.unit, s.limit))),
        shown(held.map(|s| seconds(s.duration_s))),
        shown(spell.and(worst.rule.station_m).map(|m| units.station(m))),
        place(worst),
    ]
}

/// A utilisation below this is printed as 0.
const PRINTED_AS_NOTHING: f64 = 5e-4;

/// What governs a rule, unless it is a trace of a load that would be printed as 0.
fn counted_spell(worst: &Entry<'_>) -> Option<Spell> {
    let spell = worst.rule.judgement.governing;
    spell.filter(|spell| spell.utilisation >= PRINTED_AS_NOTHING)
}

/// Who feels it and when; nobody where no load counts.
fn place(worst: &Entry<'_>) -> String {
    match counted_spell(worst) {
        Some(_) => format!("{}, {}", worst.seat_name(), worst.case.scenario),
        None => "-".to_owned(),
    }
}

fn shown(text: Option<String>) -> String {
    text.map_or_else(|| "-".to_owned(), |text| glued(&text))
}

/// The worst entry of each rule, worst rule first; equal ones stay in file order.
///
/// What could not be assessed has an entry of its own, so that it hides nothing of what could.
fn worst_entries<'a>(entries: impl Iterator<Item = Entry<'a>>) -> Vec<Entry<'a>> {
    let mut worst: Vec<Entry<'a>> = Vec::new();
    for entry in entries {
        let held = |w: &&mut Entry<'_>| w.same_rule(&entry) && is_blank(w) == is_blank(&entry);
        match worst.iter_mut().find(held) {
            Some(held) if entry.is_worse_than(held) => *held = entry,
            Some(_) => {}
            None => worst.push(entry),
        }
    }
    worst.sort_by_key(|e| std::cmp::Reverse(e.rule.judgement.outcome));
    worst
}

/// Not assessed, and without any figure.
fn is_blank(entry: &Entry<'_>) -> bool {
    let judgement = &entry.rule.judgement;
    judgement.outcome == Outcome::NotAssessed && judgement.governing.is_none()
}
