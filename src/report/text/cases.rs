//! One line a case.

use super::entry::case_name;
use super::layout::{new_table, section};
use crate::report::end_key;
use crate::report::number::{Units, seconds, utilisation};
use crate::study::{Assessment, Case, RuleResult, Run};

pub(super) fn table_of_cases(assessment: &Assessment, units: Units) -> String {
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
        case.outcome().to_string(),
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
