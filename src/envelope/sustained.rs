//! Limits against the duration of an unbroken spell.
//!
//! With S(T) the largest level at or above which the piecewise-linear load stays for T, the utilisation is
//! the largest S(T)/limit(T) over all T that are judged. Limits never rise with T, so that the
//! largest value lies at a window at the own level of a sample or border, or at a length where the curve bends or judging
//! begins, or (`log-time`) at a stationary point between those: see [`LimitCurve::worst_between`].

use super::curve::{Falling, LimitCurve};
use super::findings::{Candidate, Union, Unions};
use super::judgement::{Breach, Ignored, Measure, Spell, Verdict};
use super::scope::Stretch;
use super::signal::Signal;
use super::spells::{Window, each_window};
use crate::input::Sustained;
use crate::loads::Filtered;

/// Room left for rounding where samples are passed over because they cannot matter.
const SPARE: f64 = 1e-9;

/// Holds the stretches of a finite record against a rule whose limits are multiplied by a factor.
///
/// # Errors
/// The reason where nothing can be judged: no stretch is as long as `ignore_below`.
pub(super) fn assess(
    rule: &Sustained,
    factor: f64,
    record: &Filtered,
    stretches: &[Stretch],
) -> Result<Verdict, String> {
    let load_g = &record.axes_g[rule.axis as usize];
    let curve = LimitCurve::new(rule, factor);
    check_length(stretches, &curve, record.rate_hz)?;
    let held = Held {
        rule,
        curve: &curve,
        stretches,
    };
    let clock = Clock {
        rate_hz: record.rate_hz,
        delay_s: record.delay_s,
    };
    let band = held.band(load_g, record);
    let mut whole = Verdict {
        measure: Measure::Utilisation(0.0),
        band,
        governing: None,
        findings: Vec::new(),
        ignored: Vec::new(),
    };
    for &stretch in stretches {
        let signal = Signal::new(load_g, rule.demand, stretch);
        let stretched = tally(&signal, &curve, clock.rate_hz, 1.0 - band).result(&signal, clock);
        whole.append(stretched);
    }
    let used = whole.governing.map_or(0.0, |spell| spell.utilisation);
    whole.measure = Measure::Utilisation(used);
    Ok(whole)
}

/// A rule and where it holds.
struct Held<'a> {
    rule: &'a Sustained,
    curve: &'a LimitCurve,
    stretches: &'a [Stretch],
}

impl Held<'_> {
    /// What the errors of a record make of the utilisation.
    ///
    /// An error that any load may have moves it by no more than that over the least limit. Errors
    /// that vary along the record move it as far as the record does with all of them for the worse,
    /// or all for the better.
    fn band(&self, load_g: &[f64], record: &Filtered) -> f64 {
        let numerical = record.numerical_g / self.curve.least();
        let Some(margin_g) = &record.margin_g else {
            return numerical;
        };
        let margin_g = &margin_g[self.rule.axis as usize];
        let moved = |side: f64| {
            let pairs = load_g.iter().zip(margin_g);
            let load_g = pairs
                .map(|(load, margin)| load + side * margin)
                .collect::<Vec<_>>();
            self.used(&load_g, record.rate_hz)
        };
        let used = self.used(load_g, record.rate_hz);
        numerical + (moved(1.0) - used).abs().max((moved(-1.0) - used).abs())
    }

    /// The utilisation of a record.
    fn used(&self, load_g: &[f64], rate_hz: f64) -> f64 {
        let of_stretch = |&stretch: &Stretch| {
            let signal = Signal::new(load_g, self.rule.demand, stretch);
            let tally = tally(&signal, self.curve, rate_hz, f64::INFINITY);
            tally.governing.map_or(0.0, |best| best.utilisation)
        };
        self.stretches.iter().map(of_stretch).fold(0.0, f64::max)
    }
}

/// Weighs all windows of a stretch; those beyond `threshold` of the limit are findings.
fn tally<'a>(
    signal: &Signal<'_>,
    curve: &'a LimitCurve,
    rate_hz: f64,
    threshold: f64,
) -> Tally<'a> {
    let mut tally = Tally::new(curve, rate_hz, threshold);
    let bar = assured(signal, curve, rate_hz).min(tally.threshold);
    let least_level = curve.least() * bar.clamp(0.0, 1.0);
    each_window(signal, least_level * (1.0 - SPARE), |w| tally.visit(&w));
    tally
}

/// What one stretch gives.
struct Stretched {
    governing: Option<Spell>,
    findings: Vec<Breach>,
    ignored: Vec<Ignored>,
}

impl Verdict {
    /// Adds a later stretch; of equal spells the earlier governs.
    fn append(&mut self, later: Stretched) {
        let used = |spell: Option<Spell>| spell.map_or(0.0, |s| s.utilisation);
        if used(later.governing) > used(self.governing) {
            self.governing = later.governing;
        }
        self.findings.extend(later.findings);
        self.ignored.extend(later.ignored);
    }
}

fn check_length(stretches: &[Stretch], curve: &LimitCurve, rate_hz: f64) -> Result<(), String> {
    let lengths = stretches.iter().map(|s| (s.to - s.from) / rate_hz);
    let Some(longest_s) = lengths.max_by(f64::total_cmp) else {
        return Err("the record holds no sample".to_owned());
    };
    if curve.judges(longest_s) {
        return Ok(());
    }
    Err(format!(
        "the record of {longest_s:.3} s is shorter than ignore_below, {} s",
        curve.ignore_below_s()
    ))
}

/// A utilisation that is reached for sure, found cheaply: the best of windows laid end to end.
///
/// What cannot exceed it (nor 1) needs no closer look. Between the first and the last node, which may
/// be nearer to their neighbours, nodes are one sample apart.
fn assured(signal: &Signal<'_>, curve: &LimitCurve, rate_hz: f64) -> f64 {
    let intervals = (curve.ignore_below_s() * rate_hz).ceil() as usize;
    let level = (1..signal.len().saturating_sub(intervals + 1))
        .step_by(intervals + 1)
        .map(|first| signal.least(first, first + intervals))
        .fold(f64::NEG_INFINITY, f64::max);
    level / curve.limit(intervals as f64 / rate_hz)
}

/// What has been seen so far.
struct Tally<'a> {
    curve: &'a LimitCurve,
    rate_hz: f64,
    marked_s: Vec<f64>,
    per_least_limit: f64,
    /// Utilisation beyond which a window is a finding.
    threshold: f64,
    governing: Option<Candidate>,
    breaches: Unions,
    ignored: Unions,
}

impl<'a> Tally<'a> {
    fn new(curve: &'a LimitCurve, rate_hz: f64, threshold: f64) -> Self {
        Self {
            curve,
            rate_hz,
            marked_s: curve.marked_durations_s(),
            per_least_limit: (1.0 + SPARE) / curve.least(),
            threshold: threshold.max(0.0),
            governing: None,
            breaches: Unions::default(),
            ignored: Unions::default(),
        }
    }

    /// Weighs a window and those it grows into before it meets the next lower level, shortest first.
    fn visit(&mut self, window: &Window) {
        if window.level * self.per_least_limit < self.bar() {
            return;
        }
        let own_s = window.length() / self.rate_hz;
        self.weigh(window, 0.0, own_s);
        let growth_s = (window.growth.0 + window.growth.1) / self.rate_hz;
        if growth_s <= 0.0 {
            return;
        }
        let load = Falling {
            duration_s: own_s,
            level: window.level,
            fall_per_s: 1.0 / growth_s,
        };
        let longest_s = own_s + (window.level - window.lower) * growth_s;
        self.visit_lowered(window, load, longest_s);
    }

    fn visit_lowered(&mut self, window: &Window, load: Falling, longest_s: f64) {
        let mut from_s = load.duration_s;
        for marked in self.marked_s.partition_point(|&t| t <= from_s)..=self.marked_s.len() {
            let marked_s = self.marked_s.get(marked).copied().unwrap_or(f64::INFINITY);
            let to_s = marked_s.min(longest_s);
            if let Some(worst_s) = self.curve.worst_between(load, from_s, to_s) {
                self.weigh(window, load.level - load.level_at(worst_s), worst_s);
            }
            if marked_s >= longest_s {
                return;
            }
            self.weigh(window, load.level - load.level_at(marked_s), marked_s);
            from_s = marked_s;
        }
    }

    /// Weighs a window lowered by `drop`, which makes it last `duration_s`.
    fn weigh(&mut self, window: &Window, drop: f64, duration_s: f64) {
        let level = window.level - drop;
        let limit = self.curve.limit(duration_s);
        let candidate = Candidate {
            nodes: window.nodes,
            ends: window.ends_lowered(drop),
            duration_s,
            level,
            limit,
            utilisation: level / limit,
        };
        if !self.curve.judges(duration_s) {
            if candidate.utilisation > 1.0 {
                self.ignored.add(candidate);
            }
            return;
        }
        if candidate.utilisation > self.threshold {
            self.ignored.drop_held_by(&candidate);
            self.breaches.add(candidate);
        }
        if candidate.utilisation > 0.0
            && self
                .governing
                .is_none_or(|best| candidate.governs_over(&best))
        {
            self.governing = Some(candidate);
        }
    }

    /// Below this utilisation nothing changes what is reported.
    fn bar(&self) -> f64 {
        let best = self.governing.map_or(0.0, |best| best.utilisation);
        best.min(1.0).min(self.threshold)
    }

    fn result(&self, signal: &Signal<'_>, clock: Clock) -> Stretched {
        Stretched {
            governing: self.governing.map(|best| clock.spell(signal, &best)),
            findings: (self.breaches.iter().map(|u| clock.breach(signal, u))).collect(),
            ignored: (self.ignored.iter().map(|u| clock.ignored(signal, u))).collect(),
        }
    }
}

/// Turns positions in the filtered record into times of the ride.
#[derive(Clone, Copy)]
struct Clock {
    rate_hz: f64,
    delay_s: f64,
}

impl Clock {
    fn time_s(&self, position: f64) -> f64 {
        (position / self.rate_hz - self.delay_s).max(0.0)
    }

    fn spell(&self, signal: &Signal<'_>, window: &Candidate) -> Spell {
        let peak = signal.peak(window.nodes.0, window.nodes.1);
        Spell {
            from_s: self.time_s(window.ends.0),
            to_s: self.time_s(window.ends.1),
            duration_s: window.duration_s,
            load: signal.as_felt(window.level),
            peak: signal.as_felt(signal.at(peak)),
            peak_time_s: self.time_s(signal.position(peak)),
            peak_position: signal.position(peak),
            limit: signal.as_felt(window.limit),
            utilisation: window.utilisation,
        }
    }

    fn breach(&self, signal: &Signal<'_>, union: &Union) -> Breach {
        Breach {
            from_s: self.time_s(union.outer.ends.0),
            to_s: self.time_s(union.outer.ends.1),
            worst: self.spell(signal, &union.worst),
        }
    }

    fn ignored(&self, signal: &Signal<'_>, union: &Union) -> Ignored {
        let peak = signal.peak(union.outer.nodes.0, union.outer.nodes.1);
        Ignored {
            peak_g: signal.as_felt(signal.at(peak)),
            duration_s: union.outer.duration_s,
            time_s: self.time_s(signal.position(peak)),
            utilisation: union.worst.utilisation,
        }
    }
}
