//! Reads files from the command line's paths down to values, collecting every mistake.

use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use std::sync::Arc;

use serde::Deserialize;

use crate::diagnostic::{Diagnostic, Place, Source};
use crate::input::decode::decode;
use crate::input::document::{self, Kind, Node};
use crate::input::field::{Field, Located};
use crate::input::files::{Files, Named};
use crate::input::lower::{self, Lower};
use crate::input::text::YAML_BYTES;
use crate::input::{Envelope, FileKind, Operation, Study, Track, Train};

/// Most mistakes of one file that are shown.
const SHOWN: usize = 100;

/// Reads a study and every file it names.
///
/// # Errors
/// All mistakes of all files, in reading order and by place.
pub fn read_study(path: &Path) -> Result<Study, Vec<Diagnostic>> {
    let mut reader = Reader::new(path);
    let study = crate::input::study_file::study(&Named::outright(path), &mut reader);
    reader.finish(study).map(|(mut study, files)| {
        study.files = files;
        study
    })
}

/// Reads a track and the table of points it names.
///
/// # Errors
/// All mistakes of both files.
pub fn read_track(path: &Path) -> Result<Track, Vec<Diagnostic>> {
    let mut reader = Reader::new(path);
    let track = reader.track(&Named::outright(path));
    reader.finish(track).map(|(track, _)| track)
}

/// Reads an envelope.
///
/// # Errors
/// All mistakes of the file.
pub fn read_envelope(path: &Path) -> Result<Envelope, Vec<Diagnostic>> {
    let mut reader = Reader::new(path);
    let envelope = reader.envelope(&Named::outright(path));
    reader.finish(envelope).map(|(envelope, _)| envelope)
}

/// What has been read so far.
#[derive(Debug)]
pub(super) struct Reader {
    files: Files,
    tracks: BTreeMap<PathBuf, Option<Track>>,
    trains: BTreeMap<PathBuf, Option<Train>>,
    pub(super) found: Vec<Diagnostic>,
}

impl Reader {
    fn new(first: &Path) -> Self {
        Self {
            files: Files::beside(first),
            tracks: BTreeMap::new(),
            trains: BTreeMap::new(),
            found: Vec::new(),
        }
    }

    fn finish<T>(
        self,
        value: Option<T>,
    ) -> Result<(T, Vec<crate::input::InputFile>), Vec<Diagnostic>> {
        match value {
            Some(value) if self.found.is_empty() => Ok((value, self.files.into_list())),
            _ => Err(without_repeats(self.found)),
        }
    }

    /// A track, read once however often it is named.
    pub(super) fn track(&mut self, named: &Named) -> Option<Track> {
        let identity = named.identity();
        if let Some(known) = self.tracks.get(&identity) {
            return known.clone();
        }
        let track = self.lowered(FileKind::Track, named, |file, named, files, lower| {
            lower::track::track(file, named, files, lower)
        });
        self.tracks.insert(identity, track.clone());
        track
    }

    /// A train, read once however often it is named.
    pub(super) fn train(&mut self, named: &Named) -> Option<Train> {
        let identity = named.identity();
        if let Some(known) = self.trains.get(&identity) {
            return known.clone();
        }
        let train = self.lowered(FileKind::Train, named, |file, _, _, lower| {
            lower::train::train(file, lower)
        });
        self.trains.insert(identity, train.clone());
        train
    }

    /// An operation.
    pub(super) fn operation(&mut self, named: &Named) -> Option<Operation> {
        self.lowered(FileKind::Operation, named, |file, _, _, lower| {
            lower::operation::operation(file, lower)
        })
    }

    /// An envelope.
    pub(super) fn envelope(&mut self, named: &Named) -> Option<Envelope> {
        self.lowered(FileKind::Envelope, named, |file, _, _, lower| {
            lower::envelope::envelope(file, lower)
        })
    }

    /// Reads, decodes and lowers one file; its mistakes are kept in the order of their places.
    pub(super) fn lowered<W: for<'de> Deserialize<'de>, T>(
        &mut self,
        kind: FileKind,
        named: &Named,
        lower: impl FnOnce(Located<W>, &Named, &mut Files, &mut Lower) -> Option<T>,
    ) -> Option<T> {
        let mut found = Vec::new();
        let decoded = self.decoded(kind, named, &mut found);
        let value = decoded.and_then(|(source, file)| {
            let mut context = Lower {
                source,
                found: std::mem::take(&mut found),
            };
            let value = lower(file, named, &mut self.files, &mut context);
            found = context.found;
            value
        });
        sort(&mut found);
        shorten(&mut found);
        self.found.append(&mut found);
        value
    }

    fn decoded<W: for<'de> Deserialize<'de>>(
        &mut self,
        kind: FileKind,
        named: &Named,
        found: &mut Vec<Diagnostic>,
    ) -> Option<(Arc<Source>, Located<W>)> {
        let source = self.files.read(named, YAML_BYTES);
        let source = source.map_err(|diagnostic| found.push(diagnostic)).ok()?;
        let root = document::parse(&source, found);
        let root = root.map_err(|diagnostic| found.push(diagnostic)).ok()?;
        if let Some(diagnostic) = wrong_kind(&root, kind, named, &source) {
            found.push(diagnostic);
            return None;
        }
        match decode(&root, &source, found) {
            Field::Given(file) => Some((source, file)),
            _ => None,
        }
    }
}

/// Says that a file is of another kind than the one expected here.
fn wrong_kind(
    root: &Node,
    kind: FileKind,
    named: &Named,
    source: &Arc<Source>,
) -> Option<Diagnostic> {
    let place = |node: &Node| Place {
        source: Arc::clone(source),
        span: node.span.clone(),
    };
    let expected = kind.word();
    let Kind::Map(entries) = &root.kind else {
        let found = root.in_words();
        let message = format!(
            "found {found}, expected the keys of {} file",
            kind.with_article()
        );
        let hint = format!("such a file begins with `crestfall: 1` and `{expected}: NAME`");
        return Some(Diagnostic::error(message).at(&place(root)).hint(hint));
    };
    let key = |word: &str| entries.iter().find(|(key, _)| key.text() == word);
    if key(expected).is_some() {
        return None;
    }
    // A track named in a study file makes no track file of it: `train` and the like stand there too.
    let order = [
        FileKind::Study,
        FileKind::Track,
        FileKind::Operation,
        FileKind::Envelope,
        FileKind::Train,
    ];
    let other = order
        .into_iter()
        .find(|other| key(other.word()).is_some())?;
    let (found, _) = key(other.word())?;
    let message = format!(
        "this is {} file, expected {} file",
        other.with_article(),
        kind.with_article()
    );
    let mistake = Diagnostic::error(message).at(&place(found));
    Some(match &named.by {
        Some(by) => mistake.also(by, "named here"),
        None => mistake,
    })
}

/// In the order of their places; those of other files stay behind.
fn sort(found: &mut [Diagnostic]) {
    let Some(first) = found.iter().find_map(|d| d.place.clone()) else {
        return;
    };
    found.sort_by_key(|diagnostic| match &diagnostic.place {
        Some(place) if place.source.name == first.source.name => (0, place.span.start),
        _ => (1, 0),
    });
}

fn shorten(found: &mut Vec<Diagnostic>) {
    if found.len() > SHOWN {
        let more = found.len() - SHOWN;
        found.truncate(SHOWN);
        let mut last = Diagnostic::error(format!("{more} more mistakes are not shown"));
        last.place = found.last().and_then(|d| d.place.clone());
        found.push(last);
    }
}

/// A file named twice is said to be wrong once.
fn without_repeats(found: Vec<Diagnostic>) -> Vec<Diagnostic> {
    let identity = |d: &Diagnostic| {
        let place = d.place.as_ref();
        place.map(|p| (Arc::as_ptr(&p.source), p.span.clone(), d.message.clone()))
    };
    let mut kept: Vec<Diagnostic> = Vec::new();
    let mut seen = std::collections::HashSet::new();
    for diagnostic in found {
        match identity(&diagnostic) {
            Some(identity) if !seen.insert(identity.clone()) => {}
            _ => kept.push(diagnostic),
        }
    }
    kept
}

impl FileKind {
    /// The key that names a file of this kind.
    fn word(self) -> &'static str {
        match self {
            Self::Study => "study",
            Self::Track => "track",
            Self::Train => "train",
            Self::Operation => "operation",
            Self::Envelope => "envelope",
        }
    }

    fn with_article(self) -> &'static str {
        match self {
            Self::Study => "a study",
            Self::Track => "a track",
            Self::Train => "a train",
            Self::Operation => "an operation",
            Self::Envelope => "an envelope",
        }
    }
}
