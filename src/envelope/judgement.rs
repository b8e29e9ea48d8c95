//! What comes out of holding a record against a rule.

use std::fmt;

use crate::input::{self, RuleKind};

/// The outcome of a rule, from best to worst: the worst of several is their maximum.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Outcome {
    /// Utilisation + band ≤ 1 over a run that completed.
    Inside,
    /// It cannot be told; the reason is given.
    NotAssessed,
    /// Utilisation and 1 are nearer than the band.
    TooCloseToCall,
    /// A breach of a rule whose breaches are to be reviewed.
    Review,
    /// Utilisation − band > 1.
    Outside,
}

impl fmt::Display for Outcome {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.pad(match self {
            Self::Inside => "inside",
            Self::NotAssessed => "not assessed",
            Self::TooCloseToCall => "too close to call",
            Self::Review => "review",
            Self::Outside => "outside",
        })
    }
}

/// Whether a run can carry the outcome `inside`.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum RunState {
    /// It ended as it was meant to, and its books close.
    Complete,
    /// It did not, and why.
    Incomplete(String),
}

/// What load, peak and limit of a rule are measured in.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Unit {
    /// g₀, signed as felt.
    StandardGravity,
    /// m/s, negative backward.
    MetreASecond,
}

/// A window of the record and the limit it is held against, both in the [`Unit`] of the rule.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Spell {
    /// Begin of the window, s.
    pub from_s: f64,
    /// End of the window, s.
    pub to_s: f64,
    /// Length of the window, s (the filter's delay has no part in it).
    pub duration_s: f64,
    /// Level at or beyond which the load stays.
    pub load: f64,
    /// Furthest load in the window.
    pub peak: f64,
    /// Instant of the furthest load, s.
    pub peak_time_s: f64,
    /// Where the furthest load stands in the record (its delay in it), in samples from 0.
    pub peak_position: f64,
    /// Limit for this duration; 0 for the speed of a train that should stop, or should not.
    pub limit: f64,
    /// Load over limit, both counted from where the rule counts; infinite where no number says how
    /// far the rule is broken.
    pub utilisation: f64,
}

/// One place where utilisation + band exceeds 1.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Breach {
    /// Begin of the union of all windows that breach here, s.
    pub from_s: f64,
    /// End of that union, s.
    pub to_s: f64,
    /// The window with the largest utilisation.
    pub worst: Spell,
}

/// A load beyond the limit, but shorter than the rule's `ignore_below`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Ignored {
    /// Furthest load, g, as felt.
    pub peak_g: f64,
    /// How long the load stays beyond the limit, s.
    pub duration_s: f64,
    /// Instant of the furthest load, s.
    pub time_s: f64,
    /// Load over limit of the worst of the windows, as if it were judged.
    pub utilisation: f64,
}

/// One rule held against one record.
#[derive(Clone, Debug, PartialEq)]
pub struct Judgement {
    /// Name of the envelope.
    pub envelope: String,
    /// Id of the rule.
    pub rule: String,
    /// The outcome.
    pub outcome: Outcome,
    /// Why it is not assessed, or what else the reader must know of the run.
    pub reason: Option<String>,
    /// What load, peak and limit are measured in.
    pub unit: Unit,
    /// Largest utilisation; `None` where the record could not be evaluated or the rule knows none.
    pub utilisation: Option<f64>,
    /// Uncertainty of the utilisation.
    pub band: f64,
    /// The window that gives the utilisation; `None` where no load counts.
    pub governing: Option<Spell>,
    /// In order of time.
    pub findings: Vec<Breach>,
    /// In order of time.
    pub ignored: Vec<Ignored>,
}

/// How far a rule is used up.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Measure {
    /// By this much of its limit.
    Utilisation(f64),
    /// It is kept, and has no measure.
    Kept,
    /// It is broken, and has no measure.
    Broken,
}

/// What a record makes of a rule, before the run's own state is weighed.
#[derive(Debug)]
pub(super) struct Verdict {
    pub(super) measure: Measure,
    /// Uncertainty of the utilisation.
    pub(super) band: f64,
    pub(super) governing: Option<Spell>,
    pub(super) findings: Vec<Breach>,
    pub(super) ignored: Vec<Ignored>,
}

impl Judgement {
    /// The outcome of one of the findings by itself.
    pub fn outcome_of(&self, breach: &Breach) -> Outcome {
        if breach.worst.utilisation - self.band > 1.0 {
            Outcome::Outside
        } else {
            Outcome::TooCloseToCall
        }
    }

    pub(super) fn new(
        envelope: &input::Envelope,
        rule: &input::Rule,
        verdict: Result<Verdict, String>,
        run: &RunState,
    ) -> Self {
        let band = verdict.as_ref().map_or(0.0, |verdict| verdict.band);
        let run_reason = match run {
            RunState::Complete => None,
            RunState::Incomplete(reason) => Some(reason.clone()),
        };
        let (measure, reason, verdict) = match verdict {
            Ok(v) => (Some(v.measure), run_reason, Some(v)),
            Err(reason) => (None, run_reason.or(Some(reason)), None),
        };
        let (governing, findings, ignored) =
            verdict.map_or_else(Default::default, |v| (v.governing, v.findings, v.ignored));
        Self {
            envelope: envelope.name.clone(),
            rule: rule.id.clone(),
            outcome: outcome(measure, band, *run == RunState::Complete),
            reason,
            unit: match rule.kind {
                RuleKind::Sustained(_) => Unit::StandardGravity,
                RuleKind::Speed(_) => Unit::MetreASecond,
            },
            utilisation: match measure {
                Some(Measure::Utilisation(u)) => Some(u),
                _ => None,
            },
            band,
            governing,
            findings,
            ignored,
        }
    }
}

/// `Inside` has to be earned: a number that compares with nothing never gives it.
fn outcome(measure: Option<Measure>, band: f64, complete: bool) -> Outcome {
    match measure {
        Some(Measure::Broken) => Outcome::Outside,
        Some(Measure::Kept) if complete => Outcome::Inside,
        Some(Measure::Utilisation(u)) if u - band > 1.0 => Outcome::Outside,
        Some(Measure::Utilisation(u)) if u + band > 1.0 => Outcome::TooCloseToCall,
        Some(Measure::Utilisation(u)) if u + band <= 1.0 && complete => Outcome::Inside,
        _ => Outcome::NotAssessed,
    }
}
