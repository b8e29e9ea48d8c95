//! Axles joined by rigid links: each stands where its straight distance to the axle ahead is right.

use super::PoseError;
use crate::numerics::jet::{Jet, VectorJet};
use crate::spine::Spine;

/// A Newton step this small (relative to the station) is the last: convergence is quadratic, so
/// what it leaves is rounding.
const TOLERANCE_M: f64 = 1e-11;

/// Spacings of consecutive axles on a spine.
pub(super) struct Chain<'a> {
    spine: &'a Spine,
    spacings_m: Vec<f64>,
}

impl<'a> Chain<'a> {
    /// A chain of axles at nominal places (m behind the first).
    pub(super) fn new(spine: &'a Spine, axles_m: &[f64]) -> Self {
        let spacings_m = axles_m.windows(2).map(|pair| pair[1] - pair[0]).collect();
        Self { spine, spacings_m }
    }

    /// Stations of all axles when the first stands at `q`.
    pub(super) fn stations_m(&self, q: f64) -> Result<Vec<f64>, PoseError> {
        let mut stations = vec![q];
        for (link, &spacing_m) in self.spacings_m.iter().enumerate() {
            let next = self.neighbour(stations[link], -spacing_m);
            stations.push(next.ok_or(self.no_place(link, stations[link]))?);
        }
        Ok(stations)
    }

    /// Station of the first axle when axle `axle` stands at `station_m`.
    pub(super) fn leading_m(&self, axle: usize, station_m: f64) -> Result<f64, PoseError> {
        let mut station = station_m;
        for link in (0..axle).rev() {
            let ahead = self.neighbour(station, self.spacings_m[link]);
            station = ahead.ok_or(self.no_place(link, station))?;
        }
        Ok(station)
    }

    /// Stations of all axles with two derivatives in q, and the spine's points there.
    ///
    /// Differentiating |r_k − r_{k+1}|² = c² once and twice.
    pub(super) fn jets(&self, stations_m: &[f64], points: &[VectorJet]) -> Vec<Jet> {
        let mut jets = vec![Jet::new(stations_m[0], 1.0, 0.0)];
        for k in 1..stations_m.len() {
            let (ahead, here) = (points[k - 1].along(jets[k - 1]), &points[k]);
            let link = ahead.value - here.value;
            let along = link.dot(&here.d1);
            let d1 = link.dot(&ahead.d1) / along;
            let spread = ahead.d1 - here.d1 * d1;
            let bend = ahead.d2 - here.d2 * (d1 * d1);
            let d2 = (spread.norm_squared() + link.dot(&bend)) / along;
            jets.push(Jet::new(stations_m[k], d1, d2));
        }
        jets
    }

    /// The nearest station at straight distance |`spacing_m`| ahead (positive) or behind.
    ///
    /// Newton on the squared distance. The arc lies between the chord and half a turn of it;
    /// a root beyond that, or none, is no place.
    fn neighbour(&self, station_m: f64, spacing_m: f64) -> Option<f64> {
        let chord_m = spacing_m.abs();
        let (from, _) = self.spine.path_at(station_m);
        let mut arc_m = chord_m;
        let side = spacing_m.signum();
        for _ in 0..50 {
            let (point, tangent) = self.spine.path_at(station_m + side * arc_m);
            let link = point - from;
            let slope = 2.0 * side * link.dot(&tangent);
            let step = (link.norm_squared() - chord_m * chord_m) / slope;
            arc_m -= step;
            if !(arc_m > 0.5 * chord_m && arc_m < 2.0 * chord_m) {
                return None;
            }
            if step.abs() <= TOLERANCE_M * (1.0 + station_m.abs()) {
                return (slope > 0.0).then_some(station_m + side * arc_m);
            }
        }
        None
    }

    fn no_place(&self, link: usize, station_m: f64) -> PoseError {
        let spacing_m = self.spacings_m[link];
        PoseError::NoPlaceForAxle {
            axle: link + 2,
            spacing_m,
            station_m,
        }
    }
}
