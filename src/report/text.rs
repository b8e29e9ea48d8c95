//! An assessment as people read it: the outcome, what is worst and where, the cases, what was left out, the cautions.

use std::fmt::Write;

use comfy_table::{ContentArrangement, Table, presets};

use super::end_key;
use super::number::{Units, load, seconds, utilisation};
use crate::envelope::{Ignored, Outcome};
use crate::study::{Assessment, Case, RuleResult, Run, SeatResult};

/// No line is longer.
const WIDTH: u16 = 100;

/// The whole assessment, with a line end.
pub fn check_text(assessment: &Assessment, units: Units) -> String {
    let entries = entries(assessment);
    let mut text = headline(assessment);
    text += &worst_of_each_rule(assessment, &entries, units);
    text += &table_of_cases(assessment, units);
    text += &not_assessed(&entries);
    text += &ignored(&entries, units);
    text += &cautions(assessment);
    text
}

/// One rule in one seat of one case.
#[derive(Clone, Copy)]
struct Entry<'a> {
    case: &'a Case,
    seat: &'a SeatResult,
    rule: &'a RuleResult,
}

impl Entry<'_> {
    fn same_rule(&self, other: &Self) -> bool {
        let (a, b) = (&self.rule.judgement, &other.rule.judgement);
        a.envelope == b.envelope && a.rule == b.rule
    }

    /// Outcome first, then utilisation.
    fn is_worse_than(&self, other: &Self) -> bool {
        let (a, b) = (&self.rule.judgement, &other.rule.judgement);
        let order = a.outcome.cmp(&b.outcome);
        let used = |u: Option<f64>| u.unwrap_or(0.0);
        order
            .then(used(a.utilisation).total_cmp(&used(b.utilisation)))
            .is_gt()
    }

    fn seat_name(&self) -> String {
        format!("{}-{}", self.seat.car, self.seat.seat)
    }

    fn case_name(&self) -> String {
        case_name(self.case)
    }
}

fn case_name(case: &Case) -> String {
    format!("{} / {}", case.variant, case.scenario)
}

fn entries(assessment: &Assessment) -> Vec<Entry<'_>> {
    let of_seat = |case, seat| {
        let rules = |s: &'_ SeatResult| s.rules.len();
        (0..rules(seat)).map(move |i| Entry {
            case,
            seat,
            rule: &seat.rules[i],
        })
    };
    let cases = assessment.cases.iter();
    cases
        .flat_map(|case| case.seats.iter().flat_map(move |seat| of_seat(case, seat)))
        .collect()
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

fn headline(assessment: &Assessment) -> String {
    let mut envelopes: Vec<&str> = Vec::new();
    let rules = assessment.cases.iter().flat_map(|c| &c.seats);
    for rule in rules.flat_map(|s| &s.rules) {
        if !envelopes.contains(&rule.judgement.envelope.as_str()) {
            envelopes.push(&rule.judgement.envelope);
        }
    }
    let given = if envelopes.len() > 1 {
        "envelopes"
    } else {
        "envelope"
    };
    let counts = format!(
        "{} in {}",
        counted(assessment.findings.len(), "finding"),
        counted(assessment.cases.len(), "case")
    );
    let line = format!(
        "{} of the {given} given ({}): {counts}",
        assessment.outcome,
        envelopes.join("; ")
    );
    wrapped(&line, "", "") + "\n"
}

fn worst_of_each_rule(assessment: &Assessment, entries: &[Entry<'_>], units: Units) -> String {
    let mut table = new_table(&[
        "rule", "outcome", "of limit", "load", "limit", "for", "seat at", "seat", "case",
    ]);
    for worst in worst_entries(entries) {
        table.add_row(worst_row(assessment, &worst, units));
    }
    section("worst of each rule", &table)
}

fn worst_row(assessment: &Assessment, worst: &Entry<'_>, units: Units) -> Vec<String> {
    let judgement = &worst.rule.judgement;
    let spell = judgement.governing;
    let shown = |text: Option<String>| text.unwrap_or_else(|| "-".to_owned());
    vec![
        judgement.rule.clone(),
        judgement.outcome.to_string(),
        shown(judgement.utilisation.map(utilisation)),
        shown(spell.map(|s| load(s.load_g))),
        shown(spell.map(|s| load(s.limit_g))),
        shown(spell.map(|s| seconds(s.duration_s))),
        shown(worst.rule.station_m.map(|m| units.station(m))) + &landmark(assessment, worst),
        worst.seat_name(),
        worst.case_name(),
    ]
}

/// The landmark of the finding that an entry's governing window belongs to.
fn landmark(assessment: &Assessment, entry: &Entry<'_>) -> String {
    let judgement = &entry.rule.judgement;
    let mut findings = assessment.findings.iter();
    let found = findings.find(|f| {
        f.variant == entry.case.variant
            && f.scenario == entry.case.scenario
            && (f.car, &f.seat) == (entry.seat.car, &entry.seat.seat)
            && (&f.envelope, &f.rule) == (&judgement.envelope, &judgement.rule)
            && Some(f.breach.worst) == judgement.governing
    });
    let name = found.and_then(|f| f.landmark.as_deref());
    name.map_or_else(String::new, |name| format!(" {name}"))
}

fn table_of_cases(assessment: &Assessment, units: Units) -> String {
    let mut table = new_table(&[
        "case",
        "outcome",
        "run",
        "time",
        "ends at",
        "top speed",
        "findings",
        "worst rule",
    ]);
    for case in &assessment.cases {
        table.add_row(case_row(assessment, case, units));
    }
    section("cases", &table)
}

fn case_row(assessment: &Assessment, case: &Case, units: Units) -> Vec<String> {
    let rules = case.seats.iter().flat_map(|s| &s.rules);
    let outcome = rules.clone().map(|r| r.judgement.outcome).max();
    let used = |r: &&RuleResult| r.judgement.utilisation.unwrap_or(-1.0);
    let worst = rules.max_by(|a, b| used(a).total_cmp(&used(b)));
    let worst = worst.and_then(|r| Some((&r.judgement.rule, r.judgement.utilisation?)));
    let findings = assessment.findings.iter();
    let findings = findings.filter(|f| f.variant == case.variant && f.scenario == case.scenario);
    let of_run = |part: &dyn Fn(&Run) -> String| {
        let run = case.run.as_ref().ok();
        run.map_or_else(|| "-".to_owned(), part)
    };
    vec![
        case_name(case),
        outcome.unwrap_or(Outcome::NotAssessed).to_string(),
        case.run.as_ref().map_or_else(
            |_| "not made".to_owned(),
            |r| end_key(r.end).replace('-', " "),
        ),
        of_run(&|r| seconds(r.duration_s)),
        of_run(&|r| units.station(r.end_station_m)),
        of_run(&|r| {
            r.speed_m_s
                .map_or("-".to_owned(), |e| units.speed(e.max.value))
        }),
        findings.count().to_string(),
        worst.map_or("-".to_owned(), |(rule, u)| {
            format!("{rule} {}", utilisation(u))
        }),
    ]
}

/// What was not assessed, a line for each case and reason.
fn not_assessed(entries: &[Entry<'_>]) -> String {
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
fn ignored(entries: &[Entry<'_>], units: Units) -> String {
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

fn cautions(assessment: &Assessment) -> String {
    list("cautions", assessment.cautions.iter().cloned())
}

fn new_table(header: &[&str]) -> Table {
    let mut table = Table::new();
    table
        .load_style(presets::NOTHING)
        .set_content_arrangement(ContentArrangement::Dynamic)
        .set_width(WIDTH - 2)
        .set_header(header.to_vec());
    table
}

fn section(title: &str, table: &Table) -> String {
    let mut text = format!("\n{title}\n");
    for line in table.lines() {
        let _ = writeln!(text, " {}", line.trim_end());
    }
    text
}

fn list(title: &str, items: impl Iterator<Item = String>) -> String {
    let items: String = items.map(|i| wrapped(&i, "  - ", "    ") + "\n").collect();
    if items.is_empty() {
        return items;
    }
    format!("\n{title}\n{items}")
}

fn wrapped(text: &str, first: &str, rest: &str) -> String {
    let options = textwrap::Options::new(WIDTH.into())
        .initial_indent(first)
        .subsequent_indent(rest);
    textwrap::fill(text, options)
}

fn counted(count: usize, what: &str) -> String {
    match count {
        1 => format!("1 {what}"),
        _ => format!("{count} {what}s"),
    }
}
