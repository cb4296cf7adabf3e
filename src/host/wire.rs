//! Messages over a process's pipes: lines of JSON for executables, binary frames for the plugin child.

use std::time::Duration;

use gridassay_scheme::ArrayEncoding;
use gridassay_scheme::conversation::{Message, MessageError, Outgoing, Transport};
use memchr::memchr;

use super::process::Process;
use super::{FaultKind, frames};

/// How messages are written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Form {
    /// One line of JSON each.
    Lines(ArrayEncoding),
    /// A head in JSON and raw arrays.
    Frames,
}

pub(super) struct Wire {
    pub process: Process,
    form: Form,
    buffer: Vec<u8>,
}

impl Wire {
    pub fn new(process: Process, form: Form) -> Self {
        Self { process, form, buffer: Vec::new() }
    }

    pub fn give_back(&mut self, time: Duration) {
        self.process.give_back(time);
    }

    fn line(&mut self) -> Result<Option<Vec<u8>>, FaultKind> {
        let mut searched = 0;
        loop {
            let pending = self.process.pending();
            if let Some(found) = memchr(b'\n', &pending[searched..]) {
                return Ok(Some(self.process.take(searched + found + 1)));
            }
            searched = pending.len();
            if searched as u64 > self.process.message_limit() {
                return Err(FaultKind::TooLong { limit: self.process.message_limit() });
            }
            if !self.process.read()? {
                return Ok(None);
            }
        }
    }

    fn frame(&mut self) -> Result<Option<Result<Message, MessageError>>, FaultKind> {
        loop {
            let pending = self.process.pending();
            let length = pending.len();
            match frames::needed(pending)? {
                Some(size) if length >= size => {
                    return Ok(Some(frames::message(self.process.take(size))));
                }
                Some(size) if size as u64 > self.process.message_limit() => {
                    return Err(FaultKind::TooLong { limit: self.process.message_limit() });
                }
                Some(size) => self.process.expect(size - length),
                None => {}
            }
            if !self.process.read()? {
                return Ok(None);
            }
        }
    }
}

impl Transport for Wire {
    type Error = FaultKind;

    fn receive(&mut self) -> Result<Option<Result<Message, MessageError>>, FaultKind> {
        if self.form == Form::Frames {
            return self.frame();
        }
        loop {
            match self.line()? {
                Some(line) if line.starts_with(b"{") => return Ok(Some(Message::from_line(line))),
                Some(line) => self.process.log(&line),
                None => return Ok(None),
            }
        }
    }

    fn send(&mut self, message: &Outgoing<'_>) -> Result<(), FaultKind> {
        self.buffer.clear();
        match self.form {
            Form::Lines(encoding) => message.write_line(encoding, &mut self.buffer),
            Form::Frames => frames::write(message, &mut self.buffer),
        }
        self.process.write(&[&self.buffer])
    }

    fn set_encoding(&mut self, encoding: ArrayEncoding) {
        if let Form::Lines(current) = &mut self.form {
            *current = encoding;
        }
    }
}
