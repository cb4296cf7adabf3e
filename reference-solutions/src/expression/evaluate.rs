//! Values at one point. For many points compile a [`Program`](crate::expression::Program).

use std::collections::HashMap;

use num_complex::Complex64;

use super::error::EvaluateError;
use super::{Expression, Node, Number};

impl Expression {
    /// The value with these names bound; NaN or infinite outside the domain.
    pub fn evaluate(&self, values: &[(&str, f64)]) -> Result<f64, EvaluateError> {
        let value = |name: &str| values.iter().find(|(known, _)| *known == name).map(|(_, value)| *value);
        real(self, &value, &mut HashMap::new())
    }

    /// The value with complex names; `i` is the imaginary unit unless bound otherwise. Roots and logarithms on the principal branch.
    pub fn evaluate_complex(&self, values: &[(&str, Complex64)]) -> Result<Complex64, EvaluateError> {
        let value = |name: &str| {
            let bound = values.iter().find(|(known, _)| *known == name).map(|(_, value)| *value);
            bound.or((name == "i").then_some(Complex64::I))
        };
        complex(self, &value, &mut HashMap::new())
    }
}

/// base ^ exponent for a number: whole and half exponents by multiplication and a root, as the compiled programs do.
pub(crate) fn number_power(base: f64, exponent: Number) -> f64 {
    match exponent {
        Number::Fraction(n, 1) if n.unsigned_abs() <= 64 => whole_power(base, n),
        Number::Fraction(n, 2) if n.unsigned_abs() <= 64 => whole_power(base.sqrt(), n),
        _ => libm::pow(base, exponent.to_f64()),
    }
}

fn whole_power(base: f64, exponent: i64) -> f64 {
    let mut result = 1.0;
    let (mut square, mut rest) = (base, exponent.unsigned_abs());
    while rest > 0 {
        if rest & 1 == 1 {
            result *= square;
        }
        square *= square;
        rest >>= 1;
    }
    if exponent < 0 { 1.0 / result } else { result }
}

fn real(
    expression: &Expression,
    value: &impl Fn(&str) -> Option<f64>,
    done: &mut HashMap<u128, f64>,
) -> Result<f64, EvaluateError> {
    if let Some(known) = done.get(&expression.key()) {
        return Ok(*known);
    }
    let result = match expression.node() {
        Node::Number(number) => number.to_f64(),
        Node::Pi => std::f64::consts::PI,
        Node::Symbol(name) => value(name).ok_or_else(|| EvaluateError::Unbound { name: name.to_string() })?,
        Node::Named(_, definition) => real(definition, value, done)?,
        Node::Sum(constant, terms) => {
            let mut sum = constant.to_f64();
            for (coefficient, term) in terms {
                sum += coefficient.to_f64() * real(term, value, done)?;
            }
            sum
        }
        Node::Product(coefficient, factors) => {
            let mut product = coefficient.to_f64();
            for (base, exponent) in factors {
                product *= number_power(real(base, value, done)?, *exponent);
            }
            product
        }
        Node::Power(base, exponent) => libm::pow(real(base, value, done)?, real(exponent, value, done)?),
        Node::Call(function, arguments) => {
            let mut values = Vec::with_capacity(arguments.len());
            for argument in arguments {
                values.push(real(argument, value, done)?);
            }
            function.value(&values)
        }
        Node::Derivative(..) => return Err(EvaluateError::OpenDerivative { derivative: expression.to_string() }),
    };
    done.insert(expression.key(), result);
    Ok(result)
}

fn complex(
    expression: &Expression,
    value: &impl Fn(&str) -> Option<Complex64>,
    done: &mut HashMap<u128, Complex64>,
) -> Result<Complex64, EvaluateError> {
    if let Some(known) = done.get(&expression.key()) {
        return Ok(*known);
    }
    let result = match expression.node() {
        Node::Number(number) => number.to_f64().into(),
        Node::Pi => std::f64::consts::PI.into(),
        Node::Symbol(name) => value(name).ok_or_else(|| EvaluateError::Unbound { name: name.to_string() })?,
        Node::Named(_, definition) => complex(definition, value, done)?,
        Node::Sum(constant, terms) => {
            let mut sum = Complex64::from(constant.to_f64());
            for (coefficient, term) in terms {
                sum += complex(term, value, done)? * coefficient.to_f64();
            }
            sum
        }
        Node::Product(coefficient, factors) => {
            let mut product = Complex64::from(coefficient.to_f64());
            for (base, exponent) in factors {
                product *= complex_power(complex(base, value, done)?, *exponent);
            }
            product
        }
        Node::Power(base, exponent) => complex(base, value, done)?.powc(complex(exponent, value, done)?),
        Node::Call(function, arguments) => {
            let mut values = Vec::with_capacity(arguments.len());
            for argument in arguments {
                values.push(complex(argument, value, done)?);
            }
            let result = function.complex_value(&values);
            result.ok_or(EvaluateError::NotComplex { function: function.name() })?
        }
        Node::Derivative(..) => return Err(EvaluateError::OpenDerivative { derivative: expression.to_string() }),
    };
    done.insert(expression.key(), result);
    Ok(result)
}

fn complex_power(base: Complex64, exponent: Number) -> Complex64 {
    match exponent {
        Number::Fraction(n, 1) if n.unsigned_abs() <= 64 => base.powi(n as i32),
        Number::Fraction(n, 2) if n.unsigned_abs() <= 64 => base.sqrt().powi(n as i32),
        _ => base.powf(exponent.to_f64()),
    }
}
