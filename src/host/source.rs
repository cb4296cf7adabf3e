//! Where a scheme comes from, and what it may cost.

use std::path::PathBuf;
use std::time::Duration;

/// The way to a scheme.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Route {
    /// One of the built-in classical schemes, by name; it runs in this process.
    Classical(String),
    /// A shared library, or the folder of a crate that is built into one; it runs in a child process of its own.
    Plugin {
        /// The library file, or the crate's folder.
        path: PathBuf,
        /// Which scheme of a library that carries several.
        name: Option<String>,
    },
    /// An executable with its arguments, which converses in JSON on stdin and stdout.
    Command(Vec<String>),
}

impl Route {
    /// The key that names the route in claims and results.
    pub fn key(&self) -> &'static str {
        match self {
            Self::Classical(_) => "classical",
            Self::Plugin { .. } => "plugin",
            Self::Command(_) => "command",
        }
    }
}

/// What a scheme's process may cost. Past a limit it is ended with everything that it started.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Limits {
    /// From the start of the process to its answer to `describe`.
    pub start: Duration,
    /// For each request; the time that the harness takes to answer the scheme's own questions is not counted.
    pub request: Duration,
    /// Bytes of address space of each process of the scheme; `None`: no limit.
    pub memory: Option<u64>,
    /// Bytes of one message from the scheme.
    pub message: u64,
    /// Processes that the scheme may have at once, itself included; `None`: no limit.
    pub processes: Option<u32>,
}

impl Default for Limits {
    /// 60 s for start-up and for each request, messages of 1 GiB (10^7 values as text take 0.2 GiB), memory and processes free.
    fn default() -> Self {
        Self {
            start: Duration::from_secs(60),
            request: Duration::from_secs(60),
            memory: None,
            message: 1 << 30,
            processes: None,
        }
    }
}

/// A scheme as the person names it.
#[derive(Clone, Debug)]
pub struct SchemeSource {
    /// The way to it.
    pub route: Route,
    /// The working folder of its process; relative paths in the route start here.
    pub folder: PathBuf,
    /// What its process may cost.
    pub limits: Limits,
}

/// Who answered: what a dossier names, so that a result can be traced to what was run.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Identity {
    /// The scheme's own name.
    pub name: String,
    /// The scheme's own version.
    pub version: String,
    /// `command`, `plugin`, `classical` or `in process`.
    pub route: &'static str,
    /// SHA-256 in hexadecimal of the executable or library. A command that names files among its arguments (a script) has the
    /// SHA-256 of the list of all their digests, one line each, in `files` order. Empty for what runs in process.
    pub digest: String,
    /// Each file that makes up the scheme, as it was named, with its SHA-256.
    pub files: Vec<(String, String)>,
    /// The library switched flush-to-zero on in the thread that loaded it (a build with -ffast-math does). The harness switched it
    /// off again. `None` where the route cannot tell.
    pub flush_to_zero: Option<bool>,
}
