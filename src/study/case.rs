//! One case: run the train, work out what each seat feels, hold it against the envelopes, keep the reduced result.

use super::assessment::{Case, Extremes, Finding, RuleResult, Run, SeatResult, Why};
use super::plan::{CaseId, Design, Plan};
use crate::envelope::{self, Judgement, Outcome, RunState};
use crate::input::{GravityTerm, Seat};
use crate::loads::{self, AxesG, CarLoads};
use crate::motion::{self, History, RunEnd, Samples};

/// Largest closure error of a run's books that its loads may rest on, part of the energy turned over.
const LARGEST_CLOSURE: f64 = 1e-6;

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
    let cars = plan.variants[id.variant].seats.iter().enumerate();
    cars.flat_map(|(car, seats)| seats.iter().map(move |seat| (car, seat)))
        .map(|(car, seat)| SeatResult {
            car: car + 1,
            seat: seat.name.clone(),
            felt_g: [None; 3],
            rules: envelopes
                .iter()
                .flat_map(|e| envelope::not_assessed(e, reason))
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
fn run_state(history: &History<'_>, samples: &Samples) -> RunState {
    let whole = not_completed(history)
        .or_else(|| books_do_not_close(history))
        .or_else(|| samples_are_missing(history, samples));
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
    if energy.closure_j.abs() <= LARGEST_CLOSURE * energy.turned_over_j {
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
struct Judging<'a> {
    plan: &'a Plan<'a>,
    id: CaseId,
    design: &'a Design<'a>,
    samples: Samples,
    state: RunState,
}

impl<'a> Judging<'a> {
    fn new(plan: &'a Plan<'a>, id: CaseId, history: &History<'_>) -> Self {
        let samples = history.samples(plan.study.rate_hz);
        Self {
            plan,
            id,
            design: &plan.variants[id.variant],
            state: run_state(history, &samples),
            samples,
        }
    }

    /// One car after the other, so that the loads of one car at most are held.
    fn judge_all(&self) -> (Vec<SeatResult>, Vec<Finding>) {
        let (mut seats, mut findings) = (Vec::new(), Vec::new());
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
        for (index, seat) in self.design.seats[car].iter().enumerate() {
            let seat = SeatView {
                judging: self,
                car,
                seat,
                station_m: &felt.station_m,
                felt_g: &felt.seats[index],
                without_gravity_g: without_gravity.as_ref().map(|l| &l.seats[index]),
            };
            let judgements = seat.judgements();
            findings.extend(seat.findings(&judgements));
            seats.push(seat.result(judgements));
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

/// One seat of one case.
struct SeatView<'a> {
    judging: &'a Judging<'a>,
    car: usize,
    seat: &'a Seat,
    station_m: &'a [f64],
    felt_g: &'a AxesG,
    without_gravity_g: Option<&'a AxesG>,
}

impl SeatView<'_> {
    /// In order of envelope and rule; each distinct filter runs once.
    fn judgements(&self) -> Vec<Judgement> {
        let envelopes = &self.judging.plan.study.envelopes;
        let mut by_envelope = vec![Vec::new(); envelopes.len()];
        for view in &self.judging.plan.views {
            let axes_g = match (view.gravity, self.without_gravity_g) {
                (GravityTerm::Excluded, Some(axes_g)) => axes_g,
                _ => self.felt_g,
            };
            let record = loads::filtered(axes_g, self.judging.samples.rate_hz, view.filter);
            for &index in &view.envelopes {
                by_envelope[index] =
                    envelope::judge(&envelopes[index], &record, &self.judging.state);
            }
        }
        by_envelope.concat()
    }

    fn findings(&self, judgements: &[Judgement]) -> Vec<Finding> {
        let each = |j: &Judgement| -> Vec<Finding> {
            let finding = |breach| self.finding(j, breach);
            j.findings.iter().map(finding).collect()
        };
        judgements.iter().flat_map(each).collect()
    }

    fn finding(&self, judgement: &Judgement, breach: &envelope::Breach) -> Finding {
        let (variant, scenario) = self.judging.plan.names(self.judging.id);
        let samples = &self.judging.samples;
        let time_s = breach.worst.peak_time_s;
        let station_m = self.station_at(time_s);
        let spine = &self.judging.design.spine;
        Finding {
            variant: variant.to_owned(),
            scenario: scenario.to_owned(),
            car: self.car + 1,
            seat: self.seat.name.clone(),
            envelope: judgement.envelope.clone(),
            rule: judgement.rule.clone(),
            outcome: if breach.worst.utilisation - judgement.band > 1.0 {
                Outcome::Outside
            } else {
                Outcome::TooCloseToCall
            },
            breach: *breach,
            band: judgement.band,
            station_m,
            train_station_m: value_at(&samples.train_station_m, samples.rate_hz, time_s),
            from_station_m: self.station_at(breach.from_s),
            to_station_m: self.station_at(breach.to_s),
            landmark: spine.landmark_at(station_m).map(|l| l.name.clone()),
            why: Why {
                speed_m_s: value_at(&samples.speed_m_s, samples.rate_hz, time_s),
                radius_m: None,
                grade_rad: None,
                bank_left_rad: None,
                parts_g: None,
            },
        }
    }

    fn result(&self, judgements: Vec<Judgement>) -> SeatResult {
        let wrapped_m = |i: usize| self.judging.design.spine.wrapped_m(self.station_m[i]);
        SeatResult {
            car: self.car + 1,
            seat: self.seat.name.clone(),
            felt_g: (self.felt_g.each_ref()).map(|axis_g| Extremes::of(axis_g, wrapped_m)),
            rules: judgements.into_iter().map(|j| self.placed(j)).collect(),
        }
    }

    fn placed(&self, judgement: Judgement) -> RuleResult {
        let governing = judgement.governing;
        let ignored = judgement.ignored.iter();
        RuleResult {
            station_m: governing.map(|spell| self.station_at(spell.peak_time_s)),
            ignored_station_m: ignored.map(|i| self.station_at(i.time_s)).collect(),
            judgement,
        }
    }

    /// The seat's own station at a time, m, wrapped on a closed track.
    fn station_at(&self, time_s: f64) -> f64 {
        let rate_hz = self.judging.samples.rate_hz;
        let station_m = value_at(self.station_m, rate_hz, time_s);
        self.judging.design.spine.wrapped_m(station_m)
    }
}

/// A series read between its samples; its last value beyond its end.
fn value_at(values: &[f64], rate_hz: f64, time_s: f64) -> f64 {
    let position = (time_s * rate_hz).clamp(0.0, (values.len() - 1) as f64);
    let before = position as usize;
    let after = (before + 1).min(values.len() - 1);
    values[before] + (values[after] - values[before]) * (position - before as f64)
}
