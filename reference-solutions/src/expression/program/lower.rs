//! Expressions to straight-line code.

use std::collections::HashMap;

use super::super::{EvaluateError, Expression, Node, Number};
use super::share::{self, Shared};
use super::{Operation, Program, Value};

pub(super) fn compile(expressions: &[Expression], inputs: Vec<String>) -> Result<Program, EvaluateError> {
    assert!(inputs.len() <= 32, "at most 32 inputs");
    let shared = share::shared(expressions);
    let mut code = Code { inputs, shared, ..Code::default() };
    let outputs = expressions.iter().map(|expression| code.value(expression)).collect::<Result<Vec<_>, _>>()?;
    Ok(code.finish(outputs))
}

#[derive(Default)]
struct Code {
    inputs: Vec<String>,
    operations: Vec<Operation>,
    dependencies: Vec<u32>,
    names: Vec<Option<String>>,
    shared: Shared,
    /// Values by expression, and by operation.
    known: HashMap<u128, Value>,
    numbered: HashMap<[u64; 5], Value>,
}

impl Code {
    fn value(&mut self, expression: &Expression) -> Result<Value, EvaluateError> {
        if let Some(value) = self.known.get(&expression.key()) {
            return Ok(*value);
        }
        let value = self.compute(expression)?;
        self.known.insert(expression.key(), value);
        Ok(value)
    }

    fn compute(&mut self, expression: &Expression) -> Result<Value, EvaluateError> {
        Ok(match expression.node() {
            Node::Number(number) => self.constant(number.to_f64()),
            Node::Pi => self.constant(std::f64::consts::PI),
            Node::Symbol(name) => match self.inputs.iter().position(|input| **input == **name) {
                Some(input) => self.emit(Operation::Input(input)),
                None => return Err(EvaluateError::Unbound { name: name.to_string() }),
            },
            Node::Named(name, definition) => {
                let value = self.value(definition)?;
                self.names[value].get_or_insert_with(|| name.to_string());
                value
            }
            Node::Sum(constant, terms) => self.sum(expression, *constant, terms)?,
            Node::Product(coefficient, factors) => self.product(expression, *coefficient, factors)?,
            Node::Power(base, exponent) => {
                let (base, exponent) = (self.value(base)?, self.value(exponent)?);
                self.emit(Operation::Power(base, exponent))
            }
            Node::Call(function, arguments) => {
                let first = self.value(&arguments[0])?;
                let mut values = [first; 3];
                for (place, argument) in arguments.iter().enumerate() {
                    values[place] = self.value(argument)?;
                }
                self.emit(Operation::Call(*function, values))
            }
            Node::Derivative(..) => return Err(EvaluateError::OpenDerivative { derivative: expression.to_string() }),
        })
    }

    /// Terms of equal coefficient are added before they are scaled, and parts with fewer dependencies first, so that they can be
    /// computed once.
    fn sum(
        &mut self,
        whole: &Expression,
        constant: Number,
        terms: &[(Number, Expression)],
    ) -> Result<Value, EvaluateError> {
        let terms = self.shared.terms(whole).unwrap_or_else(|| terms.to_vec());
        let mut groups: Vec<(Number, Vec<Value>)> = Vec::new();
        for (coefficient, term) in &terms {
            let value = self.value(term)?;
            let size = if coefficient.is_negative() { coefficient.negated() } else { *coefficient };
            match groups.iter_mut().find(|(known, _)| *known == size) {
                Some((_, members)) => members.push(signed(value, coefficient.is_negative())),
                None => groups.push((size, vec![signed(value, coefficient.is_negative())])),
            }
        }
        let mut parts = Vec::new();
        for (size, members) in groups {
            if size.is_one() {
                parts.extend(members);
                continue;
            }
            let (sum, negative) = self.added(members);
            let size = self.constant(size.to_f64());
            parts.push(signed(self.emit(Operation::Multiply(size, sum)), negative));
        }
        if !constant.is_zero() {
            parts.push(signed(self.constant(constant.to_f64().abs()), constant.is_negative()));
        }
        let (sum, negative) = self.added(parts);
        Ok(if negative { self.emit(Operation::Negate(sum)) } else { sum })
    }

    /// Adds signed values; the result is to be negated where the flag says so.
    fn added(&mut self, mut parts: Vec<usize>) -> (Value, bool) {
        parts.sort_by_key(|part| (self.dependencies[part >> 1].count_ones(), self.dependencies[part >> 1]));
        let negative = parts.iter().all(|part| part & 1 == 1);
        // The first positive part leads; where there is none the sum of the sizes is negated by whoever uses it.
        let lead = parts.iter().position(|part| part & 1 == 0).unwrap_or(0);
        let lead_class = self.dependencies[parts[lead] >> 1];
        let first_class = self.dependencies[parts[0] >> 1];
        let mut sum =
            if lead_class == first_class || negative { parts.remove(lead) >> 1 } else { self.led(&mut parts) };
        for part in parts {
            sum = match part & 1 == 1 && !negative {
                true => self.emit(Operation::Subtract(sum, part >> 1)),
                false => self.emit(Operation::Add(sum, part >> 1)),
            };
        }
        (sum, negative)
    }

    /// Starts a sum whose parts of fewest dependencies are all negative: these are collected, and subtracted from the first
    /// positive part.
    fn led(&mut self, parts: &mut Vec<usize>) -> Value {
        let class = self.dependencies[parts[0] >> 1];
        let count =
            parts.iter().take_while(|part| part.to_owned() & 1 == 1 && self.dependencies[*part >> 1] == class).count();
        let leading: Vec<usize> = parts.drain(..count).collect();
        let (sum, _) = self.added(leading);
        let lead = parts.iter().position(|part| part & 1 == 0).expect("some part is positive");
        let lead = parts.remove(lead) >> 1;
        self.emit(Operation::Subtract(lead, sum))
    }

    fn product(
        &mut self,
        whole: &Expression,
        coefficient: Number,
        factors: &[(Expression, Number)],
    ) -> Result<Value, EvaluateError> {
        let (coefficient, factors) = self.shared.factors(whole).unwrap_or_else(|| (coefficient, factors.to_vec()));
        let (mut above, mut below) = (Vec::new(), Vec::new());
        let mut constant = coefficient.to_f64();
        for (base, exponent) in &factors {
            let size = if exponent.is_negative() { exponent.negated() } else { *exponent };
            let base = self.value(base)?;
            let power = self.power(base, size);
            match (self.operations[power], exponent.is_negative()) {
                (Operation::Constant(value), false) => constant *= value,
                (Operation::Constant(value), true) => constant /= value,
                (_, false) => above.push(power),
                (_, true) => below.push(power),
            }
        }
        let negative = constant < 0.0 && constant == -1.0 && !above.is_empty();
        if !(constant == 1.0 || negative) || above.is_empty() {
            let constant = self.constant(constant);
            above.push(constant);
        }
        let mut product = self.multiplied(above);
        if !below.is_empty() {
            let below = self.multiplied(below);
            product = self.emit(Operation::Divide(product, below));
        }
        Ok(if negative { self.emit(Operation::Negate(product)) } else { product })
    }

    fn multiplied(&mut self, mut factors: Vec<Value>) -> Value {
        factors.sort_by_key(|factor| (self.dependencies[*factor].count_ones(), self.dependencies[*factor], *factor));
        factors.into_iter().reduce(|a, b| self.emit(Operation::Multiply(a, b))).expect("a product has factors")
    }

    /// A positive power: whole and half exponents by multiplication and a root, as in `number_power`.
    fn power(&mut self, base: Value, exponent: Number) -> Value {
        let (base, whole) = match exponent {
            Number::Fraction(n, 1) if n <= 64 => (base, n),
            Number::Fraction(n, 2) if n <= 64 => (self.emit(Operation::SquareRoot(base)), n),
            _ => {
                let exponent = self.constant(exponent.to_f64());
                return self.emit(Operation::Power(base, exponent));
            }
        };
        let (mut result, mut square, mut rest) = (None, base, whole);
        while rest > 0 {
            if rest & 1 == 1 {
                result = Some(result.map_or(square, |result| self.emit(Operation::Multiply(result, square))));
            }
            rest >>= 1;
            if rest > 0 {
                square = self.emit(Operation::Multiply(square, square));
            }
        }
        result.expect("the exponent is at least 1")
    }

    fn constant(&mut self, value: f64) -> Value {
        self.emit(Operation::Constant(value))
    }

    /// Adds an operation, or finds the value that it would compute; operations on constants are carried out.
    fn emit(&mut self, operation: Operation) -> Value {
        let operands = operation.operands();
        let constant = |value: Value| match self.operations[value] {
            Operation::Constant(constant) => Some(constant),
            _ => None,
        };
        if !operands.is_empty() && operands.iter().all(|operand| constant(*operand).is_some()) {
            let folded = operation.result(&[], |value| constant(value).expect("checked above"));
            return self.emit(Operation::Constant(folded));
        }
        let key = key(&operation);
        if let Some(known) = self.numbered.get(&key) {
            return *known;
        }
        let own = if let Operation::Input(input) = operation { 1 << input } else { 0 };
        let dependencies = operands.iter().fold(own, |all, operand| all | self.dependencies[*operand]);
        self.operations.push(operation);
        self.dependencies.push(dependencies);
        self.names.push(None);
        self.numbered.insert(key, self.operations.len() - 1);
        self.operations.len() - 1
    }

    /// Drops what no output needs.
    fn finish(self, outputs: Vec<Value>) -> Program {
        let mut needed = vec![false; self.operations.len()];
        outputs.iter().for_each(|output| needed[*output] = true);
        for value in (0..self.operations.len()).rev() {
            if needed[value] {
                self.operations[value].operands().iter().for_each(|operand| needed[*operand] = true);
            }
        }
        let mut place = vec![0; self.operations.len()];
        let mut program = Program {
            inputs: self.inputs,
            operations: Vec::new(),
            dependencies: Vec::new(),
            outputs: Vec::new(),
            names: Vec::new(),
        };
        for value in (0..self.operations.len()).filter(|value| needed[*value]) {
            place[value] = program.operations.len();
            program.operations.push(moved(&self.operations[value], &place));
            program.dependencies.push(self.dependencies[value]);
            program.names.push(self.names[value].clone());
        }
        program.outputs = outputs.iter().map(|output| place[*output]).collect();
        program
    }
}

/// A value with a sign in its lowest bit.
fn signed(value: Value, negative: bool) -> usize {
    value << 1 | usize::from(negative)
}

fn moved(operation: &Operation, place: &[Value]) -> Operation {
    match *operation {
        Operation::Constant(_) | Operation::Input(_) => *operation,
        Operation::Add(a, b) => Operation::Add(place[a], place[b]),
        Operation::Subtract(a, b) => Operation::Subtract(place[a], place[b]),
        Operation::Multiply(a, b) => Operation::Multiply(place[a], place[b]),
        Operation::Divide(a, b) => Operation::Divide(place[a], place[b]),
        Operation::Power(a, b) => Operation::Power(place[a], place[b]),
        Operation::Negate(a) => Operation::Negate(place[a]),
        Operation::SquareRoot(a) => Operation::SquareRoot(place[a]),
        Operation::Call(function, arguments) => Operation::Call(function, arguments.map(|argument| place[argument])),
    }
}

/// Operations with equal keys compute equal values; sums and products have their operands in order.
fn key(operation: &Operation) -> [u64; 5] {
    let ordered = |a: Value, b: Value| [a.min(b) as u64, a.max(b) as u64];
    let (tag, a, b) = match *operation {
        Operation::Constant(value) => (0, value.to_bits(), 0),
        Operation::Input(input) => (1, input as u64, 0),
        Operation::Add(a, b) => (2, ordered(a, b)[0], ordered(a, b)[1]),
        Operation::Subtract(a, b) => (3, a as u64, b as u64),
        Operation::Multiply(a, b) => (4, ordered(a, b)[0], ordered(a, b)[1]),
        Operation::Divide(a, b) => (5, a as u64, b as u64),
        Operation::Negate(a) => (6, a as u64, 0),
        Operation::SquareRoot(a) => (7, a as u64, 0),
        Operation::Power(a, b) => (8, a as u64, b as u64),
        Operation::Call(function, [a, b, c]) => return [9, a as u64, b as u64, c as u64, function as u64],
    };
    [tag, a, b, 0, 0]
}
