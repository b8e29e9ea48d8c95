//! The commands as a user meets them: files in, text and exit status out.

use std::fs;
use std::io::Read;
use std::path::PathBuf;
use std::process::{Command, Stdio};

use serde_json::Value;
use tempfile::TempDir;

// ----------------------------------------------------------------------- check

/// A level track without resistance: the felt load is (0, 0, 1) g for the whole run of 50 m at 10 m/s,
/// so that the utilisation is 1/limit(5 s) = 1/(3 − (5 − 4)/8) by hand.
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
    // The record ends before the end, one sample short at most.
    assert_near(&rule["utilisation"], 1.0 / 2.875, 2e-4);
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
    // 60 m are 196.85 ft.
    assert!(ran.out.contains("196.9 ft"), "{ran:?}");
}

// ------------------------------------------------------------------- wrong input

#[test]
fn names_that_do_not_exist_are_status_2_with_the_nearest() {
    let study = Fixture::valley();
    for (option, wrong, nearest) in [
        ("--variant", "as-drwn", "`as-drawn`"),
        ("--scenario", "emty", "`empty`"),
        ("--seat", "1-lef", "`1-left`"),
    ] {
        let ran = study.run(&["check", "ride.study.yaml", option, wrong]);
        ran.expect_status(2);
        assert!(
            ran.err.contains(wrong) && ran.err.contains(nearest),
            "{ran:?}"
        );
        assert_eq!(ran.out, "");
    }
}

#[test]
fn a_wrong_command_line_is_status_2() {
    let study = Fixture::level();
    study.run(&["check"]).expect_status(2);
    study.run(&["chekc", "ride.study.yaml"]).expect_status(2);
    study
        .run(&["check", "ride.study.yaml", "--format", "xml"])
        .expect_status(2);
    study.run(&["check", "missing.study.yaml"]).expect_status(2);
}

/// Mistakes that show only between files stand at the line that has to be mended, all at once.
#[test]
fn mistakes_between_files_name_their_lines() {
    let study = Fixture::level();
    let operation = "ride.operation.yaml";
    study.replace(operation, "until: 60 m", "until: 600 m");
    study.replace(operation, "station: 10 m", "station: 0.5 m");
    study.replace(
        operation,
        "scenarios:",
        "zones:\n  - {name: trim, kind: eddy, from: 80 m, to: 90 m, peak_force: 6 kN, critical_speed: 10 m/s}\n  \
         - {name: back, kind: eddy, from: 30 m, to: 20 m, peak_force: 6 kN, critical_speed: 10 m/s}\nscenarios:",
    );
    let ran = study.run(&["check", "ride.study.yaml"]);
    ran.expect_status(2);
    for said in [
        "`until` 600 m lies beyond the end",
        "released at 0.5 m the train is not wholly on the track",
        "zone `trim` reaches to 80 m",
        "zone `back` runs backwards",
        "ride.operation.yaml:",
    ] {
        assert!(ran.err.contains(said), "expected {said:?} in {ran:?}");
    }
}

// ----------------------------------------------------------------------- export

#[test]
fn export_writes_one_file_a_case_and_seat() {
    let study = Fixture::valley();
    let ran = study.run(&["export", "ride.study.yaml", "-o", "out"]);
    ran.expect_status(0);
    let folder = study.path("out/as-drawn/full");
    let mut names: Vec<String> = fs::read_dir(&folder)
        .expect("the folder is there")
        .map(|entry| {
            entry
                .expect("an entry")
                .file_name()
                .into_string()
                .expect("plain")
        })
        .collect();
    names.sort();
    assert_eq!(
        names,
        [
            "car1-left.csv",
            "car1-right.csv",
            "car2-left.csv",
            "car2-right.csv"
        ]
    );
    let text = fs::read_to_string(folder.join("car1-left.csv")).expect("readable");
    assert_eq!(
        text.lines().next(),
        Some(
            "t_s,train_station_m,station_m,speed_m_s,accel_m_s2,x_m,y_m,z_m,felt_x_g,felt_y_g,felt_z_g,\
             filtered_1_x_g,filtered_1_y_g,filtered_1_z_g"
        )
    );
}

/// What is exported is what was judged: the largest felt load is that of the report.
#[test]
fn export_and_check_agree() {
    let study = Fixture::valley();
    let report = study
        .run(&["check", "ride.study.yaml", "--format", "json"])
        .json();
    study
        .run(&["export", "ride.study.yaml", "-o", "out"])
        .expect_status(0);
    let path = study.path("out/as-drawn/full/car1-left.csv");
    let mut table = csv::Reader::from_path(path).expect("readable");
    let column = table
        .headers()
        .expect("a header")
        .iter()
        .position(|h| h == "felt_z_g");
    let column = column.expect("the column");
    let largest = table
        .records()
        .map(|row| {
            row.expect("a row")[column]
                .parse::<f64>()
                .expect("a number")
        })
        .fold(f64::NEG_INFINITY, f64::max);
    let seat = &report["cases"][0]["seats"][0];
    assert_eq!(
        (seat["car"].as_u64(), seat["seat"].as_str()),
        (Some(1), Some("left"))
    );
    assert_near(&seat["felt_g"]["z"]["max"], largest, 1e-9);
}

#[test]
fn export_encodes_names_that_are_no_file_names() {
    let study = Fixture::level();
    study.replace("ride.study.yaml", "as-drawn:", "\"../as drawn\":");
    study
        .run(&["export", "ride.study.yaml", "-o", "out"])
        .expect_status(0);
    assert!(
        study
            .path("out/..%2Fas%20drawn/full/car1-left.csv")
            .is_file()
    );
}

#[cfg(unix)]
#[test]
fn exported_files_have_the_permissions_of_plain_files() {
    use std::os::unix::fs::PermissionsExt;
    let study = Fixture::level();
    study
        .run(&["export", "ride.study.yaml", "-o", "out"])
        .expect_status(0);
    let mode = |path: PathBuf| fs::metadata(path).expect("there").permissions().mode() & 0o777;
    assert_eq!(
        mode(study.path("out/as-drawn/full/car1-left.csv")),
        mode(study.path("ride.study.yaml"))
    );
}

#[test]
fn what_cannot_be_written_is_named_and_is_status_2() {
    let study = Fixture::level();
    study.write("taken", "a file where a folder should be");
    let ran = study.run(&["export", "ride.study.yaml", "-o", "taken"]);
    ran.expect_status(2);
    assert!(ran.err.contains("taken"), "{ran:?}");
}

// ---------------------------------------------------------------- standard output

#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_told() {
    let full = fs::OpenOptions::new()
        .write(true)
        .open("/dev/full")
        .expect("a device of Linux");
    let output = Fixture::level()
        .command(&["check", "ride.study.yaml"])
        .stdout(full)
        .output()
        .expect("the program starts");
    assert_eq!(output.status.code(), Some(2));
    assert!(
        String::from_utf8_lossy(&output.stderr).contains("standard output could not be written")
    );
}

#[test]
fn a_reader_that_goes_away_is_no_mistake() {
    let study = Fixture::valley();
    let mut child = study
        .command(&["check", "ride.study.yaml", "--format", "json"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    drop(child.stdout.take());
    let mut err = String::new();
    let mut stream = child.stderr.take().expect("piped");
    stream.read_to_string(&mut err).expect("text");
    let status = child.wait().expect("it ends");
    assert_eq!((status.code(), err.as_str()), (Some(1), ""));
}

// ---------------------------------------------------------------------- fixture

/// A study in a folder of its own.
struct Fixture {
    folder: TempDir,
}

/// What a command gave.
#[derive(Debug)]
struct Ran {
    status: Option<i32>,
    out: String,
    err: String,
}

impl Ran {
    #[track_caller]
    fn expect_status(&self, status: i32) -> &Self {
        assert_eq!(
            self.status,
            Some(status),
            "\nout:\n{}\nerr:\n{}",
            self.out,
            self.err
        );
        self
    }

    #[track_caller]
    fn json(&self) -> Value {
        serde_json::from_str(&self.out)
            .unwrap_or_else(|e| panic!("{e}\n{}\n{}", self.out, self.err))
    }
}

const STUDY: &str = "\
crestfall: 1
study: Little ride
variants:
  as-drawn: ride.track.yaml
train: ride.train.yaml
operation: ride.operation.yaml
envelopes: [ride.envelope.yaml]
";

const TRAIN: &str = "\
crestfall: 1
train: Two cars
cars:
  - count: 2
    length: 2.6 m
    axles: [0.4 m, 2.0 m]
    mass: 600 kg
    mass_centre: {forward: 0 m, left: 0 m, up: 0.4 m}
    seats:
      - {name: left, forward: 0.2 m, left: 0.45 m, up: 0.9 m, rider: 80 kg}
      - {name: right, forward: 0.2 m, right: 0.45 m, up: 0.9 m, rider: 80 kg}
";

const ENVELOPE: &str = "\
crestfall: 1
envelope: Invented
status: illustrative
source: {document: none, edition: none, note: Invented numbers}
gravity: included
filter: {butterworth: {poles: 4, corner: 5 Hz, passes: one}}
rules:
  - {id: z-down, kind: sustained, axis: z, sign: positive, limits: {0.2 s: 3.0, 4 s: 3.0, 12 s: 2.0}, between: linear, ignore_below: 0.1 s}
  - {id: y-left, kind: sustained, axis: y, sign: positive, limits: {0.2 s: 1.0}, between: linear, ignore_below: 0.1 s}
";

impl Fixture {
    /// A level track without resistance.
    fn level() -> Self {
        Self::new(
            "\
crestfall: 1
track: Level
start: {z: 10 m, heading: 90 deg}
elements:
  - {name: run, length: 70 m}
",
            "\
crestfall: 1
operation: Season
release: {station: 10 m, speed: 10 m/s}
until: 60 m
resistance:
  none: {running: 0, side: 0, drag_area: 0 m2}
air: {density: 1.2 kg/m3}
scenarios:
  full: {riders: all, resistance: none}
",
        )
    }

    /// A drop and a pull-out that is too sharp for the envelope.
    fn valley() -> Self {
        let study = Self::new(
            "\
crestfall: 1
track: Valley
start: {z: 30 m, heading: 90 deg}
elements:
  - {name: lead, length: 10 m}
  - {name: drop, radius: 15 m, grade_to: -45 deg}
  - {name: straight, length: 6 m}
  - {name: pull-out, radius: 9 m, grade_to: 0 deg}
  - {name: run-out, length: 40 m}
",
            "\
crestfall: 1
operation: Season
release: {station: 8 m, speed: 3 m/s}
resistance:
  warm: {running: 0.011, side: 0.02, drag_area: 3.4 m2}
air: {density: 1.2 kg/m3}
scenarios:
  full: {riders: all, resistance: warm}
  empty: {riders: none, resistance: warm}
",
        );
        study.replace(
            "ride.envelope.yaml",
            "limits: {0.2 s: 3.0,",
            "limits: {0.1 s: 3.0,",
        );
        study
    }

    fn new(track: &str, operation: &str) -> Self {
        let study = Self {
            folder: tempfile::tempdir().expect("a temporary folder"),
        };
        study.write("ride.study.yaml", STUDY);
        study.write("ride.track.yaml", track);
        study.write("ride.train.yaml", TRAIN);
        study.write("ride.operation.yaml", operation);
        study.write("ride.envelope.yaml", ENVELOPE);
        study
    }

    fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    fn write(&self, name: &str, text: &str) {
        fs::write(self.path(name), text).expect("writable");
    }

    /// Changes a file; what is changed must be there.
    #[track_caller]
    fn replace(&self, name: &str, from: &str, to: &str) {
        let text = fs::read_to_string(self.path(name)).expect("readable");
        assert!(text.contains(from), "{name} holds no {from:?}");
        self.write(name, &text.replace(from, to));
    }

    fn command(&self, arguments: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_crestfall"));
        command.current_dir(self.folder.path()).args(arguments);
        command
    }

    fn run(&self, arguments: &[&str]) -> Ran {
        let output = self
            .command(arguments)
            .output()
            .expect("the program starts");
        Ran {
            status: output.status.code(),
            out: String::from_utf8_lossy(&output.stdout).into_owned(),
            err: String::from_utf8_lossy(&output.stderr).into_owned(),
        }
    }
}

#[track_caller]
fn assert_near(found: &Value, expected: f64, tolerance: f64) {
    let number = found.as_f64().unwrap_or(f64::NAN);
    assert!(
        (number - expected).abs() <= tolerance,
        "found {found}, expected {expected}"
    );
}
