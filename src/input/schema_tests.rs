//! The forms of the schemas accept exactly what the reader accepts.

use jsonschema::Validator;
use proptest::prelude::*;
use schemars::{JsonSchema, SchemaGenerator};
use serde::de::value::{Error, StrDeserializer};
use serde::de::{Deserialize, IntoDeserializer};

use crate::input::dimension::{Length, MomentOfInertia};
use crate::input::field::Text;
use crate::input::quantity::{Quantity, SidedAngle};

fn validator<T: JsonSchema>() -> Validator {
    let schema = T::json_schema(&mut SchemaGenerator::default());
    jsonschema::draft202012::new(schema.as_value()).expect("a schema")
}

fn reads<T: for<'de> Deserialize<'de>>(text: &str) -> bool {
    let text: StrDeserializer<'_, Error> = text.into_deserializer();
    T::deserialize(text).is_ok()
}

fn accepts(validator: &Validator, text: &str) -> bool {
    validator.is_valid(&serde_json::Value::from(text))
}

/// Texts that are mostly wrong and texts that are mostly right: white space and what looks like it, signs, digits, units and sides, in the order of a quantity.
///
/// Exponents are short: only the reader knows which number is too large or too small.
fn texts(units: &'static str) -> impl Strategy<Value = String> {
    const SPACES: &str = "[ \t\n\u{85}\u{a0}\u{feff}\u{2003}\u{200b}]";
    let form = format!(
        "{SPACES}?[+-]?-?[0-2]{{0,2}}\\.?[0-2]{{0,2}}([eE][+-]?[0-2]?)?{SPACES}{{0,2}}({units}|[a-z]?){SPACES}?(left|right|)(left)?{SPACES}?"
    );
    let plain = format!(" ?[+-]?(0|0\\.0|[0-9]{{1,3}}|\\.5|1e2) ?({units}) ?(left|right|)");
    let of = |form: &str| proptest::string::string_regex(form).expect("a regular expression");
    prop_oneof![of(&form), of(&plain)]
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 3000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn lengths(text in texts("m|mm|ft|kg")) {
        thread_local! { static SCHEMA: Validator = validator::<Quantity<Length>>(); }
        prop_assert_eq!(SCHEMA.with(|v| accepts(v, &text)), reads::<Quantity<Length>>(&text), "{:?}", text);
    }

    #[test]
    fn moments_of_inertia(text in texts("kg m2|kg  m2|kgm2|lb\tft2")) {
        thread_local! { static SCHEMA: Validator = validator::<Quantity<MomentOfInertia>>(); }
        prop_assert_eq!(SCHEMA.with(|v| accepts(v, &text)), reads::<Quantity<MomentOfInertia>>(&text), "{:?}", text);
    }

    #[test]
    fn sided_angles(text in texts("deg|°|rad")) {
        thread_local! { static SCHEMA: Validator = validator::<SidedAngle>(); }
        prop_assert_eq!(SCHEMA.with(|v| accepts(v, &text)), reads::<SidedAngle>(&text), "{:?}", text);
    }

    #[test]
    fn texts_for_people(text in "[ \t\n\u{0}\u{1b}\u{7f}\u{85}\u{9f}\u{a0}\u{2028}aé😀]{0,4}") {
        thread_local! { static SCHEMA: Validator = validator::<Text>(); }
        prop_assert_eq!(SCHEMA.with(|v| accepts(v, &text)), reads::<Text>(&text), "{:?}", text);
    }
}

/// The two texts that differ between the schema and the reader, and why.
#[test]
fn only_the_reader_knows_the_size_of_a_number() {
    let length = validator::<Quantity<Length>>();
    for text in ["1e400 m", "1e-400 m"] {
        assert!(
            accepts(&length, text) && !reads::<Quantity<Length>>(text),
            "{text}"
        );
    }
}
