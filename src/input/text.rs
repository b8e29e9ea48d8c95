//! Bytes of a file into text that can be shown: size, encoding and control characters.

use std::sync::Arc;

use crate::diagnostic::{Diagnostic, Place, Source};

/// Largest YAML file that is read.
pub(super) const YAML_BYTES: u64 = 8 << 20;
/// Largest table that is read.
pub(super) const TABLE_BYTES: u64 = 512 << 20;

/// Says that a file is larger than its kind may be.
pub(super) fn too_large(name: &str, bytes: u64, limit: u64) -> Diagnostic {
    Diagnostic::error(format!(
        "`{name}` has {bytes} bytes, expected at most {limit} ({} MiB)",
        limit >> 20
    ))
}

/// The text of a file, or why it is none.
///
/// A UTF-8 byte order mark is left out, which changes nothing that is read.
pub(super) fn decode(name: &str, bytes: Vec<u8>) -> Result<Arc<Source>, Diagnostic> {
    refuse_utf16(name, &bytes)?;
    let bytes = match bytes.strip_prefix(b"\xEF\xBB\xBF") {
        Some(rest) => rest.to_vec(),
        None => bytes,
    };
    let text = String::from_utf8(bytes).map_err(|error| not_utf8(name, &error))?;
    let source = Arc::new(Source {
        name: name.to_owned(),
        text,
    });
    refuse_control_characters(&source)?;
    match source.text.trim().is_empty() {
        true => Err(Diagnostic::error("the file is empty").at(&place(&source, 0, 0))),
        false => Ok(source),
    }
}

fn place(source: &Arc<Source>, start: usize, end: usize) -> Place {
    Place {
        source: Arc::clone(source),
        span: start..end,
    }
}

fn refuse_utf16(name: &str, bytes: &[u8]) -> Result<(), Diagnostic> {
    let marked = bytes.starts_with(b"\xFF\xFE") || bytes.starts_with(b"\xFE\xFF");
    match marked {
        true => Err(
            Diagnostic::error(format!("`{name}` is UTF-16 text, expected UTF-8"))
                .hint("save the file as UTF-8"),
        ),
        false => Ok(()),
    }
}

fn not_utf8(name: &str, error: &std::string::FromUtf8Error) -> Diagnostic {
    let good = error.utf8_error().valid_up_to();
    let byte = error.as_bytes()[good];
    let source = Arc::new(Source {
        name: name.to_owned(),
        text: String::from_utf8_lossy(&error.as_bytes()[..good]).into_owned(),
    });
    Diagnostic::error(format!(
        "byte 0x{byte:02x} at offset {good} is not UTF-8 text"
    ))
    .at(&place(&source, good, good))
    .hint("save the file as UTF-8")
}

fn refuse_control_characters(source: &Arc<Source>) -> Result<(), Diagnostic> {
    let strange = |c: char| c.is_control() && !matches!(c, '\n' | '\r' | '\t' | '\u{85}');
    let Some((at, found)) = source.text.char_indices().find(|&(_, c)| strange(c)) else {
        return Ok(());
    };
    Err(Diagnostic::error(format!(
        "control character U+{:04X}, expected plain text",
        u32::from(found)
    ))
    .at(&place(source, at, at + found.len_utf8())))
}
