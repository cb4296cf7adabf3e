//! Mathematical expressions: read, differentiated, simplified, evaluated.
//!
//! An [`Expression`] is an immutable graph that shares its parts. Its constructors keep a normal form: sums collect like terms,
//! products collect equal bases, constants are folded exactly, so that differentiation needs no clean-up afterwards. Products of
//! sums are never multiplied out: an expression does not grow by being simplified.
//!
//! ```
//! use gridassay_reference::expression::{Expression, Scope};
//!
//! let scope = Scope::new(["x", "nu", "t"]);
//! let u = Expression::parse("sin(2*pi*x)*exp(-nu*t)", &scope)?;
//! assert_eq!(u.derivative("t").to_string(), "-nu*exp(-nu*t)*sin(2*pi*x)");
//! assert_eq!(u.evaluate(&[("x", 0.25), ("nu", 0.1), ("t", 0.0)]), Ok(1.0));
//! # Ok::<(), gridassay_reference::expression::ParseError>(())
//! ```

mod build;
mod compensated;
mod derive;
mod display;
mod error;
mod evaluate;
mod function;
pub mod kernels;
mod lexer;
mod number;
mod parse;
pub mod program;
mod walk;

pub use error::{EvaluateError, ParseError, ParseProblem};
pub use function::Function;
pub use number::Number;
pub use parse::Scope;
pub use program::{Input, Kind, Plan, Program};

use std::cmp::Ordering;
use std::sync::Arc;

/// An expression; cheap to clone, equal when built alike.
#[derive(Clone)]
pub struct Expression(Arc<Inner>);

struct Inner {
    node: Node,
    /// Digest of the structure. 128 bits: two different expressions of one session share it with a chance below 1e-20, so that
    /// equality is a comparison of digests.
    key: u128,
}

/// What an expression is made of, in normal form.
#[derive(Debug)]
pub enum Node {
    /// A constant.
    Number(Number),
    /// The circle constant, kept as a symbol.
    Pi,
    /// A free name.
    Symbol(Arc<str>),
    /// A part with a name of its own: it stands for its definition, but sums and products treat it as one symbol, and writers
    /// may print the name.
    Named(Arc<str>, Expression),
    /// constant + sum of coefficient * expression; at least two summands.
    Sum(Number, Vec<(Number, Expression)>),
    /// coefficient * product of base ^ exponent; not a single base with exponent 1 and coefficient 1.
    Product(Number, Vec<(Expression, Number)>),
    /// base ^ exponent with an exponent that is no number.
    Power(Expression, Expression),
    /// A function call.
    Call(Function, Vec<Expression>),
    /// A derivative that waits for its operand to be substituted, with the names to differentiate by.
    Derivative(Expression, Vec<Arc<str>>),
}

impl Expression {
    pub(crate) fn from_node(node: Node) -> Expression {
        let key = digest(&node);
        Expression(Arc::new(Inner { node, key }))
    }

    /// The outermost node.
    pub fn node(&self) -> &Node {
        &self.0.node
    }

    /// Digest of the structure, equal for equal expressions; the same in every run.
    pub fn key(&self) -> u128 {
        self.0.key
    }

    /// A free name.
    pub fn symbol(name: &str) -> Expression {
        Expression::from_node(Node::Symbol(name.into()))
    }

    /// The circle constant.
    pub fn pi() -> Expression {
        Expression::from_node(Node::Pi)
    }

    /// A part with a name; numbers and symbols are left as they are.
    pub fn named(name: &str, definition: Expression) -> Expression {
        match definition.node() {
            Node::Number(_) | Node::Pi | Node::Symbol(_) | Node::Named(..) => definition,
            _ => Expression::from_node(Node::Named(name.into(), definition)),
        }
    }

    /// The value, if this is a number.
    pub fn as_number(&self) -> Option<Number> {
        match self.node() {
            Node::Number(number) => Some(*number),
            _ => None,
        }
    }

    /// Whether this is the number zero.
    pub fn is_zero(&self) -> bool {
        self.as_number().is_some_and(Number::is_zero)
    }

    /// A total order by structure: numbers, names, then compound expressions.
    pub(crate) fn order(&self, other: &Expression) -> Ordering {
        if self.key() == other.key() {
            return Ordering::Equal;
        }
        order_nodes(self.node(), other.node()).then_with(|| self.key().cmp(&other.key()))
    }
}

impl PartialEq for Expression {
    fn eq(&self, other: &Expression) -> bool {
        self.key() == other.key()
    }
}

impl Eq for Expression {}

impl std::hash::Hash for Expression {
    fn hash<H: std::hash::Hasher>(&self, state: &mut H) {
        self.key().hash(state);
    }
}

fn rank(node: &Node) -> u8 {
    match node {
        Node::Number(_) => 0,
        Node::Pi => 1,
        Node::Symbol(_) => 2,
        Node::Named(..) => 3,
        Node::Product(..) => 4,
        Node::Sum(..) => 5,
        Node::Power(..) => 6,
        Node::Call(..) => 7,
        Node::Derivative(..) => 8,
    }
}

fn order_nodes(a: &Node, b: &Node) -> Ordering {
    match (a, b) {
        (Node::Number(a), Node::Number(b)) => a.order(*b),
        (Node::Symbol(a), Node::Symbol(b)) => a.cmp(b),
        (Node::Named(a, _), Node::Named(b, _)) => a.cmp(b),
        (Node::Sum(_, a), Node::Sum(_, b)) => order_lists(a.iter().map(|t| &t.1), b.iter().map(|t| &t.1)),
        (Node::Product(_, a), Node::Product(_, b)) => order_lists(a.iter().map(|t| &t.0), b.iter().map(|t| &t.0)),
        (Node::Power(a, x), Node::Power(b, y)) => a.order(b).then_with(|| x.order(y)),
        (Node::Call(f, a), Node::Call(g, b)) => f.cmp(g).then_with(|| order_lists(a.iter(), b.iter())),
        (Node::Derivative(a, x), Node::Derivative(b, y)) => a.order(b).then_with(|| x.cmp(y)),
        _ => rank(a).cmp(&rank(b)),
    }
}

fn order_lists<'a>(a: impl Iterator<Item = &'a Expression>, b: impl Iterator<Item = &'a Expression>) -> Ordering {
    let (a, b): (Vec<_>, Vec<_>) = (a.collect(), b.collect());
    let first_difference = a.iter().zip(&b).map(|(a, b)| a.order(b)).find(|order| order.is_ne());
    first_difference.unwrap_or(a.len().cmp(&b.len()))
}

/// A fixed hash: the order of equal-ranking parts, and with it every printed formula, must not change from run to run.
struct Digest(u64, u64);

impl Digest {
    fn word(&mut self, word: u64) {
        self.0 = mix(self.0 ^ word.wrapping_mul(0x9E37_79B9_7F4A_7C15)).wrapping_add(self.1);
        self.1 = mix(self.1.rotate_left(23) ^ word.wrapping_mul(0xC2B2_AE3D_27D4_EB4F)).wrapping_add(0x1656_67B1);
    }

    fn number(&mut self, number: Number) {
        number.bits().into_iter().for_each(|word| self.word(word));
    }

    fn expression(&mut self, expression: &Expression) {
        self.word(expression.key() as u64);
        self.word((expression.key() >> 64) as u64);
    }

    fn text(&mut self, text: &str) {
        self.word(text.len() as u64);
        for chunk in text.as_bytes().chunks(8) {
            self.word(chunk.iter().fold(0, |word, byte| word << 8 | u64::from(*byte)));
        }
    }
}

fn mix(mut word: u64) -> u64 {
    word = (word ^ (word >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
    word = (word ^ (word >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
    word ^ (word >> 31)
}

fn digest(node: &Node) -> u128 {
    let mut digest = Digest(0x243F_6A88_85A3_08D3, 0x1319_8A2E_0370_7344);
    digest.word(u64::from(rank(node)));
    match node {
        Node::Number(number) => digest.number(*number),
        Node::Pi => {}
        Node::Symbol(name) => digest.text(name),
        Node::Named(name, definition) => {
            digest.text(name);
            digest.expression(definition);
        }
        Node::Sum(constant, terms) => {
            digest.number(*constant);
            for (coefficient, term) in terms {
                digest.number(*coefficient);
                digest.expression(term);
            }
        }
        Node::Product(coefficient, factors) => {
            digest.number(*coefficient);
            for (base, exponent) in factors {
                digest.expression(base);
                digest.number(*exponent);
            }
        }
        Node::Power(base, exponent) => [base, exponent].into_iter().for_each(|part| digest.expression(part)),
        Node::Call(function, arguments) => {
            digest.word(*function as u64);
            arguments.iter().for_each(|argument| digest.expression(argument));
        }
        Node::Derivative(operand, names) => {
            digest.expression(operand);
            names.iter().for_each(|name| digest.text(name));
        }
    }
    u128::from(digest.0) << 64 | u128::from(digest.1)
}
