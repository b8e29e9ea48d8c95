//! The JSON Schemas: what is shipped is accepted, what is wrong by its form is refused.
//!
//! `wrong-by.txt` says of every bad input what it is wrong by: `form` (the schema refuses it), `meaning` (only
//! the reader can tell; the schema accepts it) or `text` (no YAML, or YAML that is read more widely by others).

use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::{Path, PathBuf};

use crestfall::input::{FileKind, schema};
use jsonschema::Validator;
use serde_json::Value;
use serde_yaml::Value as Yaml;

const KINDS: [(&str, FileKind); 5] = [
    ("study", FileKind::Study),
    ("track", FileKind::Track),
    ("train", FileKind::Train),
    ("operation", FileKind::Operation),
    ("envelope", FileKind::Envelope),
];

/// Folders of good files, searched to the bottom.
const SHIPPED: [&str; 5] = [
    "demo-tracks",
    "envelopes",
    "src/cli/new",
    "tests/cli/bad-input/good",
    "tests/reference",
];

/// Folders of bad files, with the kind of file that each holds.
const BAD: [(&str, &str); 6] = [
    ("study", "study"),
    ("elements", "track"),
    ("points", "track"),
    ("train", "train"),
    ("operation", "operation"),
    ("envelope", "envelope"),
];

#[test]
fn schemas_are_schemas_and_describe_every_key() {
    for (name, kind) in KINDS {
        let schema = schema(kind);
        assert_eq!(schema["title"], name);
        jsonschema::draft202012::meta::validate(&schema).unwrap_or_else(|e| panic!("{name}: {e}"));
        let mut without = Vec::new();
        let keys = undescribed(&schema, name, &mut without);
        assert!(keys >= 6, "{name}: only {keys} keys");
        assert!(without.is_empty(), "without a description: {without:?}");
        let line = format!("`# yaml-language-server: $schema={name}.schema.json`");
        let text = schema["description"].as_str().expect("a description");
        assert!(text.contains(&line), "{text}");
    }
}

#[test]
fn what_is_shipped_is_accepted() {
    let validators = validators();
    let mut kinds = BTreeMap::<String, usize>::new();
    for folder in SHIPPED {
        for file in files(&root().join(folder)) {
            let Some(kind) = kind_of(&file) else { continue };
            let document = read(&file).unwrap_or_else(|e| panic!("{}: {e}", file.display()));
            if let Err(error) = validators[kind.as_str()].validate(&document) {
                panic!("{}: {}: {error}", file.display(), error.instance_path());
            }
            *kinds.entry(kind).or_default() += 1;
        }
    }
    for (name, _) in KINDS {
        assert!(kinds.get(name) >= Some(&3), "{name}: {kinds:?}");
    }
}

#[test]
fn bad_input_is_refused_where_its_form_is_wrong() {
    let marks = marks();
    let validators = validators();
    let (mut wrong, mut seen) = (Vec::new(), BTreeSet::new());
    for (folder, kind) in BAD {
        for file in files(&root().join("tests/cli/bad-input").join(folder)) {
            if file.extension().is_none_or(|end| end != "yaml") {
                continue;
            }
            let name = format!("{folder}/{}", file_name(&file));
            let accepted = read(&file).map(|document| validators[kind].is_valid(&document));
            let fits = match (marks.get(&name).map(String::as_str), accepted) {
                (None, _) => Err("has no mark: decide what it is wrong by"),
                (Some("form"), Ok(true)) => Err("is accepted, expected a refusal of its form"),
                (Some("form"), Err(_)) => Err("is no YAML, so its form cannot be judged"),
                (Some("meaning"), Ok(false)) => Err("is refused, so it is wrong by its form"),
                (Some("meaning"), Err(_)) => Err("is no YAML, so its meaning cannot be judged"),
                (Some("text"), Ok(false)) => Err("is refused, so it is wrong by its form"),
                (Some("form" | "meaning" | "text"), _) => Ok(()),
                _ => Err("has a mark that is not `form`, `meaning` or `text`"),
            };
            wrong.extend(fits.err().map(|why| format!("{name} {why}\n")));
            seen.insert(name);
        }
    }
    let unused = marks.keys().filter(|name| !seen.contains(*name));
    wrong.extend(unused.map(|name| format!("{name} is marked but not there\n")));
    assert!(wrong.is_empty(), "wrong-by.txt:\n{}", wrong.concat());
    let refused = marks.values().filter(|mark| *mark == "form").count();
    assert!(refused >= 90, "only {refused} files are wrong by form");
}

/// Marks of `wrong-by.txt`: a mark and a file a line.
fn marks() -> BTreeMap<String, String> {
    let text = fs::read_to_string(root().join("tests/cli/wrong-by.txt")).expect("readable");
    let lines = text.lines().filter(|line| !line.starts_with('#'));
    let pair = |line: &str| {
        let (mark, name) = line.split_once(' ').expect("a mark and a file");
        (name.trim().to_owned(), mark.to_owned())
    };
    lines.map(pair).collect()
}

fn validators() -> BTreeMap<&'static str, Validator> {
    let made = |kind| jsonschema::draft202012::new(&schema(kind)).expect("a schema");
    KINDS.map(|(name, kind)| (name, made(kind))).into()
}

/// A YAML file as an editor sees it.
fn read(file: &Path) -> Result<Value, String> {
    let bytes = fs::read(file).map_err(|e| e.to_string())?;
    let mut document: Yaml = serde_yaml::from_slice(&bytes).map_err(|e| e.to_string())?;
    document.apply_merge().map_err(|e| e.to_string())?;
    match is_json(&document) {
        true => serde_json::to_value(document).map_err(|e| e.to_string()),
        false => Err("no JSON".to_owned()),
    }
}

/// JSON has neither tags nor numbers that are not finite.
fn is_json(value: &Yaml) -> bool {
    match value {
        Yaml::Number(number) => number.as_f64().is_some_and(f64::is_finite),
        Yaml::Sequence(items) => items.iter().all(is_json),
        Yaml::Mapping(entries) => entries.values().all(is_json),
        Yaml::Tagged(_) => false,
        _ => true,
    }
}

/// `track` of `first.track.yaml`, also where the file is named for its kind alone.
fn kind_of(file: &Path) -> Option<String> {
    let name = file_name(file);
    let stem = name.strip_suffix(".yaml")?;
    Some(stem.rsplit('.').next().unwrap_or(stem).to_owned())
}

fn file_name(file: &Path) -> String {
    let name = file.file_name().expect("a listed file has a name");
    name.to_string_lossy().into_owned()
}

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

/// All files below a folder, in order.
fn files(folder: &Path) -> Vec<PathBuf> {
    let Ok(entries) = fs::read_dir(folder) else {
        return Vec::new();
    };
    let mut paths: Vec<PathBuf> = entries.map(|e| e.expect("an entry").path()).collect();
    paths.sort();
    let below = |path: PathBuf| match path.is_dir() {
        true => files(&path),
        false => vec![path],
    };
    paths.into_iter().flat_map(below).collect()
}

/// Counts the keys below a part of a schema and collects those without a description.
fn undescribed(part: &Value, path: &str, without: &mut Vec<String>) -> usize {
    let mut count = 0;
    match part {
        Value::Object(entries) => {
            // Conditions name keys of the same object again.
            for (key, value) in entries
                .iter()
                .filter(|(key, _)| !CONDITIONS.contains(&key.as_str()))
            {
                let path = format!("{path}.{key}");
                if key == "properties" {
                    for (name, value) in value.as_object().expect("keys") {
                        count += 1;
                        if value["description"].as_str().is_none_or(str::is_empty) {
                            without.push(format!("{path}.{name}"));
                        }
                    }
                }
                count += undescribed(value, &path, without);
            }
        }
        Value::Array(items) => {
            for item in items {
                count += undescribed(item, path, without);
            }
        }
        _ => {}
    }
    count
}

const CONDITIONS: [&str; 3] = ["allOf", "if", "then"];
