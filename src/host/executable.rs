//! Which program runs as guard and as plugin child: gridassay itself, under hidden first arguments.

use std::path::{Path, PathBuf};
use std::sync::Mutex;

use super::{HostError, guard, plugin_child};

/// The variable that names the gridassay program for programs that are another.
pub const EXECUTABLE_VARIABLE: &str = "GRIDASSAY_EXECUTABLE";

static EXECUTABLE: Mutex<Option<PathBuf>> = Mutex::new(None);

/// Names the gridassay program, for programs (such as the tests of a solver) that are another.
pub fn set_executable(path: &Path) {
    *EXECUTABLE.lock().unwrap_or_else(|poisoned| poisoned.into_inner()) = Some(path.to_owned());
}

/// Becomes the guard of a scheme's processes, or a plugin's child process, where the arguments ask for it; then it does not
/// return. `main` calls this before anything else.
pub fn run_child_if_asked() {
    let mut arguments = std::env::args_os().skip(1);
    match arguments.next().as_deref().and_then(|first| first.to_str()) {
        Some(guard::ARGUMENT) => guard::run(arguments.collect()),
        Some(plugin_child::ARGUMENT) => plugin_child::run(),
        _ => {
            if let Ok(path) = std::env::current_exe() {
                set_executable(&path);
            }
        }
    }
}

/// The program to start.
pub(super) fn executable() -> Result<PathBuf, HostError> {
    if let Some(path) = EXECUTABLE.lock().unwrap_or_else(|poisoned| poisoned.into_inner()).clone() {
        return Ok(path);
    }
    std::env::var_os(EXECUTABLE_VARIABLE).map(PathBuf::from).ok_or(HostError::NoExecutable)
}
