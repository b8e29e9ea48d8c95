//! A track: its elements or its points, and its landmarks.

use crate::diagnostic::Place;
use crate::input::PointTable;

/// One design of the spine, from one track file.
#[derive(Clone, Debug)]
pub struct Track {
    /// The name given in the file.
    pub name: String,
    /// What its shape comes from.
    pub source: TrackSource,
    /// Named stretches, in file order (named elements are not repeated here).
    pub landmarks: Vec<Landmark>,
    /// The value of the `track` key.
    pub place: Place,
}

/// What a spine is made from.
#[derive(Clone, Debug)]
pub enum TrackSource {
    /// Design elements laid end to end.
    Elements(ElementTrack),
    /// A table of points.
    Points(PointTable),
}

/// Where a track starts and what follows.
#[derive(Clone, Debug)]
pub struct ElementTrack {
    /// Position and attitude at station 0.
    pub start: Start,
    /// In order of station; at least one.
    pub elements: Vec<Element>,
}

/// Position and attitude at station 0.
#[derive(Clone, Copy, Debug, Default)]
pub struct Start {
    /// East, m.
    pub x_m: f64,
    /// North, m.
    pub y_m: f64,
    /// Up, m.
    pub z_m: f64,
    /// Compass bearing of the direction of travel: 0 north, 90 deg east.
    pub bearing_rad: f64,
    /// Inclination above horizontal.
    pub grade_rad: f64,
    /// Bank to the left.
    pub bank_left_rad: f64,
}

/// A stretch over which direction, grade and bank change.
#[derive(Clone, Debug)]
pub struct Element {
    /// Its name, which is also a landmark.
    pub name: Option<String>,
    /// How its length is stated.
    pub extent: Extent,
    /// Change of grade, if any.
    pub grade: Option<Change>,
    /// Change of direction, to the left, rad; 0 where none is given.
    pub turn_left_rad: f64,
    /// Change of bank (to the left), if any.
    pub bank: Option<Change>,
    /// How direction and grade change along it.
    pub ease: Ease,
    /// How bank changes along it.
    pub bank_ease: Ease,
    /// The whole element.
    pub place: Place,
}

/// How long an element is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Extent {
    /// Arc length, m, above 0.
    Length(f64),
    /// Smallest radius reached, m, above 0; the length follows.
    SmallestRadius(f64),
}

/// A change of a driven angle.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Change {
    /// To this angle, rad.
    To(f64),
    /// By this angle, rad.
    By(f64),
}

/// How a change is spread over an element of length L, x = s/L.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Ease {
    /// 10x³ − 15x⁴ + 6x⁵.
    Smooth,
    /// Rate rises linearly over this part of L, is constant, and falls over the same part; 0 < f ≤ 0.5.
    Ramp(f64),
}

/// A named stretch of stations.
#[derive(Clone, Debug)]
pub struct Landmark {
    /// Its name.
    pub name: String,
    /// First station, m.
    pub from_m: f64,
    /// Last station, m.
    pub to_m: f64,
    /// The whole entry.
    pub place: Place,
}
