//! Rules that hold on stretches of a record: against the definition on a record cut by hand.
//!
//! Borders on quarters of a sample become samples of the same straight-lined load taken four times as often, so
//! that cutting is taking a slice and nothing is interpolated in a window.

use crestfall::envelope::{self, Judgement, Outcome, RunState, Scope, Stretch};
use crestfall::input::{RuleKind, Scale, Sustained};
use proptest::prelude::*;

use crate::definition::Definition;
use crate::fixture::{assert_close, envelope, judged, limit_for, record};
use crate::random::{demands, signals};

/// Pairs of a gap before a stretch and its length, in quarters of a sample.
fn stretches() -> impl Strategy<Value = Vec<(usize, usize)>> {
    prop::collection::vec((1..24usize, 0..40usize), 1..4)
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 2000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn stretches_agree_with_the_definition_on_a_record_cut_by_hand(
        signal in signals(), demand in demands(), rate_hz in 1.0..20.0f64, gaps in stretches(), factor in 0.5..1.5f64
    ) {
        let quarters = quartered(&signal);
        let cuts = cuts(&gaps, quarters.len());
        let scope = Scope::Part { stretches: cuts.iter().map(stretch).collect(), missing: None };
        let judgement = judged_in(&demand, factor, &signal, rate_hz, &scope);
        let scaled = Sustained { curve: scaled(&demand, factor), ..demand.clone() };
        let pieces: Vec<Definition<'_>> = cuts
            .iter()
            .map(|&(from, to)| Definition::new(&quarters[from..=to], &scaled, 4.0 * rate_hz))
            .collect();
        let length_s = |piece: &Definition<'_>| (piece.values.len() - 1) as f64 / (4.0 * rate_hz);
        let longest_s = pieces.iter().map(length_s).fold(-1.0, f64::max);
        if (longest_s - demand.ignore_below_s).abs() < 1e-9 && longest_s > 0.0 {
            return Ok(());
        }
        if cuts.is_empty() || longest_s < demand.ignore_below_s {
            prop_assert_eq!(judgement.outcome, Outcome::NotAssessed);
            prop_assert_eq!(judgement.utilisation, None);
            return Ok(());
        }
        let utilisation = judgement.utilisation.expect("long enough to be judged");
        let mut reached = 0.0f64;
        for piece in &pieces {
            for duration_s in piece.durations_s(length_s(piece)) {
                reached = reached.max(piece.utilisation_at(duration_s));
            }
            if let Some(spell) = judgement.governing && spell.duration_s <= length_s(piece) + 1e-12 {
                reached = reached.max(piece.utilisation_at(spell.duration_s.min(length_s(piece))));
            }
        }
        prop_assert!((reached - utilisation).abs() <= 1e-9, "{} reached, {} reported", reached, utilisation);
        let within = |from_s: f64, to_s: f64| cuts.iter().any(|&(from, to)| {
            from as f64 / (4.0 * rate_hz) <= from_s + 1e-9 && to_s <= to as f64 / (4.0 * rate_hz) + 1e-9
        });
        for finding in &judgement.findings {
            prop_assert!(within(finding.from_s, finding.to_s));
            prop_assert!(within(finding.worst.peak_time_s, finding.worst.peak_time_s));
        }
        prop_assert_eq!(judgement.findings.is_empty(), utilisation <= 1.0);
    }

    #[test]
    fn a_stretch_of_all_is_the_whole(signal in signals(), demand in demands(), rate_hz in 1.0..20.0f64) {
        let all = Stretch { from: -3.0, to: signal.len() as f64 + 7.0 };
        let scope = Scope::Part { stretches: vec![all], missing: None };
        prop_assert_eq!(judged_in(&demand, 1.0, &signal, rate_hz, &scope), judged(&demand, &signal, rate_hz));
    }

    #[test]
    fn what_is_missing_is_never_inside(signal in signals(), demand in demands()) {
        let missing = Some("landmark `crest` is never reached".to_owned());
        let whole = Stretch { from: 0.0, to: (signal.len() - 1) as f64 };
        let scope = Scope::Part { stretches: vec![whole], missing };
        let judgement = judged_in(&demand, 1.0, &signal, 10.0, &scope);
        let beyond = judgement.utilisation.is_some_and(|u| u > 1.0);
        prop_assert_eq!(judgement.outcome, if beyond { Outcome::Outside } else { Outcome::NotAssessed });
        prop_assert!(judgement.reason.is_some_and(|r| r.contains("never reached")));
    }
}

#[test]
fn nothing_selected_is_never_inside() {
    for stretches in [
        vec![],
        vec![Stretch {
            from: 200.0,
            to: 300.0,
        }],
        vec![Stretch {
            from: f64::NAN,
            to: 3.0,
        }],
    ] {
        let scope = Scope::Part {
            stretches,
            missing: None,
        };
        let judgement = judged_in(&limit_for(0.0), 1.0, &[0.1; 50], 10.0, &scope);
        assert_eq!(judgement.outcome, Outcome::NotAssessed);
        assert_eq!(judgement.utilisation, None);
        assert!(judgement.reason.is_some());
    }
}

/// A load of 2 g for 3 s cut at 1.25 s: by hand, 1.25 s and 1.75 s are left of it, and 3 s where the stretches touch.
#[test]
fn exact_borders_cut_a_spell() {
    let mut demand = limit_for(0.0);
    demand.curve = vec![(1.0, 4.0), (3.0, 2.0)];
    let signal = [2.0; 31];
    let cut = |stretches: &[(f64, f64)]| {
        let stretches = stretches.iter().map(|&(from, to)| Stretch { from, to });
        let scope = Scope::Part {
            stretches: stretches.collect(),
            missing: None,
        };
        let judgement = judged_in(&demand, 1.0, &signal, 10.0, &scope);
        judgement.utilisation.expect("judged")
    };
    assert_close(cut(&[(0.0, 12.5)]), 2.0 / 3.75, 1e-12);
    assert_close(cut(&[(0.0, 12.5), (12.6, 30.0)]), 2.0 / 3.26, 1e-12);
    assert_close(cut(&[(0.0, 30.0)]), 1.0, 1e-12);
}

/// What a border leaves of a load, 0.5 s of 0.9 g, is too short to be judged and must not hide 0.6 g for 2 s.
#[test]
fn exact_a_piece_too_short_hides_nothing() {
    let scope = Scope::Part {
        stretches: vec![Stretch { from: 0.5, to: 6.0 }],
        missing: None,
    };
    let signal = [0.9, 0.9, 0.1, 0.6, 0.6, 0.6, 0.1];
    let judgement = judged_in(&limit_for(1.0), 1.0, &signal, 1.0, &scope);
    assert_close(judgement.utilisation.expect("judged"), 0.6, 1e-12);
}

/// A floor of 0.2 g scaled by 0.5 allows 0.4 g less than 1 g, so that 0.6 g is the least load (design: 1 − value is scaled).
#[test]
fn exact_scaled_floor() {
    let mut demand = limit_for(0.0);
    demand.demand = crestfall::input::Demand::Floor;
    demand.curve = vec![(1.0, 0.2)];
    let judgement = judged_in(&demand, 0.5, &[0.7; 30], 10.0, &Scope::Whole);
    assert_close(judgement.utilisation.expect("judged"), 0.3 / 0.4, 1e-12);
    assert_close(judgement.governing.expect("a load").limit, 0.6, 1e-12);
}

fn judged_in(
    demand: &Sustained,
    factor: f64,
    signal: &[f64],
    rate_hz: f64,
    scope: &Scope,
) -> Judgement {
    let mut envelope = envelope(vec![demand.clone()]);
    assert!(matches!(envelope.rules[0].kind, RuleKind::Sustained(_)));
    envelope.rules[0].scale = Some(Scale {
        factor,
        reason: "a test".to_owned(),
    });
    let record = record(signal, rate_hz);
    let run = RunState::Complete;
    envelope::judge(&envelope, &envelope.rules[0], &record, scope, &run).expect("a judgement")
}

fn scaled(demand: &Sustained, factor: f64) -> Vec<(f64, f64)> {
    let scale = |v: f64| match demand.demand {
        crestfall::input::Demand::Floor => 1.0 - factor * (1.0 - v),
        crestfall::input::Demand::Limit(_) => factor * v,
    };
    demand.curve.iter().map(|&(t, v)| (t, scale(v))).collect()
}

/// The same straight-lined signal with four times as many samples.
fn quartered(signal: &[f64]) -> Vec<f64> {
    let last = signal.len() - 1;
    (0..=4 * last)
        .map(|i| {
            let (before, after) = (signal[i / 4], signal[(i / 4 + 1).min(last)]);
            before + (after - before) * (i % 4) as f64 / 4.0
        })
        .collect()
}

/// Stretches that lie on a record of so many quarters, apart.
fn cuts(gaps: &[(usize, usize)], count: usize) -> Vec<(usize, usize)> {
    let mut at = 0;
    let mut cuts = Vec::new();
    for (gap, length) in gaps {
        let (from, to) = (at + gap - 1, at + gap - 1 + length);
        at = to + 1;
        if to < count {
            cuts.push((from, to));
        }
    }
    cuts
}

fn stretch(&(from, to): &(usize, usize)) -> Stretch {
    Stretch {
        from: from as f64 / 4.0,
        to: to as f64 / 4.0,
    }
}
