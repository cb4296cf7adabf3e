//! Expressions written out: as a formula, as LaTeX, and as a function in C, C++, Fortran 2008, Python with NumPy, and Rust.
//!
//! Every language gets the same straight-line code, which computes shared parts once. The functions take what the expressions depend
//! on and nothing else, so that no compiler warns of an unused argument.

mod c;
mod code;
mod fortran;
mod latex;
mod listing;
mod names;
mod python;
mod rust;

use std::collections::HashSet;
use std::fmt;
use std::str::FromStr;

use thiserror::Error;

use crate::expression::{EvaluateError, Expression, Node, Program};

pub use listing::source_listing;

/// What an expression can be written as.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Language {
    /// Plain mathematics that the parser reads back.
    Formula,
    /// An `align*` environment.
    Latex,
    /// C99.
    C,
    /// C++11.
    Cpp,
    /// Fortran 2008, free form.
    Fortran,
    /// Python with NumPy; arguments are numbers or arrays.
    Python,
    /// Rust without crates.
    Rust,
}

impl Language {
    /// Every language, by the name that a command line takes.
    pub const ALL: [(&'static str, Language); 7] = [
        ("formula", Language::Formula),
        ("latex", Language::Latex),
        ("c", Language::C),
        ("cpp", Language::Cpp),
        ("fortran", Language::Fortran),
        ("python", Language::Python),
        ("rust", Language::Rust),
    ];
}

impl FromStr for Language {
    type Err = WriteError;

    fn from_str(name: &str) -> Result<Language, WriteError> {
        let found = Language::ALL.iter().find(|(known, _)| *known == name);
        found.map(|(_, language)| *language).ok_or_else(|| WriteError::Language { name: name.to_string() })
    }
}

impl fmt::Display for Language {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let found = Language::ALL.iter().find(|(_, language)| language == self);
        f.write_str(found.map_or("", |(name, _)| name))
    }
}

/// Something that cannot be written out.
#[derive(Clone, Debug, PartialEq, Error)]
pub enum WriteError {
    /// An unknown language.
    #[error(
        "`{name}` is not a language that formulas can be written in; choose formula, latex, c, cpp, fortran, python or rust"
    )]
    Language {
        /// The name as given.
        name: String,
    },
    /// A constant part that is infinite or no number.
    #[error(
        "`{output}` contains a constant that is {value}; check it for a division by zero or a root of a negative number"
    )]
    NotFinite {
        /// The output in which it was found.
        output: String,
        /// The constant.
        value: f64,
    },
    /// An expression that cannot be compiled.
    #[error(transparent)]
    Expression(#[from] EvaluateError),
}

/// A name that the expressions depend on.
#[derive(Clone, Debug, PartialEq)]
pub struct Argument {
    /// Its name in the expressions.
    pub name: String,
    /// What it is, with its unit.
    pub meaning: String,
}

/// One result of the function.
#[derive(Clone, Debug, PartialEq)]
pub struct Output {
    /// Its name.
    pub name: String,
    /// What it is, with its unit.
    pub meaning: String,
    /// The expression.
    pub expression: Expression,
}

/// A function to be written out.
#[derive(Clone, Debug, PartialEq)]
pub struct Listing {
    /// Name of the function.
    pub function: String,
    /// What it computes, one line of text each.
    pub title: Vec<String>,
    /// The names that the outputs may depend on; those that none depends on are left out of the code.
    pub arguments: Vec<Argument>,
    /// The results, in order.
    pub outputs: Vec<Output>,
}

impl Listing {
    /// Writes the listing out.
    ///
    /// # Errors
    /// A free name without an argument, or a constant that is not finite.
    pub fn write(&self, language: Language) -> Result<String, WriteError> {
        match language {
            Language::Formula => self.checked().map(|()| self.formula()),
            Language::Latex => self.checked().map(|()| latex::write(self)),
            Language::C => c::write(&code::Code::new(self, &c::C)?, c::Flavour::C),
            Language::Cpp => c::write(&code::Code::new(self, &c::Cpp)?, c::Flavour::Cpp),
            Language::Fortran => fortran::write(&code::Code::new(self, &fortran::Fortran)?),
            Language::Python => python::write(&code::Code::new(self, &python::Python)?),
            Language::Rust => rust::write(&code::Code::new(self, &rust::Rust)?),
        }
    }

    fn checked(&self) -> Result<(), WriteError> {
        code::Code::new(self, &c::C).map(|_| ())
    }

    /// The compiled outputs, on which all code is based, with the arguments used.
    fn program(&self) -> Result<Program, WriteError> {
        let expressions: Vec<Expression> = self.outputs.iter().map(|output| output.expression.clone()).collect();
        let used: HashSet<String> = expressions.iter().flat_map(Expression::symbols).collect();
        let names: Vec<&str> = self.arguments.iter().map(|argument| argument.name.as_str()).collect();
        let names: Vec<&str> = names.into_iter().filter(|name| used.contains(*name)).collect();
        Ok(Program::new(&expressions, &names)?)
    }

    fn formula(&self) -> String {
        let mut lines: Vec<String> = self.title.iter().map(|line| format!("# {line}")).collect();
        let parts = self.named_parts();
        for (name, definition) in &parts {
            lines.push(format!("{name} = {}", definition.named_text()));
        }
        for output in &self.outputs {
            lines.push(format!("{} = {}", output.name, output.expression.named_text()));
        }
        lines.join("\n") + "\n"
    }

    /// The named parts, each after those that it is made of.
    fn named_parts(&self) -> Vec<(String, Expression)> {
        let (mut seen, mut parts) = (HashSet::new(), Vec::new());
        let mut collect = |part: &Expression| {
            if let Node::Named(name, definition) = part.node() {
                parts.push((name.to_string(), definition.clone()));
            }
        };
        self.outputs.iter().for_each(|output| output.expression.visit(&mut seen, &mut collect));
        parts
    }
}

#[cfg(test)]
mod tests;
