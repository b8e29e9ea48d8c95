//! The example files of the design, and a whole study, read to the values they state.

use std::fs;
use std::path::{Path, PathBuf};

use crate::diagnostic::Diagnostic;
use crate::input::{
    Air, Change, Columns, Demand, Device, Ease, Extent, FileKind, Filter, Goal, Riders, RuleKind,
    Sign, Status, Study, TrackSource, read_envelope, read_study, read_track, schema,
};

const STUDY: &str = "\
crestfall: 1
study: Saltglass, drawing revision C
variants:
  as-drawn: as-drawn.track.yaml
  eased: {track: tracks/eased.track.yaml, train: six-car.train.yaml}
baseline: eased
train: six-car.train.yaml
operation: season.operation.yaml
envelopes: [family.envelope.yaml]
";

const ELEMENTS: &str = "\
crestfall: 1
track: Saltglass as drawn
start: {x: 0 m, y: 0 m, z: 38 m, heading: 90 deg, grade: 0 deg, bank: 0 deg}
elements:
  - {name: crest, length: 14 m}
  - {name: drop, radius: 18 m, grade_to: -52 deg, ease: smooth}
  - {name: turn, radius: 22 m, turn: 140 deg left, bank_to: 58 deg left, ease: {ramp: 0.3}}
";

const POINTS: &str = "\
crestfall: 1
track: Saltglass as built
points: {file: survey.csv, fit: exact}
landmarks:
  - {name: pull-out, from: 62 m, to: 80 m}
";

const SURVEY: &str = "\
# x east, y north
x_ft,y_ft,z_ft,bank_left_deg
0,0,0,0

1,0,0,0
2,0,0,0
3,0,0,90
4,0,0,0
5,0,0,0
";

const TRAIN: &str = "\
crestfall: 1
train: Six cars, two abreast, two rows
cars:
  - count: 6
    length: 2.6 m                    # nose to nose of the next car
    axles: [0.4 m, 2.0 m]            # behind the car's nose
    mass: 640 kg                     # empty
    mass_centre: {forward: 0 m, left: 0 m, up: 0.45 m}
    inertia: {roll: 180 kg m2, pitch: 420 kg m2, yaw: 430 kg m2}   # optional
    seats:
      - {name: front-left, forward: 0.5 m, left: 0.4 m, up: 0.9 m, rider: 80 kg, faces: forward, recline: 10 deg}
      - {name: front-right, forward: 0.5 m, right: 0.4 m, up: 0.9 m, rider: 80 kg, faces: backward}
rolling_mass: 25 kg                  # per axle: wheels' inertia over radius squared
axle_mass: 0 kg                      # optional, on the spine
";

const OPERATION: &str = "\
crestfall: 1
operation: Season
release: {station: 16 m, speed: 1.5 m/s}      # leading axle, at the lift crest
until: 560 m                                   # optional; or finish: {zone: final}
time_limit: 600 s                              # the default
resistance:
  warm: {running: 0.011, side: 0.02, bearings: 0.001, drag_area: 3.4 m2}
  cold: {running: 0.019, side: 0.03, drag_area: 3.4 m2}
air: {altitude: 210 m, temperature: 18 degC}   # or {density: 1.2 kg/m3}
zones:
  - {name: trim, kind: eddy, from: 320 m, to: 334 m, peak_force: 16 kN, critical_speed: 9 m/s}
  - {name: final, kind: clamp, from: 540 m, to: 575 m, force: 20 kN, release_speed: 0 m/s}
scenarios:
  warm-full: {riders: all, resistance: warm}
  cold-empty: {riders: none, resistance: cold, wind: {speed: 8 m/s, from: 180 deg}}
  no-trim: {riders: {seats: [1-front-left]}, resistance: warm, without: [trim], zones: {final: {force: 15 kN}}, air: {density: 1.1 kg/m3}, release: {speed: 2 m/s}}
grid:
  wind: [{name: calm}, {name: head, speed: 8 m/s, from: 180 deg}]
  riders: [all, front-half]
  resistance: [warm, cold]
";

const ENVELOPE: &str = "\
crestfall: 1
envelope: Illustrative family coaster
status: illustrative                 # illustrative | transcribed | project
source: {document: none, edition: none, note: Invented numbers for the demo; never use them for a ride}
gravity: included
filter: {butterworth: {poles: 4, corner: 5 Hz, passes: one}}
rules:
  - {id: z-down, kind: sustained, axis: z, sign: positive, limits: {0.2 s: 5.0, 1 s: 5.0, 4 s: 3.5, 12 s: 2.5}, between: linear, ignore_below: 0.2 s}
  - {id: z-least, kind: sustained, axis: z, floor: [[200 ms, 0.2], [1 s, 0.2], [1 s, 0.3]], between: log-time}
";

/// The example files in a folder that goes when this is dropped.
struct Folder(tempfile::TempDir);

impl Folder {
    fn new() -> Self {
        let folder = Self(tempfile::tempdir().expect("a temporary folder"));
        fs::create_dir(folder.path("tracks")).expect("a folder for tracks");
        for (name, text) in [
            ("saltglass.study.yaml", STUDY),
            ("as-drawn.track.yaml", ELEMENTS),
            ("tracks/eased.track.yaml", POINTS),
            ("tracks/survey.csv", SURVEY),
            ("six-car.train.yaml", TRAIN),
            ("season.operation.yaml", OPERATION),
            ("family.envelope.yaml", ENVELOPE),
        ] {
            folder.write(name, text);
        }
        folder
    }

    fn path(&self, name: &str) -> PathBuf {
        self.0.path().join(name)
    }

    fn write(&self, name: &str, text: &str) {
        fs::write(self.path(name), text).expect("a file is written");
    }

    fn study(&self) -> Result<Study, Vec<Diagnostic>> {
        read_study(&self.path("saltglass.study.yaml"))
    }

    fn good_study(&self) -> Study {
        self.study()
            .unwrap_or_else(|found| panic!("{}", drawn(&found)))
    }
}

fn drawn(found: &[Diagnostic]) -> String {
    found.iter().map(|d| d.render(false)).collect()
}

fn assert_near(found: f64, expected: f64) {
    assert!(
        (found - expected).abs() <= 1e-12 * expected.abs(),
        "{found} is not {expected}"
    );
}

#[test]
fn a_study_holds_its_variants_and_lists_its_files_once() {
    let study = Folder::new().good_study();
    assert_eq!(study.name, "Saltglass, drawing revision C");
    assert_eq!(study.baseline, 1);
    assert_eq!(study.variants.len(), 2);
    assert_eq!((study.gravity_m_s2, study.rate_hz), (9.806_65, 500.0));
    let names: Vec<&str> = study.files.iter().map(|file| file.name.as_str()).collect();
    let expected = [
        "saltglass.study.yaml",
        "as-drawn.track.yaml",
        "six-car.train.yaml",
        "tracks/eased.track.yaml",
        "tracks/survey.csv",
        "season.operation.yaml",
        "family.envelope.yaml",
    ];
    assert_eq!(names, expected);
}

#[test]
fn published_hash_of_a_file() {
    // FIPS 180-2, appendix B.1: SHA-256 of "abc".
    let folder = Folder::new();
    folder.write("abc", "abc");
    let mut files = crate::input::files::Files::beside(&folder.path("saltglass.study.yaml"));
    let named = crate::input::files::Named::outright(&folder.path("abc"));
    files.read(&named, 10).expect("the file is text");
    let list = files.into_list();
    assert_eq!(list[0].name, "abc");
    assert_eq!(
        list[0].sha256,
        "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    );
}

#[test]
fn elements_hold_what_they_change() {
    let study = Folder::new().good_study();
    let TrackSource::Elements(track) = &study.variants[0].track.source else {
        panic!("as-drawn is made of elements");
    };
    assert_eq!(track.start.z_m, 38.0);
    assert_near(track.start.bearing_rad, 90_f64.to_radians());
    let [crest, drop, turn] = &track.elements[..] else {
        panic!("three elements");
    };
    assert_eq!(crest.extent, Extent::Length(14.0));
    assert_eq!(drop.extent, Extent::SmallestRadius(18.0));
    assert_eq!(drop.grade, Some(Change::To((-52_f64).to_radians())));
    assert_near(turn.turn_left_rad, 140_f64.to_radians());
    assert_eq!(turn.bank, Some(Change::To(58_f64.to_radians())));
    assert_eq!(
        (turn.ease, turn.bank_ease),
        (Ease::Ramp(0.3), Ease::Ramp(0.3))
    );
}

#[test]
fn points_are_in_metres_and_know_their_lines() {
    let study = Folder::new().good_study();
    let track = &study.variants[1].track;
    let TrackSource::Points(table) = &track.source else {
        panic!("eased is made of points");
    };
    let Columns::Bank {
        centre_m,
        bank_left_rad,
    } = &table.columns
    else {
        panic!("the table has a bank column");
    };
    assert_eq!(table.len(), 6);
    assert_near(centre_m[5].x, 5.0 * 0.3048);
    assert_near(bank_left_rad[3], 90_f64.to_radians());
    assert_eq!(table.row_place(1).line_column(), (5, 1));
    assert_eq!(
        (track.landmarks[0].from_m, track.landmarks[0].to_m),
        (62.0, 80.0)
    );
}

#[test]
fn a_train_is_written_out_car_by_car() {
    let study = Folder::new().good_study();
    let train = &study.variants[0].train;
    assert_eq!(
        (train.cars.len(), train.rolling_mass_kg, train.axle_mass_kg),
        (6, 25.0, 0.0)
    );
    let car = &train.cars[5];
    assert_eq!(
        (car.length_m, car.axles_m, car.mass_kg),
        (2.6, [0.4, 2.0], 640.0)
    );
    assert_eq!(car.inertia.map(|inertia| inertia.pitch_kg_m2), Some(420.0));
    let [left, right] = &car.seats[..] else {
        panic!("two seats");
    };
    assert_eq!((left.position_m.y, right.position_m.y), (0.4, -0.4));
    assert_near(left.recline_rad, 10_f64.to_radians());
    assert_near(right.faces_left_rad, std::f64::consts::PI);
}

#[test]
fn scenarios_have_nothing_left_to_look_up() {
    let operation = Folder::new().good_study().operation;
    assert!(matches!(
        operation.goal,
        Goal::Until {
            station_m: 560.0,
            ..
        }
    ));
    assert_eq!(operation.time_limit_s, 600.0);
    let [full, empty, no_trim] = &operation.scenarios[..3] else {
        panic!("three scenarios");
    };
    assert_eq!(
        (full.resistance.bearings, empty.resistance.bearings),
        (0.001, 0.0)
    );
    let air = Air::Altitude {
        altitude_m: 210.0,
        temperature_k: Some(291.15),
    };
    assert_eq!(full.air, air);
    assert_eq!(empty.wind.map(|wind| wind.speed_m_s), Some(8.0));
    assert_eq!(no_trim.air, Air::Density(1.1));
    assert_eq!(
        (no_trim.release.station_m, no_trim.release.speed_m_s),
        (16.0, 2.0)
    );
    let device = Device::Clamp {
        force_n: 15_000.0,
        release_speed_m_s: 0.0,
    };
    assert_eq!((no_trim.zones.len(), no_trim.zones[0].device), (1, device));
    let Riders::Seats(seats) = &no_trim.riders else {
        panic!("seats are named");
    };
    assert_eq!((seats[0].car, seats[0].seat.as_str()), (1, "front-left"));
}

#[test]
fn a_grid_is_written_out_in_written_order() {
    let operation = Folder::new().good_study().operation;
    let names: Vec<&str> = operation.scenarios[3..]
        .iter()
        .map(|s| s.name.as_str())
        .collect();
    let expected = [
        "calm+all+warm",
        "calm+all+cold",
        "calm+front-half+warm",
        "calm+front-half+cold",
        "head+all+warm",
        "head+all+cold",
        "head+front-half+warm",
        "head+front-half+cold",
    ];
    assert_eq!(names, expected);
    assert!(operation.scenarios[3].wind.is_none());
    assert!(operation.scenarios[10].wind.is_some());
    assert!(matches!(operation.scenarios[10].riders, Riders::FrontHalf));
}

#[test]
fn an_envelope_holds_its_curves_as_written() {
    let folder = Folder::new();
    let envelope = read_envelope(&folder.path("family.envelope.yaml")).expect("a good envelope");
    assert_eq!(envelope.status, Status::Illustrative);
    assert_eq!(envelope.source.edition, "none");
    assert_eq!(
        envelope.filter,
        Filter::Butterworth {
            poles: 4,
            corner_hz: 5.0
        }
    );
    let RuleKind::Sustained(down) = &envelope.rules[0].kind else {
        panic!("a sustained rule");
    };
    assert_eq!(down.demand, Demand::Limit(Sign::Positive));
    assert_eq!(
        down.curve,
        [(0.2, 5.0), (1.0, 5.0), (4.0, 3.5), (12.0, 2.5)]
    );
    assert_eq!(down.ignore_below_s, 0.2);
    let RuleKind::Sustained(least) = &envelope.rules[1].kind else {
        panic!("a sustained rule");
    };
    assert_eq!(least.demand, Demand::Floor);
    assert_eq!(least.curve, [(0.2, 0.2), (1.0, 0.2), (1.0, 0.3)]);
}

#[test]
fn the_composite_study_is_read() {
    let study = Path::new("tests/reference/composite/study.study.yaml");
    let study = read_study(study).unwrap_or_else(|found| panic!("{}", drawn(&found)));
    assert_eq!(study.variants[0].train.cars.len(), 3);
    assert_eq!(study.files.len(), 6);
    assert_eq!(study.envelopes[0].rules.len(), 4);
    assert!(read_track(Path::new("tests/reference/composite/track.track.yaml")).is_ok());
}

#[test]
fn all_mistakes_of_all_files_come_at_once() {
    let folder = Folder::new();
    folder.write("six-car.train.yaml", &TRAIN.replace("640 kg", "640 m"));
    folder.write(
        "season.operation.yaml",
        &OPERATION
            .replace("0.011", "-0.011")
            .replace("running: 0.019", "runing: 0.019"),
    );
    folder.write(
        "family.envelope.yaml",
        &ENVELOPE.replace("4 s: 3.5", "4 s: 5.5"),
    );
    let found = folder.study().expect_err("four mistakes");
    let messages: Vec<&str> = found.iter().map(|d| d.message.as_str()).collect();
    let expected = [
        "`m` is not a unit of mass, expected one of `kg`, `t`, `lb`",
        "found `-0.011`, expected a coefficient of 0 or above",
        "missing key `running`",
        "unknown key `runing`",
        "found a limit of `5.5` g after `5` g, expected one that does not rise with duration",
    ];
    assert_eq!(messages, expected);
    assert_eq!(found[0].line_column(), Some((7, 11)));
    assert_eq!(found[0].key.as_deref(), Some("cars[0].mass"));
}

#[test]
fn a_diagnostic_is_drawn_with_its_line_key_and_hint() {
    let folder = Folder::new();
    folder.write(
        "six-car.train.yaml",
        &TRAIN.replace("mass: 640 kg ", "mass: 640    "),
    );
    let found = folder.study().expect_err("one mistake");
    let path = folder.path("six-car.train.yaml");
    let expected = format!(
        "error: `640` has no unit, expected a mass
 --> {}:7:11
  |
7 |     mass: 640                        # empty
  |           ^^^
  |
  = key: cars[0].mass
  = hint: write `640 kg`
",
        path.display()
    );
    assert_eq!(found[0].render(false), expected);
}

#[test]
fn schemas_refuse_unknown_keys_and_know_what_is_required() {
    let train = schema(FileKind::Train);
    assert_eq!(train["additionalProperties"], false);
    assert_eq!(
        train["required"],
        serde_json::json!(["crestfall", "train", "cars"])
    );
    let car = &train["$defs"]["car"];
    assert_eq!(car["properties"]["mass"]["description"], "Empty.");
    let kinds = [
        FileKind::Study,
        FileKind::Track,
        FileKind::Operation,
        FileKind::Envelope,
    ];
    for kind in kinds {
        let schema = schema(kind);
        assert_eq!(schema["additionalProperties"], false, "{kind:?}");
        assert!(
            !schema.to_string().contains("ater"),
            "{kind:?}: keys not built are left out"
        );
    }
}

#[test]
fn files_are_named_from_the_study_and_never_absolutely() {
    let folder = Folder::new();
    fs::create_dir(folder.path("deep")).expect("a folder for the study");
    let absolute = folder.path("family.envelope.yaml");
    let study = STUDY
        .replace("as-drawn.track", "../as-drawn.track")
        .replace("tracks/eased", ".././tracks/eased")
        .replace("six-car", "../six-car")
        .replace("season", "../tracks/../season")
        .replace("family.envelope.yaml", &absolute.display().to_string());
    folder.write("deep/saltglass.study.yaml", &study);
    let study = read_study(&folder.path("deep/saltglass.study.yaml"));
    let study = study.unwrap_or_else(|found| panic!("{}", drawn(&found)));
    let names: Vec<&str> = study.files.iter().map(|file| file.name.as_str()).collect();
    let expected = [
        "saltglass.study.yaml",
        "../as-drawn.track.yaml",
        "../six-car.train.yaml",
        "../tracks/eased.track.yaml",
        "../tracks/survey.csv",
        "../season.operation.yaml",
        "../family.envelope.yaml",
    ];
    assert_eq!(names, expected);
}

#[test]
fn names_keep_their_own_text() {
    let folder = Folder::new();
    let train = TRAIN.replace("Six cars, two abreast, two rows", "1.10");
    folder.write(
        "six-car.train.yaml",
        &train.replace("name: front-right", "name: no"),
    );
    let train = folder.good_study().variants[0].train.clone();
    assert_eq!(train.name, "1.10");
    assert_eq!(train.cars[0].seats[1].name, "no");
}

#[test]
fn a_byte_order_mark_and_windows_line_ends_change_nothing() {
    let folder = Folder::new();
    let train = format!("\u{feff}{}", TRAIN.replace('\n', "\r\n"));
    folder.write("six-car.train.yaml", &train);
    folder.write(
        "tracks/survey.csv",
        &format!("\u{feff}{}", SURVEY.replace('\n', "\r\n")),
    );
    let study = folder.good_study();
    assert_eq!(study.variants[0].train.cars.len(), 6);
    assert_eq!(study.variants[0].train.cars[0].place.line_column(), (4, 5));
}
