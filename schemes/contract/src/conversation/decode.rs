//! Messages as they are read.

use serde_json::Value;

use super::error::excerpt;
use super::lift::lift;
use super::{MessageError, Span, array};
use crate::{Fields, SchemeError};

/// A message that was read: a request or an answer.
#[derive(Clone, Debug)]
pub struct Message {
    /// The id of the request, or of the request that is answered.
    pub id: Value,
    /// What it is.
    pub body: Body,
    buffer: Vec<u8>,
    spans: Vec<Span>,
}

/// What a message is.
#[derive(Clone, Debug)]
pub enum Body {
    /// A question.
    Request {
        /// What is asked.
        method: String,
        /// The parameters, an object; its arrays are read through the message.
        params: Value,
    },
    /// An answer; its arrays are read through the message.
    Answer(Value),
    /// An answer that says no.
    Error {
        /// The code.
        code: i32,
        /// The message for people.
        message: String,
    },
}

impl Message {
    /// Reads a line.
    ///
    /// # Errors
    /// It is no JSON-RPC 2.0 message.
    pub fn from_line(line: Vec<u8>) -> Result<Self, MessageError> {
        let (head, spans) = lift(&line)?;
        Self::from_head(&head, line, spans)
    }

    /// Puts a message together from its head and the buffer that holds its arrays.
    ///
    /// # Errors
    /// The head is no JSON-RPC 2.0 message.
    pub fn from_head(head: &[u8], buffer: Vec<u8>, spans: Vec<Span>) -> Result<Self, MessageError> {
        let value: Value = serde_json::from_slice(head)
            .map_err(|error| MessageError::NotJson { reason: error.to_string(), excerpt: excerpt(head) })?;
        let rule = |reason| MessageError::NotRpc { reason, excerpt: excerpt(head) };
        let Value::Object(mut object) = value else { return Err(rule("it is no object")) };
        if object.get("jsonrpc").and_then(Value::as_str) != Some("2.0") {
            return Err(rule("it lacks \"jsonrpc\": \"2.0\""));
        }
        let id = object.remove("id").ok_or_else(|| rule("it lacks an `id`"))?;
        let mut message = Self { id, body: Body::Answer(Value::Null), buffer, spans };
        message.body = match (object.remove("method"), object.remove("result"), object.remove("error")) {
            (Some(Value::String(method)), None, None) => {
                let params = object.remove("params").unwrap_or_else(|| Value::Object(serde_json::Map::new()));
                Body::Request { method, params }
            }
            (None, Some(result), None) => Body::Answer(result),
            (None, None, Some(error)) => {
                message.error(&error).ok_or_else(|| rule("`error` lacks a code and a message"))?
            }
            (None, Some(_), Some(_)) => return Err(rule("it has both `result` and `error`")),
            _ => return Err(rule("it has no `method`, `result` or `error`")),
        };
        Ok(message)
    }

    fn error(&self, error: &Value) -> Option<Body> {
        let code = error.get("code")?.as_i64()?;
        let message = match self.restored(error.get("message")?) {
            Value::String(message) => message,
            _ => return None,
        };
        Some(Body::Error { code: i32::try_from(code).unwrap_or(SchemeError::FAILED), message })
    }

    /// The value with its lifted parts put back, for everything that is no field: descriptions, cases, texts.
    pub fn restored(&self, value: &Value) -> Value {
        match value {
            Value::Object(_) if lifted(value).is_some() => self.part(value).unwrap_or(Value::Null),
            Value::Object(object) => object.iter().map(|(key, value)| (key.clone(), self.restored(value))).collect(),
            Value::Array(values) => values.iter().map(|value| self.restored(value)).collect(),
            other => other.clone(),
        }
    }

    fn part(&self, value: &Value) -> Option<Value> {
        match self.spans.get(lifted(value)?)? {
            Span::List(range) => {
                let text = &self.buffer[range.clone()];
                // Tokens of other languages are no JSON: such a list is read as numbers.
                serde_json::from_slice(text).ok().or_else(|| {
                    let mut values = Vec::new();
                    array::read_text(text, &mut values).ok().map(|()| Value::from(values))
                })
            }
            Span::Quoted(range) => {
                Some(Value::String(String::from_utf8_lossy(&self.buffer[range.clone()]).into_owned()))
            }
            Span::Raw(range) => {
                let mut values = Vec::new();
                array::read_raw(&self.buffer[range.clone()], &mut values);
                Some(Value::from(values))
            }
        }
    }

    /// Reads an array into `out`, replacing what was there. `place` names it in errors.
    ///
    /// # Errors
    /// It is no array of numbers.
    pub fn array(&self, value: &Value, place: &str, out: &mut Vec<f64>) -> Result<(), MessageError> {
        let failed = |source| MessageError::Array { place: place.to_owned(), source };
        if let Value::String(text) = value {
            return array::read_base64(text.as_bytes(), out).map_err(failed);
        }
        match lifted(value).and_then(|index| self.spans.get(index)) {
            Some(Span::List(range)) => array::read_text(&self.buffer[range.clone()], out).map_err(failed),
            Some(Span::Quoted(range)) => array::read_base64(&self.buffer[range.clone()], out).map_err(failed),
            Some(Span::Raw(range)) => {
                array::read_raw(&self.buffer[range.clone()], out);
                Ok(())
            }
            None => Err(wrong_type(place, value, "an array of numbers")),
        }
    }

    /// Reads an array that must have the length that `out` has now.
    ///
    /// # Errors
    /// It is no array of numbers, or has another length. `out` is left with what was read.
    pub fn array_like(&self, value: &Value, place: &str, out: &mut Vec<f64>) -> Result<(), MessageError> {
        let expected = out.len();
        self.array(value, place, out)?;
        match out.len() {
            found if found == expected => Ok(()),
            found => Err(MessageError::WrongLength { place: place.to_owned(), expected, found }),
        }
    }

    /// Reads a table from field to array into `fields`, which stand in the order of `names`. With `keep_lengths` each array must
    /// have the length that its place has now.
    ///
    /// # Errors
    /// A field is missing, unknown, no array, or has another length.
    pub fn table(
        &self,
        value: &Value,
        place: &str,
        names: &[String],
        fields: &mut [Vec<f64>],
        keep_lengths: bool,
    ) -> Result<(), MessageError> {
        let object = self.object(value, place)?;
        known_keys(object, place, names)?;
        for (name, field) in names.iter().zip(fields) {
            let value = object.get(name).ok_or_else(|| missing(place, name))?;
            let place = format!("{place}.{name}");
            if keep_lengths { self.array_like(value, &place, field)? } else { self.array(value, &place, field)? }
        }
        Ok(())
    }

    /// Reads a table from field to array, of any lengths.
    ///
    /// # Errors
    /// As [`Message::table`].
    pub fn new_table(&self, value: &Value, place: &str, names: &[String]) -> Result<Fields, MessageError> {
        let mut fields = vec![Vec::new(); names.len()];
        self.table(value, place, names, &mut fields, false)?;
        Ok(fields)
    }

    /// Reads a list of arrays.
    ///
    /// # Errors
    /// It is no list, or one of its members is no array.
    pub fn arrays(&self, value: &Value, place: &str) -> Result<Fields, MessageError> {
        let members = self.members(value, place)?;
        let read = |(index, member): (usize, &Value)| {
            let mut out = Vec::new();
            self.array(member, &format!("{place}[{index}]"), &mut out)?;
            Ok(out)
        };
        members.iter().enumerate().map(read).collect()
    }

    /// The members of a list; `[]`, which reads as a list of numbers, has none.
    ///
    /// # Errors
    /// It is no list.
    pub fn members<'a>(&self, value: &'a Value, place: &str) -> Result<&'a [Value], MessageError> {
        if let Some(Span::List(range)) = lifted(value).and_then(|index| self.spans.get(index))
            && self.buffer[range.start + 1..range.end - 1].trim_ascii().is_empty()
        {
            return Ok(&[]);
        }
        match value {
            Value::Array(members) => Ok(members),
            _ => Err(wrong_type(place, value, "a list")),
        }
    }

    /// The value as an object.
    ///
    /// # Errors
    /// It is something else.
    pub fn object<'a>(
        &self,
        value: &'a Value,
        place: &str,
    ) -> Result<&'a serde_json::Map<String, Value>, MessageError> {
        match value {
            Value::Object(object) if lifted(value).is_none() => Ok(object),
            _ => Err(wrong_type(place, value, "an object")),
        }
    }
}

/// A whole object read by serde, with the place named in the error.
///
/// # Errors
/// The object does not fit `T`.
pub fn typed<T: serde::de::DeserializeOwned>(value: Value, place: &str) -> Result<T, MessageError> {
    serde_json::from_value(value)
        .map_err(|error| MessageError::Misfit { place: place.to_owned(), reason: error.to_string() })
}

/// The value under `key`.
///
/// # Errors
/// There is none.
pub fn member<'a>(
    object: &'a serde_json::Map<String, Value>,
    key: &str,
    place: &str,
) -> Result<&'a Value, MessageError> {
    object.get(key).ok_or_else(|| missing(place, key))
}

/// The number under `key`; null (a value that is not finite) reads as NaN.
///
/// # Errors
/// There is none, or it is no number.
pub fn number(object: &serde_json::Map<String, Value>, key: &str, place: &str) -> Result<f64, MessageError> {
    match member(object, key, place)? {
        Value::Null => Ok(f64::NAN),
        value => value.as_f64().ok_or_else(|| wrong_type(&format!("{place}.{key}"), value, "a number")),
    }
}

/// The count under `key`.
///
/// # Errors
/// There is none, or it is no count.
pub fn count(object: &serde_json::Map<String, Value>, key: &str, place: &str) -> Result<usize, MessageError> {
    let value = member(object, key, place)?;
    let whole = value
        .as_u64()
        .or_else(|| value.as_f64().filter(|v| v.fract() == 0.0 && (0.0..9e15).contains(v)).map(|v| v as u64));
    let wrong = || wrong_type(&format!("{place}.{key}"), value, "a whole number of 0 or more");
    usize::try_from(whole.ok_or_else(wrong)?).map_err(|_| wrong())
}

/// Refuses keys that are not among `names`.
///
/// # Errors
/// The first key that is not.
pub fn known_keys<N: AsRef<str>>(
    object: &serde_json::Map<String, Value>,
    place: &str,
    names: &[N],
) -> Result<(), MessageError> {
    match object.keys().find(|key| names.iter().all(|name| name.as_ref() != key.as_str())) {
        None => Ok(()),
        Some(key) => {
            let expected: Vec<String> = names.iter().map(|name| format!("`{}`", name.as_ref())).collect();
            let expected = if expected.is_empty() { "nothing".to_owned() } else { expected.join(", ") };
            Err(MessageError::Unknown { place: place.to_owned(), key: excerpt(key.as_bytes()), expected })
        }
    }
}

fn missing(place: &str, key: &str) -> MessageError {
    MessageError::Missing { place: place.to_owned(), key: key.to_owned() }
}

pub(crate) fn wrong_type(place: &str, value: &Value, expected: &'static str) -> MessageError {
    let found = match value {
        Value::Null => "null".to_owned(),
        Value::Bool(value) => value.to_string(),
        Value::Number(value) => format!("the number {value}"),
        Value::String(text) => format!("the text \"{}\"", excerpt(text.as_bytes())),
        Value::Array(_) => "a list".to_owned(),
        Value::Object(_) if lifted(value).is_some() => "an array".to_owned(),
        Value::Object(_) => "an object".to_owned(),
    };
    MessageError::WrongType { place: place.to_owned(), found, expected }
}

/// The number of the part that a placeholder stands for.
fn lifted(value: &Value) -> Option<usize> {
    let object = value.as_object()?;
    if object.len() != 1 {
        return None;
    }
    usize::try_from(object.get("")?.as_u64()?).ok()
}
