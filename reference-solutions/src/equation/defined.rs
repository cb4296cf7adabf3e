//! Equations that a person defines by residuals, such as `d(u,t) + a*d(u,x) - nu*d(u,x,x)`.

use std::collections::HashMap;

use super::{COORDINATES, Equation, EquationError, Family, Parameter, State};
use crate::expression::{Expression, Scope};

/// The text of an equation.
#[derive(Clone, Debug, PartialEq)]
pub struct Definition {
    /// Its name: the scheme is asked by it.
    pub name: String,
    /// The numbers of space dimensions that it is meant for.
    pub dimensions: Vec<usize>,
    /// The fields, in order.
    pub fields: Vec<String>,
    /// The scalar parameters, with a default or without.
    pub parameters: Vec<(String, Option<f64>)>,
    /// A residual for each field, in order: what is written equals the source term.
    pub residuals: Vec<String>,
}

/// An equation given by [`Definition`], read and checked.
pub struct DefinedEquation {
    definition: Definition,
    form: String,
    parameters: Vec<Parameter>,
    residuals: Vec<Expression>,
}

impl DefinedEquation {
    /// Reads the residuals.
    ///
    /// # Errors
    /// A name that is used twice or means something else already, a wrong number of residuals, a text that is no expression.
    pub fn new(definition: Definition) -> Result<DefinedEquation, EquationError> {
        check_names(&definition)?;
        let largest = definition.dimensions.iter().copied().max().unwrap_or(1).min(3);
        let variables: Vec<&str> = COORDINATES[..largest].iter().copied().chain(["t"]).collect();
        let mut scope = Scope::new(&variables).with_derivatives(&variables);
        definition.fields.iter().for_each(|name| scope.declare(name));
        definition.parameters.iter().for_each(|(name, _)| scope.declare(name));
        let read = |text: &String| {
            let equation = definition.name.clone();
            Expression::parse(text, &scope)
                .map_err(|error| EquationError::Residual { equation, error: Box::new(error) })
        };
        let residuals = definition.residuals.iter().map(read).collect::<Result<Vec<_>, _>>()?;
        let parameters = definition.parameters.iter().map(|(name, default)| {
            let parameter = Parameter::new(name, "parameter of the equation");
            default.map_or(parameter.clone(), |value| parameter.default(value))
        });
        let form = definition.residuals.iter().map(|residual| format!("{residual} = S")).collect::<Vec<_>>().join(", ");
        Ok(DefinedEquation { parameters: parameters.collect(), form, residuals, definition })
    }
}

impl Equation {
    /// The equation that a definition describes.
    ///
    /// # Errors
    /// As [`DefinedEquation::new`].
    pub fn defined(definition: Definition) -> Result<Equation, EquationError> {
        Ok(Equation::from_family(DefinedEquation::new(definition)?))
    }
}

fn check_names(definition: &Definition) -> Result<(), EquationError> {
    let equation = &definition.name;
    if super::all().iter().any(|known| known.name() == *equation) {
        let (equation, name) = (equation.clone(), equation.clone());
        return Err(EquationError::NameTaken { equation, name, taken_by: "an equation of the contract" });
    }
    if definition.fields.is_empty() || definition.fields.len() != definition.residuals.len() {
        let (fields, residuals) = (definition.fields.len(), definition.residuals.len());
        return Err(EquationError::Residuals { equation: equation.clone(), fields, residuals });
    }
    let mut taken: HashMap<&str, &'static str> = HashMap::from([("t", "time"), ("pi", "the circle constant")]);
    taken.extend(COORDINATES.map(|name| (name, "a coordinate")));
    taken.insert("d", "the derivative");
    let fields = definition.fields.iter().map(|name| (name, "a field"));
    for (name, kind) in fields.chain(definition.parameters.iter().map(|(name, _)| (name, "a parameter"))) {
        if let Some(taken_by) = taken.insert(name, kind) {
            return Err(EquationError::NameTaken { equation: equation.clone(), name: name.clone(), taken_by });
        }
    }
    Ok(())
}

impl Family for DefinedEquation {
    fn name(&self) -> &str {
        &self.definition.name
    }

    fn form(&self) -> &str {
        &self.form
    }

    fn dimensions(&self) -> &[usize] {
        &self.definition.dimensions
    }

    fn fields(&self, _dimensions: usize) -> Vec<String> {
        self.definition.fields.clone()
    }

    fn parameters(&self) -> &[Parameter] {
        &self.parameters
    }

    fn steady(&self) -> bool {
        let names_time = |text: &String| {
            let mut words = text.split(|c: char| !c.is_ascii_alphanumeric() && c != '_');
            words.any(|word| word == "t")
        };
        !self.definition.residuals.iter().any(names_time)
    }

    fn residual(&self, state: &State) -> Result<Vec<Expression>, EquationError> {
        let fields = self.definition.fields.iter().map(|name| (name.clone(), state.value(name)));
        let parameters =
            self.parameters.iter().map(|parameter| (parameter.name.clone(), state.parameter(&parameter.name)));
        let replacements: HashMap<String, Expression> = fields.chain(parameters).collect();
        Ok(self.residuals.iter().map(|residual| residual.substitute(&replacements).carried_out()).collect())
    }
}
