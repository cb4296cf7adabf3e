//! What can be wrong with a claims file.

use std::fmt;
use std::ops::Range;
use std::path::{Path, PathBuf};

/// One thing that is wrong with a claims file: the file, the line, what is wrong and how to mend it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ClaimsError {
    /// The file.
    pub path: PathBuf,
    /// The line, from 1; `None` where the file as a whole is at fault.
    pub line: Option<usize>,
    /// The line's text.
    pub excerpt: Option<String>,
    /// What is wrong and how to mend it: one sentence.
    pub message: String,
}

impl ClaimsError {
    /// An error about the bytes `span` of `text`.
    pub fn at(path: &Path, text: &str, span: Range<usize>, message: impl Into<String>) -> Self {
        let line = line_of(text, &span);
        let excerpt = text.lines().nth(line - 1).map(|line| line.trim_end().to_owned()).filter(|line| !line.is_empty());
        Self { path: path.into(), line: Some(line), excerpt, message: message.into() }
    }

    /// An error about the file as a whole.
    pub fn whole(path: &Path, message: impl Into<String>) -> Self {
        Self { path: path.into(), line: None, excerpt: None, message: message.into() }
    }
}

/// The line of `text`, from 1, on which the bytes `span` begin.
pub(super) fn line_of(text: &str, span: &Range<usize>) -> usize {
    let start = span.start.min(text.len());
    1 + text.as_bytes()[..start].iter().filter(|byte| **byte == b'\n').count()
}

impl fmt::Display for ClaimsError {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "{}", self.path.display())?;
        if let Some(line) = self.line {
            write!(out, ":{line}")?;
        }
        write!(out, ": {}", self.message)?;
        if let (Some(line), Some(excerpt)) = (self.line, &self.excerpt) {
            write!(out, "\n  {line:>4} | {excerpt}")?;
        }
        Ok(())
    }
}

impl std::error::Error for ClaimsError {}
