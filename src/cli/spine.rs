//! `crestfall spine`: audit a spine.
//!
//! Exit status 0 where nothing was found, 1 where there are findings, 2 for wrong input.

use std::path::PathBuf;

use clap::Args;
use crestfall::input;
use crestfall::report;
use crestfall::spine::{Spine, audit};

use super::{Failure, Format, Status, Units, output, whole_file};

/// Audit a spine: extremes, jumps, faults of its points, its fit and the noise that leaves
///
/// Exit status: 0 nothing found; 1 findings (a curvature or roll rate that jumps, gaps, points almost
/// on one another, kinks, blunders, a stated error beyond ten times or below a third of what the points show, points whose error
/// is not known, a noise floor above 0.05 g on more than a twentieth of the track); 2 the inputs or the
/// command line are wrong, or a result could not be written.
#[derive(Args)]
pub(super) struct Arguments {
    /// The track file
    track: PathBuf,
    /// How the result is printed
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
    /// Speed at which noise is told as a load
    #[arg(long, value_name = "SPEED", default_value = "25 m/s", value_parser = input::speed_m_s)]
    speed: f64,
    /// Units of what people read
    #[arg(long, value_enum, default_value_t = Units::Si)]
    units: Units,
    /// Also write the spine station by station
    #[arg(long, value_name = "FILE")]
    csv: Option<PathBuf>,
}

pub(super) fn run(arguments: &Arguments) -> Result<Status, Failure> {
    let track = input::read_track(&arguments.track).map_err(Failure::Input)?;
    let spine = Spine::from_track(&track).map_err(Failure::Input)?;
    let audit = audit(&track, &spine, arguments.speed);
    if let Some(path) = &arguments.csv {
        let written = whole_file::replace(path, |out| report::write_spine(&spine, out));
        written.map_err(|error| {
            Failure::Output(format!("{} could not be written: {error}", path.display()))
        })?;
    }
    output::print(&match arguments.format {
        Format::Text => report::spine_text(&audit, arguments.units.into()),
        Format::Json => report::spine_json(&audit),
    })?;
    Ok(if audit.findings.is_empty() {
        Status::Inside
    } else {
        Status::NotInside
    })
}
