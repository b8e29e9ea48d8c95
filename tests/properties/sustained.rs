//! Sustained rules against closed forms and against an evaluation straight from the definition.
//!
//! The definition: S(T) is the largest, over all t, of the smallest load in [t, t + T]; the
//! utilisation is the largest S(T)/limit(T) over the durations that are judged.

use std::sync::Arc;

use crestfall::diagnostic::{Place, Source};
use crestfall::envelope::{Judgement, Outcome, RunState, judge};
use crestfall::input::{
    Axis, Between, Demand, Document, Envelope, Filter, GravityTerm, Rule, RuleKind, Sign, Status,
    Sustained,
};
use crestfall::loads::Filtered;
use proptest::prelude::*;

// ---------------------------------------------------------------- closed forms

/// Levels a pulse of 5 g is sustained for, from `d_signal.py` of the catalogue of closed forms (case D05, mpmath).
#[test]
fn exact_sustained_levels_of_pulses() {
    let half_sine = |d: f64| move |t: f64| 5.0 * (std::f64::consts::PI * t / d).sin();
    let triangle = |d: f64| move |t: f64| 5.0 * (1.0 - (2.0 * t / d - 1.0).abs());
    let sin_squared = |d: f64| move |t: f64| 5.0 * (std::f64::consts::PI * t / d).sin().powi(2);
    let trapezoid = |rise: f64, hold: f64, fall: f64| {
        move |t: f64| 5.0 * (t / rise).min((rise + hold + fall - t) / fall).min(1.0)
    };
    let skewed = |t: f64| 5.0 * (t / 0.3) * (1.0 - t / 0.3).exp();
    check_level(half_sine(1.0), 1.0, 0.2, 4.755_282_581_475_768);
    check_level(half_sine(1.0), 1.0, 0.5, 3.535_533_905_932_738);
    check_level(half_sine(2.0), 2.0, 1.0, 3.535_533_905_932_738);
    check_level(half_sine(0.5), 0.5, 0.2, 4.045_084_971_874_737);
    check_level(triangle(1.0), 1.0, 0.2, 4.0);
    check_level(triangle(2.0), 2.0, 1.0, 2.5);
    check_level(triangle(0.5), 0.5, 0.2, 3.0);
    check_level(sin_squared(1.0), 1.0, 0.2, 4.522_542_485_937_369);
    check_level(sin_squared(0.5), 0.5, 0.2, 3.272_542_485_937_369);
    check_level(trapezoid(0.2, 0.5, 0.3), 1.0, 0.4, 5.0);
    check_level(trapezoid(0.2, 0.5, 0.3), 1.0, 0.8, 2.0);
    check_level(trapezoid(0.1, 0.0, 0.4), 0.5, 0.25, 2.5);
    check_level(skewed, 5.0, 0.2, 4.731_403_782_701_557);
    check_level(skewed, 5.0, 0.5, 3.578_116_419_034_256);
    check_level(skewed, 5.0, 1.0, 1.481_553_039_333_876);
}

/// Two 4 g rectangles of 0.3 s with a gap at 1 g are no spell of 0.6 s (catalogue, case D05).
#[test]
fn exact_two_rectangles_do_not_join() {
    let mut signal = vec![1.0; 1];
    signal.extend([4.0; 301]);
    signal.extend([1.0; 49]);
    signal.extend([4.0; 301]);
    signal.push(1.0);
    assert_close(level_for(&signal, 1000.0, 0.3), 4.0, 1e-12);
    assert_close(level_for(&signal, 1000.0, 0.5), 1.0, 1e-12);
}

/// Half sine of 5 g and 1 s at 100 Hz: time above 4 g with interpolated crossings (catalogue, case D06).
#[test]
fn exact_crossings_are_interpolated() {
    let signal = half_sine_at_100_hz();
    let expected_s = 0.409_561_025_320_989_6;
    // The level for exactly that duration must be 4 g again.
    assert_close(level_for(&signal, 100.0, expected_s), 4.0, 1e-12);
}

/// A window of k intervals has both its ends inside (catalogue, case D05, SciPy on samples).
#[test]
fn exact_level_of_sampled_half_sine() {
    let signal = half_sine_at_100_hz();
    assert_close(
        level_for(&signal, 100.0, 0.20),
        4.755_282_581_475_767,
        1e-12,
    );
    assert_close(
        level_for(&signal, 100.0, 0.50),
        3.535_533_905_932_737_3,
        1e-12,
    );
}

/// The ratio (5 − T)/limit(T), limit falling with ln T from 4 at 0.5 s to 1 at 8 s, has its maximum between the points.
#[test]
fn exact_log_time_interior_maximum() {
    let signal = [0.0, 5.0, 0.0];
    let mut demand = limit_for(0.5);
    demand.curve = vec![(0.5, 4.0), (8.0, 1.0)];
    demand.between = Between::LogTime;
    let spell = judged(&demand, &signal, 0.4).governing.expect("a load");
    // Base of the triangle 5 s, so that S(T) = 5 − T; maximum by a scan of the closed form.
    let ratio = |t: f64| (5.0 - t) / (4.0 - 3.0 * (t / 0.5).ln() / 16f64.ln());
    let best = (0..=2_000_000)
        .map(|i| ratio(0.5 + 7.5 * f64::from(i) / 2e6))
        .fold(0.0, f64::max);
    assert!(
        best > 1.05 * ratio(0.5),
        "the case would not show an interior maximum"
    );
    assert_close(spell.utilisation, best, 1e-11);
    assert_close(ratio(spell.duration_s), best, 1e-11);
}

// ------------------------------------------------------------ outcomes and edges

#[test]
fn a_record_that_cannot_be_judged_is_never_inside() {
    let demand = limit_for(0.2);
    let short = judged(&demand, &[0.5; 20], 100.0);
    assert_eq!(short.outcome, Outcome::NotAssessed);
    assert!(
        short
            .reason
            .expect("a reason")
            .contains("shorter than ignore_below")
    );
    assert_eq!(judged(&demand, &[0.5; 21], 100.0).outcome, Outcome::Inside);
    for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
        let mut signal = vec![0.1; 100];
        signal[40] = bad;
        let judgement = judged(&demand, &signal, 100.0);
        assert_eq!(judgement.outcome, Outcome::NotAssessed);
        assert_eq!(judgement.utilisation, None);
    }
    assert_eq!(
        judged(&limit_for(0.0), &[], 100.0).outcome,
        Outcome::NotAssessed
    );
}

#[test]
fn a_run_that_did_not_complete_is_outside_or_not_assessed() {
    let run = RunState::Incomplete("the run did not complete: stalled at 12.0 m".to_owned());
    let within = judge(
        &envelope(vec![limit_for(0.0)]),
        &record(&[0.5; 50], 100.0),
        &run,
    );
    assert_eq!(within[0].outcome, Outcome::NotAssessed);
    assert_eq!(within[0].utilisation, Some(0.5));
    let beyond = judge(
        &envelope(vec![limit_for(0.0)]),
        &record(&[1.5; 50], 100.0),
        &run,
    );
    assert_eq!(beyond[0].outcome, Outcome::Outside);
    assert_eq!(beyond[0].findings.len(), 1);
}

#[test]
fn no_load_of_the_sign_is_utilisation_zero() {
    let judgement = judged(&limit_for(0.0), &[-1.0, -2.0, 0.0, -1.0], 10.0);
    assert_eq!(judgement.utilisation, Some(0.0));
    assert_eq!(judgement.outcome, Outcome::Inside);
    assert!(judgement.governing.is_none());
}

#[test]
fn exactly_at_the_limit_is_inside() {
    let judgement = judged(&limit_for(0.1), &[1.0; 50], 100.0);
    assert_eq!(judgement.utilisation, Some(1.0));
    assert_eq!(judgement.outcome, Outcome::Inside);
    assert!(judgement.findings.is_empty());
}

/// A rectangle exactly as long as a vertical drop takes the lower value, and a one-sample spike is listed only.
#[test]
fn drops_take_the_lower_value_and_short_spikes_are_listed() {
    let mut demand = limit_for(0.05);
    demand.curve = vec![(0.3, 2.0), (0.3, 1.0)];
    let judgement = judged(&demand, &[1.5; 31], 100.0);
    assert_close(judgement.utilisation.expect("judged"), 1.5, 1e-15);

    let mut spike = vec![0.2; 100];
    spike[50] = 3.0;
    let judgement = judged(&limit_for(0.05), &spike, 100.0);
    assert_eq!(judgement.outcome, Outcome::Inside);
    assert_eq!(judgement.ignored.len(), 1);
    let ignored = judgement.ignored[0];
    assert_eq!((ignored.peak_g, ignored.time_s), (3.0, 0.5));
    assert!(ignored.duration_s < 0.05);
}

/// Delay is taken from times but not from durations, and no time is negative; loads keep their sign.
#[test]
fn times_are_those_of_the_ride_and_loads_are_signed() {
    let mut demand = limit_for(0.0);
    demand.demand = Demand::Limit(Sign::Negative);
    let mut signal = vec![-2.0; 10];
    signal.extend([0.0; 90]);
    let mut filtered = record(&signal, 100.0);
    filtered.delay_s = 0.05;
    let judgement = &judge(&envelope(vec![demand]), &filtered, &RunState::Complete)[0];
    let spell = judgement.governing.expect("a load");
    assert_eq!(
        (spell.load_g, spell.peak_g, spell.limit_g),
        (-2.0, -2.0, -1.0)
    );
    assert_close(spell.duration_s, 0.09, 1e-12);
    assert_eq!(spell.from_s, 0.0);
    assert_close(spell.to_s, 0.04, 1e-12);
    // The finding's union reaches down to the lowest sample level beyond the limit.
    assert_eq!(judgement.findings.len(), 1);
}

#[test]
fn a_floor_is_run_on_what_is_missing_from_one() {
    let demand = Sustained {
        demand: Demand::Floor,
        curve: vec![(0.2, 0.2)],
        ..limit_for(0.1)
    };
    let signal = [vec![1.0; 30], vec![0.6; 30], vec![-0.2; 30], vec![1.4; 30]].concat();
    let judgement = judged(&demand, &signal, 100.0);
    assert_close(judgement.utilisation.expect("judged"), 1.2 / 0.8, 1e-12);
    let spell = judgement.governing.expect("a load");
    assert_close(spell.load_g, -0.2, 1e-12);
    assert_close(spell.limit_g, 0.2, 1e-12);
    let heavy = judged(&demand, &[1.5; 50], 100.0);
    assert_eq!(heavy.utilisation, Some(0.0));
}

/// Two places far apart are two findings, in order of time, each with its own worst window.
#[test]
fn places_apart_are_findings_apart() {
    let signal = [
        vec![0.0; 20],
        vec![1.2; 30],
        vec![0.0; 20],
        vec![1.7; 30],
        vec![0.5; 20],
    ]
    .concat();
    let judgement = judged(&limit_for(0.1), &signal, 100.0);
    let worst: Vec<f64> = judgement
        .findings
        .iter()
        .map(|f| f.worst.utilisation)
        .collect();
    assert_eq!(worst, [1.2, 1.7]);
    assert!(judgement.findings[0].to_s < judgement.findings[1].from_s);
}

// ------------------------------------------------------------------- properties

proptest! {
    #![proptest_config(ProptestConfig { cases: 4000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn agrees_with_the_definition(signal in signals(), demand in demands(), rate_hz in 1.0..20.0f64) {
        let judgement = judged(&demand, &signal, rate_hz);
        let length_s = (signal.len() - 1) as f64 / rate_hz;
        prop_assume!((length_s - demand.ignore_below_s).abs() > 1e-9);
        if length_s < demand.ignore_below_s {
            prop_assert_eq!(judgement.outcome, Outcome::NotAssessed);
            return Ok(());
        }
        let utilisation = judgement.utilisation.expect("long enough to be judged");
        let definition = Definition::new(&signal, &demand, rate_hz);
        for duration_s in definition.durations_s(length_s) {
            let reached = definition.utilisation_at(duration_s);
            prop_assert!(reached <= utilisation + 1e-9, "{} at {} s, {} reported", reached, duration_s, utilisation);
        }
        match judgement.governing {
            None => prop_assert_eq!(utilisation, 0.0),
            Some(spell) => {
                let reached = definition.utilisation_at(spell.duration_s.min(length_s));
                prop_assert!((reached - utilisation).abs() <= 1e-9, "{} reached at {} s, {} reported", reached, spell.duration_s, utilisation);
                prop_assert!((spell.to_s - spell.from_s - spell.duration_s).abs() < 1e-9);
                prop_assert!(spell.duration_s >= demand.ignore_below_s * (1.0 - 1e-9));
            }
        }
    }

    #[test]
    fn findings_are_there_when_and_only_when_there_is_a_breach(signal in signals(), demand in demands(), rate_hz in 1.0..20.0f64) {
        let judgement = judged(&demand, &signal, rate_hz);
        let utilisation = judgement.utilisation.unwrap_or(0.0);
        prop_assert_eq!(judgement.findings.is_empty(), utilisation <= 1.0);
        prop_assert_eq!(judgement.outcome == Outcome::Outside, utilisation > 1.0);
        if let Some(worst) = judgement.findings.iter().map(|f| f.worst.utilisation).reduce(f64::max) {
            prop_assert_eq!(worst, utilisation);
        }
        for finding in &judgement.findings {
            prop_assert!(finding.from_s <= finding.worst.from_s && finding.worst.to_s <= finding.to_s);
        }
        for pair in judgement.findings.windows(2) {
            prop_assert!(pair[0].to_s < pair[1].from_s);
        }
        for ignored in &judgement.ignored {
            prop_assert!(ignored.duration_s < demand.ignore_below_s);
            let inside = |f: &crestfall::envelope::Breach| f.from_s <= ignored.time_s && ignored.time_s <= f.to_s;
            prop_assert!(!judgement.findings.iter().any(inside));
        }
    }

    /// Every place where a judged window at a sample's own level is beyond its limit lies in a finding.
    #[test]
    fn no_breach_is_left_out_of_the_findings(signal in signals(), demand in demands(), rate_hz in 1.0..20.0f64) {
        let judgement = judged(&demand, &signal, rate_hz);
        prop_assume!(judgement.utilisation.is_some());
        let definition = Definition::new(&signal, &demand, rate_hz);
        for sample in 0..signal.len() {
            let (from, to) = definition.window_around(sample);
            let duration_s = (to - from) / rate_hz;
            let ratio = definition.values[sample] / definition.limit(duration_s);
            if duration_s >= demand.ignore_below_s + 1e-9 && ratio > 1.0 + 1e-9 {
                let holds = |f: &crestfall::envelope::Breach| {
                    f.from_s <= from / rate_hz + 1e-9 && to / rate_hz <= f.to_s + 1e-9 && f.worst.utilisation >= ratio - 1e-9
                };
                prop_assert!(judgement.findings.iter().any(holds), "sample {} is in no finding", sample);
            }
        }
    }

    #[test]
    fn scaling_loads_and_limits_together_changes_nothing(signal in signals(), demand in limits(), power in -3i32..4) {
        let factor = 2f64.powi(power);
        let scaled: Vec<f64> = signal.iter().map(|v| v * factor).collect();
        let mut scaled_demand = demand.clone();
        scaled_demand.curve.iter_mut().for_each(|p| p.1 *= factor);
        let (a, b) = (judged(&demand, &signal, 10.0), judged(&scaled_demand, &scaled, 10.0));
        prop_assert_eq!(a.outcome, b.outcome);
        prop_assert_eq!(a.findings.len(), b.findings.len());
        prop_assert_eq!(a.ignored.len(), b.ignored.len());
        let close = match (a.utilisation, b.utilisation) {
            (Some(a), Some(b)) => (a - b).abs() <= 1e-12 * a,
            (a, b) => a == b,
        };
        prop_assert!(close);
    }

    #[test]
    fn the_order_of_rules_changes_nothing(signal in signals(), first in demands(), second in demands()) {
        let record = record(&signal, 10.0);
        let forward = judge(&envelope(vec![first.clone(), second.clone()]), &record, &RunState::Complete);
        let backward = judge(&envelope(vec![second, first]), &record, &RunState::Complete);
        for (a, b) in forward.iter().zip(backward.iter().rev()) {
            let b = Judgement { rule: a.rule.clone(), ..b.clone() };
            prop_assert_eq!(a, &b);
        }
    }
}

/// Plateaus, ties, spikes and changes of sign: whole numbers and arbitrary ones, each held for some samples.
fn signals() -> impl Strategy<Value = Vec<f64>> {
    let value = prop_oneof![
        2 => (-6i32..7).prop_map(|v| f64::from(v) / 2.0),
        1 => -3.0..3.0f64,
        1 => Just(0.0),
    ];
    prop::collection::vec(
        (value, prop_oneof![3 => Just(1usize), 1 => 2..6usize]),
        1..18,
    )
    .prop_map(|runs| {
        runs.iter()
            .flat_map(|&(v, n)| std::iter::repeat_n(v, n))
            .collect()
    })
}

/// Limits only: a floor counts from 1 g, which scaling would have to move too.
fn limits() -> impl Strategy<Value = Sustained> {
    demands().prop_filter("a floor does not scale", |rule| {
        rule.demand != Demand::Floor
    })
}

fn demands() -> impl Strategy<Value = Sustained> {
    let between = prop_oneof![
        Just(Between::Linear),
        Just(Between::Step),
        Just(Between::LogTime)
    ];
    let demand = prop_oneof![
        Just(Demand::Limit(Sign::Positive)),
        Just(Demand::Limit(Sign::Negative)),
        Just(Demand::Floor),
    ];
    let steps = prop::collection::vec(
        (prop_oneof![4 => 0.05..1.5f64, 1 => Just(0.0)], 0.0..0.6f64),
        0..4,
    );
    let ignore = prop_oneof![Just(0.0), 0.01..1.5f64];
    (between, demand, 0.05..0.5f64, 0.2..1.5f64, steps, ignore).prop_map(
        |(between, demand, first_s, last, steps, ignore_below_s)| Sustained {
            axis: Axis::Z,
            demand,
            curve: curve(demand, first_s, last, &steps),
            between,
            ignore_below_s,
        },
    )
}

/// Magnitudes that never rise, the last one `last`; as floors, 1 less each.
fn curve(demand: Demand, first_s: f64, last: f64, steps: &[(f64, f64)]) -> Vec<(f64, f64)> {
    let mut magnitude = last + steps.iter().map(|s| s.1).sum::<f64>();
    let mut points = vec![(first_s, magnitude)];
    let mut duration_s = first_s;
    for &(later_s, lower) in steps {
        duration_s += later_s;
        magnitude -= lower;
        points.push((duration_s, magnitude));
    }
    if demand == Demand::Floor {
        points.iter_mut().for_each(|p| p.1 = 1.0 - p.1);
    }
    points
}

// --------------------------------------------------- the definition, word for word

struct Definition<'a> {
    values: Vec<f64>,
    demand: &'a Sustained,
    rate_hz: f64,
}

impl<'a> Definition<'a> {
    fn new(signal: &[f64], demand: &'a Sustained, rate_hz: f64) -> Self {
        let count = |load: f64| match demand.demand {
            Demand::Limit(Sign::Positive) => load,
            Demand::Limit(Sign::Negative) => -load,
            Demand::Floor => 1.0 - load,
        };
        Self {
            values: signal.iter().map(|&load| count(load)).collect(),
            demand,
            rate_hz,
        }
    }

    /// Durations worth a look: an even grid, those of all windows around samples, and the curve's own.
    fn durations_s(&self, length_s: f64) -> Vec<f64> {
        let least_s = self.demand.ignore_below_s;
        let grid = (0..=40).map(|i| least_s + (length_s - least_s) * f64::from(i) / 40.0);
        let windows = (0..self.values.len()).map(|i| {
            let (from, to) = self.window_around(i);
            (to - from) / self.rate_hz
        });
        let marks = self.demand.curve.iter().map(|p| p.0);
        grid.chain(windows)
            .chain(marks)
            .filter(|&t| t >= least_s && t <= length_s)
            .collect()
    }

    fn utilisation_at(&self, duration_s: f64) -> f64 {
        (self.sustained(duration_s * self.rate_hz) / self.limit(duration_s)).max(0.0)
    }

    /// Largest over t of the smallest value in [t, t + length], positions in samples.
    ///
    /// Between the places where an end meets a sample both ends run straight, so that the
    /// largest value lies there or where both ends are level.
    fn sustained(&self, length: f64) -> f64 {
        let last = (self.values.len() - 1) as f64;
        let latest = (last - length).max(0.0);
        let mut starts: Vec<f64> = (0..self.values.len())
            .flat_map(|i| [i as f64, i as f64 - length])
            .chain([0.0, latest])
            .filter(|&t| (0.0..=latest).contains(&t))
            .collect();
        starts.sort_by(f64::total_cmp);
        let rise = |t: f64| self.value(t + length) - self.value(t);
        let level_starts: Vec<f64> = starts
            .windows(2)
            .filter(|w| rise(w[0]) * rise(w[1]) < 0.0)
            .map(|w| w[0] + (w[1] - w[0]) * rise(w[0]) / (rise(w[0]) - rise(w[1])))
            .collect();
        starts
            .iter()
            .chain(&level_starts)
            .map(|&t| self.least(t, t + length))
            .fold(f64::NEG_INFINITY, f64::max)
    }

    fn least(&self, from: f64, to: f64) -> f64 {
        (0..self.values.len())
            .filter(|&i| (from..=to).contains(&(i as f64)))
            .map(|i| self.values[i])
            .fold(self.value(from).min(self.value(to)), f64::min)
    }

    fn value(&self, position: f64) -> f64 {
        let position = position.clamp(0.0, (self.values.len() - 1) as f64);
        let before = position.floor() as usize;
        let after = (before + 1).min(self.values.len() - 1);
        let part = position - before as f64;
        self.values[before] + (self.values[after] - self.values[before]) * part
    }

    /// The stretch around a sample in which the signal stays at or above its value, by walking outwards.
    fn window_around(&self, sample: usize) -> (f64, f64) {
        let level = self.values[sample];
        let (mut first, mut last) = (sample, sample);
        while first > 0 && self.values[first - 1] >= level {
            first -= 1;
        }
        while last + 1 < self.values.len() && self.values[last + 1] >= level {
            last += 1;
        }
        let part = |inside: f64, outside: f64| (inside - level) / (inside - outside);
        let before = if first > 0 {
            part(self.values[first], self.values[first - 1])
        } else {
            0.0
        };
        let after = if last + 1 < self.values.len() {
            part(self.values[last], self.values[last + 1])
        } else {
            0.0
        };
        (first as f64 - before, last as f64 + after)
    }

    fn limit(&self, duration_s: f64) -> f64 {
        let value = match self.demand.demand {
            Demand::Limit(_) => |v: f64| v,
            Demand::Floor => |v: f64| 1.0 - v,
        };
        let points = &self.demand.curve;
        let reached = points
            .iter()
            .rposition(|p| p.0 <= duration_s * (1.0 + 1e-12));
        let Some(before) = reached else {
            return value(points[0].1);
        };
        let Some(after) = points.get(before + 1) else {
            return value(points[before].1);
        };
        let (t0, t1) = (points[before].0, after.0);
        let part = match self.demand.between {
            Between::Step => 0.0,
            Between::Linear => (duration_s - t0) / (t1 - t0),
            Between::LogTime => (duration_s.ln() - t0.ln()) / (t1.ln() - t0.ln()),
        };
        value(points[before].1) + (value(after.1) - value(points[before].1)) * part.clamp(0.0, 1.0)
    }
}

// ------------------------------------------------------------------- small tools

/// The level a pulse keeps for `duration_s`, against a closed form: sampled so finely that only its chords differ.
fn check_level(pulse: impl Fn(f64) -> f64, length_s: f64, duration_s: f64, expected_g: f64) {
    let rate_hz = 20_000.0;
    let count = (length_s * rate_hz).round() as usize;
    let signal: Vec<f64> = (0..=count).map(|i| pulse(i as f64 / rate_hz)).collect();
    assert_close(level_for(&signal, rate_hz, duration_s), expected_g, 1e-6);
}

/// S(T), read off a limit of 1 g for all durations that are judged from T on.
fn level_for(signal: &[f64], rate_hz: f64, duration_s: f64) -> f64 {
    let judgement = judged(&limit_for(duration_s), signal, rate_hz);
    judgement.utilisation.expect("long enough to be judged")
}

fn half_sine_at_100_hz() -> Vec<f64> {
    (0..=100)
        .map(|i| 5.0 * (std::f64::consts::PI * f64::from(i) / 100.0).sin())
        .collect()
}

fn limit_for(ignore_below_s: f64) -> Sustained {
    Sustained {
        axis: Axis::Z,
        demand: Demand::Limit(Sign::Positive),
        curve: vec![(1.0, 1.0)],
        between: Between::Linear,
        ignore_below_s,
    }
}

fn judged(demand: &Sustained, signal: &[f64], rate_hz: f64) -> Judgement {
    judge(
        &envelope(vec![demand.clone()]),
        &record(signal, rate_hz),
        &RunState::Complete,
    )
    .remove(0)
}

fn record(signal: &[f64], rate_hz: f64) -> Filtered {
    Filtered {
        rate_hz,
        delay_s: 0.0,
        axes_g: [
            vec![0.0; signal.len()],
            vec![0.0; signal.len()],
            signal.to_vec(),
        ],
    }
}

fn envelope(demands: Vec<Sustained>) -> Envelope {
    let place = Place {
        source: Arc::new(Source {
            name: "made-up.yaml".to_owned(),
            text: String::new(),
        }),
        span: 0..0,
    };
    let rule = |(i, demand)| Rule {
        id: format!("rule-{i}"),
        clause: None,
        note: None,
        kind: RuleKind::Sustained(demand),
        place: place.clone(),
    };
    Envelope {
        name: "made up".to_owned(),
        status: Status::Project,
        source: Document {
            document: "none".to_owned(),
            edition: "none".to_owned(),
            note: None,
        },
        gravity: GravityTerm::Included,
        filter: Filter::None,
        rules: demands.into_iter().enumerate().map(rule).collect(),
        place: place.clone(),
    }
}

#[track_caller]
fn assert_close(found: f64, expected: f64, tolerance: f64) {
    assert!(
        (found - expected).abs() <= tolerance,
        "found {found}, expected {expected}"
    );
}
