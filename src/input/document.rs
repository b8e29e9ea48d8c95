//! A YAML text as a tree in which everything knows its place.
//!
//! `serde_yaml` says what the text means and what is wrong with its syntax; the
//! events of `saphyr-parser` say where each thing stands. The two are walked
//! together. What YAML allows and our files do not (anchors, tags, merge keys, a
//! second document, a key given twice) is refused here.

use std::ops::Range;
use std::sync::Arc;

use saphyr_parser::{Event, Parser, Span, StrInput};

use crate::diagnostic::{Diagnostic, Place, Source};
use crate::input::keys::{give_meaning, refuse_keys};
use crate::input::shape::Shape;

/// Deepest nesting that is read; our files need eight.
const DEPTH: usize = 64;

/// One value of a document.
#[derive(Clone, Debug)]
pub(super) struct Node {
    /// Its bytes.
    pub(super) span: Range<usize>,
    /// What it is.
    pub(super) kind: Kind,
}

/// What a node is.
#[derive(Clone, Debug)]
pub(super) enum Kind {
    /// Text as written (quotes taken off), and what YAML takes it for.
    Scalar(String, Meaning),
    /// A list.
    List(Vec<Node>),
    /// Keys, all scalars and all different, with their values.
    Map(Vec<(Node, Node)>),
}

/// What YAML takes a scalar for.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Meaning {
    /// Nothing, `~` or `null`.
    Nothing,
    /// `true` or `false`.
    Truth,
    /// A number, finite or not.
    Number(f64),
    /// Anything else.
    Text,
}

/// Parses one document; mistakes that leave a tree are pushed on `found`.
pub(super) fn parse(source: &Arc<Source>, found: &mut Vec<Diagnostic>) -> Result<Node, Diagnostic> {
    let mut node = Builder::new(source).document()?;
    let shape = Shape::of(source)?;
    give_meaning(&mut node, shape, source)?;
    refuse_keys(&mut node, "", source, found);
    Ok(node)
}

/// Reads events into a tree, meanings still unknown.
struct Builder<'a> {
    source: &'a Arc<Source>,
    parser: Parser<'a, StrInput<'a>>,
    byte_of_char: Option<Vec<usize>>,
}

impl<'a> Builder<'a> {
    fn new(source: &'a Arc<Source>) -> Self {
        let text = source.text.as_str();
        let ends = std::iter::once(text.len());
        Self {
            source,
            parser: Parser::new_from_str(text),
            byte_of_char: (!text.is_ascii())
                .then(|| text.char_indices().map(|(at, _)| at).chain(ends).collect()),
        }
    }

    fn document(&mut self) -> Result<Node, Diagnostic> {
        let mut root = None;
        loop {
            match self.next()? {
                (Event::StreamEnd, _) => break,
                (
                    Event::StreamStart
                    | Event::DocumentStart(_)
                    | Event::DocumentEnd
                    | Event::Nothing,
                    _,
                ) => {}
                (_, span) if root.is_some() => {
                    return Err(self.error(
                        span,
                        "a second document begins here, expected one document a file",
                    ));
                }
                (event, span) => root = Some(self.node(event, span, 0)?),
            }
        }
        root.ok_or_else(|| self.error(0..0, "the file holds nothing but comments"))
    }

    fn next(&mut self) -> Result<(Event<'a>, Range<usize>), Diagnostic> {
        match self.parser.next_event() {
            Some(Ok((event, span))) => Ok((event, self.bytes(span))),
            Some(Err(error)) => Err(self.syntax_error(&error)),
            None => Ok((Event::StreamEnd, 0..0)),
        }
    }

    /// `serde_yaml`'s message where it sees the mistake as well.
    fn syntax_error(&self, error: &saphyr_parser::ScanError) -> Diagnostic {
        let at = self.byte(error.marker().index());
        if error.info().contains("recursion limit") {
            // `serde_yaml` would take seconds for a file full of brackets.
            return self.too_deep(at..at);
        }
        Shape::of(self.source)
            .err()
            .unwrap_or_else(|| self.error(at..at, format!("not YAML: {}", error.info())))
    }

    fn too_deep(&self, span: Range<usize>) -> Diagnostic {
        let message = format!("values nested deeper than {DEPTH}, expected at most {DEPTH} levels");
        self.error(span, message)
    }

    fn node(
        &mut self,
        event: Event<'a>,
        span: Range<usize>,
        depth: usize,
    ) -> Result<Node, Diagnostic> {
        if depth > DEPTH {
            return Err(self.too_deep(span));
        }
        match event {
            Event::Alias(_) => Err(self
                .error(span, "an alias stands here, expected the value itself")
                .hint("anchors and aliases are not read: write the value out")),
            Event::Scalar(_, _, anchor, ref tag)
            | Event::SequenceStart(anchor, ref tag)
            | Event::MappingStart(anchor, ref tag)
                if anchor > 0 || tag.is_some() =>
            {
                Err(self.error(
                    span,
                    "an anchor or a tag stands here, expected the value alone",
                ))
            }
            Event::Scalar(text, ..) => Ok(Node {
                span,
                kind: Kind::Scalar(text.into_owned(), Meaning::Text),
            }),
            Event::SequenceStart(..) => self.list(span.start, depth),
            Event::MappingStart(..) => self.map(span.start, depth),
            _ => Err(self.error(span, "found no value here, expected one")),
        }
    }

    fn list(&mut self, start: usize, depth: usize) -> Result<Node, Diagnostic> {
        let mut items = Vec::new();
        let end = loop {
            match self.next()? {
                (Event::SequenceEnd, span) => break span.end,
                (event, span) => items.push(self.node(event, span, depth + 1)?),
            }
        };
        let ends = items
            .first()
            .zip(items.last())
            .map(|(first, last)| (first.span.start, last.span.end));
        Ok(Node {
            span: self.extent(start..end, ends),
            kind: Kind::List(items),
        })
    }

    fn map(&mut self, start: usize, depth: usize) -> Result<Node, Diagnostic> {
        let mut entries: Vec<(Node, Node)> = Vec::new();
        let end = loop {
            let (event, span) = self.next()?;
            if matches!(event, Event::MappingEnd) {
                break span.end;
            }
            let key = self.node(event, span, depth + 1)?;
            let (event, span) = self.next()?;
            let mut value = self.node(event, span, depth + 1)?;
            if value.span.is_empty() {
                // Nothing was written: its key is what can be shown.
                value.span = key.span.clone();
            }
            entries.push((key, value));
        };
        let ends = entries
            .first()
            .zip(entries.last())
            .map(|(first, last)| (first.0.span.start, last.1.span.end));
        Ok(Node {
            span: self.extent(start..end, ends),
            kind: Kind::Map(entries),
        })
    }

    /// A collection in brackets covers them; one by indentation covers its items.
    fn extent(&self, events: Range<usize>, items: Option<(usize, usize)>) -> Range<usize> {
        let bracket = matches!(
            self.source.text.as_bytes().get(events.start),
            Some(b'{' | b'[')
        );
        match items {
            Some((first, last)) if !bracket => first..last.max(first),
            _ => events.start..events.end.max(events.start),
        }
    }

    fn bytes(&self, span: Span) -> Range<usize> {
        let start = self.byte(span.start.index());
        start..self.byte(span.end.index()).max(start)
    }

    fn byte(&self, char_index: usize) -> usize {
        let length = self.source.text.len();
        match &self.byte_of_char {
            Some(table) => table.get(char_index).copied().unwrap_or(length),
            None => char_index.min(length),
        }
    }

    fn error(&self, span: Range<usize>, message: impl Into<String>) -> Diagnostic {
        Diagnostic::error(message).at(&place(self.source, span))
    }
}

pub(super) fn place(source: &Arc<Source>, span: Range<usize>) -> Place {
    Place {
        source: Arc::clone(source),
        span,
    }
}

/// The path of a key below another.
pub(super) fn join(path: &str, key: &str) -> String {
    match path {
        "" => key.to_owned(),
        _ => format!("{path}.{key}"),
    }
}

impl Node {
    /// The text of a scalar; empty for anything else.
    pub(super) fn text(&self) -> &str {
        match &self.kind {
            Kind::Scalar(text, _) => text,
            _ => "",
        }
    }

    /// The node in words, for a message.
    pub(super) fn in_words(&self) -> String {
        match &self.kind {
            Kind::Scalar(_, Meaning::Nothing) => "nothing".to_owned(),
            Kind::Scalar(text, _) => format!("`{}`", shortened(text)),
            Kind::List(_) => "a list".to_owned(),
            Kind::Map(_) => "keys and values".to_owned(),
        }
    }
}

fn shortened(text: &str) -> String {
    match text.chars().count() {
        0..=60 => text.to_owned(),
        _ => text.chars().take(57).chain("...".chars()).collect(),
    }
}
