//! Expressions compiled for evaluation at many points.
//!
//! A [`Program`] is straight-line code: every value once, equal values shared. A [`Plan`] fits it to what the inputs are (one
//! number, a number for each point, a coordinate of a Cartesian grid), so that what does not vary is computed once, what
//! depends on one coordinate once a line, and the rest in blocks by loops that the compiler vectorises.

mod block;
mod buffers;
mod lower;
mod plan;
mod share;
mod tape;

pub use plan::{Input, Kind, Plan};

use super::function::Function;
use super::{EvaluateError, Expression};

/// Number of a value within a program.
pub(crate) type Value = usize;

/// How a value is computed from earlier ones.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum Operation {
    Constant(f64),
    Input(usize),
    Add(Value, Value),
    Subtract(Value, Value),
    Multiply(Value, Value),
    Divide(Value, Value),
    Negate(Value),
    SquareRoot(Value),
    Power(Value, Value),
    /// Unused arguments repeat the first one.
    Call(Function, [Value; 3]),
}

impl Operation {
    /// The values it reads.
    pub(crate) fn operands(&self) -> Vec<Value> {
        match *self {
            Operation::Constant(_) | Operation::Input(_) => Vec::new(),
            Operation::Add(a, b)
            | Operation::Subtract(a, b)
            | Operation::Multiply(a, b)
            | Operation::Divide(a, b)
            | Operation::Power(a, b) => vec![a, b],
            Operation::Negate(a) | Operation::SquareRoot(a) => vec![a],
            Operation::Call(function, arguments) => arguments[..function.arguments()].to_vec(),
        }
    }

    /// The result for operands given by `value`.
    pub(crate) fn result(&self, inputs: &[f64], value: impl Fn(Value) -> f64) -> f64 {
        match *self {
            Operation::Constant(constant) => constant,
            Operation::Input(input) => inputs[input],
            Operation::Add(a, b) => value(a) + value(b),
            Operation::Subtract(a, b) => value(a) - value(b),
            Operation::Multiply(a, b) => value(a) * value(b),
            Operation::Divide(a, b) => value(a) / value(b),
            Operation::Negate(a) => -value(a),
            Operation::SquareRoot(a) => value(a).sqrt(),
            Operation::Power(a, b) => libm::pow(value(a), value(b)),
            Operation::Call(function, arguments) => function.value(&arguments.map(value)),
        }
    }
}

/// Straight-line code for several expressions at once.
#[derive(Clone, Debug)]
pub struct Program {
    inputs: Vec<String>,
    operations: Vec<Operation>,
    /// Bit i is set where a value depends on input i.
    dependencies: Vec<u32>,
    outputs: Vec<Value>,
    /// Names that the expressions gave to some of the values.
    names: Vec<Option<String>>,
}

impl Program {
    /// Compiles `expressions`, whose free names are among `inputs` (at most 32).
    ///
    /// # Errors
    /// [`EvaluateError::Unbound`] for a free name that is no input, [`EvaluateError::OpenDerivative`] for an open `d(...)`.
    pub fn new<N: AsRef<str>>(expressions: &[Expression], inputs: &[N]) -> Result<Program, EvaluateError> {
        lower::compile(expressions, inputs.iter().map(|name| name.as_ref().to_string()).collect())
    }

    /// Names of the inputs, in order.
    pub fn inputs(&self) -> &[String] {
        &self.inputs
    }

    /// Number of outputs.
    pub fn outputs(&self) -> usize {
        self.outputs.len()
    }

    /// Number of arithmetic operations and function calls.
    pub fn operations(&self) -> usize {
        let free = |operation: &&Operation| !matches!(operation, Operation::Constant(_) | Operation::Input(_));
        self.operations.iter().filter(free).count()
    }

    /// Whether output `output` depends on input `input`.
    pub fn depends(&self, output: usize, input: usize) -> bool {
        self.dependencies[self.outputs[output]] >> input & 1 == 1
    }

    /// All outputs at one point; `inputs` in the order of [`Program::inputs`].
    pub fn at(&self, inputs: &[f64]) -> Vec<f64> {
        let mut values: Vec<f64> = Vec::with_capacity(self.operations.len());
        for operation in &self.operations {
            values.push(operation.result(inputs, |value| values[value]));
        }
        self.outputs.iter().map(|output| values[*output]).collect()
    }

    /// All outputs at many points: see [`Plan::evaluate`]. For repeated calls keep a [`Plan`].
    ///
    /// # Panics
    /// As [`Plan::evaluate`].
    pub fn evaluate(&self, inputs: &[Input], outputs: &mut [&mut [f64]]) {
        let kinds: Vec<Kind> = inputs.iter().map(Input::kind).collect();
        Plan::new(self, &kinds).evaluate(inputs, outputs);
    }

    pub(crate) fn code(&self) -> &[Operation] {
        &self.operations
    }

    pub(crate) fn output_values(&self) -> &[Value] {
        &self.outputs
    }

    pub(crate) fn name(&self, value: Value) -> Option<&str> {
        self.names[value].as_deref()
    }
}

#[cfg(test)]
mod tests;
