//! Rules held against loads: one judgement a rule.
//!
//! Knows a load as a time series only; where on the ride a moment lies is the
//! study's business. One file a rule kind; [`judge`] is the way in.

mod curve;
mod findings;
mod judgement;
mod signal;
mod spells;
mod sustained;

pub use judgement::{Breach, Ignored, Judgement, Outcome, RunState, Spell};

use crate::input::{self, RuleKind};
use crate::loads::Filtered;

/// Holds one filtered record against every rule of an envelope, in file order.
///
/// All times of the judgements have the filter's delay removed and are not below 0.
pub fn judge(envelope: &input::Envelope, record: &Filtered, run: &RunState) -> Vec<Judgement> {
    let finite = record
        .axes_g
        .each_ref()
        .map(|axis_g| axis_g.iter().all(|load_g| load_g.is_finite()));
    envelope
        .rules
        .iter()
        .map(|rule| match &rule.kind {
            RuleKind::Sustained(demand) => {
                let verdict = if finite[demand.axis as usize] {
                    sustained::assess(demand, record)
                } else {
                    Err("the load is not finite at some instant".to_owned())
                };
                Judgement::new(envelope, rule, verdict, run)
            }
        })
        .collect()
}

/// Judgements of an envelope for a run that could not be made at all.
pub fn not_assessed(envelope: &input::Envelope, reason: &str) -> Vec<Judgement> {
    let run = RunState::Incomplete(reason.to_owned());
    envelope
        .rules
        .iter()
        .map(|rule| Judgement::new(envelope, rule, Err(reason.to_owned()), &run))
        .collect()
}
