//! The guard: a process between the harness and a scheme that leaves nothing running.
//!
//! It is the subreaper of everything that the scheme starts, so that also a grandchild that left the process group (setsid,
//! double fork) stays its descendant. It ends them all when the scheme ends, when the harness asks, and when the harness is
//! gone, however that came: a socket to the harness then reads as closed. It sets the memory limit on itself before the
//! scheme is started, which inherits it; a hook between fork and exec would cost a copy of the harness's memory.

use std::ffi::OsString;
use std::io::{Read, Write};
use std::os::fd::{AsFd, FromRawFd, OwnedFd};
use std::os::unix::net::UnixStream;
use std::os::unix::process::{CommandExt, ExitStatusExt};
use std::process::{Child, Command, ExitStatus};
use std::time::{Duration, Instant};

use rustix::event::{PollFd, PollFlags, Timespec, poll};
use rustix::process::{
    Pid, PidfdFlags, Resource, Rlimit, Signal, WaitOptions, kill_process, kill_process_group, pidfd_open, setrlimit,
    wait,
};
use serde::{Deserialize, Serialize};

use super::descendants::descendants;

/// The hidden first argument.
pub(super) const ARGUMENT: &str = "__guard";

/// How long a scheme may take to leave after SIGTERM.
const GRACE: Duration = Duration::from_millis(300);
/// How often the number of processes is looked at, where it is limited.
const COUNT_EVERY: Duration = Duration::from_millis(50);

/// What the guard is told, as one argument.
#[derive(Debug, Serialize, Deserialize)]
pub(super) struct Orders {
    /// The descriptor of the socket to the harness.
    pub control: i32,
    /// Bytes of address space of each process.
    pub memory: Option<u64>,
    /// Processes at once.
    pub processes: Option<u32>,
}

/// What the guard tells the harness when the scheme has ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub(super) enum Report {
    /// It could not be started: the system's error number.
    NotStarted(i32),
    /// It left by itself.
    Exited(i32),
    /// It was ended by a signal.
    Signalled(i32),
    /// It had too many processes.
    TooManyProcesses(u32),
}

/// Runs as guard: `__guard ORDERS PROGRAM ARGUMENTS...`.
pub(super) fn run(arguments: Vec<OsString>) -> ! {
    let status = match guard(arguments) {
        Ok(()) => 0,
        Err(error) => {
            eprintln!("gridassay: the guard of a scheme failed: {error}");
            70
        }
    };
    std::process::exit(status)
}

fn guard(arguments: Vec<OsString>) -> Result<(), Box<dyn std::error::Error>> {
    let mut arguments = arguments.into_iter();
    let text = arguments.next().ok_or("it was given no orders")?;
    let orders: Orders = serde_json::from_str(text.to_str().ok_or("its orders are no text")?)?;
    // SAFETY: the harness opened this descriptor for the guard alone, and nothing else here knows it.
    let control = unsafe { OwnedFd::from_raw_fd(orders.control) };
    rustix::io::fcntl_setfd(&control, rustix::io::FdFlags::CLOEXEC)?;
    let mut control = UnixStream::from(control);
    rustix::process::set_child_subreaper(Some(rustix::process::getpid()))?;
    if let Some(memory) = orders.memory {
        setrlimit(Resource::As, Rlimit { current: Some(memory), maximum: Some(memory) })?;
    }
    let program = arguments.next().ok_or("it was given no program")?;
    let child = match Command::new(program).args(arguments).process_group(0).spawn() {
        Ok(child) => child,
        Err(error) => return report(&mut control, Report::NotStarted(error.raw_os_error().unwrap_or(0))),
    };
    // The pipes belong to the scheme alone: the harness must see when it closes them.
    let nothing = std::fs::File::options().read(true).write(true).open("/dev/null")?;
    rustix::stdio::dup2_stdin(&nothing)?;
    rustix::stdio::dup2_stdout(&nothing)?;
    rustix::stdio::dup2_stderr(&nothing)?;
    let outcome = watch(child, &mut control, orders.processes);
    end_descendants();
    report(&mut control, outcome?)
}

fn report(control: &mut UnixStream, report: Report) -> Result<(), Box<dyn std::error::Error>> {
    // A harness that is gone needs no report.
    let _ = control.write_all(serde_json::to_string(&report)?.as_bytes());
    Ok(())
}

/// Waits for the scheme's end, or brings it about.
fn watch(mut child: Child, control: &mut UnixStream, limit: Option<u32>) -> std::io::Result<Report> {
    let pid = Pid::from_child(&child);
    let pidfd = pidfd_open(pid, PidfdFlags::empty())?;
    loop {
        let timeout = limit.map(|_| COUNT_EVERY);
        let [harness_speaks, ended] = ready(control, &pidfd, timeout)?;
        if ended {
            return Ok(outcome(child.wait()?));
        }
        if harness_speaks {
            // One byte asks for the end; end of file says that the harness is gone.
            let _ = control.read(&mut [0u8; 1]);
            end_group(pid, control, &pidfd)?;
            return Ok(outcome(child.wait()?));
        }
        if let Some(limit) = limit {
            let found = descendants(std::process::id()).len() as u32;
            if found > limit {
                let _ = kill_process_group(pid, Signal::KILL);
                child.wait()?;
                return Ok(Report::TooManyProcesses(found));
            }
        }
    }
}

/// Whether the socket and the process have something to say, after at most `timeout`.
fn ready(control: &UnixStream, pidfd: &OwnedFd, timeout: Option<Duration>) -> std::io::Result<[bool; 2]> {
    let mut fds = [PollFd::new(control, PollFlags::IN), PollFd::from_borrowed_fd(pidfd.as_fd(), PollFlags::IN)];
    let timeout = timeout.map(|time| Timespec { tv_sec: time.as_secs() as i64, tv_nsec: time.subsec_nanos().into() });
    match poll(&mut fds, timeout.as_ref()) {
        Ok(_) => Ok([!fds[0].revents().is_empty(), !fds[1].revents().is_empty()]),
        Err(rustix::io::Errno::INTR) => Ok([false; 2]),
        Err(error) => Err(error.into()),
    }
}

/// The polite signal, a while of patience, then the one that cannot be ignored.
fn end_group(pid: Pid, control: &UnixStream, pidfd: &OwnedFd) -> std::io::Result<()> {
    let _ = kill_process_group(pid, Signal::TERM);
    let until = Instant::now() + GRACE;
    while let Some(left) = until.checked_duration_since(Instant::now()) {
        if ready(control, pidfd, Some(left.min(Duration::from_millis(10))))?[1] {
            break;
        }
        std::thread::sleep(Duration::from_millis(2));
    }
    let _ = kill_process_group(pid, Signal::KILL);
    Ok(())
}

/// Ends whatever the scheme has left behind, until there is nothing any more.
fn end_descendants() {
    loop {
        for process in descendants(std::process::id()) {
            if let Some(pid) = Pid::from_raw(process as i32) {
                let _ = kill_process(pid, Signal::KILL);
            }
        }
        loop {
            match wait(WaitOptions::NOHANG) {
                Ok(Some(_)) => {}
                // Somebody is dying, or was started between the look and the signal.
                Ok(None) => break std::thread::sleep(Duration::from_millis(1)),
                Err(_) => return,
            }
        }
    }
}

fn outcome(status: ExitStatus) -> Report {
    match status.code() {
        Some(code) => Report::Exited(code),
        None => Report::Signalled(status.signal().unwrap_or(0)),
    }
}
