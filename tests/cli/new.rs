//! `crestfall new`, `schema` and `completions`.

use std::collections::BTreeSet;
use std::fs;

use serde_json::Value;

use crate::fixture::Fixture;

const NAMES: [&str; 5] = [
    "illustrative.envelope.yaml",
    "ride.operation.yaml",
    "ride.study.yaml",
    "ride.track.yaml",
    "ride.train.yaml",
];

/// It says what to type next, and that shows what the files say it shows: the pull-out and nothing else.
#[test]
fn a_new_study_teaches_by_its_one_place() {
    let study = Fixture::level();
    let ran = study.run(&["new", "my ride/first"]);
    ran.expect_status(0);
    let mut names: Vec<String> = fs::read_dir(study.path("my ride/first"))
        .expect("a folder")
        .map(|entry| {
            entry
                .expect("an entry")
                .file_name()
                .into_string()
                .expect("plain")
        })
        .collect();
    names.sort();
    assert_eq!(names, NAMES);
    assert!(
        ran.out
            .ends_with("crestfall check 'my ride/first/ride.study.yaml'\n"),
        "{ran:?}"
    );
    let check = ["check", "my ride/first/ride.study.yaml", "--format", "json"];
    let report = study.run(&check).expect_status(1).json();
    assert_eq!(report["outcome"], "outside");
    let landmarks: BTreeSet<&str> = report["findings"]
        .as_array()
        .expect("a list")
        .iter()
        .filter_map(|finding| finding["landmark"].as_str())
        .collect();
    assert_eq!(landmarks, BTreeSet::from(["pull-out"]));
    study.replace(
        "my ride/first/ride.track.yaml",
        "pull-out, radius: 10 m, grade_to: 0 deg}   # 16 m brings it inside",
        "pull-out, radius: 16 m, grade_to: 0 deg}   # 16 m brings it inside",
    );
    let report = study.run(&check).expect_status(0).json();
    assert_eq!(report["outcome"], "inside");
    assert_eq!(report["findings"], Value::Array(Vec::new()));
}

#[test]
fn a_new_study_overwrites_nothing() {
    let study = Fixture::level();
    study.write("ride.train.yaml", "mine");
    fs::remove_file(study.path("ride.study.yaml")).expect("removable");
    let ran = study.run(&["new", "."]);
    ran.expect_status(2);
    for name in ["ride.track.yaml", "ride.train.yaml", "ride.operation.yaml"] {
        assert!(ran.err.contains(name), "{ran:?}");
    }
    let kept = fs::read_to_string(study.path("ride.train.yaml")).expect("there");
    assert_eq!(kept, "mine");
    assert!(
        !study.path("ride.study.yaml").exists(),
        "nothing is written"
    );
    assert!(!study.path("illustrative.envelope.yaml").exists());
}

#[test]
fn the_schema_printed_is_the_one_of_the_library() {
    let study = Fixture::level();
    for (name, kind) in [
        ("study", crestfall::input::FileKind::Study),
        ("envelope", crestfall::input::FileKind::Envelope),
    ] {
        let ran = study.run(&["schema", name]);
        assert_eq!(ran.expect_status(0).json(), crestfall::input::schema(kind));
    }
    let help = study.run(&["schema", "--help"]).out;
    assert!(
        help.contains("# yaml-language-server: $schema=track.schema.json"),
        "{help}"
    );
    assert!(
        help.contains("crestfall schema track > track.schema.json"),
        "{help}"
    );
}

#[test]
fn completions_know_every_command() {
    let study = Fixture::level();
    for shell in ["bash", "zsh", "fish", "elvish", "powershell"] {
        let ran = study.run(&["completions", shell]);
        ran.expect_status(0);
        for word in [
            "check",
            "export",
            "new",
            "schema",
            "completions",
            "scenario",
        ] {
            assert!(ran.out.contains(word), "{shell} lacks {word}");
        }
    }
    let ran = study.run(&["completions", "cmd"]);
    ran.expect_status(2);
    assert!(
        ran.err.contains("bash") && ran.err.contains("fish"),
        "{ran:?}"
    );
}
