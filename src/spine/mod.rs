//! The spine: the reference curve midway between the running rails, at rail height.

use crate::diagnostic::Diagnostic;
use crate::input::Track;

/// r(s) and u(s) by station.
pub struct Spine {}

/// A named stretch of stations.
#[derive(Clone, Debug, PartialEq)]
pub struct Stretch {
    /// Its name.
    pub name: String,
    /// First station, m.
    pub from_m: f64,
    /// Last station, m; below `from_m` across the seam of a closed track.
    pub to_m: f64,
}

impl Spine {
    /// Makes the spine of a track.
    ///
    /// # Errors
    /// Everything in the track that cannot make a curve, with its place.
    pub fn from_track(_track: &Track) -> Result<Self, Vec<Diagnostic>> {
        todo!()
    }
    /// Length L, m.
    pub fn length_m(&self) -> f64 {
        todo!()
    }
    /// Whether the end joins the start.
    pub fn is_closed(&self) -> bool {
        todo!()
    }
    /// The shortest named stretch that holds a station (wrapped on a closed spine).
    pub fn landmark_at(&self, _station_m: f64) -> Option<&Stretch> {
        todo!()
    }
}
