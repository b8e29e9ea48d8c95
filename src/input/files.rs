//! Opening files: each once, by the path of the file that names it, with its hash.

use std::collections::BTreeMap;
use std::fs::{self, File};
use std::io::{self, Read};
use std::path::{Component, Path, PathBuf};
use std::sync::Arc;

use sha2::{Digest, Sha256};

use crate::diagnostic::{Diagnostic, Place, Source};
use crate::input::decode::nearest;
use crate::input::{InputFile, text};

/// A file that a user named.
#[derive(Clone, Debug)]
pub(super) struct Named {
    /// How it is opened and shown.
    pub(super) path: PathBuf,
    /// Where its name was written; nowhere for the one on the command line.
    pub(super) by: Option<Place>,
}

impl Named {
    /// The file given by the caller.
    pub(super) fn outright(path: &Path) -> Self {
        Self {
            path: path.to_owned(),
            by: None,
        }
    }

    /// A file whose name stands in this one.
    pub(super) fn names(&self, written: &str, by: Place) -> Self {
        let folder = self.path.parent().unwrap_or(Path::new(""));
        Self {
            path: tidy(&folder.join(written)),
            by: Some(by),
        }
    }

    /// What tells it from other files.
    pub(super) fn identity(&self) -> PathBuf {
        fs::canonicalize(&self.path).unwrap_or_else(|_| self.path.clone())
    }

    /// The diagnostic at the place where the file was named.
    pub(super) fn blame(&self, diagnostic: Diagnostic) -> Diagnostic {
        match (&self.by, &diagnostic.place) {
            (Some(by), None) => diagnostic.at(by),
            _ => diagnostic,
        }
    }
}

/// The files read so far.
#[derive(Debug)]
pub(super) struct Files {
    /// Names in the list are relative to this folder.
    folder: PathBuf,
    seen: BTreeMap<PathBuf, Result<Arc<Source>, Diagnostic>>,
    list: Vec<InputFile>,
}

impl Files {
    /// None read; names will be relative to the folder of `first`.
    pub(super) fn beside(first: &Path) -> Self {
        Self {
            folder: first.parent().unwrap_or(Path::new("")).to_owned(),
            seen: BTreeMap::new(),
            list: Vec::new(),
        }
    }

    /// In reading order.
    pub(super) fn into_list(self) -> Vec<InputFile> {
        self.list
    }

    /// The text of a file of at most `limit` bytes.
    pub(super) fn read(&mut self, named: &Named, limit: u64) -> Result<Arc<Source>, Diagnostic> {
        let identity = named.identity();
        if let Some(known) = self.seen.get(&identity) {
            return known.clone();
        }
        let read = self.read_new(named, limit).map_err(|d| named.blame(d));
        self.seen.insert(identity, read.clone());
        read
    }

    fn read_new(&mut self, named: &Named, limit: u64) -> Result<Arc<Source>, Diagnostic> {
        let shown = shown(&named.path);
        let bytes = bytes(&named.path, &shown, limit)?;
        self.list.push(InputFile {
            name: relative(&named.path, &self.folder),
            sha256: hexadecimal(&Sha256::digest(&bytes)),
        });
        text::decode(&shown, bytes)
    }
}

fn bytes(path: &Path, shown: &str, limit: u64) -> Result<Vec<u8>, Diagnostic> {
    let about = fs::metadata(path).map_err(|error| unreadable(path, shown, &error))?;
    if about.is_dir() {
        return Err(Diagnostic::error(format!(
            "`{shown}` is a folder, expected a file"
        )));
    }
    if !about.is_file() {
        // A pipe might never end.
        return Err(Diagnostic::error(format!(
            "`{shown}` is not a regular file, expected one"
        )));
    }
    if about.len() > limit {
        return Err(text::too_large(shown, about.len(), limit));
    }
    let mut bytes = Vec::new();
    File::open(path)
        .and_then(|file| file.take(limit).read_to_end(&mut bytes))
        .map_err(|error| unreadable(path, shown, &error))?;
    Ok(bytes)
}

fn unreadable(path: &Path, shown: &str, error: &io::Error) -> Diagnostic {
    if error.kind() != io::ErrorKind::NotFound {
        return Diagnostic::error(format!("cannot read `{shown}`: {error}"));
    }
    let missing = Diagnostic::error(format!("there is no file `{shown}`"));
    match neighbour(path) {
        Some(near) => missing.hint(format!("did you mean `{near}`?")),
        None => missing,
    }
}

/// The name in the same folder that is most like this one.
fn neighbour(path: &Path) -> Option<String> {
    let folder = match path.parent() {
        Some(folder) if folder != Path::new("") => folder,
        _ => Path::new("."),
    };
    let mut names: Vec<String> = fs::read_dir(folder)
        .ok()?
        .filter_map(|entry| entry.ok()?.file_name().into_string().ok())
        .collect();
    names.sort();
    let word = path.file_name()?.to_str()?;
    nearest(word, names.iter().map(String::as_str)).map(str::to_owned)
}

fn shown(path: &Path) -> String {
    path.to_string_lossy().into_owned()
}

/// The path without `.` and with `a/..` taken out.
fn tidy(path: &Path) -> PathBuf {
    let mut tidied = PathBuf::new();
    for part in path.components() {
        let last_is_name = matches!(tidied.components().next_back(), Some(Component::Normal(_)));
        match part {
            Component::CurDir => {}
            Component::ParentDir if last_is_name => {
                tidied.pop();
            }
            other => tidied.push(other),
        }
    }
    tidied
}

/// The path from `folder`, with forward slashes.
fn relative(path: &Path, folder: &Path) -> String {
    if let Ok(inside) = path.strip_prefix(folder)
        && inside.is_relative()
        && !inside.starts_with("..")
    {
        return slashed(inside);
    }
    let absolute = |path: &Path| match path == Path::new("") {
        true => fs::canonicalize("."),
        false => fs::canonicalize(path),
    };
    match (absolute(path), absolute(folder)) {
        (Ok(path), Ok(folder)) => slashed(&difference(&path, &folder)),
        _ => slashed(Path::new(path.file_name().unwrap_or_default())),
    }
}

/// The way from one absolute folder to an absolute path.
fn difference(path: &Path, folder: &Path) -> PathBuf {
    let common = path
        .components()
        .zip(folder.components())
        .take_while(|(a, b)| a == b)
        .count();
    let up = folder
        .components()
        .skip(common)
        .map(|_| Component::ParentDir);
    up.chain(path.components().skip(common)).collect()
}

fn slashed(path: &Path) -> String {
    let parts: Vec<_> = path
        .components()
        .map(|part| part.as_os_str().to_string_lossy())
        .collect();
    parts.join("/")
}

fn hexadecimal(bytes: &[u8]) -> String {
    bytes.iter().map(|byte| format!("{byte:02x}")).collect()
}
