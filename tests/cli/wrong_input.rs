//! What is wrong in files and arguments.

use crate::fixture::Fixture;

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
        "zones:\n  - {name: trim, kind: eddy, from: 80 m, to: 90 m, peak_force: 6 kN, critical_speed: 10 m/s}\nscenarios:",
    );
    let ran = study.run(&["check", "ride.study.yaml"]);
    ran.expect_status(2);
    for said in [
        "`until` 600 m lies beyond the end",
        "released at 0.5 m the train is not wholly on the track",
        "zone `trim` reaches to 80 m, off the track",
        "ride.operation.yaml:",
    ] {
        assert!(ran.err.contains(said), "expected {said:?} in {ran:?}");
    }
}
