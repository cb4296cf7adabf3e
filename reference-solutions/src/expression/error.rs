//! What can be wrong with the text of an expression, and where.

use std::fmt;
use std::ops::Range;

use thiserror::Error;

/// A text that is no expression: what is wrong, and where.
#[derive(Clone, Debug, PartialEq)]
pub struct ParseError {
    /// The whole text that was read.
    pub text: String,
    /// The bytes of `text` that are at fault; empty at the end of the text.
    pub span: Range<usize>,
    /// What is wrong there.
    pub problem: ParseProblem,
}

/// What is wrong at the marked place.
#[derive(Clone, Debug, PartialEq, Error)]
#[allow(missing_docs)] // the messages are the documentation
pub enum ParseProblem {
    #[error("unexpected character `{found}`{}", remedy.map(|r| format!("; {r}")).unwrap_or_default())]
    Character { found: char, remedy: Option<&'static str> },
    #[error("`{text}` is not a number; write for example 12, 0.5 or 1.5e-3")]
    Number { text: String },
    #[error("expected {expected}, found {found}")]
    Unexpected { expected: &'static str, found: String },
    #[error("the parenthesis opened here is never closed; add `)`")]
    Unclosed,
    #[error("`)` closes nothing; remove it, or open a parenthesis before it")]
    Unopened,
    #[error("the name `{name}` is not declared; {}", known(declared, suggestion))]
    UndeclaredName { name: String, declared: Vec<String>, suggestion: Option<String> },
    #[error("there is no function `{name}`; {}", known(functions, suggestion))]
    UnknownFunction { name: String, functions: Vec<String>, suggestion: Option<String> },
    #[error("`{name}` is a function; write {name}(...) with its arguments")]
    FunctionWithoutArguments { name: String },
    #[error("`{name}` is a value, not a function; write `{name}*(...)` for a product")]
    NameWithArguments { name: String },
    #[error("{name} takes {expected}, {found} given")]
    Arguments { name: String, expected: String, found: usize },
    #[error("comparisons cannot be chained; write (a < b)*(b < c)")]
    ChainedComparison,
    #[error("d(...) is allowed only in the residual of an equation; elsewhere write the derivative out")]
    DerivativeNotAllowed,
    #[error("d(...) differentiates by a coordinate or time: expected one of {}, found {found}", allowed.join(", "))]
    DerivativeVariable { found: String, allowed: Vec<String> },
    #[error("nested more than {limit} deep; name parts of the expression and use the names")]
    TooDeep { limit: usize },
}

fn known(names: &[String], suggestion: &Option<String>) -> String {
    match suggestion {
        Some(name) => format!("did you mean `{name}`? Known: {}", names.join(", ")),
        None if names.is_empty() => "none is declared here".to_string(),
        None => format!("known: {}", names.join(", ")),
    }
}

impl ParseError {
    /// Column of the fault, counted in characters from 1.
    pub fn column(&self) -> usize {
        self.text[..self.span.start].chars().count() + 1
    }

    /// The message with the line of text at fault and carets below it.
    pub fn rendered(&self) -> String {
        let start = self.text[..self.span.start].rfind('\n').map_or(0, |newline| newline + 1);
        let end = self.text[start..].find('\n').map_or(self.text.len(), |length| start + length);
        let before = self.text[start..self.span.start].chars().count();
        let marked = self.text[self.span.start..self.span.end.min(end).max(self.span.start)].chars().count().max(1);
        let line = self.text[start..end].replace('\t', " ");
        format!("{}\n  {line}\n  {}{}", self.problem, " ".repeat(before), "^".repeat(marked))
    }
}

impl fmt::Display for ParseError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "column {} of `{}`: {}", self.column(), self.text, self.problem)
    }
}

impl std::error::Error for ParseError {}

/// An expression that has no value.
#[derive(Clone, Debug, PartialEq, Error)]
pub enum EvaluateError {
    /// A name without a value.
    #[error("`{name}` has no value; give one")]
    Unbound {
        /// The name.
        name: String,
    },
    /// A derivative of something that was not substituted.
    #[error("`{derivative}` cannot be evaluated before its operand is given")]
    OpenDerivative {
        /// The derivative as written.
        derivative: String,
    },
    /// A function that is defined for real arguments only.
    #[error("{function} is not defined for complex arguments")]
    NotComplex {
        /// The function's name.
        function: &'static str,
    },
}
