//! What carries messages: here lines on a reader and a writer, for schemes; the harness brings its own with time limits.

use std::io::{self, BufRead, Write};

use super::{Message, MessageError, Outgoing};
use crate::ArrayEncoding;

/// Carries messages between a scheme and the harness.
pub trait Transport {
    /// What can go wrong besides a message that breaks the rules.
    type Error: From<MessageError>;

    /// The next message; `None` where the other side has closed the conversation.
    ///
    /// # Errors
    /// The carrier's own, or a message that breaks the rules.
    fn receive(&mut self) -> Result<Option<Result<Message, MessageError>>, Self::Error>;

    /// Sends a message.
    ///
    /// # Errors
    /// The carrier's own.
    fn send(&mut self, message: &Outgoing<'_>) -> Result<(), Self::Error>;

    /// How arrays are written from now on; carriers with one form of their own ignore it.
    fn set_encoding(&mut self, _encoding: ArrayEncoding) {}
}

/// One message a line.
#[derive(Debug)]
pub struct Lines<R, W> {
    reader: R,
    writer: W,
    encoding: ArrayEncoding,
    buffer: Vec<u8>,
}

impl<R: BufRead, W: Write> Lines<R, W> {
    /// Reads from `reader`, writes to `writer`; arrays are text until told otherwise.
    pub fn new(reader: R, writer: W) -> Self {
        Self { reader, writer, encoding: ArrayEncoding::Text, buffer: Vec::new() }
    }
}

impl<R: BufRead, W: Write> Transport for Lines<R, W> {
    type Error = super::ServeError;

    fn receive(&mut self) -> Result<Option<Result<Message, MessageError>>, Self::Error> {
        loop {
            let mut line = Vec::new();
            if self.reader.read_until(b'\n', &mut line)? == 0 {
                return Ok(None);
            }
            if line.starts_with(b"{") {
                return Ok(Some(Message::from_line(line)));
            }
        }
    }

    fn send(&mut self, message: &Outgoing<'_>) -> Result<(), Self::Error> {
        self.buffer.clear();
        message.write_line(self.encoding, &mut self.buffer);
        self.writer.write_all(&self.buffer)?;
        self.writer.flush()?;
        Ok(())
    }

    fn set_encoding(&mut self, encoding: ArrayEncoding) {
        self.encoding = encoding;
    }
}

/// A line on the way out that is longer than memory allows would be an `io::Error`, never a panic.
impl From<io::Error> for super::ServeError {
    fn from(error: io::Error) -> Self {
        Self::Io(error)
    }
}
