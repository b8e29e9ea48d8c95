//! What is wrong with an input, as a value: severity, message, place, hints.
//!
//! Stages return diagnostics; the command line draws them ([`Diagnostic::render`]).

use std::fmt;
use std::ops::Range;
use std::sync::Arc;

use annotate_snippets::{Annotation, AnnotationKind, Level, Renderer, Snippet};

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

impl Place {
    /// Line and column of its first byte, both from 1; columns count characters.
    pub fn line_column(&self) -> (usize, usize) {
        let before = &self.source.text[..self.start()];
        let line_start = before.rfind('\n').map_or(0, |newline| newline + 1);
        let line = before.bytes().filter(|&byte| byte == b'\n').count() + 1;
        (line, before[line_start..].chars().count() + 1)
    }

    /// The text it covers.
    pub fn text(&self) -> &str {
        &self.source.text[self.start()..self.end()]
    }

    fn start(&self) -> usize {
        self.source.text.floor_char_boundary(self.span.start)
    }

    fn end(&self) -> usize {
        self.source
            .text
            .ceil_char_boundary(self.span.end)
            .max(self.start())
    }

    /// The same, without what follows its first line.
    fn first_line(&self) -> Range<usize> {
        let line = self.text().lines().next().unwrap_or("").trim_end().len();
        self.start()..self.start() + line
    }
}

impl Diagnostic {
    /// Line and column of its place, both from 1.
    pub fn line_column(&self) -> Option<(usize, usize)> {
        self.place.as_ref().map(Place::line_column)
    }

    /// Draws it for a person: message, place, the line with a mark, key, hints.
    ///
    /// `colour` adds terminal colours. The last line ends with a newline.
    pub fn render(&self, colour: bool) -> String {
        let renderer = match colour {
            true => Renderer::styled(),
            false => Renderer::plain(),
        };
        let level = match self.severity {
            Severity::Error => Level::ERROR,
            Severity::Warning => Level::WARNING,
        };
        let mut group = level
            .primary_title(self.message.as_str())
            .elements(self.snippets());
        if let Some(key) = &self.key {
            group = group.element(Level::NOTE.with_name("key").message(key.as_str()));
        }
        for hint in &self.hints {
            group = group.element(Level::HELP.with_name("hint").message(hint.as_str()));
        }
        let mut text = renderer.render(&[group]);
        text.push('\n');
        text
    }

    /// One snippet a place; only the line itself goes to the renderer, so that a large file costs nothing.
    fn snippets(&self) -> Vec<Snippet<'_, Annotation<'_>>> {
        let first = self.place.iter().map(|place| {
            let mark = AnnotationKind::Primary.span(place.in_its_line());
            place.snippet().annotation(mark)
        });
        let others = self.also.iter().map(|(place, label)| {
            let mark = AnnotationKind::Context.span(place.in_its_line());
            place.snippet().annotation(mark.label(label.as_str()))
        });
        first.chain(others).collect()
    }
}

impl Place {
    fn line_start(&self) -> usize {
        let before = &self.source.text[..self.start()];
        before.rfind('\n').map_or(0, |newline| newline + 1)
    }

    fn in_its_line(&self) -> Range<usize> {
        let span = self.first_line();
        span.start - self.line_start()..span.end - self.line_start()
    }

    fn snippet<'a, T: Clone>(&'a self) -> Snippet<'a, T> {
        let line = self.source.text[self.line_start()..].lines().next();
        Snippet::source(line.unwrap_or(""))
            .path(self.source.name.as_str())
            .line_start(self.line_column().0)
    }
}
