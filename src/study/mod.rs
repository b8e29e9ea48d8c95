//! All cases of a study: every variant under every scenario, every seat against every envelope.
//!
//! [`Plan::new`] lays out the work and checks what only shows when the files are put together;
//! [`Plan::assess`] runs all cases in parallel and reduces each to what is reported, so that
//! memory does not grow with the number of cases. Cases come in file order however many threads run.

mod assessment;
mod case;
mod cautions;
mod holds;
mod meaning;
mod numerics;
mod plan;
mod record;
mod seat;
mod selection;
mod train_speed;
mod why;

pub use assessment::{
    Assessment, At, Case, Change, Extremes, Finding, Parts, Remedy, Rider, RuleResult, Run,
    SeatResult, Why,
};
pub use plan::{CaseId, Plan};
pub use record::{CaseRecord, SeatRecord};
pub use selection::Selection;

use crate::diagnostic::Diagnostic;
use crate::input;

/// Told how many cases of how many are done; called from several threads.
pub type Progress<'a> = &'a (dyn Fn(usize, usize) + Sync);

/// Runs the chosen cases of a study and holds them against its envelopes.
///
/// # Errors
/// Everything that is wrong in the files taken together, and names of the selection that do not exist.
pub fn assess(
    study: &input::Study,
    selection: &Selection,
    progress: Progress<'_>,
) -> Result<Assessment, Vec<Diagnostic>> {
    Ok(Plan::new(study, selection)?.assess(progress))
}
