//! Total variation, bounds and positivity of every state of every run.

use gridassay_scheme::{Fields, Values};

use super::run::History;
use super::states::Family;
use super::tally::{self, Tally};
use super::trial::{Prepared, Trial};
use crate::record::WorstPlace;

/// Scalar equations whose solutions keep their bounds and do not gain variation.
pub fn is_monotone(equation: &str) -> bool {
    matches!(equation, "advection" | "diffusion" | "advection_diffusion" | "burgers")
}

/// The total variation of a periodic scalar does not increase in any step.
///
/// TV(u) = sum over j of |u_{j+1} - u_j|, of cell means where a cell has several values. Source: Harten 1983, J. Comput. Phys. 49:357-393.
pub fn total_variation(trial: &Trial, prepared: &Prepared, histories: &[History], tally: &mut Tally) {
    for history in histories {
        let means: Vec<Vec<f64>> = history.states.iter().map(|fields| means(trial, prepared, fields)).collect();
        let variations: Vec<f64> = means.iter().map(|u| variation(u)).collect();
        let mut worst = (0.0, 0);
        for (step, pair) in variations.windows(2).enumerate() {
            let increase = (pair[1] - pair[0]) / variations[0];
            if increase > worst.0 || increase.is_nan() {
                worst = (increase, step + 1);
            }
        }
        // Each of the differences carries the roundings of one step.
        let values = means[0].len();
        let size = tally::size(&means) / variations[0];
        let allowed = values as f64 * tally::rounding(1, values) * size;
        tally.note(worst.0, allowed, || WorstPlace {
            cell: means.get(worst.1).map(|after| vec![new_extremum(&means[worst.1 - usize::from(worst.1 > 0)], after)]),
            ..place(trial, history, worst.1)
        });
    }
}

fn variation(u: &[f64]) -> f64 {
    let next = |j: usize| u[(j + 1) % u.len()];
    (0..u.len()).map(|j| (next(j) - u[j]).abs()).sum()
}

/// The cell that rose or fell farthest beyond itself and its neighbours of the step before.
fn new_extremum(before: &[f64], after: &[f64]) -> usize {
    let n = before.len();
    let beyond = |j: usize| {
        let around = [before[(j + n - 1) % n], before[j], before[(j + 1) % n]];
        let (low, high) = around.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), u| (l.min(*u), h.max(*u)));
        (after[j] - high).max(low - after[j])
    };
    (0..n).max_by(|a, b| beyond(*a).total_cmp(&beyond(*b))).unwrap_or(0)
}

/// Every value stays between the least and the greatest of the beginning.
pub fn bounds(trial: &Trial, prepared: &Prepared, histories: &[History], tally: &mut Tally) {
    for history in histories {
        let first = means(trial, prepared, &history.states[0]);
        let low = first.iter().copied().fold(f64::INFINITY, f64::min);
        let high = first.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        let worst = farthest_beyond(trial, prepared, history, &|u| (u - high).max(low - u));
        let allowed = tally::rounding(history.states.len(), 0) * low.abs().max(high.abs()) / (high - low);
        note_beyond(trial, history, worst, high - low, allowed, tally);
    }
}

/// What is not negative at the start stays so: scalars that begin from zero upwards.
pub fn positivity(trial: &Trial, prepared: &Prepared, histories: &[History], tally: &mut Tally) {
    for history in histories.iter().filter(|history| history.family == Family::NonNegative) {
        let high = means(trial, prepared, &history.states[0]).into_iter().fold(0.0, f64::max);
        let worst = farthest_beyond(trial, prepared, history, &|u| -u);
        note_beyond(trial, history, worst, high, tally::rounding(history.states.len(), 0), tally);
    }
}

/// Depth, or density and pressure, stay positive.
pub fn positivity_of_system(trial: &Trial, histories: &[History], tally: &mut Tally) {
    let named = |name: &str| trial.names.iter().position(|field| field == name);
    let quantities: Vec<(&str, Quantity)> = match (named("depth"), named("density"), named("energy")) {
        (Some(depth), _, _) => vec![("depth", Box::new(move |fields: &Fields, j| fields[depth][j]))],
        (_, Some(density), Some(energy)) => {
            let momenta: Vec<usize> =
                (0..trial.names.len()).filter(|k| trial.names[*k].starts_with("momentum")).collect();
            // The internal energy has the sign of the pressure.
            let internal = move |fields: &Fields, j: usize| {
                let square: f64 = momenta.iter().map(|k| fields[*k][j].powi(2)).sum();
                fields[energy][j] - 0.5 * square / fields[density][j]
            };
            vec![
                ("density", Box::new(move |fields: &Fields, j| fields[density][j])),
                ("internal energy", Box::new(internal)),
            ]
        }
        _ => Vec::new(),
    };
    for (name, quantity) in &quantities {
        for history in histories {
            let cells = 0..history.states[0][0].len();
            let high = cells.clone().map(|j| quantity(&history.states[0], j)).fold(0.0, f64::max);
            let mut worst = Beyond { by: f64::NEG_INFINITY, cell: 0, step: 0 };
            for (step, fields) in history.states.iter().enumerate() {
                cells.clone().for_each(|j| worst.take(-quantity(fields, j), j, step));
            }
            let allowed = tally::rounding(history.states.len(), 0);
            tally.note(worst.by.max(0.0) / high, allowed, || WorstPlace {
                field: Some((*name).to_owned()),
                cell: Some(super::cell_of(&trial.case.grid.cells, worst.cell)),
                ..place(trial, history, worst.step)
            });
        }
    }
}

type Quantity = Box<dyn Fn(&Fields, usize) -> f64>;

/// How far a value lies beyond a bound, and where.
struct Beyond {
    by: f64,
    cell: usize,
    step: usize,
}

impl Beyond {
    fn take(&mut self, by: f64, cell: usize, step: usize) {
        if by > self.by || by.is_nan() {
            *self = Self { by, cell, step };
        }
    }
}

fn farthest_beyond(trial: &Trial, prepared: &Prepared, history: &History, beyond: &dyn Fn(f64) -> f64) -> Beyond {
    let mut worst = Beyond { by: f64::NEG_INFINITY, cell: 0, step: 0 };
    for (step, fields) in history.states.iter().enumerate() {
        let values = means(trial, prepared, fields);
        values.iter().enumerate().for_each(|(cell, u)| worst.take(beyond(*u), cell, step));
    }
    worst
}

fn note_beyond(trial: &Trial, history: &History, worst: Beyond, scale: f64, allowed: f64, tally: &mut Tally) {
    // Nodes that cells share are not numbered by cells.
    let cells = (trial.offer.shared_order == 1).then(|| super::cell_of(&trial.case.grid.cells, worst.cell));
    let measured = worst.by.max(0.0) / scale;
    tally.note(measured, allowed, || WorstPlace { cell: cells, ..place(trial, history, worst.step) });
}

fn place(trial: &Trial, history: &History, step: usize) -> WorstPlace {
    WorstPlace {
        setting: trial.setting,
        run: history.label.clone(),
        field: trial.names.first().cloned(),
        cell: None,
        step: Some(step),
    }
}

/// The first field as it is judged: its cell means where a cell has several values, since no scheme of that kind bounds all of them; else the values.
fn means(trial: &Trial, prepared: &Prepared, fields: &Fields) -> Vec<f64> {
    let cellwise = &prepared.cellwise;
    let Some(nodes) = prepared.nodes.as_ref().filter(|_| trial.offer.values == Values::CellNodes) else {
        return fields[0].clone();
    };
    let weight = |value: usize| {
        let (mut rest, mut weight) = (value, 1.0);
        for _ in &cellwise.cells {
            weight *= nodes.weights[rest % cellwise.per_direction];
            rest /= cellwise.per_direction;
        }
        weight
    };
    let mean = |cell: usize| {
        (0..cellwise.per_cell()).map(|value| weight(value) * fields[0][cellwise.index(cell, value)]).sum()
    };
    (0..cellwise.count()).map(mean).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_variation_of_a_periodic_spike_is_twice_its_height() {
        assert_eq!(variation(&[0.0, 0.0, 3.0, 0.0]), 6.0);
        assert_eq!(variation(&[3.0, 0.0, 0.0]), 6.0);
    }

    #[test]
    fn the_new_extremum_is_where_a_value_left_its_neighbourhood() {
        assert_eq!(new_extremum(&[0.0, 0.0, 1.0, 1.0], &[0.0, -0.2, 1.1, 1.0]), 1);
    }
}
