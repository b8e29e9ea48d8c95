//! What was not assessed, and what rules left out.

use super::entry::Entry;
use super::layout::{counted, list};
use crate::envelope::{Ignored, Outcome};
use crate::report::number::{Units, load, seconds};

/// What was not assessed, a line for each case and reason.
pub(super) fn not_assessed(entries: &[Entry<'_>]) -> String {
    let mut groups: Vec<(String, &str, usize)> = Vec::new();
    for entry in entries {
        let judgement = &entry.rule.judgement;
        let (true, Some(reason)) = (
            judgement.outcome == Outcome::NotAssessed,
            judgement.reason.as_deref(),
        ) else {
            continue;
        };
        let case = entry.case_name();
        match groups.iter_mut().find(|g| g.0 == case && g.1 == reason) {
            Some(group) => group.2 += 1,
            None => groups.push((case, reason, 1)),
        }
    }
    let lines = groups.iter().map(|(case, reason, count)| {
        let count = counted(*count, "judgement");
        format!("{case}, {count}: {reason}")
    });
    list("not assessed", lines)
}

/// Spells that one rule ignored in one case.
struct IgnoredGroup<'a> {
    /// The seat with the worst of them.
    entry: Entry<'a>,
    worst: &'a Ignored,
    station_m: f64,
    count: usize,
}

/// What a rule's `ignore_below` left out, a line for each case and rule, with the worst spell.
pub(super) fn ignored(entries: &[Entry<'_>], units: Units) -> String {
    let lines = ignored_groups(entries).into_iter().map(|g| {
        format!(
            "{}, rule {}: {}, the worst {} for {} at {}, seat {}",
            g.entry.case_name(),
            g.entry.rule.judgement.rule,
            counted(g.count, "spell"),
            load(g.worst.peak_g),
            seconds(g.worst.duration_s),
            units.station(g.station_m),
            g.entry.seat_name(),
        )
    });
    list(
        "beyond a limit, but shorter than its rule's ignore_below",
        lines,
    )
}

fn ignored_groups<'a>(entries: &[Entry<'a>]) -> Vec<IgnoredGroup<'a>> {
    let mut groups: Vec<IgnoredGroup<'a>> = Vec::new();
    for &entry in entries {
        let spells = entry.rule.judgement.ignored.iter();
        for (worst, &station_m) in spells.zip(&entry.rule.ignored_station_m) {
            let same = |g: &&mut IgnoredGroup<'_>| {
                g.entry.same_rule(&entry) && std::ptr::eq(g.entry.case, entry.case)
            };
            let held = groups.iter_mut().find(same);
            let count = held.as_ref().map_or(0, |held| held.count) + 1;
            let new = IgnoredGroup {
                entry,
                worst,
                station_m,
                count,
            };
            match held {
                Some(held) if worst.utilisation > held.worst.utilisation => *held = new,
                Some(held) => held.count = count,
                None => groups.push(new),
            }
        }
    }
    groups
}
