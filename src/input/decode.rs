//! Written types out of a document tree, by serde, with every mistake collected.
//!
//! Errors go up no further than the nearest [`Field`](super::field::Field), which
//! has them recorded here with place and key path; keys that a type does not have
//! are all recorded and passed over.

use std::cell::RefCell;
use std::fmt;
use std::sync::Arc;

use serde::de::{Deserialize, Deserializer, Expected, Visitor};
use serde::forward_to_deserialize_any;

use crate::diagnostic::{Diagnostic, Place, Source};
use crate::input::access::{Items, Keys, Parts, Word};
use crate::input::document::{Kind, Meaning, Node, join};
use crate::input::field::{FIELD, Field, WORD_OR_KEYS};

/// Decodes a whole document.
pub(super) fn decode<T: for<'de> Deserialize<'de>>(
    root: &Node,
    source: &Arc<Source>,
    found: &mut Vec<Diagnostic>,
) -> Field<T> {
    let sink = Sink {
        source,
        found: RefCell::new(Vec::new()),
    };
    let decoder = Decoder {
        node: root,
        path: String::new(),
        sink: &sink,
    };
    let field = Field::deserialize(decoder).unwrap_or(Field::Bad);
    found.append(&mut sink.found.into_inner());
    field
}

/// Why a value could not be decoded: a message, then a hint a line.
#[derive(Debug)]
pub(super) struct Mismatch(pub(super) String);

impl fmt::Display for Mismatch {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.0)
    }
}

impl std::error::Error for Mismatch {}

impl serde::de::Error for Mismatch {
    fn custom<T: fmt::Display>(message: T) -> Self {
        Self(message.to_string())
    }
}

/// The name most like `word`, if one is like it.
pub(super) fn nearest<'n>(word: &str, names: impl IntoIterator<Item = &'n str>) -> Option<&'n str> {
    let likeness = |name: &str| strsim::jaro_winkler(&word.to_lowercase(), &name.to_lowercase());
    names
        .into_iter()
        .map(|name| (likeness(name), name))
        .filter(|(likeness, _)| *likeness > 0.8)
        .max_by(|a, b| a.0.total_cmp(&b.0))
        .map(|(_, name)| name)
}

/// Names in backticks with commas.
pub(super) fn listed<'n>(names: impl IntoIterator<Item = &'n str>) -> String {
    let quoted: Vec<String> = names.into_iter().map(|name| format!("`{name}`")).collect();
    quoted.join(", ")
}

/// Where mistakes are collected.
struct Sink<'a> {
    source: &'a Arc<Source>,
    found: RefCell<Vec<Diagnostic>>,
}

impl Sink<'_> {
    fn record(&self, node: &Node, path: &str, text: &str) {
        let mut lines = text.lines();
        let mut diagnostic = Diagnostic::error(lines.next().unwrap_or_default()).at(&Place {
            source: Arc::clone(self.source),
            span: node.span.clone(),
        });
        diagnostic.hints.extend(lines.map(str::to_owned));
        diagnostic.key = (!path.is_empty()).then(|| path.to_owned());
        self.found.borrow_mut().push(diagnostic);
    }
}

/// One node with its key path.
#[derive(Clone)]
pub(super) struct Decoder<'a> {
    pub(super) node: &'a Node,
    pub(super) path: String,
    sink: &'a Sink<'a>,
}

impl<'a> Decoder<'a> {
    pub(super) fn child(&self, node: &'a Node, path: String) -> Self {
        Self {
            node,
            path,
            sink: self.sink,
        }
    }

    /// Records what is wrong with this node.
    pub(super) fn record(&self, mismatch: &Mismatch) {
        self.sink.record(self.node, &self.path, &mismatch.0);
    }

    fn mismatch<T>(&self, expected: &dyn Expected) -> Result<T, Mismatch> {
        let found = self.node.in_words();
        Err(Mismatch(format!("found {found}, expected {expected}")))
    }

    fn scalar(&self, expected: &dyn Expected) -> Result<(&'a str, Meaning), Mismatch> {
        match &self.node.kind {
            Kind::Scalar(text, meaning) if *meaning != Meaning::Nothing => Ok((text, *meaning)),
            _ => self.mismatch(expected),
        }
    }

    /// The mismatch of a scalar that is no number, or is one in quotes.
    fn no_number<T>(&self, expected: &str) -> Result<T, Mismatch> {
        match &self.node.kind {
            Kind::Scalar(text, Meaning::Text) if text.parse::<f64>().is_ok() => Err(Mismatch(
                format!("found `{text}` in quotes, expected {expected}\ntake the quotes off"),
            )),
            _ => self.mismatch(&expected),
        }
    }

    /// A finite number written in decimal, outside quotes.
    fn number(&self) -> Result<f64, Mismatch> {
        let (text, meaning) = self.scalar(&"a number")?;
        match (meaning, text.parse::<f64>()) {
            (Meaning::Number(value), _) if !value.is_finite() => Err(Mismatch(format!(
                "`{text}` is not a finite number, expected one"
            ))),
            (Meaning::Number(_), Ok(value)) => Ok(value),
            (Meaning::Text, Ok(value)) if value.is_infinite() && has_digits(text) => Err(Mismatch(
                format!("`{text}` is too large, expected a finite number"),
            )),
            (Meaning::Text, Ok(value)) if !value.is_finite() => Err(Mismatch(format!(
                "`{text}` is not a finite number, expected one"
            ))),
            _ => self.no_number("a number"),
        }
    }

    /// Records the keys that are not in `fields`; returns the others.
    fn known(&self, entries: &'a [(Node, Node)], fields: &[&str]) -> Vec<(&'a Node, &'a Node)> {
        let is_known = |key: &Node| fields.contains(&key.text());
        for (key, _) in entries.iter().filter(|(key, _)| !is_known(key)) {
            let word = key.text();
            let hint = match nearest(word, fields.iter().copied()) {
                Some(near) => format!("did you mean `{near}`?"),
                None => format!("the keys here are {}", listed(fields.iter().copied())),
            };
            let message = format!("unknown key `{word}`\n{hint}");
            self.sink.record(key, &join(&self.path, word), &message);
        }
        let kept = entries.iter().filter(|(key, _)| is_known(key));
        kept.map(|(key, value)| (key, value)).collect()
    }
}

fn has_digits(text: &str) -> bool {
    text.bytes().any(|byte| byte.is_ascii_digit())
}

impl<'de> Deserializer<'de> for Decoder<'_> {
    type Error = Mismatch;

    /// For types that may be a list or a map.
    fn deserialize_any<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Mismatch> {
        match &self.node.kind {
            Kind::List(_) => self.deserialize_seq(visitor),
            Kind::Map(_) => self.deserialize_map(visitor),
            Kind::Scalar(..) => self.mismatch(&visitor),
        }
    }

    fn deserialize_str<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Mismatch> {
        let (text, _) = self.scalar(&visitor)?;
        visitor.visit_str(text)
    }

    fn deserialize_string<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Mismatch> {
        self.deserialize_str(visitor)
    }

    fn deserialize_identifier<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Mismatch> {
        self.deserialize_str(visitor)
    }

    fn deserialize_f64<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Mismatch> {
        visitor.visit_f64(self.number()?)
    }

    fn deserialize_u64<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Mismatch> {
        let (text, meaning) = self.scalar(&"a whole number")?;
        match (meaning, text.parse::<u64>()) {
            (Meaning::Number(_), Ok(value)) => visitor.visit_u64(value),
            _ => self.no_number("a whole number, 0 or above"),
        }
    }

    fn deserialize_bool<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Mismatch> {
        match self.scalar(&"true or false")? {
            ("true", Meaning::Truth) => visitor.visit_bool(true),
            ("false", Meaning::Truth) => visitor.visit_bool(false),
            _ => self.mismatch(&"`true` or `false`"),
        }
    }

    /// A key that is there has a value: `key:` with nothing behind it is a mistake.
    fn deserialize_option<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Mismatch> {
        visitor.visit_some(self)
    }

    fn deserialize_newtype_struct<V: Visitor<'de>>(
        self,
        name: &'static str,
        visitor: V,
    ) -> Result<V::Value, Mismatch> {
        match (name, &self.node.kind) {
            (WORD_OR_KEYS, Kind::Map(_)) => visitor.visit_newtype_struct(self),
            (WORD_OR_KEYS, _) => visitor.visit_some(self),
            _ => visitor.visit_newtype_struct(self),
        }
    }

    fn deserialize_seq<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Mismatch> {
        match &self.node.kind {
            Kind::List(items) => visitor.visit_seq(Items {
                of: self.clone(),
                items,
                next: 0,
            }),
            _ => self.mismatch(&"a list"),
        }
    }

    fn deserialize_tuple<V: Visitor<'de>>(
        self,
        length: usize,
        visitor: V,
    ) -> Result<V::Value, Mismatch> {
        match &self.node.kind {
            Kind::List(items) if items.len() != length => Err(Mismatch(format!(
                "found a list of {}, expected a list of {length}",
                items.len()
            ))),
            Kind::List(_) => self.deserialize_seq(visitor),
            _ => self.mismatch(&format!("a list of {length}").as_str()),
        }
    }

    fn deserialize_map<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Mismatch> {
        match &self.node.kind {
            Kind::Map(entries) => {
                let entries = entries.iter().map(|(key, value)| (key, value)).collect();
                visitor.visit_map(Keys::new(self, entries))
            }
            _ => self.mismatch(&visitor),
        }
    }

    fn deserialize_struct<V: Visitor<'de>>(
        self,
        name: &'static str,
        fields: &'static [&'static str],
        visitor: V,
    ) -> Result<V::Value, Mismatch> {
        if name == FIELD {
            return visitor.visit_seq(Parts { of: self, next: 0 });
        }
        match &self.node.kind {
            Kind::Map(entries) => {
                let entries = self.known(entries, fields);
                visitor.visit_map(Keys::new(self, entries))
            }
            _ => {
                let keys = format!("keys and values ({})", listed(fields.iter().copied()));
                self.mismatch(&keys.as_str())
            }
        }
    }

    fn deserialize_enum<V: Visitor<'de>>(
        self,
        _: &'static str,
        words: &'static [&'static str],
        visitor: V,
    ) -> Result<V::Value, Mismatch> {
        let choice = match words {
            [word] => format!("`{word}`"),
            _ => format!("one of {}", listed(words.iter().copied())),
        };
        let (word, _) = self.scalar(&choice.as_str())?;
        match words.contains(&word) {
            true => visitor.visit_enum(Word(word)),
            false => Err(Mismatch(match nearest(word, words.iter().copied()) {
                Some(near) => format!("found `{word}`, expected {choice}\ndid you mean `{near}`?"),
                None => format!("found `{word}`, expected {choice}"),
            })),
        }
    }

    fn deserialize_ignored_any<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Mismatch> {
        visitor.visit_unit()
    }

    forward_to_deserialize_any! {
        i8 i16 i32 i64 u8 u16 u32 f32 char bytes byte_buf unit unit_struct tuple_struct
    }
}
