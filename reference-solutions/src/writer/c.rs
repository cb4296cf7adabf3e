//! C99 and C++11.

use super::WriteError;
use super::code::{Code, Dialect, Strength, Text, step_function, wrapped};
use crate::expression::Function;

pub(super) struct C;
pub(super) struct Cpp;

#[derive(Clone, Copy, PartialEq)]
pub(super) enum Flavour {
    C,
    Cpp,
}

fn function_name(function: Function) -> &'static str {
    match function {
        Function::Abs => "fabs",
        Function::Min => "fmin",
        Function::Max => "fmax",
        _ => function.name(),
    }
}

impl Dialect for C {
    fn number(&self, value: f64) -> String {
        format!("{value:?}")
    }

    fn call(&self, function: Function, arguments: &[String]) -> Text {
        match function {
            Function::Sign | Function::Heaviside => step_function(self, function, &arguments[0]),
            _ => (format!("{}({})", function_name(function), arguments.join(", ")), Strength::Atom),
        }
    }

    fn square_root(&self, argument: &str) -> String {
        format!("sqrt({argument})")
    }

    fn power(&self, base: &str, exponent: &str) -> String {
        format!("pow({base}, {exponent})")
    }

    fn choice(&self, condition: &str, then: &str, otherwise: &str) -> Text {
        (format!("{condition} ? {then} : {otherwise}"), Strength::Weak)
    }
}

impl Dialect for Cpp {
    fn number(&self, value: f64) -> String {
        C.number(value)
    }

    fn call(&self, function: Function, arguments: &[String]) -> Text {
        match function {
            Function::Sign | Function::Heaviside => C.call(function, arguments),
            _ => (format!("std::{}", C.call(function, arguments).0), Strength::Atom),
        }
    }

    fn square_root(&self, argument: &str) -> String {
        format!("std::sqrt({argument})")
    }

    fn power(&self, base: &str, exponent: &str) -> String {
        format!("std::pow({base}, {exponent})")
    }

    fn choice(&self, condition: &str, then: &str, otherwise: &str) -> Text {
        C.choice(condition, then, otherwise)
    }
}

pub(super) fn write(code: &Code, flavour: Flavour) -> Result<String, WriteError> {
    let single = code.results.len() == 1;
    let place = |k: usize| if single { "returned".to_string() } else { format!("{}[{k}]", code.array) };
    let description =
        code.description(place).iter().map(|line| format!(" * {line}").trim_end().to_string()).collect::<Vec<_>>();
    let header = if flavour == Flavour::C { "math.h" } else { "cmath" };
    let mut parameters: Vec<String> = code.arguments.iter().map(|(name, _)| format!("double {name}")).collect();
    if !single {
        parameters.push(format!("double {}[{}]", code.array, code.results.len()));
    }
    let parameters = if parameters.is_empty() { "void".to_string() } else { parameters.join(", ") };
    let kind = if single { "double" } else { "void" };
    let signature = wrapped(&format!("{kind} {}({parameters})", code.function), 96, "", "    ");
    let mut lines = vec![format!("/*\n{}\n */\n#include <{header}>\n\n{signature}\n{{", description.join("\n"))];
    let statement = |line: String| wrapped(&line, 96, "", "        ");
    lines.extend(code.parts.iter().map(|(name, text)| statement(format!("    const double {name} = {text};"))));
    match single {
        true => lines.push(statement(format!("    return {};", code.results[0]))),
        false => lines.extend(
            code.results.iter().enumerate().map(|(k, text)| statement(format!("    {}[{k}] = {text};", code.array))),
        ),
    }
    Ok(lines.join("\n") + "\n}\n")
}
