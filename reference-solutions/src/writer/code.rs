//! Straight-line code, independent of the language: statements for parts that are used more than once or are long, everything else
//! written where it is used.

use super::names::Names;
use super::{Argument, Listing, WriteError};
use crate::expression::Function;
use crate::expression::program::{Operation, Value};

/// How tightly a piece of text holds together.
#[derive(Clone, Copy, Debug, PartialEq, PartialOrd)]
pub(super) enum Strength {
    /// A condition or a choice.
    Weak,
    Sum,
    Product,
    Atom,
}

pub(super) type Text = (String, Strength);

/// What differs between languages inside an expression.
pub(super) trait Dialect {
    /// A literal, sign included.
    fn number(&self, value: f64) -> String;
    /// A function call with its arguments as complete texts.
    fn call(&self, function: Function, arguments: &[String]) -> Text;
    /// The square root.
    fn square_root(&self, argument: &str) -> String;
    /// base ^ exponent
    fn power(&self, base: &str, exponent: &str) -> String;
    /// A comparison as a condition of the language.
    fn condition(&self, function: Function, left: &str, right: &str) -> String {
        format!("{left} {} {right}", function.name())
    }
    /// A choice between two values by a condition of the language.
    fn choice(&self, condition: &str, then: &str, otherwise: &str) -> Text;
    /// How strong the branches of a choice have to be.
    fn branches(&self) -> Strength {
        Strength::Sum
    }
}

/// A listing as statements of one language.
pub(super) struct Code<'a> {
    pub(super) listing: &'a Listing,
    pub(super) function: String,
    /// Identifier and description of every argument that is used.
    pub(super) arguments: Vec<(String, &'a Argument)>,
    /// Name and text of every part.
    pub(super) parts: Vec<(String, String)>,
    /// Text of every output.
    pub(super) results: Vec<String>,
    /// Name of the array of results.
    pub(super) array: String,
    /// Functions called.
    pub(super) functions: Vec<Function>,
}

/// Longer texts become parts of their own, for the reader's sake and for Fortran's lines of 132 characters.
const LONGEST: usize = 50;

impl<'a> Code<'a> {
    pub(super) fn new(listing: &'a Listing, dialect: &dyn Dialect) -> Result<Code<'a>, WriteError> {
        let program = listing.program()?;
        let mut names = Names::new(&[]);
        let function = names.take(&listing.function);
        let described = |name: &String| listing.arguments.iter().find(|argument| argument.name == *name);
        let arguments: Vec<(String, &Argument)> = program
            .inputs()
            .iter()
            .filter_map(described)
            .map(|argument| (names.take(&argument.name), argument))
            .collect();
        let array = names.take("s");
        let mut uses = vec![0; program.code().len()];
        program
            .code()
            .iter()
            .flat_map(Operation::operands)
            .chain(program.output_values().iter().copied())
            .for_each(|value| uses[value] += 1);
        let mut code =
            Code { listing, function, arguments, parts: Vec::new(), results: Vec::new(), array, functions: Vec::new() };
        let mut texts: Vec<Text> = Vec::with_capacity(program.code().len());
        for (value, operation) in program.code().iter().enumerate() {
            let mut text = code.text(operation, &texts, program.code(), dialect);
            let free = matches!(operation, Operation::Constant(_) | Operation::Input(_));
            if !free && (uses[value] > 1 || text.0.len() > LONGEST) {
                let number = code.parts.len() + 1;
                let name = names.take(program.name(value).unwrap_or(&format!("t{number}")));
                code.parts.push((name.clone(), text.0));
                text = (name, Strength::Atom);
            }
            texts.push(text);
        }
        code.results = program.output_values().iter().map(|output| texts[*output].0.clone()).collect();
        code.check_constants(&program)?;
        Ok(code)
    }

    fn check_constants(&self, program: &crate::expression::Program) -> Result<(), WriteError> {
        for operation in program.code() {
            if let Operation::Constant(value) = operation
                && !value.is_finite()
            {
                let names: Vec<&str> = self.listing.outputs.iter().map(|output| output.name.as_str()).collect();
                return Err(WriteError::NotFinite { output: names.join(", "), value: *value });
            }
        }
        Ok(())
    }

    fn text(&mut self, operation: &Operation, texts: &[Text], code: &[Operation], dialect: &dyn Dialect) -> Text {
        let at_least = |value: Value, needed: Strength| match &texts[value] {
            (text, strength) if *strength < needed => format!("({text})"),
            (text, _) => text.clone(),
        };
        let binary = |a, sign, b, left, right, strength| {
            (format!("{}{sign}{}", at_least(a, left), at_least(b, right)), strength)
        };
        use Strength::{Atom, Product, Sum, Weak};
        match *operation {
            Operation::Constant(value) => (dialect.number(value), if value.is_sign_negative() { Sum } else { Atom }),
            Operation::Input(input) => (self.arguments[input].0.clone(), Atom),
            Operation::Add(a, b) => binary(a, " + ", b, Sum, Product, Sum),
            Operation::Subtract(a, b) => binary(a, " - ", b, Sum, Product, Sum),
            Operation::Multiply(a, b) => binary(a, "*", b, Product, Atom, Product),
            Operation::Divide(a, b) => binary(a, "/", b, Product, Atom, Product),
            Operation::Negate(a) => (format!("-{}", at_least(a, Product)), Sum),
            Operation::SquareRoot(a) => (dialect.square_root(&texts[a].0), Atom),
            Operation::Power(a, b) => (dialect.power(&at_least(a, Atom), &at_least(b, Atom)), Atom),
            Operation::Call(Function::If, [condition, then, otherwise]) => {
                let condition = match code[condition] {
                    Operation::Call(comparison, [a, b, _]) if comparison.is_comparison() => {
                        dialect.condition(comparison, &at_least(a, Sum), &at_least(b, Sum))
                    }
                    _ => dialect.condition(Function::NotEqual, &at_least(condition, Sum), &dialect.number(0.0)),
                };
                dialect.choice(
                    &condition,
                    &at_least(then, dialect.branches()),
                    &at_least(otherwise, dialect.branches()),
                )
            }
            Operation::Call(comparison, [a, b, _]) if comparison.is_comparison() => {
                let condition = dialect.condition(comparison, &at_least(a, Sum), &at_least(b, Sum));
                dialect.choice(&condition, &dialect.number(1.0), &dialect.number(0.0))
            }
            Operation::Call(function, arguments) => {
                if !self.functions.contains(&function) {
                    self.functions.push(function);
                }
                let steps = matches!(function, Function::Sign | Function::Heaviside);
                let needed = if steps { Sum } else { Weak };
                let arguments: Vec<String> =
                    arguments[..function.arguments()].iter().map(|argument| at_least(*argument, needed)).collect();
                dialect.call(function, &arguments)
            }
        }
    }

    /// Lines that say what the function is, what it takes and what it gives; the last with `place` for output number k.
    pub(super) fn description(&self, place: impl Fn(usize) -> String) -> Vec<String> {
        let mut lines = self.listing.title.clone();
        if !self.arguments.is_empty() {
            lines.push("Arguments:".into());
            lines.extend(self.arguments.iter().map(|(name, argument)| format!("  {name}: {}", argument.meaning)));
        }
        lines.push("Result:".into());
        let output =
            |(k, output): (usize, &super::Output)| format!("  {}: {}, {}", place(k), output.name, output.meaning);
        lines.extend(self.listing.outputs.iter().enumerate().map(output));
        lines
            .iter()
            .flat_map(|line| wrapped(line, 96, "", "    ").lines().map(str::to_string).collect::<Vec<_>>())
            .collect()
    }
}

/// sign(x) and heaviside(x) as choices, for languages without them.
pub(super) fn step_function(dialect: &dyn Dialect, function: Function, argument: &str) -> Text {
    let number = |value| dialect.number(value);
    let positive = dialect.condition(Function::Greater, argument, &number(0.0));
    let negative = dialect.condition(Function::Less, argument, &number(0.0));
    let (low, middle) = if function == Function::Sign { (-1.0, 0.0) } else { (0.0, 0.5) };
    let otherwise = match dialect.choice(&negative, &number(low), &number(middle)) {
        (text, strength) if strength < dialect.branches() => format!("({text})"),
        (text, _) => text,
    };
    dialect.choice(&positive, &number(1.0), &otherwise)
}

/// Breaks a line at spaces; continuation lines begin with `indent`, broken ones end with `mark`.
pub(super) fn wrapped(line: &str, width: usize, mark: &str, indent: &str) -> String {
    let (mut result, mut length) = (String::new(), 0);
    for (number, word) in line.split_inclusive(' ').enumerate() {
        if number > 0 && length + word.len() > width {
            result.truncate(result.trim_end().len());
            result += &format!("{mark}\n{indent}");
            length = indent.len();
        }
        result += word;
        length += word.len();
    }
    result
}
