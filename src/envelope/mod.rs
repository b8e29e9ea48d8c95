//! Rules held against loads and speeds: one judgement a rule.
//!
//! Knows a load as a time series only; where on the ride a moment lies is the
//! study's business, which hands over the stretches of a record that a rule is about
//! ([`Scope`]). One file a rule kind; [`judge`] and [`judge_speed`] are the ways in.

mod curve;
mod findings;
mod judgement;
mod scope;
mod signal;
mod speed;
mod spells;
mod sustained;

pub use judgement::{Breach, Ignored, Judgement, Outcome, RunState, Spell, Unit};
pub use scope::{Scope, Stretch};
pub use speed::SpeedRecord;

use crate::input::{self, Rule, RuleKind};
use crate::loads::Filtered;
use judgement::Verdict;
use scope::Held;

/// Holds one filtered record against a rule about what a rider feels, within a scope of that record.
///
/// All times of the judgement have the filter's delay removed and are not below 0. `None` where the
/// rule is about something else: other seats or scenarios, or the speed of the train.
pub fn judge(
    envelope: &input::Envelope,
    rule: &Rule,
    record: &Filtered,
    scope: &Scope,
    run: &RunState,
) -> Option<Judgement> {
    let RuleKind::Sustained(demand) = &rule.kind else {
        return None;
    };
    let load_g = &record.axes_g[demand.axis as usize];
    let held = scope.held(load_g.len())?;
    let verdict = if load_g.iter().all(|load_g| load_g.is_finite()) {
        sustained::assess(demand, rule.factor(), record, &held.stretches)
    } else {
        Err("the load is not finite at some instant".to_owned())
    };
    Some(weighed(envelope, rule, verdict, &held, run))
}

/// Holds the speed of the train against a `speed` rule, within a scope of its record.
///
/// `None` where the rule is about other scenarios, or not about speed.
pub fn judge_speed(
    envelope: &input::Envelope,
    rule: &Rule,
    record: &SpeedRecord,
    scope: &Scope,
    run: &RunState,
) -> Option<Judgement> {
    let RuleKind::Speed(bounds) = &rule.kind else {
        return None;
    };
    let held = scope.held(record.speed_m_s.len())?;
    let complete = *run == RunState::Complete;
    let verdict = speed::assess(bounds, rule.factor(), record, &held.stretches, complete);
    Some(weighed(envelope, rule, verdict, &held, run))
}

/// The judgement of a rule for a run that could not be made at all.
pub fn not_assessed(envelope: &input::Envelope, rule: &Rule, reason: &str) -> Judgement {
    let run = RunState::Incomplete(reason.to_owned());
    Judgement::new(envelope, rule, Err(reason.to_owned()), &run)
}

/// What the record does not hold counts like a part of the run that was not made.
fn weighed(
    envelope: &input::Envelope,
    rule: &Rule,
    verdict: Result<Verdict, String>,
    held: &Held,
    run: &RunState,
) -> Judgement {
    let run = match (run, &held.missing) {
        (RunState::Complete, Some(missing)) => &RunState::Incomplete(missing.clone()),
        (RunState::Incomplete(reason), Some(missing)) => {
            &RunState::Incomplete(format!("{reason}; {missing}"))
        }
        (run, None) => run,
    };
    let verdict = if held.stretches.is_empty() {
        Err("the record holds nothing that the rule is about".to_owned())
    } else {
        verdict
    };
    Judgement::new(envelope, rule, verdict, run)
}
