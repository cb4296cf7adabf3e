//! `source`: the source term that makes a solution one.

use std::path::Path;

use clap::{ArgGroup, Args};
use gridassay_reference::equation::{COORDINATES, Definition, Equation, Parameters, Solution};
use gridassay_reference::expression::{Expression, ParseError, Scope};
use gridassay_reference::problem::Problem;
use gridassay_reference::writer::{Language, Listing, source_listing};

use super::outcome::Outcome;

/// Prints the source term that makes a solution one, as a formula or as code.
#[derive(Debug, Args)]
#[command(
    after_help = "Examples:\n  gridassay source --equation advection_diffusion --solution \"u = sin(pi*x)*exp(-t)\" --as fortran\n  \
                  gridassay source --residual \"d(u,t) + a*d(u,x) - nu*d(u,x,x)\" --parameter a --parameter nu --solution \"u = sin(x - a*t)\" --as c\n  \
                  gridassay source --problem manufactured-navier-stokes --as python\n\n\
                  A parameter of the equation that is not given stays open and becomes an argument of the code. The components of a vector are\n\
                  called velocity_x, velocity_y, velocity_z. A line \"k = ...\" whose left side is no field names a sub-expression."
)]
#[command(group = ArgGroup::new("subject").args(["equation", "residual", "problem"]).required(true).multiple(false))]
pub struct Source {
    /// An equation of the contract.
    #[arg(long)]
    equation: Option<String>,
    /// An equation of your own by its residual, repeatable for a system: d(u,t) + a*d(u,x). The fields are the left sides of `--solution`.
    #[arg(long)]
    residual: Vec<String>,
    /// A problem of the catalogue, or a problem file.
    #[arg(long)]
    problem: Option<String>,
    /// "field = expression" or "name = expression", repeatable.
    #[arg(long, value_name = "NAME = EXPRESSION")]
    solution: Vec<String>,
    /// Number of space dimensions; without it the least that holds the coordinates of the solution.
    #[arg(long, value_parser = clap::value_parser!(u8).range(1..=3))]
    dimensions: Option<u8>,
    /// A parameter: `nu=0.1`, `velocity=1,2`, `diffusivity=1+x^2`, or `nu` alone to leave it open; repeatable.
    #[arg(long = "parameter", value_name = "NAME[=VALUE]")]
    parameters: Vec<String>,
    /// How it is written: formula, latex, c, cpp, fortran, python or rust.
    #[arg(long = "as", value_name = "LANGUAGE", default_value = "formula")]
    language: String,
}

impl Source {
    /// Reads, derives, prints.
    pub fn run(self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let language: Language = self.language.parse()?;
        let listing = match &self.problem {
            Some(name) => of_problem(&Problem::resolve(name, Path::new("."))?)?,
            None => self.of_solution()?,
        };
        print!("{}", listing.write(language)?);
        Ok(Outcome::Measured)
    }

    fn of_solution(&self) -> Result<Listing, Box<dyn std::error::Error>> {
        let lines = self.solution.iter().map(|line| assignment("--solution", line)).collect::<Result<Vec<_>, _>>()?;
        if lines.is_empty() {
            return Err("no solution is given; add for example --solution \"u = sin(x - t)\"".into());
        }
        let dimensions = self.dimensions.map_or_else(|| dimensions_of(&lines), usize::from);
        let given: Vec<(&str, Option<&str>)> = self.parameters.iter().map(|text| split_parameter(text)).collect();
        let equation = self.equation(&lines, &given, dimensions)?;
        let mut scope = Scope::new(COORDINATES[..dimensions].iter().copied().chain(["t"]));
        let mut parameters = equation.open_parameters(dimensions);
        for parameter in equation.parameters() {
            parameter.component_names(dimensions).iter().for_each(|name| scope.declare(name));
        }
        for (name, value) in given {
            enter(&mut scope, &mut parameters, &equation, name, value)?;
        }
        let known: Vec<String> =
            equation.fields(dimensions).into_iter().chain(equation.primitives(dimensions)).collect();
        let mut solution = Solution::new();
        for (name, text) in lines {
            let value = parse(text, &scope)?;
            if known.iter().any(|field| field == name) {
                solution.insert(name.to_owned(), value);
            } else {
                scope.define(name, Expression::named(name, value));
            }
        }
        Ok(source_listing(&equation, dimensions, &parameters, &solution, &[])?)
    }

    fn equation(
        &self,
        lines: &[(&str, &str)],
        given: &[(&str, Option<&str>)],
        dimensions: usize,
    ) -> Result<Equation, Box<dyn std::error::Error>> {
        if let Some(name) = &self.equation {
            return Ok(Equation::named(name)?);
        }
        // The fields are those left sides that a residual differentiates or uses; the others name sub-expressions.
        let fields = lines.iter().rev().take(self.residual.len()).rev().map(|(name, _)| (*name).to_owned()).collect();
        Ok(Equation::defined(Definition {
            name: "own_equation".to_owned(),
            dimensions: vec![dimensions],
            fields,
            parameters: given.iter().map(|(name, _)| ((*name).to_owned(), None)).collect(),
            residuals: self.residual.clone(),
        })?)
    }
}

/// Gives a parameter its value in the equation and in the scope, or declares a name of the solution's own.
fn enter(
    scope: &mut Scope,
    parameters: &mut Parameters,
    equation: &Equation,
    name: &str,
    value: Option<&str>,
) -> Result<(), Box<dyn std::error::Error>> {
    let Some(value) = value else {
        if equation.parameters().iter().all(|parameter| parameter.name != name) {
            scope.declare(name);
        }
        return Ok(());
    };
    let values = value.split(',').map(|part| parse(part, scope)).collect::<Result<Vec<_>, _>>()?;
    match parameters.get(name) {
        Some(open) if open.len() == values.len() => {
            for (symbol, value) in open.iter().zip(&values) {
                scope.define(&symbol.to_string(), value.clone());
            }
            parameters.insert(name.to_owned(), values);
        }
        Some(open) => {
            return Err(format!("--parameter {name} has {} component(s) here, not {}", open.len(), values.len()).into());
        }
        None => scope.define(name, values.into_iter().next().unwrap_or_else(Expression::zero)),
    }
    Ok(())
}

/// The source of a problem as it stands, its parameters as numbers.
fn of_problem(problem: &Problem) -> Result<Listing, Box<dyn std::error::Error>> {
    let expressions =
        |of: &dyn Fn(usize) -> Option<Expression>| (0..problem.fields().len()).map(of).collect::<Option<Vec<_>>>();
    let source = |field: usize| problem.source_expression(field).cloned();
    let Some(sources) = expressions(&source) else {
        return Err(format!(
            "the problem `{}` has no source term: its solution satisfies the equation by itself",
            problem.name()
        )
        .into());
    };
    Ok(Listing::of_problem(problem, sources))
}

fn parse(text: &str, scope: &Scope) -> Result<Expression, String> {
    Expression::parse(text, scope).map_err(|error: ParseError| error.rendered())
}

fn assignment<'a>(option: &str, line: &'a str) -> Result<(&'a str, &'a str), String> {
    let (name, text) =
        line.split_once('=').ok_or_else(|| format!("{option} \"{line}\" is not of the form \"u = expression\""))?;
    Ok((name.trim(), text.trim()))
}

fn split_parameter(text: &str) -> (&str, Option<&str>) {
    match text.split_once('=') {
        Some((name, value)) => (name.trim(), Some(value.trim())),
        None => (text.trim(), None),
    }
}

/// The least number of dimensions that holds every coordinate that a line names.
fn dimensions_of(lines: &[(&str, &str)]) -> usize {
    let names =
        |text: &str, name: &str| text.split(|c: char| !(c.is_alphanumeric() || c == '_')).any(|word| word == name);
    (2..=3).rev().find(|d| lines.iter().any(|(_, text)| names(text, COORDINATES[d - 1]))).unwrap_or(1)
}
