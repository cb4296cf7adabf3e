//! What the rest asks of a problem's file: whether values are admissible, and places for messages.

use toml::Spanned;

use super::Inner;
use super::build::accepts;
use super::error::{Place, ProblemError};
use super::file::OneOrMany;

impl Inner {
    /// Whether a parameter or constant may be given these values from outside.
    pub(super) fn acceptable(&self, name: &str, values: &[f64]) -> Result<(), ProblemError> {
        let refuse = |reason: String| {
            let problem = self.file.name.get_ref().clone();
            Err(ProblemError::Parameter { problem, name: name.to_string(), reason })
        };
        if self.file.coefficients.contains_key(name) {
            let reason = "it varies by a formula of the problem; copy the problem into a file of your own to change it";
            return refuse(reason.into());
        }
        if let Some(parameter) = self.equation.parameters().iter().find(|parameter| parameter.name == name) {
            let count = parameter.component_names(*self.file.dimensions.get_ref()).len();
            return accepts(self.equation.name(), parameter, count, values).or_else(refuse);
        }
        match values {
            _ if !self.file.constants.contains_key(name) => {
                let known = self.parameters.keys().chain(self.file.constants.keys());
                let known: Vec<&str> = known.map(String::as_str).collect();
                refuse(format!("there is no such parameter; known: {}", known.join(", ")))
            }
            [value] if value.is_finite() => Ok(()),
            [value] => refuse(format!("{value} is not finite; give a finite number")),
            _ => refuse(format!("{} values given, but it has 1", values.len())),
        }
    }

    /// Where the solution of a field stands.
    pub(super) fn solution_place(&self, field: usize) -> Place {
        let formula = self.fields.get(field).and_then(|name| self.file.solution.get(name)).map(Spanned::span);
        let solver = self.file.exact.as_ref().map(Spanned::span);
        self.text.place(formula.or(solver).unwrap_or_else(|| self.file.name.span()))
    }

    /// Where the domain stands.
    pub(super) fn domain_place(&self) -> Place {
        self.text.place(self.file.domain.get_ref().boundaries.span())
    }

    /// Where a coefficient stands.
    pub(super) fn entry_place(&self, coefficient: &str) -> Place {
        let span = self.file.coefficients.get(coefficient).map(Spanned::span);
        self.text.place(span.unwrap_or_else(|| self.file.name.span()))
    }

    /// Whether one value of a varying parameter is in the equation's range.
    pub(super) fn component_accepts(&self, name: &str, value: f64) -> Result<(), String> {
        let parameter = self.equation.parameters().iter().find(|parameter| parameter.name == name);
        parameter.map_or(Ok(()), |parameter| accepts(self.equation.name(), parameter, 1, &[value]))
    }
}

/// Values of an entry as text, for listings.
pub(super) fn listed<T: ToString>(values: &OneOrMany<T>) -> String {
    let values: Vec<String> = values.as_slice().iter().map(T::to_string).collect();
    values.join(", ")
}
