//! Messages as they are written.

use serde_json::{Map, Value, json};

use super::array::{write_base64, write_raw, write_text};
use crate::{ArrayEncoding, BoundaryData, SchemeError};

/// The arrays of a message under way. They are borrowed until the message is written, straight from where they stand.
#[derive(Debug, Default)]
pub struct Arrays<'a>(Vec<&'a [f64]>);

impl<'a> Arrays<'a> {
    /// Takes in an array; the value stands for it in the head.
    pub fn array(&mut self, values: &'a [f64]) -> Value {
        self.0.push(values);
        json!({"": self.0.len() - 1})
    }

    /// Takes in one array a name.
    pub fn table(&mut self, names: &[String], fields: &'a [Vec<f64>]) -> Value {
        names.iter().zip(fields).map(|(name, field)| (name.clone(), self.array(field))).collect::<Map<_, _>>().into()
    }

    /// Takes in a list of arrays.
    pub fn list(&mut self, arrays: &'a [Vec<f64>]) -> Value {
        arrays.iter().map(|values| self.array(values)).collect()
    }
}

/// A message under way.
#[derive(Debug)]
pub struct Outgoing<'a> {
    head: Value,
    arrays: Arrays<'a>,
}

impl<'a> Outgoing<'a> {
    /// A question.
    pub fn request(id: u64, method: &str, params: Value, arrays: Arrays<'a>) -> Self {
        Self { head: json!({"jsonrpc": "2.0", "id": id, "method": method, "params": params}), arrays }
    }

    /// An answer.
    pub fn answer(id: Value, result: Value, arrays: Arrays<'a>) -> Self {
        Self { head: json!({"jsonrpc": "2.0", "id": id, "result": result}), arrays }
    }

    /// An answer that says no.
    pub fn error(id: Value, code: i32, message: &str) -> Self {
        let head = json!({"jsonrpc": "2.0", "id": id, "error": {"code": code, "message": message}});
        Self { head, arrays: Arrays::default() }
    }

    /// An answer with a scheme's error.
    pub fn refusal(id: Value, error: &SchemeError) -> Self {
        Self::error(id, error.code(), error.message())
    }

    /// Appends the message as one line, its end included.
    pub fn write_line(&self, encoding: ArrayEncoding, out: &mut Vec<u8>) {
        write_value(&self.head, &self.arrays.0, encoding, out);
        out.push(b'\n');
    }

    /// The head by itself: the arrays stand in it as `{"": k}`.
    pub fn head(&self) -> Vec<u8> {
        self.head.to_string().into_bytes()
    }

    /// How many values each array has.
    pub fn lengths(&self) -> impl Iterator<Item = usize> {
        self.arrays.0.iter().map(|values| values.len())
    }

    /// Writes all arrays as raw little-endian bytes.
    ///
    /// # Errors
    /// The writer's own.
    pub fn write_payload(&self, out: &mut impl std::io::Write) -> std::io::Result<()> {
        self.arrays.0.iter().try_for_each(|values| write_raw(values, out))
    }
}

fn write_value(value: &Value, arrays: &[&[f64]], encoding: ArrayEncoding, out: &mut Vec<u8>) {
    match value {
        Value::Object(object) => match object.get("").and_then(Value::as_u64).and_then(|k| arrays.get(k as usize)) {
            Some(values) if encoding == ArrayEncoding::Base64 => write_base64(values, out),
            Some(values) => write_text(values, out),
            None => {
                let mut separator = b'{';
                for (key, value) in object {
                    out.push(separator);
                    separator = b',';
                    write_leaf(&Value::String(key.clone()), out);
                    out.push(b':');
                    write_value(value, arrays, encoding, out);
                }
                out.extend_from_slice(if separator == b'{' { b"{}" } else { b"}" });
            }
        },
        Value::Array(values) if values.iter().any(|value| value.is_object() || value.is_array()) => {
            let mut separator = b'[';
            for value in values {
                out.push(separator);
                separator = b',';
                write_value(value, arrays, encoding, out);
            }
            out.push(b']');
        }
        leaf => write_leaf(leaf, out),
    }
}

fn write_leaf(value: &Value, out: &mut Vec<u8>) {
    out.extend_from_slice(value.to_string().as_bytes());
}

/// The answer to a question for one side, as the contract writes it.
pub fn boundary_value<'a>(names: &[String], data: &'a BoundaryData, layers: usize, arrays: &mut Arrays<'a>) -> Value {
    let mut object = Map::new();
    object.insert("value".to_owned(), arrays.table(names, &data.value));
    object.insert("gradient".to_owned(), arrays.table(names, &data.gradient));
    if layers > 0 {
        let ghost = names.iter().zip(&data.ghost).map(|(name, layers)| (name.clone(), arrays.list(layers)));
        object.insert("ghost".to_owned(), ghost.collect::<Map<_, _>>().into());
    }
    Value::Object(object)
}
