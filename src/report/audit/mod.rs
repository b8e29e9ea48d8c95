//! The audit of a spine written down: for people, for machines, and station by station.

mod csv;
mod json;
mod text;

pub use csv::write_spine;
pub use json::spine_json;
pub use text::spine_text;
