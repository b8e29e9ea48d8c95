//! One case: run the train, work out what each seat feels, hold it against the envelopes, keep the reduced result.

use super::assessment::{Case, Extremes, Finding, RuleResult, Run, SeatResult};
use super::holds::{for_seat, in_scenario};
use super::numerics::{self, Numerics};
use super::plan::{CaseId, Design, Plan};
use super::seat::SeatView;
use super::train_speed::TrainRecord;
use crate::envelope::{self, RunState};
use crate::input::GravityTerm;
use crate::loads::{self, CarLoads};
use crate::motion::{self, History, RunEnd, Samples};

/// Largest closure error of a run's books that its loads may rest on, part of the energy turned over.
const LARGEST_CLOSURE: f64 = 1e-6;

/// Rounding of the energies themselves, part of the larger one: a run on the level turns over nothing.
const ROUNDING: f64 = 1e-10;

/// Runs and judges one case.
pub(super) fn assess(plan: &Plan<'_>, id: CaseId) -> (Case, Vec<Finding>) {
    let (run, seats, findings) = match motion::simulate(&plan.ride(id)) {
        Ok(history) => {
            let judging = Judging::new(plan, id, &history);
            let (seats, findings) = judging.judge_all();
            (Ok(summary(&history, &judging.samples)), seats, findings)
        }
        Err(error) => {
            let reason = format!("the run could not be made: {error}");
            let seats = unmade_seats(plan, id, &reason);
            (Err(reason), seats, Vec::new())
        }
    };
    let (variant, scenario) = plan.names(id);
    let case = Case {
        variant: variant.to_owned(),
        scenario: scenario.to_owned(),
        run,
        seats,
    };
    (case, findings)
}

fn summary(history: &History<'_>, samples: &Samples) -> Run {
    Run {
        end: history.end,
        duration_s: history.duration_s,
        end_station_m: history.end_station_m,
        reversals: history.reversals.clone(),
        speed_m_s: Extremes::of(&samples.speed_m_s, |i| samples.train_station_m[i]),
        energy: history.energy.clone(),
    }
}

/// Every rule of every seat, not assessed.
fn unmade_seats(plan: &Plan<'_>, id: CaseId, reason: &str) -> Vec<SeatResult> {
    let envelopes = &plan.study.envelopes;
    let (_, scenario) = plan.names(id);
    let cars = plan.variants[id.variant].seats.iter().enumerate();
    cars.flat_map(|(car, seats)| seats.iter().map(move |seat| (car, seat)))
        .map(|(car, seat)| SeatResult {
            car: car + 1,
            seat: seat.name.clone(),
            felt_g: [None; 3],
            margin_g: None,
            rules: envelopes
                .iter()
                .flat_map(|e| e.rules.iter().map(move |rule| (e, rule)))
                .filter(|(_, rule)| in_scenario(rule, scenario) && for_seat(rule, car, seat))
                .map(|(e, rule)| envelope::not_assessed(e, rule, reason))
                .map(|judgement| RuleResult {
                    judgement,
                    station_m: None,
                    ignored_station_m: Vec::new(),
                })
                .collect(),
        })
        .collect()
}

/// Whether what a run shows can be called inside, and why not.
fn run_state(
    history: &History<'_>,
    samples: &Samples,
    numerics: &Result<Numerics, String>,
) -> RunState {
    let whole = not_completed(history)
        .or_else(|| books_do_not_close(history))
        .or_else(|| samples_are_missing(history, samples))
        .or_else(|| numerics.clone().err());
    whole.map_or(RunState::Complete, RunState::Incomplete)
}

fn not_completed(history: &History<'_>) -> Option<String> {
    let at = format!("at {:.1} m", history.end_station_m);
    let how = match history.end {
        RunEnd::Completed => return None,
        RunEnd::Overran => format!("overran the finish, ended {at}"),
        RunEnd::Stalled => format!("stalled {at}"),
        RunEnd::TimeLimit => format!("still under way {at} after {:.0} s", history.duration_s),
        RunEnd::RolledBack => match history.reversals.first() {
            Some(first) => format!("rolled back from {:.1} m", first.station_m),
            None => format!("rolled back, ended {at}"),
        },
    };
    Some(format!("the run did not complete: {how}"))
}

/// Written so that books that hold no number do not close.
fn books_do_not_close(history: &History<'_>) -> Option<String> {
    let energy = &history.energy;
    let rounding_j = ROUNDING * energy.start_j.abs().max(energy.end_j.abs());
    if energy.closure_j.abs() <= LARGEST_CLOSURE * energy.turned_over_j + rounding_j {
        return None;
    }
    Some(format!(
        "the energy of the run does not add up: {:.3e} J are missing of {:.3e} J turned over",
        energy.closure_j, energy.turned_over_j
    ))
}

/// A record with a gap would tell wrong times and hide what lay in the gap.
fn samples_are_missing(history: &History<'_>, samples: &Samples) -> Option<String> {
    let expected = (history.duration_s * samples.rate_hz).ceil();
    let found = samples.speed_m_s.len() as f64;
    if (found - expected).abs() <= 1.0 {
        return None;
    }
    Some(format!(
        "the record of the run has {found} samples in place of {expected}"
    ))
}

/// What all seats of a case are judged with.
pub(super) struct Judging<'a> {
    pub(super) plan: &'a Plan<'a>,
    pub(super) id: CaseId,
    pub(super) design: &'a Design<'a>,
    pub(super) samples: Samples,
    pub(super) state: RunState,
    pub(super) numerics: Numerics,
    pub(super) train: TrainRecord,
    /// By envelope and rule: what the rules about the speed of the train give, whatever the seat.
    pub(super) of_train: Vec<Vec<Option<RuleResult>>>,
}

impl<'a> Judging<'a> {
    fn new(plan: &'a Plan<'a>, id: CaseId, history: &History<'_>) -> Self {
        let samples = history.samples(plan.study.rate_hz);
        let numerics = numerics::estimate(plan, id, history, &samples);
        let state = run_state(history, &samples, &numerics);
        let numerics = numerics.unwrap_or_default();
        let goal = &plan.study.operation.goal;
        let mut judging = Self {
            plan,
            id,
            design: &plan.variants[id.variant],
            state,
            train: TrainRecord::new(history, &samples, goal, numerics.speed_m_s),
            numerics,
            of_train: Vec::new(),
            samples,
        };
        judging.of_train = judging.judge_train();
        judging
    }

    fn judge_train(&self) -> Vec<Vec<Option<RuleResult>>> {
        let of_rule = |envelope: &_, rule: &_| {
            let judgement = self.judge_speed(envelope, rule)?;
            Some(self.speed_result(judgement))
        };
        let envelopes = self.plan.study.envelopes.iter();
        let of_envelope =
            |e: &crate::input::Envelope| e.rules.iter().map(|r| of_rule(e, r)).collect();
        envelopes.map(of_envelope).collect()
    }

    /// One car after the other, so that the loads of one car at most are held.
    fn judge_all(&self) -> (Vec<SeatResult>, Vec<Finding>) {
        let of_train = self.of_train.iter().flatten().flatten();
        let mut findings: Vec<Finding> = of_train
            .flat_map(|rule| self.speed_findings(&rule.judgement))
            .collect();
        let mut seats = Vec::new();
        for car in 0..self.design.seats.len() {
            self.judge_car(car, &mut seats, &mut findings);
        }
        (seats, findings)
    }

    fn judge_car(&self, car: usize, seats: &mut Vec<SeatResult>, findings: &mut Vec<Finding>) {
        if self.design.seats[car].is_empty() {
            return;
        }
        let felt = self.loads(car, GravityTerm::Included);
        let without_gravity = self
            .plan
            .needs_excluded()
            .then(|| self.loads(car, GravityTerm::Excluded));
        let (poses, seats_here) = (&self.design.poses, &self.design.seats[car]);
        let margins = loads::seat_margins(poses, car, seats_here, &self.samples, &felt);
        for (index, seat) in self.design.seats[car].iter().enumerate() {
            let seat = SeatView {
                margin_g: margins.as_ref().map(|margins| &margins[index]),
                judging: self,
                car,
                seat,
                station_m: &felt.station_m,
                felt_g: &felt.seats[index],
                without_gravity_g: without_gravity.as_ref().map(|l| &l.seats[index]),
            };
            let (result, more) = seat.judge();
            seats.push(result);
            findings.extend(more);
        }
    }

    fn loads(&self, car: usize, term: GravityTerm) -> CarLoads {
        loads::car_loads(
            &self.design.poses,
            car,
            &self.design.seats[car],
            &self.samples,
            self.plan.study.gravity_m_s2,
            term,
        )
    }
}
