//! `crestfall check`: run every case, hold it against the envelopes, print the findings.

use clap::Args;
use crestfall::{report, study};

use super::progress::ProgressLine;
use super::{Failure, Format, Status, StudyArguments, Units, output};

/// What `--help` says besides.
const HELP: &str = "\
The text leads with the outcome; then come the worst of each rule, the places where an envelope is left, with what \
makes the load and what would mend it, the cases, and the cautions. JSON has every number of every seat.

Exit status: 0 everything inside the envelopes given; 1 something outside, up for review, too close to call or not \
assessed; 2 the inputs or the command line are wrong.

    crestfall check ride.study.yaml --scenario warm-full --seat 6-rear-left
    crestfall check ride.study.yaml --format json > result.json";

#[derive(Args)]
#[command(after_help = HELP)]
pub(super) struct Arguments {
    #[command(flatten)]
    study: StudyArguments,
    /// How the result is printed
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
    /// Units of what people read; JSON is always SI
    #[arg(long, value_enum, default_value_t = Units::Si)]
    units: Units,
}

pub(super) fn run(arguments: &Arguments) -> Result<Status, Failure> {
    let study = arguments.study.read()?;
    let line = ProgressLine::new();
    let assessment = study::assess(&study, &arguments.study.selection(), &|done, of| {
        line.show(done, of);
    });
    line.clear();
    let assessment = assessment.map_err(Failure::Input)?;
    let text = match arguments.format {
        Format::Text => report::check_text(&assessment, arguments.units.into()),
        Format::Json => report::check_json(&assessment),
    };
    output::print(&text)?;
    Ok(assessment.outcome.into())
}
