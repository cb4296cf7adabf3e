//! How fast things move and spread in a problem: what Courant and diffusion numbers are made of.

use gridassay_reference::problem::{Problem, Quantity};

use super::Stop;
use super::layout::spread;

/// Samples in each direction where a speed varies in space.
const SAMPLES: usize = 33;

/// Cells that the fastest signal crosses in a unit of time, max over directions of |a_d| / h_d; Courant number = this x dt. `None` where nothing moves.
///
/// # Errors
/// The initial state cannot be evaluated.
pub fn crossings(problem: &Problem, cells: &[usize]) -> Result<Option<f64>, Stop> {
    let speeds = speeds(problem)?;
    let rate = speeds.iter().zip(widths(problem, cells)).map(|(speed, width)| speed / width).fold(0.0, f64::max);
    Ok((rate > 0.0).then_some(rate))
}

/// max over directions of nu / h_d^2; diffusion number = this x dt. `None` where nothing diffuses.
pub fn spreading(problem: &Problem, cells: &[usize]) -> Option<f64> {
    let parameter = |name: &str| problem.parameters().get(name).map(|values| values[0]);
    let diffusivity = match problem.equation() {
        "diffusion" | "advection_diffusion" => {
            parameter("diffusivity").or_else(|| largest_coefficient(problem, "diffusivity"))
        }
        "burgers" | "incompressible" => parameter("viscosity"),
        _ => None,
    }?;
    let rate = widths(problem, cells).map(|width| diffusivity / (width * width)).fold(0.0, f64::max);
    (rate > 0.0).then_some(rate)
}

/// max |a| of the constant-velocity equations, and the fastest signal of the others at the start, in each direction.
fn speeds(problem: &Problem) -> Result<Vec<f64>, Stop> {
    let dimensions = problem.dimensions();
    let parameter = |name: &str| problem.parameters().get(name).map_or(0.0, |values| values[0]);
    let velocity = |axis: usize| match problem.parameters().get("velocity") {
        Some(values) => values.get(axis).copied().unwrap_or(0.0).abs(),
        None => largest_component(problem, axis),
    };
    Ok(match problem.equation() {
        "advection" | "advection_diffusion" => (0..dimensions).map(velocity).collect(),
        "acoustics" => (0..dimensions).map(|axis| velocity(axis) + parameter("sound_speed")).collect(),
        "burgers" => {
            let largest = largest(&initial(problem)?[0]);
            vec![largest; dimensions]
        }
        "incompressible" => {
            let fields = initial(problem)?;
            (0..dimensions).map(|axis| largest(&fields[axis])).collect()
        }
        "shallow_water" => gas_like(&initial(problem)?, dimensions, |depth, _, _| parameter("gravity") * depth),
        "euler" | "navier_stokes" => {
            let gamma = parameter("gamma");
            gas_like(&initial(problem)?, dimensions, |density, kinetic, energy| {
                gamma * (gamma - 1.0) * (energy.unwrap_or(0.0) - kinetic) / density
            })
        }
        _ => vec![0.0; dimensions],
    })
}

/// max over the samples of |m_d / mass| + signal speed, in each direction; `squared_signal` from (mass, kinetic energy, energy).
fn gas_like(fields: &[Vec<f64>], dimensions: usize, squared_signal: impl Fn(f64, f64, Option<f64>) -> f64) -> Vec<f64> {
    let at = |sample: usize, axis: usize| {
        let mass = fields[0][sample];
        let momenta = (0..dimensions).map(|d| fields[1 + d][sample]);
        let kinetic = 0.5 * momenta.map(|m| m * m).sum::<f64>() / mass;
        let energy = fields.get(1 + dimensions).map(|energy| energy[sample]);
        (fields[1 + axis][sample] / mass).abs() + squared_signal(mass, kinetic, energy).max(0.0).sqrt()
    };
    (0..dimensions).map(|axis| (0..fields[0].len()).map(|sample| at(sample, axis)).fold(0.0, f64::max)).collect()
}

fn initial(problem: &Problem) -> Result<Vec<Vec<f64>>, Stop> {
    let points = samples(problem);
    let slices: Vec<&[f64]> = points.iter().map(Vec::as_slice).collect();
    let field = |index| {
        let mut out = vec![0.0; slices[0].len()];
        problem.evaluate(Quantity::Value(index), problem.start_time(), &slices, &mut out)?;
        Ok(out)
    };
    (0..problem.fields().len()).map(field).collect()
}

fn largest_component(problem: &Problem, axis: usize) -> f64 {
    sampled_coefficient(problem, "velocity", axis)
}

fn largest_coefficient(problem: &Problem, name: &str) -> Option<f64> {
    problem.coefficients().iter().any(|known| known == name).then(|| sampled_coefficient(problem, name, 0))
}

/// The largest modulus of a varying parameter over the domain and over the run.
fn sampled_coefficient(problem: &Problem, name: &str, component: usize) -> f64 {
    let points = samples(problem);
    let slices: Vec<&[f64]> = points.iter().map(Vec::as_slice).collect();
    let mut out = vec![0.0; slices[0].len()];
    let (start, end) = (problem.start_time(), problem.final_time());
    let times = (0..SAMPLES).map(|k| start + (end - start) * k as f64 / (SAMPLES - 1) as f64);
    let at = |time| match problem.evaluate(Quantity::Coefficient { name, component }, time, &slices, &mut out) {
        Ok(()) => largest(&out),
        Err(_) => 0.0,
    };
    times.map(at).fold(0.0, f64::max)
}

fn samples(problem: &Problem) -> Vec<Vec<f64>> {
    let along = |axis: usize| {
        let (lower, upper) = (problem.lower()[axis], problem.upper()[axis]);
        (0..SAMPLES).map(|i| lower + (upper - lower) * (i as f64 + 0.5) / SAMPLES as f64).collect()
    };
    spread(&(0..problem.dimensions()).map(along).collect::<Vec<_>>())
}

fn widths<'a>(problem: &'a Problem, cells: &'a [usize]) -> impl Iterator<Item = f64> + 'a {
    cells.iter().enumerate().map(|(axis, cells)| (problem.upper()[axis] - problem.lower()[axis]) / *cells as f64)
}

fn largest(values: &[f64]) -> f64 {
    values.iter().fold(0.0, |largest, value| f64::max(largest, value.abs()))
}
