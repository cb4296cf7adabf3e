//! The conversation in JSON: messages, arrays and the loop that serves a scheme. Both sides use this module.
//!
//! A message is a small JSON head plus arrays. While a line is read, its arrays are lifted out as they stand, so that the head
//! is parsed by a JSON reader and each array, once and straight into its place, by a reader of numbers. The same split serves
//! the binary frames of a plugin's child process, whose head is the same and whose arrays are raw.
//!
//! An executable written in Rust is one line: `gridassay_scheme::conversation::serve(MyScheme::default())`.

mod array;
pub mod decode;
mod encode;
mod error;
mod lift;
mod serve;
mod transport;

pub use array::{ArrayError, read_base64, read_text, write_base64, write_text};
pub use decode::{Body, Message};
pub use encode::{Arrays, Outgoing, boundary_value};
pub use error::MessageError;
pub use lift::Span;
pub use serve::{ServeError, serve, serve_over};
pub use transport::{Lines, Transport};

/// Codes of JSON-RPC itself, beside those of [`SchemeError`](crate::SchemeError).
pub mod code {
    /// The line is no JSON.
    pub const PARSE: i32 = -32700;
    /// The message is no JSON-RPC 2.0 request.
    pub const INVALID_REQUEST: i32 = -32600;
    /// The parameters of a request do not fit its method.
    pub const INVALID_PARAMETERS: i32 = -32602;
}
