//! The ladder: which grids, which steps, coarse to fine.

use gridassay_reference::problem::Problem;
use gridassay_scheme::Operation;

use crate::claims::{OrderRequest, StepSize, in_proportion};
use crate::record::Refinement;
use crate::studies::{Stop, speed};

/// One rung as planned.
#[derive(Clone, Debug, PartialEq)]
pub struct Rung {
    /// Cells in each direction.
    pub cells: Vec<usize>,
    /// Size of a step; `None` for a steady problem.
    pub step: Option<f64>,
    /// Number of steps; `None` for a steady problem.
    pub steps: Option<usize>,
}

/// Cells in x of the ladder that the harness chooses. Not powers of two: a mistake that only shows where the cells do not divide by
/// four should show.
const CHOSEN: [usize; 4] = [22, 44, 88, 176];

/// Steps on the coarsest rung where the step alone is refined and no step is given: few, so that the time error stands out.
const COARSEST_STEPS: usize = 10;

/// Rungs where the step alone is refined. Differences of neighbours are one fewer.
const STEP_RUNGS: usize = 6;

/// The most steps that one rung may take.
const MOST_STEPS: usize = 50_000_000;

/// The planned rungs of a request.
///
/// # Errors
/// A step that the problem does not define (a Courant number without a speed), or a number of steps beyond any budget.
pub fn rungs(request: &OrderRequest, steady: bool) -> Result<Vec<Rung>, Stop> {
    let cells = cells(request);
    // Where the scheme or the harness chooses the steps there are none to plan.
    if steady || matches!(request.operation, Some(Operation::March | Operation::Rate)) {
        return Ok(cells.into_iter().map(|cells| Rung { cells, step: None, steps: None }).collect());
    }
    let duration = request.final_time - request.problem.start_time();
    let coarsest = &cells[0];
    let first = steps_on_coarsest(request, coarsest, duration)?;
    let rung = |cells: Vec<usize>, factor: f64| {
        // Whole numbers of steps in exact proportion keep the Courant number the same on all levels.
        let steps = (first as f64 * factor).round();
        if steps > MOST_STEPS as f64 {
            let message = format!(
                "a level of {cells:?} cells would take {steps} steps, more than {MOST_STEPS}; choose a larger step or an earlier final time"
            );
            return Err(Stop::Request(message));
        }
        Ok(Rung { cells, step: Some(duration / steps), steps: Some(steps as usize) })
    };
    if request.refine == Refinement::Time {
        return (0..STEP_RUNGS).map(|k| rung(coarsest.clone(), f64::from(1 << k))).collect();
    }
    let ratio = |level: &Vec<usize>| -> Result<f64, Stop> {
        let asked = (level[0] as f64 / coarsest[0] as f64).powf(request.step_power);
        // A step that the harness chose stays within the problem's own numbers on every level: in proportion to the width the diffusion
        // number would grow, and a right explicit scheme would blow up on the finer ones.
        let most = match request.step {
            None => duration / default_step(&request.problem, level)? / first as f64,
            Some(_) => 0.0,
        };
        Ok(if most > asked * (1.0 + 1e-9) { most } else { asked })
    };
    cells.iter().map(|level| rung(level.clone(), ratio(level)?)).collect()
}

/// The next rung of a ladder that the harness chose itself.
///
/// # Errors
/// As [`rungs`].
pub fn next(request: &OrderRequest, finest: &Rung, steady: bool) -> Result<Rung, Stop> {
    let longer = OrderRequest {
        cells: Some(vec![cells(request)[0].clone(), finest.cells.iter().map(|n| 2 * n).collect()]),
        ..request.clone()
    };
    Ok(rungs(&longer, steady)?.remove(1))
}

fn cells(request: &OrderRequest) -> Vec<Vec<usize>> {
    let dimensions = request.problem.dimensions();
    request.cells.clone().unwrap_or_else(|| CHOSEN.iter().map(|x| in_proportion(*x, dimensions)).collect())
}

fn steps_on_coarsest(request: &OrderRequest, cells: &[usize], duration: f64) -> Result<usize, Stop> {
    let step = match request.step {
        None if request.refine == Refinement::Time => return Ok(COARSEST_STEPS),
        None => default_step(&request.problem, cells)?,
        Some(StepSize::Step(step)) => step,
        Some(StepSize::Courant(courant)) => courant / speed::crossings(&request.problem, cells)?.ok_or_else(|| {
            let name = request.problem.name();
            Stop::Request(format!("`courant` is given, but nothing moves in the problem `{name}`; give `diffusion_number` or `step`"))
        })?,
        Some(StepSize::DiffusionNumber(number)) => number / speed::spreading(&request.problem, cells).ok_or_else(|| {
            let name = request.problem.name();
            Stop::Request(format!("`diffusion_number` is given, but nothing diffuses in the problem `{name}`; give `courant` or `step`"))
        })?,
    };
    // A hair below the whole number: 0.5 / 0.05 must be 10 steps, not 11.
    let steps = (duration / step * (1.0 - 8.0 * f64::EPSILON)).ceil().max(1.0);
    if steps > MOST_STEPS as f64 {
        let message =
            format!("the step {step:e} would take {steps:e} steps on the coarsest level; choose a larger one");
        return Err(Stop::Request(message));
    }
    Ok(steps as usize)
}

/// The problem's own Courant and diffusion number, else 0.4 and 0.2, whichever gives the smaller step: inside the stable range of the
/// usual explicit schemes, and no dyadic fraction, which would hide single-precision truncation.
fn default_step(problem: &Problem, cells: &[usize]) -> Result<f64, Stop> {
    let moving = speed::crossings(problem, cells)?.map(|rate| problem.courant_number().unwrap_or(0.4) / rate);
    let spreading = speed::spreading(problem, cells).map(|rate| problem.diffusion_number().unwrap_or(0.2) / rate);
    moving.into_iter().chain(spreading).reduce(f64::min).ok_or_else(|| {
        Stop::Request(format!("the problem `{}` has neither a speed nor a diffusivity; give `step`", problem.name()))
    })
}
