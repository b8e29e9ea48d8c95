//! The worst entry of each rule, a table a variant.

use super::entry::{Entry, variants};
use super::layout::{glued, section};
use crate::envelope::{Judgement, Outcome, Spell};
use crate::report::number::{Units, seconds, shows_as_zero, utilisation_with_band};
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
    let used = judgement.utilisation;
    let spell = shown_spell(judgement);
    let held = spell.filter(|_| worst.is_felt());
    let station_m = worst.rule.station_m.filter(|_| spell.is_some());
    vec![
        judgement.rule.clone(),
        judgement.outcome.to_string(),
        shown(used.map(|u| utilisation_with_band(u, judgement.band))),
        shown(spell.map(|s| units.measured(judgement.unit, s.load))),
        shown(spell.map(|s| units.measured(judgement.unit, s.limit))),
        shown(held.map(|s| seconds(s.duration_s))),
        shown(station_m.map(|m| units.station(m))),
        spell.map_or_else(|| "-".to_owned(), |_| place(worst)),
    ]
}

/// The governing spell, unless its load is nothing but rounding: nobody feels that.
fn shown_spell(judgement: &Judgement) -> Option<Spell> {
    let nothing = judgement.utilisation.is_some_and(shows_as_zero);
    judgement.governing.filter(|_| !nothing)
}

/// Who feels it and when.
fn place(worst: &Entry<'_>) -> String {
    format!("{}, {}", worst.seat_name(), worst.case.scenario)
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
        let held = |w: &&mut Entry<'_>| w.same_rule(&entry) && assessed(w) == assessed(&entry);
        match worst.iter_mut().find(held) {
            Some(held) if entry.is_worse_than(held) => *held = entry,
            Some(_) => {}
            None => worst.push(entry),
        }
    }
    worst.sort_by_key(|e| std::cmp::Reverse(e.rule.judgement.outcome));
    worst
}

fn assessed(entry: &Entry<'_>) -> bool {
    entry.rule.judgement.outcome != Outcome::NotAssessed
}
