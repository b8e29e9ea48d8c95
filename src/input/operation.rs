//! How a ride is operated: release, zones, resistance, air, scenarios.

use crate::diagnostic::Place;

/// One way of operating, from one operation file.
#[derive(Clone, Debug)]
pub struct Operation {
    /// The name given in the file.
    pub name: String,
    /// Where a run is meant to end.
    pub goal: Goal,
    /// Longest run, s.
    pub time_limit_s: f64,
    /// In file order, a grid written out; at least one.
    pub scenarios: Vec<Scenario>,
    /// The value of the `operation` key.
    pub place: Place,
}

/// Where a run is meant to end.
#[derive(Clone, Debug)]
pub enum Goal {
    /// Neither `until` nor `finish` was given.
    TrackEnd,
    /// The leading axle reaches this station, m.
    Until {
        /// Station, m; may exceed the length of a closed track.
        station_m: f64,
        /// The value of the key.
        place: Place,
    },
    /// The train comes to rest with the leading axle in this zone.
    Finish {
        /// Name of a zone that every scenario has.
        zone: String,
        /// The value of the key.
        place: Place,
    },
}

/// One operating condition with nothing left to look up.
#[derive(Clone, Debug)]
pub struct Scenario {
    /// Its name.
    pub name: String,
    /// Who is aboard.
    pub riders: Riders,
    /// Friction and drag.
    pub resistance: Resistance,
    /// The air.
    pub air: Air,
    /// The wind, if any.
    pub wind: Option<Wind>,
    /// Zones in file order, without those switched off and with the scenario's settings.
    pub zones: Vec<Zone>,
    /// How the train is let go.
    pub release: Release,
    /// The scenario's name in the file, or the grid's key.
    pub place: Place,
}

/// How the train is let go.
#[derive(Clone, Debug)]
pub struct Release {
    /// Station of the leading axle, m.
    pub station_m: f64,
    /// Speed, m/s, not negative.
    pub speed_m_s: f64,
    /// The entry that gives the station.
    pub place: Place,
}

/// Who is aboard.
#[derive(Clone, Debug)]
pub enum Riders {
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
    /// The seats named.
    Seats(Vec<SeatName>),
}

/// A seat by car and name, written `1-front-left`.
#[derive(Clone, Debug)]
pub struct SeatName {
    /// From 1 at the front.
    pub car: usize,
    /// The seat's name in its car.
    pub seat: String,
    /// Where it is written.
    pub place: Place,
}

/// Friction and drag.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Resistance {
    /// Coefficient on the load normal to the track, in the car's up direction.
    pub running: f64,
    /// Coefficient on the load in the car's left direction.
    pub side: f64,
    /// Coefficient on the train's weight, whatever the load.
    pub bearings: f64,
    /// Drag coefficient times area of the whole train, m².
    pub drag_area_m2: f64,
}

/// The air's density, or what it follows from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Air {
    /// Given, kg/m³.
    Density(f64),
    /// From the altitude.
    Altitude {
        /// Geopotential altitude, m.
        altitude_m: f64,
        /// Where given; else the standard temperature at that altitude.
        temperature_k: Option<f64>,
    },
}

/// A steady, level wind.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Wind {
    /// m/s, not negative.
    pub speed_m_s: f64,
    /// Compass bearing it blows from, rad.
    pub from_bearing_rad: f64,
}

/// A stretch with a device.
#[derive(Clone, Debug)]
pub struct Zone {
    /// Its name.
    pub name: String,
    /// First station, m.
    pub from_m: f64,
    /// Last station, m; below `from_m` where the zone crosses the seam of a closed track.
    pub to_m: f64,
    /// What it does.
    pub device: Device,
    /// The whole entry.
    pub place: Place,
}

/// What a zone does to a train wholly inside it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Device {
    /// Pushes forward up to a speed.
    Push {
        /// N.
        thrust_n: f64,
        /// m/s.
        cap_m_s: f64,
    },
    /// Drives to a speed and keeps it (chain, tyres).
    Hold {
        /// m/s, above 0.
        speed_m_s: f64,
        /// Largest force, N.
        force_n: f64,
    },
    /// Eddy-current brake.
    Eddy {
        /// Largest force, N.
        peak_force_n: f64,
        /// Speed at which it is reached, m/s.
        critical_speed_m_s: f64,
    },
    /// Friction brake.
    Clamp {
        /// N.
        force_n: f64,
        /// Speed at or below which it lets go, m/s; 0 holds the train at rest.
        release_speed_m_s: f64,
    },
}
