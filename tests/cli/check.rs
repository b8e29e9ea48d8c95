//! `crestfall check`.

use serde_json::Value;

use crate::fixture::{Fixture, assert_near};

/// A level track without resistance: the felt load is (0, 0, 1) g for the whole run of 50 m at 10 m/s,
/// so that the utilisation is 1/limit(T) = 1/(3 − (T − 4)/8) by hand, with T = 5 s and the delay of the
/// filter, (2 cos 67.5° + 2 cos 22.5°)/(2π 5 Hz), for which the last load is held (pre-warping adds 1e-4 s).
#[test]
fn exact_level_run() {
    let study = Fixture::level();
    let ran = study.run(&["check", "ride.study.yaml", "--format", "json"]);
    let report = ran.expect_status(0).json();
    assert_eq!(report["outcome"], "inside");
    let case = &report["cases"][0];
    assert_eq!(case["end"], "completed");
    assert_near(&case["duration_s"], 5.0, 1e-7);
    assert_near(&case["end_station_m"], 60.0, 1e-7);
    let rule = &case["seats"][0]["rules"][0];
    // The record ends before the end, one sample short at most, and holds for whole samples.
    let delay_s = 2.613_125_929_752_753 / (10.0 * std::f64::consts::PI);
    assert_near(&rule["utilisation"], 1.0 / (2.875 - delay_s / 8.0), 3e-4);
    assert_near(&rule["load"], 1.0, 1e-8);
    assert_eq!(report["findings"], Value::Array(Vec::new()));
}

/// A level circle of 20 m to the left at 10 m/s, one and a half times round: a car on two axles turns with
/// ω = v/R about a centre √(R² − 0.8²) to the left of its middle, so that the left seat feels ω² (that − 0.45 m).
#[test]
fn exact_circle_across_the_seam() {
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
    study.replace("ride.operation.yaml", "until: 60 m", "until: 190 m");
    let ran = study.run(&["check", "ride.study.yaml", "--format", "json"]);
    let report = ran.expect_status(0).json();
    let case = &report["cases"][0];
    assert_near(&case["end_station_m"], 190.0, 1e-6);
    let left_g = 0.25 * ((400.0_f64 - 0.64).sqrt() - 0.45) / 9.806_65;
    let seat = &case["seats"][0];
    assert_near(&seat["felt_g"]["y"]["max"], left_g, 1e-5);
    assert_near(&seat["felt_g"]["y"]["min"], left_g, 1e-5);
    assert_near(&seat["felt_g"]["x"]["max"], -0.25 * 0.2 / 9.806_65, 1e-5);
    let rules = seat["rules"].as_array().expect("a list");
    let y_left = rules
        .iter()
        .find(|rule| rule["rule"] == "y-left")
        .expect("the rule");
    assert_near(&y_left["utilisation"], left_g, 1e-5);
    let length_m = 40.0 * std::f64::consts::PI;
    for station in ["max_station_m", "min_station_m"] {
        let station_m = seat["felt_g"]["z"][station].as_f64().expect("a number");
        assert!((0.0..length_m).contains(&station_m), "{station_m}");
    }
}

/// A closed track has no end of its own, and a zone with the train must not be longer than it.
#[test]
fn a_closed_track_wants_an_end() {
    let study = Fixture::level();
    study.write(
        "circle.csv",
        &(0..60).fold("x_m,y_m,z_m,bank_left_deg\n".to_owned(), |table, point| {
            let (sin, cos) = (std::f64::consts::TAU * f64::from(point) / 60.0).sin_cos();
            table + &format!("{},{},5,0\n", 20.0 * cos, 20.0 * sin)
        }),
    );
    study.write(
        "ride.track.yaml",
        "crestfall: 1\ntrack: Circle\npoints: {file: circle.csv, fit: exact, closed: true}\n",
    );
    let operation = "ride.operation.yaml";
    study.replace(operation, "until: 60 m\n", "");
    study.replace(
        operation,
        "scenarios:",
        "zones:\n  - {name: long, kind: eddy, from: 5 m, to: 4 m, peak_force: 1 N, critical_speed: 9 m/s}\nscenarios:",
    );
    let ran = study.run(&["check", "ride.study.yaml"]);
    ran.expect_status(2);
    assert!(
        ran.err.contains("has no end") && ran.err.contains("give `until` or `finish`"),
        "{ran:?}"
    );
    assert!(ran.err.contains("zone `long` overlaps itself"), "{ran:?}");
}

#[test]
fn inside_is_said_of_the_envelope_given_and_is_status_0() {
    let ran = Fixture::level().run(&["check", "ride.study.yaml"]);
    ran.expect_status(0);
    assert!(
        ran.out.starts_with("inside of the envelope given"),
        "{ran:?}"
    );
    assert!(ran.out.contains("numbers are invented"), "{ran:?}");
    assert_eq!(ran.err, "", "progress and warnings stay away from a pipe");
}

#[test]
fn outside_leads_with_the_worst_place_and_is_status_1() {
    let ran = Fixture::valley().run(&["check", "ride.study.yaml"]);
    ran.expect_status(1);
    assert!(
        ran.out.starts_with("outside of the envelope given"),
        "{ran:?}"
    );
    let place = ran.out.lines().find(|line| line.contains("(pull-out)"));
    assert!(place.is_some_and(|line| line.contains("z-down")), "{ran:?}");
    assert!(
        ran.out.lines().all(|line| line.chars().count() <= 100),
        "{ran:?}"
    );
}

/// The place says why and what would mend it, in numbers with their units.
#[test]
fn a_place_says_why_and_what_would_mend_it() {
    let ran = Fixture::valley().run(&["check", "ride.study.yaml"]);
    let lines = ran.out.lines().map(str::trim);
    let lines: Vec<_> = lines.skip_while(|l| !l.contains("(pull-out)")).collect();
    assert!(lines[1].starts_with("worst: "), "{ran:?}");
    assert!(
        lines[2].starts_with("there: ") && lines[2].contains(" m/s, radius "),
        "{ran:?}"
    );
    assert!(
        lines[3].starts_with("peak +") && lines[3].contains(": gravity +"),
        "{ran:?}"
    );
    assert!(lines[4].starts_with("at the limit with "), "{ran:?}");
}

/// What one variant leaves must not hide what another keeps.
#[test]
fn each_variant_has_its_own_outcome_and_table() {
    let study = Fixture::valley();
    study.write(
        "eased.track.yaml",
        "crestfall: 1\ntrack: Eased\nstart: {z: 30 m, heading: 90 deg}\nelements:\n  - {name: run, length: 70 m, grade_to: -10 deg}\n",
    );
    study.replace(
        "ride.study.yaml",
        "  as-drawn: ride.track.yaml\n",
        "  as-drawn: ride.track.yaml\n  eased: eased.track.yaml\n",
    );
    let ran = study.run(&["check", "ride.study.yaml"]);
    ran.expect_status(1);
    let has = |line: &str| ran.out.lines().any(|l| l.trim().starts_with(line));
    assert!(has("as-drawn: outside, "), "{ran:?}");
    assert!(has("eased: inside, 0 findings in 2 cases"), "{ran:?}");
    for variant in ["as-drawn", "eased"] {
        assert!(has(&format!("worst of each rule, {variant}")), "{ran:?}");
        assert!(has(&format!("cases, {variant}")), "{ran:?}");
    }
}

/// On a level track nobody is pushed sideways: no seat and no scenario is the worst.
#[test]
fn a_rule_without_a_load_names_nobody() {
    let ran = Fixture::level().run(&["check", "ride.study.yaml"]);
    let row = ran.out.lines().find(|line| line.contains("y-left"));
    let cells: Vec<_> = row.expect("the rule").split_whitespace().collect();
    assert_eq!(
        cells,
        ["y-left", "inside", "0.000", "-", "-", "-", "-", "-"]
    );
}

/// The parts of a finding's load sum to its peak, and its window holds its moment.
#[test]
fn a_finding_says_where_when_and_why() {
    let ran = Fixture::valley().run(&["check", "ride.study.yaml", "--format", "json"]);
    let report = ran.expect_status(1).json();
    let findings = report["findings"].as_array().expect("a list");
    assert!(!findings.is_empty());
    for finding in findings {
        let number = |key: &str| finding[key].as_f64().expect(key);
        assert_eq!(finding["outcome"], "outside");
        assert!(number("utilisation") > 1.0);
        assert!(number("from_s") <= number("time_s") && number("time_s") <= number("to_s"));
        assert!(number("from_station_m") < number("to_station_m"));
        assert!(number("station_m") < number("train_station_m"));
        let parts = finding["why"]["parts_g"].as_object().expect("parts");
        let sum: f64 = parts.values().filter_map(Value::as_f64).sum();
        assert_near(&finding["peak"], sum, 1e-7);
    }
    let speed = &findings[0]["remedies"][0];
    assert_eq!(speed["change"], "speed");
    assert!(
        speed["to"].as_f64() < speed["from"].as_f64(),
        "a load too high wants a lower speed"
    );
}

#[test]
fn the_keys_stand_in_the_order_of_the_contract() {
    let ran = Fixture::valley().run(&["check", "ride.study.yaml", "--format", "json"]);
    let report = ran.json();
    let keys = |value: &Value| -> Vec<String> {
        value
            .as_object()
            .expect("an object")
            .keys()
            .cloned()
            .collect()
    };
    assert_eq!(
        keys(&report),
        [
            "crestfall",
            "outcome",
            "cautions",
            "inputs",
            "cases",
            "findings"
        ]
    );
    assert_eq!(
        keys(&report["cases"][0]),
        [
            "variant",
            "scenario",
            "end",
            "duration_s",
            "end_station_m",
            "reversals",
            "speed_m_s",
            "energy",
            "seats"
        ]
    );
    assert_eq!(
        keys(&report["cases"][0]["seats"][0]["rules"][0]),
        [
            "envelope",
            "rule",
            "outcome",
            "reason",
            "utilisation",
            "band",
            "load",
            "peak",
            "limit",
            "duration_s",
            "station_m",
            "time_s",
            "ignored"
        ]
    );
    assert_eq!(
        keys(&report["findings"][0]),
        [
            "variant",
            "scenario",
            "car",
            "seat",
            "envelope",
            "rule",
            "outcome",
            "peak",
            "time_s",
            "station_m",
            "train_station_m",
            "from_station_m",
            "to_station_m",
            "from_s",
            "to_s",
            "landmark",
            "load",
            "limit",
            "duration_s",
            "utilisation",
            "band",
            "why",
            "remedies"
        ]
    );
}

#[test]
fn the_same_input_gives_the_same_bytes_on_any_number_of_threads() {
    let study = Fixture::valley();
    let once = study
        .run(&["check", "ride.study.yaml", "--format", "json"])
        .out;
    let one_thread = study
        .command(&["check", "ride.study.yaml", "--format", "json"])
        .env("RAYON_NUM_THREADS", "1")
        .output()
        .expect("the program starts");
    assert_eq!(once, String::from_utf8_lossy(&one_thread.stdout));
}

#[test]
fn a_run_that_stalls_is_not_assessed() {
    let study = Fixture::level();
    study.replace("ride.operation.yaml", "running: 0,", "running: 0.5,");
    let ran = study.run(&["check", "ride.study.yaml", "--format", "json"]);
    let report = ran.expect_status(1).json();
    assert_eq!(report["outcome"], "not-assessed");
    assert_eq!(report["cases"][0]["end"], "stalled");
    let reason = &report["cases"][0]["seats"][0]["rules"][0]["reason"];
    assert!(
        reason
            .as_str()
            .is_some_and(|r| r.starts_with("the run did not complete: stalled at ")),
        "{reason}"
    );
    let text = study.run(&["check", "ride.study.yaml"]);
    assert!(
        text.out.starts_with("not assessed of the envelope given"),
        "{text:?}"
    );
    assert!(text.out.contains("stalled at"), "{text:?}");
}

/// What stalls in one scenario must not hide the worst of the others.
#[test]
fn what_is_not_assessed_has_a_row_of_its_own() {
    let study = Fixture::valley();
    study.replace(
        "ride.operation.yaml",
        "  empty: {riders: none, resistance: warm}",
        "  empty: {riders: none, resistance: warm, release: {station: 8 m, speed: 0 m/s}}",
    );
    let ran = study.run(&["check", "ride.study.yaml"]);
    let rows: Vec<_> = ran
        .out
        .lines()
        .filter(|line| line.starts_with("  z-down "))
        .collect();
    assert_eq!(rows.len(), 2, "{ran:?}");
    assert!(
        rows[0].contains("outside") && rows[0].contains(", full"),
        "{ran:?}"
    );
    assert!(rows[1].contains("not assessed"), "{ran:?}");
}

#[test]
fn narrowing_keeps_what_is_named() {
    let study = Fixture::valley();
    let ran = study.run(&[
        "check",
        "ride.study.yaml",
        "--format",
        "json",
        "--scenario",
        "empty",
        "--seat",
        "2-right",
    ]);
    let report = ran.json();
    let cases = report["cases"].as_array().expect("a list");
    assert_eq!(cases.len(), 1);
    assert_eq!(cases[0]["scenario"], "empty");
    let seats = cases[0]["seats"].as_array().expect("a list");
    assert_eq!(seats.len(), 1);
    assert_eq!(
        (seats[0]["car"].as_u64(), seats[0]["seat"].as_str()),
        (Some(2), Some("right"))
    );
}

#[test]
fn people_may_read_feet() {
    let ran = Fixture::level().run(&["check", "ride.study.yaml", "--units", "us"]);
    // 60 m are 196.85 ft and 10 m/s are 22.37 mph.
    assert!(
        ran.out.contains("196.9 ft") && ran.out.contains("22.4 mph"),
        "{ran:?}"
    );
    assert!(
        !ran.out.contains(" m/s") && !ran.out.contains(" m "),
        "{ran:?}"
    );
}

#[test]
fn machines_read_si_whatever_people_read() {
    let study = Fixture::valley();
    let json = |units| {
        study
            .run(&[
                "check",
                "ride.study.yaml",
                "--format",
                "json",
                "--units",
                units,
            ])
            .out
    };
    assert_eq!(json("us"), json("si"));
}

/// At a rate below the one at which two solutions are compared, a brake that grips at the second
/// sample makes a jump there: it is taken in, not stumbled over.
#[test]
fn a_low_rate_with_a_jump_at_the_start() {
    let study = Fixture::level();
    study.replace(
        "ride.study.yaml",
        "crestfall: 1",
        "crestfall: 1\nrate: 20 Hz",
    );
    study.replace(
        "ride.operation.yaml",
        "scenarios:",
        "zones:\n  - {name: grip, kind: clamp, from: 10.2 m, to: 10.9 m, force: 9 kN, release_speed: 9.9 m/s}\nscenarios:",
    );
    let ran = study.run(&["check", "ride.study.yaml", "--format", "json"]);
    assert!(ran.status.is_some_and(|status| status < 2), "{ran:?}");
}

/// A ride whose rails are exchanged runs head down; its reader is told.
#[test]
fn a_release_head_down_is_told() {
    let study = Fixture::level();
    study.replace(
        "ride.track.yaml",
        "heading: 90 deg}",
        "heading: 90 deg, bank: 180 deg left}",
    );
    let ran = study.run(&["check", "ride.study.yaml"]);
    assert!(ran.out.contains("lies upside down"), "{ran:?}");
}
