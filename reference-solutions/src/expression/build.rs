//! Constructors that keep the normal form.

use std::collections::HashMap;
use std::ops::{Add, Div, Mul, Neg, Sub};

use super::function::Function;
use super::{Expression, Node, Number};

impl Expression {
    /// A constant.
    pub fn number(number: Number) -> Expression {
        Expression::from_node(Node::Number(number))
    }

    /// 0
    pub fn zero() -> Expression {
        Expression::number(Number::ZERO)
    }

    /// 1
    pub fn one() -> Expression {
        Expression::number(Number::ONE)
    }

    /// The sum of coefficient * expression over `terms`, like terms collected.
    pub fn sum(terms: impl IntoIterator<Item = (Number, Expression)>) -> Expression {
        let mut collected = Collected::default();
        terms.into_iter().for_each(|(coefficient, term)| collected.add(coefficient, &term));
        collected.finish()
    }

    /// The product of base ^ exponent over `factors`, equal bases collected.
    ///
    /// x^a * x^b becomes x^(a + b), which may be defined where the original was not (at x = 0, or at x < 0 for roots).
    pub fn product(factors: impl IntoIterator<Item = (Expression, Number)>) -> Expression {
        let mut gathered = Gathered { coefficient: Number::ONE, factors: Vec::new(), places: HashMap::new() };
        factors.into_iter().for_each(|(base, exponent)| gathered.multiply(&base, exponent));
        gathered.finish()
    }

    /// `coefficient * self`.
    pub fn scaled(&self, coefficient: Number) -> Expression {
        Expression::product([(Expression::number(coefficient), Number::ONE), (self.clone(), Number::ONE)])
    }

    /// `self ^ exponent`.
    pub fn power(&self, exponent: &Expression) -> Expression {
        match exponent.as_number() {
            Some(number) => Expression::product([(self.clone(), number)]),
            None if self.as_number().is_some_and(Number::is_one) => self.clone(),
            None => Expression::from_node(Node::Power(self.clone(), exponent.clone())),
        }
    }

    /// `self ^ exponent` for an integer.
    pub fn powi(&self, exponent: i64) -> Expression {
        Expression::product([(self.clone(), Number::Fraction(exponent, 1))])
    }

    /// The square root.
    pub fn sqrt(&self) -> Expression {
        Expression::product([(self.clone(), Number::HALF)])
    }

    /// A function call, with values that are exact (`sin(0)`, `cos(pi)`, `max(1, 2)`) and symmetries (`cos(-x) = cos(x)`) applied.
    ///
    /// # Panics
    /// If the number of arguments is not [`Function::arguments`].
    pub fn call(function: Function, arguments: Vec<Expression>) -> Expression {
        assert_eq!(arguments.len(), function.arguments(), "arguments of {}", function.name());
        simplified_call(function, &arguments).unwrap_or_else(|| Expression::from_node(Node::Call(function, arguments)))
    }

    /// Splits into coefficient and the rest.
    pub(crate) fn coefficient(&self) -> (Number, Expression) {
        match self.node() {
            Node::Product(coefficient, factors) if !coefficient.is_one() => {
                (*coefficient, bare_product(Number::ONE, factors.clone()))
            }
            _ => (Number::ONE, self.clone()),
        }
    }

    /// Whether the leading coefficient is negative, so that the negative is the simpler form.
    fn leads_with_minus(&self) -> bool {
        match self.node() {
            Node::Number(number) => number.is_negative(),
            Node::Product(coefficient, _) => coefficient.is_negative(),
            Node::Sum(_, terms) => terms[0].0.is_negative(),
            _ => false,
        }
    }
}

/// Wraps factors that are already in normal form and order.
fn bare_product(coefficient: Number, factors: Vec<(Expression, Number)>) -> Expression {
    match factors.as_slice() {
        [] => Expression::number(coefficient),
        [(base, exponent)] if coefficient.is_one() && exponent.is_one() => base.clone(),
        _ => Expression::from_node(Node::Product(coefficient, factors)),
    }
}

#[derive(Default)]
struct Collected {
    constant: Option<Number>,
    terms: Vec<(Number, Expression)>,
    places: HashMap<u128, usize>,
}

impl Collected {
    fn add(&mut self, coefficient: Number, term: &Expression) {
        match term.node() {
            Node::Number(number) => {
                let constant = self.constant.unwrap_or(Number::ZERO);
                self.constant = Some(constant.plus(coefficient.times(*number)));
            }
            Node::Product(inner, _) if !inner.is_one() => {
                let (inner, rest) = term.coefficient();
                self.add(coefficient.times(inner), &rest);
            }
            // Other coefficients are not distributed: 2*(x + y) + z costs less than 2*x + 2*y + z.
            Node::Sum(constant, terms) if coefficient.is_one() || coefficient == Number::MINUS_ONE => {
                self.add(coefficient, &Expression::number(*constant));
                terms.iter().for_each(|(inner, term)| self.add(coefficient.times(*inner), term));
            }
            _ => match self.places.get(&term.key()) {
                Some(place) => self.terms[*place].0 = self.terms[*place].0.plus(coefficient),
                None => {
                    self.places.insert(term.key(), self.terms.len());
                    self.terms.push((coefficient, term.clone()));
                }
            },
        }
    }

    fn finish(self) -> Expression {
        let mut terms = self.terms;
        terms.retain(|(coefficient, _)| !coefficient.is_zero());
        terms.sort_by(|a, b| a.1.order(&b.1));
        let constant = self.constant.unwrap_or(Number::ZERO);
        match terms.as_slice() {
            [] => Expression::number(constant),
            [(coefficient, term)] if constant.is_zero() => term.scaled(*coefficient),
            _ => Expression::from_node(Node::Sum(constant, terms)),
        }
    }
}

struct Gathered {
    coefficient: Number,
    factors: Vec<(Expression, Number)>,
    places: HashMap<u128, usize>,
}

impl Gathered {
    fn multiply(&mut self, base: &Expression, exponent: Number) {
        if exponent.is_zero() {
            return;
        }
        let whole = exponent.as_integer().is_some();
        match base.node() {
            Node::Number(number) => match number.power(exponent) {
                Some(value) => self.coefficient = self.coefficient.times(value),
                None => self.insert(base, exponent),
            },
            // (b^p)^q is b^(pq) for whole q only: sqrt(x^2) is not x.
            Node::Product(coefficient, factors) if whole => {
                self.multiply(&Expression::number(*coefficient), exponent);
                factors.iter().for_each(|(base, inner)| self.multiply(base, inner.times(exponent)));
            }
            Node::Product(coefficient, _) if coefficient.to_f64() > 0.0 && !coefficient.is_one() => {
                self.multiply(&Expression::number(*coefficient), exponent);
                self.insert(&base.coefficient().1, exponent);
            }
            Node::Power(inner, power) if whole => {
                let power = power.scaled(exponent);
                match power.as_number() {
                    Some(number) => self.multiply(inner, number),
                    None => self.insert(&inner.power(&power), Number::ONE),
                }
            }
            _ => self.insert(base, exponent),
        }
    }

    fn insert(&mut self, base: &Expression, exponent: Number) {
        match self.places.get(&base.key()) {
            Some(place) => self.factors[*place].1 = self.factors[*place].1.plus(exponent),
            None => {
                self.places.insert(base.key(), self.factors.len());
                self.factors.push((base.clone(), exponent));
            }
        }
    }

    fn finish(mut self) -> Expression {
        if self.coefficient.is_zero() {
            return Expression::zero();
        }
        self.factors.retain(|(_, exponent)| !exponent.is_zero());
        // A root of a number that became whole by collection (sqrt(2) * sqrt(2)) is a number again; so is (b^(1/2))^2.
        let changed = self.factors.iter().any(|(base, exponent)| match base.node() {
            Node::Number(number) => number.power(*exponent).is_some(),
            Node::Product(..) | Node::Power(..) => {
                exponent.as_integer().is_some() && !matches!(base.node(), Node::Power(..))
            }
            _ => false,
        });
        if changed {
            let coefficient = (Expression::number(self.coefficient), Number::ONE);
            return Expression::product(std::iter::once(coefficient).chain(self.factors));
        }
        self.factors.sort_by(|a, b| a.0.order(&b.0).then_with(|| a.1.order(b.1)));
        bare_product(self.coefficient, self.factors)
    }
}

fn simplified_call(function: Function, arguments: &[Expression]) -> Option<Expression> {
    use Function::*;
    let first = &arguments[0];
    let numbers: Option<Vec<f64>> = arguments.iter().map(|a| a.as_number().map(Number::to_f64)).collect();
    let exact_on_numbers = function.is_comparison() || matches!(function, Min | Max | Abs | Sign | Heaviside | If);
    if let Some(numbers) = numbers.filter(|_| exact_on_numbers) {
        return Some(Expression::from(function.value(&numbers)));
    }
    match function {
        If => match first.as_number() {
            Some(condition) => return Some(arguments[if condition.is_zero() { 2 } else { 1 }].clone()),
            None if arguments[1] == arguments[2] => return Some(arguments[1].clone()),
            None => {}
        },
        Min | Max if first == &arguments[1] => return Some(first.clone()),
        Sin | Cos => {
            if let Some(value) = quarter_turns(first).map(|turns| turns + i64::from(function == Cos)) {
                return Some(Expression::from([0.0, 1.0, 0.0, -1.0][value.rem_euclid(4) as usize]));
            }
        }
        _ if first.is_zero() => match function {
            Tan | Asin | Atan | Sinh | Tanh | Asinh | Atanh | Erf => return Some(Expression::zero()),
            Exp | Cosh | Erfc => return Some(Expression::one()),
            _ => {}
        },
        Log if first.as_number().is_some_and(Number::is_one) => return Some(Expression::zero()),
        _ => {}
    }
    if !first.leads_with_minus() {
        return None;
    }
    match function {
        Sin | Tan | Asin | Atan | Sinh | Tanh | Asinh | Atanh | Erf | Sign => {
            Some(-Expression::call(function, vec![-first.clone()]))
        }
        Cos | Cosh | Abs => Some(Expression::call(function, vec![-first.clone()])),
        _ => None,
    }
}

/// `n` where the argument is n * pi/2.
fn quarter_turns(argument: &Expression) -> Option<i64> {
    match argument.node() {
        Node::Number(number) if number.is_zero() => Some(0),
        Node::Pi => Some(2),
        Node::Product(coefficient, factors) => match factors.as_slice() {
            [(base, exponent)] if matches!(base.node(), Node::Pi) && exponent.is_one() => {
                coefficient.times(Number::Fraction(2, 1)).as_integer()
            }
            _ => None,
        },
        _ => None,
    }
}

impl From<f64> for Expression {
    fn from(value: f64) -> Expression {
        Expression::number(Number::from_f64(value))
    }
}

impl From<i32> for Expression {
    fn from(value: i32) -> Expression {
        Expression::number(Number::Fraction(i64::from(value), 1))
    }
}

macro_rules! operator {
    ($trait:ident, $method:ident, |$a:ident, $b:ident| $body:expr) => {
        impl $trait<&Expression> for &Expression {
            type Output = Expression;
            fn $method(self, other: &Expression) -> Expression {
                let ($a, $b) = (self, other);
                $body
            }
        }
        impl $trait<Expression> for Expression {
            type Output = Expression;
            fn $method(self, other: Expression) -> Expression {
                $trait::$method(&self, &other)
            }
        }
        impl $trait<&Expression> for Expression {
            type Output = Expression;
            fn $method(self, other: &Expression) -> Expression {
                $trait::$method(&self, other)
            }
        }
        impl $trait<Expression> for &Expression {
            type Output = Expression;
            fn $method(self, other: Expression) -> Expression {
                $trait::$method(self, &other)
            }
        }
    };
}

operator!(Add, add, |a, b| Expression::sum([(Number::ONE, a.clone()), (Number::ONE, b.clone())]));
operator!(Sub, sub, |a, b| Expression::sum([(Number::ONE, a.clone()), (Number::MINUS_ONE, b.clone())]));
operator!(Mul, mul, |a, b| Expression::product([(a.clone(), Number::ONE), (b.clone(), Number::ONE)]));
operator!(Div, div, |a, b| Expression::product([(a.clone(), Number::ONE), (b.clone(), Number::MINUS_ONE)]));

impl Neg for Expression {
    type Output = Expression;
    fn neg(self) -> Expression {
        -&self
    }
}

impl Neg for &Expression {
    type Output = Expression;
    fn neg(self) -> Expression {
        match self.node() {
            // Into the sum: x - y and y - x then share one shape under even functions.
            Node::Sum(..) => Expression::sum([(Number::MINUS_ONE, self.clone())]),
            _ => self.scaled(Number::MINUS_ONE),
        }
    }
}
