//! From a file to a problem: names resolved, formulas read, sources derived, solvers set up.

use std::collections::BTreeMap;
use std::ops::Range;

use toml::Spanned;

use crate::equation::{Equation, EquationError, Parameter, Parameters, Solution};
use crate::expression::{Expression, Function, Number, Scope};

use super::error::{AXES, ProblemError};
use super::file::{FunctionalEntry, ProblemFile, SourceKind};
use super::formula::Formula;
use super::header;
use super::names::by_dependency;
use super::residuals;
use super::solver::{Setting, Solved, solver};
use super::text::Text;
use super::{FieldSolution, Functional, Inner};

/// Everything that is known before a formula of the solution is read.
struct Builder<'a> {
    file: &'a ProblemFile,
    text: &'a Text,
    changed: &'a BTreeMap<String, Vec<f64>>,
    equation: Equation,
    dimensions: usize,
    fields: Vec<String>,
    /// What the equation's parameters stand for.
    meanings: Parameters,
    scope: Scope,
}

pub(super) fn assemble(
    file: ProblemFile,
    text: Text,
    changed: BTreeMap<String, Vec<f64>>,
) -> Result<Inner, ProblemError> {
    let equation = header::equation(&file, &text)?;
    header::domain(&file, &text)?;
    let boundaries = header::boundaries(&file, &text)?;
    let (start, end) = header::times(&file, &text)?;
    let dimensions = *file.dimensions.get_ref();
    let fields = equation.fields(dimensions);
    let scope = Scope::new(AXES[..dimensions].iter().copied().chain(["t"]));
    let (file_ref, text_ref, changed_ref) = (&file, &text, &changed);
    let mut builder = Builder {
        file: file_ref,
        text: text_ref,
        changed: changed_ref,
        equation,
        dimensions,
        fields,
        meanings: Parameters::new(),
        scope,
    };
    let parameters = builder.parameters()?;
    builder.constants()?;
    builder.sub_expressions()?;
    let coefficients = builder.coefficients()?;
    let solved = builder.solved(start)?;
    let expressions = builder.solution(solved.as_ref())?;
    let solution = builder.field_solutions(expressions, solved.as_ref())?;
    let sources = builder.sources()?;
    let residuals = builder.residuals()?;
    let breaks = builder.breaks()?;
    let functionals = builder.functionals()?;
    let Builder { equation, fields, .. } = builder;
    Ok(Inner {
        equation,
        fields,
        residuals,
        parameters,
        coefficients,
        boundaries,
        start,
        end,
        solution,
        solved,
        sources,
        breaks,
        functionals,
        file,
        text,
        changed,
    })
}

fn number(value: f64) -> Expression {
    Expression::number(Number::from_f64(value))
}

impl Builder<'_> {
    /// Refuses names that already have a meaning.
    fn free(&self, name: &str, span: Range<usize>) -> Result<(), ProblemError> {
        let taken = AXES.contains(&name)
            || ["t", "pi", "n", "d", "i", "sqrt"].contains(&name)
            || Function::named(name).is_some()
            || self.fields.iter().any(|field| field == name)
            || self.scope.names().any(|known| known == name);
        if taken {
            return self.text.refuse(span, name, "this name already has a meaning; choose another");
        }
        Ok(())
    }

    fn parameters(&mut self) -> Result<BTreeMap<String, Vec<f64>>, ProblemError> {
        let known: Vec<&str> = self.equation.parameters().iter().map(|parameter| parameter.name.as_str()).collect();
        let spans = self.file.parameters.iter().map(|(name, value)| (name, value.span()));
        let spans = spans.chain(self.file.coefficients.iter().map(|(name, value)| (name, value.span())));
        for (name, span) in spans {
            if !known.contains(&name.as_str()) {
                let reason = format!("the equation has no such parameter; it has {}", known.join(", "));
                return self.text.refuse(span, name, reason);
            }
            if self.file.parameters.contains_key(name) && self.file.coefficients.contains_key(name) {
                return self.text.refuse(span, name, "it is given twice; keep it under [parameters] or [coefficients]");
            }
        }
        let mut parameters = BTreeMap::new();
        for parameter in self.equation.clone().parameters() {
            if let Some(values) = self.parameter(parameter)? {
                self.define(parameter, values.iter().map(|value| number(*value)).collect(), true);
                parameters.insert(parameter.name.clone(), values);
            }
        }
        Ok(parameters)
    }

    /// Gives a parameter its meaning, and where `usable` its names to the formulas of the file.
    fn define(&mut self, parameter: &Parameter, meanings: Vec<Expression>, usable: bool) {
        if usable {
            for (name, meaning) in parameter.component_names(self.dimensions).iter().zip(&meanings) {
                self.scope.define(name, meaning.clone());
            }
            if let [only] = &meanings[..] {
                self.scope.define(&parameter.name, only.clone());
            }
        }
        self.meanings.insert(parameter.name.clone(), meanings);
    }

    /// The values of a parameter that does not vary.
    fn parameter(&self, parameter: &Parameter) -> Result<Option<Vec<f64>>, ProblemError> {
        let name = &parameter.name;
        if self.file.coefficients.contains_key(name) {
            return Ok(None);
        }
        let given = self.file.parameters.get(name);
        let span = given.map_or(self.file.equation.span(), Spanned::span);
        let count = parameter.component_names(self.dimensions).len();
        let values = match (self.changed.get(name), given, parameter.default) {
            (Some(values), ..) => values.clone(),
            (None, Some(given), _) => given.get_ref().as_slice().to_vec(),
            (None, None, Some(default)) => vec![default; count],
            (None, None, None) => {
                let reason = "the equation needs this parameter; give it under [parameters] or [coefficients]";
                return self.text.refuse(span, name, reason);
            }
        };
        accepts(self.equation.name(), parameter, count, &values)
            .or_else(|reason| self.text.refuse(span, name, reason))?;
        Ok(Some(values))
    }

    fn constants(&mut self) -> Result<(), ProblemError> {
        for (name, value) in &self.file.constants {
            self.free(name, value.span())?;
            let value = self.changed.get(name).map_or(*value.get_ref(), |values| values[0]);
            self.scope.define(name, number(value));
        }
        Ok(())
    }

    fn sub_expressions(&mut self) -> Result<(), ProblemError> {
        let texts: BTreeMap<&str, &str> =
            self.file.names.iter().map(|(name, text)| (name.as_str(), text.get_ref().as_str())).collect();
        let order = match by_dependency(&texts) {
            Ok(order) => order,
            Err(circle) => {
                let span = self.file.names[circle[0]].span();
                let reason = format!("it is defined by itself ({}); break the circle", circle.join(" uses "));
                return self.text.refuse(span, circle[0], reason);
            }
        };
        for name in order {
            let entry = &self.file.names[name];
            self.free(name, entry.span())?;
            let meaning = self.text.formula(name, entry.get_ref(), entry.span(), &self.scope)?;
            self.scope.define(name, Expression::named(name, meaning));
        }
        Ok(())
    }

    fn coefficients(&mut self) -> Result<BTreeMap<String, Vec<Formula>>, ProblemError> {
        let mut coefficients = BTreeMap::new();
        for parameter in self.equation.clone().parameters() {
            let Some(entry) = self.file.coefficients.get(&parameter.name) else { continue };
            let texts = entry.get_ref().as_slice();
            let count = parameter.component_names(self.dimensions).len();
            if texts.len() != count {
                let reason = format!("{} formulas given; write {count}", texts.len());
                return self.text.refuse(entry.span(), &parameter.name, reason);
            }
            let read = |text: &String| self.text.formula(&parameter.name, text, entry.span(), &self.scope);
            let meanings = texts.iter().map(read).collect::<Result<Vec<_>, _>>()?;
            let formulas = meanings.iter().map(|meaning| self.compiled(&parameter.name, meaning.clone()));
            coefficients.insert(parameter.name.clone(), formulas.collect::<Result<Vec<_>, _>>()?);
            self.define(parameter, meanings, false);
        }
        Ok(coefficients)
    }

    fn solved(&self, start: f64) -> Result<Option<Solved>, ProblemError> {
        let Some(entry) = &self.file.exact else { return Ok(None) };
        let domain = self.file.domain.get_ref();
        let setting = Setting {
            scope: &self.scope,
            fields: &self.fields,
            lower: domain.lower.get_ref(),
            upper: domain.upper.get_ref(),
            start,
        };
        solver(entry.get_ref(), &setting).map(Some).or_else(|reason| self.text.refuse(entry.span(), "exact", reason))
    }

    /// The formulas of the file, by field or primitive quantity.
    fn formulas(&self) -> Result<Solution, ProblemError> {
        let read = |(name, entry): (&String, &Spanned<String>)| {
            Ok((name.clone(), self.text.formula(name, entry.get_ref(), entry.span(), &self.scope)?))
        };
        self.file.solution.iter().map(read).collect()
    }

    fn equation_refuses<T>(&self, error: &EquationError) -> Result<T, ProblemError> {
        let first = self.file.solution.values().next().map_or(self.file.name.span(), Spanned::span);
        self.text.refuse(first, "solution", error.to_string())
    }

    /// The formula of each field, none where the solver gives it.
    fn solution(&self, solved: Option<&Solved>) -> Result<Vec<Option<Expression>>, ProblemError> {
        let formulas = self.formulas()?;
        let Some(solved) = solved else {
            let fields = self.equation.solution_fields(self.dimensions, &self.meanings, &formulas);
            return match fields {
                Ok(fields) => Ok(fields.into_iter().map(|(_, formula)| Some(formula)).collect()),
                Err(error) => self.equation_refuses(&error),
            };
        };
        for (name, entry) in &self.file.solution {
            if solved.fields.contains(name) {
                let reason = "the solver under [exact] gives this field already; remove one of the two";
                return self.text.refuse(entry.span(), name, reason);
            }
            if !self.fields.contains(name) {
                let reason = format!("the equation has no such field; it has {}", self.fields.join(", "));
                return self.text.refuse(entry.span(), name, reason);
            }
        }
        let missing = |field: &&String| !solved.fields.contains(field) && !formulas.contains_key(*field);
        if let Some(field) = self.fields.iter().find(missing) {
            let reason = "neither [exact] nor [solution] gives this field; add a formula under [solution]";
            return self.text.refuse(self.file.name.span(), field, reason);
        }
        Ok(self.fields.iter().map(|field| formulas.get(field).cloned()).collect())
    }

    fn field_solutions(
        &self,
        solution: Vec<Option<Expression>>,
        solved: Option<&Solved>,
    ) -> Result<Vec<FieldSolution>, ProblemError> {
        let field = |(name, formula): (&String, Option<Expression>)| match formula {
            Some(formula) => {
                let along = |axis: &&str| self.compiled(name, formula.derivative(axis));
                let derivatives = AXES[..self.dimensions].iter().map(along).collect::<Result<Vec<_>, _>>()?;
                Ok(FieldSolution::Formula { derivatives, value: self.compiled(name, formula.clone())? })
            }
            None => {
                let index = solved.and_then(|solved| solved.fields.iter().position(|known| known == name));
                Ok(FieldSolution::Solved(index.unwrap_or(0)))
            }
        };
        self.fields.iter().zip(solution).map(field).collect()
    }

    /// Compiles what an entry means.
    fn compiled(&self, entry: &str, meaning: Expression) -> Result<Formula, ProblemError> {
        let span = self.file.solution.get(entry).map_or(self.file.name.span(), Spanned::span);
        Formula::new(meaning, self.dimensions).or_else(|error| self.text.refuse(span, entry, error.to_string()))
    }

    fn sources(&self) -> Result<Option<Vec<Formula>>, ProblemError> {
        if self.file.source == SourceKind::None {
            return Ok(None);
        }
        if let Some(exact) = &self.file.exact {
            let reason = "a source can be derived from formulas only; remove source = \"derived\", or replace [exact]";
            return self.text.refuse(exact.span(), "source", reason);
        }
        match self.equation.source_terms(self.dimensions, &self.meanings, &self.formulas()?) {
            Ok(sources) => sources
                .into_iter()
                .map(|(field, source)| self.compiled(&field, source))
                .collect::<Result<_, _>>()
                .map(Some),
            Err(error) => self.equation_refuses(&error),
        }
    }

    /// The residuals in which the check looks for a misfit.
    fn residuals(&self) -> Result<Vec<Expression>, ProblemError> {
        let parameters = self.equation.parameters().iter();
        let names: Vec<String> = parameters.flat_map(|parameter| parameter.component_names(self.dimensions)).collect();
        let scope = residuals::scope(&self.fields, &names, self.dimensions);
        match &self.file.residuals {
            Some(own) => {
                let read = |(field, residual): (&String, &Spanned<String>)| {
                    let entry = format!("residual of {field}");
                    self.text.formula(&entry, residual.get_ref(), residual.span(), &scope)
                };
                self.fields.iter().zip(own).map(read).collect()
            }
            None => residuals::residuals(self.equation.name(), &scope, self.dimensions)
                .or_else(|reason| self.text.refuse(self.file.equation.span(), "equation", reason)),
        }
    }

    fn breaks(&self) -> Result<Vec<Vec<Formula>>, ProblemError> {
        let axes = &AXES[..self.dimensions];
        let mut breaks = vec![Vec::new(); axes.len()];
        for (name, entry) in &self.file.breaks {
            let label = format!("breaks.{name}");
            let Some(axis) = axes.iter().position(|axis| axis == name) else {
                return self.text.refuse(entry.span(), label, format!("no such coordinate; write {}", axes.join(", ")));
            };
            for text in entry.get_ref() {
                let meaning = self.text.formula(&label, text, entry.span(), &self.scope)?;
                let formula = self.compiled(&label, meaning)?;
                if axes.iter().any(|axis| formula.depends_on(axis)) {
                    let reason = format!("`{text}` must depend on t alone");
                    return self.text.refuse(entry.span(), label, reason);
                }
                breaks[axis].push(formula);
            }
        }
        Ok(breaks)
    }

    fn functionals(&self) -> Result<Vec<Functional>, ProblemError> {
        let mut scope = self.scope.clone();
        self.fields.iter().for_each(|field| scope.declare(field));
        let functional = |entry: &FunctionalEntry| {
            let text = entry.integrand.get_ref();
            let integrand = self.text.formula(&entry.name, text, entry.integrand.span(), &scope)?;
            Ok(Functional::new(&entry.name, text, integrand))
        };
        self.file.functionals.iter().map(functional).collect()
    }
}

/// Why a parameter cannot have these values.
pub(super) fn accepts(equation: &str, parameter: &Parameter, count: usize, values: &[f64]) -> Result<(), String> {
    if values.len() != count {
        return Err(format!("{} values given, but it has {count}", values.len()));
    }
    values.iter().try_for_each(|value| parameter.check(equation, *value).map_err(|error| error.to_string()))
}
