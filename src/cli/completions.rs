//! `crestfall completions`: what a shell needs to complete commands and options.

use clap::{Args, CommandFactory};
use clap_complete::Shell;

use super::{Failure, Status, output};

/// What `--help` says besides.
const HELP: &str = "\
bash: crestfall completions bash > ~/.local/share/bash-completion/completions/crestfall
zsh:  crestfall completions zsh > a file `_crestfall` in a folder of $fpath
fish: crestfall completions fish > ~/.config/fish/completions/crestfall.fish";

#[derive(Args)]
#[command(after_help = HELP)]
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
