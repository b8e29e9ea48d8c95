//! Wrong input: each file of `bad-input` takes the place of its namesake in a good
//! study, and says at its top which mistakes must be found, with line and column.
//!
//! A new case is a new file. Where a comment cannot stand in the file itself
//! (binary, empty), the lines stand beside it in a file that ends in `.expect`.

use std::fs;
use std::path::{Path, PathBuf};

use crestfall::diagnostic::Diagnostic;
use crestfall::input::read_study;
use crestfall::study::{Plan, Selection};
use proptest::prelude::*;

const STUDY: &str = "ride.study.yaml";

#[test]
fn every_bad_file_is_refused_in_the_words_it_expects() {
    let (mut cases, mut wrong) = (0, Vec::new());
    for case in all_cases() {
        cases += 1;
        let (expected, found) = (case.expected(), case.found());
        if expected.is_empty() || expected != found {
            wrong.push(case.difference(&expected, &found));
        }
    }
    assert!(cases >= 70, "only {cases} cases were walked");
    assert!(wrong.is_empty(), "{}", wrong.concat());
}

#[test]
fn the_good_study_is_read() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    copy_good(folder.path());
    let read = read_and_plan(&folder.path().join(STUDY));
    let found = read.err().unwrap_or_default();
    let drawn: String = found.iter().map(|d| d.render(false)).collect();
    assert!(drawn.is_empty(), "{drawn}");
}

/// All that is looked at before the first train runs: each file, then the files together.
fn read_and_plan(study: &Path) -> Result<(), Vec<Diagnostic>> {
    let study = read_study(study)?;
    Plan::new(&study, &Selection::default()).map(drop)
}

/// A bad file and the name it takes in the study.
struct Case {
    file: PathBuf,
    takes: &'static str,
}

/// The folders of bad files, each with the good file that they take the place of.
const FOLDERS: [(&str, &str); 7] = [
    ("study", STUDY),
    ("elements", "drawn.track.yaml"),
    ("points", "surveyed.track.yaml"),
    ("table", "survey.csv"),
    ("train", "train.train.yaml"),
    ("operation", "operation.operation.yaml"),
    ("envelope", "family.envelope.yaml"),
];

fn all_cases() -> Vec<Case> {
    let mut cases = Vec::new();
    for (folder, takes) in FOLDERS {
        let mut files = listed(&root().join(folder));
        files.retain(|file| file.extension().is_none_or(|end| end != "expect"));
        cases.extend(files.into_iter().map(|file| Case { file, takes }));
    }
    cases
}

impl Case {
    /// Lines `LINE:COLUMN MESSAGE`, in order.
    fn expected(&self) -> Vec<String> {
        let beside = self.file.with_extension("expect");
        let lines = match fs::read_to_string(&beside) {
            Ok(lines) => lines,
            Err(_) => fs::read_to_string(&self.file).expect("a case without `.expect` is text"),
        };
        let errors = lines
            .lines()
            .map_while(|line| line.strip_prefix("# error: "));
        errors.map(str::to_owned).collect()
    }

    /// The same lines, of what is really said.
    fn found(&self) -> Vec<String> {
        let folder = tempfile::tempdir().expect("a temporary folder");
        copy_good(folder.path());
        fs::copy(&self.file, folder.path().join(self.takes)).expect("the bad file is copied");
        match read_and_plan(&folder.path().join(STUDY)) {
            Ok(()) => vec!["nothing was found wrong".to_owned()],
            Err(found) => found.iter().map(|d| self.line(d, folder.path())).collect(),
        }
    }

    fn line(&self, diagnostic: &Diagnostic, folder: &Path) -> String {
        let prefix = format!("{}/", folder.display());
        let message = diagnostic.message.replace(&prefix, "");
        let message = message.replace(prefix.trim_end_matches('/'), ".");
        let drawn = diagnostic.render(false);
        assert!(drawn.contains(&diagnostic.message), "{drawn}");
        let Some(place) = &diagnostic.place else {
            return format!("- {message}");
        };
        let (line, column) = place.line_column();
        match place.source.name.replace(&prefix, "") {
            name if name == self.takes => format!("{line}:{column} {message}"),
            name => format!("{name}:{line}:{column} {message}"),
        }
    }

    fn difference(&self, expected: &[String], found: &[String]) -> String {
        format!(
            "\n{}\n  expected:\n    {}\n  found:\n    {}\n",
            self.file.display(),
            expected.join("\n    "),
            found.join("\n    ")
        )
    }
}

fn root() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/cli/bad-input")
}

fn listed(folder: &Path) -> Vec<PathBuf> {
    let entries = fs::read_dir(folder).unwrap_or_else(|e| panic!("{}: {e}", folder.display()));
    let mut files: Vec<PathBuf> = entries
        .map(|entry| entry.expect("an entry").path())
        .collect();
    files.sort();
    files
}

fn copy_good(to: &Path) {
    for file in listed(&root().join("good")) {
        let name = file.file_name().expect("a listed file has a name");
        fs::copy(&file, to.join(name)).expect("a good file is copied");
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 200, failure_persistence: None, ..ProptestConfig::default() })]

    /// However a good file is damaged, reading ends, and what it says can be drawn.
    #[test]
    fn damaged_files_are_read_or_refused(
        file in 0..FOLDERS.len(),
        damages in prop::collection::vec((any::<prop::sample::Index>(), 0..4_u8, "[\\PC\n\t]{0,3}"), 1..4),
    ) {
        let folder = tempfile::tempdir().expect("a temporary folder");
        copy_good(folder.path());
        let path = folder.path().join(FOLDERS[file].1);
        let mut text: Vec<char> = fs::read_to_string(&path).expect("good files are text").chars().collect();
        for (place, kind, other) in damages {
            let at = place.index(text.len() + 1);
            damage(&mut text, at, kind, &other);
        }
        fs::write(&path, text.iter().collect::<String>()).expect("the damaged file is written");
        if let Err(found) = read_and_plan(&folder.path().join(STUDY)) {
            prop_assert!(!found.is_empty(), "refused without a word: {}", text.iter().collect::<String>());
            for diagnostic in found {
                prop_assert!(diagnostic.render(true).contains("error"));
            }
        }
    }
}

/// Cuts text off, takes some out, puts some in, or doubles what follows.
fn damage(text: &mut Vec<char>, at: usize, kind: u8, other: &str) {
    let end = (at + 12).min(text.len());
    match kind {
        0 => text.truncate(at),
        1 => drop(text.drain(at..end)),
        2 => drop(text.splice(at..at, other.chars())),
        _ => {
            let again: Vec<char> = text[at..end].to_vec();
            drop(text.splice(at..at, again));
        }
    }
}
