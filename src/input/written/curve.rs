//! A limit against duration: a map, or a list of pairs where a duration stands twice.

use std::borrow::Cow;
use std::fmt;

use schemars::{JsonSchema, Schema, SchemaGenerator, json_schema};
use serde::de::{Deserialize, Deserializer, MapAccess, SeqAccess, Visitor};

use crate::input::dimension::Time;
use crate::input::field::Field;
use crate::input::quantity::Quantity;

type Duration = Field<Quantity<Time>>;
type Pair = (Duration, Field<f64>);

/// Durations and values in written order.
#[derive(Clone, Debug)]
pub(in crate::input) struct Curve(pub(in crate::input) Vec<Pair>);

impl<'de> Deserialize<'de> for Curve {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_any(CurveVisitor)
    }
}

struct CurveVisitor;

impl<'de> Visitor<'de> for CurveVisitor {
    type Value = Curve;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("durations with their values such as `{0.2 s: 5.0, 1 s: 4.0}`")
    }

    fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Curve, A::Error> {
        let mut points = Vec::new();
        while let Some(point) = map.next_entry()? {
            points.push(point);
        }
        Ok(Curve(points))
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut list: A) -> Result<Curve, A::Error> {
        let mut points = Vec::new();
        while let Some(pair) = list.next_element::<Field<Pair>>()? {
            points.push(
                pair.given()
                    .map_or((Field::Bad, Field::Bad), |pair| pair.value),
            );
        }
        Ok(Curve(points))
    }
}

impl JsonSchema for Curve {
    fn schema_name() -> Cow<'static, str> {
        "curve".into()
    }

    fn json_schema(generator: &mut SchemaGenerator) -> Schema {
        let time = generator.subschema_for::<Quantity<Time>>();
        json_schema!({
            "description": "values in g against durations: a map, or a list of pairs",
            "anyOf": [
                {
                    "type": "object",
                    "propertyNames": time,
                    "additionalProperties": {"type": "number"},
                    "minProperties": 1
                },
                {
                    "type": "array",
                    "minItems": 1,
                    "items": {
                        "type": "array",
                        "prefixItems": [time, {"type": "number"}],
                        "minItems": 2,
                        "maxItems": 2
                    }
                }
            ]
        })
    }
}
