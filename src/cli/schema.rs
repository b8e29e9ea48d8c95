//! `crestfall schema`: the JSON Schema of a kind of file, for editors.

use clap::{Args, ValueEnum};
use crestfall::input::{self, FileKind};

use super::{Failure, Status, output};

/// What `--help` says besides: how an editor comes to use it (common practice of YAML language servers).
const HELP: &str = "\
For an editor that completes and checks while you type, write the schema to a file:

    crestfall schema track > track.schema.json

and begin each track file with the line

    # yaml-language-server: $schema=track.schema.json";

#[derive(Args)]
#[command(after_help = HELP)]
pub(super) struct Arguments {
    /// The kind of file
    #[arg(value_enum)]
    kind: Kind,
}

/// Kinds of files.
#[derive(Clone, Copy, Debug, ValueEnum)]
enum Kind {
    /// Variants, a train, an operation and envelopes
    Study,
    /// Elements or points, and landmarks
    Track,
    /// Cars and seats
    Train,
    /// Release, zones, resistance, air and scenarios
    Operation,
    /// Rules from one document
    Envelope,
}

pub(super) fn run(arguments: &Arguments) -> Result<Status, Failure> {
    output::print(&format!("{:#}\n", input::schema(arguments.kind.into())))?;
    Ok(Status::Inside)
}

impl From<Kind> for FileKind {
    fn from(kind: Kind) -> Self {
        match kind {
            Kind::Study => Self::Study,
            Kind::Track => Self::Track,
            Kind::Train => Self::Train,
            Kind::Operation => Self::Operation,
            Kind::Envelope => Self::Envelope,
        }
    }
}
