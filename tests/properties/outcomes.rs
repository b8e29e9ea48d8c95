//! Outcomes, edges, signs and times of single judgements.

use crestfall::envelope::{Outcome, RunState};
use crestfall::input::{Demand, Sign, Sustained};

use crate::fixture::{assert_close, envelope, judge, judged, limit_for, record};

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
    assert_eq!((spell.load, spell.peak, spell.limit), (-2.0, -2.0, -1.0));
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
    assert_close(spell.load, -0.2, 1e-12);
    assert_close(spell.limit, 0.2, 1e-12);
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
