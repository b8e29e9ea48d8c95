//! A spine through points: quintic B-splines over the cumulative chord, then by arc length.

use nalgebra::Vector3;

use super::SpinePoint;
use super::point::level_left;
use crate::diagnostic::Diagnostic;
use crate::input::{Columns, PointTable};
use crate::numerics::bspline::Curve;
use crate::numerics::jet::{Jet, VectorJet};
use crate::numerics::quadrature::integrate;
use crate::numerics::quintic::{Grid, Quintic};

/// Between neighbouring chords a curve may turn by no more than this: beyond, the points lie too
/// far apart to say how it runs between them.
const LARGEST_TURN_DEG: f64 = 30.0;

/// Steepest grade at which a bank, measured from the level frame, still means something.
const STEEPEST_WITH_BANK_DEG: f64 = 85.0;

/// Least sine of the angle between a fitted up (or left) vector and the track.
const LEAST_ACROSS: f64 = 0.2;

/// A curve through points with its attitude.
#[derive(Clone, Debug)]
pub(super) struct Fitted {
    path: Curve<3>,
    attitude: Attitude,
    /// Parameter by station.
    stations: Grid,
    parameters: Quintic<1>,
    length_m: f64,
    closed: bool,
}

/// What turns the frame about the tangent, over the parameter.
#[derive(Clone, Debug)]
enum Attitude {
    /// Bank to the left less `trend` per unit of parameter, rad.
    Bank { level: Curve<1>, trend: f64 },
    /// Up vector, neither of length 1 nor at right angles to the tangent.
    Up(Curve<3>),
    /// Left vector, likewise.
    Left(Curve<3>),
}

/// The parameters of the points and how the curve goes on after the last.
struct Knots {
    chord_m: Vec<f64>,
    /// For a closed curve the parameter at which it comes back.
    period_m: Option<f64>,
}

impl Fitted {
    /// Through every point of a table.
    pub(super) fn exact(table: &PointTable) -> Result<Self, Vec<Diagnostic>> {
        let centre = centre_line(&table.columns);
        check_turns(table, &centre)?;
        let knots = Knots::new(&centre, table.closed);
        let path = knots.through(&components(&centre));
        let (stations, parameters) = by_station(&path);
        let length_m = stations.nodes()[stations.nodes().len() - 1];
        let attitude = attitude(&table.columns, &knots);
        let closed = table.closed;
        let fitted = Self {
            path,
            attitude,
            stations,
            parameters,
            length_m,
            closed,
        };
        fitted.check_frame(table, &knots)?;
        Ok(fitted)
    }

    pub(super) fn length_m(&self) -> f64 {
        self.length_m
    }

    fn parameter_at(&self, station_m: f64) -> f64 {
        let s = if self.closed {
            station_m.rem_euclid(self.length_m)
        } else {
            station_m
        };
        let (interval, d) = self.stations.locate(s);
        self.parameters.jets(interval, d)[0][0]
    }

    /// Position, m, and tangent at a station.
    pub(super) fn path_at(&self, station_m: f64) -> (Vector3<f64>, Vector3<f64>) {
        let [r, r1, ..] = self
            .path
            .at(self.parameter_at(station_m))
            .map(Vector3::from);
        (r, r1.normalize())
    }

    /// Position and attitude at a station.
    pub(super) fn at(&self, station_m: f64) -> SpinePoint {
        let p = self.parameter_at(station_m);
        let [r, r1, r2, r3] = self.path.at(p).map(Vector3::from);
        let by_arc = ByArc::new(r1, r2, r3);
        let tangent = by_arc.tangent(r1, r2, r3);
        let up = self.attitude.up(p, by_arc.parameter(p), tangent);
        SpinePoint {
            position_m: r,
            tangent,
            up,
        }
    }

    /// Refuses a bank on a track that stands on end, and an up or left vector along the track.
    fn check_frame(&self, table: &PointTable, knots: &Knots) -> Result<(), Vec<Diagnostic>> {
        let wrong = |&row: &usize| {
            let p = knots.chord_m[row];
            let [_, r1, ..] = self.path.at(p).map(Vector3::from);
            self.attitude.fault(p, r1.normalize())
        };
        let rows = (0..table.len()).filter_map(|row| wrong(&row).map(|fault| (row, fault)));
        let mut rows = rows.peekable();
        let Some((row, (message, hint))) = rows.next() else {
            return Ok(());
        };
        let more = rows.count();
        let others = if more > 0 {
            format!(", and at {more} more rows")
        } else {
            String::new()
        };
        Err(vec![
            Diagnostic::error(format!("{message} at this row{others}"))
                .at(&table.row_place(row))
                .hint(hint),
        ])
    }
}

impl Attitude {
    /// Unit up vector by station from the parameter, its derivatives in the station and the tangent.
    fn up(&self, p: f64, parameter: Jet, tangent: VectorJet) -> VectorJet {
        match self {
            Self::Bank { level, trend } => {
                let [value, first, second, _] = level.at(p);
                let bank = Jet::new(value[0] + trend * p, first[0] + trend, second[0]);
                let bank = Jet::new(
                    bank.value,
                    bank.d1 * parameter.d1,
                    bank.d1 * parameter.d2 + bank.d2 * parameter.d1 * parameter.d1,
                );
                let (sin, cos) = bank.sin_cos();
                let left = level_left(tangent);
                tangent.cross(left) * cos + left * sin
            }
            Self::Up(up) => vector(up, p)
                .along(parameter)
                .orthogonal_to(tangent)
                .normalized(),
            Self::Left(left) => {
                let left = vector(left, p)
                    .along(parameter)
                    .orthogonal_to(tangent)
                    .normalized();
                tangent.cross(left)
            }
        }
    }

    /// What is wrong with the attitude at a parameter, and the way out.
    fn fault(&self, p: f64, tangent: Vector3<f64>) -> Option<(String, &'static str)> {
        match self {
            Self::Bank { .. } => {
                let grade_deg = tangent.z.clamp(-1.0, 1.0).asin().to_degrees();
                (grade_deg.abs() > STEEPEST_WITH_BANK_DEG).then(|| {
                    let found = format!(
                        "the fitted grade is {grade_deg:.1} deg, beyond the {STEEPEST_WITH_BANK_DEG} deg \
                         up to which a bank says how the track leans,"
                    );
                    (found, "give up vectors (`up_x,up_y,up_z`) or the two rails instead of `bank_left_deg`")
                })
            }
            Self::Up(vector_curve) | Self::Left(vector_curve) => {
                let across = vector(vector_curve, p).value;
                let sine = across.cross(&tangent).norm() / across.norm();
                (sine.is_nan() || sine <= LEAST_ACROSS).then(|| {
                    let found = format!(
                        "the fitted frame lies {:.1} deg from the track's direction, expected about 90 deg,",
                        sine.asin().to_degrees()
                    );
                    (found, "check the up vectors or the order of the rails near this row")
                })
            }
        }
    }
}

/// Derivatives of a parameter p in the arc length s, from the curve's derivatives in p.
struct ByArc {
    p1: f64,
    p2: f64,
    p3: f64,
}

impl ByArc {
    /// ds/dp = |r_p|, inverted term by term.
    fn new(r1: Vector3<f64>, r2: Vector3<f64>, r3: Vector3<f64>) -> Self {
        let speed = r1.norm();
        let speed_1 = r1.dot(&r2) / speed;
        let speed_2 = (r2.norm_squared() + r1.dot(&r3) - speed_1 * speed_1) / speed;
        let p1 = 1.0 / speed;
        let p2 = -speed_1 * p1 * p1 * p1;
        let p3 = (3.0 * speed_1 * speed_1 - speed * speed_2) * p1.powi(5);
        Self { p1, p2, p3 }
    }

    fn parameter(&self, p: f64) -> Jet {
        Jet::new(p, self.p1, self.p2)
    }

    /// r′, r″ and r‴ in s.
    fn tangent(&self, r1: Vector3<f64>, r2: Vector3<f64>, r3: Vector3<f64>) -> VectorJet {
        let Self { p1, p2, p3 } = *self;
        VectorJet::new(
            r1 * p1,
            r2 * (p1 * p1) + r1 * p2,
            r3 * (p1 * p1 * p1) + r2 * (3.0 * p1 * p2) + r1 * p3,
        )
    }
}

impl Knots {
    /// Cumulative chords.
    fn new(centre: &[Vector3<f64>], closed: bool) -> Self {
        let mut chord_m = Vec::with_capacity(centre.len());
        let mut total = 0.0;
        for (i, point) in centre.iter().enumerate() {
            total += if i > 0 {
                (point - centre[i - 1]).norm()
            } else {
                0.0
            };
            chord_m.push(total);
        }
        let back = (centre[0] - centre[centre.len() - 1]).norm();
        Self {
            chord_m,
            period_m: closed.then_some(total + back),
        }
    }

    /// The quintic through values at the points.
    fn through<const N: usize>(&self, values: &[[f64; N]]) -> Curve<N> {
        match self.period_m {
            None => Curve::interpolating(&self.chord_m, values),
            Some(period_m) => Curve::periodic(&self.chord_m, period_m, values),
        }
    }
}

/// The centre line of any column set.
fn centre_line(columns: &Columns) -> Vec<Vector3<f64>> {
    match columns {
        Columns::Bank { centre_m, .. } | Columns::Up { centre_m, .. } => centre_m.clone(),
        Columns::Rails { left_m, right_m } => left_m
            .iter()
            .zip(right_m)
            .map(|(left, right)| (left + right) * 0.5)
            .collect(),
    }
}

/// Splines of what turns the frame.
fn attitude(columns: &Columns, knots: &Knots) -> Attitude {
    match columns {
        Columns::Bank { bank_left_rad, .. } => bank(bank_left_rad, knots),
        Columns::Up { up, .. } => {
            let unit = up.iter().map(|u| u.normalize()).collect::<Vec<_>>();
            Attitude::Up(knots.through(&components(&unit)))
        }
        Columns::Rails { left_m, right_m } => {
            let left = left_m
                .iter()
                .zip(right_m)
                .map(|(l, r)| l - r)
                .collect::<Vec<_>>();
            Attitude::Left(knots.through(&components(&left)))
        }
    }
}

/// A spline through banks made continuous over ±180°; on a closed track that rolls over whole
/// turns in a lap, the turns are taken out as a trend so that the rest is periodic.
fn bank(bank_left_rad: &[f64], knots: &Knots) -> Attitude {
    use std::f64::consts::TAU;
    let nearest = |angle: f64, to: f64| angle - TAU * ((angle - to) / TAU).round();
    let mut unwrapped = Vec::with_capacity(bank_left_rad.len());
    for &angle in bank_left_rad {
        let before = unwrapped.last().copied().unwrap_or(angle);
        unwrapped.push(nearest(angle, before));
    }
    let last = unwrapped[unwrapped.len() - 1];
    let trend = knots.period_m.map_or(0.0, |period_m| {
        (nearest(unwrapped[0], last) - unwrapped[0]) / period_m
    });
    let level = unwrapped
        .iter()
        .zip(&knots.chord_m)
        .map(|(b, p)| [b - trend * p])
        .collect::<Vec<_>>();
    Attitude::Bank {
        level: knots.through(&level),
        trend,
    }
}

/// Station of the nodes of a path, and the parameter as a quintic in the station.
fn by_station(path: &Curve<3>) -> (Grid, Quintic<1>) {
    let speed = |p: f64| Vector3::from(path.at(p)[1]).norm();
    let knots = path.knots();
    let halves = knots.windows(2).flat_map(|k| [k[0], 0.5 * (k[0] + k[1])]);
    let nodes = halves.chain(knots.last().copied()).collect::<Vec<_>>();
    let mut stations = vec![0.0];
    for ends in nodes.windows(2) {
        stations.push(stations[stations.len() - 1] + integrate(ends[0], ends[1], 0.0, speed));
    }
    let jets = |p: f64| {
        let [_, r1, r2, r3] = path.at(p).map(Vector3::from);
        let by_arc = ByArc::new(r1, r2, r3);
        [[p], [by_arc.p1], [by_arc.p2]]
    };
    let mut parameters = Quintic::new();
    for (p, s) in nodes.windows(2).zip(stations.windows(2)) {
        parameters.push_hermite(s[1] - s[0], &jets(p[0]), &jets(p[1]));
    }
    (Grid::new(stations), parameters)
}

/// Refuses neighbouring chords between which the direction turns too far.
fn check_turns(table: &PointTable, centre: &[Vector3<f64>]) -> Result<(), Vec<Diagnostic>> {
    let n = centre.len();
    let corners = if table.closed { 0..n } else { 1..n - 1 };
    let turn_deg = |i: &usize| {
        let ahead = centre[(i + 1) % n] - centre[*i];
        let behind = centre[*i] - centre[(i + n - 1) % n];
        behind.angle(&ahead).to_degrees()
    };
    let wrong = corners
        .map(|i| (i, turn_deg(&i)))
        .filter(|(_, turn)| turn.is_nan() || *turn > LARGEST_TURN_DEG)
        .map(|(i, turn)| {
            Diagnostic::error(format!(
                "the track turns by {turn:.1} deg between the chords before and after this point, \
                 expected at most {LARGEST_TURN_DEG} deg: the points are too far apart, or out of order, \
                 to carry a curve"
            ))
            .at(&table.row_place(i))
            .hint("give points closer together, and look for a row out of order or a slip of the pen")
        })
        .take(20)
        .collect::<Vec<_>>();
    if wrong.is_empty() { Ok(()) } else { Err(wrong) }
}

fn components(vectors: &[Vector3<f64>]) -> Vec<[f64; 3]> {
    vectors.iter().map(|v| [v.x, v.y, v.z]).collect()
}

fn vector(curve: &Curve<3>, p: f64) -> VectorJet {
    let [value, first, second, _] = curve.at(p).map(Vector3::from);
    VectorJet::new(value, first, second)
}
