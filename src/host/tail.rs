//! The last lines of what a scheme printed, in bounded memory.

use std::collections::VecDeque;

/// Most bytes that are kept.
const KEPT: usize = 16 << 10;
/// Most lines that are shown.
const LINES: usize = 12;
/// Most characters of a line that are shown.
const WIDTH: usize = 240;

/// The end of a stream of text.
#[derive(Debug, Default)]
pub(super) struct Tail {
    /// What was printed while the process started.
    start: VecDeque<u8>,
    /// What was printed since.
    since: VecDeque<u8>,
}

impl Tail {
    pub(super) fn push(&mut self, bytes: &[u8]) {
        let bytes = &bytes[bytes.len().saturating_sub(KEPT)..];
        self.since.extend(bytes);
        let excess = self.since.len().saturating_sub(KEPT);
        self.since.drain(..excess);
    }

    /// What was printed until now belongs to the start.
    pub(super) fn started(&mut self) {
        self.start.append(&mut self.since);
    }

    /// Forgets what was printed since the start.
    pub(super) fn forget(&mut self) {
        self.since.clear();
    }

    /// The last lines; control characters are shown as escapes, so that a terminal or a page obeys none of them.
    pub(super) fn text(&self) -> String {
        let bytes: Vec<u8> = self.start.iter().chain(&self.since).copied().collect();
        let text = String::from_utf8_lossy(&bytes);
        let lines: Vec<&str> = text.lines().filter(|line| !line.trim().is_empty()).collect();
        let shown: Vec<String> =
            lines[lines.len().saturating_sub(LINES)..].iter().map(|line| printable(line)).collect();
        shown.join("\n")
    }
}

fn printable(line: &str) -> String {
    let mut shown = String::new();
    for character in line.chars().take(WIDTH) {
        if character == '\t' {
            shown.push_str("    ");
        } else if character.is_control() {
            shown.extend(character.escape_default());
        } else {
            shown.push(character);
        }
    }
    if line.chars().nth(WIDTH).is_some() {
        shown.push_str("...");
    }
    shown
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_flood_leaves_its_last_lines_in_bounded_memory() {
        let mut tail = Tail::default();
        for line in 0..100_000 {
            tail.push(format!("line {line}\n").as_bytes());
        }
        assert!(tail.since.len() <= KEPT);
        assert!(tail.text().ends_with("line 99998\nline 99999"));
        assert_eq!(tail.text().lines().count(), LINES);
    }

    #[test]
    fn what_the_start_printed_stays_and_what_followed_can_be_forgotten() {
        let mut tail = Tail::default();
        tail.push(b"about to start\n");
        tail.started();
        tail.push(b"an earlier claim\n");
        tail.forget();
        tail.push(b"this claim\n");
        assert_eq!(tail.text(), "about to start\nthis claim");
    }

    #[test]
    fn control_characters_are_shown_and_not_obeyed() {
        let mut tail = Tail::default();
        tail.push(b"\x1b[31mred\x07\n");
        assert_eq!(tail.text(), "\\u{1b}[31mred\\u{7}");
    }
}
