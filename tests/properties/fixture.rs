//! Records, envelopes and judgements made in a line.

use std::sync::Arc;

use crestfall::diagnostic::{Place, Source};
use crestfall::envelope::{self, Judgement, RunState, Scope};
use crestfall::input::{
    Axis, Between, Demand, Document, Envelope, Filter, GravityTerm, Rule, RuleKind, Sign, Status,
    Sustained, Where,
};
use crestfall::loads::Filtered;

pub(crate) fn limit_for(ignore_below_s: f64) -> Sustained {
    Sustained {
        axis: Axis::Z,
        demand: Demand::Limit(Sign::Positive),
        curve: vec![(1.0, 1.0)],
        between: Between::Linear,
        ignore_below_s,
    }
}

pub(crate) fn judged(demand: &Sustained, signal: &[f64], rate_hz: f64) -> Judgement {
    judge(
        &envelope(vec![demand.clone()]),
        &record(signal, rate_hz),
        &RunState::Complete,
    )
    .remove(0)
}

/// Every rule of an envelope over the whole record.
pub(crate) fn judge(envelope: &Envelope, record: &Filtered, run: &RunState) -> Vec<Judgement> {
    let rules = envelope.rules.iter();
    rules
        .filter_map(|rule| envelope::judge(envelope, rule, record, &Scope::Whole, run))
        .collect()
}

pub(crate) fn record(signal: &[f64], rate_hz: f64) -> Filtered {
    Filtered {
        rate_hz,
        delay_s: 0.0,
        axes_g: [
            vec![0.0; signal.len()],
            vec![0.0; signal.len()],
            signal.to_vec(),
        ],
        numerical_g: 0.0,
        margin_g: None,
    }
}

pub(crate) fn envelope(demands: Vec<Sustained>) -> Envelope {
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
        holds: Where::default(),
        scale: None,
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
pub(crate) fn assert_close(found: f64, expected: f64, tolerance: f64) {
    assert!(
        (found - expected).abs() <= tolerance,
        "found {found}, expected {expected}"
    );
}
