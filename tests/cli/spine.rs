//! `crestfall spine`: what the audit finds in tables of points, and how it is told.

use std::f64::consts::{PI, TAU};
use std::fmt::Write as _;
use std::fs;

use serde_json::Value;

use crate::fixture::{Fixture, Ran, assert_near};

/// x, y, z, m, and bank to the left, deg.
type Row = [f64; 4];

/// A track of points in a study's folder.
struct Surveyed(Fixture);

impl Surveyed {
    fn new(rows: &[Row], decimals: usize, points: &str) -> Self {
        let mut table = "x_m,y_m,z_m,bank_left_deg\n".to_owned();
        for [x, y, z, bank] in rows {
            writeln!(
                table,
                "{x:.decimals$},{y:.decimals$},{z:.decimals$},{bank:.2}"
            )
            .expect("a text");
        }
        let study = Fixture::level();
        study.write("survey.csv", &table);
        let track =
            format!("crestfall: 1\ntrack: Survey\npoints: {{file: survey.csv, {points}}}\n");
        study.write("ride.track.yaml", &track);
        Self(study)
    }

    fn spine(&self, options: &[&str]) -> Ran {
        let arguments = [&["spine", "ride.track.yaml"], options].concat();
        self.0.run(&arguments)
    }

    /// The JSON of an audit that ends with a status.
    #[track_caller]
    fn audit(&self, status: i32) -> Value {
        self.spine(&["--format", "json"])
            .expect_status(status)
            .json()
    }
}

/// The findings of a kind.
fn of_kind<'a>(audit: &'a Value, kind: &str) -> Vec<&'a Value> {
    let findings = audit["findings"].as_array().expect("a list");
    findings.iter().filter(|f| f["kind"] == kind).collect()
}

/// Points every 0.25 m of x = u, y = 10 sin 0.14 u, z = 8 cos(0.1 u + 1).
fn hilly() -> Vec<Row> {
    let mut u = 0.0_f64;
    let mut rows = Vec::new();
    for _ in 0..400 {
        let bank = 20.0 * (0.05 * u).sin();
        rows.push([
            u,
            10.0 * (0.14 * u).sin(),
            8.0 * (0.1 * u + 1.0).cos(),
            bank,
        ]);
        let slopes = [1.4 * (0.14 * u).cos(), 0.8 * (0.1 * u + 1.0).sin()];
        u += 0.25 / (1.0 + slopes[0].powi(2) + slopes[1].powi(2)).sqrt();
    }
    rows
}

/// A level circle of 20 m in equal steps.
fn circle(count: usize) -> Vec<Row> {
    let angle = |i: usize| TAU * i as f64 / count as f64;
    let row = |i| {
        [
            20.0 * f64::cos(angle(i)),
            20.0 * f64::sin(angle(i)),
            5.0,
            0.0,
        ]
    };
    (0..count).map(row).collect()
}

/// Two straights that meet in a kink at row 101.
fn kinked(turn_deg: f64) -> Vec<Row> {
    let (sin, cos) = turn_deg.to_radians().sin_cos();
    let after = (1..=100)
        .map(|i| 0.25 * f64::from(i))
        .map(|d| [25.0 + d * cos, d * sin, 5.0, 0.0]);
    (0..=100)
        .map(|i| [0.25 * f64::from(i), 0.0, 5.0, 0.0])
        .chain(after)
        .collect()
}

/// Curvature 1/R, no grade, length 2πR.
#[test]
fn exact_circle() {
    let audit = Surveyed::new(&circle(500), 12, "fit: exact, closed: true").audit(0);
    assert_near(&audit["length_m"], 40.0 * PI, 1e-6);
    assert_near(&audit["extremes"]["radius_m"]["min"], 20.0, 1e-5);
    assert_near(&audit["extremes"]["grade_deg"]["max"], 0.0, 1e-9);
    assert_near(&audit["extremes"]["yaw_rate_rad_m"]["min"], 0.05, 1e-7);
    assert_near(&audit["ends"]["spacings"], 1.0, 1e-9);
    assert_near(
        &audit["points"]["spacing_m"]["median"],
        40.0 * (PI / 500.0).sin(),
        1e-9,
    );
}

/// Helix of radius R and rise c a radian: κ = R/(R² + c²), grade atan c/R (do Carmo, sec. 1-5).
#[test]
fn exact_helix() {
    let (radius, rise) = (10.0_f64, 2.0_f64);
    let angles = (0..500).map(|i| 0.02 * f64::from(i));
    let row = |a: f64| [radius * a.cos(), radius * a.sin(), rise * a, 0.0];
    let rows: Vec<Row> = angles.map(row).collect();
    let audit = Surveyed::new(&rows, 13, "fit: exact").audit(0);
    let extremes = &audit["extremes"];
    let squared = radius * radius + rise * rise;
    assert_near(&audit["length_m"], 9.98 * squared.sqrt(), 1e-6);
    assert_near(&extremes["radius_m"]["min"], squared / radius, 1e-3);
    let grade_deg = (rise / radius).atan().to_degrees();
    assert_near(&extremes["grade_deg"]["max"], grade_deg, 1e-4);
    assert_near(&extremes["grade_deg"]["min"], grade_deg, 1e-4);
    assert_near(&extremes["height_m"]["max"], 9.98 * rise, 1e-9);
    assert_near(
        &extremes["height_m"]["max_station_m"],
        9.98 * squared.sqrt(),
        1e-6,
    );
    assert_near(&extremes["bank_left_deg"]["max"], 0.0, 1e-9);
}

/// A turn Δ over L with ramps f L peaks at Δ/((1−f) L), its curvature grows by Δ/((1−f) f L²) a metre;
/// a smooth change of grade peaks in its middle.
#[test]
fn exact_elements() {
    let study = Fixture::level();
    study.write(
        "ride.track.yaml",
        "crestfall: 1\ntrack: Drawn\nstart: {z: 30 m}\nelements:\n  - {length: 10 m}\n  \
         - {length: 20 m, turn: 90 deg left, bank_to: 40 deg left, ease: {ramp: 0.3}}\n  \
         - {length: 10 m, bank_to: 0 deg}\n  - {radius: 15 m, grade_to: -45 deg}\n  - {length: 5 m}\n",
    );
    let ran = study.run(&["spine", "ride.track.yaml", "--format", "json"]);
    let audit = ran.expect_status(0).json();
    let extremes = &audit["extremes"];
    let peak = 0.5 * PI / (0.7 * 20.0);
    assert_near(&extremes["radius_m"]["min"], 1.0 / peak, 1e-7);
    assert_near(&extremes["radius_m"]["min_station_m"], 16.0, 1e-6);
    assert_near(
        &extremes["bend_rate_1_m2"]["max"],
        0.5 * PI / (0.7 * 0.3 * 400.0),
        1e-9,
    );
    assert_near(&extremes["bank_left_deg"]["max"], 40.0, 1e-9);
    assert_near(&extremes["bank_left_deg"]["max_station_m"], 30.0, 1e-6);
    // Leaning back from the left is a positive roll: 1.875 Δ/L in the middle of the third element.
    let roll = 1.875 * 40.0_f64.to_radians() / 10.0;
    assert_near(&extremes["roll_rate_rad_m"]["max"], roll, 1e-9);
    assert_near(&extremes["roll_rate_rad_m"]["max_station_m"], 35.0, 1e-4);
    // Grade falling is a positive pitch about the left axis; its sharpest lies half-way.
    let length = 1.875 * 0.25 * PI * 15.0;
    assert_near(&extremes["pitch_rate_rad_m"]["max"], 1.0 / 15.0, 1e-7);
    assert_near(
        &extremes["pitch_rate_rad_m"]["max_station_m"],
        40.0 + 0.5 * length,
        1e-3,
    );
    assert_near(&extremes["grade_deg"]["min"], -45.0, 1e-9);
    assert_eq!(
        (&audit["fit"], &audit["noise"]),
        (&Value::Null, &Value::Null)
    );
}

/// However short a ramp, the curvature is continuous; its sudden growth is told, not found.
#[test]
fn a_short_ramp_is_no_jump() {
    let study = Fixture::level();
    study.write(
        "ride.track.yaml",
        "crestfall: 1\ntrack: Short\nelements:\n  - {length: 900 m}\n  \
         - {length: 20 m, turn: 90 deg left, bank_to: 40 deg left, ease: {ramp: 0.0001}}\n",
    );
    let ran = study.run(&["spine", "ride.track.yaml", "--format", "json"]);
    let audit = ran.expect_status(0).json();
    assert_eq!(audit["findings"], serde_json::json!([]));
    assert_eq!(audit["corners"]["count"], 3);
    let rate = 0.5 * PI / (0.9999 * 0.0001 * 400.0);
    assert_near(
        &audit["corners"]["bend_rate_1_m2"]["max"],
        rate,
        1e-6 * rate,
    );
    assert_near(
        &audit["corners"]["bend_rate_1_m2"]["max_station_m"],
        900.0,
        0.01,
    );
}

/// What interpolating independent errors at spacing 1 makes of a second derivative, worked out in the
/// frequency domain from the values of the quintic B-spline (Unser, Aldroubi & Eden 1993: its second
/// derivative is the second difference of the cubic one's values) at points and half-way between.
fn interpolation_gain() -> f64 {
    let steps = 20_000;
    let (mut at_points, mut between) = (0.0, 0.0);
    for i in 0..steps {
        let w = TAU * (f64::from(i) + 0.5) / f64::from(steps);
        let filter = (66.0 + 52.0 * w.cos() + 2.0 * (2.0 * w).cos()) / 120.0;
        let on = -1.0 + 2.0 / 3.0 * w.cos() + (2.0 * w).cos() / 3.0;
        let off = (-22.0 * (0.5 * w).cos() + 21.0 * (1.5 * w).cos() + (2.5 * w).cos()) / 24.0;
        at_points += (on / filter).powi(2);
        between += (off / filter).powi(2);
    }
    (f64::max(at_points, between) / f64::from(steps)).sqrt()
}

#[test]
fn exact_noise_of_rounded_points_interpolated() {
    let audit = Surveyed::new(&hilly(), 3, "fit: exact").audit(1);
    let deviation = 0.001 / 12f64.sqrt();
    assert_near(&audit["fit"]["error_m"], deviation, 1e-12);
    let speed = 25.0_f64;
    let expected =
        2.0 * deviation * interpolation_gain() / 0.25_f64.powi(2) * speed * speed / 9.80665;
    for of in ["spine", "interpolated"] {
        assert_near(&audit["noise"][of]["median_g"], expected, 0.03 * expected);
    }
    assert_eq!(of_kind(&audit, "noise-floor").len(), 1);
    // Noise goes as the error: what is left of it brings nineteen twentieths to 0.05 g.
    let most = audit["noise"]["spine"]["most_g"]
        .as_f64()
        .expect("a number");
    assert_near(
        &audit["noise"]["remedy"]["error_m"],
        deviation * 0.05 / most,
        1e-9,
    );
    let slow = Surveyed::new(&hilly(), 3, "fit: exact");
    let slow = slow
        .spine(&["--format", "json", "--speed", "45 km/h"])
        .json();
    assert_near(
        &slow["noise"]["spine"]["median_g"],
        0.25 * expected,
        0.01 * expected,
    );
}

/// Smoothed, the same points are usable, and the remedy that is told works.
#[test]
fn exact_remedies_do_what_they_say() {
    let rows = hilly();
    let audit = Surveyed::new(&rows, 3, "fit: auto").audit(0);
    assert_eq!(audit["fit"]["method"], "grid");
    assert_eq!(audit["noise"]["remedy"], Value::Null);
    let coarse = Surveyed::new(&rows, 2, "fit: auto").audit(1);
    let error = coarse["noise"]["remedy"]["error_m"]
        .as_f64()
        .expect("a remedy");
    // Points of about that error: rounding to a millimetre makes 0.29 mm.
    assert!((0.0001..0.0015).contains(&error), "{error}");
}

#[test]
fn a_blunder_is_found_at_its_row_with_its_size() {
    let mut rows = hilly();
    rows[56][2] += 0.035;
    let audit = Surveyed::new(&rows, 3, "fit: auto").audit(1);
    let worst = &audit["fit"]["worst"][0];
    assert_eq!(worst["row"], 57);
    let number = |value: &Value| value.as_f64().expect("a number");
    // Studentised is r/(σ √(1−h)): without the row the curve lies r/(1−h) away.
    let own = number(&worst["studentised"]) * number(&audit["fit"]["error_m"]);
    let apart = own * own / number(&worst["residual_m"]);
    // The part of the slip along the track is none.
    let along = (0..3)
        .map(|i| rows[57][i] - rows[55][i])
        .collect::<Vec<_>>();
    let steep = along[2] / along.iter().map(|d| d * d).sum::<f64>().sqrt();
    let across = 0.035 * (1.0 - steep * steep).sqrt();
    assert!((apart - across).abs() < 0.1 * across, "{apart}, {across}");
}

/// In a study a blunder is a mistake, at the line of the table, whatever the fit.
#[test]
fn a_blunder_is_a_mistake_of_a_study() {
    let mut rows = hilly();
    rows[56][2] += 0.035;
    for fit in ["fit: auto", "fit: {within: 0.5 mm}", "fit: {within: 2 mm}"] {
        let survey = Surveyed::new(&rows, 3, fit);
        let audit = survey.audit(1);
        let blunders = of_kind(&audit, "blunder");
        let row = blunders.iter().find(|b| b["row"] == 57).expect("the row");
        assert_near(&row["station_m"], 56.0 * 0.25, 0.2);
        let ran = survey.0.run(&["check", "ride.study.yaml"]);
        ran.expect_status(2);
        for said in [
            "row 57 lies",
            "survey.csv:58",
            "except: [57]",
            "why in a comment",
        ] {
            assert!(ran.err.contains(said), "expected {said:?} in {ran:?}");
        }
    }
}

#[test]
fn rows_left_out_are_told_and_no_blunders() {
    let mut rows = hilly();
    rows[56][2] += 0.035;
    let audit = Surveyed::new(&rows, 3, "fit: auto, except: [57]").audit(0);
    assert_eq!(audit["points"]["left_out"], serde_json::json!([57]));
    assert_eq!(audit["points"]["count"], 399);
    assert_near(&audit["points"]["spacing_m"]["largest"], 0.5, 0.01);
}

/// Where very many rows slip the curve bends to each; kinks and the error that the points show tell.
#[test]
fn an_error_stated_too_small_is_a_mistake() {
    let mut rows = hilly();
    for row in rows.iter_mut().skip(5).step_by(16) {
        row[2] += 0.035;
    }
    let survey = Surveyed::new(&rows, 3, "fit: {within: 0.5 mm}");
    let audit = survey.audit(1);
    assert_eq!(of_kind(&audit, "kink").len(), 25);
    assert_eq!(of_kind(&audit, "error-understated").len(), 1);
    let ran = survey.0.run(&["check", "ride.study.yaml"]);
    ran.expect_status(2);
    assert!(
        ran.err
            .contains("0.50 mm of a point of the centre line, and the points show"),
        "{ran:?}"
    );
}

/// Points that lie far apart are no blunders at sharp bends, where the curve has its bias.
#[test]
fn points_far_apart_are_no_blunders() {
    for (every, within) in [(4, "0.3 mm"), (8, "0.3 mm")] {
        let rows: Vec<Row> = hilly().into_iter().step_by(every).collect();
        let survey = Surveyed::new(&rows, 3, &format!("fit: {{within: {within}}}"));
        let audit = survey.spine(&["--format", "json"]).json();
        assert!(
            of_kind(&audit, "blunder").is_empty(),
            "{every}, {within}: {audit}"
        );
    }
}

/// Without its last point a circle still closes, over twice the spacing.
#[test]
fn closure_of_a_circle_without_its_last_point() {
    let rows = circle(500);
    let audit = Surveyed::new(&rows[..499], 3, "fit: auto, closed: true").audit(0);
    assert_near(&audit["ends"]["spacings"], 2.0, 0.02);
    assert_near(&audit["ends"]["direction_deg"], 2.0 * 360.0 / 500.0, 0.02);
    assert_near(&audit["ends"]["bank_left_deg"], 0.0, 1e-6);
    let gap = Surveyed::new(&rows[..490], 3, "fit: auto, closed: true").audit(1);
    assert_eq!(of_kind(&gap, "gap")[0]["row"], 490);
}

/// Left open, a circuit is told to be one, and its ends are no blunders.
#[test]
fn an_open_circuit_is_told() {
    let ran = Surveyed::new(&circle(500), 3, "fit: auto").spine(&[]);
    assert!(ran.out.contains("closed: true"), "{ran:?}");
    assert!(!ran.out.contains("from the curve, "), "{ran:?}");
}

#[test]
fn kinks_are_found_and_curves_are_not() {
    for fit in ["fit: auto", "fit: exact", "fit: {within: 1 mm}"] {
        let audit = Surveyed::new(&kinked(10.0), 3, fit).audit(1);
        let kinks = of_kind(&audit, "kink");
        assert_eq!(kinks.len(), 1, "{fit}: {kinks:?}");
        assert_eq!(kinks[0]["row"], 101);
        assert_near(&kinks[0]["size"], 10.0, 0.4);
        assert_near(&kinks[0]["station_m"], 25.0, 0.1);
    }
    // A straight that runs into an arc of 20 m: a jump of curvature, but no kink.
    let arc = (1..100).map(|i| 0.0125 * f64::from(i));
    let arc = arc.map(|a| [20.0 * a.sin(), 20.0 * (1.0 - a.cos()), 5.0, 0.0]);
    let straight = (-100..=0).map(|i| [0.25 * f64::from(i), 0.0, 5.0, 0.0]);
    let rows: Vec<Row> = straight.chain(arc).collect();
    let audit = Surveyed::new(&rows, 4, "fit: auto")
        .spine(&["--format", "json"])
        .json();
    assert!(of_kind(&audit, "kink").is_empty(), "{audit}");
}

#[test]
fn gaps_and_points_almost_on_one_another_are_found() {
    let mut rows = hilly();
    rows.drain(150..169);
    let audit = Surveyed::new(&rows, 3, "fit: auto").audit(1);
    let gaps = of_kind(&audit, "gap");
    assert_eq!((gaps.len(), &gaps[0]["row"]), (1, &Value::from(150)));
    assert_near(&gaps[0]["size"], 5.0, 0.05);
    assert_near(&gaps[0]["against"], 0.25, 0.01);
    let mut rows = hilly();
    let (a, b) = (rows[99], rows[100]);
    rows.insert(100, [0, 1, 2, 3].map(|i| a[i] + 0.04 * (b[i] - a[i])));
    let audit = Surveyed::new(&rows, 4, "fit: auto")
        .spine(&["--format", "json"])
        .json();
    let near = of_kind(&audit, "near-duplicate");
    assert_eq!((near.len(), &near[0]["row"]), (1, &Value::from(101)));
}

/// What cannot carry a curve is refused with a reason, never drawn somehow.
#[test]
fn tables_that_carry_no_curve_are_refused() {
    let straight = |count: i32| -> Vec<Row> {
        (0..count)
            .map(|i| [0.25 * f64::from(i), 0.0, 5.0, 0.0])
            .collect()
    };
    let mut folded = straight(40);
    folded.extend((0..39).rev().map(|i| [0.25 * f64::from(i), 0.01, 5.0, 0.0]));
    let mut shuffled = hilly();
    shuffled.swap(120, 124);
    for (rows, fit, said) in [
        (
            vec![[1.0, 2.0, 3.0, 0.0]; 20],
            "fit: auto",
            "the one before it again",
        ),
        (
            straight(3),
            "fit: auto",
            "found 3 points, expected at least 6",
        ),
        (folded, "fit: auto", "the track turns by"),
        (shuffled, "fit: auto", "row out of order"),
        (hilly(), "fit: {within: 0 mm}", "expected"),
    ] {
        for points in [fit, "fit: exact"]
            .into_iter()
            .take(if fit == "fit: auto" { 2 } else { 1 })
        {
            let ran = Surveyed::new(&rows, 3, points).spine(&[]);
            ran.expect_status(2);
            assert!(ran.err.contains(said), "expected {said:?} in {ran:?}");
            assert_eq!(ran.out, "");
        }
    }
}

/// A curve that follows the noise of its points shows no blunders; cross-validation tells.
#[test]
fn an_error_far_below_the_points_is_found() {
    let audit = Surveyed::new(&hilly(), 2, "fit: {within: 0.2 mm}").audit(1);
    let found = of_kind(&audit, "error-understated");
    assert_near(&found[0]["size"], 0.0002, 1e-12);
    assert_near(&found[0]["against"], 0.01 / 12f64.sqrt(), 5e-4);
}

#[test]
fn an_error_far_beyond_the_points_is_found() {
    let audit = Surveyed::new(&hilly(), 3, "fit: {within: 50 m}").audit(1);
    let found = of_kind(&audit, "error-overstated");
    assert_near(&found[0]["size"], 50.0, 0.0);
    assert_near(&found[0]["against"], 0.001 / 12f64.sqrt(), 5e-5);
}

/// A table whose numbers sit on no grid says nothing of its error, and that is a finding.
#[test]
fn an_unknown_error_is_found() {
    let survey = Surveyed::new(&hilly(), 6, "fit: exact");
    let path = survey.0.path("survey.csv");
    let table = fs::read_to_string(&path).expect("readable");
    survey
        .0
        .write("survey.csv", &table.replacen("\n0.000000,", "\n0e0,", 1));
    let audit = survey.audit(1);
    assert_eq!(of_kind(&audit, "error-unknown").len(), 1);
    assert_eq!(audit["noise"], Value::Null);
}

#[test]
fn text_fits_a_hundred_columns_in_either_units() {
    let mut rows = hilly();
    rows[56][2] += 0.035;
    for points in [
        "fit: exact",
        "fit: auto",
        "fit: {within: 0.3 mm}, except: [57]",
    ] {
        let survey = Surveyed::new(&rows, 3, points);
        for (units, shown) in [("si", "25.0 m/s"), ("us", "55.9 mph")] {
            let ran = survey.spine(&["--units", units]);
            assert!(ran.out.contains(shown), "{ran:?}");
            let wide = ran.out.lines().find(|line| line.chars().count() > 100);
            assert_eq!(wide, None);
        }
        let us = survey.spine(&["--units", "us"]).out;
        assert!(
            us.contains(" ft") && us.contains(" in") && !us.contains(" mm"),
            "{us}"
        );
    }
}

/// The file holds what the audit says, from the start to the end.
#[test]
fn csv_tells_a_spine_station_by_station() {
    let survey = Surveyed::new(&circle(500), 3, "fit: auto, closed: true");
    survey.spine(&["--csv", "spine.csv"]).expect_status(0);
    let mut table = csv::Reader::from_path(survey.0.path("spine.csv")).expect("readable");
    let header: Vec<String> = table
        .headers()
        .expect("a header")
        .iter()
        .map(str::to_owned)
        .collect();
    let column = |name: &str| header.iter().position(|h| h == name).expect("the column");
    let rows: Vec<csv::StringRecord> = table.records().map(|row| row.expect("a row")).collect();
    let number =
        |row: &csv::StringRecord, name| row[column(name)].parse::<f64>().expect("a number");
    let last = &rows[rows.len() - 1];
    assert!((number(last, "station_m") - 40.0 * PI).abs() < 0.01);
    for row in &rows {
        assert!((number(row, "radius_m") - 20.0).abs() < 0.01);
        assert!((number(row, "curvature_1_m") - 0.05).abs() < 1e-4);
        let deviation = number(row, "curvature_sd_1_m");
        assert!(deviation > 0.0 && deviation < 1e-4, "{deviation}");
    }
    let study = Fixture::level();
    study
        .run(&["spine", "ride.track.yaml", "--csv", "out.csv"])
        .expect_status(0);
    let mut table = csv::Reader::from_path(study.path("out.csv")).expect("readable");
    for row in table.records().map(|row| row.expect("a row")) {
        assert_eq!(
            (&row[column("radius_m")], &row[column("curvature_sd_1_m")]),
            ("", "")
        );
    }
    study
        .run(&["spine", "ride.track.yaml", "--csv", "no/out.csv"])
        .expect_status(2);
}

#[test]
fn a_speed_needs_a_unit_and_must_not_be_0() {
    let study = Fixture::level();
    for speed in ["25", "0 m/s", "-3 m/s", "fast"] {
        let option = format!("--speed={speed}");
        let ran = study.run(&["spine", "ride.track.yaml", &option]);
        ran.expect_status(2);
        assert!(ran.err.contains("speed"), "{ran:?}");
    }
    study
        .run(&["spine", "ride.track.yaml", "--speed", "55 mph"])
        .expect_status(0);
    study.run(&["spine", "missing.track.yaml"]).expect_status(2);
}
