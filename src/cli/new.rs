//! `crestfall new`: a small study to start from.

use std::path::{Path, PathBuf};
use std::{fs, io};

use clap::Args;
use crestfall::diagnostic::Diagnostic;

use super::{Failure, Status, output, whole_file};

/// The study file, which names all others.
const STUDY: &str = "ride.study.yaml";
/// What is written: names and texts.
const FILES: [(&str, &str); 5] = [
    ("ride.track.yaml", include_str!("new/ride.track.yaml")),
    ("ride.train.yaml", include_str!("new/ride.train.yaml")),
    (
        "ride.operation.yaml",
        include_str!("new/ride.operation.yaml"),
    ),
    (
        "illustrative.envelope.yaml",
        include_str!("new/illustrative.envelope.yaml"),
    ),
    (STUDY, include_str!("new/ride.study.yaml")),
];

/// What `--help` says besides.
const HELP: &str = "Writes a track of elements, a train, an operation, an envelope of invented numbers and the study \
that brings them together, with comments that explain them. Files that are there are never overwritten.";

#[derive(Args)]
#[command(after_help = HELP)]
pub(super) struct Arguments {
    /// The folder to write into; made where it does not exist
    #[arg(value_name = "DIR")]
    folder: PathBuf,
}

pub(super) fn run(arguments: &Arguments) -> Result<Status, Failure> {
    let folder = &arguments.folder;
    refuse_to_overwrite(folder)?;
    fs::create_dir_all(folder).map_err(|error| not_written(folder, &error))?;
    for (name, text) in FILES {
        let path = folder.join(name);
        whole_file::create(&path, text).map_err(|error| not_written(&path, &error))?;
    }
    let names = FILES.map(|(name, _)| format!("  {name}\n")).concat();
    output::print(&format!(
        "written to {}:\n{names}next:\n  crestfall check {}\n",
        folder.display(),
        in_shell(&folder.join(STUDY))
    ))?;
    Ok(Status::Inside)
}

/// Names every file that is in the way, before anything is written.
fn refuse_to_overwrite(folder: &Path) -> Result<(), Failure> {
    // A link that leads nowhere is in the way too.
    let is_taken = |name: &&str| folder.join(name).symlink_metadata().is_ok();
    let taken: Vec<&str> = FILES
        .map(|(name, _)| name)
        .into_iter()
        .filter(is_taken)
        .collect();
    match taken.is_empty() {
        true => Ok(()),
        false => Err(Failure::Input(vec![
            Diagnostic::error(format!(
                "{} already holds {}, expected a folder without these files",
                folder.display(),
                taken.join(", ")
            ))
            .hint("nothing has been written; name another folder"),
        ])),
    }
}

fn not_written(path: &Path, error: &io::Error) -> Failure {
    Failure::Output(format!("{} could not be written: {error}", path.display()))
}

/// A path as one types it.
fn in_shell(path: &Path) -> String {
    let text = path.display().to_string();
    let plain = |c: char| c.is_alphanumeric() || "/._+-\\:".contains(c);
    match text.chars().all(plain) {
        true => text,
        false => format!("'{}'", text.replace('\'', r"'\''")),
    }
}
