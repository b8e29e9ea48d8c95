//! Sustained rules against closed forms and against an evaluation straight from the definition.
//!
//! The definition: S(T) is the largest, over all t, of the smallest load in [t, t + T]; the
//! utilisation is the largest S(T)/limit(T) over the durations that are judged.

mod closed_forms;
mod definition;
mod fixture;
mod outcomes;
mod random;
mod scopes;
mod speeds;

use crestfall::envelope::{Judgement, Outcome, RunState};
use proptest::prelude::*;

use definition::Definition;
use fixture::{envelope, judge, judged, record};
use random::{demands, limits, signals};

proptest! {
    #![proptest_config(ProptestConfig { cases: 4000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn agrees_with_the_definition(signal in signals(), demand in demands(), rate_hz in 1.0..20.0f64) {
        let judgement = judged(&demand, &signal, rate_hz);
        let length_s = (signal.len() - 1) as f64 / rate_hz;
        if (length_s - demand.ignore_below_s).abs() < 1e-9 {
            return Ok(());
        }
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
        if judgement.utilisation.is_none() {
            return Ok(());
        }
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
