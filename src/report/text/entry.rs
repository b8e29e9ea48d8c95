//! One rule in one seat of one case, as the tables go through them.

use crate::study::{Assessment, Case, RuleResult, SeatResult};

/// One rule in one seat of one case.
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

    pub(super) fn seat_name(&self) -> String {
        format!("{}-{}", self.seat.car, self.seat.seat)
    }

    pub(super) fn case_name(&self) -> String {
        case_name(self.case)
    }
}

pub(super) fn case_name(case: &Case) -> String {
    format!("{} / {}", case.variant, case.scenario)
}

pub(super) fn entries(assessment: &Assessment) -> Vec<Entry<'_>> {
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
