//! `crestfall export`.

use std::fs;
use std::path::PathBuf;

use crate::fixture::{Fixture, assert_near};

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
