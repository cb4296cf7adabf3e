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
            if let Some(found) = memchr(b'\n', &self.process.input[searched..]) {
                let end = searched + found + 1;
                let rest = self.process.input.split_off(end);
                return Ok(Some(std::mem::replace(&mut self.process.input, rest)));
            }
            searched = self.process.input.len();
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
            match frames::needed(&self.process.input)? {
                Some(size) if self.process.input.len() >= size => {
                    let rest = self.process.input.split_off(size);
                    let frame = std::mem::replace(&mut self.process.input, rest);
                    return Ok(Some(frames::message(frame)));
                }
                Some(size) if size as u64 > self.process.message_limit() => {
                    return Err(FaultKind::TooLong { limit: self.process.message_limit() });
                }
                Some(size) => {
                    let missing = size - self.process.input.len();
                    self.process.input.reserve_exact(missing);
                }
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
