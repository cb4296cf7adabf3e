//! Splits a line into a small JSON head and the arrays that stand in it.
//!
//! A list of numbers, or a long string, is replaced in the head by `{"": k}`, k its number. A line of 200 MB costs one pass at
//! the speed of memory, after which a JSON reader sees a few hundred characters.

use std::ops::Range;

use memchr::{memchr2, memchr3};

use super::MessageError;

/// An array that was lifted out of a message, as a range of its buffer.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Span {
    /// A list with its brackets.
    List(Range<usize>),
    /// A string without its quotes.
    Quoted(Range<usize>),
    /// Raw little-endian f64.
    Raw(Range<usize>),
}

/// Strings shorter than this stay in the head.
const LONG_STRING: usize = 256;
/// A message of the contract has at most a few dozen arrays; the bound keeps a hostile line from growing many times in memory.
const MOST_ARRAYS: usize = 1 << 16;
/// Bound on the text beside the arrays, for the same reason.
const LONGEST_HEAD: usize = 16 << 20;

/// The head of `line`, and what was lifted out of it.
pub(super) fn lift(line: &[u8]) -> Result<(Vec<u8>, Vec<Span>), MessageError> {
    let (mut head, mut spans) = (Vec::with_capacity(256), Vec::new());
    let (mut at, mut copied) = (0, 0);
    while let Some(found) = memchr2(b'"', b'[', &line[at..]) {
        let start = at + found;
        let quoted = line[start] == b'"';
        let span = if quoted { string_at(line, start) } else { list_at(line, start) };
        at = match span {
            Lifted::No(next) => {
                push_head(&mut head, &line[copied..start]);
                // Strings are copied as they are; only what stands between them may hold the tokens of other languages.
                head.extend_from_slice(&line[start..next]);
                next
            }
            Lifted::Yes(span, next) => {
                push_head(&mut head, &line[copied..start]);
                head.extend_from_slice(format!("{{\"\":{}}}", spans.len()).as_bytes());
                spans.push(span);
                next
            }
        };
        copied = at;
        if spans.len() > MOST_ARRAYS {
            return Err(MessageError::TooMuch { what: "more than 65536 lists" });
        }
        if head.len() > LONGEST_HEAD {
            return Err(MessageError::TooMuch { what: "more than 16 MiB of text beside its arrays" });
        }
    }
    if head.len() + line.len() - copied > LONGEST_HEAD {
        return Err(MessageError::TooMuch { what: "more than 16 MiB of text beside its arrays" });
    }
    push_head(&mut head, &line[copied..]);
    Ok((head, spans))
}

/// What stands at a place: something to lift, or not; and where to go on.
enum Lifted {
    Yes(Span, usize),
    No(usize),
}

fn string_at(line: &[u8], start: usize) -> Lifted {
    let (mut at, mut escaped) = (start + 1, false);
    loop {
        match memchr2(b'"', b'\\', &line[at..]) {
            None => return Lifted::No(line.len()),
            Some(found) if line[at + found] == b'\\' => {
                escaped = true;
                at = (at + found + 2).min(line.len());
            }
            Some(found) => {
                let end = at + found;
                let long = end - start > LONG_STRING && !escaped;
                return if long { Lifted::Yes(Span::Quoted(start + 1..end), end + 1) } else { Lifted::No(end + 1) };
            }
        }
    }
}

fn list_at(line: &[u8], start: usize) -> Lifted {
    let inner = start + 1;
    let first = line[inner..].iter().find(|byte| !byte.is_ascii_whitespace());
    if !matches!(first, Some(b'0'..=b'9' | b'-' | b'N' | b'I' | b'n' | b']')) {
        return Lifted::No(inner);
    }
    match memchr3(b']', b'[', b'"', &line[inner..]) {
        Some(found) if line[inner + found] == b']' => {
            let end = inner + found + 1;
            Lifted::Yes(Span::List(start..end), end)
        }
        _ => Lifted::No(inner),
    }
}

/// Copies text between strings, with the tokens for what is not finite (which several languages write, and JSON has not) as null.
fn push_head(head: &mut Vec<u8>, mut text: &[u8]) {
    while let Some(found) = memchr2(b'N', b'I', text) {
        let token = [&b"NaN"[..], b"Infinity"].into_iter().find(|token| text[found..].starts_with(token));
        let Some(token) = token else { break };
        let sign = usize::from(found > 0 && text[found - 1] == b'-');
        head.extend_from_slice(&text[..found - sign]);
        head.extend_from_slice(b"null");
        text = &text[found + token.len()..];
    }
    head.extend_from_slice(text);
}

#[cfg(test)]
mod tests {
    use super::*;

    fn head(line: &str) -> (String, Vec<String>) {
        let (head, spans) = lift(line.as_bytes()).unwrap();
        let text = |span: &Span| match span {
            Span::List(range) | Span::Quoted(range) | Span::Raw(range) => line[range.clone()].to_owned(),
        };
        (String::from_utf8(head).unwrap(), spans.iter().map(text).collect())
    }

    #[test]
    fn lists_of_numbers_are_lifted_and_nothing_else() {
        let (text, lists) = head(r#"{"a":[1, NaN],"b":["x","[1]"],"c":[[1],[]],"d":[{"e":[2]}],"f":"\"[3]"}"#);
        assert_eq!(text, r#"{"a":{"":0},"b":["x","[1]"],"c":[{"":1},{"":2}],"d":[{"e":{"":3}}],"f":"\"[3]"}"#);
        assert_eq!(lists, ["[1, NaN]", "[1]", "[]", "[2]"]);
    }

    #[test]
    fn tokens_outside_strings_become_null() {
        let (text, _) = head(r#"{"a": NaN, "NaN": "Infinity", "b": -Infinity, "c":Infinity, "d": Nope}"#);
        assert_eq!(text, r#"{"a": null, "NaN": "Infinity", "b": null, "c":null, "d": Nope}"#);
    }

    #[test]
    fn long_strings_are_lifted_without_their_quotes() {
        let long = "A".repeat(300);
        let (text, strings) = head(&format!(r#"{{"a":"{long}"}}"#));
        assert_eq!((text.as_str(), strings), (r#"{"a":{"":0}}"#, vec![long]));
    }

    #[test]
    fn a_line_that_ends_early_is_left_to_the_json_reader() {
        assert_eq!(head(r#"{"a":[1,2"#).0, r#"{"a":[1,2"#);
        assert_eq!(head(r#"{"a":"x\"#).0, r#"{"a":"x\"#);
        assert_eq!(head(r#"{"a":["#).0, r#"{"a":["#);
    }

    #[test]
    fn a_line_of_many_small_lists_is_refused_before_it_grows() {
        assert!(matches!(lift("[1],".repeat(70_000).as_bytes()), Err(MessageError::TooMuch { .. })));
    }
}
