//! One integration of the equation of motion, up to past the first event.

use std::cell::RefCell;

use nalgebra::Vector2;
use ode_solvers::continuous_output_model::ContinuousOutputModel;
use ode_solvers::dopri5::Dopri5;
use ode_solvers::{OutputType, System};

use super::event::Gaps;
use super::run::Settings;

/// What an integration gave.
pub(super) struct Stretch {
    /// Place and speed at any time.
    pub(super) states: ContinuousOutputModel<f64, Vector2<f64>>,
    /// Times of its steps, s.
    pub(super) steps: Vec<f64>,
    /// Why it could not go on, if it could not.
    pub(super) fault: Option<String>,
}

impl Stretch {
    /// Integrates from a state at the first of two times until a step has passed an event, or to the
    /// second time.
    pub(super) fn integrated(
        gaps: &Gaps<'_>,
        (from_s, limit_s): (f64, f64),
        start: Vector2<f64>,
        settings: Settings,
    ) -> Self {
        // The solver's own step control (Hairer, Nørsett & Wanner, sec. II.4): safety 0.9, β 0.04,
        // steps shrink five-fold and grow ten-fold at most. No test for stiffness: friction that
        // changes over a step looks stiff and is not.
        const SAFETY: f64 = 0.9;
        const BETA: f64 = 0.04;
        const SHRINK: f64 = 0.2;
        const GROW: f64 = 10.0;
        let steps = RefCell::new(vec![from_s]);
        let system = Rolling {
            gaps,
            steps: &steps,
        };
        let mut states = ContinuousOutputModel::default();
        let absolute = settings.tolerance;
        let relative = 1e-3 * absolute;
        let mut stepper = Dopri5::from_param(
            system,
            from_s,
            limit_s,
            0.0,
            start,
            relative,
            absolute,
            SAFETY,
            BETA,
            SHRINK,
            GROW,
            settings.longest_step_s,
            0.0,
            u32::MAX,
            u32::MAX,
            OutputType::Continuous,
        );
        let outcome = stepper.integrate_with_continuous_output_model(&mut states);
        drop(stepper);
        let fault = outcome.err().map(|error| error.to_string());
        Self {
            states,
            steps: steps.into_inner(),
            fault,
        }
    }

    /// Place and speed at a time within it; no number outside.
    pub(super) fn state(&self, time_s: f64) -> (f64, f64) {
        let state = self.states.evaluate(time_s);
        state.map_or((f64::NAN, f64::NAN), |y| (y.x, y.y))
    }
}

/// The right-hand side for the integrator, which notes its steps and stops past an event.
struct Rolling<'a> {
    gaps: &'a Gaps<'a>,
    steps: &'a RefCell<Vec<f64>>,
}

impl System<f64, Vector2<f64>> for Rolling<'_> {
    fn system(&self, _t: f64, y: &Vector2<f64>, dy: &mut Vector2<f64>) {
        let (q, v) = (y.x, y.y);
        dy.x = v;
        dy.y = self
            .gaps
            .model
            .terms(q, v)
            .acceleration_m_s2(q, v, self.gaps.law);
    }

    fn solout(&mut self, t: f64, y: &Vector2<f64>, _dy: &Vector2<f64>) -> bool {
        let mut steps = self.steps.borrow_mut();
        let moved = steps.last().is_none_or(|&last| t > last);
        if moved {
            steps.push(t);
        }
        moved && self.gaps.any(y.x, y.y)
    }
}
