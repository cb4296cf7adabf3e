//! What can be wrong with a message.

use super::ArrayError;

/// A message that breaks the rules of the conversation. The sentences name the place, what was found and the remedy.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum MessageError {
    /// A line that begins like a message and is no JSON.
    #[error("a line on stdout begins with `{{` and is no JSON ({reason}): `{excerpt}`; write one whole message a line")]
    NotJson {
        /// What the JSON reader said.
        reason: String,
        /// The beginning of the line.
        excerpt: String,
    },
    /// JSON that is no JSON-RPC 2.0 message.
    #[error("the message is no JSON-RPC 2.0: {reason}: `{excerpt}`")]
    NotRpc {
        /// Which rule is broken.
        reason: &'static str,
        /// The beginning of the message.
        excerpt: String,
    },
    /// More arrays, or a longer text beside the arrays, than any message of the contract has.
    #[error("the message holds {what}; no message of the contract does")]
    TooMuch {
        /// What there is too much of.
        what: &'static str,
    },
    /// A key that must be there.
    #[error("{place} lacks `{key}`; add it")]
    Missing {
        /// Where it was looked for.
        place: String,
        /// The key.
        key: String,
    },
    /// A key that the contract does not know.
    #[error("{place} has `{key}`, which is not asked for; expected: {expected}")]
    Unknown {
        /// Where it was found.
        place: String,
        /// The key.
        key: String,
        /// What may stand there.
        expected: String,
    },
    /// A value of the wrong type.
    #[error("{place} is {found}, not {expected}")]
    WrongType {
        /// Where it was found.
        place: String,
        /// What was found.
        found: String,
        /// What the contract asks for.
        expected: &'static str,
    },
    /// An array of the wrong length.
    #[error("{place} has {found} values where {expected} are needed")]
    WrongLength {
        /// Which array.
        place: String,
        /// How many values are needed.
        expected: usize,
        /// How many were found.
        found: usize,
    },
    /// An array that cannot be read.
    #[error("{place} cannot be read: {source}")]
    Array {
        /// Which array.
        place: String,
        /// What is wrong with it.
        source: ArrayError,
    },
    /// An object that does not fit the contract.
    #[error("{place} does not fit the contract: {reason}")]
    Misfit {
        /// Which object.
        place: String,
        /// What the reader said.
        reason: String,
    },
}

/// The beginning of a text for people: at most 120 characters, control characters as escapes.
pub(crate) fn excerpt(text: &[u8]) -> String {
    const LONGEST: usize = 120;
    // Four bytes are the most that a character takes.
    let text = String::from_utf8_lossy(&text[..text.len().min(4 * LONGEST + 4)]);
    let mut short = String::new();
    for character in text.chars().take(LONGEST) {
        if character.is_control() { short.extend(character.escape_default()) } else { short.push(character) }
    }
    if text.chars().nth(LONGEST).is_some() {
        short.push_str("...");
    }
    short
}
