//! The check that every problem passes when it is read.

use std::collections::HashMap;

use super::error::{AXES, At, EvaluationError, ProblemError};
use super::patch::{Patch, Residual};
use super::{BoundaryKind, Problem, Quantity};

/// Random points at which values, and of which the first few at which residuals are looked at.
const POINTS: usize = 64;
const RESIDUAL_POINTS: usize = 8;
/// Half width of a patch beside the domain. Two sizes: what differs between them is not resolved.
const REACHES: [f64; 2] = [0.01, 0.004];
/// Misfit beside the largest term that is refused. The differentiation itself is good to 1e-8 or better where it is resolved.
const TOLERANCE: f64 = 1e-6;

/// Checks a problem; the first fault is told.
pub(super) fn check(problem: &Problem) -> Result<(), ProblemError> {
    let mut random = Random(0x9E37_79B9_7F4A_7C15);
    let points: Vec<At> = (0..POINTS).map(|_| random_point(problem, &mut random)).collect();
    for at in &points {
        in_range(problem, at)?;
    }
    for at in points.iter().take(RESIDUAL_POINTS) {
        periodic(problem, at)?;
    }
    residuals(problem, &points[..RESIDUAL_POINTS])
}

/// A fixed sequence: the same file has the same verdict every time (splitmix64, Steele, Lea & Flood 2014).
struct Random(u64);

impl Random {
    fn unit(&mut self) -> f64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        ((z ^ (z >> 31)) >> 11) as f64 / (1u64 << 53) as f64
    }
}

/// A point of the domain and the time range, far enough inside for a patch.
fn random_point(problem: &Problem, random: &mut Random) -> At {
    let margin = 2.0 * REACHES[0];
    let mut between =
        |lower: f64, upper: f64| lower + (upper - lower) * (margin + (1.0 - 2.0 * margin) * random.unit());
    let point = (0..problem.dimensions()).map(|axis| between(problem.lower()[axis], problem.upper()[axis])).collect();
    At { time: between(problem.start_time(), problem.final_time()), point }
}

fn value(problem: &Problem, quantity: Quantity<'_>, at: &At) -> Result<f64, ProblemError> {
    let points: Vec<&[f64]> = at.point.iter().map(std::slice::from_ref).collect();
    let mut out = [0.0];
    problem.evaluate(quantity, at.time, &points, &mut out).map_err(|error| outside(problem, error))?;
    Ok(out[0])
}

fn outside(problem: &Problem, error: EvaluationError) -> ProblemError {
    let place = problem.inner.solution_place(0);
    match error {
        EvaluationError::NotFinite { quantity, value, at, .. } => {
            ProblemError::Domain { place, at, quantity, value, requirement: "finite" }
        }
        other => ProblemError::Entry { place, entry: "solution".into(), reason: other.to_string() },
    }
}

/// Values, derivatives, sources and coefficients are finite; densities, pressures, depths are positive.
fn in_range(problem: &Problem, at: &At) -> Result<(), ProblemError> {
    let mut fields = Vec::new();
    for field in 0..problem.fields().len() {
        fields.push(value(problem, Quantity::Value(field), at)?);
        value(problem, Quantity::Source(field), at)?;
        for axis in 0..problem.dimensions() {
            value(problem, Quantity::Derivative { field, axis }, at)?;
        }
    }
    for (name, formulas) in &problem.inner.coefficients {
        for component in 0..formulas.len() {
            let value = value(problem, Quantity::Coefficient { name, component }, at)?;
            if let Err(reason) = problem.inner.component_accepts(name, value) {
                let place = problem.inner.entry_place(name);
                let reason = format!("at {at}: {reason}");
                return Err(ProblemError::Entry { place, entry: name.clone(), reason });
            }
        }
    }
    for (quantity, value, holds, requirement) in physical(problem, &fields) {
        if !holds {
            let place = problem.inner.solution_place(0);
            return Err(ProblemError::Domain { place, at: at.clone(), quantity, value, requirement });
        }
    }
    Ok(())
}

/// What the equation needs beside finite values: quantity, value, whether it is in range, the range.
fn physical(problem: &Problem, fields: &[f64]) -> Vec<(String, f64, bool, &'static str)> {
    match problem.equation() {
        "euler" | "navier_stokes" => {
            let density = fields[0];
            let energy = fields[fields.len() - 1];
            let momentum: f64 = fields[1..fields.len() - 1].iter().map(|momentum| momentum * momentum).sum();
            let internal = energy - 0.5 * momentum / density;
            vec![
                ("the density".into(), density, density > 0.0, "positive"),
                ("the internal energy per volume".into(), internal, internal > 0.0, "positive, as the pressure is"),
            ]
        }
        "shallow_water" => vec![("the depth".into(), fields[0], fields[0] >= 0.0, "zero or positive")],
        _ => Vec::new(),
    }
}

/// Both ends of each periodic direction have the same values.
fn periodic(problem: &Problem, at: &At) -> Result<(), ProblemError> {
    for (axis, name) in AXES.into_iter().enumerate().take(problem.dimensions()) {
        if problem.boundaries()[axis][0] != BoundaryKind::Periodic {
            continue;
        }
        for field in 0..problem.fields().len() {
            let end = |coordinate: f64| {
                let mut end = at.clone();
                end.point[axis] = coordinate;
                end
            };
            let (low, high) = (end(problem.lower()[axis]), end(problem.upper()[axis]));
            let (lower, upper) =
                (value(problem, Quantity::Value(field), &low)?, value(problem, Quantity::Value(field), &high)?);
            // 1e-9: phases such as 2 pi x / L lose a few digits over long domains, and images of a pulse are cut at round-off.
            if (lower - upper).abs() > 1e-9 * (1e-3 + lower.abs().max(upper.abs())) {
                let (field, axis) = (problem.fields()[field].clone(), name);
                let place = problem.inner.domain_place();
                return Err(ProblemError::NotPeriodic { place, field, axis, lower, upper, at: low });
            }
        }
    }
    Ok(())
}

/// The residual of every equation equals its source wherever a patch resolves it.
fn residuals(problem: &Problem, points: &[At]) -> Result<(), ProblemError> {
    for at in points {
        let mut found = Vec::new();
        for reach in REACHES {
            match on_patch(problem, at, reach) {
                Ok(residuals) => found.push(residuals),
                // A patch may reach to where a weak solution has no value.
                Err(_) if problem.is_weak() => {}
                Err(error) => return Err(error),
            }
        }
        let [coarse, fine] = &found[..] else { continue };
        for (field, (coarse, fine)) in coarse.iter().zip(fine).enumerate() {
            let source = value(problem, Quantity::Source(field), at)?;
            solenoidal(problem, field, source, fine.scale, at)?;
            // A dry bed has no velocity: the equation of the discharge has no meaning there.
            let dry = problem.is_weak() && coarse.value.is_nan() && fine.value.is_nan();
            if let Some((misfit, scale)) = misfit(coarse, fine, source).filter(|_| !dry) {
                return Err(ProblemError::Misfit {
                    place: problem.inner.solution_place(field),
                    field: problem.fields()[field].clone(),
                    at: at.clone(),
                    misfit,
                    scale,
                });
            }
        }
    }
    Ok(())
}

/// A scheme cannot be given a source of mass: the velocity of an incompressible flow must be free of divergence.
fn solenoidal(problem: &Problem, field: usize, source: f64, scale: f64, at: &At) -> Result<(), ProblemError> {
    let is_mass = problem.equation() == "incompressible" && field + 1 == problem.fields().len();
    if !is_mass || source.abs() <= 1e-9 * scale {
        return Ok(());
    }
    let reason = format!(
        "the velocity is not free of divergence: div u = {source:.3e} at {at}; derive it from a stream function or a vector potential"
    );
    Err(ProblemError::Entry { place: problem.inner.solution_place(0), entry: "solution".into(), reason })
}

/// Misfit and scale, where the misfit is not within what the patches leave uncertain.
fn misfit(coarse: &Residual, fine: &Residual, source: f64) -> Option<(f64, f64)> {
    let scale = coarse.scale.max(fine.scale).max(source.abs());
    let nearest = if (coarse.value - source).abs() < (fine.value - source).abs() { coarse } else { fine };
    let misfit = nearest.value - source;
    let doubt = 10.0 * (coarse.value - fine.value).abs() + 100.0 * nearest.noise;
    let fits = misfit.abs() <= TOLERANCE * scale + doubt;
    (!fits).then_some((misfit, scale))
}

/// Residuals by field in the middle of a patch around a point.
fn on_patch(problem: &Problem, at: &At, reach: f64) -> Result<Vec<Residual>, ProblemError> {
    let dimensions = problem.dimensions();
    let extent = |axis: usize| problem.upper()[axis] - problem.lower()[axis];
    let mut directions: Vec<(String, f64, f64)> =
        (0..dimensions).map(|axis| (AXES[axis].to_string(), at.point[axis], reach * extent(axis))).collect();
    if !problem.is_steady() {
        directions.push(("t".into(), at.time, reach * (problem.final_time() - problem.start_time())));
    }
    let patch = Patch::new(&directions, if directions.len() > 2 { 7 } else { 9 });
    let coordinates: Vec<Vec<f64>> = (0..directions.len()).map(|direction| patch.coordinates(direction)).collect();
    let given = given(problem, &coordinates)?;
    let residual = |residual| {
        patch.residual(residual, &given).map_err(|name| {
            let place = problem.inner.solution_place(0);
            ProblemError::Entry { place, entry: "residual".into(), reason: format!("{name} has no value") }
        })
    };
    problem.inner.residuals.iter().map(residual).collect()
}

/// Arrays of the fields and parameters over a patch.
fn given(problem: &Problem, coordinates: &[Vec<f64>]) -> Result<HashMap<String, Vec<f64>>, ProblemError> {
    let dimensions = problem.dimensions();
    let size = coordinates[0].len();
    let array = |quantity: Quantity<'_>| -> Result<Vec<f64>, ProblemError> {
        let mut values = vec![0.0; size];
        let points: Vec<&[f64]> = coordinates[..dimensions].iter().map(Vec::as_slice).collect();
        // Points of one time lie side by side: time is the slowest direction.
        let times = coordinates.get(dimensions);
        let mut begin = 0;
        while begin < size {
            let time = times.map_or(0.0, |times| times[begin]);
            let same = |index: &usize| times.is_none_or(|times| times[*index] == time);
            let end = (begin..size).take_while(same).last().map_or(size, |last| last + 1);
            let slices: Vec<&[f64]> = points.iter().map(|axis| &axis[begin..end]).collect();
            let evaluated = problem.evaluate(quantity, time, &slices, &mut values[begin..end]);
            evaluated.map_err(|error| outside(problem, error))?;
            begin = end;
        }
        Ok(values)
    };
    let mut given = HashMap::new();
    for (field, name) in problem.fields().iter().enumerate() {
        given.insert(name.clone(), array(Quantity::Value(field))?);
    }
    for parameter in problem.inner.equation.parameters() {
        for (component, name) in parameter.component_names(dimensions).into_iter().enumerate() {
            let values = match problem.parameters().get(&parameter.name) {
                Some(constants) => vec![constants[component]; size],
                None => array(Quantity::Coefficient { name: &parameter.name, component })?,
            };
            given.insert(name, values);
        }
    }
    Ok(given)
}
