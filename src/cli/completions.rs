//! `crestfall completions`: what a shell needs to complete commands and options.

use clap::{Args, CommandFactory};
use clap_complete::Shell;

use super::{Failure, Status, output};

#[derive(Args)]
pub(super) struct Arguments {
    /// The shell
    #[arg(value_enum)]
    shell: Shell,
}

pub(super) fn run(arguments: &Arguments) -> Result<Status, Failure> {
    let mut command = super::Arguments::command();
    let mut script = Vec::new();
    clap_complete::generate(arguments.shell, &mut command, "crestfall", &mut script);
    output::print(&String::from_utf8_lossy(&script))?;
    Ok(Status::Inside)
}
