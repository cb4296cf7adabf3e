//! The equations that schemes are tried on: fields, parameters, and the source term that makes a chosen function a solution.
//!
//! An equation is written `residual(solution) = S`. Deriving the source of a manufactured solution is evaluating the residual of
//! its expressions. Families are one file each; a person's own equation ([`defined`]) is text and works the same way.
//!
//! ```
//! use gridassay_reference::equation::{Equation, Parameters, Solution};
//! use gridassay_reference::expression::{Expression, Scope};
//!
//! // u = x^2 t in u_t = (nu u_x)_x + S with nu = 3 needs S = x^2 - 6 t.
//! let u = Expression::parse("x^2*t", &Scope::new(["x", "t"])).unwrap();
//! let parameters: Parameters = [("diffusivity".to_string(), vec![3.into()])].into();
//! let solution: Solution = [("u".to_string(), u)].into();
//! let sources = Equation::named("diffusion")?.source_terms(1, &parameters, &solution)?;
//! assert_eq!(sources[0].1.evaluate(&[("x", 2.0), ("t", 0.5)]), Ok(1.0));
//! # Ok::<(), gridassay_reference::equation::EquationError>(())
//! ```

mod acoustics;
mod burgers;
pub mod defined;
pub mod dispersion;
mod error;
mod euler;
mod incompressible;
mod navier_stokes;
mod parameter;
mod poisson;
mod shallow_water;
mod state;
mod transport;

use std::collections::BTreeMap;
use std::sync::Arc;

pub use defined::{DefinedEquation, Definition};
pub use error::EquationError;
pub use parameter::{Components, Parameter, Range};
pub use state::State;

use crate::expression::Expression;

/// The coordinates, of which the first `dimensions` are used.
pub const COORDINATES: [&str; 3] = ["x", "y", "z"];

/// Values of parameters: one expression a component. A parameter that is constant is a number, one that varies is an expression of
/// coordinates and time, one that is left open is a symbol.
pub type Parameters = BTreeMap<String, Vec<Expression>>;

/// A solution: an expression for every field, or for every one of the equation's primitive quantities.
pub type Solution = BTreeMap<String, Expression>;

/// What a family of equations must tell.
pub trait Family: Send + Sync {
    /// The name of the contract.
    fn name(&self) -> &str;

    /// The equation in one line of plain text.
    fn form(&self) -> &str;

    /// The numbers of space dimensions that make sense.
    fn dimensions(&self) -> &[usize] {
        &[1, 2, 3]
    }

    /// The fields of the state, in the order of the contract.
    fn fields(&self, dimensions: usize) -> Vec<String>;

    /// What a solution may be given in instead of the fields, such as density, velocity and pressure; empty where there is nothing.
    fn primitives(&self, _dimensions: usize) -> Vec<String> {
        Vec::new()
    }

    /// The parameters.
    fn parameters(&self) -> &[Parameter];

    /// Whether the equation has no time.
    fn steady(&self) -> bool {
        false
    }

    /// The fields computed from primitives, in order.
    fn fields_from_primitives(&self, state: &State) -> Vec<Expression> {
        self.fields(state.dimensions).iter().map(|name| state.value(name)).collect()
    }

    /// Adds the primitives to a state that holds the fields.
    fn add_primitives(&self, _state: &mut State) {}

    /// The residual, one expression a field: the source term is what it evaluates to.
    ///
    /// # Errors
    /// If the residual asks for something that the state does not hold.
    fn residual(&self, state: &State) -> Result<Vec<Expression>, EquationError>;
}

/// An equation of the contract, or one that a person defined.
#[derive(Clone)]
pub struct Equation(Arc<dyn Family>);

impl std::fmt::Debug for Equation {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "Equation({})", self.0.name())
    }
}

/// The equations of the contract.
pub fn all() -> Vec<Equation> {
    let families: [Arc<dyn Family>; 11] = [
        Arc::new(transport::Transport::Advection),
        Arc::new(transport::Transport::Diffusion),
        Arc::new(transport::Transport::AdvectionDiffusion),
        Arc::new(transport::Transport::Dispersion),
        Arc::new(burgers::Burgers),
        Arc::new(acoustics::Acoustics),
        Arc::new(shallow_water::ShallowWater),
        Arc::new(euler::Euler),
        Arc::new(navier_stokes::NavierStokes),
        Arc::new(incompressible::Incompressible),
        Arc::new(poisson::Poisson),
    ];
    families.into_iter().map(Equation).collect()
}

impl Equation {
    /// The equation of the contract called `name`.
    ///
    /// # Errors
    /// [`EquationError::Unknown`], which lists the names.
    pub fn named(name: &str) -> Result<Equation, EquationError> {
        let known = all();
        let found = known.iter().find(|equation| equation.name() == name).cloned();
        found.ok_or_else(|| EquationError::Unknown {
            name: name.to_string(),
            known: known.iter().map(|equation| equation.name().to_string()).collect(),
        })
    }

    /// An equation of one's own.
    pub fn from_family(family: impl Family + 'static) -> Equation {
        Equation(Arc::new(family))
    }

    /// The name of the contract.
    pub fn name(&self) -> &str {
        self.0.name()
    }

    /// The equation in one line of plain text.
    pub fn form(&self) -> &str {
        self.0.form()
    }

    /// The numbers of space dimensions that make sense.
    pub fn dimensions(&self) -> &[usize] {
        self.0.dimensions()
    }

    /// The fields of the state, in the order of the contract.
    pub fn fields(&self, dimensions: usize) -> Vec<String> {
        self.0.fields(dimensions)
    }

    /// What a solution may be given in instead of the fields; empty where there is nothing.
    pub fn primitives(&self, dimensions: usize) -> Vec<String> {
        self.0.primitives(dimensions)
    }

    /// The parameters.
    pub fn parameters(&self) -> &[Parameter] {
        self.0.parameters()
    }

    /// Whether the equation has no time.
    pub fn steady(&self) -> bool {
        self.0.steady()
    }

    /// The parameters with defaults filled in, each with its right number of components, constants checked against their ranges.
    ///
    /// # Errors
    /// An unknown or missing parameter, a wrong number of components, a value outside its range.
    pub fn complete_parameters(&self, dimensions: usize, given: &Parameters) -> Result<Parameters, EquationError> {
        if !self.dimensions().contains(&dimensions) {
            let (equation, allowed) = (self.name().to_string(), self.dimensions().to_vec());
            return Err(EquationError::Dimensions { equation, dimensions, allowed });
        }
        parameter::complete(self, dimensions, given)
    }

    /// The solution as fields, in order: derived where it was given in primitives.
    ///
    /// # Errors
    /// Wrong dimensions or parameters, names that are neither fields nor primitives, names that are missing.
    pub fn solution_fields(
        &self,
        dimensions: usize,
        parameters: &Parameters,
        solution: &Solution,
    ) -> Result<Vec<(String, Expression)>, EquationError> {
        let state = self.state(dimensions, parameters, solution)?;
        let fields = self.fields(dimensions);
        let values = fields.iter().map(|name| state.value(name).without_names());
        Ok(fields.clone().into_iter().zip(values).collect())
    }

    /// The source terms that make `solution` a solution, one a field, in order. For `incompressible` the one of `p` is the divergence
    /// of the velocity, which a scheme cannot be given: it has to vanish.
    ///
    /// The expressions keep parts such as `velocity_x` and `velocity_x_d_y` as named parts where that takes fewer operations.
    ///
    /// # Errors
    /// As [`Equation::solution_fields`].
    pub fn source_terms(
        &self,
        dimensions: usize,
        parameters: &Parameters,
        solution: &Solution,
    ) -> Result<Vec<(String, Expression)>, EquationError> {
        let state = self.state(dimensions, parameters, solution)?;
        let sources = Expression::simplified_together(&self.0.residual(&state)?);
        Ok(self.fields(dimensions).into_iter().zip(sources).collect())
    }

    fn state(&self, dimensions: usize, given: &Parameters, solution: &Solution) -> Result<State, EquationError> {
        let parameters = self.complete_parameters(dimensions, given)?;
        let (fields, primitives) = (self.fields(dimensions), self.primitives(dimensions));
        let has_all = |names: &[String]| names.iter().all(|name| solution.contains_key(name));
        if let Some(name) = solution.keys().find(|name| !fields.contains(name) && !primitives.contains(name)) {
            let known = fields.iter().chain(&primitives).cloned().collect();
            return Err(EquationError::NotAField { equation: self.name().to_string(), name: name.clone(), known });
        }
        let in_primitives = !primitives.is_empty() && has_all(&primitives);
        if !in_primitives && !has_all(&fields) {
            let missing = fields.iter().filter(|name| !solution.contains_key(*name)).cloned().collect();
            return Err(EquationError::Incomplete { equation: self.name().to_string(), missing, primitives });
        }
        let mut state = State::new(dimensions, parameters);
        let used = if in_primitives { &primitives } else { &fields };
        if let Some(extra) = solution.keys().find(|name| !used.contains(name)) {
            let (equation, name) = (self.name().to_string(), extra.clone());
            return Err(EquationError::GivenTwice { equation, name, used: used.clone() });
        }
        used.iter().for_each(|name| state.set(name, solution[name].clone()));
        if in_primitives {
            let values = self.0.fields_from_primitives(&state);
            fields.iter().zip(values).for_each(|(name, value)| state.set(name, value));
        } else {
            self.0.add_primitives(&mut state);
        }
        Ok(state)
    }
}

#[cfg(test)]
mod tests;
