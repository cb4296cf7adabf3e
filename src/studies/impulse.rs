//! One impulse for each field, time level and value of a cell: every mode at once.

use gridassay_scheme::Fields;

use super::Stop;
use super::cellwise::Cellwise;
use super::linearity::{Levels, step};
use super::setting::Setting;
use crate::analysis::symbol::{Grid, ImpulseResponses};
use crate::host::Session;

/// Runs one step from each unit impulse. A component of the state is (level, field, value of a cell), the last running fastest.
/// The case must be prepared.
///
/// # Errors
/// The scheme refused or failed, or answered what is not finite.
pub fn responses(session: &mut Session, setting: &Setting, cellwise: &Cellwise) -> Result<ImpulseResponses, Stop> {
    let grid = Grid::new(&cellwise.cells).map_err(|error| Stop::Analysis(error.to_string()))?;
    let (count, per_cell) = (grid.count(), cellwise.per_cell());
    let (levels, fields) = (setting.offer.levels, setting.names.len());
    let components = levels * fields * per_cell;
    let component = |index: usize| (index / (fields * per_cell), index / per_cell % fields, index % per_cell);
    // Off the origin, where a special first cell would be mistaken for every cell.
    let at: Vec<usize> = cellwise.cells.iter().map(|n| n / 3).collect();
    let index = |axis: usize| at.get(axis).map_or(0, |i| *i as i64);
    let cell = grid.flat([index(0), index(1), index(2)]);
    let quiet: Fields = vec![vec![0.0; cellwise.len()]; fields];
    let mut values = vec![0.0; components * components * count];
    for input in 0..components {
        let mut state: Levels = vec![quiet.clone(); levels];
        let (level, field, value) = component(input);
        state[level][field][cellwise.index(cell, value)] = 1.0;
        let after = step(session, setting, &state, 0.0)?;
        for output in 0..components {
            let (level, field, value) = component(output);
            let begin = (output * components + input) * count;
            let answer = &after[level][field];
            let to = &mut values[begin..begin + count];
            if per_cell == 1 {
                to.copy_from_slice(answer);
            } else {
                to.iter_mut().enumerate().for_each(|(cell, to)| *to = answer[cellwise.index(cell, value)]);
            }
        }
    }
    ImpulseResponses::new(grid, components, &at, values).map_err(|error| Stop::Analysis(error.to_string()))
}
