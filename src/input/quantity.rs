//! Numbers with units, as written in files, turned into SI at this border.

use std::borrow::Cow;
use std::fmt;
use std::marker::PhantomData;

use schemars::{JsonSchema, Schema, SchemaGenerator, json_schema};
use serde::de::{Deserialize, Deserializer, Error, Visitor};

use crate::input::decode::{listed, nearest};
use crate::input::dimension::{Angle, Dimension, Unit};

/// A finite number of one dimension.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Quantity<D> {
    /// In the SI unit of the dimension.
    pub(super) si: f64,
    dimension: PhantomData<D>,
}

/// An angle with its side: positive to the left; zero needs no side.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct SidedAngle {
    /// To the left, rad.
    pub(super) left_rad: f64,
}

/// Why a text is no quantity: what was found and expected, and the way out.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct NoQuantity {
    message: String,
    hint: Option<String>,
}

impl fmt::Display for NoQuantity {
    /// The hint goes on a line of its own, where decoding looks for it.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.message)?;
        match &self.hint {
            Some(hint) => write!(f, "\n{hint}"),
            None => Ok(()),
        }
    }
}

impl<D: Dimension> Quantity<D> {
    /// Reads `12 m` or `12m`.
    pub(super) fn parse(text: &str) -> Result<Self, NoQuantity> {
        let (number, unit) = split(text).ok_or_else(|| no_number::<D>(text))?;
        let si = in_si::<D>(text, number, unit)?;
        Ok(Self {
            si,
            dimension: PhantomData,
        })
    }
}

impl SidedAngle {
    /// Reads `140 deg left` or `0 deg`.
    pub(super) fn parse(text: &str) -> Result<Self, NoQuantity> {
        let (rest, sign) = side(text);
        let angle = Quantity::<Angle>::parse(rest)?;
        match sign {
            Some(_) if angle.si < 0.0 => Err(NoQuantity {
                message: format!("`{text}` has a sign and a side, expected a side alone"),
                hint: Some(format!("write `{}`", turned_round(rest, sign))),
            }),
            None if angle.si != 0.0 => Err(NoQuantity {
                message: format!("`{text}` has no side, expected `left` or `right` behind it"),
                hint: Some(format!("write `{} left`", rest.trim_start_matches('-'))),
            }),
            _ => Ok(Self {
                left_rad: angle.si * sign.unwrap_or(1.0),
            }),
        }
    }
}

/// The text without its side, and +1 for left, −1 for right.
fn side(text: &str) -> (&str, Option<f64>) {
    let text = text.trim();
    if let Some(rest) = text.strip_suffix("left") {
        return (rest.trim_end(), Some(1.0));
    }
    match text.strip_suffix("right") {
        Some(rest) => (rest.trim_end(), Some(-1.0)),
        None => (text, None),
    }
}

fn turned_round(angle: &str, sign: Option<f64>) -> String {
    let other = match sign {
        Some(sign) if sign < 0.0 => "left",
        _ => "right",
    };
    format!("{} {other}", angle.trim_start_matches('-').trim_start())
}

/// A number in front of a unit, which may be empty.
fn split(text: &str) -> Option<(&str, &str)> {
    let text = text.trim();
    let end = number_end(text)?;
    Some((&text[..end], text[end..].trim_start()))
}

/// Bytes of `[+-] digits [. digits] [e [+-] digits]` at the front, if there is such a number.
fn number_end(text: &str) -> Option<usize> {
    let digits = |from: usize| {
        let count = text[from..].bytes().take_while(u8::is_ascii_digit).count();
        from + count
    };
    let sign = usize::from(text.starts_with(['+', '-']));
    let whole = digits(sign);
    let mantissa = match text[whole..].starts_with('.') {
        true => digits(whole + 1),
        false => whole,
    };
    if !text[sign..mantissa]
        .bytes()
        .any(|byte| byte.is_ascii_digit())
    {
        return None;
    }
    Some(match text[mantissa..].strip_prefix(['e', 'E']) {
        Some(rest) => {
            let first = mantissa + 1 + usize::from(rest.starts_with(['+', '-']));
            let last = digits(first);
            if last > first { last } else { mantissa }
        }
        None => mantissa,
    })
}

fn in_si<D: Dimension>(text: &str, number: &str, unit: &str) -> Result<f64, NoQuantity> {
    let found = unit_of::<D>(text, unit)?;
    // The grammar above is a part of what `f64` reads; only the size can be wrong.
    let value: f64 = number.parse().map_err(|_| no_number::<D>(text))?;
    let si = found.to_si(value);
    let mantissa = number.split(['e', 'E']).next().unwrap_or(number);
    let lost = si == 0.0 && value == 0.0 && mantissa.bytes().any(is_significant);
    match si.is_finite() && !lost {
        true => Ok(si),
        false => Err(NoQuantity {
            message: format!(
                "`{text}` is too {} for a number",
                if lost { "small" } else { "large" }
            ),
            hint: None,
        }),
    }
}

fn is_significant(byte: u8) -> bool {
    (b'1'..=b'9').contains(&byte)
}

fn unit_of<D: Dimension>(text: &str, unit: &str) -> Result<&'static Unit, NoQuantity> {
    let names = || D::UNITS.iter().map(|unit| unit.name);
    let spaced = unit.split_whitespace().collect::<Vec<_>>().join(" ");
    match D::UNITS.iter().find(|known| known.name == spaced) {
        Some(known) => Ok(known),
        None if unit.is_empty() => Err(NoQuantity {
            message: format!("`{text}` has no unit, expected {}", D::ARTICLE_NAME),
            hint: Some(format!("write `{} {}`", text.trim(), D::UNITS[0].name)),
        }),
        None if unit.starts_with(',') => Err(NoQuantity {
            message: format!("`{text}` is not {}", D::ARTICLE_NAME),
            hint: Some("decimals are written with a point".to_owned()),
        }),
        None => Err(NoQuantity {
            message: format!(
                "`{unit}` is not a unit of {}, expected one of {}",
                D::NAME,
                listed(names())
            ),
            hint: nearest(&spaced, names()).map(|near| format!("did you mean `{near}`?")),
        }),
    }
}

fn no_number<D: Dimension>(text: &str) -> NoQuantity {
    let first = text.split_whitespace().next().unwrap_or("");
    let first = first.trim_start_matches(['+', '-', '.']).to_lowercase();
    let message = match first.as_str() {
        "nan" | "inf" | "infinity" => {
            format!("`{text}` is not finite, expected {}", D::ARTICLE_NAME)
        }
        _ => format!("`{text}` is not {}", D::ARTICLE_NAME),
    };
    NoQuantity {
        message,
        hint: Some(format!(
            "write a number with its unit, such as `{}`",
            D::EXAMPLE
        )),
    }
}

impl<'de, D: Dimension> Deserialize<'de> for Quantity<D> {
    fn deserialize<De: Deserializer<'de>>(deserializer: De) -> Result<Self, De::Error> {
        deserializer.deserialize_str(QuantityVisitor(PhantomData))
    }
}

struct QuantityVisitor<D>(PhantomData<D>);

impl<D: Dimension> Visitor<'_> for QuantityVisitor<D> {
    type Value = Quantity<D>;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{} such as `{}`", D::ARTICLE_NAME, D::EXAMPLE)
    }

    fn visit_str<E: Error>(self, text: &str) -> Result<Quantity<D>, E> {
        Quantity::parse(text).map_err(E::custom)
    }
}

impl<'de> Deserialize<'de> for SidedAngle {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_str(SidedVisitor)
    }
}

struct SidedVisitor;

impl Visitor<'_> for SidedVisitor {
    type Value = SidedAngle;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("an angle with a side such as `30 deg left`")
    }

    fn visit_str<E: Error>(self, text: &str) -> Result<SidedAngle, E> {
        SidedAngle::parse(text).map_err(E::custom)
    }
}

/// Digits with a point or without, and an exponent, as a regular expression of JSON Schema.
const NUMBER: &str = r"([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?";
/// A number that is zero.
const ZERO: &str = r"(0+\.?0*|\.0+)([eE][+-]?[0-9]+)?";
/// White space as Rust trims it; the `\s` of editors differs in two characters.
pub(super) const SPACE: &str =
    r"[\t-\r \u0085\u00a0\u1680\u2000-\u200a\u2028\u2029\u202f\u205f\u3000]";

fn units_pattern<D: Dimension>() -> String {
    let names: Vec<String> = D::UNITS.iter().map(|unit| escaped(unit.name)).collect();
    names.join("|")
}

fn escaped(name: &str) -> String {
    name.replace('/', r"\/").replace(' ', &format!("{SPACE}+"))
}

impl<D: Dimension> JsonSchema for Quantity<D> {
    fn schema_name() -> Cow<'static, str> {
        D::NAME.replace(' ', "_").into()
    }

    fn json_schema(_: &mut SchemaGenerator) -> Schema {
        json_schema!({
            "type": "string",
            "description": format!("{} such as `{}`", D::ARTICLE_NAME, D::EXAMPLE),
            "pattern": format!(
                "^{SPACE}*[+-]?{NUMBER}{SPACE}*({}){SPACE}*$",
                units_pattern::<D>()
            ),
            "patternErrorMessage": format!(
                "expected {} such as `{}`; its units are {}",
                D::ARTICLE_NAME,
                D::EXAMPLE,
                listed(D::UNITS.iter().map(|unit| unit.name))
            ),
        })
    }
}

impl JsonSchema for SidedAngle {
    fn schema_name() -> Cow<'static, str> {
        "sided_angle".into()
    }

    fn json_schema(_: &mut SchemaGenerator) -> Schema {
        let units = units_pattern::<Angle>();
        json_schema!({
            "type": "string",
            "description": "an angle with a side such as `30 deg left`; zero needs no side",
            "pattern": format!(
                "^{SPACE}*((\\+?{NUMBER}|-{ZERO}){SPACE}*({units}){SPACE}*(left|right)|[+-]?{ZERO}{SPACE}*({units})){SPACE}*$"
            ),
            "patternErrorMessage": "expected an angle with a side such as `30 deg left`",
        })
    }
}
