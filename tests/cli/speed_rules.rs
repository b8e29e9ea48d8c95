//! Rules about the speed of the train.

use serde_json::Value;

use crate::fixture::{Fixture, assert_near};
use crate::rules::{checked, rule, with_rules};

/// 10 m/s all the way: v/max = 10/12, min/v = 8/10; the worse governs.
#[test]
fn exact_speeds_of_a_level_run() {
    let study = Fixture::level();
    with_rules(
        &study,
        "none",
        &[
            "id: between, kind: speed, min: 8 m/s, max: 12 m/s",
            "id: slow, kind: speed, max: 8 m/s, where: {stations: [{from: 20 m, to: 30 m}]}",
            "id: stop, kind: speed, stop: never",
        ],
    );
    let report = checked(&study, 1);
    for seat in 0..4 {
        let between = rule(&report, 0, seat, "between");
        assert_near(&between["utilisation"], 10.0 / 12.0, 1e-8);
        assert_near(&between["load"], 10.0, 1e-7);
        assert_eq!(between["duration_s"], Value::Null);
        let stop = rule(&report, 0, seat, "stop");
        assert_eq!(
            (&stop["outcome"], &stop["utilisation"]),
            (&"inside".into(), &Value::Null)
        );
    }
    let findings = report["findings"].as_array().expect("a list");
    assert_eq!(findings.len(), 1, "once a case");
    let finding = &findings[0];
    assert_eq!(
        (&finding["car"], &finding["seat"]),
        (&Value::Null, &Value::Null)
    );
    assert_near(&finding["utilisation"], 1.25, 1e-8);
    assert_near(&finding["from_station_m"], 20.0, 1e-6);
    assert_near(&finding["to_station_m"], 30.0, 1e-6);
    assert_near(&finding["from_s"], 1.0, 1e-6);
    for part in ["gravity", "normal", "tangential", "offset"] {
        assert_eq!(finding["why"]["parts_g"][part], Value::Null);
    }
    let text = study.run(&["check", "ride.study.yaml"]).out;
    assert!(
        text.contains("slow, 20.0..30.0 m (run): 1.250 of the limit, 10.0 m/s against 8.0 m/s"),
        "{text}"
    );
    assert!(
        text.lines().all(|line| line.chars().count() <= 100),
        "{text}"
    );
}

/// A clamp brings the train to rest in the finish: it stops there and nowhere else.
#[test]
fn a_train_that_rests_in_the_finish_has_stopped_there() {
    let study = Fixture::level();
    study.replace(
        "ride.operation.yaml",
        "until: 60 m",
        "finish: {zone: final}\nzones:\n  - {name: final, kind: clamp, from: 30 m, to: 65 m, force: 8 kN, release_speed: 0 m/s}",
    );
    with_rules(
        &study,
        "none",
        &[
            "id: must, kind: speed, stop: required, where: {stations: [{from: 30 m, to: 65 m}]}",
            "id: must-before, kind: speed, stop: required, where: {stations: [{from: 15 m, to: 30 m}]}",
            "id: never, kind: speed, stop: never, where: {stations: [{from: 30 m, to: 65 m}]}",
            "id: never-before, kind: speed, stop: never, where: {stations: [{from: 15 m, to: 30 m}]}",
            "id: least, kind: speed, min: 2 m/s",
        ],
    );
    let report = checked(&study, 1);
    assert_eq!(report["cases"][0]["end"], "completed");
    let expected = [
        ("must", "inside"),
        ("must-before", "outside"),
        ("never", "outside"),
        ("never-before", "inside"),
        ("least", "outside"),
    ];
    for (id, outcome) in expected {
        let rule = rule(&report, 0, 0, id);
        assert_eq!(rule["outcome"], outcome, "{id}");
        assert_eq!(rule["utilisation"], Value::Null, "{id}");
    }
    let never = rule(&report, 0, 0, "never");
    assert_eq!(never["station_m"], report["cases"][0]["end_station_m"]);
    let text = study.run(&["check", "ride.study.yaml"]).out;
    let text = text.replace("\n    ", " ");
    assert!(text.contains("the train stops or reverses"), "{text}");
    assert!(
        text.contains("the train does not stop, slowest 10.0 m/s"),
        "{text}"
    );
}

/// Too slow for the hill: v²/2g = 1.27 m of 10 m. The reversal lies between samples and is found all the same.
#[test]
fn a_reversal_is_a_stop() {
    let study = Fixture::level();
    study.replace(
        "ride.track.yaml",
        "  - {name: run, length: 70 m}",
        "  - {name: run, length: 30 m}\n  - {name: hill, radius: 15 m, grade_to: 40 deg}\n  - {name: top, length: 30 m}",
    );
    study.replace("ride.operation.yaml", "speed: 10 m/s", "speed: 5 m/s");
    with_rules(
        &study,
        "none",
        &[
            "id: keeps-on, kind: speed, stop: never, where: {landmarks: [hill, top]}",
            "id: forward, kind: speed, min: 1 m/s",
            "id: mild, kind: speed, max: 10 m/s",
        ],
    );
    let report = checked(&study, 1);
    let case = &report["cases"][0];
    assert_eq!(case["end"], "rolled-back");
    let keeps_on = rule(&report, 0, 0, "keeps-on");
    assert_eq!(keeps_on["outcome"], "outside");
    assert_eq!(keeps_on["time_s"], case["reversals"][0]["time_s"]);
    assert_eq!(keeps_on["station_m"], case["reversals"][0]["station_m"]);
    assert_eq!(rule(&report, 0, 0, "forward")["outcome"], "outside");
    let mild = rule(&report, 0, 0, "mild");
    assert_eq!(mild["outcome"], "not-assessed");
    assert_near(&mild["utilisation"], 0.5, 1e-3);
}
