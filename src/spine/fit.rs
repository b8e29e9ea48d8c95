//! A spine from points: quintic B-splines over the cumulative chord, then by arc length.
//!
//! Through every point, or the smoothest that honours the points' error ([`super::smooth`]).

use nalgebra::Vector3;

use super::SpinePoint;
use super::margin::{Margin, Noise};
use super::point::level_left;
use super::report::{FitMethod, FitReport};
use super::smooth::{Data, Smooth};
use crate::diagnostic::Diagnostic;
use crate::input::{Columns, Fit, PointTable};
use crate::numerics::bspline::Curve;
use crate::numerics::jet::{Jet, VectorJet};
use crate::numerics::quadrature::integrate;
use crate::numerics::quintic::{Grid, Quintic};

/// Between neighbouring chords a curve may turn by no more than this: beyond, the points lie too
/// far apart to say how it runs between them (our choice: a circle of 2 m radius every metre).
const LARGEST_TURN_DEG: f64 = 30.0;

/// Steepest grade at which a bank, measured from the level frame, still means something (our choice:
/// its rate goes with the tangent of the grade, 11 rad/rad here).
const STEEPEST_WITH_BANK_DEG: f64 = 85.0;

/// Least sine of the angle between a fitted up (or left) vector and the track (our choice: 12 deg).
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
    noise: Noise,
    /// Of what turns the frame, in rad.
    roll_noise: Noise,
    /// Gauge of two rails, m: their difference over it is a direction.
    roll_scale: f64,
    pub(super) report: FitReport,
}

/// A curve with what is known of its error.
struct Laid<const N: usize> {
    curve: Curve<N>,
    noise: Noise,
    method: FitMethod,
    /// Standard deviation per coordinate, stated or found; none where not known.
    error: Option<f64>,
    residuals: Vec<f64>,
    studentised: Vec<f64>,
}

/// What is asked of one curve.
struct Wanted<'a> {
    fit: Fit,
    /// Standard deviation per coordinate, where stated.
    stated: Option<f64>,
    /// Standard deviation of rounding to the table's grid.
    rounding: Option<f64>,
    weights: &'a [f64],
    across: bool,
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
    /// The curve a table asks for.
    pub(super) fn new(table: &PointTable) -> Result<Self, Vec<Diagnostic>> {
        let centre = centre_line(&table.columns);
        check_turns(table, &centre)?;
        let knots = Knots::new(&centre, table.closed);
        let (mean_error, weights) = weights(table);
        let rails = matches!(table.columns, Columns::Rails { .. });
        // The mean of two rails has 1/√2 of the error of each.
        let halved = if rails {
            std::f64::consts::FRAC_1_SQRT_2
        } else {
            1.0
        };
        let wanted = Wanted {
            fit: table.fit,
            stated: mean_error.map(|error_m| error_m * halved),
            rounding: table
                .grids
                .position_m
                .map(|grid_m| grid_m / 12f64.sqrt() * halved),
            weights: &weights,
            across: true,
        };
        let path = knots
            .laid(&components(&centre), &wanted)
            .map_err(|()| vec![stiff(table)])?;
        let (stations, parameters) = by_station(&path.curve);
        let length_m = stations.nodes()[stations.nodes().len() - 1];
        if !length_m.is_finite() {
            return Err(vec![stiff(table)]);
        }
        let roll =
            attitude(table, &knots, &weights, mean_error).map_err(|()| vec![stiff(table)])?;
        let report = FitReport::new(table, &path.summary(), roll.error_rad);
        let fitted = Self {
            path: path.curve,
            attitude: roll.attitude,
            stations,
            parameters,
            length_m,
            closed: table.closed,
            noise: path.noise,
            roll_noise: roll.noise,
            roll_scale: roll.scale,
            report,
        };
        fitted.check_frame(table, &knots)?;
        Ok(fitted)
    }

    /// How far the spine may lie from the track.
    pub(super) fn margin_at(&self, station_m: f64) -> Margin {
        let p = self.parameter_at(station_m);
        let roll = |order: usize| self.roll_noise.half_width(p, order) / self.roll_scale;
        Margin {
            direction: self.noise.half_width(p, 1),
            bend_1_m: self.noise.half_width(p, 2),
            roll_rad: roll(0),
            roll_rate_rad_m: roll(1),
            roll_bend_rad_m2: roll(2),
        }
    }

    pub(super) fn has_margin(&self) -> bool {
        let known = |noise: &Noise| !matches!(noise, Noise::Unknown);
        known(&self.noise) || known(&self.roll_noise)
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

    /// Stations of the points of the centre line, m.
    pub(super) fn stations_of(&self, centre: &[Vector3<f64>]) -> Vec<f64> {
        let parameters = chords(centre);
        let stretched = self.length_m / self.path.knots()[self.path.knots().len() - 1];
        parameters
            .iter()
            .map(|&p| {
                // The parameter is all but the arc length, so that each step squares the error.
                let mut s = p * stretched;
                for _ in 0..20 {
                    let off = p - self.parameter_at(s.min(self.length_m * (1.0 - 1e-12)));
                    s = (s + off).clamp(0.0, self.length_m);
                    if off.abs() < 1e-10 {
                        break;
                    }
                }
                s
            })
            .collect()
    }

    pub(super) fn length_m(&self) -> f64 {
        self.length_m
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
pub(super) fn centre_line(columns: &Columns) -> Vec<Vector3<f64>> {
    match columns {
        Columns::Bank { centre_m, .. } | Columns::Up { centre_m, .. } => centre_m.clone(),
        Columns::Rails { left_m, right_m } => left_m
            .iter()
            .zip(right_m)
            .map(|(left, right)| (left + right) * 0.5)
            .collect(),
    }
}

/// What turns the frame, with its error.
struct Roll {
    attitude: Attitude,
    noise: Noise,
    /// Size of the vector that is splined: its error over this is an angle.
    scale: f64,
    /// Standard deviation of a point's roll, rad, where known.
    error_rad: Option<f64>,
}

/// The curve of what turns the frame.
fn attitude(
    table: &PointTable,
    knots: &Knots,
    weights: &[f64],
    mean_error_m: Option<f64>,
) -> Result<Roll, ()> {
    let even = vec![1.0; table.len()];
    let bank_error = match table.fit {
        Fit::Within { bank_error_rad, .. } => bank_error_rad,
        Fit::Exact | Fit::Stated | Fit::Auto => None,
    };
    let rounding = table.grids.attitude.map(|grid| grid / 12f64.sqrt());
    let angle = Wanted {
        fit: table.fit,
        stated: bank_error,
        rounding,
        weights: &even,
        across: false,
    };
    match &table.columns {
        Columns::Bank { bank_left_rad, .. } => bank(bank_left_rad, knots, &angle),
        Columns::Up { up, .. } => {
            let unit = up.iter().map(|u| u.normalize()).collect::<Vec<_>>();
            let laid = knots.laid(&components(&unit), &angle)?;
            Ok(Roll::new(
                Attitude::Up(laid.curve),
                laid.noise,
                1.0,
                laid.error,
            ))
        }
        Columns::Rails { left_m, right_m } => {
            let left = left_m
                .iter()
                .zip(right_m)
                .map(|(l, r)| l - r)
                .collect::<Vec<_>>();
            let gauge_m = left.iter().map(|l| l.norm()).sum::<f64>() / left.len() as f64;
            // The difference of two rails has √2 of the error of each.
            let doubled = std::f64::consts::SQRT_2;
            let grid_m = table.grids.position_m.map(|grid_m| grid_m / 12f64.sqrt());
            let wanted = Wanted {
                fit: table.fit,
                stated: mean_error_m.map(|error_m| error_m * doubled),
                rounding: grid_m.map(|error_m| error_m * doubled),
                weights,
                across: false,
            };
            let laid = knots.laid(&components(&left), &wanted)?;
            Ok(Roll::new(
                Attitude::Left(laid.curve),
                laid.noise,
                gauge_m,
                laid.error,
            ))
        }
    }
}

impl Roll {
    fn new(attitude: Attitude, noise: Noise, scale: f64, error: Option<f64>) -> Self {
        Self {
            attitude,
            noise,
            scale,
            error_rad: error.map(|error| error / scale),
        }
    }
}

/// A curve of banks made continuous over ±180°; on a closed track that rolls over whole turns in a
/// lap, the turns are taken out as a trend so that the rest is periodic.
fn bank(bank_left_rad: &[f64], knots: &Knots, wanted: &Wanted<'_>) -> Result<Roll, ()> {
    use std::f64::consts::TAU;
    let nearest = |angle: f64, to: f64| angle - TAU * ((angle - to) / TAU).round();
    let mut unwrapped = Vec::with_capacity(bank_left_rad.len());
    for &angle in bank_left_rad {
        let before = unwrapped.last().copied().unwrap_or(angle);
        unwrapped.push(nearest(angle, before));
    }
    let last = unwrapped[unwrapped.len() - 1];
    let turns = |period_m: f64| (nearest(unwrapped[0], last) - unwrapped[0]) / period_m;
    let trend = knots.period_m.map_or(0.0, turns);
    let level = unwrapped
        .iter()
        .zip(&knots.chord_m)
        .map(|(b, p)| [b - trend * p])
        .collect::<Vec<_>>();
    let laid = knots.laid(&level, wanted)?;
    Ok(Roll::new(
        Attitude::Bank {
            level: laid.curve,
            trend,
        },
        laid.noise,
        1.0,
        laid.error,
    ))
}

/// The mean error of a table's points, where stated, m, and (mean error / own error)² of each.
fn weights(table: &PointTable) -> (Option<f64>, Vec<f64>) {
    let even = vec![1.0; table.len()];
    match (table.fit, &table.errors_m) {
        (Fit::Within { error_m, .. }, _) => (Some(error_m), even),
        (Fit::Stated, Some(errors_m)) => {
            let mean_m = errors_m.iter().sum::<f64>() / errors_m.len() as f64;
            (
                Some(mean_m),
                errors_m.iter().map(|e| (mean_m / e).powi(2)).collect(),
            )
        }
        _ => (None, even),
    }
}

/// Where interpolated noise makes less than this of r″, 1/m (6e-5 g at 25 m/s), it is no smoothing
/// that would tell.
const NO_NOISE_1_M: f64 = 1e-6;

/// An error found by cross-validation up to this many times that of rounding is taken to be rounding
/// (our choice: it is found to a tenth or better, see `tests/physics/noise.rs`).
const LIKE_ROUNDING: f64 = 1.5;

/// An error found by cross-validation below rounding by more than this tells that some coordinates sit
/// on the grid by design and hold no error, as on a track along an axis: residuals that matched
/// rounding in all of them would flatten the others.
const BELOW_ROUNDING: f64 = 1.1;

impl Knots {
    /// A curve as asked, with its error.
    fn laid<const N: usize>(
        &self,
        values: &[[f64; N]],
        wanted: &Wanted<'_>,
    ) -> Result<Laid<N>, ()> {
        let data = Data {
            parameters: &self.chord_m,
            period: self.period_m,
            values,
            weights: wanted.weights,
            across: wanted.across,
        };
        match (wanted.fit, wanted.stated) {
            (Fit::Exact, _) => Ok(self.exact(values, wanted.rounding)),
            (_, Some(error)) if self.is_noise(error) => {
                let smooth = data.within(error).map_err(drop)?;
                Ok(Laid::smooth(smooth, FitMethod::Within))
            }
            (_, Some(error)) => Ok(self.exact(values, Some(error))),
            (_, None) => self.found(values, &data, wanted.rounding),
        }
    }

    /// A curve whose error is to be found: that of rounding where cross-validation agrees.
    fn found<const N: usize>(
        &self,
        values: &[[f64; N]],
        data: &Data<'_, N>,
        rounding: Option<f64>,
    ) -> Result<Laid<N>, ()> {
        if rounding.is_some_and(|rounding| !self.is_noise(rounding)) {
            return Ok(self.exact(values, rounding));
        }
        let validated = data.cross_validated();
        match (rounding, validated) {
            (Some(rounding), Ok(found)) if found.error > LIKE_ROUNDING * rounding => {
                Ok(Laid::smooth(found, FitMethod::CrossValidated))
            }
            (Some(rounding), Ok(found)) if found.error < rounding / BELOW_ROUNDING => {
                let rougher = data.cross_validated_for(rounding).map_err(drop)?;
                Ok(Laid::smooth(rougher, FitMethod::Grid))
            }
            (Some(rounding), _) => Ok(Laid::smooth(
                data.within(rounding).map_err(drop)?,
                FitMethod::Grid,
            )),
            (None, Ok(found)) => Ok(Laid::smooth(found, FitMethod::CrossValidated)),
            (None, Err(_)) => Err(()),
        }
    }

    /// Through every point.
    fn exact<const N: usize>(&self, values: &[[f64; N]], error: Option<f64>) -> Laid<N> {
        let noise = error.map_or(Noise::Unknown, |deviation| Noise::Interpolated {
            deviation,
            parameters: self.chord_m.clone(),
        });
        Laid {
            curve: self.through(values),
            noise,
            method: FitMethod::Exact,
            error,
            residuals: vec![0.0; values.len()],
            studentised: vec![0.0; values.len()],
        }
    }

    /// Whether interpolating points of this error would tell in a curvature, where they lie closest.
    fn is_noise(&self, deviation: f64) -> bool {
        let closest = self.chord_m.windows(2).map(|pair| pair[1] - pair[0]);
        let closest_m = closest.fold(f64::INFINITY, f64::min);
        let noise = Noise::Interpolated {
            deviation,
            parameters: (0..=CENTRAL).map(|i| i as f64 * closest_m).collect(),
        };
        noise.half_width(0.5 * CENTRAL as f64 * closest_m, 2) > NO_NOISE_1_M
    }
}

/// Intervals of an even table in whose middle the ends do not tell.
const CENTRAL: usize = 20;

impl<const N: usize> Laid<N> {
    fn smooth(smooth: Smooth<N>, method: FitMethod) -> Self {
        Self {
            curve: smooth.curve,
            noise: Noise::Smoothed(Box::new(smooth.spread)),
            method,
            error: Some(smooth.error),
            residuals: smooth.residuals,
            studentised: smooth.studentised,
        }
    }

    fn summary(&self) -> super::report::Residuals<'_> {
        super::report::Residuals {
            method: self.method,
            error_m: self.error,
            residuals_m: &self.residuals,
            studentised: &self.studentised,
        }
    }
}

/// Cumulative chords of points, which are the parameters of the curve through them.
pub(super) fn chords(centre: &[Vector3<f64>]) -> Vec<f64> {
    Knots::new(centre, false).chord_m
}

/// What an error of the points leaves open of a curve smoothed to it.
pub(super) fn path_noise(centre: &[Vector3<f64>], closed: bool, error_m: f64) -> Option<Noise> {
    let knots = Knots::new(centre, closed);
    let wanted = Wanted {
        fit: Fit::Within {
            error_m,
            bank_error_rad: None,
        },
        stated: Some(error_m),
        rounding: None,
        weights: &vec![1.0; centre.len()],
        across: true,
    };
    knots
        .laid(&components(centre), &wanted)
        .ok()
        .map(|laid| laid.noise)
}

/// Standard deviation of a point of the centre line that cross-validation finds, m.
pub(super) fn cross_validated_error(table: &PointTable) -> Option<f64> {
    let centre = centre_line(&table.columns);
    let knots = Knots::new(&centre, table.closed);
    let wanted = Wanted {
        fit: Fit::Auto,
        stated: None,
        rounding: None,
        weights: &vec![1.0; centre.len()],
        across: true,
    };
    knots.laid(&components(&centre), &wanted).ok()?.error
}

/// The equations of a fit could not be solved.
fn stiff(table: &PointTable) -> Diagnostic {
    Diagnostic::error("no smooth curve could be laid through these points")
        .at(&table.place)
        .hint("state the points' error with `fit: {within: ...}`, and look for points that lie almost on one another")
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
    let sharp = corners
        .map(|i| (i, turn_deg(&i)))
        .filter(|(_, turn)| turn.is_nan() || *turn > LARGEST_TURN_DEG);
    let sharp = sharp.collect::<Vec<_>>();
    let shown = sharp.iter().take(SHARP_SHOWN).map(|&(i, turn)| {
        Diagnostic::error(format!(
            "the track turns by {turn:.1} deg between the chords before and after this point, \
             expected at most {LARGEST_TURN_DEG} deg: the points are too far apart, or out of order, \
             to carry a curve"
        ))
        .at(&table.row_place(i))
        .hint("give points closer together, and look for a row out of order or a slip of the pen")
    });
    let mut wrong = shown.collect::<Vec<_>>();
    if let Some(more) = sharp
        .len()
        .checked_sub(SHARP_SHOWN)
        .filter(|&more| more > 0)
    {
        let message = format!("the track turns too far at {more} more points of this table");
        wrong.push(Diagnostic::error(message).at(&table.place));
    }
    if wrong.is_empty() { Ok(()) } else { Err(wrong) }
}

/// Points at which a track turns too far that are shown one by one.
const SHARP_SHOWN: usize = 5;

fn components(vectors: &[Vector3<f64>]) -> Vec<[f64; 3]> {
    vectors.iter().map(|v| [v.x, v.y, v.z]).collect()
}

fn vector(curve: &Curve<3>, p: f64) -> VectorJet {
    let [value, first, second, _] = curve.at(p).map(Vector3::from);
    VectorJet::new(value, first, second)
}
