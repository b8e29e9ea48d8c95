//! One line a case, a table a variant.

use super::entry::variants;
use super::layout::{glued, section};
use crate::envelope::Outcome;
use crate::report::end_key;
use crate::report::number::{Units, seconds, utilisation_with_band};
use crate::study::{Assessment, Case, Run};

const HEADER: [&str; 8] = [
    "scenario",
    "outcome",
    "run",
    "time",
    "ends at",
    "top speed",
    "findings",
    "worst rule",
];

pub(super) fn tables_of_cases(assessment: &Assessment, units: Units) -> String {
    let of_variant = |variant: &str| {
        let cases = assessment.cases.iter().filter(|c| c.variant == variant);
        let rows: Vec<_> = cases.map(|c| case_row(assessment, c, units)).collect();
        section(&format!("cases, {variant}"), &HEADER, &rows)
    };
    variants(assessment).into_iter().map(of_variant).collect()
}

fn case_row(assessment: &Assessment, case: &Case, units: Units) -> Vec<String> {
    let findings = assessment.findings.iter();
    let findings = findings.filter(|f| f.variant == case.variant && f.scenario == case.scenario);
    let of_run = |part: &dyn Fn(&Run) -> String| {
        let run = case.run.as_ref().ok();
        run.map_or_else(|| "-".to_owned(), |run| glued(&part(run)))
    };
    let top_speed = |run: &Run| {
        let speed_m_s = run.speed_m_s;
        speed_m_s.map_or("-".to_owned(), |e| units.speed(e.max.value))
    };
    vec![
        case.scenario.clone(),
        case.outcome().to_string(),
        end(case),
        of_run(&|r| seconds(r.duration_s)),
        of_run(&|r| units.station(r.end_station_m)),
        of_run(&top_speed),
        findings.count().to_string(),
        worst_rule(case),
    ]
}

fn end(case: &Case) -> String {
    let run = case.run.as_ref();
    run.map_or_else(
        |_| "not made".to_owned(),
        |run| end_key(run.end).replace('-', " "),
    )
}

/// The worst rule that has a utilisation.
fn worst_rule(case: &Case) -> String {
    let rules = case.seats.iter().flat_map(|seat| &seat.rules);
    let judged = rules.map(|rule| &rule.judgement);
    let used = judged.filter_map(|judgement| Some((judgement, judgement.utilisation?)));
    let worst =
        used.max_by(|(a, of_a), (b, of_b)| a.outcome.cmp(&b.outcome).then(of_a.total_cmp(of_b)));
    worst.map_or("-".to_owned(), |(judgement, used)| {
        let band = match judgement.outcome {
            Outcome::TooCloseToCall => judgement.band,
            // The table of rules has it; here it would only widen the column.
            _ => 0.0,
        };
        glued(&format!(
            "{} {}",
            judgement.rule,
            utilisation_with_band(used, band)
        ))
    })
}
