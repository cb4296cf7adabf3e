//! What a scheme prints beside the conversation: its stderr, read all the time, so that a full pipe never stops it.

use std::os::fd::OwnedFd;
use std::sync::{Arc, Mutex, MutexGuard, PoisonError};
use std::thread::JoinHandle;

use rustix::event::{PollFd, PollFlags, poll};

use super::tail::Tail;

/// Most pieces that are read at once: a scheme that floods its stderr must not hold up who asks for the log.
const PIECES: usize = 256;

/// The log of one process.
pub(super) struct Log {
    shared: Arc<Shared>,
    reader: Option<JoinHandle<()>>,
}

struct Shared {
    stderr: OwnedFd,
    tail: Mutex<Tail>,
}

impl Log {
    /// Begins to read.
    pub fn of(stderr: OwnedFd) -> Result<Self, rustix::io::Errno> {
        rustix::io::ioctl_fionbio(&stderr, true)?;
        let shared = Arc::new(Shared { stderr, tail: Mutex::default() });
        let reading = Arc::clone(&shared);
        let reader = Some(std::thread::spawn(move || reading.read()));
        Ok(Self { shared, reader })
    }

    /// Adds a line of stdout that is no message.
    pub fn push(&self, line: &[u8]) {
        self.shared.now().push(line);
    }

    /// The last lines. What the scheme has written before it answered is among them: the pipe is emptied first.
    pub fn text(&self) -> String {
        self.shared.now().text()
    }

    /// What was printed until now belongs to the start of the process and stays; later lines can be forgotten.
    pub fn started(&self) {
        self.shared.now().started();
    }

    /// Forgets what was printed since the start.
    pub fn forget(&self) {
        self.shared.now().forget();
    }

    /// Whether the reader has not been waited for.
    pub fn is_open(&self) -> bool {
        self.reader.is_some()
    }

    /// Waits for the end of the stream, once every process that could write to it is gone.
    pub fn close(&mut self) {
        if let Some(reader) = self.reader.take() {
            let _ = reader.join();
        }
    }
}

impl Shared {
    fn read(&self) {
        loop {
            let mut fds = [PollFd::new(&self.stderr, PollFlags::IN)];
            if let Err(error) = poll(&mut fds, None)
                && error != rustix::io::Errno::INTR
            {
                return;
            }
            if !self.drain(&mut self.lock()) {
                return;
            }
        }
    }

    /// The log with all that has been written so far.
    fn now(&self) -> MutexGuard<'_, Tail> {
        let mut tail = self.lock();
        self.drain(&mut tail);
        tail
    }

    /// Reads what there is; false at the end of the stream.
    fn drain(&self, tail: &mut Tail) -> bool {
        let mut buffer = [0u8; 1 << 13];
        for _ in 0..PIECES {
            match rustix::io::read(&self.stderr, &mut buffer) {
                Ok(0) => return false,
                Ok(count) => tail.push(&buffer[..count]),
                Err(rustix::io::Errno::INTR) => {}
                Err(rustix::io::Errno::AGAIN) => return true,
                Err(_) => return false,
            }
        }
        true
    }

    fn lock(&self) -> MutexGuard<'_, Tail> {
        self.tail.lock().unwrap_or_else(PoisonError::into_inner)
    }
}
