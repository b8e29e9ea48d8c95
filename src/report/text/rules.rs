//! The worst entry of each rule.

use super::entry::Entry;
use super::layout::{new_table, section};
use crate::report::number::{Units, seconds, utilisation};

pub(super) fn worst_of_each_rule(entries: &[Entry<'_>], units: Units) -> String {
    let mut table = new_table(&[
        "rule", "outcome", "of limit", "load", "limit", "for", "at", "seat", "case",
    ]);
    for worst in worst_entries(entries) {
        table.add_row(worst_row(&worst, units));
    }
    section("worst of each rule", &table)
}

fn worst_row(worst: &Entry<'_>, units: Units) -> Vec<String> {
    let judgement = &worst.rule.judgement;
    let spell = judgement.governing;
    let shown = |text: Option<String>| text.unwrap_or_else(|| "-".to_owned());
    vec![
        judgement.rule.clone(),
        judgement.outcome.to_string(),
        shown(judgement.utilisation.map(utilisation)),
        shown(spell.map(|s| units.measured(judgement.unit, s.load))),
        shown(spell.map(|s| units.measured(judgement.unit, s.limit))),
        shown(
            worst
                .is_felt()
                .then_some(spell)
                .flatten()
                .map(|s| seconds(s.duration_s)),
        ),
        shown(worst.rule.station_m.map(|m| units.station(m))),
        worst.seat_name(),
        worst.case_name(),
    ]
}

/// The worst entry of each rule, worst rule first; equal ones stay in file order.
fn worst_entries<'a>(entries: &[Entry<'a>]) -> Vec<Entry<'a>> {
    let mut worst: Vec<Entry<'a>> = Vec::new();
    for &entry in entries {
        match worst.iter_mut().find(|w| w.same_rule(&entry)) {
            Some(held) if entry.is_worse_than(held) => *held = entry,
            Some(_) => {}
            None => worst.push(entry),
        }
    }
    worst.sort_by_key(|e| std::cmp::Reverse(e.rule.judgement.outcome));
    worst
}
