//! `crestfall export`: the time histories of every case and seat, one CSV file each.

use std::path::{Path, PathBuf};
use std::{fs, io};

use clap::Args;
use crestfall::diagnostic::Diagnostic;
use crestfall::report;
use crestfall::study::{CaseId, Plan};
use percent_encoding::{AsciiSet, NON_ALPHANUMERIC, utf8_percent_encode};

use super::progress::ProgressLine;
use super::{Failure, Status, StudyArguments, output, whole_file};

/// What a name keeps as it is, besides letters and digits.
const KEPT: &AsciiSet = &NON_ALPHANUMERIC
    .remove(b'.')
    .remove(b'_')
    .remove(b'+')
    .remove(b'-');

/// What `--help` says besides.
const HELP: &str = "\
One file a seat: DIR/<variant>/<scenario>/car<k>-<seat>.csv, in SI, one line a sample. Its columns:

  t_s                           time since the release
  train_station_m               station of the leading axle along the spine
  station_m                     station of the seat, midway between the axles of its car
  speed_m_s, accel_m_s2         of the leading axle along the spine
  x_m, y_m, z_m                 place of the seat: east, north, up
  felt_x_g, felt_y_g, felt_z_g  felt load on the rider's axes, not filtered: +x pushed forward by
                                the back rest, +y pushed to the left, +z pressed into the seat
  filtered_<n>_x_g, ...         the same through the n-th distinct filter of the envelopes, with
                                its delay; without gravity where the envelope excludes it

A file takes about 4 MB for a minute of ride: narrow with --variant, --scenario and --seat. Files that are there are \
replaced, each in one step.

Exit status: 0 all written; 1 a run could not be made; 2 the inputs or the command line are wrong, or a file could not \
be written.";

#[derive(Args)]
#[command(after_help = HELP)]
pub(super) struct Arguments {
    #[command(flatten)]
    study: StudyArguments,
    /// The folder to write into; made where it does not exist
    #[arg(short, long = "output", value_name = "DIR")]
    output: PathBuf,
}

pub(super) fn run(arguments: &Arguments) -> Result<Status, Failure> {
    let study = arguments.study.read()?;
    let plan = Plan::new(&study, &arguments.study.selection()).map_err(Failure::Input)?;
    let cases = plan.cases();
    let line = ProgressLine::new();
    let (mut files, mut unmade) = (0, Vec::new());
    for (done, &case) in cases.iter().enumerate() {
        line.show(done, cases.len());
        match export_case(&plan, case, &arguments.output)? {
            Ok(written) => files += written,
            Err(why) => unmade.push(why),
        }
    }
    line.clear();
    output::mistakes(&unmade);
    output::print(&format!(
        "{files} time histories written to {}\n",
        arguments.output.display()
    ))?;
    Ok(if unmade.is_empty() {
        Status::Inside
    } else {
        Status::NotInside
    })
}

/// Writes the files of one case: how many, or why the run could not be made.
fn export_case(
    plan: &Plan<'_>,
    case: CaseId,
    folder: &Path,
) -> Result<Result<usize, Diagnostic>, Failure> {
    let (variant, scenario) = plan.names(case);
    let record = match plan.record(case) {
        Ok(record) => record,
        Err(error) => {
            let message = format!("the run of {variant} / {scenario} could not be made: {error}");
            return Ok(Err(Diagnostic::error(message)));
        }
    };
    let folder = folder.join(encoded(variant)).join(encoded(scenario));
    fs::create_dir_all(&folder).map_err(|error| not_written(&folder, &error))?;
    let mut files = 0;
    record.each_seat(|seat| {
        let path = folder.join(format!("car{}-{}.csv", seat.car, encoded(seat.seat)));
        files += 1;
        whole_file::replace(&path, |out| report::write_record(seat, out))
            .map_err(|error| not_written(&path, &error))
    })?;
    Ok(Ok(files))
}

fn not_written(path: &Path, error: &io::Error) -> Failure {
    Failure::Output(format!("{} could not be written: {error}", path.display()))
}

/// A name as a file or folder name: no separator, nothing that a folder means by itself.
fn encoded(name: &str) -> String {
    match name {
        "." => "%2E".to_owned(),
        ".." => "%2E%2E".to_owned(),
        _ => utf8_percent_encode(name, KEPT).to_string(),
    }
}

#[cfg(test)]
mod tests {
    use super::encoded;

    #[test]
    fn names_cannot_leave_their_folder() {
        assert_eq!(encoded("warm-full+A_1.2"), "warm-full+A_1.2");
        assert_eq!(encoded("../x y"), "..%2Fx%20y");
        assert_eq!(encoded(".."), "%2E%2E");
        assert_eq!(encoded("."), "%2E");
        assert_eq!(encoded("50 %ü"), "50%20%25%C3%BC");
    }
}
