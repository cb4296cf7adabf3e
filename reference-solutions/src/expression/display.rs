//! Expressions as text that reads back to the same expression.

use std::fmt;

use super::{Expression, Node, Number};

/// How tightly a piece of text holds together: a weaker piece inside a stronger place needs parentheses.
#[derive(Clone, Copy, PartialEq, PartialOrd)]
enum Strength {
    Comparison,
    Sum,
    Product,
    Power,
    Atom,
}

impl fmt::Display for Expression {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&text(self).0)
    }
}

impl fmt::Debug for Expression {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        fmt::Display::fmt(self, f)
    }
}

impl fmt::Display for Number {
    /// A decimal where it is exact and short, else a quotient such as `2/3`.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Number::Fraction(n, 1) => write!(f, "{n}"),
            Number::Fraction(n, d) => {
                let decimal = format!("{}", self.to_f64());
                let exact = Number::from_decimal(&decimal) == Some(*self);
                if exact && decimal.len() < 14 { f.write_str(&decimal) } else { write!(f, "{n}/{d}") }
            }
            Number::Real(value) => {
                let (plain, scientific) = (format!("{value}"), format!("{value:e}"));
                f.write_str(if plain.len() <= scientific.len() + 2 { &plain } else { &scientific })
            }
        }
    }
}

impl Expression {
    /// The text with named parts as their names.
    pub(crate) fn named_text(&self) -> String {
        let mut names = |part: &Expression| match part.node() {
            Node::Named(name, _) => Some(Expression::symbol(name)),
            _ => None,
        };
        self.rebuilt(&mut Default::default(), &mut names).to_string()
    }
}

fn text(expression: &Expression) -> (String, Strength) {
    match expression.node() {
        Node::Number(number) => number_text(*number),
        Node::Pi => ("pi".to_string(), Strength::Atom),
        Node::Symbol(name) => (name.to_string(), Strength::Atom),
        Node::Named(_, definition) => text(definition),
        Node::Sum(constant, terms) => (sum(*constant, terms), Strength::Sum),
        Node::Product(coefficient, factors) => product(*coefficient, factors),
        Node::Power(base, exponent) => {
            (format!("{}^{}", at_least(base, Strength::Atom), at_least(exponent, Strength::Atom)), Strength::Power)
        }
        Node::Call(function, arguments) if function.is_comparison() => {
            let sides = [&arguments[0], &arguments[1]].map(|side| at_least(side, Strength::Sum));
            (format!("{} {} {}", sides[0], function.name(), sides[1]), Strength::Comparison)
        }
        Node::Call(function, arguments) => {
            let arguments: Vec<String> = arguments.iter().map(|argument| text(argument).0).collect();
            (format!("{}({})", function.name(), arguments.join(", ")), Strength::Atom)
        }
        Node::Derivative(operand, names) => (format!("d({}, {})", text(operand).0, names.join(", ")), Strength::Atom),
    }
}

fn number_text(number: Number) -> (String, Strength) {
    let text = number.to_string();
    let strength = match () {
        _ if text.starts_with('-') => Strength::Sum,
        _ if text.contains('/') => Strength::Product,
        _ => Strength::Atom,
    };
    (text, strength)
}

fn at_least(expression: &Expression, needed: Strength) -> String {
    let (text, strength) = text(expression);
    if strength < needed { format!("({text})") } else { text }
}

/// What is added first, what is subtracted last: `x - t`, not `-t + x`.
fn sum(constant: Number, terms: &[(Number, Expression)]) -> String {
    let size = |number: Number| if number.is_negative() { number.negated() } else { number };
    let constant_piece = (!constant.is_zero()).then(|| (constant.is_negative(), size(constant).to_string()));
    let term_pieces = terms.iter().map(|(coefficient, term)| {
        (coefficient.is_negative(), at_least(&term.scaled(size(*coefficient)), Strength::Product))
    });
    let (subtracted, added): (Vec<_>, Vec<_>) =
        constant_piece.into_iter().chain(term_pieces).partition(|(minus, _)| *minus);
    let mut result = added.into_iter().map(|(_, piece)| piece).collect::<Vec<_>>().join(" + ");
    for (_, piece) in subtracted {
        result += &if result.is_empty() { format!("-{piece}") } else { format!(" - {piece}") };
    }
    result
}

fn product(coefficient: Number, factors: &[(Expression, Number)]) -> (String, Strength) {
    if coefficient.is_negative() {
        let (rest, strength) = product(coefficient.negated(), factors);
        let rest = if strength < Strength::Product { format!("({rest})") } else { rest };
        return (format!("-{rest}"), Strength::Sum);
    }
    let (mut above, mut below) = (Vec::new(), Vec::new());
    match coefficient {
        _ if coefficient.is_one() => {}
        Number::Fraction(n, d) if coefficient.to_string().contains('/') => {
            above.extend((n != 1).then(|| n.to_string()));
            below.push(d.to_string());
        }
        _ => above.push(coefficient.to_string()),
    }
    for (base, exponent) in factors {
        match exponent.is_negative() {
            true => below.push(factor(base, exponent.negated())),
            false => above.push(factor(base, *exponent)),
        }
    }
    if below.is_empty() && above.len() == 1 {
        let strength = if above[0].contains('^') { Strength::Power } else { Strength::Atom };
        return (above.remove(0), strength);
    }
    let above = if above.is_empty() { "1".to_string() } else { above.join("*") };
    match below.as_slice() {
        [] => (above, Strength::Product),
        [one] => (format!("{above}/{one}"), Strength::Product),
        _ => (format!("{above}/({})", below.join("*")), Strength::Product),
    }
}

fn factor(base: &Expression, exponent: Number) -> String {
    if exponent == Number::HALF {
        return format!("sqrt({})", text(base).0);
    }
    let base = at_least(base, if exponent.is_one() { Strength::Power } else { Strength::Atom });
    match exponent.as_integer() {
        Some(1) => base,
        Some(whole) => format!("{base}^{whole}"),
        None => format!("{base}^({exponent})"),
    }
}

#[cfg(test)]
#[path = "display_tests.rs"]
mod tests;
