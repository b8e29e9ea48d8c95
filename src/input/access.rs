//! How serde walks lists, maps, fields and words of a document.

use serde::de::value::StrDeserializer;
use serde::de::{
    DeserializeSeed, EnumAccess, IntoDeserializer, MapAccess, SeqAccess, VariantAccess, Visitor,
};

use crate::input::decode::{Decoder, Mismatch};
use crate::input::document::{Node, join};

/// The parts of a field: first byte, byte after the last, key path, value.
pub(super) struct Parts<'a> {
    pub(super) of: Decoder<'a>,
    pub(super) next: usize,
}

impl<'de> SeqAccess<'de> for Parts<'_> {
    type Error = Mismatch;

    fn next_element_seed<S: DeserializeSeed<'de>>(
        &mut self,
        seed: S,
    ) -> Result<Option<S::Value>, Mismatch> {
        self.next += 1;
        let span = &self.of.node.span;
        let value = match self.next {
            1 => seed.deserialize(span.start.into_deserializer()),
            2 => seed.deserialize(span.end.into_deserializer()),
            3 => seed.deserialize(self.of.path.as_str().into_deserializer()),
            _ => seed
                .deserialize(self.of.clone())
                .inspect_err(|mismatch| self.of.record(mismatch)),
        };
        value.map(Some)
    }
}

/// The items of a list.
pub(super) struct Items<'a> {
    pub(super) of: Decoder<'a>,
    pub(super) items: &'a [Node],
    pub(super) next: usize,
}

impl<'de> SeqAccess<'de> for Items<'_> {
    type Error = Mismatch;

    fn next_element_seed<S: DeserializeSeed<'de>>(
        &mut self,
        seed: S,
    ) -> Result<Option<S::Value>, Mismatch> {
        let Some(item) = self.items.get(self.next) else {
            return Ok(None);
        };
        let path = format!("{}[{}]", self.of.path, self.next);
        self.next += 1;
        seed.deserialize(self.of.child(item, path)).map(Some)
    }
}

/// The entries of a map.
pub(super) struct Keys<'a> {
    of: Decoder<'a>,
    entries: std::vec::IntoIter<(&'a Node, &'a Node)>,
    value: Option<Decoder<'a>>,
}

impl<'a> Keys<'a> {
    pub(super) fn new(of: Decoder<'a>, entries: Vec<(&'a Node, &'a Node)>) -> Self {
        Self {
            of,
            entries: entries.into_iter(),
            value: None,
        }
    }
}

impl<'de> MapAccess<'de> for Keys<'_> {
    type Error = Mismatch;

    fn next_key_seed<S: DeserializeSeed<'de>>(
        &mut self,
        seed: S,
    ) -> Result<Option<S::Value>, Mismatch> {
        let Some((key, value)) = self.entries.next() else {
            return Ok(None);
        };
        let path = join(&self.of.path, key.text());
        self.value = Some(self.of.child(value, path.clone()));
        seed.deserialize(self.of.child(key, path)).map(Some)
    }

    fn next_value_seed<S: DeserializeSeed<'de>>(&mut self, seed: S) -> Result<S::Value, Mismatch> {
        let value = self.value.take();
        let value = value.ok_or_else(|| Mismatch("a value without a key".to_owned()))?;
        seed.deserialize(value)
    }
}

/// One word of a closed set.
pub(super) struct Word<'a>(pub(super) &'a str);

impl<'de> EnumAccess<'de> for Word<'_> {
    type Error = Mismatch;
    type Variant = Self;

    fn variant_seed<S: DeserializeSeed<'de>>(self, seed: S) -> Result<(S::Value, Self), Mismatch> {
        let word: StrDeserializer<'_, Mismatch> = self.0.into_deserializer();
        Ok((seed.deserialize(word)?, self))
    }
}

impl<'de> VariantAccess<'de> for Word<'_> {
    type Error = Mismatch;

    fn unit_variant(self) -> Result<(), Mismatch> {
        Ok(())
    }

    fn newtype_variant_seed<S: DeserializeSeed<'de>>(self, _: S) -> Result<S::Value, Mismatch> {
        Err(Mismatch(format!("`{}` is a word on its own", self.0)))
    }

    fn tuple_variant<V: Visitor<'de>>(self, _: usize, _: V) -> Result<V::Value, Mismatch> {
        Err(Mismatch(format!("`{}` is a word on its own", self.0)))
    }

    fn struct_variant<V: Visitor<'de>>(
        self,
        _: &'static [&'static str],
        _: V,
    ) -> Result<V::Value, Mismatch> {
        Err(Mismatch(format!("`{}` is a word on its own", self.0)))
    }
}
