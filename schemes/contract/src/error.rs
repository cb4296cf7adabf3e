//! How a scheme says no.

use serde::{Deserialize, Serialize};

/// What a scheme answers when it does not answer with numbers. Each kind has its code in the JSON conversation and in the C ABI.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize, thiserror::Error)]
pub enum SchemeError {
    /// Code -32601: an operation, equation, grid or boundary outside the offers.
    #[error("not offered: {0}")]
    NotOffered(String),
    /// Code -32001: the scheme does not allow a step of this size. The harness takes it as a bound that the scheme sets itself.
    #[error("this step is outside what the scheme allows: {0}")]
    StepRefused(String),
    /// Code -32002: an operation before any successful `prepare`.
    #[error("no case has been prepared yet")]
    NotPrepared,
    /// Any other code: the scheme tried and could not.
    #[error("{0}")]
    Failed(String),
    /// Code -32003, written by the Rust side of a plugin alone: the scheme panicked.
    #[error("the scheme panicked: {0}")]
    Panicked(String),
}

impl SchemeError {
    /// Code of [`SchemeError::NotOffered`].
    pub const NOT_OFFERED: i32 = -32601;
    /// Code of [`SchemeError::StepRefused`].
    pub const STEP_REFUSED: i32 = -32001;
    /// Code of [`SchemeError::NotPrepared`].
    pub const NOT_PREPARED: i32 = -32002;
    /// Code of [`SchemeError::Panicked`].
    pub const PANICKED: i32 = -32003;
    /// Code that this crate writes for [`SchemeError::Failed`]; any code without a meaning of its own reads as `Failed`.
    pub const FAILED: i32 = -32000;

    /// The code of this error in the JSON conversation and in the C ABI.
    pub fn code(&self) -> i32 {
        match self {
            Self::NotOffered(_) => Self::NOT_OFFERED,
            Self::StepRefused(_) => Self::STEP_REFUSED,
            Self::NotPrepared => Self::NOT_PREPARED,
            Self::Failed(_) => Self::FAILED,
            Self::Panicked(_) => Self::PANICKED,
        }
    }

    /// The message that goes with the code: [`SchemeError::from_code`] makes the same error of the two again.
    pub fn message(&self) -> &str {
        match self {
            Self::NotOffered(text) | Self::StepRefused(text) | Self::Failed(text) | Self::Panicked(text) => text,
            Self::NotPrepared => "no case has been prepared yet",
        }
    }

    /// The error that a code and a message stand for.
    pub fn from_code(code: i32, message: impl Into<String>) -> Self {
        match code {
            Self::NOT_OFFERED => Self::NotOffered(message.into()),
            Self::STEP_REFUSED => Self::StepRefused(message.into()),
            Self::NOT_PREPARED => Self::NotPrepared,
            Self::PANICKED => Self::Panicked(message.into()),
            _ => Self::Failed(message.into()),
        }
    }
}

/// The text of a panic, for people.
pub fn panic_message(panic: &(dyn std::any::Any + Send)) -> String {
    let text = panic.downcast_ref::<&str>().map(|text| (*text).to_owned());
    text.or_else(|| panic.downcast_ref::<String>().cloned()).unwrap_or_else(|| "without a message".to_owned())
}
