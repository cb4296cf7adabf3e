//! Symbolic differentiation.

use std::collections::HashMap;
use std::sync::Arc;

use super::function::Function;
use super::{Expression, Node, Number};

impl Expression {
    /// The partial derivative by `name`.
    ///
    /// Almost everywhere: the derivative of `abs` is `sign`, that of `sign`, `heaviside` and of comparisons is 0; `min`, `max` and
    /// `if` are differentiated branch by branch. A [`Node::Named`] part `u` becomes a part named `u_d_x`.
    pub fn derivative(&self, name: &str) -> Expression {
        Differentiation { name, done: HashMap::new() }.of(self)
    }

    /// A derivative that is carried out once its operand is known: see [`Expression::carried_out`].
    pub(crate) fn open_derivative(operand: &Expression, names: &[Arc<str>]) -> Expression {
        match operand.node() {
            Node::Derivative(inner, before) => {
                let mut all: Vec<_> = before.iter().chain(names).cloned().collect();
                all.sort();
                Expression::from_node(Node::Derivative(inner.clone(), all))
            }
            Node::Number(_) | Node::Pi => Expression::zero(),
            _ => {
                let mut names = names.to_vec();
                names.sort();
                Expression::from_node(Node::Derivative(operand.clone(), names))
            }
        }
    }

    /// Carries out every `d(...)`: what it differentiates must have been substituted before.
    pub fn carried_out(&self) -> Expression {
        self.rebuilt(&mut HashMap::new(), &mut |expression| match expression.node() {
            Node::Derivative(operand, names) => {
                let derivative = |operand: Expression, name: &Arc<str>| operand.derivative(name);
                Some(names.iter().fold(operand.carried_out(), derivative))
            }
            _ => None,
        })
    }
}

struct Differentiation<'a> {
    name: &'a str,
    done: HashMap<u128, Expression>,
}

impl Differentiation<'_> {
    fn of(&mut self, expression: &Expression) -> Expression {
        if let Some(known) = self.done.get(&expression.key()) {
            return known.clone();
        }
        let derivative = self.by_rule(expression);
        self.done.insert(expression.key(), derivative.clone());
        derivative
    }

    fn by_rule(&mut self, expression: &Expression) -> Expression {
        match expression.node() {
            Node::Number(_) | Node::Pi => Expression::zero(),
            Node::Symbol(name) if **name == *self.name => Expression::one(),
            Node::Symbol(_) => Expression::zero(),
            Node::Named(name, definition) => {
                let derivative = self.of(definition);
                // In order, so that mixed derivatives have one name.
                let (stem, letters) = name.split_once("_d_").unwrap_or((name, ""));
                let mut letters: Vec<char> = letters.chars().chain(self.name.chars()).collect();
                letters.sort_unstable();
                Expression::named(&format!("{stem}_d_{}", letters.iter().collect::<String>()), derivative)
            }
            Node::Sum(_, terms) => {
                Expression::sum(terms.iter().map(|(c, term)| (*c, self.of(term))).collect::<Vec<_>>())
            }
            Node::Product(coefficient, factors) => self.product(*coefficient, factors),
            Node::Power(base, exponent) => self.power(expression, base, exponent),
            Node::Call(function, arguments) => self.call(*function, arguments, expression),
            Node::Derivative(operand, _) => {
                let name: Arc<str> = self.name.into();
                if self.of(operand).is_zero() {
                    Expression::zero()
                } else {
                    Expression::open_derivative(expression, &[name])
                }
            }
        }
    }

    fn product(&mut self, coefficient: Number, factors: &[(Expression, Number)]) -> Expression {
        let mut terms = Vec::new();
        for (place, (base, exponent)) in factors.iter().enumerate() {
            let inner = self.of(base);
            if inner.is_zero() {
                continue;
            }
            let lowered = exponent.plus(Number::MINUS_ONE);
            let rest = factors.iter().enumerate().map(|(k, (b, e))| (b.clone(), if k == place { lowered } else { *e }));
            let term = Expression::product(rest.chain([(inner, Number::ONE)]));
            terms.push((coefficient.times(*exponent), term));
        }
        Expression::sum(terms)
    }

    /// (b^e)' = b^e (e' ln b + e b'/b), the second part as e b^(e-1) b', which is right at b = 0 too.
    fn power(&mut self, whole: &Expression, base: &Expression, exponent: &Expression) -> Expression {
        let (base_slope, exponent_slope) = (self.of(base), self.of(exponent));
        let lowered = base.power(&(exponent - Expression::one()));
        let from_base = exponent * &lowered * base_slope;
        let from_exponent = match exponent_slope.is_zero() {
            true => Expression::zero(),
            false => whole * &exponent_slope * Expression::call(Function::Log, vec![base.clone()]),
        };
        from_base + from_exponent
    }

    fn call(&mut self, function: Function, arguments: &[Expression], whole: &Expression) -> Expression {
        use Function::*;
        let slopes: Vec<Expression> = arguments.iter().map(|argument| self.of(argument)).collect();
        if slopes.iter().all(Expression::is_zero) {
            return Expression::zero();
        }
        let call = |function, argument: &Expression| Expression::call(function, vec![argument.clone()]);
        let choose =
            |condition, a: &Expression, b: &Expression| Expression::call(If, vec![condition, a.clone(), b.clone()]);
        let (a, one) = (&arguments[0], Expression::one());
        let outer = match function {
            Exp => whole.clone(),
            Log => a.powi(-1),
            Sin => call(Cos, a),
            Cos => -call(Sin, a),
            Tan => one + whole.powi(2),
            Asin => (one - a.powi(2)).sqrt().powi(-1),
            Acos => -(one - a.powi(2)).sqrt().powi(-1),
            Atan => (one + a.powi(2)).powi(-1),
            Sinh => call(Cosh, a),
            Cosh => call(Sinh, a),
            Tanh => one - whole.powi(2),
            Asinh => (one + a.powi(2)).sqrt().powi(-1),
            // Two roots, not one of a^2 - 1: a below -1 is outside the domain of acosh.
            Acosh => ((a - &one).sqrt() * (a + &one).sqrt()).powi(-1),
            Atanh => (one - a.powi(2)).powi(-1),
            Erf | Erfc => {
                let bell = call(Exp, &-a.powi(2)) * Expression::pi().sqrt().powi(-1);
                bell.scaled(Number::Fraction(if function == Erf { 2 } else { -2 }, 1))
            }
            Abs => call(Sign, a),
            Atan2 => {
                let (y, x) = (&arguments[0], &arguments[1]);
                return (x * &slopes[0] - y * &slopes[1]) / (x.powi(2) + y.powi(2));
            }
            Min => return choose(Expression::call(Less, arguments.to_vec()), &slopes[0], &slopes[1]),
            Max => return choose(Expression::call(Greater, arguments.to_vec()), &slopes[0], &slopes[1]),
            If => return choose(arguments[0].clone(), &slopes[1], &slopes[2]),
            Sign | Heaviside | Less | LessEqual | Greater | GreaterEqual | Equal | NotEqual => {
                return Expression::zero();
            }
        };
        outer * &slopes[0]
    }
}

#[cfg(test)]
#[path = "derive_tests.rs"]
mod tests;
