//! Time histories of a case's seats, made one car at a time.

use nalgebra::Vector3;

use super::plan::{CaseId, Design, Plan};
use crate::input::{GravityTerm, Seat};
use crate::loads::{self, AxesG, CarLoads};
use crate::motion::{self, Samples};

/// The run of a case, from which the records of its seats are made.
pub struct CaseRecord<'a> {
    plan: &'a Plan<'a>,
    design: &'a Design<'a>,
    samples: Samples,
}

/// What one seat went through, sample by sample.
pub struct SeatRecord<'a> {
    /// From 1 at the front.
    pub car: usize,
    /// The seat's name in its car.
    pub seat: &'a str,
    /// The run.
    pub samples: &'a Samples,
    /// The seat's own station, m, wrapped on a closed track.
    pub station_m: &'a [f64],
    /// The seat's reference point, world axes, m.
    pub position_m: Vec<Vector3<f64>>,
    /// Unfiltered felt load, g.
    pub felt_g: &'a AxesG,
    /// Loads after each distinct filter (and gravity term) of the envelopes, in their order, g.
    pub filtered_g: Vec<AxesG>,
}

impl<'a> Plan<'a> {
    /// Runs one case for its time histories.
    ///
    /// # Errors
    /// Why the run could not be made.
    pub fn record(&'a self, case: CaseId) -> Result<CaseRecord<'a>, motion::MotionError> {
        let history = motion::simulate(&self.ride(case))?;
        Ok(CaseRecord {
            plan: self,
            design: &self.variants[case.variant],
            samples: history.samples(self.study.rate_hz),
        })
    }
}

impl CaseRecord<'_> {
    /// Hands over the seats one after the other, in order of car and file.
    ///
    /// # Errors
    /// The first error of `visit`.
    pub fn each_seat<E>(
        &self,
        mut visit: impl FnMut(&SeatRecord<'_>) -> Result<(), E>,
    ) -> Result<(), E> {
        for (car, seats) in self.design.seats.iter().enumerate() {
            if seats.is_empty() {
                continue;
            }
            let felt = self.loads(car, seats, GravityTerm::Included);
            let without_gravity = self
                .plan
                .needs_excluded()
                .then(|| self.loads(car, seats, GravityTerm::Excluded));
            let wrapped = felt
                .station_m
                .iter()
                .map(|&m| self.design.spine.wrapped_m(m));
            let station_m: Vec<f64> = wrapped.collect();
            for (index, seat) in seats.iter().enumerate() {
                let felt_g = &felt.seats[index];
                let without_gravity_g = without_gravity.as_ref().map(|l| &l.seats[index]);
                visit(&SeatRecord {
                    car: car + 1,
                    seat: &seat.name,
                    samples: &self.samples,
                    station_m: &station_m,
                    position_m: loads::seat_positions(&self.design.poses, car, seat, &self.samples),
                    felt_g,
                    filtered_g: self.filtered(felt_g, without_gravity_g),
                })?;
            }
        }
        Ok(())
    }

    fn filtered(&self, felt_g: &AxesG, without_gravity_g: Option<&AxesG>) -> Vec<AxesG> {
        let views = self.plan.views.iter();
        views
            .map(|view| {
                let axes_g = match (view.gravity, without_gravity_g) {
                    (GravityTerm::Excluded, Some(axes_g)) => axes_g,
                    _ => felt_g,
                };
                loads::filtered(axes_g, self.samples.rate_hz, view.filter).axes_g
            })
            .collect()
    }

    fn loads(&self, car: usize, seats: &[Seat], term: GravityTerm) -> CarLoads {
        let gravity_m_s2 = self.plan.study.gravity_m_s2;
        let poses = &self.design.poses;
        loads::car_loads(poses, car, seats, &self.samples, gravity_m_s2, term)
    }
}
