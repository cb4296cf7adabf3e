//! Runs schemes: in this process, as a shared library in a child process, and as an executable.
//!
//! A [`Session`] is one conversation with one scheme, the same whatever the way to it; every answer is checked against the
//! contract before a study sees it. What a scheme can do wrong is a [`HostError`] and costs a verdict, never the harness.

mod bridge;
mod crate_folder;
mod descendants;
mod digest;
mod error;
mod executable;
mod float_mode;
mod frames;
mod guard;
mod inbox;
mod library;
mod log;
mod plugin_child;
mod process;
mod questions;
mod remote;
mod session;
mod signals;
mod source;
mod tail;
mod wire;

pub use crate_folder::BuildError;
pub use descendants::descendants;
pub use digest::file_digest;
pub use error::{Fault, FaultKind, HostError};
pub use executable::{EXECUTABLE_VARIABLE, run_child_if_asked, set_executable};
pub use library::{Library, LibraryError};
pub use session::{Session, offers};
pub use source::{Identity, Limits, Route, SchemeSource};
