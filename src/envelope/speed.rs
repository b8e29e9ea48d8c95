//! Bounds on the speed of the train: v/max, min/v, and whether it comes to rest.
//!
//! The speed runs straight between the nodes of its record, so that it is largest and smallest at nodes and
//! at the borders of stretches. A speed of 0 or below breaks a least speed without a measure; so does a
//! stop too many or too few.

use super::judgement::{Breach, Measure, Spell, Verdict};
use super::scope::{Stretch, value_at};
use crate::input::{SpeedBounds, Stop};

/// The speed of the train in the course of a run, straight between nodes; positions count nodes.
#[derive(Clone, Debug, PartialEq)]
pub struct SpeedRecord {
    /// Time of each node, s; never decreases.
    pub time_s: Vec<f64>,
    /// Speed at each node, m/s; negative backward.
    pub speed_m_s: Vec<f64>,
    /// Nodes at which the train comes to rest or reverses; the release is none.
    pub stops: Vec<usize>,
    /// Error of numerics that any speed may have, m/s.
    pub numerical_m_s: f64,
}

/// Holds the stretches of a record against bounds, the largest speed multiplied by a factor.
///
/// Every pass of the train through the stretches counts by itself. Where the run is not `complete`, a pass
/// that lasts to its end has not missed its stop yet.
///
/// # Errors
/// The reason where nothing can be judged.
pub(super) fn assess(
    bounds: &SpeedBounds,
    factor: f64,
    record: &SpeedRecord,
    stretches: &[Stretch],
    complete: bool,
) -> Result<Verdict, String> {
    let numbers = record.speed_m_s.iter().chain(&record.time_s);
    if !numbers.into_iter().all(|value| value.is_finite()) {
        return Err("the speed is not finite at some instant".to_owned());
    }
    let mut tally = Tally::default();
    for &stretch in stretches {
        let nodes = nodes(record, stretch);
        if let Some(max_m_s) = bounds.max_m_s {
            tally.weigh_all(&nodes, &Bound::Most(factor * max_m_s), record.numerical_m_s);
        }
        if let Some(min_m_s) = bounds.min_m_s {
            tally.weigh_all(&nodes, &Bound::Least(min_m_s), record.numerical_m_s);
        }
        if let Some(stop) = bounds.stop {
            let stops = stops_in(record, stretch);
            let under_way = !complete && stretch.to >= (record.time_s.len() - 1) as f64;
            tally.weigh_stops(stop, &stops, &nodes, under_way);
        }
    }
    Ok(tally.verdict(record.numerical_m_s))
}

/// A moment of the run.
#[derive(Clone, Copy)]
struct Node {
    position: f64,
    time_s: f64,
    speed_m_s: f64,
}

impl Node {
    fn of(record: &SpeedRecord, position: f64) -> Self {
        Self {
            position,
            time_s: value_at(&record.time_s, position),
            speed_m_s: value_at(&record.speed_m_s, position),
        }
    }

    /// The moment at a part of the way to another one.
    fn towards(&self, other: &Self, part: f64) -> Self {
        let between = |a: f64, b: f64| a + (b - a) * part;
        Self {
            position: between(self.position, other.position),
            time_s: between(self.time_s, other.time_s),
            speed_m_s: between(self.speed_m_s, other.speed_m_s),
        }
    }
}

/// The ends of a stretch and the nodes between them; at least one.
fn nodes(record: &SpeedRecord, stretch: Stretch) -> Vec<Node> {
    let inner = stretch.from.floor() as usize + 1..stretch.to.ceil() as usize;
    let inner = inner.map(|node| Node::of(record, node as f64));
    let last = (stretch.to > stretch.from).then(|| Node::of(record, stretch.to));
    std::iter::once(Node::of(record, stretch.from))
        .chain(inner)
        .chain(last)
        .collect()
}

fn stops_in(record: &SpeedRecord, stretch: Stretch) -> Vec<Node> {
    let within = |position: f64| (stretch.from..=stretch.to).contains(&position);
    let stops = record.stops.iter().map(|&node| node as f64);
    stops
        .filter(|&position| within(position))
        .map(|position| Node::of(record, position))
        .collect()
}

/// One bound, m/s.
enum Bound {
    /// On the amount of the speed, forward or backward.
    Most(f64),
    /// On the speed forward.
    Least(f64),
}

impl Bound {
    fn utilisation(&self, speed_m_s: f64) -> f64 {
        match self {
            Self::Most(max_m_s) => speed_m_s.abs() / max_m_s,
            Self::Least(_) if speed_m_s <= 0.0 => f64::INFINITY,
            Self::Least(min_m_s) => min_m_s / speed_m_s,
        }
    }

    /// How far a speed is beyond the bound, m/s; straight wherever the speed is and keeps its sign.
    fn beyond_m_s(&self, speed_m_s: f64) -> f64 {
        match self {
            Self::Most(max_m_s) => speed_m_s.abs() - max_m_s,
            Self::Least(min_m_s) => min_m_s - speed_m_s,
        }
    }

    /// As signed as the speed.
    fn limit_m_s(&self, speed_m_s: f64) -> f64 {
        match self {
            Self::Most(max_m_s) => max_m_s.copysign(speed_m_s),
            Self::Least(min_m_s) => *min_m_s,
        }
    }

    fn spell(&self, node: &Node, from_s: f64, to_s: f64) -> Spell {
        Spell {
            limit: self.limit_m_s(node.speed_m_s),
            utilisation: self.utilisation(node.speed_m_s),
            ..moment(node, from_s, to_s)
        }
    }
}

/// A spell whose worst moment is `node`, broken without a measure.
fn moment(node: &Node, from_s: f64, to_s: f64) -> Spell {
    Spell {
        from_s,
        to_s,
        duration_s: to_s - from_s,
        load: node.speed_m_s,
        peak: node.speed_m_s,
        peak_time_s: node.time_s,
        peak_position: node.position,
        limit: 0.0,
        utilisation: f64::INFINITY,
    }
}

/// What has been seen so far.
#[derive(Default)]
struct Tally {
    measured: bool,
    governing: Option<Spell>,
    findings: Vec<Breach>,
}

impl Tally {
    /// Weighs a pass against a bound: its worst moment, and every spell that is beyond it or nearer
    /// than `error_m_s`.
    fn weigh_all(&mut self, nodes: &[Node], bound: &Bound, error_m_s: f64) {
        self.measured = true;
        let mut beyond: Option<(f64, Node)> = None;
        for (index, node) in nodes.iter().enumerate() {
            self.govern(bound.spell(node, node.time_s, node.time_s));
            let before = index.checked_sub(1).map(|before| nodes[before]);
            if bound.beyond_m_s(node.speed_m_s) > -error_m_s {
                let from_s = before.map_or(node.time_s, |before| {
                    crossing_s(bound, error_m_s, &before, node)
                });
                let (_, worst) = beyond.get_or_insert((from_s, *node));
                if bound.utilisation(node.speed_m_s) > bound.utilisation(worst.speed_m_s) {
                    *worst = *node;
                }
            } else if let (Some((from_s, worst)), Some(before)) = (beyond.take(), before) {
                self.find(bound.spell(&worst, from_s, crossing_s(bound, error_m_s, node, &before)));
            }
        }
        if let (Some((from_s, worst)), Some(last)) = (beyond, nodes.last()) {
            self.find(bound.spell(&worst, from_s, last.time_s));
        }
    }

    /// Weighs the stops of a pass that is still `under_way` where the record ends.
    fn weigh_stops(&mut self, stop: Stop, stops: &[Node], nodes: &[Node], under_way: bool) {
        match stop {
            Stop::Never => {
                for node in stops {
                    self.find(moment(node, node.time_s, node.time_s));
                }
            }
            Stop::Required if stops.is_empty() && !under_way => {
                let by_speed =
                    |a: &&Node, b: &&Node| a.speed_m_s.abs().total_cmp(&b.speed_m_s.abs());
                let ends = nodes.first().zip(nodes.last());
                if let (Some(slowest), Some((first, last))) = (nodes.iter().min_by(by_speed), ends)
                {
                    self.find(moment(slowest, first.time_s, last.time_s));
                }
            }
            Stop::Required => {}
        }
    }

    fn find(&mut self, worst: Spell) {
        self.govern(worst);
        self.findings.push(Breach {
            from_s: worst.from_s,
            to_s: worst.to_s,
            worst,
        });
    }

    /// The larger utilisation governs; of equal ones the one that lasts, then the earlier.
    fn govern(&mut self, spell: Spell) {
        let governs = self.governing.is_none_or(|best| {
            let order = spell.utilisation.total_cmp(&best.utilisation);
            order
                .then(spell.duration_s.total_cmp(&best.duration_s))
                .is_gt()
        });
        if governs {
            self.governing = Some(spell);
        }
    }

    fn verdict(mut self, numerical_m_s: f64) -> Verdict {
        self.findings.sort_by(|a, b| a.from_s.total_cmp(&b.from_s));
        let measure = match self.governing {
            Some(spell) if spell.utilisation.is_infinite() => Measure::Broken,
            Some(spell) if self.measured => Measure::Utilisation(spell.utilisation),
            _ => Measure::Kept,
        };
        let band = match (measure, self.governing) {
            // v/max and min/v change by this part of themselves, or of the limit.
            (Measure::Utilisation(u), Some(spell)) => {
                numerical_m_s * (1.0 / spell.limit.abs()).max(u / spell.load.abs())
            }
            _ => 0.0,
        };
        Verdict {
            measure,
            band,
            governing: self.governing,
            findings: self.findings,
            ignored: Vec::new(),
        }
    }
}

/// When the speed comes within `error_m_s` of a bound between two moments, of which the second is
/// nearer or beyond; the time of the second where both are.
fn crossing_s(bound: &Bound, error_m_s: f64, within: &Node, beyond: &Node) -> f64 {
    let (a, b) = (
        bound.beyond_m_s(within.speed_m_s) + error_m_s,
        bound.beyond_m_s(beyond.speed_m_s) + error_m_s,
    );
    if a >= 0.0 {
        return if a > 0.0 {
            beyond.time_s
        } else {
            within.time_s
        };
    }
    within.towards(beyond, a / (a - b)).time_s
}
