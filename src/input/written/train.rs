//! What may be written in a train file.

use std::borrow::Cow;
use std::f64::consts::PI;
use std::fmt;

use schemars::{JsonSchema, Schema, SchemaGenerator, json_schema};
use serde::de::{Deserialize, Deserializer, Error, Visitor};

use crate::input::dimension::{Angle, Length, Mass, MomentOfInertia};
use crate::input::field::{Field, Text};
use crate::input::quantity::{Quantity, SidedAngle};
use crate::input::written::alternatives;

/// A train: its cars from the front.
#[derive(Debug, serde::Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "train")]
pub(in crate::input) struct TrainFile {
    /// Version of the file format: 1.
    #[schemars(extend("const" = 1))]
    pub(in crate::input) crestfall: Field<u64>,
    /// Name of the train.
    pub(in crate::input) train: Field<Text>,
    /// Cars from the front.
    #[schemars(extend("minItems" = 1))]
    pub(in crate::input) cars: Field<Vec<Field<CarKeys>>>,
    /// Per axle: the wheels' inertia over their radius squared; 0 kg where left out.
    pub(in crate::input) rolling_mass: Option<Field<Quantity<Mass>>>,
    /// Per axle: mass carried by the spine itself; 0 kg where left out.
    pub(in crate::input) axle_mass: Option<Field<Quantity<Mass>>>,
}

/// One car, or several alike in a row.
#[derive(Debug, serde::Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "car")]
pub(in crate::input) struct CarKeys {
    /// How many of this kind follow each other; 1 where left out.
    #[schemars(extend("minimum" = 1))]
    pub(in crate::input) count: Option<Field<u64>>,
    /// From its nose to the nose of the next car.
    pub(in crate::input) length: Field<Quantity<Length>>,
    /// Front and rear axle, behind the car's nose.
    pub(in crate::input) axles: Field<Axles>,
    /// Empty.
    pub(in crate::input) mass: Field<Quantity<Mass>>,
    /// Mass centre of the empty car, from the midpoint between its axles at rail height.
    pub(in crate::input) mass_centre: Field<OffsetKeys>,
    /// Moments of inertia about the mass centre; 0 where left out.
    pub(in crate::input) inertia: Option<Field<InertiaKeys>>,
    /// Its seats.
    pub(in crate::input) seats: Field<Vec<Field<SeatKeys>>>,
}

/// Front and rear.
pub(in crate::input) type Axles = (Field<Quantity<Length>>, Field<Quantity<Length>>);

/// A position from the midpoint between a car's axles at rail height.
#[derive(Debug, serde::Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "offset", transform = alternatives::side)]
pub(in crate::input) struct OffsetKeys {
    /// Ahead of the midpoint.
    pub(in crate::input) forward: Field<Quantity<Length>>,
    /// To the left; or give `right`.
    pub(in crate::input) left: Option<Field<Quantity<Length>>>,
    /// To the right; or give `left`.
    pub(in crate::input) right: Option<Field<Quantity<Length>>>,
    /// Above the rails.
    pub(in crate::input) up: Field<Quantity<Length>>,
}

/// Moments of inertia of an empty car about its mass centre.
#[derive(Debug, serde::Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "inertia")]
pub(in crate::input) struct InertiaKeys {
    /// About the forward axis.
    pub(in crate::input) roll: Field<Quantity<MomentOfInertia>>,
    /// About the left axis.
    pub(in crate::input) pitch: Field<Quantity<MomentOfInertia>>,
    /// About the up axis.
    pub(in crate::input) yaw: Field<Quantity<MomentOfInertia>>,
}

/// A rider's reference point.
#[derive(Debug, serde::Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "seat", transform = alternatives::side)]
pub(in crate::input) struct SeatKeys {
    /// Its name, unique in its car.
    pub(in crate::input) name: Field<Text>,
    /// Ahead of the midpoint between the axles.
    pub(in crate::input) forward: Field<Quantity<Length>>,
    /// To the left of it; or give `right`.
    pub(in crate::input) left: Option<Field<Quantity<Length>>>,
    /// To the right of it; or give `left`.
    pub(in crate::input) right: Option<Field<Quantity<Length>>>,
    /// Above the rails.
    pub(in crate::input) up: Field<Quantity<Length>>,
    /// Mass of the rider.
    pub(in crate::input) rider: Field<Quantity<Mass>>,
    /// `forward`, the default, `backward`, or an angle with its side such as `90 deg left`.
    pub(in crate::input) faces: Option<Field<Faces>>,
    /// Recline of the seat; 0 deg where left out.
    pub(in crate::input) recline: Option<Field<Quantity<Angle>>>,
}

/// Where a seat looks.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(in crate::input) struct Faces {
    /// Turned from forward, to the left, rad.
    pub(in crate::input) left_rad: f64,
}

impl<'de> Deserialize<'de> for Faces {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_str(FacesVisitor)
    }
}

struct FacesVisitor;

impl Visitor<'_> for FacesVisitor {
    type Value = Faces;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("`forward`, `backward` or an angle with a side such as `90 deg left`")
    }

    fn visit_str<E: Error>(self, text: &str) -> Result<Faces, E> {
        let left_rad = match text.trim() {
            "forward" => 0.0,
            "backward" => PI,
            other if other.starts_with(|c: char| c.is_alphabetic()) => {
                return Err(E::custom(format!(
                    "found `{other}`, expected `forward`, `backward` or an angle with a side such as `90 deg left`"
                )));
            }
            other => SidedAngle::parse(other).map_err(E::custom)?.left_rad,
        };
        Ok(Faces { left_rad })
    }
}

impl JsonSchema for Faces {
    fn schema_name() -> Cow<'static, str> {
        "faces".into()
    }

    fn json_schema(generator: &mut SchemaGenerator) -> Schema {
        let angle = generator.subschema_for::<SidedAngle>();
        json_schema!({"anyOf": [{"enum": ["forward", "backward"]}, angle]})
    }
}
