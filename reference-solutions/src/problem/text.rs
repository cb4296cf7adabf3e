//! A problem file's text: reading it, and messages that point into it.

use std::ops::Range;
use std::sync::Arc;

use crate::expression::{Expression, Scope};

use super::error::{Place, ProblemError};
use super::file::ProblemFile;

/// A file's text and name, for messages.
#[derive(Clone)]
pub(super) struct Text {
    label: Arc<str>,
    text: Arc<str>,
}

impl Text {
    pub fn new(label: &str, text: &str) -> Self {
        Self { label: label.into(), text: text.into() }
    }

    pub fn parse(&self) -> Result<ProblemFile, ProblemError> {
        toml::from_str(&self.text).map_err(|error| {
            let place = self.place(error.span().unwrap_or(0..0));
            ProblemError::Syntax { place, reason: error.message().to_string() }
        })
    }

    pub fn place(&self, span: Range<usize>) -> Place {
        let before = &self.text[..span.start.min(self.text.len())];
        Place { file: self.label.to_string(), line: 1 + before.matches('\n').count() }
    }

    pub fn refuse<T>(
        &self,
        span: Range<usize>,
        entry: impl Into<String>,
        reason: impl Into<String>,
    ) -> Result<T, ProblemError> {
        Err(ProblemError::Entry { place: self.place(span), entry: entry.into(), reason: reason.into() })
    }

    /// Reads a formula.
    pub fn formula(
        &self,
        entry: &str,
        text: &str,
        span: Range<usize>,
        scope: &Scope,
    ) -> Result<Expression, ProblemError> {
        Expression::parse(text, scope).or_else(|error| self.refuse(span, entry, error.to_string()))
    }
}
