//! Files written whole: under another name in the same folder, then renamed.
//!
//! Nobody ever sees half a file under its own name, however the program ends. A signal that asks it
//! to stop takes the other name away too; a kill that cannot be caught, or a loss of power, may
//! leave a `.crestfall-….part` behind, which no later run reads.

use std::fs::Permissions;
use std::io::{self, BufWriter, Write};
use std::path::{Path, PathBuf};
use std::sync::{Mutex, MutexGuard, PoisonError};

use tempfile::{NamedTempFile, TempPath};

/// The file being written, for whoever has to take it away when the program is asked to stop.
///
/// A signal arrives in a thread of its own, so there is no other way to tell it.
static UNFINISHED: Mutex<Option<PathBuf>> = Mutex::new(None);

/// Writes a file, in place of one that may be there.
pub(super) fn replace(
    path: &Path,
    write: impl FnOnce(&mut dyn Write) -> io::Result<()>,
) -> io::Result<()> {
    finish(written(path, write)?, |part| part.persist(path))
}

/// Writes a file that must not be there yet.
pub(super) fn create(path: &Path, text: &str) -> io::Result<()> {
    let part = written(path, |out| out.write_all(text.as_bytes()))?;
    finish(part, |part| part.persist_noclobber(path))
}

/// The content under the other name.
fn written(
    path: &Path,
    write: impl FnOnce(&mut dyn Write) -> io::Result<()>,
) -> io::Result<TempPath> {
    let mut part = begin(path.parent().unwrap_or(Path::new(".")))?;
    let mut out = BufWriter::new(part.as_file_mut());
    write(&mut out)?;
    out.flush()?;
    drop(out);
    Ok(part.into_temp_path())
}

fn begin(folder: &Path) -> io::Result<NamedTempFile> {
    stop::watch()?;
    let mut builder = tempfile::Builder::new();
    builder.prefix(".crestfall-").suffix(".part");
    if let Some(permissions) = permissions() {
        builder.permissions(permissions);
    }
    // Held while the file is made, so that a signal finds it either not there or known.
    let mut unfinished = unfinished();
    let part = builder.tempfile_in(folder)?;
    *unfinished = Some(part.path().to_owned());
    Ok(part)
}

fn finish<E: Into<io::Error>>(
    part: TempPath,
    rename: impl FnOnce(TempPath) -> Result<(), E>,
) -> io::Result<()> {
    let mut unfinished = unfinished();
    *unfinished = None;
    rename(part).map_err(Into::into)
}

fn unfinished() -> MutexGuard<'static, Option<PathBuf>> {
    UNFINISHED.lock().unwrap_or_else(PoisonError::into_inner)
}

/// Those of a plain new file, which the user's mask narrows; a temporary file alone would be private.
#[cfg(unix)]
fn permissions() -> Option<Permissions> {
    use std::os::unix::fs::PermissionsExt;
    Some(Permissions::from_mode(0o666))
}

#[cfg(not(unix))]
fn permissions() -> Option<Permissions> {
    None
}

/// Taking the unfinished file away when a signal asks the program to stop.
#[cfg(unix)]
mod stop {
    use std::sync::Once;
    use std::{fs, io, thread};

    use signal_hook::consts::{SIGINT, SIGTERM};
    use signal_hook::iterator::Signals;
    use signal_hook::low_level::emulate_default_handler;

    /// Begins to listen, once.
    pub(super) fn watch() -> io::Result<()> {
        static ONCE: Once = Once::new();
        let mut result = Ok(());
        ONCE.call_once(|| result = listen());
        result
    }

    fn listen() -> io::Result<()> {
        let mut signals = Signals::new([SIGINT, SIGTERM])?;
        thread::spawn(move || {
            for signal in signals.forever() {
                // Kept until the end, so that no other file is begun.
                let mut unfinished = super::unfinished();
                if let Some(part) = unfinished.take() {
                    // The program ends either way, and nobody is left to be told.
                    let _ = fs::remove_file(part);
                }
                // Whoever started the program sees that the signal ended it.
                let _ = emulate_default_handler(signal);
            }
        });
        Ok(())
    }
}

#[cfg(not(unix))]
mod stop {
    /// Elsewhere a stopped program leaves its unfinished file behind.
    pub(super) fn watch() -> std::io::Result<()> {
        Ok(())
    }
}
