//! `crestfall check`: run every case, hold it against the envelopes, print the findings.

use clap::Args;
use crestfall::{report, study};

use super::progress::ProgressLine;
use super::{Failure, Format, Status, StudyArguments, Units, output};

#[derive(Args)]
pub(super) struct Arguments {
    #[command(flatten)]
    study: StudyArguments,
    /// How the result is printed
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
    /// Units of what people read
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
