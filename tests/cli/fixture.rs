//! A study in a temporary folder, written from the test, and what the program says of it.

use std::fs;
use std::path::PathBuf;
use std::process::Command;

use serde_json::Value;
use tempfile::TempDir;

/// A study in a folder of its own.
pub(crate) struct Fixture {
    folder: TempDir,
}

/// What a command gave.
#[derive(Debug)]
pub(crate) struct Ran {
    pub(crate) status: Option<i32>,
    pub(crate) out: String,
    pub(crate) err: String,
}

impl Ran {
    #[track_caller]
    pub(crate) fn expect_status(&self, status: i32) -> &Self {
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
    pub(crate) fn json(&self) -> Value {
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
    pub(crate) fn level() -> Self {
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
    pub(crate) fn valley() -> Self {
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

    pub(crate) fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    pub(crate) fn write(&self, name: &str, text: &str) {
        fs::write(self.path(name), text).expect("writable");
    }

    /// Changes a file; what is changed must be there.
    #[track_caller]
    pub(crate) fn replace(&self, name: &str, from: &str, to: &str) {
        let text = fs::read_to_string(self.path(name)).expect("readable");
        assert!(text.contains(from), "{name} holds no {from:?}");
        self.write(name, &text.replace(from, to));
    }

    pub(crate) fn command(&self, arguments: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_crestfall"));
        command.current_dir(self.folder.path()).args(arguments);
        command
    }

    pub(crate) fn run(&self, arguments: &[&str]) -> Ran {
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
pub(crate) fn assert_near(found: &Value, expected: f64, tolerance: f64) {
    let number = found.as_f64().unwrap_or(f64::NAN);
    assert!(
        (number - expected).abs() <= tolerance,
        "found {found}, expected {expected}"
    );
}
