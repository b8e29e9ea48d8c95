//! Narrowing a study to some variants, scenarios and seats.

use crate::diagnostic::Diagnostic;

/// Names to keep; an empty list keeps all.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Selection {
    /// Names of variants.
    pub variants: Vec<String>,
    /// Names of scenarios.
    pub scenarios: Vec<String>,
    /// Seats as `1-front-left`: car from 1 at the front, then the seat's name.
    pub seats: Vec<String>,
}

/// Whether a list of names keeps a name.
pub(super) fn keeps(chosen: &[String], name: &str) -> bool {
    chosen.is_empty() || chosen.iter().any(|c| c == name)
}

/// Names that were asked for and do not exist, each with what is nearest.
pub(super) fn unknown_names(
    kind: &str,
    chosen: &[String],
    known: &[String],
) -> impl Iterator<Item = Diagnostic> {
    chosen
        .iter()
        .filter(|name| !known.contains(name))
        .map(move |name| suggest(format!("there is no {kind} `{name}`"), name, known))
}

/// An error about an unknown name, with the nearest known one or the list of all.
pub(super) fn suggest(message: String, name: &str, known: &[String]) -> Diagnostic {
    let nearest = known
        .iter()
        .map(|k| (strsim::jaro_winkler(name, k), k))
        .max_by(|a, b| a.0.total_cmp(&b.0));
    let hint = match nearest {
        Some((likeness, nearest)) if likeness > 0.8 => format!("did you mean `{nearest}`?"),
        _ => format!("expected one of {}", listed(known)),
    };
    Diagnostic::error(message).hint(hint)
}

/// The first names of a list, in backticks.
fn listed(names: &[String]) -> String {
    let shown: Vec<String> = names.iter().take(12).map(|n| format!("`{n}`")).collect();
    let more = match names.len().saturating_sub(shown.len()) {
        0 => String::new(),
        more => format!(" and {more} more"),
    };
    shown.join(", ") + &more
}
