//! What a YAML text means, as `serde_yaml` reads it, with keys given twice kept.

use std::fmt;
use std::sync::Arc;

use serde::Deserialize;
use serde::de::{Deserializer, MapAccess, SeqAccess, Visitor};

use crate::diagnostic::{Diagnostic, Place, Source};

/// A value without its place.
pub(super) enum Shape {
    Nothing,
    Truth,
    Number(f64),
    Text(String),
    List(Vec<Shape>),
    Map(Vec<(Shape, Shape)>),
}

impl Shape {
    /// Reads one document.
    pub(super) fn of(source: &Arc<Source>) -> Result<Self, Diagnostic> {
        serde_yaml::from_str(&source.text).map_err(|error| syntax_error(&error, source))
    }
}

fn syntax_error(error: &serde_yaml::Error, source: &Arc<Source>) -> Diagnostic {
    let at = error.location().map_or(0, |place| place.index());
    let at = source.text.floor_char_boundary(at.min(source.text.len()));
    let message = error.to_string();
    // The place is shown on its own, so it is left out of the sentence.
    let message = message.split(" at line ").next().unwrap_or("").to_owned();
    Diagnostic::error(format!("not YAML: {message}")).at(&Place {
        source: Arc::clone(source),
        span: at..at,
    })
}

impl<'de> Deserialize<'de> for Shape {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_any(ShapeVisitor)
    }
}

struct ShapeVisitor;

impl<'de> Visitor<'de> for ShapeVisitor {
    type Value = Shape;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("any value")
    }

    fn visit_unit<E>(self) -> Result<Shape, E> {
        Ok(Shape::Nothing)
    }

    fn visit_none<E>(self) -> Result<Shape, E> {
        Ok(Shape::Nothing)
    }

    fn visit_bool<E>(self, _: bool) -> Result<Shape, E> {
        Ok(Shape::Truth)
    }

    fn visit_i64<E>(self, value: i64) -> Result<Shape, E> {
        Ok(Shape::Number(value as f64))
    }

    fn visit_u64<E>(self, value: u64) -> Result<Shape, E> {
        Ok(Shape::Number(value as f64))
    }

    fn visit_i128<E>(self, value: i128) -> Result<Shape, E> {
        Ok(Shape::Number(value as f64))
    }

    fn visit_u128<E>(self, value: u128) -> Result<Shape, E> {
        Ok(Shape::Number(value as f64))
    }

    fn visit_f64<E>(self, value: f64) -> Result<Shape, E> {
        Ok(Shape::Number(value))
    }

    fn visit_str<E>(self, text: &str) -> Result<Shape, E> {
        Ok(Shape::Text(text.to_owned()))
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut items: A) -> Result<Shape, A::Error> {
        let mut list = Vec::new();
        while let Some(item) = items.next_element()? {
            list.push(item);
        }
        Ok(Shape::List(list))
    }

    fn visit_map<A: MapAccess<'de>>(self, mut entries: A) -> Result<Shape, A::Error> {
        let mut map = Vec::new();
        while let Some(entry) = entries.next_entry()? {
            map.push(entry);
        }
        Ok(Shape::Map(map))
    }
}
