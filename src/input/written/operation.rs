//! What may be written in an operation file.

use schemars::JsonSchema;
use serde::Deserialize;

use crate::input::dimension::{Angle, Area, Density, Force, Length, Speed, Temperature, Time};
use crate::input::field::{Entries, Field, Text, WordOr};
use crate::input::quantity::Quantity;
use crate::input::written::alternatives;

/// How a ride is operated: release, zones, resistance, air and scenarios.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "operation", transform = alternatives::operation)]
pub(in crate::input) struct OperationFile {
    /// Version of the file format: 1.
    #[schemars(extend("const" = 1))]
    pub(in crate::input) crestfall: Field<u64>,
    /// Name of the operation.
    pub(in crate::input) operation: Field<Text>,
    /// How the train is let go.
    pub(in crate::input) release: Option<Field<ReleaseKeys>>,
    /// Station of the leading axle at which a run is complete.
    pub(in crate::input) until: Option<Field<Quantity<Length>>>,
    /// The zone in which the train is to come to rest, in place of `until`.
    pub(in crate::input) finish: Option<Field<FinishKeys>>,
    /// Longest run; 600 s where left out.
    pub(in crate::input) time_limit: Option<Field<Quantity<Time>>>,
    /// Kinds of friction and drag, by name.
    pub(in crate::input) resistance: Field<Entries<ResistanceKeys>>,
    /// The air; may be given in the scenarios instead.
    #[schemars(transform = alternatives::nameless)]
    pub(in crate::input) air: Option<Field<AirKeys>>,
    /// Stretches with a device.
    pub(in crate::input) zones: Option<Field<Vec<Field<ZoneKeys>>>>,
    /// Operating conditions, by name.
    pub(in crate::input) scenarios: Option<Field<Entries<ScenarioKeys>>>,
    /// Operating conditions in every combination.
    pub(in crate::input) grid: Option<Field<GridKeys>>,
}

/// How the train is let go.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "release")]
pub(in crate::input) struct ReleaseKeys {
    /// Station of the leading axle.
    pub(in crate::input) station: Option<Field<Quantity<Length>>>,
    /// Speed of the train.
    pub(in crate::input) speed: Option<Field<Quantity<Speed>>>,
}

/// Where a train is to come to rest.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "finish")]
pub(in crate::input) struct FinishKeys {
    /// Name of the zone.
    pub(in crate::input) zone: Field<Text>,
}

/// Friction and drag.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "resistance")]
pub(in crate::input) struct ResistanceKeys {
    /// Coefficient on the load in the car's up direction.
    #[schemars(extend("minimum" = 0))]
    pub(in crate::input) running: Field<f64>,
    /// Coefficient on the load in the car's left direction.
    #[schemars(extend("minimum" = 0))]
    pub(in crate::input) side: Field<f64>,
    /// Coefficient on the train's weight, whatever the load; 0 where left out.
    #[schemars(extend("minimum" = 0))]
    pub(in crate::input) bearings: Option<Field<f64>>,
    /// Drag coefficient times area of the whole train.
    pub(in crate::input) drag_area: Field<Quantity<Area>>,
}

/// The air: a density, or an altitude and perhaps a temperature.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "air", transform = alternatives::air)]
pub(in crate::input) struct AirKeys {
    /// Only in a grid: a name for this air.
    pub(in crate::input) name: Option<Field<Text>>,
    /// Its density.
    pub(in crate::input) density: Option<Field<Quantity<Density>>>,
    /// Altitude above the sea, from which the density follows.
    pub(in crate::input) altitude: Option<Field<Quantity<Length>>>,
    /// Temperature; the standard one at the altitude where left out.
    pub(in crate::input) temperature: Option<Field<Quantity<Temperature>>>,
}

/// A steady, level wind.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "wind", transform = alternatives::wind)]
pub(in crate::input) struct WindKeys {
    /// Only in a grid: a name for this wind; alone it is still air.
    pub(in crate::input) name: Option<Field<Text>>,
    /// Its speed.
    pub(in crate::input) speed: Option<Field<Quantity<Speed>>>,
    /// Compass bearing it blows from: 0 deg north, 90 deg east.
    pub(in crate::input) from: Option<Field<Quantity<Angle>>>,
}

/// What a zone does.
#[derive(Clone, Copy, Debug, PartialEq, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "zone_kind")]
pub(in crate::input) enum ZoneKind {
    /// Pushes with `thrust` up to the speed `cap`.
    Push,
    /// Drives to `speed` with at most `force` and keeps it.
    Hold,
    /// Brakes by eddy currents: `peak_force` at `critical_speed`.
    Eddy,
    /// Brakes by friction with `force` down to `release_speed`.
    Clamp,
}

/// A stretch with a device.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "zone", transform = alternatives::zone)]
pub(in crate::input) struct ZoneKeys {
    /// Its name.
    pub(in crate::input) name: Field<Text>,
    /// What it does.
    pub(in crate::input) kind: Field<ZoneKind>,
    /// First station.
    pub(in crate::input) from: Field<Quantity<Length>>,
    /// Last station; below `from` where the zone crosses the seam of a closed track.
    pub(in crate::input) to: Field<Quantity<Length>>,
    /// `push`: its force.
    pub(in crate::input) thrust: Option<Field<Quantity<Force>>>,
    /// `push`: the speed up to which it pushes.
    pub(in crate::input) cap: Option<Field<Quantity<Speed>>>,
    /// `hold`: the speed it drives to.
    pub(in crate::input) speed: Option<Field<Quantity<Speed>>>,
    /// `hold`, `clamp`: its largest force.
    pub(in crate::input) force: Option<Field<Quantity<Force>>>,
    /// `eddy`: its largest force.
    pub(in crate::input) peak_force: Option<Field<Quantity<Force>>>,
    /// `eddy`: the speed at which that is reached.
    pub(in crate::input) critical_speed: Option<Field<Quantity<Speed>>>,
    /// `clamp`: the speed at or below which it lets go; 0 m/s holds the train at rest.
    pub(in crate::input) release_speed: Option<Field<Quantity<Speed>>>,
}

/// Settings of a zone in one scenario.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "zone_setting")]
pub(in crate::input) struct ZoneSettings {
    /// `push`: its force.
    pub(in crate::input) thrust: Option<Field<Quantity<Force>>>,
    /// `push`: the speed up to which it pushes.
    pub(in crate::input) cap: Option<Field<Quantity<Speed>>>,
    /// `hold`: the speed it drives to.
    pub(in crate::input) speed: Option<Field<Quantity<Speed>>>,
    /// `hold`, `clamp`: its largest force.
    pub(in crate::input) force: Option<Field<Quantity<Force>>>,
    /// `eddy`: its largest force.
    pub(in crate::input) peak_force: Option<Field<Quantity<Force>>>,
    /// `eddy`: the speed at which that is reached.
    pub(in crate::input) critical_speed: Option<Field<Quantity<Speed>>>,
    /// `clamp`: the speed at or below which it lets go; 0 m/s holds the train at rest.
    pub(in crate::input) release_speed: Option<Field<Quantity<Speed>>>,
}

/// One operating condition.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "scenario")]
pub(in crate::input) struct ScenarioKeys {
    /// Who is aboard.
    #[schemars(transform = alternatives::nameless)]
    pub(in crate::input) riders: Field<WrittenRiders>,
    /// Name of a resistance.
    pub(in crate::input) resistance: Field<Text>,
    /// The air; the operation's where left out.
    #[schemars(transform = alternatives::nameless)]
    pub(in crate::input) air: Option<Field<AirKeys>>,
    /// The wind; still air where left out.
    #[schemars(transform = alternatives::nameless_wind)]
    pub(in crate::input) wind: Option<Field<WindKeys>>,
    /// Names of zones that are switched off.
    pub(in crate::input) without: Option<Field<Vec<Field<Text>>>>,
    /// Settings of zones that differ from the operation's, by name.
    pub(in crate::input) zones: Option<Field<Entries<ZoneSettings>>>,
    /// What differs from the operation's release.
    pub(in crate::input) release: Option<Field<ReleaseKeys>>,
}

/// Lists of which every combination is a scenario, named by its values joined with `+`.
#[derive(Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "grid")]
pub(in crate::input) struct GridKeys {
    /// Who is aboard.
    #[schemars(transform = alternatives::named)]
    pub(in crate::input) riders: Field<Vec<Field<WrittenRiders>>>,
    /// Names of resistances.
    #[schemars(extend("minItems" = 1))]
    pub(in crate::input) resistance: Field<Vec<Field<Text>>>,
    /// Kinds of air, each with a name; the operation's where left out.
    #[schemars(transform = alternatives::named)]
    pub(in crate::input) air: Option<Field<Vec<Field<AirKeys>>>>,
    /// Winds, each with a name; still air where left out.
    #[schemars(transform = alternatives::named)]
    pub(in crate::input) wind: Option<Field<Vec<Field<WindKeys>>>>,
}

/// Riders as written.
pub(in crate::input) type WrittenRiders = WordOr<RidersWord, RidersKeys>;

/// Who is aboard, in a word.
#[derive(Clone, Copy, Debug, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
#[schemars(rename = "riders")]
pub(in crate::input) enum RidersWord {
    /// Every seat taken.
    All,
    /// Every seat empty.
    None,
    /// Seats ahead of the train's middle.
    FrontHalf,
    /// Seats not in the front half.
    RearHalf,
    /// Seats left of the middle.
    Left,
    /// Seats right of the middle.
    Right,
}

/// Who is aboard, seat by seat.
#[derive(Clone, Debug, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
#[schemars(rename = "riders_in_seats")]
pub(in crate::input) struct RidersKeys {
    /// Only in a grid: a name for this load.
    pub(in crate::input) name: Option<Field<Text>>,
    /// Car and seat, such as `1-front-left`.
    pub(in crate::input) seats: Field<Vec<Field<Text>>>,
}
