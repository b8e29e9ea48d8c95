//! The speed of the train held against the rules about it: once a case, whatever the seats.

use super::assessment::{Finding, RuleResult, Why};
use super::case::Judging;
use super::holds::{Way, in_scenario};
use super::why::read_at;
use crate::envelope::{self, Breach, Judgement, Scope, SpeedRecord};
use crate::input::{Envelope, Goal, Rule};
use crate::motion::{History, RunEnd, Samples};

/// Largest speed of a train that the run's end took for one at rest, m/s: standstill is found to 1e-6 s.
const REST_M_S: f64 = 1e-4;

/// The way of the leading axle: samples, reversals and the end, in order of time.
pub(super) struct TrainRecord {
    pub(super) speed: SpeedRecord,
    /// The leading axle at each node, m (q).
    station_m: Vec<f64>,
}

struct Node {
    time_s: f64,
    station_m: f64,
    speed_m_s: f64,
    is_stop: bool,
}

impl TrainRecord {
    /// Samples alone may miss the instants at which the train stands, and end before the run.
    pub(super) fn new(
        history: &History<'_>,
        samples: &Samples,
        goal: &Goal,
        numerical_m_s: f64,
    ) -> Self {
        let series = samples.train_station_m.iter().zip(&samples.speed_m_s);
        let sampled = series
            .enumerate()
            .map(|(i, (&station_m, &speed_m_s))| Node {
                time_s: i as f64 / samples.rate_hz,
                station_m,
                speed_m_s,
                is_stop: false,
            });
        let reversals = history.reversals.iter().map(|reversal| Node {
            time_s: reversal.time_s,
            station_m: reversal.station_m,
            speed_m_s: 0.0,
            // A train that sets off backward has not stopped before.
            is_stop: reversal.time_s > 0.0,
        });
        let mut nodes: Vec<Node> = sampled
            .chain(reversals)
            .chain([end(history, goal)])
            .collect();
        nodes.sort_by(|a, b| a.time_s.total_cmp(&b.time_s));
        let stops = nodes.iter().enumerate().filter(|(_, node)| node.is_stop);
        Self {
            speed: SpeedRecord {
                stops: stops.map(|(index, _)| index).collect(),
                time_s: nodes.iter().map(|node| node.time_s).collect(),
                speed_m_s: nodes.iter().map(|node| node.speed_m_s).collect(),
                numerical_m_s,
            },
            station_m: nodes.iter().map(|node| node.station_m).collect(),
        }
    }
}

/// The end of a run; one with a finish completes at rest only, one without it on the move only.
fn end(history: &History<'_>, goal: &Goal) -> Node {
    let state = history.state_at(history.duration_s);
    let speed_m_s = state.map_or(0.0, |state| state.speed_m_s);
    let is_stop = match history.end {
        RunEnd::Stalled => history.duration_s > 0.0,
        RunEnd::Completed => matches!(goal, Goal::Finish { .. }),
        RunEnd::RolledBack => speed_m_s.abs() <= REST_M_S,
        RunEnd::Overran | RunEnd::TimeLimit => false,
    };
    Node {
        time_s: history.duration_s,
        station_m: history.end_station_m,
        speed_m_s: if is_stop { 0.0 } else { speed_m_s },
        is_stop,
    }
}

impl Judging<'_> {
    /// The judgement of a rule about speed, `None` where the rule is about something else.
    pub(super) fn judge_speed(&self, envelope: &Envelope, rule: &Rule) -> Option<Judgement> {
        let (_, scenario) = self.plan.names(self.id);
        let scope = if in_scenario(rule, scenario) {
            let way = Way {
                spine: &self.design.spine,
                station_m: &self.train.station_m,
                delay: 0.0,
            };
            way.scope(&rule.holds)
        } else {
            Scope::Elsewhere
        };
        envelope::judge_speed(envelope, rule, &self.train.speed, &scope, &self.state)
    }

    /// A judgement of speed with its place: stations are the leading axle's.
    pub(super) fn speed_result(&self, judgement: Judgement) -> RuleResult {
        let governing = judgement.governing;
        let station_m = governing.map(|spell| self.train_station_at(spell.peak_position));
        RuleResult {
            station_m: station_m.map(|m| self.design.spine.wrapped_m(m)),
            ignored_station_m: Vec::new(),
            judgement,
        }
    }

    /// Where the train is too fast or too slow, stops or does not.
    pub(super) fn speed_findings(&self, judgement: &Judgement) -> Vec<Finding> {
        let breaches = judgement.findings.iter();
        breaches.map(|b| self.speed_finding(judgement, b)).collect()
    }

    fn speed_finding(&self, judgement: &Judgement, breach: &Breach) -> Finding {
        let (variant, scenario) = self.plan.names(self.id);
        let spine = &self.design.spine;
        let train_station_m = self.train_station_at(breach.worst.peak_position);
        let station_m = spine.wrapped_m(train_station_m);
        let at = spine.at(station_m);
        Finding {
            variant: variant.to_owned(),
            scenario: scenario.to_owned(),
            rider: None,
            envelope: judgement.envelope.clone(),
            rule: judgement.rule.clone(),
            outcome: judgement.outcome_of(breach),
            unit: judgement.unit,
            breach: *breach,
            band: judgement.band,
            station_m,
            train_station_m,
            from_station_m: self.station_at_time(breach.from_s),
            to_station_m: self.station_at_time(breach.to_s),
            landmark: spine.landmark_at(station_m).map(|l| l.name.clone()),
            why: Why {
                speed_m_s: breach.worst.load,
                radius_m: at.radius_m(),
                grade_rad: at.grade_rad(),
                bank_left_rad: at.bank_left_rad(),
                parts_g: None,
            },
            remedies: Vec::new(),
        }
    }

    /// The leading axle at a position of its record, m (q).
    fn train_station_at(&self, position: f64) -> f64 {
        read_at(&self.train.station_m, position)
    }

    /// The leading axle at a time, m, wrapped on a closed track.
    fn station_at_time(&self, time_s: f64) -> f64 {
        let times_s = &self.train.speed.time_s;
        let after = times_s.partition_point(|&t| t < time_s);
        let after = after.clamp(1.min(times_s.len() - 1), times_s.len() - 1);
        let before = after.saturating_sub(1);
        let length_s = times_s[after] - times_s[before];
        let part = if length_s > 0.0 {
            ((time_s - times_s[before]) / length_s).clamp(0.0, 1.0)
        } else {
            1.0
        };
        let station_m = self.train_station_at(before as f64 + part * (after - before) as f64);
        self.design.spine.wrapped_m(station_m)
    }
}
