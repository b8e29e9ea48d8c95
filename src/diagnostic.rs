//! What is wrong with an input, as a value: severity, message, place, hints.
//!
//! Stages return diagnostics; the command line draws them ([`Diagnostic::render`]).

use std::fmt;
use std::ops::Range;
use std::sync::Arc;

/// A text that was read, kept so that any part of it can be shown.
pub struct Source {
    /// The name under which the user knows it: the path as it was given or joined.
    pub name: String,
    /// The whole text.
    pub text: String,
}

impl fmt::Debug for Source {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{} ({} bytes)", self.name, self.text.len())
    }
}

/// A stretch of a source, as byte offsets.
#[derive(Clone)]
pub struct Place {
    /// The text it lies in.
    pub source: Arc<Source>,
    /// First byte and the byte after the last.
    pub span: Range<usize>,
}

impl fmt::Debug for Place {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(
            f,
            "{}[{}..{}]",
            self.source.name, self.span.start, self.span.end
        )
    }
}

/// How much weight a diagnostic has.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Severity {
    /// The input cannot be used.
    Error,
    /// The input is used; the user should know.
    Warning,
}

/// One mistake, with all that its writer needs to mend it.
///
/// Messages are lower case, without a full stop: what was found, what was
/// expected, with units.
#[derive(Clone, Debug)]
pub struct Diagnostic {
    /// Error or warning.
    pub severity: Severity,
    /// What was found and what was expected.
    pub message: String,
    /// Path of the key, such as `cars[0].mass`, where there is one.
    pub key: Option<String>,
    /// Where it stands.
    pub place: Option<Place>,
    /// Other places that belong to it, each with its label.
    pub also: Vec<(Place, String)>,
    /// Ways out.
    pub hints: Vec<String>,
}

impl Diagnostic {
    /// An error with its message.
    pub fn error(message: impl Into<String>) -> Self {
        Self {
            severity: Severity::Error,
            message: message.into(),
            key: None,
            place: None,
            also: Vec::new(),
            hints: Vec::new(),
        }
    }

    /// The same, at a place.
    #[must_use]
    pub fn at(mut self, place: &Place) -> Self {
        self.place = Some(place.clone());
        self
    }

    /// The same, with the path of the key.
    #[must_use]
    pub fn key(mut self, key: impl Into<String>) -> Self {
        self.key = Some(key.into());
        self
    }

    /// The same, with one more way out.
    #[must_use]
    pub fn hint(mut self, hint: impl Into<String>) -> Self {
        self.hints.push(hint.into());
        self
    }

    /// The same, with another place that belongs to it.
    #[must_use]
    pub fn also(mut self, place: &Place, label: impl Into<String>) -> Self {
        self.also.push((place.clone(), label.into()));
        self
    }
}
