//! The child process that a plugin's library runs in: the same program under a hidden argument.

use std::fs::File;
use std::os::fd::OwnedFd;
use std::path::Path;

use gridassay_scheme::SchemeError;
use gridassay_scheme::conversation::{Arrays, Body, Outgoing, ServeError, Transport, serve_over};
use serde_json::json;

use super::frames::ChildFrames;
use super::library::Library;

/// The hidden first argument.
pub(super) const ARGUMENT: &str = "__plugin-child";

/// Runs as a plugin's child until the harness closes its end.
pub(super) fn run() -> ! {
    let status = match serve() {
        // The harness is gone, or has ended the conversation; a broken pipe says the same.
        Ok(()) | Err(ServeError::Closed | ServeError::Io(_)) => 0,
        Err(error) => {
            eprintln!("gridassay: {error}");
            70
        }
    };
    std::process::exit(status)
}

fn serve() -> Result<(), ServeError> {
    let (reader, writer) = own_pipes()?;
    let mut frames = ChildFrames::new(reader, writer);
    let mut library = loop {
        let Some(message) = frames.receive()? else { return Ok(()) };
        let message = message?;
        let Body::Request { method, params } = &message.body else { continue };
        let id = message.id.clone();
        if method != "load" {
            frames.send(&Outgoing::refusal(id, &SchemeError::NotPrepared))?;
            continue;
        }
        let params = message.restored(params);
        let path = params["path"].as_str().unwrap_or_default().to_owned();
        match Library::load(Path::new(&path), params["name"].as_str()) {
            Ok(library) => {
                let answer = json!({"flush_to_zero": library.flush_to_zero()});
                frames.send(&Outgoing::answer(id, answer, Arrays::default()))?;
                break library;
            }
            Err(error) => frames.send(&Outgoing::refusal(id, &SchemeError::Failed(error.to_string())))?,
        }
    };
    serve_over(&mut library, &mut frames)
}

/// Keeps the pipes of the conversation, and gives the library others: what it prints goes to stderr, what it reads is empty.
fn own_pipes() -> Result<(File, File), ServeError> {
    let keep = |fd: std::os::fd::BorrowedFd<'_>| -> std::io::Result<OwnedFd> { fd.try_clone_to_owned() };
    let (reader, writer) = (keep(rustix::stdio::stdin())?, keep(rustix::stdio::stdout())?);
    let nothing = File::open("/dev/null")?;
    rustix::stdio::dup2_stdin(&nothing).map_err(std::io::Error::from)?;
    rustix::stdio::dup2_stdout(rustix::stdio::stderr()).map_err(std::io::Error::from)?;
    Ok((File::from(reader), File::from(writer)))
}
