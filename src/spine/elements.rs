//! A spine from design elements: direction, grade and bank are driven, position is their integral.
//!
//! t = (cos ψ cos θ, sin ψ cos θ, sin θ) with θ unbounded, so that a loop is a grade going through
//! 360°; up = level up cos φ + level left sin φ for a bank φ to the left.

use std::f64::consts::FRAC_PI_2;

use nalgebra::Vector3;

use super::ease::{Phase, corners};
use super::{SpinePoint, Stretch};
use crate::diagnostic::Diagnostic;
use crate::input::{Change, Ease, Element, ElementTrack, Extent};
use crate::numerics::jet::{Jet, VectorJet};
use crate::numerics::quadrature::integrate;
use crate::numerics::quintic::Quintic;

/// Stretch over which position is integrated at once, m: a tenth of a metre turns by less than
/// 0.1 rad on any track a train can follow, for which five Gauss points leave less than 1e-15 m.
/// A quintic between its ends leaves 1e-9 m where direction and grade change over 2 m.
const PANEL_M: f64 = 0.1;

/// Elements laid end to end.
#[derive(Clone, Debug)]
pub(super) struct Legs {
    legs: Vec<Leg>,
    pieces: Vec<Piece>,
    length_m: f64,
}

/// One element with nothing left to work out.
#[derive(Clone, Debug)]
struct Leg {
    name: Option<String>,
    from_m: f64,
    length_m: f64,
    direction: Driven,
    grade: Driven,
    bank: Driven,
    ease: Ease,
    bank_ease: Ease,
}

/// An angle at the start of an element and its change over it, rad.
#[derive(Clone, Copy, Debug)]
struct Driven {
    start: f64,
    change: f64,
}

/// The part of an element between two corners of its eases.
#[derive(Clone, Debug)]
struct Piece {
    leg: usize,
    from_m: f64,
    phase: Phase,
    bank_phase: Phase,
    /// Position over each panel, m.
    panels: Quintic<3>,
    panel_count: usize,
    panel_m: f64,
}

impl Legs {
    /// Lays elements end to end.
    pub(super) fn new(track: &ElementTrack) -> Result<Self, Vec<Diagnostic>> {
        let start = &track.start;
        let mut attitude = [
            FRAC_PI_2 - start.bearing_rad,
            start.grade_rad,
            start.bank_left_rad,
        ];
        let (mut legs, mut wrong, mut from_m) = (Vec::<Leg>::new(), Vec::new(), 0.0);
        for element in &track.elements {
            match Leg::new(element, from_m, attitude) {
                Ok(leg) => {
                    from_m += leg.length_m;
                    attitude = [leg.direction.end(), leg.grade.end(), leg.bank.end()];
                    legs.push(leg);
                }
                Err(diagnostic) => wrong.push(*diagnostic),
            }
        }
        if !wrong.is_empty() {
            return Err(wrong);
        }
        if from_m > super::LONGEST_TRACK_M {
            return Ok(Self {
                legs,
                pieces: Vec::new(),
                length_m: from_m,
            });
        }
        let position = Vector3::new(start.x_m, start.y_m, start.z_m);
        Ok(Self {
            pieces: pieces(&legs, position),
            legs,
            length_m: from_m,
        })
    }

    pub(super) fn length_m(&self) -> f64 {
        self.length_m
    }

    /// Named elements.
    pub(super) fn named(&self) -> Vec<Stretch> {
        let stretch = |leg: &Leg| {
            let (from_m, to_m) = (leg.from_m, leg.from_m + leg.length_m);
            leg.name.clone().map(|name| Stretch { name, from_m, to_m })
        };
        self.legs.iter().filter_map(stretch).collect()
    }

    pub(super) fn breaks_m(&self) -> Vec<f64> {
        self.pieces
            .iter()
            .skip(1)
            .map(|piece| piece.from_m)
            .collect()
    }

    pub(super) fn piece_at(&self, station_m: f64) -> usize {
        self.pieces
            .partition_point(|piece| piece.from_m <= station_m)
            .saturating_sub(1)
    }

    /// Position, m, and tangent at a station.
    pub(super) fn path_at(&self, station_m: f64) -> (Vector3<f64>, Vector3<f64>) {
        self.pieces[self.piece_at(station_m)].path(station_m)
    }

    pub(super) fn at_on(&self, piece: usize, station_m: f64) -> SpinePoint {
        let piece = &self.pieces[piece];
        let leg = &self.legs[piece.leg];
        let (direction, grade, bank) = leg.angles(piece, station_m);
        let (sin_d, cos_d) = direction.sin_cos();
        let (sin_g, cos_g) = grade.sin_cos();
        let (sin_b, cos_b) = bank.sin_cos();
        let tangent = VectorJet::from_components(cos_d * cos_g, sin_d * cos_g, sin_g);
        let level_left = VectorJet::from_components(-sin_d, cos_d, Jet::default());
        let level_up = VectorJet::from_components(-(cos_d * sin_g), -(sin_d * sin_g), cos_g);
        SpinePoint {
            position_m: piece.position_m(leg, station_m),
            tangent,
            up: level_up * cos_b + level_left * sin_b,
        }
    }
}

/// The pieces of all legs, with positions integrated from the start.
fn pieces(legs: &[Leg], start_m: Vector3<f64>) -> Vec<Piece> {
    let mut pieces = Vec::new();
    let mut position = start_m;
    for (index, leg) in legs.iter().enumerate() {
        let mut cuts = [corners(leg.ease), corners(leg.bank_ease)].concat();
        cuts.push(1.0);
        cuts.sort_by(f64::total_cmp);
        cuts.dedup_by(|a, b| *a - *b < 1e-12);
        let mut from = 0.0;
        for to in cuts {
            let (piece, end) = Piece::new(leg, index, (from, to), position);
            pieces.push(piece);
            (position, from) = (end, to);
        }
    }
    pieces
}

impl Piece {
    /// The part of a leg between two values of x, starting at a position; and where it ends.
    fn new(
        leg: &Leg,
        index: usize,
        (from, to): (f64, f64),
        start: Vector3<f64>,
    ) -> (Self, Vector3<f64>) {
        let middle = 0.5 * (from + to);
        let (from_m, to_m) = (
            leg.from_m + from * leg.length_m,
            leg.from_m + to * leg.length_m,
        );
        let count = ((to_m - from_m) / PANEL_M).ceil().max(1.0);
        let mut piece = Self {
            leg: index,
            from_m,
            phase: Phase::at(leg.ease, middle),
            bank_phase: Phase::at(leg.bank_ease, middle),
            panels: Quintic::new(),
            panel_count: count as usize,
            panel_m: (to_m - from_m) / count,
        };
        let end = piece.fill(leg, start);
        (piece, end)
    }

    /// Integrates the position panel by panel; returns where the piece ends.
    fn fill(&mut self, leg: &Leg, start: Vector3<f64>) -> Vector3<f64> {
        let phase = self.phase;
        let jets = |position: Vector3<f64>, s: f64| {
            let (t, bend) = leg.tangent_and_bend(phase, s);
            [position.into(), t.into(), bend.into()]
        };
        let (mut position, mut left) = (start, jets(start, self.from_m));
        for panel in 0..self.panel_count {
            let (from_m, to_m) = (self.panel_start_m(panel), self.panel_start_m(panel + 1));
            position += integrate(from_m, to_m, Vector3::zeros(), |s| leg.tangent(phase, s));
            let right = jets(position, to_m);
            self.panels.push_hermite(self.panel_m, &left, &right);
            left = right;
        }
        position
    }

    fn panel_start_m(&self, panel: usize) -> f64 {
        self.from_m + panel as f64 * self.panel_m
    }

    /// The panel that holds a station, and how far into it that lies, m.
    fn panel_at(&self, station_m: f64) -> (usize, f64) {
        let panel = ((station_m - self.from_m) / self.panel_m).max(0.0) as usize;
        let panel = panel.min(self.panel_count - 1);
        (panel, station_m - self.panel_start_m(panel))
    }

    /// Position at a station, m, integrated from the start of its panel.
    fn position_m(&self, leg: &Leg, station_m: f64) -> Vector3<f64> {
        let panel = self.panel_at(station_m).0;
        let start = Vector3::from(self.panels.jets(panel, 0.0)[0]);
        let tangent = |s: f64| leg.tangent(self.phase, s);
        let from_m = self.panel_start_m(panel);
        start + integrate(from_m, station_m, Vector3::zeros(), tangent)
    }

    /// Position, m, and tangent at a station, by the quintic.
    fn path(&self, station_m: f64) -> (Vector3<f64>, Vector3<f64>) {
        let (panel, offset_m) = self.panel_at(station_m);
        let [position, tangent, _] = self.panels.jets(panel, offset_m);
        (position.into(), tangent.into())
    }
}

impl Leg {
    /// An element that starts at a station with given direction, grade and bank.
    fn new(element: &Element, from_m: f64, attitude: [f64; 3]) -> Result<Self, Box<Diagnostic>> {
        let direction = Driven {
            start: attitude[0],
            change: element.turn_left_rad,
        };
        let grade = Driven::new(attitude[1], element.grade);
        let bank = Driven::new(attitude[2], element.bank);
        let length_m = match element.extent {
            Extent::Length(length_m) => length_m,
            Extent::SmallestRadius(radius_m) => radius_m * sharpest(direction, grade, element.ease),
        };
        if length_m <= 0.0 {
            return Err(Box::new(
                Diagnostic::error(
                    "a radius alone gives this element no length: neither its direction nor its grade changes",
                )
                .at(&element.place)
                .hint("state a `length`, or a `turn`, `grade_to` or `grade_by` that changes something"),
            ));
        }
        let name = element.name.clone();
        let (ease, bank_ease) = (element.ease, element.bank_ease);
        Ok(Self {
            name,
            from_m,
            length_m,
            direction,
            grade,
            bank,
            ease,
            bank_ease,
        })
    }

    /// Direction, grade and bank with their derivatives in the station.
    fn angles(&self, piece: &Piece, station_m: f64) -> (Jet, Jet, Jet) {
        let x = (station_m - self.from_m) / self.length_m;
        let per_m = 1.0 / self.length_m;
        let by_station = |part: Jet| Jet::new(part.value, part.d1 * per_m, part.d2 * per_m * per_m);
        let part = by_station(piece.phase.part(x));
        let bank_part = by_station(piece.bank_phase.part(x));
        (
            self.direction.at(part),
            self.grade.at(part),
            self.bank.at(bank_part),
        )
    }

    /// Unit tangent and its derivative at a station.
    fn tangent_and_bend(&self, phase: Phase, station_m: f64) -> (Vector3<f64>, Vector3<f64>) {
        let part = phase.part((station_m - self.from_m) / self.length_m);
        let (sin_d, cos_d) = self.direction.at(part).value.sin_cos();
        let (sin_g, cos_g) = self.grade.at(part).value.sin_cos();
        let per_m = part.d1 / self.length_m;
        let (turn, pitch) = (self.direction.change * per_m, self.grade.change * per_m);
        let level_left = Vector3::new(-sin_d, cos_d, 0.0);
        let level_up = Vector3::new(-cos_d * sin_g, -sin_d * sin_g, cos_g);
        let tangent = Vector3::new(cos_d * cos_g, sin_d * cos_g, sin_g);
        (tangent, level_left * (turn * cos_g) + level_up * pitch)
    }

    /// Unit tangent at a station.
    fn tangent(&self, phase: Phase, station_m: f64) -> Vector3<f64> {
        let part = phase.part((station_m - self.from_m) / self.length_m).value;
        let (sin_d, cos_d) = (self.direction.start + self.direction.change * part).sin_cos();
        let (sin_g, cos_g) = (self.grade.start + self.grade.change * part).sin_cos();
        Vector3::new(cos_d * cos_g, sin_d * cos_g, sin_g)
    }
}

impl Driven {
    fn new(start: f64, change: Option<Change>) -> Self {
        let change = match change {
            None => 0.0,
            Some(Change::By(by)) => by,
            Some(Change::To(to)) => to - start,
        };
        Self { start, change }
    }

    fn end(self) -> f64 {
        self.start + self.change
    }

    fn at(self, part: Jet) -> Jet {
        part.scaled(self.change) + Jet::new(self.start, 0.0, 0.0)
    }
}

/// Largest curvature of an element of unit length: max of √(θ′² + ψ′² cos² θ) over x.
///
/// A search over equal steps, then golden sections around the best one.
fn sharpest(direction: Driven, grade: Driven, ease: Ease) -> f64 {
    const STEPS: usize = 2000;
    let curvature = |x: f64| {
        let part = Phase::at(ease, x).part(x);
        let level = direction.change * grade.at(part).value.cos();
        part.d1.abs() * grade.change.hypot(level)
    };
    let at = |step: usize| step as f64 / STEPS as f64;
    let best = (0..=STEPS).max_by(|&a, &b| curvature(at(a)).total_cmp(&curvature(at(b))));
    let best = best.unwrap_or(0);
    let (mut low, mut high) = (at(best.saturating_sub(1)), at((best + 1).min(STEPS)));
    const GOLDEN: f64 = 0.618_033_988_749_894_9;
    for _ in 0..60 {
        let width = GOLDEN * (high - low);
        if curvature(high - width) < curvature(low + width) {
            low = high - width;
        } else {
            high = low + width;
        }
    }
    curvature(at(best)).max(curvature(0.5 * (low + high)))
}
