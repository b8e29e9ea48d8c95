//! The command `crestfall`: parse the arguments, do what they ask, tell how it went.

mod cli;

fn main() -> std::process::ExitCode {
    cli::run().into()
}
