//! One seat of one case: its loads held against the envelopes, and what was found put in its place on the ride.

use super::assessment::{Extremes, Finding, Rider, RuleResult, SeatResult};
use super::case::Judging;
use super::holds::{Way, for_seat, in_scenario};
use super::plan::View;
use super::why::PartsAt;
use crate::envelope::{self, Breach, Judgement, Scope};
use crate::input::{Envelope, GravityTerm, Rule, RuleKind, Seat};
use crate::loads::{self, AxesG, Filtered};

/// How far back, in delays, a filter gives the record a noticeable weight: a Butterworth filter of one to
/// eight poles is then within 8 % of the end of a step (its step response, by SciPy's `signal.step`).
const FILTER_MEMORY: f64 = 2.5;

/// One seat of one case.
pub(super) struct SeatView<'a> {
    pub(super) judging: &'a Judging<'a>,
    /// From 0 at the front.
    pub(super) car: usize,
    pub(super) seat: &'a Seat,
    /// The seat's own station at each sample, m, not wrapped.
    pub(super) station_m: &'a [f64],
    pub(super) felt_g: &'a AxesG,
    pub(super) without_gravity_g: Option<&'a AxesG>,
    /// Half-widths of the felt load, where the geometry is known to be uncertain.
    pub(super) margin_g: Option<&'a AxesG>,
}

impl SeatView<'_> {
    /// The seat's result and its findings, both in order of envelope and rule.
    pub(super) fn judge(&self) -> (SeatResult, Vec<Finding>) {
        let envelopes = &self.judging.plan.study.envelopes;
        let mut by_envelope = vec![(Vec::new(), Vec::new()); envelopes.len()];
        for view in &self.judging.plan.views {
            let record = self.record(view);
            for &index in &view.envelopes {
                let envelope = &envelopes[index];
                by_envelope[index] = self.against(envelope, index, view, &record);
            }
        }
        let (rules, findings): (Vec<_>, Vec<_>) = by_envelope.into_iter().unzip();
        (self.result(rules.concat()), findings.concat())
    }

    /// One envelope, in order of its rules; those that are not about this seat or scenario are left out.
    fn against(
        &self,
        envelope: &Envelope,
        index: usize,
        view: &View,
        record: &Filtered,
    ) -> (Vec<RuleResult>, Vec<Finding>) {
        let (mut rules, mut findings) = (Vec::new(), Vec::new());
        for (rule, of_train) in envelope.rules.iter().zip(&self.judging.of_train[index]) {
            rules.extend(of_train.clone());
            let scope = self.scope(rule, record);
            let state = &self.judging.state;
            if let Some(judgement) = envelope::judge(envelope, rule, record, &scope, state) {
                findings.extend(self.findings(rule, &judgement, view, record));
                rules.push(self.placed(judgement));
            }
        }
        (rules, findings)
    }

    /// The part of a record in which a rule is about this seat.
    fn scope(&self, rule: &Rule, record: &Filtered) -> Scope {
        let (_, scenario) = self.judging.plan.names(self.judging.id);
        if !(in_scenario(rule, scenario) && for_seat(rule, self.car, self.seat)) {
            return Scope::Elsewhere;
        }
        if self.station_m.is_empty() {
            return Scope::Whole;
        }
        let way = Way {
            spine: &self.judging.design.spine,
            station_m: self.station_m,
            delay: record.delay_s * record.rate_hz,
        };
        way.scope(&rule.holds)
    }

    fn record(&self, view: &View) -> Filtered {
        let axes_g = match (view.gravity, self.without_gravity_g) {
            (GravityTerm::Excluded, Some(axes_g)) => axes_g,
            _ => self.felt_g,
        };
        let rate_hz = self.judging.samples.rate_hz;
        let mut record = loads::filtered_to_the_end(axes_g, rate_hz, view.filter);
        let looked_back = (FILTER_MEMORY * record.delay_s * rate_hz).ceil() as usize;
        let held = record.axes_g[0].len() - axes_g[0].len();
        record.margin_g = self
            .margin_g
            .map(|margin_g| loads::held_back(&loads::held_on(margin_g, held), looked_back + 1));
        record.numerical_g = self.judging.numerics.load_g;
        record
    }

    fn findings(
        &self,
        rule: &Rule,
        judgement: &Judgement,
        view: &View,
        record: &Filtered,
    ) -> Vec<Finding> {
        let RuleKind::Sustained(demand) = &rule.kind else {
            return Vec::new();
        };
        let breaches = judgement.findings.iter();
        breaches
            .map(|breach| {
                let position = breach.worst.peak_position;
                let parts = PartsAt::at(self, view, record, demand.axis, position);
                self.finding(judgement, breach, &parts)
            })
            .collect()
    }

    fn finding(&self, judgement: &Judgement, breach: &Breach, parts: &PartsAt<'_>) -> Finding {
        let (variant, scenario) = self.judging.plan.names(self.judging.id);
        let samples = &self.judging.samples;
        let time_s = breach.worst.peak_time_s;
        let station_m = self.station_at(time_s);
        let spine = &self.judging.design.spine;
        let speed_m_s = value_at(&samples.speed_m_s, samples.rate_hz, time_s);
        let why = parts.why(&breach.worst, speed_m_s, &spine.at(station_m));
        Finding {
            variant: variant.to_owned(),
            scenario: scenario.to_owned(),
            rider: Some(Rider {
                car: self.car + 1,
                seat: self.seat.name.clone(),
            }),
            envelope: judgement.envelope.clone(),
            rule: judgement.rule.clone(),
            outcome: judgement.outcome_of(breach),
            unit: judgement.unit,
            breach: *breach,
            band: judgement.band,
            station_m,
            train_station_m: value_at(&samples.train_station_m, samples.rate_hz, time_s),
            from_station_m: self.station_at(breach.from_s),
            to_station_m: self.station_at(breach.to_s),
            landmark: spine.landmark_at(station_m).map(|l| l.name.clone()),
            remedies: parts.remedies(&breach.worst, &why),
            why,
        }
    }

    fn result(&self, rules: Vec<RuleResult>) -> SeatResult {
        let wrapped_m = |i: usize| self.judging.design.spine.wrapped_m(self.station_m[i]);
        SeatResult {
            car: self.car + 1,
            seat: self.seat.name.clone(),
            felt_g: (self.felt_g.each_ref()).map(|axis_g| Extremes::of(axis_g, wrapped_m)),
            margin_g: self.margin_g.and_then(|margin_g| {
                let extremes = margin_g
                    .iter()
                    .filter_map(|axis_g| Extremes::of(axis_g, wrapped_m));
                extremes
                    .map(|e| e.max)
                    .max_by(|a, b| a.value.total_cmp(&b.value))
            }),
            rules,
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

/// A series, not empty, read between its samples; its last value beyond its end.
fn value_at(values: &[f64], rate_hz: f64, time_s: f64) -> f64 {
    let position = (time_s * rate_hz).clamp(0.0, (values.len() - 1) as f64);
    let before = position as usize;
    let after = (before + 1).min(values.len() - 1);
    values[before] + (values[after] - values[before]) * (position - before as f64)
}
