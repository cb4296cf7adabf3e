//! Text to expressions: a Pratt parser.
//!
//! From weakest to strongest: comparisons (not chained), `+ -`, `* /`, unary `-`, `^` (right-associative: `2^3^2 = 2^9`,
//! `-2^2 = -4`, `2^-1 = 1/2`).

use std::collections::BTreeMap;
use std::ops::Range;

use super::error::{ParseError, ParseProblem};
use super::function::{Function, NAMED};
use super::lexer::{Placed, Token, tokens};
use super::{Expression, Node};

/// Deepest nesting of parentheses, calls, signs and powers.
const DEPTH_LIMIT: usize = 200;

/// The names that a text may use.
#[derive(Clone, Debug, Default)]
pub struct Scope {
    names: BTreeMap<String, Expression>,
    derivatives: Option<Vec<String>>,
}

impl Scope {
    /// A scope of free names (coordinates, time, parameters). `pi` is always known.
    pub fn new<N: AsRef<str>>(names: impl IntoIterator<Item = N>) -> Scope {
        let mut scope = Scope::default();
        names.into_iter().for_each(|name| scope.declare(name.as_ref()));
        scope
    }

    /// Adds a free name.
    pub fn declare(&mut self, name: &str) {
        self.names.insert(name.to_string(), Expression::symbol(name));
    }

    /// Adds a name that stands for an expression.
    pub fn define(&mut self, name: &str, meaning: Expression) {
        self.names.insert(name.to_string(), meaning);
    }

    /// Adds `i`, the imaginary unit, for texts that are evaluated with [`Expression::evaluate_complex`].
    pub fn with_imaginary_unit(mut self) -> Scope {
        self.declare("i");
        self
    }

    /// Allows `d(expression, x, ...)` by these variables, as residuals of equations use it.
    pub fn with_derivatives<N: AsRef<str>>(mut self, variables: impl IntoIterator<Item = N>) -> Scope {
        self.derivatives = Some(variables.into_iter().map(|name| name.as_ref().to_string()).collect());
        self
    }

    /// The names known here, sorted.
    pub fn names(&self) -> impl Iterator<Item = &str> {
        self.names.keys().map(String::as_str)
    }
}

impl Expression {
    /// Reads `text`, whose names must be in `scope`.
    pub fn parse(text: &str, scope: &Scope) -> Result<Expression, ParseError> {
        let error = |(span, problem)| ParseError { text: text.to_string(), span, problem };
        let tokens = tokens(text).map_err(error)?;
        let mut parser = Parser { tokens, at: 0, depth: 0, scope };
        parser.whole().map_err(error)
    }
}

type Fault = (Range<usize>, ParseProblem);

struct Parser<'a> {
    tokens: Vec<Placed>,
    at: usize,
    depth: usize,
    scope: &'a Scope,
}

/// Binding powers, weakest first.
const COMPARISON: u8 = 1;
const SUM: u8 = 2;
const PRODUCT: u8 = 3;
const SIGN: u8 = 4;
const POWER: u8 = 5;

impl Parser<'_> {
    fn peek(&self) -> &Token {
        &self.tokens[self.at].0
    }

    fn span(&self) -> Range<usize> {
        self.tokens[self.at].1.clone()
    }

    fn next(&mut self) -> Placed {
        let placed = self.tokens[self.at].clone();
        self.at = (self.at + 1).min(self.tokens.len() - 1);
        placed
    }

    fn unexpected(&self, expected: &'static str) -> Fault {
        let found = match self.peek() {
            Token::End => "the end of the text".to_string(),
            Token::Close => return (self.span(), ParseProblem::Unopened),
            token => format!("`{}`", written(token)),
        };
        (self.span(), ParseProblem::Unexpected { expected, found })
    }

    fn whole(&mut self) -> Result<Expression, Fault> {
        let expression = self.expression(COMPARISON)?;
        match self.peek() {
            Token::End => Ok(expression),
            _ => Err(self.unexpected("an operator such as `+`, `-`, `*`, `/`, `^`")),
        }
    }

    /// Reads an operand and every operator that binds at least as strongly as `weakest`.
    fn expression(&mut self, weakest: u8) -> Result<Expression, Fault> {
        self.depth += 1;
        if self.depth > DEPTH_LIMIT {
            return Err((self.span(), ParseProblem::TooDeep { limit: DEPTH_LIMIT }));
        }
        let mut left = self.operand()?;
        let mut compared = false;
        while let Some(strength) = strength(self.peek()).filter(|strength| *strength >= weakest) {
            let (operator, span) = self.next();
            if strength == COMPARISON && std::mem::replace(&mut compared, true) {
                return Err((span, ParseProblem::ChainedComparison));
            }
            // A power takes its right side whole, sign and further powers included.
            let right = self.expression(if strength == POWER { SIGN } else { strength + 1 })?;
            left = combined(&operator, left, right);
        }
        self.depth -= 1;
        Ok(left)
    }

    fn operand(&mut self) -> Result<Expression, Fault> {
        match self.peek() {
            Token::Number(_) | Token::Name(_) | Token::Open | Token::Minus | Token::Plus => {}
            Token::Close if self.at > 0 && self.open_before() => {
                let found = "`)`".to_string();
                return Err((self.span(), ParseProblem::Unexpected { expected: OPERAND, found }));
            }
            _ => return Err(self.unexpected(OPERAND)),
        }
        let (token, span) = self.next();
        match token {
            Token::Number(number) => Ok(Expression::number(number)),
            Token::Minus => Ok(-self.expression(SIGN)?),
            Token::Plus => self.expression(SIGN),
            Token::Name(name) => self.name(&name, span),
            _ => {
                let inner = self.expression(COMPARISON)?;
                self.close(span)?;
                Ok(inner)
            }
        }
    }

    /// Whether an unclosed parenthesis stands before the current token.
    fn open_before(&self) -> bool {
        let step = |depth: i64, (token, _): &Placed| match token {
            Token::Open => depth + 1,
            Token::Close => (depth - 1).max(0),
            _ => depth,
        };
        self.tokens[..self.at].iter().fold(0, step) > 0
    }

    fn close(&mut self, opened: Range<usize>) -> Result<(), Fault> {
        match self.peek() {
            Token::Close => {
                self.next();
                Ok(())
            }
            Token::End => Err((opened, ParseProblem::Unclosed)),
            _ => Err(self.unexpected("an operator or `)`")),
        }
    }

    fn name(&mut self, name: &str, span: Range<usize>) -> Result<Expression, Fault> {
        let called = *self.peek() == Token::Open;
        let meaning = self.scope.names.get(name).cloned().or_else(|| (name == "pi").then(Expression::pi));
        match (meaning, called) {
            (Some(meaning), false) => Ok(meaning),
            (Some(_), true) => Err((span, ParseProblem::NameWithArguments { name: name.to_string() })),
            (None, true) => self.call(name, span),
            (None, false) if is_function(name) => {
                Err((span, ParseProblem::FunctionWithoutArguments { name: name.to_string() }))
            }
            (None, false) => {
                let declared: Vec<String> = self.scope.names().map(str::to_string).collect();
                let suggestion = nearest(name, declared.iter().map(String::as_str));
                Err((span, ParseProblem::UndeclaredName { name: name.to_string(), declared, suggestion }))
            }
        }
    }

    fn call(&mut self, name: &str, span: Range<usize>) -> Result<Expression, Fault> {
        if name == "d" {
            return self.derivative(span);
        }
        if !is_function(name) {
            let functions: Vec<String> = function_names().map(str::to_string).collect();
            let suggestion = nearest(name, function_names());
            return Err((span, ParseProblem::UnknownFunction { name: name.to_string(), functions, suggestion }));
        }
        let arguments = self.arguments()?;
        let expected = Function::named(name).map_or(1, Function::arguments);
        if arguments.len() != expected {
            let expected = if expected == 1 { "1 argument".to_string() } else { format!("{expected} arguments") };
            let found = arguments.len();
            return Err((span, ParseProblem::Arguments { name: name.to_string(), expected, found }));
        }
        let arguments = arguments.into_iter().map(|(argument, _)| argument).collect::<Vec<_>>();
        Ok(Function::named(name)
            .map_or_else(|| arguments[0].sqrt(), |function| Expression::call(function, arguments.clone())))
    }

    fn arguments(&mut self) -> Result<Vec<(Expression, Range<usize>)>, Fault> {
        let (_, opened) = self.next();
        let mut arguments = Vec::new();
        loop {
            let start = self.span();
            let argument = self.expression(COMPARISON)?;
            arguments.push((argument, start.start..self.tokens[self.at - 1].1.end));
            if *self.peek() != Token::Comma {
                break;
            }
            self.next();
        }
        match self.peek() {
            Token::Close | Token::End => self.close(opened)?,
            _ => return Err(self.unexpected("an operator, `,` or `)`")),
        }
        Ok(arguments)
    }

    fn derivative(&mut self, span: Range<usize>) -> Result<Expression, Fault> {
        let Some(allowed) = &self.scope.derivatives else {
            return Err((span, ParseProblem::DerivativeNotAllowed));
        };
        let mut arguments = self.arguments()?.into_iter();
        let operand = arguments.next().map(|(operand, _)| operand).expect("arguments() reads at least one");
        let mut names = Vec::new();
        for (variable, span) in arguments {
            match variable.node() {
                Node::Symbol(name) if allowed.iter().any(|known| **known == **name) => names.push(name.clone()),
                _ => {
                    let found = format!("`{variable}`");
                    return Err((span, ParseProblem::DerivativeVariable { found, allowed: allowed.clone() }));
                }
            }
        }
        if names.is_empty() {
            let (name, expected) = ("d".to_string(), "an expression and at least one variable".to_string());
            return Err((span, ParseProblem::Arguments { name, expected, found: 1 }));
        }
        Ok(Expression::open_derivative(&operand, &names))
    }
}

const OPERAND: &str = "a number, a name or `(`";

fn strength(token: &Token) -> Option<u8> {
    Some(match token {
        Token::Compare(_) => COMPARISON,
        Token::Plus | Token::Minus => SUM,
        Token::Star | Token::Slash => PRODUCT,
        Token::Caret => POWER,
        _ => return None,
    })
}

fn combined(operator: &Token, left: Expression, right: Expression) -> Expression {
    match operator {
        Token::Plus => left + right,
        Token::Minus => left - right,
        Token::Star => left * right,
        Token::Slash => left / right,
        Token::Compare(function) => Expression::call(*function, vec![left, right]),
        _ => left.power(&right),
    }
}

fn written(token: &Token) -> String {
    match token {
        Token::Number(number) => number.to_f64().to_string(),
        Token::Name(name) => name.clone(),
        Token::Compare(function) => function.name().to_string(),
        Token::Plus => "+".into(),
        Token::Minus => "-".into(),
        Token::Star => "*".into(),
        Token::Slash => "/".into(),
        Token::Caret => "^".into(),
        Token::Open => "(".into(),
        Token::Close => ")".into(),
        Token::Comma => ",".into(),
        Token::End => String::new(),
    }
}

fn function_names() -> impl Iterator<Item = &'static str> {
    NAMED.iter().map(|(name, _)| *name).chain(["ln", "sqrt"])
}

fn is_function(name: &str) -> bool {
    name == "sqrt" || Function::named(name).is_some()
}

/// The known name that is at most two edits away (fewer for short names), if any.
pub(crate) fn nearest<'a>(name: &str, known: impl Iterator<Item = &'a str>) -> Option<String> {
    let allowed = (name.len() / 2).min(2);
    // Among equally near names the one that `name` begins with is the likelier.
    let scored = known.map(|candidate| (edit_distance(name, candidate), !name.starts_with(candidate), candidate));
    scored.filter(|(distance, ..)| *distance <= allowed).min().map(|(.., candidate)| candidate.to_string())
}

/// Levenshtein's distance, case ignored.
fn edit_distance(a: &str, b: &str) -> usize {
    let (a, b) = (a.to_lowercase(), b.to_lowercase());
    let mut row: Vec<usize> = (0..=b.chars().count()).collect();
    for (i, x) in a.chars().enumerate() {
        let mut diagonal = std::mem::replace(&mut row[0], i + 1);
        for (j, y) in b.chars().enumerate() {
            let replaced = diagonal + usize::from(x != y);
            diagonal = row[j + 1];
            row[j + 1] = replaced.min(row[j] + 1).min(diagonal + 1);
        }
    }
    row[row.len() - 1]
}

#[cfg(test)]
#[path = "parse_tests.rs"]
mod tests;
