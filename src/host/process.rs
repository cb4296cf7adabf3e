//! A scheme's process under its guard: pipes with time limits, stderr read all the time, and a sure end.

use std::ffi::OsString;
use std::io::{self, Read, Write};
use std::os::fd::{AsFd, AsRawFd, OwnedFd};
use std::os::unix::net::UnixStream;
use std::os::unix::process::CommandExt;
use std::path::Path;
use std::process::{Child, Command, Stdio};
use std::sync::{Mutex, MutexGuard, PoisonError};
use std::time::{Duration, Instant};

use rustix::event::{PollFd, PollFlags, Timespec, poll};
use rustix::process::{Pid, PidfdFlags, pidfd_open};

use super::guard::{self, Orders, Report};
use super::inbox::Inbox;
use super::log::Log;
use super::signals;
use super::{FaultKind, Limits};

/// Pipes hold 64 KiB by default; a larger one halves the switches between the two processes for large arrays.
const PIPE_SIZE: usize = 1 << 20;
/// How long a scheme may take to leave once its stdin is closed.
const LEAVE: Duration = Duration::from_secs(2);
/// How long the guard may take to end everything once it is asked.
const END: Duration = Duration::from_secs(10);
/// How long the end of a scheme may follow the end of its output.
const REPORT: Duration = Duration::from_millis(500);

/// The guard's descriptor is inheritable from its making to the guard's start; one start at a time keeps it from other children.
static STARTING: Mutex<()> = Mutex::new(());

pub(super) struct Process {
    guard: Child,
    control: UnixStream,
    stdin: Option<OwnedFd>,
    stdout: OwnedFd,
    log: Log,
    /// What was read and not yet taken.
    inbox: Inbox,
    limits: Limits,
    deadline: Instant,
    limit: (Duration, &'static str),
    what: &'static str,
    report: Option<Report>,
}

impl Process {
    /// Starts `command` in `folder` under a guard, which is the program `executable`.
    pub fn start(executable: &Path, command: &[OsString], folder: &Path, limits: Limits) -> Result<Self, FaultKind> {
        if command.is_empty() {
            let reason = io::Error::new(io::ErrorKind::InvalidInput, "the command is empty");
            return Err(FaultKind::NotStarted { reason, remedy: "name a program" });
        }
        let (control, theirs) = UnixStream::pair().map_err(FaultKind::System)?;
        let orders = Orders { control: theirs.as_raw_fd(), memory: limits.memory, processes: limits.processes };
        let orders = serde_json::to_string(&orders).expect("orders are plain data");
        let mut builder = Command::new(executable);
        builder.arg(guard::ARGUMENT).arg(orders).args(command).current_dir(folder).process_group(0);
        builder.stdin(Stdio::piped()).stdout(Stdio::piped()).stderr(Stdio::piped());
        let spawned = {
            let _one_at_a_time = lock(&STARTING);
            rustix::io::fcntl_setfd(&theirs, rustix::io::FdFlags::empty()).map_err(system)?;
            let spawned = builder.spawn();
            drop(theirs);
            spawned
        };
        let mut guard = spawned.map_err(|reason| not_started(reason, folder))?;
        let stdin = OwnedFd::from(guard.stdin.take().expect("stdin was piped"));
        let stdout = OwnedFd::from(guard.stdout.take().expect("stdout was piped"));
        let stderr = OwnedFd::from(guard.stderr.take().expect("stderr was piped"));
        for pipe in [&stdin, &stdout] {
            rustix::io::ioctl_fionbio(pipe, true).map_err(system)?;
            // A system that grants less is slower and not wrong.
            let _ = rustix::pipe::fcntl_setpipe_size(pipe, PIPE_SIZE);
        }
        let log = Log::of(stderr).map_err(system)?;
        let mut process = Self {
            guard,
            control,
            stdin: Some(stdin),
            stdout,
            log,
            inbox: Inbox::default(),
            limits,
            deadline: Instant::now(),
            limit: (limits.start, "start_limit"),
            what: "start",
            report: None,
        };
        process.allow_start();
        Ok(process)
    }

    /// The clock of start-up begins.
    fn allow_start(&mut self) {
        self.allow(self.limits.start, "start_limit", "answer `describe`");
    }

    /// The clock of a request begins.
    pub fn allow_request(&mut self) {
        self.allow(self.limits.request, "time_limit", "answer");
    }

    fn allow(&mut self, limit: Duration, key: &'static str, what: &'static str) {
        self.deadline = Instant::now() + limit;
        self.limit = (limit, key);
        self.what = what;
    }

    /// Time that the harness itself took is given back.
    pub fn give_back(&mut self, time: Duration) {
        self.deadline += time;
    }

    /// What the scheme has written and nobody has taken yet.
    pub fn pending(&self) -> &[u8] {
        self.inbox.pending()
    }

    /// Takes the first `count` of these bytes.
    pub fn take(&mut self, count: usize) -> Vec<u8> {
        self.inbox.take(count)
    }

    /// Makes room for `count` bytes that are known to come.
    pub fn expect(&mut self, count: usize) {
        self.inbox.expect(count);
    }

    pub fn message_limit(&self) -> u64 {
        self.limits.message
    }

    /// Writes all of `parts`, reading what comes meanwhile, so that two full pipes cannot block each other.
    pub fn write(&mut self, parts: &[&[u8]]) -> Result<(), FaultKind> {
        for part in parts {
            let mut rest: &[u8] = part;
            while !rest.is_empty() {
                let Some(stdin) = &self.stdin else { return Err(FaultKind::ClosedPipe { pipe: "stdin" }) };
                match rustix::io::write(stdin, rest) {
                    Ok(written) => rest = &rest[written..],
                    Err(rustix::io::Errno::AGAIN) => self.wait(true)?,
                    Err(rustix::io::Errno::INTR) => {}
                    Err(rustix::io::Errno::PIPE) => return Err(self.closed("stdin")),
                    Err(error) => return Err(system(error)),
                }
            }
        }
        Ok(())
    }

    /// Reads what there is, waiting for it; false at end of file.
    pub fn read(&mut self) -> Result<bool, FaultKind> {
        loop {
            // A scheme that writes without end leaves nothing to wait for, and must not outrun the clock.
            if Instant::now() >= self.deadline {
                return Err(self.timed_out());
            }
            match self.read_now()? {
                Some(0) => return Ok(false),
                Some(_) => return Ok(true),
                None => self.wait(false)?,
            }
        }
    }

    fn read_now(&mut self) -> Result<Option<usize>, FaultKind> {
        match rustix::io::read(&self.stdout, rustix::buffer::spare_capacity(self.inbox.room())) {
            Ok(count) => Ok(Some(count)),
            Err(rustix::io::Errno::AGAIN | rustix::io::Errno::INTR) => Ok(None),
            Err(error) => Err(system(error)),
        }
    }

    /// Waits until something can be read (or written, where `write`); what can be read meanwhile is read.
    fn wait(&mut self, write: bool) -> Result<(), FaultKind> {
        let left = self.deadline.saturating_duration_since(Instant::now());
        if left.is_zero() {
            return Err(self.timed_out());
        }
        let timeout = Timespec { tv_sec: left.as_secs() as i64, tv_nsec: left.subsec_nanos().into() };
        let mut fds = vec![PollFd::from_borrowed_fd(self.stdout.as_fd(), PollFlags::IN)];
        if let (true, Some(stdin)) = (write, &self.stdin) {
            fds.push(PollFd::from_borrowed_fd(stdin.as_fd(), PollFlags::OUT));
        }
        let count = match poll(&mut fds, Some(&timeout)) {
            Ok(count) => count,
            Err(rustix::io::Errno::INTR) => 1,
            Err(error) => return Err(system(error)),
        };
        if count == 0 {
            return Err(self.timed_out());
        }
        if write && !fds[0].revents().is_empty() {
            let ended = self.read_now()? == Some(0);
            if ended {
                return Err(self.closed("stdout"));
            }
            if self.inbox.pending().len() as u64 > self.limits.message {
                return Err(FaultKind::TooLong { limit: self.limits.message });
            }
        }
        Ok(())
    }

    fn timed_out(&mut self) -> FaultKind {
        // A limit of processes or a crash may be what silenced it.
        if let Some(kind) = self.await_report(Duration::ZERO).and_then(|report| self.reported(report)) {
            return kind;
        }
        FaultKind::TimedOut { what: self.what, limit: self.limit.0, key: self.limit.1 }
    }

    /// What to say of a pipe that the scheme has closed: how it ended, or that it is still running.
    pub fn closed(&mut self, pipe: &'static str) -> FaultKind {
        match self.await_report(REPORT) {
            Some(report) => self.reported(report).unwrap_or(FaultKind::ClosedPipe { pipe }),
            None => FaultKind::ClosedPipe { pipe },
        }
    }

    fn reported(&self, report: Report) -> Option<FaultKind> {
        Some(match report {
            Report::NotStarted(number) => not_started(io::Error::from_raw_os_error(number), Path::new("")),
            Report::Exited(status) => FaultKind::Exited { status },
            Report::Signalled(signal) => signals::fault(signal, self.limits.memory),
            Report::TooManyProcesses(found) => {
                FaultKind::TooManyProcesses { found, limit: self.limits.processes.unwrap_or(0) }
            }
        })
    }

    /// The guard's report, where it comes within `patience`.
    fn await_report(&mut self, patience: Duration) -> Option<Report> {
        if self.report.is_none() {
            let patience = patience.max(Duration::from_millis(1));
            self.control.set_read_timeout(Some(patience)).ok()?;
            let mut text = [0u8; 256];
            let length = self.control.read(&mut text).ok()?;
            self.report = serde_json::from_slice(&text[..length]).ok();
        }
        self.report
    }

    /// Keeps a line of stdout that is no message with the log.
    pub fn log(&self, line: &[u8]) {
        self.log.push(line);
    }

    pub fn forget_log(&self) {
        self.log.forget();
    }

    /// What was printed so far belongs to the start of the process.
    pub fn has_started(&self) {
        self.log.started();
    }

    pub fn stderr_tail(&self) -> String {
        self.log.text()
    }

    /// Ends the process and everything that it started: politely by closing its stdin where `polite`, else at once.
    pub fn end(&mut self, polite: bool) {
        self.stdin = None;
        if !(polite && self.guard_leaves(LEAVE)) {
            let _ = self.control.write_all(b"T");
            if !self.guard_leaves(END) {
                let _ = self.guard.kill();
            }
        }
        let _ = self.guard.wait();
        // The guard has ended every process that could hold the other end, so that the reader comes to the end of file.
        self.log.close();
    }

    /// Whether the guard has left within `patience`. Output that still comes is thrown away: it may be what keeps the scheme.
    fn guard_leaves(&mut self, patience: Duration) -> bool {
        let Ok(pidfd) = pidfd_open(Pid::from_child(&self.guard), PidfdFlags::empty()) else { return false };
        let until = Instant::now() + patience;
        let mut open = true;
        loop {
            let left = until.saturating_duration_since(Instant::now());
            let timeout = Timespec { tv_sec: left.as_secs() as i64, tv_nsec: left.subsec_nanos().into() };
            let mut fds = vec![PollFd::new(&pidfd, PollFlags::IN)];
            if open {
                fds.push(PollFd::from_borrowed_fd(self.stdout.as_fd(), PollFlags::IN));
            }
            let _ = poll(&mut fds, Some(&timeout));
            if !fds[0].revents().is_empty() {
                return true;
            }
            if left.is_zero() {
                return false;
            }
            if open && !fds[1].revents().is_empty() {
                self.inbox.clear();
                open = !matches!(self.read_now(), Ok(Some(0)) | Err(_));
            }
        }
    }
}

impl Drop for Process {
    fn drop(&mut self) {
        if matches!(self.guard.try_wait(), Ok(None)) || self.log.is_open() {
            self.end(true);
        }
    }
}

fn lock<T>(mutex: &Mutex<T>) -> MutexGuard<'_, T> {
    mutex.lock().unwrap_or_else(PoisonError::into_inner)
}

fn system(error: rustix::io::Errno) -> FaultKind {
    FaultKind::System(error.into())
}

fn not_started(reason: io::Error, folder: &Path) -> FaultKind {
    let remedy = match reason.kind() {
        _ if !folder.as_os_str().is_empty() && !folder.is_dir() => "its working folder does not exist",
        io::ErrorKind::NotFound => {
            "check the name of the program, and the interpreter in its first line if it is a script"
        }
        io::ErrorKind::PermissionDenied => {
            "make the file executable (chmod +x), or name its interpreter in the command"
        }
        io::ErrorKind::OutOfMemory => "raise `memory_limit`",
        _ if reason.raw_os_error() == Some(8) => "name the interpreter in the command, or begin the script with #!",
        _ => "try the command by hand",
    };
    FaultKind::NotStarted { reason, remedy }
}
