//! An assessment as people read it: the outcome, what is worst and where, the cases, what was left out, the cautions.

mod cases;
mod entry;
pub(super) mod layout;
mod left_out;
mod places;
mod reading;
mod rules;

use super::number::Units;
use crate::envelope::Outcome;
use crate::study::{Assessment, Case};
use layout::{counted, list, wrapped};

/// The whole assessment, with a line end; no line is longer than 100 columns.
pub fn check_text(assessment: &Assessment, units: Units) -> String {
    let entries = entry::entries(assessment);
    [
        headline(assessment),
        outcome_of_each_variant(assessment),
        rules::worst_of_each_rule(assessment, &entries, units),
        places::places(assessment, units),
        cases::tables_of_cases(assessment, units),
        left_out::not_assessed(&entries),
        left_out::ignored(&entries, units),
        reading::how_to_read(&entries),
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

/// A line a variant where there are several: what one leaves must not hide that another does not.
fn outcome_of_each_variant(assessment: &Assessment) -> String {
    let variants = entry::variants(assessment);
    let several = variants.len() > 1;
    let line = |variant: &str| {
        let cases = assessment.cases.iter().filter(|c| c.variant == variant);
        let outcomes = cases.map(Case::outcome);
        let (count, outcome) = outcomes.fold((0, Outcome::Inside), |(count, worst), outcome| {
            (count + 1, worst.max(outcome))
        });
        let findings = assessment.findings.iter().filter(|f| f.variant == variant);
        let findings = counted(findings.count(), "finding");
        let line = format!(
            "{variant}: {outcome}, {findings} in {}",
            counted(count, "case")
        );
        wrapped(&line, "  ", "    ") + "\n"
    };
    let variants = variants.into_iter().filter(|_| several);
    variants.map(line).collect()
}

fn cautions(assessment: &Assessment) -> String {
    list("cautions", assessment.cautions.iter().cloned())
}
