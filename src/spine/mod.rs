//! The spine: the reference curve midway between the running rails, at rail height.
//!
//! A spine gives position r(s), tangent t = r′ and up vector u(s) by station s, its arc length,
//! from design elements (`elements`) or from points (`fit`). It knows no train and no time.

mod audit;
mod ease;
mod elements;
mod fit;
mod margin;
mod point;
mod report;
mod smooth;

pub use audit::{
    Audit, Corners, Ends, Extreme, Extremes, Finding, FindingKind, Floor, Law, NoiseFloor, Points,
    Range, Remedy, Spacing, WANTED_G, audit, gaps, understated_error,
};
pub use margin::Margin;
pub use point::SpinePoint;
pub use report::{FitMethod, FitReport, Outlier};

use nalgebra::Vector3;

use crate::diagnostic::Diagnostic;
use crate::input::{Track, TrackSource};

/// Longest track that is taken, m: the tables made from it grow with its length.
pub const LONGEST_TRACK_M: f64 = 50_000.0;

/// r(s) and u(s) by station.
///
/// r is C² and u is C¹ everywhere; third derivatives of r and second derivatives of u may jump at
/// [`Spine::breaks_m`], between which everything is smooth.
#[derive(Clone, Debug)]
pub struct Spine {
    shape: Shape,
    length_m: f64,
    closed: bool,
    stretches: Vec<Stretch>,
}

/// What gives the points.
#[derive(Clone, Debug)]
enum Shape {
    Elements(elements::Legs),
    Fitted(Box<fit::Fitted>),
}

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
    pub fn from_track(track: &Track) -> Result<Self, Vec<Diagnostic>> {
        let (shape, length_m, closed, named) = match &track.source {
            TrackSource::Elements(source) => {
                let legs = elements::Legs::new(source)?;
                let named = legs.named();
                let length_m = legs.length_m();
                (Shape::Elements(legs), length_m, false, named)
            }
            TrackSource::Points(table) => {
                let fitted = fit::Fitted::new(table)?;
                let length_m = fitted.length_m();
                (
                    Shape::Fitted(Box::new(fitted)),
                    length_m,
                    table.closed,
                    Vec::new(),
                )
            }
        };
        let spine = Self {
            shape,
            length_m,
            closed,
            stretches: named,
        };
        spine.with_landmarks(track)
    }

    /// Length L, m.
    pub fn length_m(&self) -> f64 {
        self.length_m
    }

    /// Whether the end joins the start.
    pub fn is_closed(&self) -> bool {
        self.closed
    }

    /// Position and attitude at a station: wrapped on a closed spine, within [0, L] on an open one.
    pub fn at(&self, station_m: f64) -> SpinePoint {
        self.at_on(self.piece_at(station_m), station_m)
    }

    /// Position, m, and tangent alone at a station: what chaining axles needs, at a fraction of the cost.
    pub fn path_at(&self, station_m: f64) -> (Vector3<f64>, Vector3<f64>) {
        match &self.shape {
            Shape::Elements(legs) => legs.path_at(station_m),
            Shape::Fitted(fitted) => fitted.path_at(station_m),
        }
    }

    /// Interior stations where a third derivative of r or a second derivative of u may jump,
    /// increasing, m.
    pub fn breaks_m(&self) -> Vec<f64> {
        match &self.shape {
            Shape::Elements(legs) => legs.breaks_m(),
            Shape::Fitted(_) => Vec::new(),
        }
    }

    /// The smooth piece that holds a station; see [`Spine::at_on`].
    pub fn piece_at(&self, station_m: f64) -> usize {
        match &self.shape {
            Shape::Elements(legs) => legs.piece_at(station_m),
            Shape::Fitted(_) => 0,
        }
    }

    /// Position and attitude by the formula of a piece, which may be continued a little beyond its
    /// ends: so the two sides of a break can be told apart.
    pub fn at_on(&self, piece: usize, station_m: f64) -> SpinePoint {
        match &self.shape {
            Shape::Elements(legs) => legs.at_on(piece, station_m),
            Shape::Fitted(fitted) => fitted.at(station_m),
        }
    }

    /// How far the spine may lie from the track at a station, given the error of its points; none
    /// for elements.
    pub fn margin_at(&self, station_m: f64) -> Margin {
        match &self.shape {
            Shape::Elements(_) => Margin::default(),
            Shape::Fitted(fitted) => fitted.margin_at(station_m),
        }
    }

    /// Whether the error of its points is known, so that [`Spine::margin_at`] says something.
    pub fn has_margin(&self) -> bool {
        match &self.shape {
            Shape::Elements(_) => false,
            Shape::Fitted(fitted) => fitted.has_margin(),
        }
    }

    /// How the curve was laid through points; none for elements.
    pub fn fit(&self) -> Option<&FitReport> {
        match &self.shape {
            Shape::Elements(_) => None,
            Shape::Fitted(fitted) => Some(&fitted.report),
        }
    }

    /// Named elements and landmarks.
    pub fn stretches(&self) -> &[Stretch] {
        &self.stretches
    }

    /// The station on [0, L) of a closed spine; unchanged on an open one.
    pub fn wrapped_m(&self, station_m: f64) -> f64 {
        if !self.closed {
            return station_m;
        }
        let wrapped = station_m.rem_euclid(self.length_m);
        if wrapped < self.length_m {
            wrapped
        } else {
            0.0
        }
    }

    /// The shortest named stretch that holds a station (wrapped on a closed spine).
    pub fn landmark_at(&self, station_m: f64) -> Option<&Stretch> {
        let s = self.wrapped_m(station_m);
        let holding = self.stretches.iter().filter(|stretch| stretch.holds(s));
        holding.min_by(|a, b| self.width_m(a).total_cmp(&self.width_m(b)))
    }

    fn width_m(&self, stretch: &Stretch) -> f64 {
        let width = stretch.to_m - stretch.from_m;
        if width < 0.0 {
            width + self.length_m
        } else {
            width
        }
    }

    /// Adds the landmarks of a track, which must lie on it.
    fn with_landmarks(mut self, track: &Track) -> Result<Self, Vec<Diagnostic>> {
        if self.length_m > LONGEST_TRACK_M {
            return Err(vec![
                Diagnostic::error(format!(
                    "the track is {:.0} m long, longer than the {LONGEST_TRACK_M:.0} m that are taken",
                    self.length_m
                ))
                .at(&track.place),
            ]);
        }
        let mut wrong = Vec::new();
        for landmark in &track.landmarks {
            let (from_m, to_m) = (landmark.from_m, landmark.to_m);
            if from_m < 0.0 || from_m.max(to_m) > self.length_m {
                wrong.push(
                    Diagnostic::error(format!(
                        "landmark `{}` from {from_m} m to {to_m} m does not lie on the track, \
                         expected stations within 0 m..{:.3} m",
                        landmark.name, self.length_m
                    ))
                    .at(&landmark.place),
                );
            } else if to_m < from_m && !self.closed {
                wrong.push(
                    Diagnostic::error(format!(
                        "landmark `{}` ends at {to_m} m before it begins at {from_m} m",
                        landmark.name
                    ))
                    .at(&landmark.place)
                    .hint("only on a closed track may a landmark cross the start"),
                );
            }
            self.stretches.push(Stretch {
                name: landmark.name.clone(),
                from_m,
                to_m,
            });
        }
        if wrong.is_empty() {
            Ok(self)
        } else {
            Err(wrong)
        }
    }
}

impl Stretch {
    /// Whether a station on [0, L] lies in it.
    pub fn holds(&self, station_m: f64) -> bool {
        if self.from_m <= self.to_m {
            (self.from_m..=self.to_m).contains(&station_m)
        } else {
            station_m >= self.from_m || station_m <= self.to_m
        }
    }
}
