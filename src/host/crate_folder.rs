//! Builds a plugin crate into a library.

use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

use serde_json::Value;

/// Most lines of the compiler's errors that are shown.
const ERROR_LINES: usize = 40;

/// Why a crate's folder did not become a library.
#[derive(Debug, thiserror::Error)]
pub enum BuildError {
    /// The folder holds no crate.
    #[error("`{}` holds no Cargo.toml; name a library file, or the folder of a crate", folder.display())]
    NoCrate {
        /// The folder.
        folder: PathBuf,
    },
    /// Cargo is not there.
    #[error("cargo could not be started to build `{}`: {reason}; install Rust, or name the built library", folder.display())]
    NoCargo {
        /// The folder.
        folder: PathBuf,
        /// What the system said.
        reason: std::io::Error,
    },
    /// The crate does not compile.
    #[error("the crate in `{}` does not compile:\n{errors}", folder.display())]
    NotCompiled {
        /// The folder.
        folder: PathBuf,
        /// The compiler's errors.
        errors: String,
    },
    /// The crate is no plugin.
    #[error("the crate in `{}` builds no shared library; add crate-type = [\"cdylib\"] under [lib]", folder.display())]
    NoLibrary {
        /// The folder.
        folder: PathBuf,
    },
}

/// Builds the crate in `folder` in release mode; the path of its shared library.
pub(super) fn build(folder: &Path) -> Result<PathBuf, BuildError> {
    let named = || folder.to_owned();
    let manifest = folder.join("Cargo.toml");
    if !manifest.is_file() {
        return Err(BuildError::NoCrate { folder: named() });
    }
    let mut command = Command::new(std::env::var_os("CARGO").unwrap_or_else(|| "cargo".into()));
    command.args(["build", "--release", "--lib", "--message-format=json"]);
    command.current_dir(folder).stdin(Stdio::null());
    let output = command.output().map_err(|reason| BuildError::NoCargo { folder: named(), reason })?;
    let messages: Vec<Value> =
        output.stdout.split(|byte| *byte == b'\n').filter_map(|line| serde_json::from_slice(line).ok()).collect();
    if !output.status.success() {
        return Err(BuildError::NotCompiled { folder: named(), errors: errors(&messages, &output.stderr) });
    }
    let manifest = manifest.canonicalize().unwrap_or(manifest);
    let of_crate = |message: &&Value| {
        message["reason"] == "compiler-artifact"
            && message["manifest_path"].as_str().is_some_and(|path| Path::new(path) == manifest)
    };
    let library = messages.iter().filter(of_crate).find_map(|message| {
        let cdylib = message["target"]["crate_types"].as_array()?.iter().any(|kind| kind == "cdylib");
        let suffix = format!(".{}", std::env::consts::DLL_EXTENSION);
        let files = message["filenames"].as_array()?.iter().filter_map(Value::as_str);
        cdylib.then(|| files.filter(|file| file.ends_with(&suffix)).map(PathBuf::from).next())?
    });
    library.ok_or_else(|| BuildError::NoLibrary { folder: named() })
}

/// The compiler's errors as it would show them; where there are none, what cargo itself said.
fn errors(messages: &[Value], stderr: &[u8]) -> String {
    let error = |message: &Value| {
        let inner = &message["message"];
        (inner["level"] == "error").then(|| inner["rendered"].as_str().unwrap_or_default().trim_end().to_owned())
    };
    let compiler: Vec<String> = messages.iter().filter_map(error).collect();
    let text = if compiler.is_empty() { String::from_utf8_lossy(stderr).into_owned() } else { compiler.join("\n") };
    let lines: Vec<&str> = text.lines().take(ERROR_LINES).collect();
    lines.join("\n")
}
