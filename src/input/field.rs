//! What a written type is made of: fields that know their place and never fail,
//! maps in written order, words, and values that are either a word or keys.
//!
//! A [`Field`] records what is wrong with its value and lets decoding go on, so
//! that everything wrong in a file is said at once.

use std::borrow::Cow;
use std::fmt;
use std::marker::PhantomData;
use std::ops::Range;

use schemars::{JsonSchema, Schema, SchemaGenerator, json_schema};
use serde::de::{Deserialize, Deserializer, Error, MapAccess, SeqAccess, Visitor};

use crate::input::quantity::SPACE;

/// Name under which the deserializer hands out a value with its place.
pub(super) const FIELD: &str = "$field";
/// Name under which the deserializer tells a scalar (`some`) from keys (`newtype`).
pub(super) const WORD_OR_KEYS: &str = "$word-or-keys";

/// Where a value stands in its file.
#[derive(Clone, Debug)]
pub(super) struct At {
    /// Its bytes.
    pub(super) span: Range<usize>,
    /// Its key path.
    pub(super) key: String,
}

/// A value with its place.
#[derive(Clone, Debug)]
pub(super) struct Located<T> {
    pub(super) value: T,
    pub(super) at: At,
}

/// A key's value, wherever decoding it led to.
#[derive(Clone, Debug)]
pub(super) enum Field<T> {
    /// The key is not there.
    Missing,
    /// It is there and what is wrong with it has been recorded.
    Bad,
    /// It is there.
    Given(Located<T>),
}

impl<T> Field<T> {
    /// The value, if it could be read.
    pub(super) fn given(self) -> Option<Located<T>> {
        match self {
            Self::Given(located) => Some(located),
            _ => None,
        }
    }
}

/// The value of an optional key, if it is there and could be read.
pub(super) fn optional<T>(field: Option<Field<T>>) -> Option<Located<T>> {
    field.and_then(Field::given)
}

impl<'de, T: Deserialize<'de>> Deserialize<'de> for Field<T> {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        let visitor = FieldVisitor(PhantomData);
        // Our deserializer always accepts this name; serde's stand-in for a key that is not there never does.
        let field = deserializer.deserialize_struct(FIELD, &[], visitor);
        Ok(field.unwrap_or(Self::Missing))
    }
}

struct FieldVisitor<T>(PhantomData<T>);

impl<'de, T: Deserialize<'de>> Visitor<'de> for FieldVisitor<T> {
    type Value = Field<T>;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("a value with its place")
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut parts: A) -> Result<Field<T>, A::Error> {
        let lost = || A::Error::custom("a value without its place");
        let start = parts.next_element()?.ok_or_else(lost)?;
        let end = parts.next_element()?.ok_or_else(lost)?;
        let key = parts.next_element()?.ok_or_else(lost)?;
        let span = start..end;
        Ok(match parts.next_element() {
            Ok(Some(value)) => Field::Given(Located {
                value,
                at: At { span, key },
            }),
            _ => Field::Bad,
        })
    }
}

impl<T: JsonSchema> JsonSchema for Field<T> {
    fn inline_schema() -> bool {
        T::inline_schema()
    }

    fn schema_name() -> Cow<'static, str> {
        T::schema_name()
    }

    fn schema_id() -> Cow<'static, str> {
        T::schema_id()
    }

    fn json_schema(generator: &mut SchemaGenerator) -> Schema {
        T::json_schema(generator)
    }
}

/// Text for people or a name: not empty, nothing that would steer a terminal.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Text(pub(super) String);

impl<'de> Deserialize<'de> for Text {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_str(TextVisitor)
    }
}

struct TextVisitor;

impl Visitor<'_> for TextVisitor {
    type Value = Text;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("text")
    }

    fn visit_str<E: Error>(self, text: &str) -> Result<Text, E> {
        let text = text.trim();
        match text.chars().find(|c| c.is_control() && *c != '\n') {
            Some(found) => Err(E::custom(format!(
                "control character U+{:04X} in text, expected plain text",
                u32::from(found)
            ))),
            None if text.is_empty() => Err(E::custom("found empty text, expected some")),
            None => Ok(Text(text.to_owned())),
        }
    }
}

/// A character that shows, as a regular expression of JSON Schema.
const SHOWN: &str =
    r"[^\u0000-\u0020\u007f-\u00a0\u1680\u2000-\u200a\u2028\u2029\u202f\u205f\u3000]";
/// A character that is allowed between two of those.
const BETWEEN: &str = r"[^\u0000-\u0009\u000b-\u001f\u007f-\u009f]";

impl JsonSchema for Text {
    fn inline_schema() -> bool {
        true
    }

    fn schema_name() -> Cow<'static, str> {
        "Text".into()
    }

    fn json_schema(_: &mut SchemaGenerator) -> Schema {
        json_schema!({
            "type": ["string", "number", "boolean"],
            "pattern": format!("^{SPACE}*{SHOWN}({BETWEEN}*{SHOWN})?{SPACE}*$"),
            "patternErrorMessage": "expected some text without control characters"
        })
    }
}

/// A map in written order whose keys are names.
#[derive(Clone, Debug)]
pub(super) struct Entries<T>(pub(super) Vec<(Field<Text>, Field<T>)>);

impl<T> Entries<T> {
    /// The entries of which key and value could be read.
    pub(super) fn given(self) -> Vec<(Located<String>, Located<T>)> {
        let whole = |(key, value): (Field<Text>, Field<T>)| {
            let key = key.given()?;
            let at = key.at;
            let value = value.given()?;
            Some((
                Located {
                    value: key.value.0,
                    at,
                },
                value,
            ))
        };
        self.0.into_iter().filter_map(whole).collect()
    }
}

impl<'de, T: Deserialize<'de>> Deserialize<'de> for Entries<T> {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_map(EntriesVisitor(PhantomData))
    }
}

struct EntriesVisitor<T>(PhantomData<T>);

impl<'de, T: Deserialize<'de>> Visitor<'de> for EntriesVisitor<T> {
    type Value = Entries<T>;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("names with their values")
    }

    fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Entries<T>, A::Error> {
        let mut entries = Vec::new();
        while let Some(entry) = map.next_entry()? {
            entries.push(entry);
        }
        Ok(Entries(entries))
    }
}

impl<T: JsonSchema> JsonSchema for Entries<T> {
    fn inline_schema() -> bool {
        true
    }

    fn schema_name() -> Cow<'static, str> {
        format!("EntriesOf{}", T::schema_name()).into()
    }

    fn json_schema(generator: &mut SchemaGenerator) -> Schema {
        let value = generator.subschema_for::<T>();
        json_schema!({"type": "object", "additionalProperties": value, "minProperties": 1})
    }
}

/// A value written as one word or as keys.
#[derive(Clone, Debug)]
pub(super) enum WordOr<W, K> {
    Word(W),
    Keys(K),
}

impl<'de, W: Deserialize<'de>, K: Deserialize<'de>> Deserialize<'de> for WordOr<W, K> {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_newtype_struct(WORD_OR_KEYS, WordOrVisitor(PhantomData))
    }
}

struct WordOrVisitor<W, K>(PhantomData<(W, K)>);

impl<'de, W: Deserialize<'de>, K: Deserialize<'de>> Visitor<'de> for WordOrVisitor<W, K> {
    type Value = WordOr<W, K>;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("a word, or keys and values")
    }

    fn visit_some<D: Deserializer<'de>>(self, word: D) -> Result<Self::Value, D::Error> {
        W::deserialize(word).map(WordOr::Word)
    }

    fn visit_newtype_struct<D: Deserializer<'de>>(self, keys: D) -> Result<Self::Value, D::Error> {
        K::deserialize(keys).map(WordOr::Keys)
    }
}

impl<W: JsonSchema, K: JsonSchema> JsonSchema for WordOr<W, K> {
    fn inline_schema() -> bool {
        true
    }

    fn schema_name() -> Cow<'static, str> {
        format!("{}Or{}", W::schema_name(), K::schema_name()).into()
    }

    fn json_schema(generator: &mut SchemaGenerator) -> Schema {
        let word = generator.subschema_for::<W>();
        let keys = generator.subschema_for::<K>();
        json_schema!({"anyOf": [word, keys]})
    }
}
