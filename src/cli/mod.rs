//! The command line: reads arguments, calls the library, prints what it gives.
//!
//! One file a command. Results go to standard output, mistakes and progress to standard error.

mod check;
mod completions;
mod export;
mod new;
mod output;
mod progress;
mod schema;
mod spine;
mod whole_file;

use std::path::PathBuf;
use std::process::ExitCode;

use clap::{Args, Parser, Subcommand, ValueEnum};
use crestfall::diagnostic::Diagnostic;
use crestfall::envelope::Outcome;
use crestfall::input::{self, Study};
use crestfall::report;
use crestfall::study::Selection;

/// What `--help` says besides.
const START: &str = "\
To begin with a small study that runs:

    crestfall new first-ride
    crestfall check first-ride/ride.study.yaml";

/// Rider loads of coasters and track rides, held against the acceptance envelopes you supply.
///
/// Exit status: 0 everything inside the envelopes given; 1 something outside, up for review,
/// too close to call or not assessed; 2 the inputs or the command line are wrong, or a result could not be written.
#[derive(Parser)]
#[command(name = "crestfall", version, after_help = START)]
struct Arguments {
    #[command(subcommand)]
    command: Command,
}

#[derive(Subcommand)]
enum Command {
    /// Run every case, hold it against the envelopes, print the findings
    Check(check::Arguments),
    /// Write the time histories of every case and seat as CSV files
    Export(export::Arguments),
    Spine(spine::Arguments),
    /// Write a small study to start from
    New(new::Arguments),
    /// Print the JSON Schema of a kind of file, for editors
    Schema(schema::Arguments),
    /// Print the completions of a shell
    Completions(completions::Arguments),
}

/// Which study, and how much of it.
#[derive(Args)]
struct StudyArguments {
    /// The study file
    #[arg(value_name = "STUDY")]
    study: PathBuf,
    /// Only this variant; may be given several times
    #[arg(long = "variant", value_name = "NAME")]
    variants: Vec<String>,
    /// Only this scenario; may be given several times
    #[arg(long = "scenario", value_name = "NAME")]
    scenarios: Vec<String>,
    /// Only this seat: number of the car from the front, then its name, such as `1-front-left`;
    /// may be given several times
    #[arg(long = "seat", value_name = "CAR-SEAT")]
    seats: Vec<String>,
}

/// How a result is printed.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum Format {
    /// For people
    Text,
    /// For machines
    Json,
}

/// Units that people read; JSON and CSV are always SI.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum Units {
    /// Metres, metres a second
    Si,
    /// Feet, miles an hour
    Us,
}

/// How a command went, as its exit status.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Status {
    /// Everything asked for was done, and everything judged is inside.
    Inside = 0,
    /// Something is outside, too close to call or not assessed.
    NotInside = 1,
    /// The inputs or the command line are wrong, or a result could not be written.
    Wrong = 2,
}

/// Why a command gave no result.
enum Failure {
    /// Mistakes in the input, or in names given on the command line.
    Input(Vec<Diagnostic>),
    /// A result could not be written.
    Output(String),
}

/// Runs the command that the arguments ask for; clap itself ends the program for arguments that are wrong.
pub(crate) fn run() -> Status {
    let result = match &Arguments::parse().command {
        Command::Check(arguments) => check::run(arguments),
        Command::Export(arguments) => export::run(arguments),
        Command::Spine(arguments) => spine::run(arguments),
        Command::New(arguments) => new::run(arguments),
        Command::Schema(arguments) => schema::run(arguments),
        Command::Completions(arguments) => completions::run(arguments),
    };
    result.unwrap_or_else(|failure| {
        match failure {
            Failure::Input(mistakes) => output::mistakes(&mistakes),
            Failure::Output(message) => output::mistakes(&[Diagnostic::error(message)]),
        }
        Status::Wrong
    })
}

impl StudyArguments {
    fn read(&self) -> Result<Study, Failure> {
        input::read_study(&self.study).map_err(Failure::Input)
    }

    fn selection(&self) -> Selection {
        Selection {
            variants: self.variants.clone(),
            scenarios: self.scenarios.clone(),
            seats: self.seats.clone(),
        }
    }
}

impl From<Status> for ExitCode {
    fn from(status: Status) -> Self {
        Self::from(status as u8)
    }
}

impl From<Outcome> for Status {
    fn from(outcome: Outcome) -> Self {
        match outcome {
            Outcome::Inside => Self::Inside,
            Outcome::NotAssessed | Outcome::TooCloseToCall | Outcome::Review | Outcome::Outside => {
                Self::NotInside
            }
        }
    }
}

impl From<Units> for report::Units {
    fn from(units: Units) -> Self {
        match units {
            Units::Si => Self::Si,
            Units::Us => Self::Us,
        }
    }
}
