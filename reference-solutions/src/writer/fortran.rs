//! Fortran 2008, free form.

use super::WriteError;
use super::code::{Code, Dialect, Strength, Text, step_function, wrapped};
use crate::expression::Function;

pub(super) struct Fortran;

impl Dialect for Fortran {
    fn number(&self, value: f64) -> String {
        format!("{value:?}_real64")
    }

    fn call(&self, function: Function, arguments: &[String]) -> Text {
        match function {
            Function::Sign | Function::Heaviside => step_function(self, function, &arguments[0]),
            _ => (format!("{}({})", function.name(), arguments.join(", ")), Strength::Atom),
        }
    }

    fn square_root(&self, argument: &str) -> String {
        format!("sqrt({argument})")
    }

    fn power(&self, base: &str, exponent: &str) -> String {
        format!("({base}**{exponent})")
    }

    fn condition(&self, function: Function, left: &str, right: &str) -> String {
        let sign = if function == Function::NotEqual { "/=" } else { function.name() };
        format!("{left} {sign} {right}")
    }

    fn choice(&self, condition: &str, then: &str, otherwise: &str) -> Text {
        (format!("merge({then}, {otherwise}, {condition})"), Strength::Atom)
    }
}

pub(super) fn write(code: &Code) -> Result<String, WriteError> {
    let single = code.results.len() == 1;
    let place = |k: usize| if single { "result".to_string() } else { format!("{}({})", code.array, k + 1) };
    let mut lines: Vec<String> = code.description(place).iter().map(|line| format!("! {line}")).collect();
    let arguments: Vec<&str> = code.arguments.iter().map(|(name, _)| name.as_str()).collect();
    let statement = |line: String| wrapped(&line, 120, " &", "        & ");
    match single {
        true => lines.push(statement(format!(
            "pure function {}({}) result({})",
            code.function,
            arguments.join(", "),
            code.array
        ))),
        false => {
            let all: Vec<&str> = arguments.iter().copied().chain([code.array.as_str()]).collect();
            lines.push(statement(format!("pure subroutine {}({})", code.function, all.join(", "))));
        }
    }
    lines.push("    use, intrinsic :: iso_fortran_env, only: real64\n    implicit none".into());
    if !arguments.is_empty() {
        lines.push(statement(format!("    real(real64), intent(in) :: {}", arguments.join(", "))));
    }
    match single {
        true => lines.push(format!("    real(real64) :: {}", code.array)),
        false => lines.push(format!("    real(real64), intent(out) :: {}({})", code.array, code.results.len())),
    }
    // One line a name would be long, and one line for all could have too many continuations.
    for names in code.parts.chunks(8) {
        let names: Vec<&str> = names.iter().map(|(name, _)| name.as_str()).collect();
        lines.push(statement(format!("    real(real64) :: {}", names.join(", "))));
    }
    lines.push(String::new());
    lines.extend(code.parts.iter().map(|(name, text)| statement(format!("    {name} = {text}"))));
    for (k, text) in code.results.iter().enumerate() {
        let index = if single { String::new() } else { format!("({})", k + 1) };
        lines.push(statement(format!("    {}{index} = {text}", code.array)));
    }
    let kind = if single { "function" } else { "subroutine" };
    lines.push(format!("end {kind} {}", code.function));
    Ok(lines.join("\n") + "\n")
}
