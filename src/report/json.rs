//! An assessment as machines read it: fixed keys in a fixed order, null for what does not exist.
//!
//! Load, peak and limit are in g; for a rule about speed in m/s. Such a rule stands in every seat alike, its
//! stations are the leading axle's, and its findings come once a case, with car, seat, duration and parts null.

use serde_json::{Map, Value, json};

use super::number::{json as number, json_or_null};
use super::{end_key, outcome_key};
use crate::envelope::{Ignored, Spell, Unit};
use crate::motion::Ledger;
use crate::study::{
    Assessment, Case, Change, Extremes, Finding, Parts, Remedy, RuleResult, Run, SeatResult, Why,
};

/// The whole assessment, indented, with a line end.
pub fn check_json(assessment: &Assessment) -> String {
    let inputs = assessment.inputs.iter();
    let value = json!({
        "crestfall": env!("CARGO_PKG_VERSION"),
        "outcome": outcome_key(assessment.outcome),
        "cautions": assessment.cautions,
        "inputs": inputs.map(|f| json!({"file": f.name, "sha256": f.sha256})).collect::<Vec<_>>(),
        "cases": assessment.cases.iter().map(case).collect::<Vec<_>>(),
        "findings": assessment.findings.iter().map(finding).collect::<Vec<_>>(),
    });
    format!("{value:#}\n")
}

fn case(case: &Case) -> Value {
    let run = case.run.as_ref().ok();
    let reversals = run.map_or(&[][..], |r| &r.reversals);
    json!({
        "variant": case.variant,
        "scenario": case.scenario,
        "end": run.map(|r| end_key(r.end)),
        "duration_s": json_or_null(run.map(|r| r.duration_s)),
        "end_station_m": json_or_null(run.map(|r| r.end_station_m)),
        "reversals": reversals.iter().map(|r| json!({
            "time_s": number(r.time_s),
            "station_m": number(r.station_m),
        })).collect::<Vec<_>>(),
        "speed_m_s": extremes(run.and_then(|r| r.speed_m_s)),
        "energy": energy(run),
        "seats": case.seats.iter().map(seat).collect::<Vec<_>>(),
    })
}

fn extremes(extremes: Option<Extremes>) -> Value {
    json!({
        "max": json_or_null(extremes.map(|e| e.max.value)),
        "max_station_m": json_or_null(extremes.map(|e| e.max.station_m)),
        "min": json_or_null(extremes.map(|e| e.min.value)),
        "min_station_m": json_or_null(extremes.map(|e| e.min.station_m)),
    })
}

fn energy(run: Option<&Run>) -> Value {
    let of = |part: fn(&Ledger) -> f64| json_or_null(run.map(|r| part(&r.energy)));
    let zones_j = run.map_or(&[][..], |r| &r.energy.zones_j);
    let zones_j = zones_j.iter().map(|(name, j)| (name.clone(), number(*j)));
    json!({
        "start_j": of(|e| e.start_j),
        "end_j": of(|e| e.end_j),
        "rolling_j": of(|e| e.rolling_j),
        "air_j": of(|e| e.air_j),
        "zones_j": zones_j.collect::<Map<_, _>>(),
        "closure_j": of(|e| e.closure_j),
    })
}

fn seat(seat: &SeatResult) -> Value {
    let [x, y, z] = seat.felt_g.map(extremes);
    json!({
        "car": seat.car,
        "seat": seat.seat,
        "felt_g": {"x": x, "y": y, "z": z},
        "rules": seat.rules.iter().map(rule).collect::<Vec<_>>(),
    })
}

fn rule(rule: &RuleResult) -> Value {
    let judgement = &rule.judgement;
    let of = |part: fn(&Spell) -> f64| json_or_null(judgement.governing.as_ref().map(part));
    let ignored = judgement.ignored.iter().zip(&rule.ignored_station_m);
    json!({
        "envelope": judgement.envelope,
        "rule": judgement.rule,
        "outcome": outcome_key(judgement.outcome),
        "reason": judgement.reason,
        "utilisation": json_or_null(judgement.utilisation),
        "band": number(judgement.band),
        "load": of(|s| s.load),
        "peak": of(|s| s.peak),
        "limit": of(|s| s.limit),
        "duration_s": json_or_null(judgement.governing.and_then(|s| duration(judgement.unit, &s))),
        "station_m": json_or_null(rule.station_m),
        "time_s": of(|s| s.peak_time_s),
        "ignored": ignored.map(|(i, station_m)| ignored_load(i, *station_m)).collect::<Vec<_>>(),
    })
}

fn ignored_load(ignored: &Ignored, station_m: f64) -> Value {
    json!({
        "peak_g": number(ignored.peak_g),
        "duration_s": number(ignored.duration_s),
        "station_m": number(station_m),
    })
}

fn finding(finding: &Finding) -> Value {
    let worst = &finding.breach.worst;
    json!({
        "variant": finding.variant,
        "scenario": finding.scenario,
        "car": finding.rider.as_ref().map(|rider| rider.car),
        "seat": finding.rider.as_ref().map(|rider| &rider.seat),
        "envelope": finding.envelope,
        "rule": finding.rule,
        "outcome": outcome_key(finding.outcome),
        "peak": number(worst.peak),
        "time_s": number(worst.peak_time_s),
        "station_m": number(finding.station_m),
        "train_station_m": number(finding.train_station_m),
        "from_station_m": number(finding.from_station_m),
        "to_station_m": number(finding.to_station_m),
        "from_s": number(finding.breach.from_s),
        "to_s": number(finding.breach.to_s),
        "landmark": finding.landmark,
        "load": number(worst.load),
        "limit": number(worst.limit),
        "duration_s": json_or_null(duration(finding.unit, worst)),
        "utilisation": number(worst.utilisation),
        "band": number(finding.band),
        "why": why(&finding.why),
        "remedies": finding.remedies.iter().map(remedy).collect::<Vec<_>>(),
    })
}

/// Limits on speed know no duration.
fn duration(unit: Unit, spell: &Spell) -> Option<f64> {
    (unit == Unit::StandardGravity).then_some(spell.duration_s)
}

fn why(why: &Why) -> Value {
    let part = |of: fn(&Parts) -> f64| json_or_null(why.parts_g.as_ref().map(of));
    json!({
        "speed_m_s": number(why.speed_m_s),
        "radius_m": json_or_null(why.radius_m),
        "grade_deg": number(why.grade_rad.to_degrees()),
        "bank_left_deg": json_or_null(why.bank_left_rad.map(f64::to_degrees)),
        "parts_g": {
            "gravity": part(|p| p.gravity),
            "normal": part(|p| p.normal),
            "tangential": part(|p| p.tangential),
            "offset": part(|p| p.offset),
        },
    })
}

fn remedy(remedy: &Remedy) -> Value {
    let (change, unit) = match remedy.change {
        Change::Speed => ("speed", "m/s"),
        Change::Radius => ("radius", "m"),
        Change::Bank => ("bank", "deg left"),
    };
    let in_unit = |value: f64| match remedy.change {
        Change::Bank => value.to_degrees(),
        Change::Speed | Change::Radius => value,
    };
    json!({
        "change": change,
        "from": number(in_unit(remedy.from)),
        "to": number(in_unit(remedy.to)),
        "unit": unit,
    })
}
