//! Mirror symmetry and x-y exchange: a transformed problem must have the transformed answer.

use gridassay_scheme::{Fields, Grid, NoCallbacks, Position, Values};

use super::run::{self, History};
use super::states::{self, Family, Pattern};
use super::tally::{self, Tally};
use super::trial::{Prepared, Trial};
use super::uniform::without_pressure;
use crate::host::Session;
use crate::record::{Parameters, WorstPlace};
use crate::studies::Stop;

/// Steps of both runs.
const STEPS: usize = 12;

/// Mirrors the problem in each direction (in all at once for Burgers' equation, whose one unknown is the speed along all of them) and compares.
///
/// # Errors
/// The mirrored problem is not offered, or the scheme refused or failed.
pub fn mirror(
    session: &mut Session,
    trial: &Trial,
    prepared: &Prepared,
    seed: u64,
    tally: &mut Tally,
) -> Result<(), Stop> {
    let all: Vec<usize> = (0..trial.case.dimensions).collect();
    let sets = if trial.case.equation == "burgers" { vec![all] } else { all.iter().map(|axis| vec![*axis]).collect() };
    for axes in sets {
        let mirror = |fields: &Fields| mirrored(trial, prepared, fields, &axes);
        let parameters = turned(&trial.parameters, &axes);
        let twin = trial.twin(session, parameters, trial.case.grid.clone())?;
        if twin.offer.placement != trial.offer.placement || twin.offer.values != trial.offer.values {
            return Err(Stop::NotOffered("the mirrored problem is offered with other positions only".to_owned()));
        }
        let words: Vec<&str> = axes.iter().map(|axis| ["x", "y", "z"][*axis]).collect();
        compare(
            session,
            trial,
            &twin,
            prepared,
            seed,
            &format!("mirrored in {}", words.join(" and ")),
            &mirror,
            tally,
        )?;
    }
    Ok(())
}

/// Exchanges x and y, with cells, lengths, components and fields, and compares.
///
/// # Errors
/// The exchanged problem is not offered, or the scheme refused or failed.
pub fn exchange(
    session: &mut Session,
    trial: &Trial,
    prepared: &Prepared,
    seed: u64,
    tally: &mut Tally,
) -> Result<(), Stop> {
    if trial.case.dimensions < 2 {
        return Err(Stop::NotOffered("there is no y to exchange with x in one dimension".to_owned()));
    }
    let swap = |values: &[f64]| {
        let mut values = values.to_vec();
        values.swap(0, 1);
        values
    };
    let grid = &trial.case.grid;
    let mut cells = grid.cells.clone();
    cells.swap(0, 1);
    let exchanged_grid = Grid::uniform(&cells, &swap(&grid.lower), &swap(&grid.upper));
    let mut parameters = trial.parameters.clone();
    if let Some(velocity) = parameters.get_mut("velocity") {
        velocity.swap(0, 1);
    }
    let twin = trial.twin(session, parameters, exchanged_grid)?;
    if twin.names != trial.names {
        return Err(Stop::NotOffered("the exchanged problem is offered with other fields only".to_owned()));
    }
    compare(
        session,
        trial,
        &twin,
        prepared,
        seed,
        "with x and y exchanged",
        &|fields| exchanged(trial, prepared, fields),
        tally,
    )
}

/// Runs the problem and its twin from states that correspond, and compares what corresponds.
#[allow(clippy::too_many_arguments)]
fn compare(
    session: &mut Session,
    trial: &Trial,
    twin: &Trial,
    prepared: &Prepared,
    seed: u64,
    words: &str,
    transform: &dyn Fn(&Fields) -> Result<Fields, Stop>,
    tally: &mut Tally,
) -> Result<(), Stop> {
    let patterns: &[Pattern] =
        if trial.case.equation == "incompressible" { &[Pattern::Smooth] } else { &[Pattern::Noise, Pattern::Step] };
    for pattern in patterns {
        let fields = states::state(trial, prepared, *pattern, Family::Mixed, seed)?;
        let begun = transform(&fields)?;
        session.prepare(&trial.case, &mut NoCallbacks)?;
        let plain = run::follow(session, trial, pattern.word().to_owned(), fields, STEPS);
        session.prepare(&twin.case, &mut NoCallbacks)?;
        let label = format!("{} {words}", pattern.word());
        let other = run::follow(session, twin, label, begun, STEPS);
        super::note_ends(&[&plain, &other], tally);
        note_difference(trial, twin, &plain, &other, transform, tally)?;
    }
    Ok(())
}

fn note_difference(
    trial: &Trial,
    twin: &Trial,
    plain: &History,
    other: &History,
    transform: &dyn Fn(&Fields) -> Result<Fields, Stop>,
    tally: &mut Tally,
) -> Result<(), Stop> {
    let mut worst = (0.0, 0, 0, 0);
    // The first step at which it is beyond rounding has the place of the mistake; later ones have spread it.
    for (step, (plain, other)) in plain.states.iter().zip(&other.states).enumerate() {
        let expected = without_pressure(twin, &transform(plain)?);
        let (field, index, difference) = tally::farthest(&expected, &without_pressure(twin, other));
        let relative = if difference == 0.0 { 0.0 } else { difference / tally::size(&expected) };
        let allowed = tally::rounding(step.max(1), trial.cell_count());
        if relative > worst.0 && (worst.3 == 0 || worst.0 <= allowed) {
            worst = (relative, field, index, step);
        }
    }
    tally.note(worst.0, tally::rounding(worst.3.max(1), trial.cell_count()), || WorstPlace {
        setting: trial.setting,
        run: other.label.clone(),
        field: twin.names.get(worst.1).cloned(),
        cell: super::cell_of_index(twin, worst.2),
        step: Some(worst.3),
    });
    Ok(())
}

/// The parameters of the mirrored problem: a velocity turns round, and so does what multiplies an odd derivative.
fn turned(parameters: &Parameters, axes: &[usize]) -> Parameters {
    let mut turned = parameters.clone();
    if let Some(velocity) = turned.get_mut("velocity") {
        axes.iter().for_each(|axis| velocity[*axis] = -velocity[*axis]);
    }
    if let Some(dispersion) = turned.get_mut("dispersion") {
        dispersion.iter_mut().for_each(|mu| *mu = -*mu);
    }
    turned
}

/// Whether the field changes its sign where the directions `axes` are mirrored.
fn is_odd(equation: &str, field: &str, axes: &[usize]) -> bool {
    if equation == "burgers" {
        return true;
    }
    let component = match (equation, field) {
        ("acoustics" | "incompressible", "u") => Some(0),
        ("acoustics" | "incompressible", "v") => Some(1),
        ("acoustics" | "incompressible", "w") => Some(2),
        _ if field.starts_with("momentum_") || field.starts_with("discharge_") => {
            ["_x", "_y", "_z"].iter().position(|end| field.ends_with(end))
        }
        _ => None,
    };
    component.is_some_and(|component| axes.contains(&component))
}

fn mirrored(trial: &Trial, prepared: &Prepared, fields: &Fields, axes: &[usize]) -> Result<Fields, Stop> {
    if let Some(nodes) = prepared.nodes.as_ref().filter(|_| trial.offer.values == Values::CellNodes) {
        let ends = nodes.offsets.iter().zip(nodes.offsets.iter().rev());
        if !ends.clone().all(|(a, b)| (a + b - 1.0).abs() <= 4.0 * f64::EPSILON) {
            return Err(Stop::NotOffered("the nodes of a cell are not symmetric about its middle".to_owned()));
        }
    }
    let lengths: Vec<usize> = prepared.cellwise.cells.iter().map(|n| n * prepared.cellwise.per_direction).collect();
    let field = |(name, values): (&String, &Vec<f64>)| {
        let sign = if is_odd(&trial.case.equation, name, axes) { -1.0 } else { 1.0 };
        let position = trial.offer.placement.of(name);
        let from = |index: usize| {
            let (mut rest, mut stride, mut from) = (index, 1, 0);
            for (axis, n) in lengths.iter().enumerate() {
                let i = rest % n;
                let is_node = Grid::at_nodes(position, axis) && trial.offer.values != Values::CellNodes;
                let i = match (axes.contains(&axis), is_node) {
                    (false, _) => i,
                    (true, true) => (n - i) % n,
                    (true, false) => n - 1 - i,
                };
                from += i * stride;
                stride *= n;
                rest /= n;
            }
            from
        };
        (0..values.len()).map(|index| sign * values[from(index)]).collect()
    };
    Ok(trial.names.iter().zip(fields).map(field).collect())
}

fn exchanged(trial: &Trial, prepared: &Prepared, fields: &Fields) -> Result<Fields, Stop> {
    let per_direction = prepared.cellwise.per_direction;
    let (nx, ny) = (prepared.cellwise.cells[0] * per_direction, prepared.cellwise.cells[1] * per_direction);
    let partner = |name: &String| {
        let other = partner_of(&trial.case.equation, name);
        let place = trial.names.iter().position(|field| *field == other);
        place.ok_or_else(|| Stop::NotOffered(format!("the scheme carries `{name}` but not `{other}`")))
    };
    let swapped = |position: Position| match position {
        Position::XFace => Position::YFace,
        Position::YFace => Position::XFace,
        other => other,
    };
    let field = |name: &String| {
        let from = partner(name)?;
        if trial.offer.placement.of(name) != swapped(trial.offer.placement.of(&trial.names[from])) {
            return Err(Stop::NotOffered(format!("the positions of `{name}` are not those of its partner exchanged")));
        }
        let values = &fields[from];
        // The exchanged array has ny values along its first direction.
        let of = |index: usize| {
            let (i, j, k) = (index % ny, index / ny % nx, index / (nx * ny));
            values[j + nx * i + nx * ny * k]
        };
        Ok((0..values.len()).map(of).collect())
    };
    trial.names.iter().map(field).collect()
}

/// The field that takes the place of `name` where x and y are exchanged.
fn partner_of(equation: &str, name: &str) -> String {
    match (equation, name) {
        ("acoustics" | "incompressible", "u") => "v".to_owned(),
        ("acoustics" | "incompressible", "v") => "u".to_owned(),
        _ => match name.strip_suffix("_x") {
            Some(stem) => format!("{stem}_y"),
            None => name.strip_suffix("_y").map_or_else(|| name.to_owned(), |stem| format!("{stem}_x")),
        },
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_normal_component_is_odd_and_the_others_are_even() {
        assert!(is_odd("acoustics", "v", &[1]) && !is_odd("acoustics", "v", &[0]) && !is_odd("acoustics", "p", &[0]));
        assert!(is_odd("euler", "momentum_x", &[0]) && !is_odd("euler", "energy", &[0]));
        assert!(!is_odd("advection", "u", &[0]) && is_odd("burgers", "u", &[0]));
    }

    #[test]
    fn components_exchange_their_places() {
        assert_eq!(partner_of("incompressible", "u"), "v");
        assert_eq!(partner_of("advection", "u"), "u");
        assert_eq!(partner_of("euler", "momentum_y"), "momentum_x");
        assert_eq!(partner_of("euler", "momentum_z"), "momentum_z");
    }
}
