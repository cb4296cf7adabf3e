//! The listing of an equation's source terms.

use super::{Argument, Listing, Output};
use crate::equation::{COORDINATES, Equation, EquationError, Parameters, Solution};
use crate::expression::Expression;
use crate::problem::Problem;

/// The source terms of `equation` that make `solution` a solution, with arguments and units described.
///
/// `described` tells more about names in the solution (amplitudes, wavenumbers) as pairs of name and meaning.
///
/// # Errors
/// As [`Equation::source_terms`].
pub fn source_listing(
    equation: &Equation,
    dimensions: usize,
    parameters: &Parameters,
    solution: &Solution,
    described: &[(String, String)],
) -> Result<Listing, EquationError> {
    let sources = equation.source_terms(dimensions, parameters, solution)?;
    let mut arguments: Vec<Argument> = COORDINATES[..dimensions]
        .iter()
        .map(|name| Argument { name: name.to_string(), meaning: "coordinate, m".into() })
        .collect();
    arguments.push(Argument { name: "t".into(), meaning: "time, s".into() });
    for parameter in equation.parameters() {
        for name in parameter.component_names(dimensions) {
            arguments.push(Argument { name, meaning: parameter.meaning.clone() });
        }
    }
    let known = |arguments: &[Argument], name: &str| arguments.iter().any(|argument| argument.name == name);
    for (name, meaning) in described {
        if !known(&arguments, name) {
            arguments.push(Argument { name: name.clone(), meaning: meaning.clone() });
        }
    }
    for name in sources.iter().flat_map(|(_, source)| source.symbols()) {
        if !known(&arguments, &name) {
            arguments.push(Argument { name, meaning: "parameter of the solution".into() });
        }
    }
    let mut title = vec![
        format!("Source term of `{}` in {dimensions}-D: {}", equation.name(), equation.form()),
        "for the solution".to_string(),
    ];
    title.extend(solution.iter().map(|(name, value)| format!("  {name} = {value}")));
    let output = |(field, expression): (String, Expression)| Output {
        meaning: meaning(equation.name(), &field).to_string(),
        name: format!("S_{field}"),
        expression,
    };
    Ok(Listing { function: "source".into(), title, arguments, outputs: sources.into_iter().map(output).collect() })
}

/// What the source of a field is, with its unit.
fn meaning(equation: &str, field: &str) -> &'static str {
    match (equation, field) {
        ("euler" | "navier_stokes", "density") => "rate of mass per volume, kg/(m^3 s)",
        ("euler" | "navier_stokes", "energy") => "rate of total energy per volume, W/m^3",
        ("euler" | "navier_stokes", _) => "rate of momentum per volume, N/m^3",
        ("shallow_water", "depth") => "rate of depth, m/s",
        ("shallow_water", _) => "rate of discharge per width, m^2/s^2",
        ("acoustics", "p") => "rate of pressure, Pa/s",
        ("acoustics", _) => "rate of velocity, m/s^2",
        ("incompressible", "p") => "divergence of the velocity, 1/s; it must vanish",
        ("incompressible", _) => "rate of velocity, m/s^2",
        ("burgers", _) => "rate of u, m/s^2",
        ("poisson", _) => "source density, unit of k u per m^2",
        _ => "rate of the field, its unit per second",
    }
}

impl Listing {
    /// The source terms of a problem as it stands, its parameters being numbers; `sources` holds one expression a field.
    pub fn of_problem(problem: &Problem, sources: Vec<Expression>) -> Listing {
        let mut arguments: Vec<Argument> = COORDINATES[..problem.dimensions()]
            .iter()
            .map(|name| Argument { name: name.to_string(), meaning: "coordinate, m".into() })
            .collect();
        arguments.push(Argument { name: "t".into(), meaning: "time, s".into() });
        let mut title = vec![
            format!("Source term of `{}` in {}-D", problem.equation(), problem.dimensions()),
            format!("for the problem {}: {}", problem.name(), problem.title()),
        ];
        title.extend(problem.formulas().into_iter().map(|(name, text)| format!("  {name} = {text}")));
        let outputs = problem.fields().iter().zip(sources).map(|(field, expression)| Output {
            name: format!("S_{field}"),
            meaning: meaning(problem.equation(), field).to_string(),
            expression,
        });
        Listing { function: "source".into(), title, arguments, outputs: outputs.collect() }
    }
}
