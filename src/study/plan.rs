//! The work laid out: spines, trains on them, the cases to run and the loads to make of each.

use std::sync::atomic::{AtomicUsize, Ordering};

use rayon::prelude::*;

use super::assessment::{Assessment, Case};
use super::numerics::COARSER;
use super::selection::{Selection, keeps, unknown_names};
use super::{Progress, case, cautions, meaning};
use crate::diagnostic::Diagnostic;
use crate::envelope::Outcome;
use crate::input::{Filter, GravityTerm, Scenario, Seat, Study, Variant};
use crate::motion::Ride;
use crate::spine::Spine;
use crate::train::{Poses, PosesSettings};

/// A study narrowed and ready to run.
pub struct Plan<'a> {
    pub(super) study: &'a Study,
    pub(super) variants: Vec<Design<'a>>,
    pub(super) scenarios: Vec<&'a Scenario>,
    pub(super) views: Vec<View>,
}

/// One variant with its train set on its spine.
pub(super) struct Design<'a> {
    pub(super) variant: &'a Variant,
    pub(super) spine: Spine,
    pub(super) poses: Poses,
    /// The same on a coarser grid, for the error of numerics.
    pub(super) coarse: Poses,
    /// By car, in file order.
    pub(super) seats: Vec<Vec<Seat>>,
}

/// A way of looking at loads that one or more envelopes ask for.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct View {
    pub(super) gravity: GravityTerm,
    pub(super) filter: Filter,
    /// Indices of the envelopes that ask for it.
    pub(super) envelopes: Vec<usize>,
}

/// One case of a plan.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct CaseId {
    pub(super) variant: usize,
    pub(super) scenario: usize,
}

impl<'a> Plan<'a> {
    /// Lays out the chosen part of a study.
    ///
    /// # Errors
    /// Everything that is wrong in the files taken together, and names of the selection that do not exist.
    pub fn new(study: &'a Study, selection: &Selection) -> Result<Self, Vec<Diagnostic>> {
        let mut mistakes = unknown_in(study, selection);
        let mut variants = Vec::new();
        let chosen = |v: &&Variant| keeps(&selection.variants, &v.name);
        let chosen: Vec<_> = study.variants.iter().filter(chosen).collect();
        let designs: Vec<_> = chosen
            .par_iter()
            .map(|variant| Design::new(variant, &selection.seats))
            .collect();
        for design in designs {
            match design {
                Ok(design) => variants.push(design),
                Err(more) => mistakes.extend(more),
            }
        }
        let chosen = |s: &&Scenario| keeps(&selection.scenarios, &s.name);
        let plan = Self {
            study,
            variants,
            scenarios: study.operation.scenarios.iter().filter(chosen).collect(),
            views: views(study),
        };
        mistakes.extend(meaning::check(&plan));
        if mistakes.is_empty() {
            Ok(plan)
        } else {
            Err(meaning::without_repeats(mistakes))
        }
    }

    /// All cases, in file order.
    pub fn cases(&self) -> Vec<CaseId> {
        let scenarios = 0..self.scenarios.len();
        (0..self.variants.len())
            .flat_map(|variant| {
                let case = move |scenario| CaseId { variant, scenario };
                scenarios.clone().map(case)
            })
            .collect()
    }

    /// Names of a case's variant and scenario.
    pub fn names(&self, case: CaseId) -> (&'a str, &'a str) {
        (
            &self.variants[case.variant].variant.name,
            &self.scenarios[case.scenario].name,
        )
    }

    /// Runs all cases and holds them against the envelopes.
    pub fn assess(&self, progress: Progress<'_>) -> Assessment {
        let ids = self.cases();
        let done = AtomicUsize::new(0);
        progress(0, ids.len());
        let results: Vec<_> = ids
            .par_iter()
            .map(|&id| {
                let result = case::assess(self, id);
                progress(done.fetch_add(1, Ordering::Relaxed) + 1, ids.len());
                result
            })
            .collect();
        let (cases, findings): (Vec<_>, Vec<_>) = results.into_iter().unzip();
        let findings = findings.concat();
        // Findings about the train count where there is no seat to show its rules.
        let outcomes = findings.iter().map(|finding| finding.outcome);
        let outcomes = outcomes.chain(cases.iter().map(Case::outcome));
        Assessment {
            outcome: outcomes.max().unwrap_or(Outcome::NotAssessed),
            cautions: cautions::of(self, &cases),
            inputs: self.study.files.clone(),
            cases,
            findings,
        }
    }

    pub(super) fn ride(&self, case: CaseId) -> Ride<'_> {
        Ride {
            poses: &self.variants[case.variant].poses,
            train: &self.variants[case.variant].variant.train,
            scenario: self.scenarios[case.scenario],
            goal: &self.study.operation.goal,
            time_limit_s: self.study.operation.time_limit_s,
            gravity_m_s2: self.study.gravity_m_s2,
        }
    }

    /// Gravity terms that any envelope asks for besides the felt load itself.
    pub(super) fn needs_excluded(&self) -> bool {
        let excluded = |v: &View| v.gravity == GravityTerm::Excluded;
        self.views.iter().any(excluded)
    }
}

impl<'a> Design<'a> {
    fn new(variant: &'a Variant, seats: &[String]) -> Result<Self, Vec<Diagnostic>> {
        let spine = Spine::from_track(&variant.track)?;
        let settings = PosesSettings::default();
        let coarser = PosesSettings {
            step_m: COARSER * settings.step_m,
        };
        let set = |settings| {
            Poses::with_settings(&spine, &variant.train, settings).map_err(|error| {
                let message = format!("{error} (variant `{}`)", variant.name);
                vec![Diagnostic::error(message).at(&variant.train.place)]
            })
        };
        let (poses, coarse) = rayon::join(|| set(settings), || set(coarser));
        let (poses, coarse) = (poses?, coarse?);
        let cars = variant.train.cars.iter().enumerate();
        let kept = |(car, c): (usize, &crate::input::Car)| {
            let keep = |s: &&Seat| keeps(seats, &seat_name(car, s));
            c.seats.iter().filter(keep).cloned().collect()
        };
        Ok(Self {
            variant,
            spine,
            poses,
            coarse,
            seats: cars.map(kept).collect(),
        })
    }
}

/// A seat as it is named on the command line: `1-front-left`.
fn seat_name(car: usize, seat: &Seat) -> String {
    format!("{}-{}", car + 1, seat.name)
}

/// Names of all seats of a variant's train.
fn seat_names(variant: &Variant) -> Vec<String> {
    let cars = variant.train.cars.iter().enumerate();
    cars.flat_map(|(car, c)| c.seats.iter().map(move |s| seat_name(car, s)))
        .collect()
}

fn unknown_in(study: &Study, selection: &Selection) -> Vec<Diagnostic> {
    let variants: Vec<_> = study.variants.iter().map(|v| v.name.clone()).collect();
    let scenarios = &study.operation.scenarios;
    let scenarios: Vec<_> = scenarios.iter().map(|s| s.name.clone()).collect();
    let mut seats: Vec<String> = Vec::new();
    for variant in &study.variants {
        if keeps(&selection.variants, &variant.name) {
            let new = seat_names(variant).into_iter();
            let new: Vec<_> = new.filter(|s| !seats.contains(s)).collect();
            seats.extend(new);
        }
    }
    unknown_names("variant", &selection.variants, &variants)
        .chain(unknown_names("scenario", &selection.scenarios, &scenarios))
        .chain(unknown_names("seat", &selection.seats, &seats))
        .collect()
}

/// The distinct ways of looking at loads, in order of the envelopes.
fn views(study: &Study) -> Vec<View> {
    let mut views: Vec<View> = Vec::new();
    for (index, envelope) in study.envelopes.iter().enumerate() {
        let same = |v: &&mut View| v.gravity == envelope.gravity && v.filter == envelope.filter;
        match views.iter_mut().find(same) {
            Some(view) => view.envelopes.push(index),
            None => views.push(View {
                gravity: envelope.gravity,
                filter: envelope.filter,
                envelopes: vec![index],
            }),
        }
    }
    views
}
