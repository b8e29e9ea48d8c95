//! Which stage may use which: every `crate::…` in `src` is held against the table of DEVELOPERS.md.
#![allow(missing_docs, clippy::unwrap_used)]

use std::collections::{BTreeMap, BTreeSet};
use std::path::Path;

/// What each stage may use besides itself.
const MAY_USE: [(&str, &[&str]); 10] = [
    ("numerics", &[]),
    ("diagnostic", &[]),
    ("input", &["diagnostic"]),
    ("spine", &["numerics", "diagnostic", "input"]),
    ("train", &["spine", "numerics", "diagnostic", "input"]),
    ("motion", &["train", "spine", "numerics", "input"]),
    ("loads", &["motion", "train", "numerics", "input"]),
    ("envelope", &["loads", "numerics", "diagnostic", "input"]),
    (
        "study",
        &[
            "envelope",
            "loads",
            "motion",
            "train",
            "spine",
            "numerics",
            "diagnostic",
            "input",
        ],
    ),
    (
        "report",
        &["study", "envelope", "motion", "input", "loads", "spine"],
    ),
];

/// What a stage may take from `input`, where it may not know all of it.
const NARROW: [(&str, &[&str]); 2] = [
    ("loads", &["Filter", "GravityTerm", "Seat"]),
    (
        "motion",
        &[
            "Air",
            "Car",
            "Device",
            "Goal",
            "Resistance",
            "Riders",
            "Scenario",
            "Train",
            "Wind",
            "Zone",
        ],
    ),
];

#[test]
fn stages_use_only_what_they_may() {
    let may = BTreeMap::from(MAY_USE);
    for (stage, used) in uses() {
        let Some(allowed) = may.get(stage.as_str()) else {
            panic!("`{stage}` is no stage of the table");
        };
        for other in &used {
            assert!(
                *other == stage || allowed.contains(&other.as_str()),
                "`{stage}` uses `{other}`, allowed are {allowed:?}"
            );
        }
    }
}

#[test]
fn stages_take_only_what_they_need_from_input() {
    for (stage, allowed) in NARROW {
        for name in input_names(stage) {
            assert!(
                allowed.contains(&name.as_str()),
                "`{stage}` takes `input::{name}`"
            );
        }
    }
}

#[test]
fn only_input_opens_files_and_only_the_command_line_prints() {
    for (path, text) in sources(&root()) {
        let stage = stage_of(&path);
        let opens = text.contains("std::fs") || text.contains("File::open");
        assert!(
            !opens || ["input", "cli"].contains(&stage.as_str()),
            "{path} opens files"
        );
        let prints = [
            "println!(",
            "print!(",
            "eprint!(",
            "eprintln!(",
            "stdout()",
            "stderr()",
        ];
        let prints = prints.iter().any(|p| text.contains(p));
        assert!(
            !prints || ["cli", "main"].contains(&stage.as_str()),
            "{path} prints"
        );
    }
}

/// The stages each stage names.
fn uses() -> BTreeMap<String, BTreeSet<String>> {
    let mut uses = BTreeMap::<String, BTreeSet<String>>::new();
    for (path, text) in sources(&root()) {
        let stage = stage_of(&path);
        if ["lib", "main", "cli"].contains(&stage.as_str()) {
            continue;
        }
        let used = uses.entry(stage).or_default();
        for rest in code(&text).split("crate::").skip(1) {
            let name = rest
                .split(|c: char| !c.is_alphanumeric() && c != '_')
                .next()
                .unwrap();
            if name.starts_with(|c: char| c.is_lowercase()) {
                used.insert(name.to_owned());
            }
        }
    }
    assert!(uses.len() >= 9, "the sources were not found");
    uses
}

/// The names a stage takes from `input`.
fn input_names(stage: &str) -> BTreeSet<String> {
    let mut names = BTreeSet::new();
    for (path, text) in sources(&root()) {
        if stage_of(&path) != stage {
            continue;
        }
        for rest in code(&text).split("crate::input::").skip(1) {
            let list = rest.split(';').next().unwrap();
            let words = list.split(|c: char| !c.is_alphanumeric() && c != '_');
            names.extend(
                words
                    .filter(|w| w.starts_with(char::is_uppercase))
                    .map(str::to_owned),
            );
        }
    }
    names
}

/// Without comments and tests.
fn code(text: &str) -> String {
    let text = text.split("#[cfg(test)]").next().unwrap();
    let lines = text.lines().map(|line| line.split("//").next().unwrap());
    lines.collect::<Vec<_>>().join("\n")
}

fn root() -> std::path::PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("src")
}

/// Folder or file below `src`.
fn stage_of(path: &str) -> String {
    let below = path.split("src/").last().unwrap();
    below.split(['/', '.']).next().unwrap().to_owned()
}

/// Every source file with its text.
fn sources(folder: &Path) -> Vec<(String, String)> {
    let mut found = Vec::new();
    for entry in std::fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            found.extend(sources(&path));
        } else if path.extension().is_some_and(|e| e == "rs") {
            let text = std::fs::read_to_string(&path).unwrap();
            found.push((path.to_string_lossy().replace('\\', "/"), text));
        }
    }
    found
}
