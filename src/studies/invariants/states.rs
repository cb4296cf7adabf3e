//! States to begin from: patterns between 0 and 1, and what an equation's fields make of them.
//!
//! Limiters need steps of several widths, a bad cell needs a signal that passes it, a switch needs both signs: so there are a spike, a step, a staircase and
//! noise, on a background that is zero and on one that is not.

use gridassay_scheme::{Fields, Values, equation_fields};

use super::trial::{Prepared, Trial};
use crate::record::Parameters;
use crate::studies::Stop;
use crate::studies::jitter::Jitter;

/// The largest modulus of a scalar in any state.
pub const LARGEST_SCALAR: f64 = 1.3;
/// The largest modulus of a flow velocity component in any state.
pub const LARGEST_SPEED: f64 = 0.7;

/// What a pattern looks like.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Pattern {
    /// One cell.
    Spike,
    /// A third of the domain.
    Step,
    /// Steps of one to five cells.
    Staircase,
    /// Independent values.
    Noise,
    /// One period and more of a sine.
    Smooth,
}

impl Pattern {
    /// All of them.
    pub const ALL: [Self; 5] = [Self::Spike, Self::Step, Self::Staircase, Self::Noise, Self::Smooth];

    /// The word.
    pub fn word(self) -> &'static str {
        match self {
            Self::Spike => "a spike",
            Self::Step => "a step",
            Self::Staircase => "a staircase",
            Self::Noise => "noise",
            Self::Smooth => "a sine",
        }
    }
}

/// Which values the pattern stands for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Family {
    /// Scalars of both signs; systems away from zero.
    Mixed,
    /// Scalars from zero upwards; systems with density, depth and pressure over a range of one to six.
    NonNegative,
}

impl Family {
    /// How far density, depth and pressure range; see [`largest`] and [`smallest`].
    pub fn strength(self) -> f64 {
        match self {
            Self::Mixed => 1.0,
            Self::NonNegative => 4.0,
        }
    }
}

/// The largest depth, density or pressure in a state of `strength`.
pub fn largest(strength: f64) -> f64 {
    1.2 + 0.3 * strength
}

/// The smallest one.
pub fn smallest(strength: f64) -> f64 {
    1.2 / (1.0 + 0.5 * strength)
}

/// A state of `pattern`; `seed` governs noise and where things stand.
///
/// # Errors
/// Fields that the equation does not have.
pub fn state(trial: &Trial, prepared: &Prepared, pattern: Pattern, family: Family, seed: u64) -> Result<Fields, Stop> {
    if trial.case.equation == "incompressible" {
        return solenoidal(trial, prepared);
    }
    let mut random = Jitter::new(seed);
    let shift = (random.bits() % 1000) as usize;
    let count = primitives(trial);
    let cellwise = &prepared.cellwise;
    let place = Place { cells: &cellwise.cells, per_direction: cellwise.per_direction, shift };
    let values: Vec<Vec<f64>> = (0..count)
        .map(|k| (0..cellwise.len()).map(|index| place.value(pattern, k, index, &mut random)).collect())
        .collect();
    compose(trial, family, &|k, index| values[k][index], cellwise.len())
}

/// The same state everywhere; `variant` selects which.
///
/// # Errors
/// Fields that the equation does not have.
pub fn uniform(trial: &Trial, prepared: &Prepared, variant: usize) -> Result<Fields, Stop> {
    const LEVELS: [f64; 7] = [0.37, 0.81, 0.13, 0.59, 0.93, 0.05, 0.71];
    compose(trial, Family::Mixed, &|k, _| LEVELS[(2 * variant + k) % 7], prepared.cellwise.len())
}

/// Number of quantities that have a pattern of their own: one for a scalar, velocity components and one or two more for a system.
fn primitives(trial: &Trial) -> usize {
    trial.case.dimensions + 2
}

/// The positions of a pattern.
struct Place<'a> {
    cells: &'a [usize],
    per_direction: usize,
    shift: usize,
}

impl Place<'_> {
    /// The value of quantity `k` at the flat `index`, between 0 and 1.
    fn value(&self, pattern: Pattern, k: usize, index: usize, random: &mut Jitter) -> f64 {
        if pattern == Pattern::Noise {
            return 0.5 + 0.5 * random.uniform();
        }
        let (mut rest, d) = (index, self.cells.len() as f64);
        let mut along = Vec::with_capacity(self.cells.len());
        for n in self.cells {
            let length = n * self.per_direction;
            // Quantities stand at different places, and nothing stands at the first cell alone.
            along.push(((rest % length / self.per_direction + self.shift + 3 * k) % n, *n));
            rest /= length;
        }
        let mean = |of: &dyn Fn(usize, usize) -> f64| along.iter().map(|(i, n)| of(*i, *n)).sum::<f64>() / d;
        let all =
            |holds: &dyn Fn(usize, usize) -> bool| if along.iter().all(|(i, n)| holds(*i, *n)) { 1.0 } else { 0.0 };
        match pattern {
            Pattern::Spike => all(&|i, _| i == 0),
            Pattern::Step => all(&|i, n| 3 * i < n.max(3)),
            Pattern::Staircase => mean(&|i, _| stair(i)),
            Pattern::Smooth => mean(&|i, n| {
                let turns = (1 + k % 2) as f64;
                0.5 + 0.5 * (std::f64::consts::TAU * turns * i as f64 / n as f64 + 0.4).sin()
            }),
            Pattern::Noise => unreachable!("answered above"),
        }
    }
}

/// Heights in plateaus of 1, 2, 3, 4, 5, 1, ... cells, up and down.
fn stair(cell: usize) -> f64 {
    const HEIGHTS: [f64; 7] = [0.0, 1.0, 0.2, 0.7, 0.05, 0.9, 0.45];
    let (mut begin, mut plateau) = (0, 0);
    loop {
        begin += 1 + plateau % 5;
        if cell < begin {
            return HEIGHTS[plateau % HEIGHTS.len()];
        }
        plateau += 1;
    }
}

/// The fields from quantities between 0 and 1.
fn compose(trial: &Trial, family: Family, phi: &dyn Fn(usize, usize) -> f64, length: usize) -> Result<Fields, Stop> {
    let (equation, d) = (trial.case.equation.as_str(), trial.case.dimensions);
    let known = equation_fields(equation, d).unwrap_or_default();
    let place = |name: &String| {
        known.iter().position(|field| field == name).ok_or_else(|| {
            Stop::NotOffered(format!("the scheme carries a field `{name}`, of which `{equation}` says nothing"))
        })
    };
    let places = trial.names.iter().map(place).collect::<Result<Vec<_>, _>>()?;
    let mut fields: Fields = vec![Vec::with_capacity(length); places.len()];
    for index in 0..length {
        let all = at_one_place(equation, &trial.parameters, &trial.signs, family, &|k| phi(k, index));
        fields.iter_mut().zip(&places).for_each(|(field, place)| field.push(all[*place]));
    }
    Ok(fields)
}

/// The equation's fields at one place, in the contract's order.
fn at_one_place(
    equation: &str,
    parameters: &Parameters,
    signs: &[f64],
    family: Family,
    phi: &dyn Fn(usize) -> f64,
) -> Vec<f64> {
    let between = |k: usize, low: f64, high: f64| low + (high - low) * phi(k);
    let strength = family.strength();
    let positive = |k: usize| between(k, smallest(strength), largest(strength));
    let velocity = || -> Vec<f64> {
        let component = |(axis, sign): (usize, &f64)| sign * between(2 + axis, -0.2, LARGEST_SPEED);
        signs.iter().enumerate().map(component).collect()
    };
    match equation {
        "acoustics" => (0..=signs.len()).map(|k| between(k, -0.7, 1.1)).collect(),
        "shallow_water" => {
            let depth = positive(0);
            std::iter::once(depth).chain(velocity().into_iter().map(|v| depth * v)).collect()
        }
        "euler" | "navier_stokes" => {
            let (density, pressure, velocity) = (positive(0), positive(1), velocity());
            let square: f64 = velocity.iter().map(|v| v * v).sum();
            let energy = pressure / (parameters["gamma"][0] - 1.0) + 0.5 * density * square;
            let momentum = velocity.into_iter().map(|v| density * v);
            std::iter::once(density).chain(momentum).chain([energy]).collect()
        }
        _ => match family {
            Family::NonNegative => vec![between(0, 0.0, LARGEST_SCALAR)],
            // The sign of a scalar is that of its own speed in Burgers' equation, and nothing in a linear one.
            Family::Mixed if equation == "burgers" => vec![signs[0] * between(0, -0.7, 1.1)],
            Family::Mixed => vec![between(0, -0.7, 1.1)],
        },
    }
}

/// A velocity without divergence: vortices on a mean flow; the pressure is left at zero for the scheme to find.
fn solenoidal(trial: &Trial, prepared: &Prepared) -> Result<Fields, Stop> {
    let grid = &trial.case.grid;
    let length = |axis: usize| grid.upper[axis] - grid.lower[axis];
    if prepared.layout.values == Values::CellNodes {
        return Err(Stop::NotOffered("vortices on several values per cell are not tried".to_owned()));
    }
    let field = |(name, layout): (&String, &crate::studies::layout::FieldLayout)| {
        let points = layout.points();
        let angle = |axis: usize, index: usize| {
            let along = points.get(axis).map_or(0.0, |along| (along[index] - grid.lower[axis]) / length(axis));
            std::f64::consts::TAU * along + 0.4
        };
        let value = |index: usize| {
            let (a, b) = (angle(0, index), angle(1, index));
            let mean = |axis: usize| 0.2 * trial.signs[axis];
            match name.as_str() {
                "u" if trial.case.dimensions == 1 => mean(0),
                "u" => mean(0) + 0.25 * length(0) * a.sin() * b.cos(),
                "v" => mean(1) - 0.25 * length(1) * a.cos() * b.sin(),
                "w" => mean(2) + 0.2 * a.sin(),
                _ => 0.0,
            }
        };
        (0..layout.len()).map(value).collect()
    };
    Ok(trial.names.iter().zip(&prepared.layout.fields).map(field).collect())
}
