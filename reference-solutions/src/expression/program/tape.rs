//! A part of a program as a list of block instructions with few registers.

use super::super::function::Function;
use super::block::{self, Operand};
use super::{Operation, Program, Value};

/// Points computed at once. Measured on the source of the compressible Navier-Stokes equations: below 256 the dispatch of
/// instructions shows, above 512 nothing is gained.
pub(super) const BLOCK: usize = 512;

/// Where an instruction finds an operand.
#[derive(Clone, Copy, Debug)]
enum Source {
    /// A value that is the same for all points, by its number in the program.
    Scalar(Value),
    Register(usize),
    /// A block handed in from outside.
    External(usize),
}

#[derive(Clone, Copy, Debug)]
enum Action {
    Add,
    Subtract,
    Multiply,
    Divide,
    Negate,
    SquareRoot,
    Power,
    /// Two operations in one pass, each rounded by itself: the outer one on the inner one's result and a third operand.
    Fused {
        inner: Simple,
        outer: Simple,
        inner_first: bool,
    },
    /// Sine into the register, cosine into the other one.
    SinCos(usize),
    Call(Function),
}

/// An operation that can be half of a fused one.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Simple {
    Add,
    Subtract,
    Multiply,
}

#[derive(Clone, Debug)]
struct Instruction {
    action: Action,
    into: usize,
    sources: [Source; 3],
}

/// Block instructions for some values of a program.
#[derive(Clone, Debug, Default)]
pub(super) struct Tape {
    instructions: Vec<Instruction>,
    registers: usize,
    /// The values that are handed in as blocks, in the order of the externals.
    pub(super) externals: Vec<Value>,
    /// The values asked for, with where they are.
    results: Vec<Source>,
}

/// Registers of a run, reused from block to block.
pub(super) struct Registers(Vec<Vec<f64>>);

impl Tape {
    /// Code for those values of `results` that are members, and for what they need. Values that are neither members nor scalars
    /// come from outside.
    pub(super) fn new(
        program: &Program,
        is_member: &dyn Fn(Value) -> bool,
        is_scalar: &dyn Fn(Value) -> bool,
        results: &[Value],
    ) -> Tape {
        let mut tape = Assembler::new(program, is_member, is_scalar, results);
        for value in 0..program.operations.len() {
            tape.assemble(value);
        }
        tape.finish(results)
    }

    pub(super) fn registers(&self) -> Registers {
        Registers(vec![vec![0.0; BLOCK]; self.registers])
    }

    /// Computes one block of `length` points.
    pub(super) fn run(&self, length: usize, scalars: &[f64], externals: &[&[f64]], registers: &mut Registers) {
        #[cfg(target_arch = "x86_64")]
        if std::arch::is_x86_feature_detected!("avx2") {
            // SAFETY: the processor has AVX2, as was just asked.
            unsafe { self.run_avx2(length, scalars, externals, registers) };
            return;
        }
        self.run_inlined(length, scalars, externals, registers);
    }

    #[cfg(target_arch = "x86_64")]
    #[target_feature(enable = "avx2")]
    fn run_avx2(&self, length: usize, scalars: &[f64], externals: &[&[f64]], registers: &mut Registers) {
        self.run_inlined(length, scalars, externals, registers);
    }

    /// The loops compiled for the baseline instruction set, for comparison with the fast ones.
    #[cfg(test)]
    pub(super) fn run_baseline(&self, length: usize, scalars: &[f64], externals: &[&[f64]], registers: &mut Registers) {
        self.run_inlined(length, scalars, externals, registers);
    }

    #[inline(always)]
    fn run_inlined(&self, length: usize, scalars: &[f64], externals: &[&[f64]], registers: &mut Registers) {
        for instruction in &self.instructions {
            // Taken out while it is written, so that the others can be read.
            let mut target = std::mem::take(&mut registers.0[instruction.into]);
            let into = &mut target[..length];
            if let Action::SinCos(other) = instruction.action {
                let mut second = std::mem::take(&mut registers.0[other]);
                if let Operand::Block(argument) =
                    operand(instruction.sources[0], length, scalars, externals, &registers.0)
                {
                    block::sin_cos(into, &mut second[..length], argument);
                }
                registers.0[other] = second;
            } else {
                let operands =
                    instruction.sources.map(|source| operand(source, length, scalars, externals, &registers.0));
                execute(instruction.action, into, operands);
            }
            registers.0[instruction.into] = target;
        }
    }

    /// Number of results.
    pub(super) fn results(&self) -> usize {
        self.results.len()
    }

    /// Result `index`, which varies from point to point, of the block that was run last.
    pub(super) fn block<'a>(
        &self,
        index: usize,
        length: usize,
        externals: &[&'a [f64]],
        registers: &'a Registers,
    ) -> &'a [f64] {
        match operand(self.results[index], length, &[f64::NAN], externals, &registers.0) {
            Operand::Block(values) => values,
            Operand::Scalar(_) => unreachable!("the caller asks for what varies"),
        }
    }

    /// Result `index` of the block that was run last.
    pub(super) fn result<'a>(
        &self,
        index: usize,
        length: usize,
        scalars: &[f64],
        externals: &[&'a [f64]],
        registers: &'a Registers,
    ) -> Operand<'a> {
        operand(self.results[index], length, scalars, externals, &registers.0)
    }
}

#[inline(always)]
fn operand<'a>(
    source: Source,
    length: usize,
    scalars: &[f64],
    externals: &[&'a [f64]],
    registers: &'a [Vec<f64>],
) -> Operand<'a> {
    match source {
        Source::Scalar(value) => Operand::Scalar(scalars[value]),
        Source::Register(register) => Operand::Block(&registers[register][..length]),
        Source::External(external) => Operand::Block(&externals[external][..length]),
    }
}

#[inline(always)]
fn execute(action: Action, into: &mut [f64], operands: [Operand; 3]) {
    let [a, b, _] = operands;
    match action {
        Action::Add => block::binary(into, a, b, |a, b| a + b),
        Action::Subtract => block::binary(into, a, b, |a, b| a - b),
        Action::Multiply => block::binary(into, a, b, |a, b| a * b),
        Action::Divide => block::binary(into, a, b, |a, b| a / b),
        Action::Negate => block::unary(into, a, |a| -a),
        Action::SquareRoot => block::unary(into, a, f64::sqrt),
        Action::Power => block::binary(into, a, b, libm::pow),
        Action::Fused { inner, outer, inner_first } => fused(into, inner, outer, inner_first, operands),
        Action::Call(function) => block::call(into, function, operands),
        Action::SinCos(_) => unreachable!("written to two registers by the caller"),
    }
}

#[inline(always)]
fn fused(into: &mut [f64], inner: Simple, outer: Simple, inner_first: bool, operands: [Operand; 3]) {
    use Simple::{Add, Multiply, Subtract};
    match (inner, outer, inner_first) {
        (Multiply, Add, _) => block::ternary(into, operands, |a, b, c| a * b + c),
        (Multiply, Subtract, true) => block::ternary(into, operands, |a, b, c| a * b - c),
        (Multiply, Subtract, false) => block::ternary(into, operands, |a, b, c| c - a * b),
        (Multiply, Multiply, _) => block::ternary(into, operands, |a, b, c| a * b * c),
        (Add, Add, _) => block::ternary(into, operands, |a, b, c| a + b + c),
        (Add, Subtract, true) => block::ternary(into, operands, |a, b, c| a + b - c),
        (Add, Subtract, false) => block::ternary(into, operands, |a, b, c| c - (a + b)),
        (Add, Multiply, _) => block::ternary(into, operands, |a, b, c| (a + b) * c),
        (Subtract, Add, _) => block::ternary(into, operands, |a, b, c| a - b + c),
        (Subtract, Subtract, true) => block::ternary(into, operands, |a, b, c| a - b - c),
        (Subtract, Subtract, false) => block::ternary(into, operands, |a, b, c| c - (a - b)),
        (Subtract, Multiply, _) => block::ternary(into, operands, |a, b, c| (a - b) * c),
    }
}

/// The parts of an operation that can be half of a fused one.
fn simple(operation: Operation) -> Option<(Simple, Value, Value)> {
    match operation {
        Operation::Add(a, b) => Some((Simple::Add, a, b)),
        Operation::Subtract(a, b) => Some((Simple::Subtract, a, b)),
        Operation::Multiply(a, b) => Some((Simple::Multiply, a, b)),
        _ => None,
    }
}

struct Assembler<'a> {
    program: &'a Program,
    is_scalar: &'a dyn Fn(Value) -> bool,
    /// Members that a result needs.
    wanted: Vec<bool>,
    /// How often a value is still to be read.
    uses: Vec<usize>,
    /// Values that are computed within the only operation that reads them.
    absorbed: Vec<bool>,
    places: Vec<Option<Source>>,
    free: Vec<usize>,
    tape: Tape,
}

impl<'a> Assembler<'a> {
    fn new(
        program: &'a Program,
        is_member: &dyn Fn(Value) -> bool,
        is_scalar: &'a dyn Fn(Value) -> bool,
        results: &[Value],
    ) -> Self {
        let count = program.operations.len();
        let (mut wanted, mut uses) = (vec![false; count], vec![0; count]);
        for result in results {
            wanted[*result] = is_member(*result);
            // Never zero, so that a result keeps its register to the end.
            uses[*result] += 1;
        }
        for value in (0..count).rev().filter(|value| is_member(*value)) {
            if wanted[value] {
                for operand in program.operations[value].operands() {
                    uses[operand] += 1;
                    wanted[operand] |= is_member(operand);
                }
            }
        }
        let mut assembler = Assembler {
            program,
            is_scalar,
            wanted,
            uses,
            absorbed: vec![false; count],
            places: vec![None; count],
            free: Vec::new(),
            tape: Tape::default(),
        };
        assembler.absorb();
        assembler
    }

    /// Marks operations that only one other reads, so that both are done in one pass: every pass saved is a load and a store.
    fn absorb(&mut self) {
        let mut fused = vec![false; self.absorbed.len()];
        for value in (0..fused.len()).filter(|value| self.wanted[*value]).collect::<Vec<_>>() {
            let Some((_, a, b)) = simple(self.program.operations[value]).filter(|(_, a, b)| a != b) else { continue };
            let fits = |operand: &Value| {
                let free = self.wanted[*operand] && self.uses[*operand] == 1 && !fused[*operand];
                free && simple(self.program.operations[*operand]).is_some()
            };
            if let Some(inner) = [b, a].into_iter().find(fits) {
                self.absorbed[inner] = true;
                fused[value] = true;
            }
        }
    }

    fn assemble(&mut self, value: Value) {
        if !self.wanted[value] || self.absorbed[value] || self.places[value].is_some() {
            return;
        }
        let (action, operands) = self.action(value);
        let mut sources = [Source::Scalar(0); 3];
        for (source, operand) in sources.iter_mut().zip(&operands) {
            *source = self.source(*operand);
        }
        let into = self.register();
        let other = self.partner(value, action, &sources);
        let action = other.map_or(action, |_| action);
        self.places[value] = Some(Source::Register(into));
        let instruction = match other {
            Some(cosine) => {
                let second = self.register();
                let (sine, cosine_value) =
                    if action_is(action, Function::Sin) { (into, second) } else { (second, into) };
                self.places[cosine] = Some(Source::Register(second));
                Instruction { action: Action::SinCos(cosine_value), into: sine, sources }
            }
            None => Instruction { action, into, sources },
        };
        self.tape.instructions.push(instruction);
        let partner_operands = other.map_or(Vec::new(), |partner| self.program.operations[partner].operands());
        for operand in operands.iter().chain(&partner_operands) {
            self.uses[*operand] -= 1;
            if let (0, Some(Source::Register(register))) = (self.uses[*operand], self.places[*operand]) {
                self.free.push(register);
            }
        }
    }

    /// What to do and the operands to read, absorbed operations opened.
    fn action(&self, value: Value) -> (Action, Vec<Value>) {
        let operation = self.program.operations[value];
        if let Some((outer, a, b)) = simple(operation) {
            let absorbed = |operand: Value| simple(self.program.operations[operand]).filter(|_| self.absorbed[operand]);
            if let Some((inner, x, y)) = absorbed(b) {
                return (Action::Fused { inner, outer, inner_first: false }, vec![x, y, a]);
            }
            if let Some((inner, x, y)) = absorbed(a) {
                return (Action::Fused { inner, outer, inner_first: true }, vec![x, y, b]);
            }
        }
        let action = match operation {
            Operation::Add(..) => Action::Add,
            Operation::Subtract(..) => Action::Subtract,
            Operation::Multiply(..) => Action::Multiply,
            Operation::Divide(..) => Action::Divide,
            Operation::Negate(_) => Action::Negate,
            Operation::SquareRoot(_) => Action::SquareRoot,
            Operation::Power(..) => Action::Power,
            Operation::Call(function, _) => Action::Call(function),
            Operation::Constant(_) | Operation::Input(_) => unreachable!("neither is computed in blocks"),
        };
        (action, operation.operands())
    }

    /// The cosine that goes with a sine, or the sine with a cosine, if it is wanted too.
    fn partner(&self, value: Value, action: Action, sources: &[Source; 3]) -> Option<Value> {
        let other = match action {
            Action::Call(Function::Sin) => Function::Cos,
            Action::Call(Function::Cos) => Function::Sin,
            _ => return None,
        };
        let argument = self.program.operations[value].operands()[0];
        let fits = |candidate: &Value| {
            let same = self.program.operations[*candidate] == Operation::Call(other, [argument; 3]);
            same && self.wanted[*candidate] && self.places[*candidate].is_none()
        };
        let block = !matches!(sources[0], Source::Scalar(_));
        (value + 1..self.program.operations.len()).find(fits).filter(|_| block)
    }

    fn source(&mut self, value: Value) -> Source {
        if let Some(place) = self.places[value] {
            return place;
        }
        let place = if (self.is_scalar)(value) {
            Source::Scalar(value)
        } else {
            self.tape.externals.push(value);
            Source::External(self.tape.externals.len() - 1)
        };
        self.places[value] = Some(place);
        place
    }

    fn register(&mut self) -> usize {
        self.free.pop().unwrap_or_else(|| {
            self.tape.registers += 1;
            self.tape.registers - 1
        })
    }

    fn finish(mut self, results: &[Value]) -> Tape {
        self.tape.results = results.iter().map(|result| self.source(*result)).collect();
        self.tape
    }
}

fn action_is(action: Action, function: Function) -> bool {
    matches!(action, Action::Call(found) if found == function)
}
