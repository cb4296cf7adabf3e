//! A program fitted to its inputs: what is computed once, once a line, once for all times, and once a point.

use super::block::Operand;
use super::tape::{BLOCK, Registers, Tape};
use super::{Operation, Program, Value};

/// What an input is, without its values.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// One number.
    Scalar,
    /// A number for each point.
    Points,
    /// A coordinate of a Cartesian grid.
    Axis,
}

/// The values of an input.
#[derive(Clone, Copy, Debug)]
pub enum Input<'a> {
    /// One number for all points.
    Scalar(f64),
    /// A number for each point.
    Points(&'a [f64]),
    /// The coordinate along one direction of a Cartesian grid. The points are the product of all axes in the order of the inputs,
    /// the first one fastest.
    Axis(&'a [f64]),
}

impl Input<'_> {
    /// What it is.
    pub fn kind(&self) -> Kind {
        match self {
            Input::Scalar(_) => Kind::Scalar,
            Input::Points(_) => Kind::Points,
            Input::Axis(_) => Kind::Axis,
        }
    }
}

/// A program fitted to the kinds of its inputs.
pub struct Plan {
    program: Program,
    kinds: Vec<Kind>,
    time: Option<usize>,
    /// Values of one coordinate, computed once a grid (and once a time, if they depend on it).
    lines: Vec<Line>,
    /// What varies from point to point but not in time.
    fixed: Tape,
    /// The rest; its externals include the results of `fixed`.
    varying: Tape,
    fixed_results: Vec<Value>,
}

struct Line {
    input: usize,
    results: Vec<Value>,
    tape: Tape,
}

/// Classes of values for given kinds.
struct Classes<'a> {
    program: &'a Program,
    scalars: u32,
    axes: u32,
    time: u32,
}

impl Classes<'_> {
    fn varies(&self, value: Value) -> u32 {
        self.program.dependencies[value] & !self.scalars
    }

    fn is_scalar(&self, value: Value) -> bool {
        self.varies(value) == 0
    }

    fn is_input(&self, value: Value) -> bool {
        matches!(self.program.operations[value], Operation::Input(_))
    }

    /// The axis that a value depends on, if on nothing else.
    fn line(&self, value: Value) -> Option<usize> {
        let varies = self.varies(value);
        (varies.count_ones() == 1 && varies & self.axes != 0).then_some(varies.trailing_zeros() as usize)
    }

    fn is_pointwise(&self, value: Value) -> bool {
        !self.is_scalar(value) && self.line(value).is_none() && !self.is_input(value)
    }

    fn changes(&self, value: Value) -> bool {
        self.program.dependencies[value] & self.time != 0
    }

    /// Values that fit `is_inside` and are read by one that fits `is_reader`, or are outputs.
    fn frontier(&self, is_inside: impl Fn(Value) -> bool, is_reader: impl Fn(Value) -> bool) -> Vec<Value> {
        let mut read = vec![false; self.program.operations.len()];
        self.program.outputs.iter().for_each(|output| read[*output] = true);
        for value in (0..read.len()).filter(|value| is_reader(*value)) {
            self.program.operations[value].operands().iter().for_each(|operand| read[*operand] = true);
        }
        (0..read.len()).filter(|value| read[*value] && is_inside(*value)).collect()
    }
}

impl Plan {
    /// Fits `program` to inputs of these kinds.
    ///
    /// # Panics
    /// If `kinds` is not as long as the program's inputs.
    pub fn new(program: &Program, kinds: &[Kind]) -> Plan {
        Plan::fitted(program, kinds, None)
    }

    /// Fits `program` to many times: see [`Plan::evaluate_at_times`]. Input number `time` is the time, a scalar.
    ///
    /// # Panics
    /// As [`Plan::new`], and if the time is no scalar.
    pub fn with_times(program: &Program, kinds: &[Kind], time: usize) -> Plan {
        assert_eq!(kinds[time], Kind::Scalar, "the time is one number for all points");
        Plan::fitted(program, kinds, Some(time))
    }

    fn fitted(program: &Program, kinds: &[Kind], time: Option<usize>) -> Plan {
        assert_eq!(kinds.len(), program.inputs.len(), "one kind for each input");
        let mask = |kind: Kind| (0..kinds.len()).filter(|i| kinds[*i] == kind).fold(0, |mask, i| mask | 1 << i);
        let classes = Classes {
            program,
            scalars: mask(Kind::Scalar),
            axes: mask(Kind::Axis),
            time: time.map_or(0, |time| 1 << time),
        };
        let is_scalar = |value: Value| classes.is_scalar(value);
        let line = |input: usize| {
            let is_member = |value: Value| classes.line(value) == Some(input) && !classes.is_input(value);
            let results = classes.frontier(is_member, |value| classes.is_pointwise(value));
            let tape = Tape::new(program, &is_member, &is_scalar, &results);
            Line { input, results, tape }
        };
        let lines = (0..kinds.len()).filter(|input| kinds[*input] == Kind::Axis).map(line).collect();
        let is_fixed = |value: Value| time.is_some() && classes.is_pointwise(value) && !classes.changes(value);
        let is_varying = |value: Value| classes.is_pointwise(value) && !is_fixed(value);
        let fixed_results = classes.frontier(is_fixed, is_varying);
        let fixed = Tape::new(program, &is_fixed, &is_scalar, &fixed_results);
        let varying = Tape::new(program, &is_varying, &is_scalar, &program.outputs);
        Plan { program: program.clone(), kinds: kinds.to_vec(), time, lines, fixed, varying, fixed_results }
    }

    /// Computes all outputs at all points, in blocks, on one thread.
    ///
    /// Memory beyond the outputs: a few kilobytes a register, and for Cartesian grids the values along each axis.
    ///
    /// # Panics
    /// If the inputs are not of the kinds that the plan was made for, or lengths do not fit: every [`Input::Points`] and every
    /// output has one value a point.
    pub fn evaluate(&self, inputs: &[Input], outputs: &mut [&mut [f64]]) {
        let time = self.time.map(|time| match inputs[time] {
            Input::Scalar(value) => value,
            _ => f64::NAN,
        });
        self.evaluate_at_times(inputs, &[time.unwrap_or(0.0)], outputs);
    }

    /// Computes all outputs at all points and `times`; what does not depend on time is computed once. Outputs stand time by time:
    /// output k at time number j is `outputs[j * program.outputs() + k]`. The value of the time among the inputs is ignored.
    ///
    /// # Panics
    /// As [`Plan::evaluate`].
    pub fn evaluate_at_times(&self, inputs: &[Input], times: &[f64], outputs: &mut [&mut [f64]]) {
        let points = self.check(inputs, times, outputs);
        let moments: Vec<Moment> = times.iter().map(|time| self.moment(inputs, *time)).collect();
        let Some(first) = moments.first() else { return };
        let mut fixed_registers = self.fixed.registers();
        let mut varying_registers = self.varying.registers();
        let (mut fixed_buffers, mut varying_buffers) = (buffers(&self.fixed), buffers(&self.varying));
        for start in (0..points).step_by(BLOCK) {
            let length = BLOCK.min(points - start);
            let at = Place { start, length };
            self.gather(&self.fixed, inputs, first, at, &mut fixed_buffers);
            let externals = self.externals(&self.fixed, inputs, at, &fixed_buffers);
            self.fixed.run(length, &first.scalars, &externals, &mut fixed_registers);
            for (moment, outputs) in moments.iter().zip(outputs.chunks_mut(self.program.outputs.len().max(1))) {
                self.gather(&self.varying, inputs, moment, at, &mut varying_buffers);
                let mut blocks = self.externals(&self.varying, inputs, at, &varying_buffers);
                self.hand_over(&mut blocks, at, &externals, &moment.scalars, &fixed_registers);
                self.varying.run(length, &moment.scalars, &blocks, &mut varying_registers);
                self.deliver(outputs, at, moment, &blocks, &varying_registers);
            }
        }
    }

    /// Puts the results of the fixed part among the externals of the varying one.
    fn hand_over<'a>(
        &self,
        blocks: &mut [&'a [f64]],
        at: Place,
        externals: &[&'a [f64]],
        scalars: &[f64],
        registers: &'a Registers,
    ) {
        for (block, value) in blocks.iter_mut().zip(&self.varying.externals) {
            if let Some(result) = self.fixed_results.iter().position(|result| result == value) {
                match self.fixed.result(result, at.length, scalars, externals, registers) {
                    Operand::Block(values) => *block = values,
                    Operand::Scalar(_) => unreachable!("fixed results vary from point to point"),
                }
            }
        }
    }

    fn deliver(
        &self,
        outputs: &mut [&mut [f64]],
        at: Place,
        moment: &Moment,
        blocks: &[&[f64]],
        registers: &Registers,
    ) {
        for (index, output) in outputs.iter_mut().enumerate() {
            let target = &mut output[at.start..at.start + at.length];
            match self.varying.result(index, at.length, &moment.scalars, blocks, registers) {
                Operand::Block(values) => target.copy_from_slice(values),
                Operand::Scalar(value) => target.fill(value),
            }
        }
    }

    /// Number of points; panics where lengths do not fit.
    fn check(&self, inputs: &[Input], times: &[f64], outputs: &[&mut [f64]]) -> usize {
        let kinds: Vec<Kind> = inputs.iter().map(Input::kind).collect();
        assert_eq!(kinds, self.kinds, "inputs of the kinds that the plan was made for");
        assert_eq!(outputs.len(), times.len() * self.program.outputs.len(), "one array for each output and time");
        let points = outputs.first().map_or(0, |output| output.len());
        assert!(outputs.iter().all(|output| output.len() == points), "outputs of one length");
        let mut grid = None;
        for input in inputs {
            match input {
                Input::Points(values) => assert_eq!(values.len(), points, "one input value for each output value"),
                Input::Axis(values) => grid = Some(grid.unwrap_or(1) * values.len()),
                Input::Scalar(_) => {}
            }
        }
        assert_eq!(grid.unwrap_or(points), points, "one output value for each point of the grid");
        points
    }

    /// What is known before any point: scalars, and values along the axes.
    fn moment(&self, inputs: &[Input], time: f64) -> Moment {
        let given = |(number, input): (usize, &Input)| match input {
            _ if Some(number) == self.time => time,
            Input::Scalar(value) => *value,
            _ => f64::NAN,
        };
        let given: Vec<f64> = inputs.iter().enumerate().map(given).collect();
        // Values that vary become NaN here, and are never read.
        let mut scalars: Vec<f64> = Vec::with_capacity(self.program.operations.len());
        for (operation, dependencies) in self.program.operations.iter().zip(&self.program.dependencies) {
            let varies = (0..given.len()).any(|i| dependencies >> i & 1 == 1 && self.kinds[i] != Kind::Scalar);
            scalars.push(if varies { f64::NAN } else { operation.result(&given, |value| scalars[value]) });
        }
        let lines = self.lines.iter().map(|line| self.line(line, inputs, &scalars)).collect();
        Moment { scalars, lines }
    }

    fn line(&self, line: &Line, inputs: &[Input], scalars: &[f64]) -> Vec<Vec<f64>> {
        let Input::Axis(values) = inputs[line.input] else { return Vec::new() };
        let mut results = vec![vec![0.0; values.len()]; line.results.len()];
        let mut registers = line.tape.registers();
        for start in (0..values.len()).step_by(BLOCK) {
            let length = BLOCK.min(values.len() - start);
            let externals = vec![&values[start..start + length]; line.tape.externals.len()];
            line.tape.run(length, scalars, &externals, &mut registers);
            for (index, result) in results.iter_mut().enumerate() {
                if let Operand::Block(block) = line.tape.result(index, length, scalars, &externals, &registers) {
                    result[start..start + length].copy_from_slice(block);
                }
            }
        }
        results
    }

    /// Spreads the values along axes that `tape` reads over the points of a block.
    fn gather(&self, tape: &Tape, inputs: &[Input], moment: &Moment, at: Place, buffers: &mut [Vec<f64>]) {
        for (value, buffer) in tape.externals.iter().zip(buffers) {
            let mut stride = 1;
            for (number, input) in inputs.iter().enumerate() {
                let Input::Axis(axis) = input else { continue };
                let line = self.lines.iter().position(|line| line.input == number).expect("every axis has a line");
                let result = self.lines[line].results.iter().position(|result| result == value);
                let values = match result {
                    Some(result) => Some(moment.lines[line][result].as_slice()),
                    None => (self.program.operations[*value] == Operation::Input(number)).then_some(*axis),
                };
                if let Some(values) = values {
                    spread(values, stride, at, buffer);
                }
                stride *= axis.len();
            }
        }
    }

    /// The blocks that `tape` reads: slices of point inputs, buffers for the rest.
    fn externals<'a>(&self, tape: &Tape, inputs: &[Input<'a>], at: Place, buffers: &'a [Vec<f64>]) -> Vec<&'a [f64]> {
        let block = |(value, buffer): (&Value, &'a Vec<f64>)| match self.program.operations[*value] {
            Operation::Input(number) => match inputs[number] {
                Input::Points(values) => &values[at.start..at.start + at.length],
                _ => buffer.as_slice(),
            },
            _ => buffer.as_slice(),
        };
        tape.externals.iter().zip(buffers).map(block).collect()
    }
}

struct Moment {
    scalars: Vec<f64>,
    /// By line and result.
    lines: Vec<Vec<Vec<f64>>>,
}

#[derive(Clone, Copy)]
struct Place {
    start: usize,
    length: usize,
}

fn buffers(tape: &Tape) -> Vec<Vec<f64>> {
    vec![vec![0.0; BLOCK]; tape.externals.len()]
}

/// The values of an axis at the points of a block: each stands `stride` times, and the axis starts again at its end.
fn spread(values: &[f64], stride: usize, at: Place, into: &mut [f64]) {
    let mut done = 0;
    while done < at.length {
        let point = at.start + done;
        let index = point / stride % values.len();
        if stride == 1 {
            let run = (values.len() - index).min(at.length - done);
            into[done..done + run].copy_from_slice(&values[index..index + run]);
            done += run;
        } else {
            let run = (stride - point % stride).min(at.length - done);
            into[done..done + run].fill(values[index]);
            done += run;
        }
    }
}
