//! Binary frames between the harness and the plugin child, two parts of the same program.
//!
//! `magic u32 | head length u32 | number of arrays u64 | length of each array u64 ... | head (JSON) | arrays (raw f64)`,
//! all little-endian. The head is that of a line, with `{"": k}` for array k.

use std::io::{BufReader, Read, Write};

use gridassay_scheme::conversation::{Message, MessageError, Outgoing, ServeError, Span, Transport};

use super::FaultKind;

const MAGIC: u32 = 0x4741_5331;
const FIXED: usize = 16;

/// Appends a frame.
pub(super) fn write(message: &Outgoing<'_>, out: &mut Vec<u8>) {
    let head = message.head();
    let lengths: Vec<usize> = message.lengths().collect();
    out.reserve(FIXED + 8 * lengths.len() + head.len() + 8 * lengths.iter().sum::<usize>());
    out.extend_from_slice(&MAGIC.to_le_bytes());
    out.extend_from_slice(&(head.len() as u32).to_le_bytes());
    out.extend_from_slice(&(lengths.len() as u64).to_le_bytes());
    lengths.iter().for_each(|length| out.extend_from_slice(&(*length as u64).to_le_bytes()));
    out.extend_from_slice(&head);
    message.write_payload(out).expect("writing to memory does not fail");
}

/// How many bytes the frame that `input` begins with has; `None` while that is not known.
pub(super) fn needed(input: &[u8]) -> Result<Option<usize>, FaultKind> {
    let Some(layout) = Layout::of(input)? else { return Ok(None) };
    Ok(Some(layout.end))
}

/// The message of a whole frame.
pub(super) fn message(frame: Vec<u8>) -> Result<Message, MessageError> {
    let Ok(Some(layout)) = Layout::of(&frame) else { return Err(MessageError::TooMuch { what: "less than a frame" }) };
    let head = frame[layout.head.clone()].to_vec();
    Message::from_head(&head, frame, layout.spans)
}

struct Layout {
    head: std::ops::Range<usize>,
    spans: Vec<Span>,
    end: usize,
}

impl Layout {
    fn of(input: &[u8]) -> Result<Option<Self>, FaultKind> {
        if input.len() < FIXED {
            return Ok(None);
        }
        let word = |at: usize| u64::from_le_bytes(input[at..at + 8].try_into().expect("eight bytes"));
        let broken =
            || FaultKind::Library { reason: "its child process wrote over the pipe to the harness".to_owned() };
        let (first, count) = (word(0), word(8) as usize);
        let (magic, head) = (first as u32, (first >> 32) as usize);
        if magic != MAGIC || count > 1 << 16 {
            return Err(broken());
        }
        let start = FIXED + 8 * count;
        if input.len() < start {
            return Ok(None);
        }
        let mut at = start + head;
        let mut spans = Vec::with_capacity(count);
        for index in 0..count {
            let bytes = word(FIXED + 8 * index).checked_mul(8).and_then(|bytes| usize::try_from(bytes).ok());
            let end = bytes.and_then(|bytes| at.checked_add(bytes)).ok_or_else(broken)?;
            spans.push(Span::Raw(at..end));
            at = end;
        }
        Ok(Some(Self { head: start..start + head, spans, end: at }))
    }
}

/// The child's end.
pub(super) struct ChildFrames<R, W> {
    reader: BufReader<R>,
    writer: W,
    buffer: Vec<u8>,
}

impl<R: Read, W: Write> ChildFrames<R, W> {
    pub fn new(reader: R, writer: W) -> Self {
        Self { reader: BufReader::with_capacity(1 << 16, reader), writer, buffer: Vec::new() }
    }

    fn extend(&mut self, frame: &mut Vec<u8>, size: usize) -> Result<bool, ServeError> {
        let missing = (size - frame.len()) as u64;
        frame.reserve_exact(missing as usize);
        Ok(self.reader.by_ref().take(missing).read_to_end(frame)? as u64 == missing)
    }
}

impl<R: Read, W: Write> Transport for ChildFrames<R, W> {
    type Error = ServeError;

    fn receive(&mut self) -> Result<Option<Result<Message, MessageError>>, ServeError> {
        let mut frame = Vec::new();
        let mut size = FIXED;
        loop {
            if !self.extend(&mut frame, size)? {
                return Ok(None);
            }
            let layout = Layout::of(&frame).map_err(|_| ServeError::Closed)?;
            size = match layout {
                Some(layout) if layout.end == frame.len() => return Ok(Some(message(frame))),
                Some(layout) => layout.end,
                None => {
                    let count = u64::from_le_bytes(frame[8..16].try_into().expect("eight bytes"));
                    FIXED + 8 * count as usize
                }
            };
        }
    }

    fn send(&mut self, message: &Outgoing<'_>) -> Result<(), ServeError> {
        self.buffer.clear();
        write(message, &mut self.buffer);
        self.writer.write_all(&self.buffer)?;
        Ok(self.writer.flush()?)
    }
}
