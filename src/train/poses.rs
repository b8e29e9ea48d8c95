//! Poses of all cars by the leading axle's station q: exact at the nodes of a grid, with two
//! derivatives, and quintic in between.

use nalgebra::Vector3;

use super::chain::Chain;
use super::{Layout, PoseError};
use crate::input::Train;
use crate::numerics::jet::{Jet, VectorJet};
use crate::numerics::quintic::{Grid, Jets, Quintic};
use crate::spine::{Margin, Spine};

/// Nodes closer than this are one, m: a break misplaced by so little acts for less than a tenth of
/// a millisecond, while the quintic of a shorter interval would only hold rounding.
const NEAREST_NODES_M: f64 = 2e-3;

/// Largest tables, MB.
const MEMORY_BOUND_MB: u64 = 2000;

/// Numbers that steer the tables.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PosesSettings {
    /// Widest interval of the grid, m.
    pub step_m: f64,
}

impl Default for PosesSettings {
    /// 0.1 m: halving it changes no load of a ride-sized track by 1e-5 g.
    fn default() -> Self {
        Self { step_m: 0.1 }
    }
}

/// Poses of all cars and axles of a train on a spine.
#[derive(Clone, Debug)]
pub struct Poses {
    layout: Layout,
    grid: Grid,
    /// Origin, forward, up of each car: nine components.
    cars: Vec<Quintic<9>>,
    /// Distance behind the leading axle and height of each axle.
    axles: Vec<Quintic<2>>,
    first_m: f64,
    last_m: f64,
    /// Length of a closed spine.
    lap_m: Option<f64>,
    /// Both ends, and where an axle meets a break of the spine, increasing.
    breaks_m: Vec<f64>,
    /// How far the spine may be off, every [`MARGIN_STEP_M`]; empty where that is not known.
    margins: Vec<Margin>,
}

/// Stations between which margins are not looked at, m: closer than points lie.
const MARGIN_STEP_M: f64 = 0.1;

/// The place of one q in the tables, from [`Poses::locate`].
#[derive(Clone, Copy, Debug)]
pub struct Instant {
    q: f64,
    interval: usize,
    offset_m: f64,
}

/// Origin and axes of a car in world axes, with derivatives in q.
#[derive(Clone, Copy, Debug)]
pub struct CarPose {
    /// Midway between the axles, m.
    pub origin: VectorJet,
    /// From the rear to the front axle.
    pub forward: VectorJet,
    /// Up × forward.
    pub left: VectorJet,
    /// The axles' up vectors, at right angles to forward.
    pub up: VectorJet,
}

/// Station and height of an axle with derivatives in q.
#[derive(Clone, Copy, Debug)]
pub struct AxlePose {
    /// Station, m (not wrapped).
    pub station_m: Jet,
    /// Height z of the spine there, m.
    pub height_m: Jet,
}

impl Poses {
    /// Sets a train on a spine.
    ///
    /// # Errors
    /// [`PoseError`] where the chain of axles cannot be laid along the spine.
    pub fn new(spine: &Spine, train: &Train) -> Result<Self, PoseError> {
        Self::with_settings(spine, train, PosesSettings::default())
    }

    /// The same with the grid chosen by the caller.
    ///
    /// # Errors
    /// As [`Poses::new`].
    pub fn with_settings(
        spine: &Spine,
        train: &Train,
        settings: PosesSettings,
    ) -> Result<Self, PoseError> {
        let layout = Layout::new(train);
        check_size(spine, &layout, settings)?;
        let chain = Chain::new(spine, &layout.axles_m);
        let last_axle = layout.axles_m.len() - 1;
        let first_m = if spine.is_closed() {
            0.0
        } else {
            chain.leading_m(last_axle, 0.0)?
        };
        let last_m = spine.length_m();
        // A train as long as a closed track would bite its tail.
        let (train_m, track_m) = (layout.length_m(), last_m);
        if train_m >= track_m {
            return Err(PoseError::TrainTooLong { train_m, track_m });
        }
        // The last axle at the start puts the first one off the end only round bends too sharp for it.
        if first_m >= last_m {
            let (axle, spacing_m, station_m) = (last_axle + 1, train_m, last_m);
            return Err(PoseError::NoPlaceForAxle {
                axle,
                spacing_m,
                station_m,
            });
        }
        let knots = knots(spine, &chain, &layout, (first_m, last_m))?;
        let nodes = nodes(&knots, settings.step_m);
        let tables = Tables::filled(spine, &chain, &layout, &nodes)?;
        let Tables { cars, axles, .. } = tables;
        let grid = Grid::new(with_guards(nodes));
        let lap_m = spine.is_closed().then_some(last_m);
        Ok(Self {
            layout,
            grid,
            cars,
            axles,
            first_m,
            last_m,
            lap_m,
            breaks_m: knots,
            margins: margins(spine),
        })
    }

    /// Nominal places of axles and seats.
    pub fn layout(&self) -> &Layout {
        &self.layout
    }

    /// Stations of the leading axle for which the whole train is on the track, m: first and last;
    /// unbounded on a closed spine.
    pub fn stations_m(&self) -> (f64, f64) {
        match self.lap_m {
            Some(_) => (f64::NEG_INFINITY, f64::INFINITY),
            None => (self.first_m, self.last_m),
        }
    }

    /// Length of a closed spine, m.
    pub fn lap_m(&self) -> Option<f64> {
        self.lap_m
    }

    /// Stations of the leading axle, between two of them, at which second derivatives of poses may
    /// jump, increasing, m.
    pub fn breaks_between_m(&self, a: f64, b: f64) -> &[f64] {
        let from = self.breaks_m.partition_point(|&q| q <= a.min(b));
        let to = self.breaks_m.partition_point(|&q| q < a.max(b));
        &self.breaks_m[from..to.max(from)]
    }

    /// Number of axles, shared ones counted once.
    pub fn axle_count(&self) -> usize {
        self.axles.len()
    }

    /// Finds a q in the tables, once for all cars. Off the ends of an open track everything goes
    /// on with constant second derivatives.
    pub fn locate(&self, q: f64) -> Instant {
        let wrapped = self.lap_m.map_or(q, |lap_m| q.rem_euclid(lap_m));
        let (interval, offset_m) = self.grid.locate(wrapped);
        Instant {
            q,
            interval,
            offset_m,
        }
    }

    /// Pose of car `car` (from 0).
    pub fn car(&self, car: usize, at: Instant) -> CarPose {
        let jets = self.cars[car].jets(at.interval, at.offset_m);
        let part = |i: usize| {
            let [value, d1, d2] = jets.map(|row| Vector3::new(row[i], row[i + 1], row[i + 2]));
            VectorJet::new(value, d1, d2)
        };
        let (origin, forward, up) = (part(0), part(3), part(6));
        CarPose {
            origin,
            forward,
            left: up.cross(forward),
            up,
        }
    }

    /// Station and height of axle `axle` (from 0).
    pub fn axle(&self, axle: usize, at: Instant) -> AxlePose {
        let [value, d1, d2] = self.axles[axle].jets(at.interval, at.offset_m);
        AxlePose {
            station_m: Jet::new(at.q - value[0], 1.0 - d1[0], -d2[0]),
            height_m: Jet::new(value[1], d1[1], d2[1]),
        }
    }

    /// Whether the spine is known to be uncertain.
    pub fn has_margin(&self) -> bool {
        !self.margins.is_empty()
    }

    /// How far the spine may be off under a car: the larger of the margins at its axles.
    pub fn margin(&self, car: usize, at: Instant) -> Margin {
        let [front, rear] = self.layout.cars[car];
        let under = |axle: usize| {
            let station_m = self.axle(axle, at).station_m.value;
            let wrapped_m = self
                .lap_m
                .map_or(station_m, |lap_m| station_m.rem_euclid(lap_m));
            let index = (wrapped_m / MARGIN_STEP_M).round().max(0.0) as usize;
            self.margins
                .get(index)
                .or(self.margins.last())
                .copied()
                .unwrap_or_default()
        };
        under(front).larger(&under(rear))
    }

    /// Mean station of a car's axles, m (not wrapped).
    pub fn car_station_m(&self, car: usize, at: Instant) -> f64 {
        let [front, rear] = self.layout.cars[car];
        let behind = |axle: usize| self.axles[axle].jets(at.interval, at.offset_m)[0][0];
        at.q - 0.5 * (behind(front) + behind(rear))
    }
}

/// The tables while they are filled.
struct Tables<'a> {
    spine: &'a Spine,
    chain: &'a Chain<'a>,
    layout: &'a Layout,
    cars: Vec<Quintic<9>>,
    axles: Vec<Quintic<2>>,
}

/// Jets of everything at one node, on one side of it.
#[derive(Clone)]
struct Node {
    pieces: Vec<usize>,
    cars: Vec<Jets<9>>,
    axles: Vec<Jets<2>>,
}

impl<'a> Tables<'a> {
    fn filled(
        spine: &'a Spine,
        chain: &'a Chain<'a>,
        layout: &'a Layout,
        nodes: &[f64],
    ) -> Result<Self, PoseError> {
        let cars = vec![Quintic::new(); layout.cars.len()];
        let axles = vec![Quintic::new(); layout.axles_m.len()];
        let mut tables = Self {
            spine,
            chain,
            layout,
            cars,
            axles,
        };
        let mut stations = chain.stations_m(nodes[0])?;
        let mut before: Option<Node> = None;
        for ends in nodes.windows(2) {
            let next = chain.stations_m(ends[1])?;
            let pieces = tables.pieces_between(&stations, &next);
            let left = match before.take() {
                Some(node) if node.pieces == pieces => node,
                _ => tables.node(&stations, pieces.clone()),
            };
            if tables.is_empty() {
                tables.push_guard(&left, GUARD_M);
            }
            let right = tables.node(&next, pieces);
            tables.push_interval(ends[1] - ends[0], &left, &right);
            (stations, before) = (next, Some(right));
        }
        if let Some(last) = before {
            tables.push_guard(&last, 0.0);
        }
        Ok(tables)
    }

    fn is_empty(&self) -> bool {
        self.axles[0].is_empty()
    }

    /// The smooth piece of the spine on which each axle runs between two nodes.
    fn pieces_between(&self, from_m: &[f64], to_m: &[f64]) -> Vec<usize> {
        let middles = from_m.iter().zip(to_m).map(|(a, b)| 0.5 * (a + b));
        middles.map(|s| self.spine.piece_at(s)).collect()
    }

    /// Everything at one node, by the formulas of the given pieces.
    fn node(&self, stations_m: &[f64], pieces: Vec<usize>) -> Node {
        let at = |(&s, &piece): (&f64, &usize)| self.spine.at_on(piece, s);
        let points = stations_m.iter().zip(&pieces).map(at).collect::<Vec<_>>();
        let positions = points.iter().map(|p| p.position()).collect::<Vec<_>>();
        let stations = self.chain.jets(stations_m, &positions);
        let q = stations_m[0];
        let axle = |(s, r): (&Jet, &VectorJet)| {
            let z = r.along(*s);
            [
                [q - s.value, z.value.z],
                [1.0 - s.d1, z.d1.z],
                [-s.d2, z.d2.z],
            ]
        };
        let axles = stations.iter().zip(&positions).map(axle).collect();
        let car = |&[front, rear]: &[usize; 2]| {
            let end = |axle: usize| {
                (
                    positions[axle].along(stations[axle]),
                    points[axle].up.along(stations[axle]),
                )
            };
            car_jets(end(front), end(rear))
        };
        Node {
            cars: self.layout.cars.iter().map(car).collect(),
            axles,
            pieces,
        }
    }

    fn push_interval(&mut self, width_m: f64, left: &Node, right: &Node) {
        for (car, (l, r)) in self.cars.iter_mut().zip(left.cars.iter().zip(&right.cars)) {
            car.push_hermite(width_m, l, r);
        }
        for (axle, (l, r)) in self
            .axles
            .iter_mut()
            .zip(left.axles.iter().zip(&right.axles))
        {
            axle.push_hermite(width_m, l, r);
        }
    }

    /// An interval outside the track, on which the jets at its inner end, `inner_m` from its left
    /// node, go on.
    fn push_guard(&mut self, node: &Node, inner_m: f64) {
        for (car, jets) in self.cars.iter_mut().zip(&node.cars) {
            car.push_taylor(continued(jets, inner_m));
        }
        for (axle, jets) in self.axles.iter_mut().zip(&node.axles) {
            axle.push_taylor(continued(jets, inner_m));
        }
    }
}

/// Width of the interval added before the first node, m.
const GUARD_M: f64 = 1.0;

/// Taylor coefficients at d = 0 of the parabola with the given jets at d = `inner_m`.
fn continued<const N: usize>(jets: &Jets<N>, inner_m: f64) -> [[f64; N]; 6] {
    let mut c = [[0.0; N]; 6];
    for i in 0..N {
        let [value, d1, d2] = [jets[0][i], jets[1][i], jets[2][i]];
        c[0][i] = value - inner_m * (d1 - 0.5 * inner_m * d2);
        c[1][i] = d1 - inner_m * d2;
        c[2][i] = 0.5 * d2;
    }
    c
}

/// Grid nodes with one interval more at each end.
fn with_guards(nodes: Vec<f64>) -> Vec<f64> {
    let (first, last) = (nodes[0], nodes[nodes.len() - 1]);
    let ends = |x: f64| std::iter::once(x);
    ends(first - GUARD_M)
        .chain(nodes)
        .chain(ends(last + GUARD_M))
        .collect()
}

/// Origin, forward and up of a car from its axles' positions and up vectors.
fn car_jets(front: (VectorJet, VectorJet), rear: (VectorJet, VectorJet)) -> Jets<9> {
    let forward = (front.0 - rear.0).normalized();
    let origin = (front.0 + rear.0).scaled(0.5);
    let up = (front.1 + rear.1).orthogonal_to(forward).normalized();
    let row = |part: fn(&VectorJet) -> Vector3<f64>| {
        let [o, x, u] = [part(&origin), part(&forward), part(&up)];
        [o.x, o.y, o.z, x.x, x.y, x.z, u.x, u.y, u.z]
    };
    [row(|j| j.value), row(|j| j.d1), row(|j| j.d2)]
}

/// Both ends, and between them where any axle meets a break.
fn knots(
    spine: &Spine,
    chain: &Chain<'_>,
    layout: &Layout,
    (first_m, last_m): (f64, f64),
) -> Result<Vec<f64>, PoseError> {
    let mut knots = vec![first_m, last_m];
    for axle in 0..layout.axles_m.len() {
        for &at_m in &spine.breaks_m() {
            // Behind an axle near the end of the track, the leading one would be off it.
            if at_m + layout.axles_m[axle] < last_m {
                knots.push(chain.leading_m(axle, at_m)?);
            }
        }
    }
    knots.retain(|q| (first_m..=last_m).contains(q));
    knots.sort_by(f64::total_cmp);
    knots.dedup_by(|later, earlier| *later - *earlier < NEAREST_NODES_M);
    if let Some(end) = knots.last_mut() {
        *end = last_m;
    }
    Ok(knots)
}

/// Grid nodes: the knots, and between them equal steps no wider than asked.
fn nodes(knots: &[f64], step_m: f64) -> Vec<f64> {
    let mut nodes = vec![knots[0]];
    for ends in knots.windows(2) {
        let steps = ((ends[1] - ends[0]) / step_m).ceil().max(1.0);
        let width = (ends[1] - ends[0]) / steps;
        nodes.extend((1..steps as usize).map(|i| ends[0] + i as f64 * width));
        nodes.push(ends[1]);
    }
    nodes
}

/// Margins of a spine at equal steps; none where it has none.
fn margins(spine: &Spine) -> Vec<Margin> {
    if !spine.has_margin() {
        return Vec::new();
    }
    let count = (spine.length_m() / MARGIN_STEP_M).ceil() as usize;
    let station_m = |i: usize| (i as f64 * MARGIN_STEP_M).min(spine.length_m());
    (0..=count).map(|i| spine.margin_at(station_m(i))).collect()
}

/// Refuses tables beyond the stated bound.
fn check_size(spine: &Spine, layout: &Layout, settings: PosesSettings) -> Result<(), PoseError> {
    let breaks = spine.breaks_m().len() * layout.axles_m.len();
    let intervals = spine.length_m() / settings.step_m + breaks as f64;
    let numbers = layout.cars.len() * 9 * 6 + layout.axles_m.len() * 2 * 6;
    let needed_mb = (intervals * (numbers * size_of::<f64>()) as f64 / 1e6) as u64;
    if needed_mb > MEMORY_BOUND_MB {
        return Err(PoseError::TooLarge {
            needed_mb,
            bound_mb: MEMORY_BOUND_MB,
        });
    }
    Ok(())
}
