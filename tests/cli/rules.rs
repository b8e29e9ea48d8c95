//! Where rules hold and what scales them.

use serde_json::Value;

use crate::fixture::{Fixture, assert_near};

const ENVELOPE: &str = "ride.envelope.yaml";

/// An envelope of these rules alone, without a filter.
pub(crate) fn with_rules(study: &Fixture, filter: &str, rules: &[&str]) {
    let rules: String = rules
        .iter()
        .map(|rule| format!("  - {{{rule}}}\n"))
        .collect();
    study.write(
        ENVELOPE,
        &format!(
            "crestfall: 1\nenvelope: Invented\nstatus: illustrative\n\
             source: {{document: none, edition: none, note: Invented numbers}}\n\
             gravity: included\nfilter: {filter}\nrules:\n{rules}"
        ),
    );
}

const Z_DOWN: &str =
    "kind: sustained, axis: z, sign: positive, limits: {1 s: 3.0, 3 s: 1.0}, between: linear";

pub(crate) fn checked(study: &Fixture, status: i32) -> Value {
    let ran = study.run(&["check", "ride.study.yaml", "--format", "json"]);
    ran.expect_status(status).json()
}

pub(crate) fn rule<'a>(report: &'a Value, case: usize, seat: usize, id: &str) -> &'a Value {
    let rules = report["cases"][case]["seats"][seat]["rules"]
        .as_array()
        .expect("a list");
    rules
        .iter()
        .find(|rule| rule["rule"] == id)
        .expect("the rule")
}

pub(crate) fn number(value: &Value, key: &str) -> f64 {
    value[key].as_f64().expect(key)
}

/// 1 g at 10 m/s: between 20.013 m and 40.002 m it lasts 1.9989 s, and the limit for that is 4 − 1.9989 = 2.0011 g by hand.
#[test]
fn exact_stretch_of_a_level_run() {
    let study = Fixture::level();
    let stretch = format!(
        "id: cut, {Z_DOWN}, where: {{stations: [{{from: 20.013 m, to: 40.002 m}}], scenarios: [full]}}"
    );
    let two = format!(
        "id: two, {Z_DOWN}, where: {{stations: [{{from: 20 m, to: 25 m}}, {{from: 25 m, to: 30 m}}, {{from: 31 m, to: 39 m}}]}}"
    );
    with_rules(&study, "none", &[&stretch, &two]);
    let report = checked(&study, 0);
    let cut = rule(&report, 0, 0, "cut");
    assert_near(&cut["utilisation"], 1.0 / 2.0011, 1e-8);
    assert_near(&cut["duration_s"], 1.9989, 1e-8);
    // Stretches that touch are one of 1 s: limit 3 g; the other lasts 0.8 s.
    let two = rule(&report, 0, 0, "two");
    assert_near(&two["utilisation"], 1.0 / 3.0, 1e-8);
}

/// A circle of 20 m at 10 m/s: from 120 m across the seam to 5 m are 40 π − 115 m, on every lap, at ω² × 20 m less the seat's
/// offset sideways, as in `exact_circle_across_the_seam`.
#[test]
fn exact_every_lap_across_the_seam() {
    let study = Fixture::level();
    let mut table = "x_m,y_m,z_m,bank_left_deg\n".to_owned();
    for point in 0..250 {
        let (sin, cos) = (std::f64::consts::TAU * f64::from(point) / 250.0).sin_cos();
        table += &format!("{:.12},{:.12},5,0\n", 20.0 * cos, 20.0 * sin);
    }
    study.write("circle.csv", &table);
    study.write(
        "ride.track.yaml",
        "crestfall: 1\ntrack: Circle\npoints: {file: circle.csv, fit: exact, closed: true}\n",
    );
    study.replace("ride.operation.yaml", "until: 60 m", "until: 320 m");
    with_rules(
        &study,
        "none",
        &[
            "id: y-left, kind: sustained, axis: y, sign: positive, limits: {0.1 s: 0.25}, \
             where: {stations: [{from: 120 m, to: 5 m}]}",
            "id: fast, kind: speed, max: 9 m/s, where: {stations: [{from: 120 m, to: 5 m}]}",
        ],
    );
    let report = checked(&study, 1);
    let y_left = rule(&report, 0, 0, "y-left");
    let left_g = 0.25 * ((400.0_f64 - 0.64).sqrt() - 0.45) / 9.806_65;
    assert_near(&y_left["utilisation"], left_g / 0.25, 1e-4);
    let findings = report["findings"].as_array().expect("a list");
    let of_seat: Vec<&Value> = findings
        .iter()
        .filter(|f| f["rule"] == "y-left" && f["car"] == 1 && f["seat"] == "left")
        .collect();
    assert_eq!(of_seat.len(), 2, "a finding a lap");
    let lap_s = 4.0 * std::f64::consts::PI;
    for finding in &of_seat {
        assert_near(&finding["from_station_m"], 120.0, 1e-6);
        assert_near(&finding["to_station_m"], 5.0, 1e-6);
        let length_s = number(finding, "to_s") - number(finding, "from_s");
        assert!((length_s - (lap_s - 11.5)).abs() < 1e-5, "{finding}");
    }
    let apart_s = number(of_seat[1], "from_s") - number(of_seat[0], "from_s");
    assert!((apart_s - lap_s).abs() < 1e-5, "{apart_s}");
    let fast: Vec<&Value> = findings.iter().filter(|f| f["rule"] == "fast").collect();
    assert_eq!(fast.len(), 2, "once a lap, whatever the seats");
    assert_near(&fast[0]["from_station_m"], 120.0, 1e-6);
}

/// The filter comes first and its delay is taken out: a stretch that holds the worst place finds the same peak there, and
/// one that ends 1 m before it does not.
#[test]
fn stations_are_those_without_the_delay() {
    let study = Fixture::valley();
    let filter = "{butterworth: {poles: 4, corner: 5 Hz, passes: one}}";
    let z = "kind: sustained, axis: z, sign: positive, limits: {0 s: 3.0}";
    with_rules(&study, filter, &[&format!("id: z, {z}")]);
    let whole = checked(&study, 1);
    let whole = rule(&whole, 0, 0, "z").clone();
    let station_m = whole["station_m"].as_f64().expect("a station");
    let around = |from_m: f64, to_m: f64| {
        let stations = format!("stations: [{{from: {from_m} m, to: {to_m} m}}]");
        with_rules(
            &study,
            filter,
            &[&format!("id: z, {z}, where: {{{stations}}}")],
        );
        let ran = study.run(&["check", "ride.study.yaml", "--format", "json"]);
        rule(&ran.json(), 0, 0, "z").clone()
    };
    let held = around(station_m - 0.1, station_m + 0.1);
    for key in ["peak", "station_m", "time_s"] {
        assert_eq!(held[key], whole[key], "{key}");
    }
    let before = around(station_m - 3.0, station_m - 1.0);
    assert!(before["peak"].as_f64() < whole["peak"].as_f64());
    assert_near(&before["station_m"], station_m - 1.0, 1e-6);
}

/// The parts of a load at a border sum to it as anywhere else.
#[test]
fn parts_sum_to_the_peak_at_a_border() {
    let study = Fixture::valley();
    let filter = "{butterworth: {poles: 4, corner: 5 Hz, passes: one}}";
    let z = "id: z, kind: sustained, axis: z, sign: positive, limits: {0 s: 1.5}";
    with_rules(&study, filter, &[z]);
    let station_m = number(rule(&checked(&study, 1), 0, 0, "z"), "station_m");
    let to_m = station_m - 1.003;
    let stretch = format!("{z}, where: {{stations: [{{from: 10 m, to: {to_m} m}}]}}");
    with_rules(&study, filter, &[&stretch]);
    let report = checked(&study, 1);
    let findings = report["findings"].as_array().expect("a list");
    let finding = findings
        .iter()
        .find(|f| f["car"] == 1 && f["seat"] == "left");
    let finding = finding.expect("a finding of the first seat");
    assert_near(&finding["station_m"], to_m, 1e-6);
    let parts = finding["why"]["parts_g"].as_object().expect("parts");
    let sum: f64 = parts.values().filter_map(Value::as_f64).sum();
    assert_near(&finding["peak"], sum, 1e-7);
}

#[test]
fn rules_of_other_scenarios_and_seats_are_not_listed() {
    let study = Fixture::valley();
    with_rules(
        &study,
        "none",
        &[
            &format!("id: all, {Z_DOWN}"),
            &format!("id: some, {Z_DOWN}, where: {{scenarios: [empty], seats: [1-left, 2-right]}}"),
        ],
    );
    let report = checked(&study, 1);
    for case in report["cases"].as_array().expect("a list") {
        for seat in case["seats"].as_array().expect("a list") {
            let rules = seat["rules"].as_array().expect("a list");
            let named = [(1, "left"), (2, "right")].contains(&(
                seat["car"].as_i64().expect("a car"),
                seat["seat"].as_str().expect("a seat"),
            ));
            let listed = if case["scenario"] == "empty" && named {
                2
            } else {
                1
            };
            assert_eq!(rules.len(), listed, "{} {seat}", case["scenario"]);
        }
    }
    let narrowed = study.run(&["check", "ride.study.yaml", "--scenario", "full"]);
    let text = narrowed.out.replace("\n    ", " ");
    assert!(
        text.contains(
            "rule `some` of the envelope `Invented` is not assessed in the variant `as-drawn`"
        ),
        "{narrowed:?}"
    );
}

/// A case that no rule is about has shown nothing.
#[test]
fn a_case_without_a_rule_is_not_assessed() {
    let study = Fixture::valley();
    let mild =
        "kind: sustained, axis: z, sign: positive, limits: {0 s: 30.0}, where: {scenarios: [full]}";
    with_rules(&study, "none", &[&format!("id: mild, {mild}")]);
    let report = checked(&study, 1);
    assert_eq!(report["outcome"], "not-assessed");
    assert_eq!(rule(&report, 0, 0, "mild")["outcome"], "inside");
}

#[test]
fn what_is_never_reached_is_not_assessed() {
    let study = Fixture::level();
    with_rules(
        &study,
        "none",
        &[
            "id: beyond, kind: sustained, axis: z, sign: positive, limits: {0 s: 3.0}, where: {stations: [{from: 64 m, to: 68 m}]}",
            "id: partly, kind: speed, max: 12 m/s, where: {stations: [{from: 20 m, to: 30 m}, {from: 64 m, to: 68 m}]}",
            "id: apart, kind: speed, max: 12 m/s, where: {stations: [{from: 71 m, to: 75 m}], landmarks: [run]}",
        ],
    );
    let report = checked(&study, 1);
    let reason = |id: &str| {
        let rule = rule(&report, 0, 0, id);
        assert_eq!(rule["outcome"], "not-assessed", "{id}");
        rule["reason"].as_str().expect("a reason").to_owned()
    };
    assert!(reason("beyond").contains("64 m to 68 m is never reached"));
    assert!(reason("partly").contains("64 m to 68 m is never reached"));
    assert!(reason("apart").contains("nothing in common"));
    assert_near(
        &rule(&report, 0, 0, "partly")["utilisation"],
        10.0 / 12.0,
        1e-7,
    );
    assert_eq!(rule(&report, 0, 0, "beyond")["utilisation"], Value::Null);
}

/// A landmark of one variant only is not assessed on the other.
#[test]
fn a_landmark_may_be_absent_in_a_variant() {
    let study = Fixture::level();
    study.write(
        "other.track.yaml",
        "crestfall: 1\ntrack: Other\nstart: {z: 10 m}\nelements:\n  - {name: straight, length: 70 m}\n",
    );
    study.replace(
        "ride.study.yaml",
        "as-drawn: ride.track.yaml",
        "as-drawn: ride.track.yaml\n  other: other.track.yaml",
    );
    with_rules(
        &study,
        "none",
        &[
            "id: z, kind: sustained, axis: z, sign: positive, limits: {0 s: 3.0}, where: {landmarks: [run]}",
        ],
    );
    let report = checked(&study, 1);
    assert_eq!(rule(&report, 0, 0, "z")["outcome"], "inside");
    let other = rule(&report, 1, 0, "z");
    assert_eq!(other["outcome"], "not-assessed");
    assert_eq!(
        other["reason"],
        "landmark `run` is not on the track of this variant"
    );
}

/// 1 g against 3 g × 0.4.
#[test]
fn a_scale_multiplies_limits_and_is_told_with_its_reason() {
    let study = Fixture::level();
    with_rules(
        &study,
        "none",
        &[
            "id: z, kind: sustained, axis: z, sign: positive, limits: {0 s: 3.0}, scale: {factor: 0.4, reason: young riders}",
            "id: fast, kind: speed, max: 20 m/s, scale: {factor: 0.6, reason: worn wheels}",
        ],
    );
    let report = checked(&study, 0);
    assert_near(&rule(&report, 0, 0, "z")["limit"], 1.2, 1e-12);
    assert_near(&rule(&report, 0, 0, "z")["utilisation"], 1.0 / 1.2, 1e-8);
    assert_near(
        &rule(&report, 0, 0, "fast")["utilisation"],
        10.0 / 12.0,
        1e-8,
    );
    let text = study.run(&["check", "ride.study.yaml"]).out;
    let told = "The limits of the rule `z` of the envelope `Invented` are multiplied by 0.4: young riders.";
    assert!(text.replace("\n    ", " ").contains(told), "{text}");
    let cautions = report["cautions"].as_array().expect("a list");
    assert!(cautions.iter().any(|caution| caution == told));
}

#[test]
fn a_stretch_beyond_the_seam_is_refused() {
    let study = Fixture::level();
    let table = (0..60).fold("x_m,y_m,z_m,bank_left_deg\n".to_owned(), |table, point| {
        let (sin, cos) = (std::f64::consts::TAU * f64::from(point) / 60.0).sin_cos();
        table + &format!("{},{},5,0\n", 20.0 * cos, 20.0 * sin)
    });
    study.write("circle.csv", &table);
    study.write(
        "ride.track.yaml",
        "crestfall: 1\ntrack: Circle\npoints: {file: circle.csv, fit: exact, closed: true}\n",
    );
    let rule = format!("id: z, {Z_DOWN}, where: {{stations: [{{from: 120 m, to: 130 m}}]}}");
    with_rules(&study, "none", &[&rule]);
    let ran = study.run(&["check", "ride.study.yaml"]);
    ran.expect_status(2);
    assert!(
        ran.err.contains("does not lie on the closed track"),
        "{ran:?}"
    );
    assert!(ran.err.contains("ride.envelope.yaml:8:"), "{ran:?}");
}
