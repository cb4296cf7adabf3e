//! A program fitted to its inputs: what is computed once, once a line, once for all times, and once a point.

use super::block::Operand;
use super::buffers::{Buffers, Place};
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
    fixed_feeds: Vec<Feed>,
    varying_feeds: Vec<Feed>,
}

/// Where a tape's external block comes from.
#[derive(Clone, Copy)]
enum Feed {
    /// A slice of an input that has a number for each point.
    Points(usize),
    /// The coordinate of a direction itself.
    Axis { input: usize },
    /// A result of `lines`.
    Line { line: usize, result: usize },
    /// A result of the fixed tape.
    Fixed(usize),
}

struct Line {
    input: usize,
    results: Vec<Value>,
    tape: Tape,
}

/// Times whose values along axes are kept at once: they take some hundred kilobytes each on a grid with lines of 1000.
const TIMES_AT_ONCE: usize = 8;

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
        let lines: Vec<Line> = (0..kinds.len()).filter(|input| kinds[*input] == Kind::Axis).map(line).collect();
        let is_fixed = |value: Value| time.is_some() && classes.is_pointwise(value) && !classes.changes(value);
        let is_varying = |value: Value| classes.is_pointwise(value) && !is_fixed(value);
        let fixed_results = classes.frontier(is_fixed, is_varying);
        let fixed = Tape::new(program, &is_fixed, &is_scalar, &fixed_results);
        let varying = Tape::new(program, &is_varying, &is_scalar, &program.outputs);
        let feed = |value: &Value| match program.operations[*value] {
            Operation::Input(input) if kinds[input] == Kind::Points => Feed::Points(input),
            Operation::Input(input) => Feed::Axis { input },
            _ => match fixed_results.iter().position(|result| result == value) {
                Some(result) => Feed::Fixed(result),
                None => line_feed(&lines, *value),
            },
        };
        let fixed_feeds = fixed.externals.iter().map(feed).collect();
        let varying_feeds = varying.externals.iter().map(feed).collect();
        Plan {
            program: program.clone(),
            kinds: kinds.to_vec(),
            time,
            lines,
            fixed,
            varying,
            fixed_feeds,
            varying_feeds,
        }
    }

    /// Computes all outputs at all points, in blocks, on one thread.
    ///
    /// Memory beyond the outputs: four kilobytes a register, and for Cartesian grids the values along each axis.
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
        let count = self.program.outputs.len().max(1);
        for (times, outputs) in times.chunks(TIMES_AT_ONCE).zip(outputs.chunks_mut(TIMES_AT_ONCE * count)) {
            self.evaluate_together(inputs, times, outputs, points);
        }
    }

    fn evaluate_together(&self, inputs: &[Input], times: &[f64], outputs: &mut [&mut [f64]], points: usize) {
        let moments: Vec<Moment> = times.iter().map(|time| self.moment(inputs, *time)).collect();
        let Some(first) = moments.first() else { return };
        let mut fixed_registers = self.fixed.registers();
        let mut varying_registers = self.varying.registers();
        let mut fixed_buffers = Buffers::new(&self.fixed);
        // One set a time: values along a slow axis then stay where they are from block to block.
        let mut varying_buffers: Vec<Buffers> = times.iter().map(|_| Buffers::new(&self.varying)).collect();
        for start in (0..points).step_by(BLOCK) {
            let at = Place { start, length: BLOCK.min(points - start) };
            self.gather(&self.fixed_feeds, inputs, first, at, &mut fixed_buffers);
            let fixed_blocks = self.blocks(&self.fixed_feeds, inputs, at, &fixed_buffers, &[]);
            self.fixed.run(at.length, &first.scalars, &fixed_blocks, &mut fixed_registers);
            let results: Vec<&[f64]> = (0..self.fixed.results())
                .map(|k| self.fixed.block(k, at.length, &fixed_blocks, &fixed_registers))
                .collect();
            let outputs = outputs.chunks_mut(self.program.outputs.len().max(1));
            for ((moment, buffers), outputs) in moments.iter().zip(&mut varying_buffers).zip(outputs) {
                self.gather(&self.varying_feeds, inputs, moment, at, buffers);
                let blocks = self.blocks(&self.varying_feeds, inputs, at, buffers, &results);
                self.varying.run(at.length, &moment.scalars, &blocks, &mut varying_registers);
                self.deliver(outputs, at, moment, &blocks, &varying_registers);
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

    /// Spreads the values along axes over the points of a block.
    fn gather(&self, feeds: &[Feed], inputs: &[Input], moment: &Moment, at: Place, buffers: &mut Buffers) {
        for (number, feed) in feeds.iter().enumerate() {
            let (input, values) = match *feed {
                Feed::Axis { input } => match inputs[input] {
                    Input::Axis(values) => (input, values),
                    _ => continue,
                },
                Feed::Line { line, result } => (self.lines[line].input, moment.lines[line][result].as_slice()),
                Feed::Points(_) | Feed::Fixed(_) => continue,
            };
            let before = inputs[..input].iter();
            let stride = before.map(|input| if let Input::Axis(axis) = input { axis.len() } else { 1 }).product();
            buffers.spread(number, values, stride, at);
        }
    }

    /// The blocks that a tape reads: slices of point inputs, results of the fixed part, buffers for the rest.
    fn blocks<'a>(
        &self,
        feeds: &[Feed],
        inputs: &[Input<'a>],
        at: Place,
        buffers: &'a Buffers,
        fixed: &[&'a [f64]],
    ) -> Vec<&'a [f64]> {
        let block = |(feed, buffer): (&Feed, &'a Vec<f64>)| match *feed {
            Feed::Fixed(result) => fixed[result],
            Feed::Points(input) => match inputs[input] {
                Input::Points(values) => &values[at.start..at.start + at.length],
                _ => buffer.as_slice(),
            },
            Feed::Axis { .. } | Feed::Line { .. } => buffer.as_slice(),
        };
        feeds.iter().zip(&buffers.blocks).map(block).collect()
    }
}

fn line_feed(lines: &[Line], value: Value) -> Feed {
    let place = |(line, found): (usize, &Line)| {
        found.results.iter().position(|result| *result == value).map(|result| Feed::Line { line, result })
    };
    lines.iter().enumerate().find_map(place).expect("a value along an axis is a result of its line")
}

struct Moment {
    scalars: Vec<f64>,
    /// By line and result.
    lines: Vec<Vec<Vec<f64>>>,
}
