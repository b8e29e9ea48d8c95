//! Results written down: for people, for machines, and as time histories.
//!
//! Writers take results and give text or write to what they are handed; they open no file and know no terminal.

mod audit;
mod csv;
mod json;
mod number;
mod text;

pub use audit::{spine_json, spine_text, write_spine};
pub use csv::write_record;
pub use json::check_json;
pub use number::Units;
pub use text::check_text;

use crate::envelope::Outcome;
use crate::motion::RunEnd;

/// An outcome as machines read it.
fn outcome_key(outcome: Outcome) -> &'static str {
    match outcome {
        Outcome::Inside => "inside",
        Outcome::NotAssessed => "not-assessed",
        Outcome::TooCloseToCall => "too-close-to-call",
        Outcome::Review => "review",
        Outcome::Outside => "outside",
    }
}

/// The end of a run as machines read it; people read it with spaces.
fn end_key(end: RunEnd) -> &'static str {
    match end {
        RunEnd::Completed => "completed",
        RunEnd::Overran => "overran",
        RunEnd::Stalled => "stalled",
        RunEnd::RolledBack => "rolled-back",
        RunEnd::TimeLimit => "time-limit",
    }
}
