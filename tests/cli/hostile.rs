//! Studies made to get a wrong `inside`, or no answer at all, out of the program.

use crate::fixture::Fixture;

/// A sharp bump in a level track, met 0.1 s after the release: at 10 Hz that is the second sample.
const BUMP: &str = "\
crestfall: 1
track: Bump
start: {z: 10 m, heading: 90 deg}
elements:
  - {length: 10.2 m}
  - {length: 0.7 m, grade_by: 4 deg}
  - {length: 0.7 m, grade_by: -4 deg}
  - {length: 60 m}
";

const CIRCLE: &str = "\
crestfall: 1
track: Circle
points: {file: circle.csv, fit: exact, closed: true}
";

/// `points` of a level circle, of which `written` are written down.
fn circle(radius_m: f64, points: u32, written: u32) -> String {
    let mut table = "x_m,y_m,z_m,bank_left_deg\n".to_owned();
    for point in 0..written {
        let (sin, cos) = (std::f64::consts::TAU * f64::from(point) / f64::from(points)).sin_cos();
        table += &format!("{:.9},{:.9},5,0\n", radius_m * cos, radius_m * sin);
    }
    table
}

fn circling(radius_m: f64, points: u32, written: u32) -> Fixture {
    let study = Fixture::level();
    study.write("ride.track.yaml", CIRCLE);
    study.write("circle.csv", &circle(radius_m, points, written));
    study
}

#[test]
fn a_rate_as_low_as_allowed_ends_in_an_answer() {
    let study = Fixture::level();
    study.write("ride.track.yaml", BUMP);
    study.replace("ride.study.yaml", "envelopes:", "rate: 10 Hz\nenvelopes:");
    study.replace("ride.envelope.yaml", "corner: 5 Hz", "corner: 4 Hz");
    let ran = study.run(&["check", "ride.study.yaml", "--format", "json"]);
    ran.expect_status(1);
    assert!(ran.json()["cases"][0]["end"] == "completed", "{ran:?}");
}

/// What the load does between two samples that lie far apart must not be inside unseen: the limit is
/// below the peak that a rate of 500 Hz shows.
#[test]
fn a_peak_between_samples_is_not_inside() {
    let study = Fixture::level();
    study.write("ride.track.yaml", BUMP);
    study.replace(
        "ride.envelope.yaml",
        "{butterworth: {poles: 4, corner: 5 Hz, passes: one}}",
        "none",
    );
    study.replace("ride.envelope.yaml", "{0.2 s: 3.0,", "{0.001 s: 3.0,");
    study.replace(
        "ride.envelope.yaml",
        "ignore_below: 0.1 s}\n  - {id: y",
        "ignore_below: 0 s}\n  - {id: y",
    );
    study.replace("ride.operation.yaml", "running: 0,", "running: 0.01,");
    let peak_g = |study: &Fixture| {
        let ran = study.run(&["check", "ride.study.yaml", "--format", "json"]);
        let seat = ran.json()["cases"][0]["seats"][0].clone();
        let outcome = seat["rules"][0]["outcome"]
            .as_str()
            .expect("text")
            .to_owned();
        (
            seat["felt_g"]["z"]["max"].as_f64().expect("a number"),
            outcome,
        )
    };
    let (fine_g, _) = peak_g(&study);
    study.replace("ride.study.yaml", "envelopes:", "rate: 10 Hz\nenvelopes:");
    let (coarse_g, _) = peak_g(&study);
    assert!(coarse_g + 0.2 < fine_g, "{coarse_g} {fine_g}");
    let limit_g = 0.5 * (coarse_g + fine_g);
    study.replace(
        "ride.envelope.yaml",
        "{0.001 s: 3.0, 4 s: 3.0, 12 s: 2.0}",
        &format!("{{0.001 s: {limit_g}}}"),
    );
    let (_, outcome) = peak_g(&study);
    assert_eq!(outcome, "too-close-to-call");
}

#[test]
fn a_closed_table_that_repeats_its_first_point_is_refused() {
    let ran = circling(20.0, 250, 251).run(&["check", "ride.study.yaml"]);
    ran.expect_status(2);
    assert!(
        ran.err
            .contains("the last point of this closed track is the first again"),
        "{}",
        ran.err
    );
}

/// Twenty cars, 51 m from first to last axle, on a lap of 37.7 m would ride through one another.
#[test]
fn a_train_longer_than_the_lap_is_refused() {
    let study = circling(6.0, 100, 100);
    study.replace("ride.train.yaml", "count: 2", "count: 20");
    let ran = study.run(&["check", "ride.study.yaml"]);
    ran.expect_status(2);
    assert!(ran.err.contains("the train's axles span"), "{}", ran.err);
}

#[test]
fn an_outcome_of_a_part_says_so() {
    let study = Fixture::valley();
    let said = |arguments: &[&str]| {
        let all = [&["check", "ride.study.yaml", "--format", "json"], arguments].concat();
        let report = study.run(&all).json();
        let cautions = report["cautions"].as_array().expect("a list").clone();
        cautions
            .iter()
            .filter_map(|c| c.as_str())
            .find(|c| c.contains("Only a part of the study"))
            .map(str::to_owned)
    };
    assert_eq!(said(&[]), None);
    let part = said(&["--seat", "1-left", "--scenario", "full"]).expect("a caution");
    assert!(
        part.contains("1 of the 2 scenarios, 1 of the 4 seats"),
        "{part}"
    );
}

/// A hill of 3 m, written down to 1 cm every half metre along the x axis: x and y are exact, so that all of
/// the rounding is in z, and a curve as smooth as the rounding of three coordinates allows is too flat.
/// What is felt on the hill of the exact table must lie within the band (closed form: a Gaussian).
#[test]
fn the_band_holds_what_smoothing_flattens() {
    let study = Fixture::level();
    study.write(
        "ride.track.yaml",
        "crestfall: 1\ntrack: Hill\npoints: {file: hill.csv, fit: auto}\n",
    );
    study.replace("ride.operation.yaml", "speed: 10 m/s", "speed: 20 m/s");
    study.replace("ride.operation.yaml", "running: 0,", "running: 0.001,");
    study.replace(
        "ride.envelope.yaml",
        "sign: positive, limits: {0.2 s: 3.0, 4 s: 3.0, 12 s: 2.0}, between: linear",
        "floor: {0.2 s: -1}",
    );
    let judged = |decimals: usize, step_m: f64| {
        let mut table = "x_m,y_m,z_m,bank_left_deg\n".to_owned();
        for i in 0..=(100.0 / step_m) as u32 {
            let x = f64::from(i) * step_m;
            let z = 3.0 * (-((x - 50.0) / 10.0).powi(2)).exp();
            table += &format!(
                "{x:.decimals$},{:.decimals$},{z:.decimals$},0.0000001\n",
                0.0
            );
        }
        study.write("hill.csv", &table);
        let ran = study.run(&["check", "ride.study.yaml", "--format", "json"]);
        let rule = ran.json()["cases"][0]["seats"][0]["rules"][0].clone();
        let number = |key: &str| rule[key].as_f64().expect("a number");
        (number("utilisation"), number("band"))
    };
    let (exact, _) = judged(12, 0.25);
    for (decimals, step_m) in [(2, 0.5), (3, 0.25)] {
        let (rounded, band) = judged(decimals, step_m);
        assert!(exact <= rounded + band, "{exact} {rounded} ± {band}");
        assert!(band < 0.2, "{band}");
    }
}
