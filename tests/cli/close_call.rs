//! A load a hair below its limit: whether that is inside depends on how well the points are known.

use crate::fixture::{Fixture, assert_near};

/// Points every metre in x along z = 15 + 15 cos(2πx/120), from one top to beyond the bottom, as a table.
fn valley(mut figure: impl FnMut(f64) -> String) -> String {
    let mut table = "x_m,y_m,z_m,bank_left_deg\n".to_owned();
    for point in 0..110 {
        let x = f64::from(point);
        let z = 15.0 + 15.0 * (std::f64::consts::TAU * x / 120.0).cos();
        table += &format!("{},{},{},0\n", figure(x), figure(0.0), figure(z));
    }
    table
}

/// Digits of the points and what is known of them, in a study whose limit is about a part in a hundred above the load.
fn study(fit: &str, table: &str) -> Fixture {
    let study = Fixture::level();
    study.write("valley.csv", table);
    let track = format!("crestfall: 1\ntrack: Valley\npoints: {{file: valley.csv, fit: {fit}}}\n");
    study.write("ride.track.yaml", &track);
    let operation = "ride.operation.yaml";
    study.replace(operation, "speed: 10 m/s", "speed: 5 m/s");
    study.replace(operation, "until: 60 m", "until: 100 m");
    study.replace(
        "ride.envelope.yaml",
        "{0.2 s: 3.0, 4 s: 3.0, 12 s: 2.0}",
        "{0.1 s: 3.48}",
    );
    study
}

/// A spread of 40 mm, near to Gaussian (a sum of twelve), from xorshift64* (Vigna 2016), to the millimetre.
fn surveyed() -> impl FnMut(f64) -> String {
    let mut state = 5_u64;
    let mut unit = move || {
        state ^= state >> 12;
        state ^= state << 25;
        state ^= state >> 27;
        (state.wrapping_mul(0x2545_F491_4F6C_DD1D) >> 11) as f64 / (1u64 << 53) as f64
    };
    move |x| {
        let spread = (0..12).map(|_| unit()).sum::<f64>() - 6.0;
        format!("{:.3}", x + 0.04 * spread)
    }
}

/// The rule `z-down` of the left seat of the last car.
fn z_down(report: &serde_json::Value) -> &serde_json::Value {
    let seats = report["cases"][0]["seats"].as_array().expect("a list");
    let rules = seats[seats.len() - 2]["rules"].as_array().expect("a list");
    let found = rules.iter().find(|rule| rule["rule"] == "z-down");
    found.expect("the rule")
}

#[test]
fn twelve_digits_are_inside() {
    let study = study("exact", &valley(|x| format!("{x:.12}")));
    let ran = study.run(&["check", "ride.study.yaml", "--format", "json"]);
    let report = ran.expect_status(0).json();
    assert_eq!(report["outcome"], "inside");
    assert_near(&z_down(&report)["utilisation"], 0.99, 0.003);
    assert_near(&z_down(&report)["band"], 0.0, 1e-5);
}

/// The same valley by points 40 mm off: two standard deviations of the load reach over the limit.
#[test]
fn a_survey_is_too_close_to_call() {
    let study = study("auto", &valley(surveyed()));
    let ran = study.run(&["check", "ride.study.yaml", "--format", "json"]);
    let report = ran.expect_status(1).json();
    assert_eq!(report["outcome"], "too-close-to-call");
    let rule = z_down(&report);
    assert_eq!(rule["outcome"], "too-close-to-call");
    assert_near(&rule["utilisation"], 0.99, 0.03);
    assert_near(&rule["band"], 0.035, 0.015);
    assert_eq!(report["findings"][0]["outcome"], "too-close-to-call");
}
