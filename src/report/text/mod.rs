//! An assessment as people read it: the outcome, what is worst and where, the cases, what was left out, the cautions.

mod cases;
mod entry;
pub(super) mod layout;
mod left_out;
mod places;
mod rules;

use super::number::Units;
use crate::study::Assessment;
use layout::{counted, list, wrapped};

/// The whole assessment, with a line end; no line is longer than 100 columns.
pub fn check_text(assessment: &Assessment, units: Units) -> String {
    let entries = entry::entries(assessment);
    [
        headline(assessment),
        rules::worst_of_each_rule(&entries, units),
        places::places(assessment, units),
        cases::table_of_cases(assessment, units),
        left_out::not_assessed(&entries),
        left_out::ignored(&entries, units),
        cautions(assessment),
    ]
    .concat()
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

fn cautions(assessment: &Assessment) -> String {
    list("cautions", assessment.cautions.iter().cloned())
}
