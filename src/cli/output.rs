//! Writing to the two standard streams.

use std::io::{self, ErrorKind, Write};

use anstream::{AutoStream, ColorChoice};
use crestfall::diagnostic::Diagnostic;

use super::Failure;

/// Writes a result to standard output; a reader that has gone away is no failure.
pub(super) fn print(text: &str) -> Result<(), Failure> {
    let mut out = io::stdout().lock();
    match out.write_all(text.as_bytes()).and_then(|()| out.flush()) {
        Err(error) if error.kind() != ErrorKind::BrokenPipe => Err(Failure::Output(format!(
            "standard output could not be written: {error}"
        ))),
        _ => Ok(()),
    }
}

/// Draws mistakes on standard error, in colour where that is a terminal.
pub(super) fn mistakes(mistakes: &[Diagnostic]) {
    let colour = AutoStream::choice(&io::stderr()) != ColorChoice::Never;
    let mut out = io::stderr().lock();
    for mistake in mistakes {
        // Nobody is left to be told when even this stream fails; the exit status still says it.
        let _ = writeln!(out, "{}", mistake.render(colour).trim_end());
    }
}
