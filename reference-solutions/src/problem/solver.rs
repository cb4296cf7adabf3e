//! From an `[exact]` entry to a solver.

use crate::exact::{
    Characteristics, ColeHopf, DamBreak, ExactSolution, GasState, Riemann, Series, SeriesKind, SimpleWave,
};
use crate::expression::{Expression, Scope};

use super::error::AXES;
use super::file::{Argument, ExactEntry, SeriesName};

/// A solver, the fields that it gives and the direction along which it varies.
pub(super) struct Solved {
    pub solution: Box<dyn ExactSolution>,
    pub fields: Vec<String>,
    pub axis: usize,
}

/// What a solver is set up from.
pub(super) struct Setting<'a> {
    /// Parameters, constants and named numbers.
    pub scope: &'a Scope,
    pub fields: &'a [String],
    pub lower: &'a [f64],
    pub upper: &'a [f64],
    pub start: f64,
}

impl Setting<'_> {
    /// Value of an argument.
    fn number(&self, argument: &Argument) -> Result<f64, String> {
        match argument {
            Argument::Number(value) => Ok(*value),
            Argument::Formula(text) => self.constant(text),
        }
    }

    /// Value of a formula without coordinates.
    fn constant(&self, text: &str) -> Result<f64, String> {
        let expression = Expression::parse(text, self.scope).map_err(|error| error.to_string())?;
        expression.evaluate(&[]).map_err(|error| format!("`{text}` is no constant: {error}"))
    }

    fn optional(&self, argument: Option<&Argument>) -> Result<f64, String> {
        argument.map_or(Ok(0.0), |argument| self.number(argument))
    }

    fn numbers<const N: usize>(&self, arguments: [&Argument; N]) -> Result<[f64; N], String> {
        let mut values = [0.0; N];
        for (value, argument) in values.iter_mut().zip(arguments) {
            *value = self.number(argument)?;
        }
        Ok(values)
    }

    fn gas(&self, state: &[Argument; 3]) -> Result<GasState, String> {
        let [density, velocity, pressure] = self.numbers(state.each_ref())?;
        Ok(GasState { density, velocity, pressure })
    }
}

/// Sets the solver up; errors are sentences that name the argument.
pub(super) fn solver(entry: &ExactEntry, setting: &Setting<'_>) -> Result<Solved, String> {
    let text = |error: crate::exact::ExactError| error.to_string();
    let start = setting.start;
    let solution: Box<dyn ExactSolution> = match entry {
        ExactEntry::Riemann { left, right, position } => {
            let (left, right) = (setting.gas(left)?, setting.gas(right)?);
            let (gamma, position) = (setting.constant("gamma")?, setting.number(position)?);
            Box::new(Riemann::new(left, right, gamma, position, start).map_err(text)?)
        }
        ExactEntry::DamBreak { upstream, downstream, position } => {
            let [upstream, downstream, position] = setting.numbers([upstream, downstream, position])?;
            let gravity = setting.constant("gravity")?;
            Box::new(DamBreak::new(upstream, downstream, gravity, position, start).map_err(text)?)
        }
        ExactEntry::ColeHopf { mean, amplitude, wavenumber, phase } => {
            let sine = setting.numbers([mean, amplitude, wavenumber, phase])?;
            Box::new(ColeHopf::new(sine, setting.constant("viscosity")?, start).map_err(text)?)
        }
        ExactEntry::Characteristics { mean, amplitude, wavenumber, phase } => {
            let sine = setting.numbers([mean, amplitude, wavenumber, phase])?;
            Box::new(Characteristics::new(sine, start).map_err(text)?)
        }
        ExactEntry::SimpleWave { mean, amplitude, wavenumber, phase, density, pressure } => {
            let sine = setting.numbers([mean, amplitude, wavenumber, phase])?;
            let [density, pressure] = setting.numbers([density, pressure])?;
            let ambient = GasState { density, velocity: sine[0], pressure };
            let wave = [sine[1], sine[2], sine[3]];
            Box::new(SimpleWave::new(ambient, wave, setting.constant("gamma")?, start).map_err(text)?)
        }
        ExactEntry::Series { .. } => return series(entry, setting),
    };
    let count = solution.fields();
    if count > setting.fields.len() {
        return Err(format!("the solver gives {count} fields, but the equation has {}", setting.fields.len()));
    }
    Ok(Solved { fields: setting.fields[..count].to_vec(), solution, axis: 0 })
}

fn series(entry: &ExactEntry, setting: &Setting<'_>) -> Result<Solved, String> {
    let ExactEntry::Series { field, axis, functions, base, slope, coefficient, first, stride, diffusivity } = entry
    else {
        unreachable!("called for series alone");
    };
    let dimensions = setting.lower.len();
    let Some(direction) = AXES[..dimensions].iter().position(|known| known == axis) else {
        return Err(format!("axis is \"{axis}\"; write one of {}", AXES[..dimensions].join(", ")));
    };
    if !setting.fields.contains(field) {
        return Err(format!("the equation has no field {field}; its fields are {}", setting.fields.join(", ")));
    }
    if *stride == 0 {
        return Err("stride is 0; write at least 1".to_string());
    }
    let mut scope = setting.scope.clone();
    scope.declare("n");
    let formula = Expression::parse(coefficient, &scope).map_err(|error| error.to_string())?;
    let term = |index: usize| formula.evaluate(&[("n", (first + stride * index) as f64)]);
    let coefficients: Result<Vec<f64>, _> = (0..Series::MOST_TERMS).map(term).collect();
    let series = Series {
        kind: match functions {
            SeriesName::Sine => SeriesKind::Sine,
            SeriesName::Cosine => SeriesKind::Cosine,
        },
        steady: [setting.optional(base.as_ref())?, setting.optional(slope.as_ref())?],
        terms: [*first, *stride],
        coefficients: coefficients.map_err(|error| format!("coefficient `{coefficient}`: {error}"))?,
        walls: [setting.lower[direction], setting.upper[direction]],
        diffusivity: setting.number(diffusivity)?,
        origin: 0.0,
    };
    let solution = Box::new(series.checked().map_err(|error| error.to_string())?);
    Ok(Solved { solution, fields: vec![field.clone()], axis: direction })
}
