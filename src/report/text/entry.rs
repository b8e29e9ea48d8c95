//! One rule in one seat of one case, as the tables go through them.

use crate::envelope::Unit;
use crate::study::{Assessment, Case, RuleResult, SeatResult};

/// One rule in one seat of one case; a rule about the train in the first seat.
#[derive(Clone, Copy)]
pub(super) struct Entry<'a> {
    pub(super) case: &'a Case,
    pub(super) seat: &'a SeatResult,
    pub(super) rule: &'a RuleResult,
}

impl Entry<'_> {
    pub(super) fn same_rule(&self, other: &Self) -> bool {
        let (a, b) = (&self.rule.judgement, &other.rule.judgement);
        a.envelope == b.envelope && a.rule == b.rule
    }

    /// Outcome first, then utilisation.
    pub(super) fn is_worse_than(&self, other: &Self) -> bool {
        let (a, b) = (&self.rule.judgement, &other.rule.judgement);
        let order = a.outcome.cmp(&b.outcome);
        let used = |u: Option<f64>| u.unwrap_or(0.0);
        order
            .then(used(a.utilisation).total_cmp(&used(b.utilisation)))
            .is_gt()
    }

    /// Whether it is about what a rider feels, not about the train.
    pub(super) fn is_felt(&self) -> bool {
        self.rule.judgement.unit == Unit::StandardGravity
    }

    pub(super) fn seat_name(&self) -> String {
        if !self.is_felt() {
            return "train".to_owned();
        }
        format!("{}-{}", self.seat.car, self.seat.seat)
    }

    pub(super) fn case_name(&self) -> String {
        case_name(self.case)
    }
}

pub(super) fn case_name(case: &Case) -> String {
    format!("{} / {}", case.variant, case.scenario)
}

/// Names of the variants, in file order.
pub(super) fn variants(assessment: &Assessment) -> Vec<&str> {
    let mut names: Vec<&str> = assessment
        .cases
        .iter()
        .map(|c| c.variant.as_str())
        .collect();
    names.dedup();
    names
}

pub(super) fn entries(assessment: &Assessment) -> Vec<Entry<'_>> {
    let mut entries = Vec::new();
    for case in &assessment.cases {
        for (number, seat) in case.seats.iter().enumerate() {
            let rules = seat.rules.iter().map(|rule| Entry { case, seat, rule });
            // What is about the train is the same in every seat.
            entries.extend(rules.filter(|entry| number == 0 || entry.is_felt()));
        }
    }
    entries
}
