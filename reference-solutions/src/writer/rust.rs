//! Rust without crates.

use super::WriteError;
use super::code::{Code, Dialect, Strength, Text, step_function, wrapped};
use crate::expression::Function;

pub(super) struct Rust;

impl Dialect for Rust {
    fn number(&self, value: f64) -> String {
        format!("{value:?}")
    }

    fn call(&self, function: Function, arguments: &[String]) -> Text {
        let name = match function {
            Function::Sign | Function::Heaviside => {
                return step_function(self, function, &arguments[0]);
            }
            Function::Log => "f64::ln".to_string(),
            Function::Erf | Function::Erfc => function.name().to_string(),
            _ => format!("f64::{}", function.name()),
        };
        (format!("{name}({})", arguments.join(", ")), Strength::Atom)
    }

    fn square_root(&self, argument: &str) -> String {
        format!("f64::sqrt({argument})")
    }

    fn power(&self, base: &str, exponent: &str) -> String {
        format!("f64::powf({base}, {exponent})")
    }

    fn choice(&self, condition: &str, then: &str, otherwise: &str) -> Text {
        (format!("if {condition} {{ {then} }} else {{ {otherwise} }}"), Strength::Weak)
    }

    fn branches(&self) -> Strength {
        // Branches stand in braces: parentheses would draw a warning.
        Strength::Weak
    }
}

pub(super) fn write(code: &Code) -> Result<String, WriteError> {
    let single = code.results.len() == 1;
    let place = |k: usize| if single { "returned".to_string() } else { format!("item {k}") };
    let mut lines = Vec::new();
    for function in [Function::Erf, Function::Erfc].iter().filter(|function| code.functions.contains(function)) {
        let name = function.name();
        lines.push(format!("// Rust's standard library has no {name}; the C library, which it links anyway, has.\nunsafe extern \"C\" {{\n    safe fn {name}(x: f64) -> f64;\n}}\n"));
    }
    lines.extend(code.description(place).iter().map(|line| format!("/// {line}").trim_end().to_string()));
    let names = code.arguments.iter().map(|(name, _)| name).chain(code.parts.iter().map(|(name, _)| name));
    if names.chain([&code.function]).any(|name| name.chars().any(|c| c.is_ascii_uppercase())) {
        lines.push("#[allow(non_snake_case)] // the names are those of the formula".into());
    }
    let arguments: Vec<String> = code.arguments.iter().map(|(name, _)| format!("{name}: f64")).collect();
    let kind = if single { "f64".to_string() } else { format!("[f64; {}]", code.results.len()) };
    lines.push(wrapped(&format!("pub fn {}({}) -> {kind} {{", code.function, arguments.join(", ")), 96, "", "    "));
    let statement = |line: String| wrapped(&line, 96, "", "        ");
    lines.extend(code.parts.iter().map(|(name, text)| statement(format!("    let {name} = {};", text))));
    match single {
        true => lines.push(statement(format!("    {}", code.results[0]))),
        false => {
            let results: Vec<String> =
                code.results.iter().map(|text| statement(format!("        {},", text))).collect();
            lines.push(format!("    [\n{}\n    ]", results.join("\n")));
        }
    }
    lines.push("}".into());
    Ok(lines.join("\n") + "\n")
}
