//! Reading and writing files of a dossier: whole or not at all.

use std::io::Write;
use std::path::{Path, PathBuf};

use super::{FORMAT, Results, VERSION};

/// Why a results file could not be read or written.
#[derive(Debug, thiserror::Error)]
pub enum RecordError {
    /// The operating system refused.
    #[error("{path}: cannot be {action}: {source}; check that the folder exists and that you may write there")]
    Io {
        /// The file.
        path: PathBuf,
        /// `read` or `written`.
        action: &'static str,
        /// What the operating system said.
        source: std::io::Error,
    },
    /// The file is no results file.
    #[error("{path}: line {line}: is not a results file of Gridassay: {message}")]
    Format {
        /// The file.
        path: PathBuf,
        /// Where in it.
        line: usize,
        /// What is wrong.
        message: String,
    },
    /// A results file of another version.
    #[error("{path}: is a results file of version {found}; this program reads version {VERSION}")]
    Version {
        /// The file.
        path: PathBuf,
        /// The version that it states.
        found: u32,
    },
}

/// Reads a results file.
///
/// # Errors
/// The file cannot be read, is no results file, or has another version.
pub fn read_results(path: &Path) -> Result<Results, RecordError> {
    let text = std::fs::read_to_string(path).map_err(|source| RecordError::Io {
        path: path.into(),
        action: "read",
        source,
    })?;
    let results: Results = serde_json::from_str(&text).map_err(|error| RecordError::Format {
        path: path.into(),
        line: error.line(),
        message: error.to_string(),
    })?;
    if results.format != FORMAT {
        let message = format!("`format` is `{}`, not `{FORMAT}`", results.format);
        return Err(RecordError::Format { path: path.into(), line: 1, message });
    }
    if results.version != VERSION {
        return Err(RecordError::Version { path: path.into(), found: results.version });
    }
    Ok(results)
}

/// Writes a results file, whole or not at all.
///
/// # Errors
/// The file cannot be written.
pub fn write_results(path: &Path, results: &Results) -> Result<(), RecordError> {
    let mut text = serde_json::to_string_pretty(results).expect("results hold only text, numbers and lists");
    text.push('\n');
    write_text(path, &text)
}

/// Writes `text` to `path`, whole or not at all: a reader never sees half of it.
///
/// # Errors
/// The file cannot be written.
pub fn write_text(path: &Path, text: &str) -> Result<(), RecordError> {
    write_bytes(path, text.as_bytes())
}

/// Writes `bytes` to `path`, whole or not at all.
///
/// # Errors
/// The file cannot be written.
pub fn write_bytes(path: &Path, bytes: &[u8]) -> Result<(), RecordError> {
    let failed = |source| RecordError::Io { path: path.into(), action: "written", source };
    let folder = path.parent().filter(|folder| !folder.as_os_str().is_empty()).unwrap_or(Path::new("."));
    let mut builder = tempfile::Builder::new();
    #[cfg(unix)]
    {
        // A temporary file is private by default; pages are for colleagues.
        use std::os::unix::fs::PermissionsExt;
        builder.permissions(std::fs::Permissions::from_mode(0o644));
    }
    let mut file = builder.tempfile_in(folder).map_err(failed)?;
    file.write_all(bytes).map_err(failed)?;
    file.persist(path).map_err(|error| failed(error.error))?;
    Ok(())
}
