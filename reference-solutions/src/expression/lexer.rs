//! Text to tokens.

use std::ops::Range;

use super::error::ParseProblem;
use super::function::Function;
use super::number::Number;

#[derive(Clone, Debug, PartialEq)]
pub(super) enum Token {
    Number(Number),
    Name(String),
    Plus,
    Minus,
    Star,
    Slash,
    Caret,
    Open,
    Close,
    Comma,
    Compare(Function),
    End,
}

/// A token and the bytes it was read from.
pub(super) type Placed = (Token, Range<usize>);

type Fault = (Range<usize>, ParseProblem);

/// Cuts `text` into tokens; the last one is `End`.
pub(super) fn tokens(text: &str) -> Result<Vec<Placed>, Fault> {
    let mut found = Vec::new();
    let mut at = 0;
    while let Some(first) = text[at..].chars().next() {
        if first.is_whitespace() {
            at += first.len_utf8();
            continue;
        }
        let (token, length) = next_token(&text[at..], first).map_err(|(length, problem)| (at..at + length, problem))?;
        found.push((token, at..at + length));
        at += length;
    }
    found.push((Token::End, text.len()..text.len()));
    Ok(found)
}

fn next_token(rest: &str, first: char) -> Result<(Token, usize), (usize, ParseProblem)> {
    let two = |second: char| rest.chars().nth(1) == Some(second);
    Ok(match first {
        '+' => (Token::Plus, 1),
        '-' => (Token::Minus, 1),
        '*' if two('*') => return Err(refused(first, 2, Some("powers are written with `^`"))),
        '*' => (Token::Star, 1),
        '/' => (Token::Slash, 1),
        '^' => (Token::Caret, 1),
        '(' => (Token::Open, 1),
        ')' => (Token::Close, 1),
        ',' => (Token::Comma, 1),
        '<' if two('=') => (Token::Compare(Function::LessEqual), 2),
        '<' => (Token::Compare(Function::Less), 1),
        '>' if two('=') => (Token::Compare(Function::GreaterEqual), 2),
        '>' => (Token::Compare(Function::Greater), 1),
        '=' if two('=') => (Token::Compare(Function::Equal), 2),
        '!' if two('=') => (Token::Compare(Function::NotEqual), 2),
        _ if first.is_ascii_digit() || first == '.' => return number(rest),
        _ if first.is_ascii_alphabetic() || first == '_' => {
            let length = rest.find(|c: char| !c.is_ascii_alphanumeric() && c != '_').unwrap_or(rest.len());
            (Token::Name(rest[..length].to_string()), length)
        }
        _ => return Err(refused(first, first.len_utf8(), remedy(first))),
    })
}

fn refused(found: char, length: usize, remedy: Option<&'static str>) -> (usize, ParseProblem) {
    (length, ParseProblem::Character { found, remedy })
}

fn remedy(found: char) -> Option<&'static str> {
    Some(match found {
        '−' | '–' | '—' => "write `-` for minus",
        '·' | '×' | '⋅' => "write `*` for a product",
        '÷' => "write `/` for a quotient",
        'π' => "write `pi`",
        '=' => "equality is written `==`",
        '[' | ']' | '{' | '}' => "use round parentheses",
        ';' | ':' => "arguments are separated by `,`",
        _ if found.is_alphabetic() => "names are made of the letters a-z, A-Z, digits and `_`",
        _ => return None,
    })
}

/// Digits, an optional fraction, an optional exponent. A letter right after them is an error: `2x` needs its `*`.
fn number(rest: &str) -> Result<(Token, usize), (usize, ParseProblem)> {
    let bytes = rest.as_bytes();
    let digits = |from: usize| bytes[from..].iter().take_while(|b| b.is_ascii_digit()).count();
    let mut length = digits(0);
    if bytes.get(length) == Some(&b'.') {
        length += 1 + digits(length + 1);
    }
    if matches!(bytes.get(length), Some(b'e' | b'E')) {
        let sign = usize::from(matches!(bytes.get(length + 1), Some(b'+' | b'-')));
        let exponent = if length + 1 + sign <= bytes.len() { digits(length + 1 + sign) } else { 0 };
        if exponent > 0 {
            length += 1 + sign + exponent;
        }
    }
    match Number::from_decimal(&rest[..length]) {
        Some(number) if rest[..length] != *"." => Ok((Token::Number(number), length)),
        _ => Err((length, ParseProblem::Number { text: rest[..length].to_string() })),
    }
}
