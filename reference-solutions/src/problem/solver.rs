//! From an `[exact]` entry to a solver.

use crate::exact::{
    Characteristics, ColeHopf, DamBreak, ExactError, ExactSolution, GasState, Riemann, Sample, Series, SeriesKind,
    SimpleWave, Swirl,
};
use crate::expression::{Expression, Scope};

use super::error::AXES;
use super::file::{Argument, ExactEntry, SeriesName};

/// A solver and the fields that it gives.
pub(super) struct Solved {
    pub solution: Solution,
    pub fields: Vec<String>,
}

/// A solver by what its solutions depend on.
pub(super) enum Solution {
    /// One coordinate.
    Line { solution: Box<dyn ExactSolution>, axis: usize },
    /// Two coordinates, one field.
    Swirl(Swirl),
}

impl Solution {
    /// A field's value, or its slope along `slope`, at the point with this index.
    pub fn evaluate(
        &self,
        field: usize,
        slope: Option<usize>,
        time: f64,
        points: &[&[f64]],
        index: usize,
    ) -> Result<f64, ExactError> {
        match self {
            Self::Line { axis, .. } if slope.is_some_and(|along| along != *axis) => Ok(0.0),
            Self::Line { solution, axis } => {
                let Sample { value, slope: slopes } = solution.sample(time, points[*axis][index])?;
                Ok(if slope.is_some() { slopes[field] } else { value[field] })
            }
            Self::Swirl(swirl) => {
                let point = [points[0][index], points[1][index]];
                Ok(slope.map_or_else(|| swirl.value(time, point), |axis| swirl.gradient(time, point)[axis]))
            }
        }
    }

    /// Axis and positions at which a value or a slope jumps.
    pub fn breaks(&self, time: f64) -> (usize, Vec<f64>) {
        match self {
            Self::Line { solution, axis } => (*axis, solution.breaks(time)),
            Self::Swirl(_) => (0, Vec::new()),
        }
    }
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
        ExactEntry::Swirl { period, base, height, centre: [x, y], width } => {
            if setting.lower.len() != 2 {
                return Err(format!("the swirl is a flow in 2 dimensions, not {}", setting.lower.len()));
            }
            let [period, base, height, x, y, width] = setting.numbers([period, base, height, x, y, width])?;
            let swirl = Swirl::new(period, [base, height, width], [x, y]).map_err(text)?;
            return Ok(Solved { solution: Solution::Swirl(swirl), fields: setting.fields.to_vec() });
        }
        ExactEntry::Series { .. } => return series(entry, setting),
    };
    let count = solution.fields();
    if count > setting.fields.len() {
        return Err(format!("the solver gives {count} fields, but the equation has {}", setting.fields.len()));
    }
    let fields = setting.fields[..count].to_vec();
    Ok(Solved { fields, solution: Solution::Line { solution, axis: 0 } })
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
    Ok(Solved { solution: Solution::Line { solution, axis: direction }, fields: vec![field.clone()] })
}
