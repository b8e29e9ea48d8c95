//! Rules about the speed of the train, against a look at every thousandth of the way between nodes.

use crestfall::envelope::{self, Judgement, Outcome, RunState, Scope, SpeedRecord, Stretch};
use crestfall::input::{RuleKind, SpeedBounds, Stop};
use proptest::prelude::*;

use crate::fixture::{assert_close, envelope, limit_for};

proptest! {
    #![proptest_config(ProptestConfig { cases: 1000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn bounds_agree_with_a_close_look(
        speeds in prop::collection::vec(prop_oneof![4 => 0.1..9.0f64, 1 => -2.0..1.0f64, 1 => Just(0.0)], 2..14),
        from in 0.0..1.0f64, length in 0.0..1.0f64,
        min in prop::option::of(0.5..5.0f64), max in prop::option::of(4.0..10.0f64),
    ) {
        if min.is_none() && max.is_none() {
            return Ok(());
        }
        let last = (speeds.len() - 1) as f64;
        let stretch = Stretch { from: from * last, to: (from + (1.0 - from) * length) * last };
        let judgement = judged(bounds(min, max, None), &speeds, &[], &[stretch], &RunState::Complete);
        let looks = (0..=4000).map(|i| stretch.from + (stretch.to - stretch.from) * f64::from(i) / 4000.0);
        let nodes = (0..speeds.len()).map(|i| i as f64).filter(|p| (stretch.from..=stretch.to).contains(p));
        let speed = |p: f64| {
            let before = p.floor() as usize;
            speeds[before] + (speeds[p.ceil() as usize] - speeds[before]) * (p - before as f64)
        };
        let seen: Vec<f64> = looks.chain(nodes).map(|p| speed(p.min(last))).collect();
        let fastest = seen.iter().fold(0.0f64, |a, v| a.max(v.abs()));
        let slowest = seen.iter().copied().fold(f64::INFINITY, f64::min);
        let of_max = max.map_or(0.0, |max| fastest / max);
        let of_min = min.map_or(0.0, |min| min / slowest);
        if min.is_some() && slowest <= 0.0 {
            prop_assert_eq!(judgement.utilisation, None);
            prop_assert_eq!(judgement.outcome, Outcome::Outside);
        } else {
            let utilisation = judgement.utilisation.expect("a measure");
            prop_assert!((utilisation - of_max.max(of_min)).abs() <= 1e-9 * utilisation);
            let outcome = if utilisation > 1.0 { Outcome::Outside } else { Outcome::Inside };
            prop_assert_eq!(judgement.outcome, outcome);
        }
        prop_assert_eq!(judgement.findings.is_empty(), judgement.outcome == Outcome::Inside);
        let second = |position: f64| position / 10.0;
        for finding in &judgement.findings {
            prop_assert!(second(stretch.from) <= finding.from_s + 1e-9 && finding.to_s <= second(stretch.to) + 1e-9);
            prop_assert!(finding.from_s <= finding.worst.peak_time_s && finding.worst.peak_time_s <= finding.to_s);
        }
    }
}

/// From 10 m/s down by 2 m/s a second: above 9 m/s for 0.5 s, below 3 m/s from 3.5 s on (v = 10 − 2 t).
#[test]
fn exact_crossings_of_bounds() {
    let speeds: Vec<f64> = (0..=40).map(|i| 10.0 - 0.2 * f64::from(i)).collect();
    let judgement = judged(
        bounds(Some(3.0), Some(9.0), None),
        &speeds,
        &[],
        &[],
        &RunState::Complete,
    );
    assert_close(judgement.utilisation.expect("a measure"), 1.5, 1e-12);
    let times: Vec<(f64, f64)> = judgement
        .findings
        .iter()
        .map(|f| (f.from_s, f.to_s))
        .collect();
    assert_eq!(times.len(), 2);
    assert_close(times[0].1, 0.5, 1e-9);
    assert_close(times[1].0, 3.5, 1e-9);
}

#[test]
fn stops_are_counted_in_every_pass() {
    let speeds = [3.0, 1.0, 0.0, -1.0, 0.0, 1.0, 2.0, 3.0];
    let (first, second) = (
        Stretch { from: 1.0, to: 3.5 },
        Stretch { from: 5.5, to: 7.0 },
    );
    let run = RunState::Complete;
    let never = bounds(None, None, Some(Stop::Never));
    let stops = judged(never, &speeds, &[2, 4], &[first], &run);
    assert_eq!((stops.outcome, stops.utilisation), (Outcome::Outside, None));
    assert_eq!(stops.findings.len(), 1);
    assert_close(stops.findings[0].from_s, 0.2, 1e-12);
    let free = judged(never, &speeds, &[2, 4], &[second], &run);
    assert_eq!((free.outcome, free.utilisation), (Outcome::Inside, None));
    assert!(free.findings.is_empty());

    let required = bounds(None, None, Some(Stop::Required));
    let stopped = judged(required, &speeds, &[2, 4], &[first], &run);
    assert_eq!(stopped.outcome, Outcome::Inside);
    let missed = judged(required, &speeds, &[2, 4], &[first, second], &run);
    assert_eq!(
        (missed.outcome, missed.findings.len()),
        (Outcome::Outside, 1)
    );
    let nowhere = judged(required, &speeds, &[2, 4], &[second], &run);
    assert_eq!(nowhere.outcome, Outcome::Outside);
}

/// A run that broke off in a stretch may still have stopped there: it cannot be told.
#[test]
fn a_run_that_broke_off_has_not_missed_its_stop() {
    let speeds = [3.0, 2.0, 1.0];
    let run = RunState::Incomplete("still under way".to_owned());
    let required = bounds(None, None, Some(Stop::Required));
    let open = judged(required, &speeds, &[], &[], &run);
    assert_eq!(open.outcome, Outcome::NotAssessed);
    let through = judged(
        required,
        &speeds,
        &[],
        &[Stretch { from: 0.0, to: 1.0 }],
        &run,
    );
    assert_eq!(through.outcome, Outcome::Outside);
}

#[test]
fn a_speed_that_is_no_number_is_never_inside() {
    let fast = bounds(None, Some(9.0), None);
    let judgement = judged(fast, &[1.0, f64::NAN, 2.0], &[], &[], &RunState::Complete);
    assert_eq!(judgement.outcome, Outcome::NotAssessed);
}

fn bounds(min_m_s: Option<f64>, max_m_s: Option<f64>, stop: Option<Stop>) -> SpeedBounds {
    SpeedBounds {
        min_m_s,
        max_m_s,
        stop,
    }
}

/// Ten nodes a second; all of the record where no stretch is given.
fn judged(
    bounds: SpeedBounds,
    speed_m_s: &[f64],
    stops: &[usize],
    stretches: &[Stretch],
    run: &RunState,
) -> Judgement {
    let mut envelope = envelope(vec![limit_for(0.0)]);
    envelope.rules[0].kind = RuleKind::Speed(bounds);
    let record = SpeedRecord {
        time_s: (0..speed_m_s.len()).map(|i| i as f64 / 10.0).collect(),
        speed_m_s: speed_m_s.to_vec(),
        stops: stops.to_vec(),
        numerical_m_s: 0.0,
    };
    let scope = match stretches {
        [] => Scope::Whole,
        _ => Scope::Part {
            stretches: stretches.to_vec(),
            missing: None,
        },
    };
    envelope::judge_speed(&envelope, &envelope.rules[0], &record, &scope, run).expect("a judgement")
}
