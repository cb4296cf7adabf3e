//! Python with NumPy.

use super::WriteError;
use super::code::{Code, Dialect, Strength, Text};
use crate::expression::Function;

pub(super) struct Python;

impl Dialect for Python {
    fn number(&self, value: f64) -> String {
        format!("{value:?}")
    }

    fn call(&self, function: Function, arguments: &[String]) -> Text {
        let name = match function {
            Function::Asin => "np.arcsin",
            Function::Acos => "np.arccos",
            Function::Atan => "np.arctan",
            Function::Atan2 => "np.arctan2",
            Function::Asinh => "np.arcsinh",
            Function::Acosh => "np.arccosh",
            Function::Atanh => "np.arctanh",
            Function::Min => "np.minimum",
            Function::Max => "np.maximum",
            Function::Heaviside => return (format!("np.heaviside({}, 0.5)", arguments[0]), Strength::Atom),
            Function::Erf | Function::Erfc => {
                return (format!("_{}({})", function.name(), arguments[0]), Strength::Atom);
            }
            _ => return (format!("np.{}({})", function.name(), arguments[0]), Strength::Atom),
        };
        (format!("{name}({})", arguments.join(", ")), Strength::Atom)
    }

    fn square_root(&self, argument: &str) -> String {
        format!("np.sqrt({argument})")
    }

    fn power(&self, base: &str, exponent: &str) -> String {
        format!("({base}**{exponent})")
    }

    fn choice(&self, condition: &str, then: &str, otherwise: &str) -> Text {
        (format!("np.where({condition}, {then}, {otherwise})"), Strength::Atom)
    }
}

pub(super) fn write(code: &Code) -> Result<String, WriteError> {
    let error_functions: Vec<&str> = [Function::Erf, Function::Erfc]
        .iter()
        .filter(|function| code.functions.contains(function))
        .map(|function| function.name())
        .collect();
    let mut lines = Vec::new();
    if !error_functions.is_empty() {
        lines.extend(["import math".to_string(), String::new()]);
    }
    // Code without a function needs no NumPy.
    let body: String =
        code.parts.iter().map(|(_, text)| text.as_str()).chain(code.results.iter().map(String::as_str)).collect();
    if body.contains("np.") || !error_functions.is_empty() {
        lines.push("import numpy as np".to_string());
    }
    if !error_functions.is_empty() {
        lines.push(String::new());
    }
    for name in error_functions {
        lines.push(format!("_{name} = np.vectorize(math.{name}, otypes=[float])"));
    }
    if !lines.is_empty() {
        lines.extend([String::new(), String::new()]);
    }
    let arguments: Vec<&str> = code.arguments.iter().map(|(name, _)| name.as_str()).collect();
    lines.push(format!("def {}({}):", code.function, arguments.join(", ")));
    let place = |k: usize| if code.results.len() == 1 { "returned".to_string() } else { format!("item {k}") };
    let mut description = code.description(place);
    description.push(String::new());
    description.push("Arguments are numbers or NumPy arrays that can be broadcast together.".into());
    let description =
        description.iter().map(|line| format!("    {}", line.replace('\\', "\\\\")).trim_end().to_string());
    lines.push(format!("    \"\"\"\n{}\n    \"\"\"", description.collect::<Vec<_>>().join("\n")));
    lines.extend(code.parts.iter().map(|(name, text)| format!("    {name} = {text}")));
    match code.results.as_slice() {
        [one] => lines.push(format!("    return {one}")),
        many => lines.push(format!("    return (\n        {},\n    )", many.join(",\n        "))),
    }
    Ok(lines.join("\n") + "\n")
}
