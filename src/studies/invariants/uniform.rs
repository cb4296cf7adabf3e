//! A uniform state stays as it is: on the uniform grid, and on mapped ones (free stream).

use gridassay_scheme::{Fields, Grid, GridKind, Harness, NoCallbacks};

use super::run::{self, History};
use super::states;
use super::tally::{self, Tally};
use super::trial::{self, Prepared, Trial};
use crate::host::Session;
use crate::record::WorstPlace;
use crate::studies::Stop;
use crate::studies::jitter::Jitter;

/// How many different uniform states are tried.
const VARIANTS: usize = 3;

/// Steps: enough to tell a drift from a rounding.
const STEPS: usize = 20;

/// Runs from uniform states of generic values. The case must be prepared.
///
/// # Errors
/// No state can be made for this scheme.
pub fn check(session: &mut Session, trial: &Trial, prepared: &Prepared, tally: &mut Tally) -> Result<(), Stop> {
    for variant in 0..VARIANTS {
        let fields = states::uniform(trial, prepared, variant)?;
        let label = format!("uniform state {}", variant + 1);
        departures(session, trial, label, fields, &mut NoCallbacks, tally);
    }
    Ok(())
}

/// Notes how far a run departs from the state that it should keep.
pub fn departures(
    session: &mut Session,
    trial: &Trial,
    label: String,
    fields: Fields,
    harness: &mut dyn Harness,
    tally: &mut Tally,
) {
    let history = run::follow_with(session, trial, label, fields, STEPS, harness);
    super::note_ends(&[&history], tally);
    note_departure(trial, &history, tally);
}

fn note_departure(trial: &Trial, history: &History, tally: &mut Tally) {
    let first = &history.states[0];
    let size = tally::size(first);
    let mut worst = (0.0, 0, 0, 0);
    for (step, fields) in history.states.iter().enumerate() {
        let judged = |state: &Fields| without_pressure(trial, state);
        let (field, index, difference) = tally::farthest(&judged(fields), &judged(first));
        let relative = if difference == 0.0 { 0.0 } else { difference / size };
        if relative > worst.0 || relative.is_nan() {
            worst = (relative, field, index, step);
        }
    }
    tally.note(worst.0, tally::rounding(history.states.len(), trial.cell_count()), || WorstPlace {
        setting: trial.setting,
        run: history.label.clone(),
        field: trial.names.get(worst.1).cloned(),
        cell: super::cell_of_index(trial, worst.2),
        step: Some(worst.3),
    });
}

/// The state with the pressure of an incompressible flow, which is known only up to a constant, set to zero.
pub fn without_pressure(trial: &Trial, state: &Fields) -> Fields {
    let mut state = state.clone();
    if trial.case.equation == "incompressible" {
        let pressures = trial.names.iter().zip(&mut state).filter(|(name, _)| *name == "p");
        pressures.for_each(|(_, values)| values.fill(0.0));
    }
    state
}

/// Free stream: uniform states on a smoothly curved grid and on a randomly perturbed one.
///
/// Source: Thomas & Lombard 1979, AIAA J. 17:1030-1037 (the geometric conservation law).
///
/// # Errors
/// The scheme does not offer mapped grids, refused or failed.
pub fn free_stream(session: &mut Session, trial: &Trial, seed: u64, tally: &mut Tally) -> Result<(), Stop> {
    if !trial::offers_grid(session.description(), &trial.case.equation, GridKind::Mapped) {
        return Err(Stop::NotOffered("the scheme does not offer mapped grids".to_owned()));
    }
    if trial.case.dimensions < 2 {
        return Ok(());
    }
    for (name, grid) in [("curved", curved(&trial.case.grid)), ("perturbed", perturbed(&trial.case.grid, seed))] {
        let mapped = trial.twin(session, trial.parameters.clone(), grid)?;
        let nodes = session.prepare(&mapped.case, &mut NoCallbacks)?;
        // A uniform state needs no positions: those of the uniform grid have the right number of values.
        let mut flat = mapped.clone();
        flat.case.grid.vertices = None;
        let prepared = flat.prepared(nodes)?;
        for variant in 0..VARIANTS {
            let fields = states::uniform(&mapped, &prepared, variant)?;
            let label = format!("uniform state {} on a {name} grid", variant + 1);
            departures(session, &mapped, label, fields, &mut NoCallbacks, tally);
        }
    }
    Ok(())
}

/// The grid with its corners moved along sines by up to a third of a cell, periodically.
fn curved(grid: &Grid) -> Grid {
    mapped(grid, |axis, at| {
        let d = at.len();
        let wave = |other: usize| (std::f64::consts::TAU * (at[other] + 0.13 * axis as f64)).sin();
        0.33 * wave(axis) * wave((axis + 1) % d)
    })
}

/// The grid with every corner moved at random by up to a fifth of a cell, periodically.
fn perturbed(grid: &Grid, seed: u64) -> Grid {
    let corners: usize = grid.cells.iter().product();
    let mut random = Jitter::new(seed);
    let moves: Vec<Vec<f64>> =
        grid.cells.iter().map(|_| (0..corners).map(|_| 0.2 * random.uniform()).collect()).collect();
    let corner = |at: &[f64]| {
        let pairs = at.iter().zip(&grid.cells).rev();
        pairs.fold(0, |flat, (at, n)| flat * n + (at * *n as f64).round() as usize % n)
    };
    mapped(grid, |axis, at| moves[axis][corner(at)])
}

/// The corners of a uniform grid, each moved by `by(axis, place)` cell widths; a place is in [0, 1] along each direction.
fn mapped(grid: &Grid, by: impl Fn(usize, &[f64]) -> f64) -> Grid {
    let d = grid.dimensions();
    let corners: usize = grid.cells.iter().map(|n| n + 1).product();
    let mut vertices = vec![Vec::with_capacity(corners); d];
    for corner in 0..corners {
        let mut rest = corner;
        let mut at = Vec::with_capacity(d);
        for n in &grid.cells {
            at.push((rest % (n + 1)) as f64 / *n as f64);
            rest /= n + 1;
        }
        for (axis, coordinates) in vertices.iter_mut().enumerate() {
            let straight = grid.lower[axis] + at[axis] * (grid.upper[axis] - grid.lower[axis]);
            coordinates.push(straight + grid.spacing(axis) * by(axis, &at));
        }
    }
    Grid { vertices: Some(vertices), ..grid.clone() }
}

#[cfg(test)]
mod tests {
    //! Trusted: opposite sides of a periodic mapped grid are one another, moved by the domain's length.
    use super::*;

    #[test]
    fn mapped_grids_are_periodic_and_not_straight() {
        let grid = Grid::uniform(&[5, 3], &[-0.5, 0.2], &[1.5, 1.4]);
        for mapped in [curved(&grid), perturbed(&grid, 3)] {
            let [x, y] = &mapped.vertices.unwrap()[..] else { panic!("two dimensions") };
            assert_eq!(x.len(), 24);
            for row in 0..4 {
                assert!((x[6 * row + 5] - x[6 * row] - 2.0).abs() < 1e-14);
                assert!((y[6 * row + 5] - y[6 * row]).abs() < 1e-14);
            }
            for column in 0..6 {
                assert!((y[18 + column] - y[column] - 1.2).abs() < 1e-14);
            }
            assert!((y[7] - y[6]).abs() > 1e-3, "a straight line");
        }
    }
}
