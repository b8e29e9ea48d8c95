//! The books of a run: what energy it had, what each force took or gave.

use std::cell::Cell;

use super::equation::{Law, Model, Terms};
use crate::numerics::quadrature::integrate_step;
use crate::numerics::root::bracketed;

/// When an axle passes a break is found to this, s.
const PASSING_TIME_S: f64 = 1e-10;

/// Energy of a run, J; works are done on the train, losses negative.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Ledger {
    /// Kinetic and potential at the start.
    pub start_j: f64,
    /// At the end.
    pub end_j: f64,
    /// Running, side and bearings.
    pub rolling_j: f64,
    /// Air.
    pub air_j: f64,
    /// By zone, in file order.
    pub zones_j: Vec<(String, f64)>,
    /// end − start − all works.
    pub closure_j: f64,
    /// Largest minus smallest kinetic energy plus the sum of the absolute works.
    pub turned_over_j: f64,
}

/// The books while they are kept.
pub(super) struct Books {
    start_j: f64,
    kinetic_j: (f64, f64),
    works: Works,
}

/// Works or powers of the resistances and of each zone.
#[derive(Clone)]
struct Works {
    rolling: f64,
    air: f64,
    zones: Vec<f64>,
}

impl Books {
    /// Opens the books at a place and speed.
    pub(super) fn open(model: &Model<'_>, q: f64, v: f64) -> Self {
        let terms = model.terms(q, v);
        let kinetic = terms.kinetic_j(v);
        let zones = model.ride.scenario.zones.len();
        Self {
            start_j: kinetic + terms.potential_j,
            kinetic_j: (kinetic, kinetic),
            works: Works::zero(zones),
        }
    }

    /// Adds the works of one step of the integration, during which (q, v) is `state(t)`.
    ///
    /// An independent quadrature of force times speed, so that the closure checks the motion.
    pub(super) fn add_step(
        &mut self,
        model: &Model<'_>,
        law: &Law,
        (from_s, to_s): (f64, f64),
        state: impl Fn(f64) -> (f64, f64),
    ) {
        // Energies at the nodes of the quadrature stand for those of the whole step.
        let kinetic_j = Cell::new((f64::INFINITY, f64::NEG_INFINITY));
        let power = |t: f64| {
            let (q, v) = state(t);
            let terms = model.terms(q, v);
            let (kinetic, (smallest, largest)) = (terms.kinetic_j(v), kinetic_j.get());
            kinetic_j.set((smallest.min(kinetic), largest.max(kinetic)));
            powers(model, &terms, law, (q, v))
        };
        let (from_m, to_m) = (state(from_s).0, state(to_s).0);
        // Where poses bend suddenly, so does the force of a zone that keeps a speed.
        let passing = |&break_m: &f64| {
            bracketed(from_s, to_s, PASSING_TIME_S, |t| {
                (state(t).0 - break_m) * (to_m - from_m)
            })
        };
        let breaks = match law.keeps_speed() {
            true => model.ride.poses.breaks_between_m(from_m, to_m),
            false => &[],
        };
        let mut cuts = breaks.iter().map(passing).collect::<Vec<_>>();
        cuts.extend([from_s, to_s]);
        cuts.sort_by(f64::total_cmp);
        for ends in cuts.windows(2) {
            let zero = Works::zero(self.works.zones.len());
            let done = integrate_step(ends[0], ends[1], zero, power);
            let sum = std::mem::replace(&mut self.works, Works::zero(0));
            self.works = sum + done;
        }
        let (smallest_j, largest_j) = kinetic_j.get();
        self.kinetic_j = (
            self.kinetic_j.0.min(smallest_j),
            self.kinetic_j.1.max(largest_j),
        );
    }

    /// Closes the books at a place and speed.
    pub(super) fn close(self, model: &Model<'_>, q: f64, v: f64) -> Ledger {
        let terms = model.terms(q, v);
        let end_j = terms.kinetic_j(v) + terms.potential_j;
        let Works {
            rolling,
            air,
            zones,
        } = self.works;
        let names = model
            .ride
            .scenario
            .zones
            .iter()
            .map(|zone| zone.name.clone());
        let works_j = rolling + air + zones.iter().sum::<f64>();
        let absolute = rolling.abs() + air.abs() + zones.iter().map(|w| w.abs()).sum::<f64>();
        Ledger {
            start_j: self.start_j,
            end_j,
            rolling_j: rolling,
            air_j: air,
            closure_j: end_j - self.start_j - works_j,
            turned_over_j: self.kinetic_j.1 - self.kinetic_j.0 + absolute,
            zones_j: names.zip(zones).collect(),
        }
    }
}

/// Power of each force, W.
fn powers(model: &Model<'_>, terms: &Terms, law: &Law, (q, v): (f64, f64)) -> Works {
    let mut works = Works::zero(model.ride.scenario.zones.len());
    works.rolling = -law.direction * terms.rolling_n * v;
    works.air = terms.air_n * v;
    for (window, force_n) in law.windows.iter().zip(terms.zone_forces_n(q, v, law)) {
        works.zones[window.zone] += force_n * v;
    }
    works
}

impl Works {
    fn zero(zones: usize) -> Self {
        Self {
            rolling: 0.0,
            air: 0.0,
            zones: vec![0.0; zones],
        }
    }
}

impl std::ops::Add for Works {
    type Output = Self;
    fn add(mut self, other: Self) -> Self {
        self.rolling += other.rolling;
        self.air += other.air;
        self.zones
            .iter_mut()
            .zip(other.zones)
            .for_each(|(a, b)| *a += b);
        self
    }
}

impl std::ops::Mul<f64> for Works {
    type Output = Self;
    fn mul(mut self, factor: f64) -> Self {
        self.rolling *= factor;
        self.air *= factor;
        self.zones.iter_mut().for_each(|w| *w *= factor);
        self
    }
}
