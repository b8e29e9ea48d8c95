//! What an assessment holds, ready to be written down; stations of seats are wrapped on a closed track.

use crate::envelope::{Breach, Judgement, Outcome, Unit};
use crate::input::InputFile;
use crate::motion::{Ledger, Reversal, RunEnd};

/// The result of a study.
#[derive(Clone, Debug)]
pub struct Assessment {
    /// Worst over all rules of all cases and seats.
    pub outcome: Outcome,
    /// What the reader has to know before using the result.
    pub cautions: Vec<String>,
    /// Files that were read.
    pub inputs: Vec<InputFile>,
    /// In file order: variants, and scenarios within each.
    pub cases: Vec<Case>,
    /// In order of case, car, seat, envelope, rule and time; those about the speed of the train lead their case.
    pub findings: Vec<Finding>,
}

/// One variant under one scenario.
#[derive(Clone, Debug)]
pub struct Case {
    /// Name of the variant.
    pub variant: String,
    /// Name of the scenario.
    pub scenario: String,
    /// The run, or why it could not be made.
    pub run: Result<Run, String>,
    /// In order of car, and as in the file within each.
    pub seats: Vec<SeatResult>,
}

/// How a run went.
#[derive(Clone, Debug)]
pub struct Run {
    /// How it ended.
    pub end: RunEnd,
    /// s.
    pub duration_s: f64,
    /// Leading axle at the end, m (not wrapped).
    pub end_station_m: f64,
    /// In order of time.
    pub reversals: Vec<Reversal>,
    /// Speed, m/s, at stations of the leading axle (not wrapped); `None` where there is no sample.
    pub speed_m_s: Option<Extremes>,
    /// The books.
    pub energy: Ledger,
}

/// Largest and smallest of a quantity over a run.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Extremes {
    /// The first largest.
    pub max: At,
    /// The first smallest.
    pub min: At,
}

/// A value and where it was met.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct At {
    /// In the unit of the quantity.
    pub value: f64,
    /// m.
    pub station_m: f64,
}

/// What one seat of one case felt, and what the rules make of it.
#[derive(Clone, Debug)]
pub struct SeatResult {
    /// From 1 at the front.
    pub car: usize,
    /// The seat's name in its car.
    pub seat: String,
    /// Unfiltered felt load by axis (x, y, z), g, at the seat's own stations.
    pub felt_g: [Option<Extremes>; 3],
    /// The largest half-width that the geometry's uncertainty gives any of its loads, g, where there
    /// is any.
    pub margin_g: Option<At>,
    /// In order of envelope and rule: the rules that are about this seat under this scenario, and those
    /// about the speed of the train, which are the same in every seat.
    pub rules: Vec<RuleResult>,
}

/// A rule's judgement with the places of its moments.
#[derive(Clone, Debug)]
pub struct RuleResult {
    /// The judgement.
    pub judgement: Judgement,
    /// Station of the seat (for a rule about speed, of the leading axle) at the governing window's peak, m.
    pub station_m: Option<f64>,
    /// Stations of the seat at the peaks of what was ignored, m, in the same order.
    pub ignored_station_m: Vec<f64>,
}

/// One place where a rule is not kept.
#[derive(Clone, Debug)]
pub struct Finding {
    /// Name of the variant.
    pub variant: String,
    /// Name of the scenario.
    pub scenario: String,
    /// Who feels it; `None` for the speed of the train, which is found once a case.
    pub rider: Option<Rider>,
    /// Name of the envelope.
    pub envelope: String,
    /// Id of the rule.
    pub rule: String,
    /// `Outside`, or `TooCloseToCall`.
    pub outcome: Outcome,
    /// What load, peak and limit are measured in.
    pub unit: Unit,
    /// When, how long and how much.
    pub breach: Breach,
    /// Uncertainty of the utilisation.
    pub band: f64,
    /// Station of the seat (of the leading axle where there is none) at the worst window's peak, m.
    pub station_m: f64,
    /// Station of the leading axle at the same time, m (not wrapped).
    pub train_station_m: f64,
    /// Station of the same where the breach begins, m.
    pub from_station_m: f64,
    /// Station of the same where it ends, m.
    pub to_station_m: f64,
    /// Shortest named stretch that holds that station.
    pub landmark: Option<String>,
    /// What makes the load what it is.
    pub why: Why,
    /// First-order ways to bring the load to the limit.
    pub remedies: Vec<Remedy>,
}

/// A place on the train.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Rider {
    /// From 1 at the front.
    pub car: usize,
    /// The seat's name in its car.
    pub seat: String,
}

/// The state of things at a finding's worst instant; spine quantities at the finding's station.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Why {
    /// Speed of the leading axle, m/s.
    pub speed_m_s: f64,
    /// Radius of the spine, m, where it is curved.
    pub radius_m: Option<f64>,
    /// Grade, rad.
    pub grade_rad: f64,
    /// Bank to the left, rad, unless the track stands on end.
    pub bank_left_rad: Option<f64>,
    /// The load in parts, where it is one.
    pub parts_g: Option<Parts>,
}

/// Parts of a filtered load along the rule's axis, g; they sum to it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Parts {
    /// Gravity; 0 where the envelope leaves gravity out.
    pub gravity: f64,
    /// v²/ρ of the spine at the seat's station.
    pub normal: f64,
    /// Change of speed along the spine.
    pub tangential: f64,
    /// The rest: what the offset from the spine adds.
    pub offset: f64,
}

/// One change that would, to first order and by itself, bring the load to the limit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Remedy {
    /// What is changed.
    pub change: Change,
    /// As it is: m/s, m or rad.
    pub from: f64,
    /// As it would be.
    pub to: f64,
}

/// What a remedy changes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Change {
    /// Speed of the train, m/s.
    Speed,
    /// Radius of the spine, m.
    Radius,
    /// Bank to the left, rad.
    Bank,
}

impl Case {
    /// Worst over all rules of all seats; a case that no rule is about has shown nothing.
    pub fn outcome(&self) -> Outcome {
        let rules = self.seats.iter().flat_map(|seat| &seat.rules);
        let outcomes = rules.map(|rule| rule.judgement.outcome);
        outcomes.max().unwrap_or(Outcome::NotAssessed)
    }
}

impl Extremes {
    /// Of a series and its stations; `None` where it is empty or holds a value that is no number.
    pub(super) fn of(values: &[f64], station_m: impl Fn(usize) -> f64) -> Option<Self> {
        let (mut max, mut min) = (0, 0);
        for (sample, value) in values.iter().enumerate() {
            if !value.is_finite() {
                return None;
            }
            if *value > values[max] {
                max = sample;
            }
            if *value < values[min] {
                min = sample;
            }
        }
        let at = |sample: usize| {
            values.get(sample).map(|&value| At {
                value,
                station_m: station_m(sample),
            })
        };
        Some(Self {
            max: at(max)?,
            min: at(min)?,
        })
    }
}
