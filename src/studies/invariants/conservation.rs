//! Conservation: the sum of each conserved field over the cells stays.

use gridassay_scheme::{Fields, Values};

use super::run::{self, History};
use super::states::{self, Family, Pattern};
use super::tally::{self, Tally};
use super::trial::{Prepared, Trial};
use crate::analysis::norms::compensated_sum;
use crate::host::Session;
use crate::record::WorstPlace;
use crate::studies::Stop;

/// The change of the sum of every conserved field in every run, relative to the largest sum of moduli so far.
///
/// Source: Lax & Wendroff 1960, Commun. Pure Appl. Math. 13:217-237. A scheme in advective form may conserve on a periodic grid as well, where its differences
/// telescope: what counts is what is measured.
pub fn check(trial: &Trial, prepared: &Prepared, histories: &[History], tally: &mut Tally) {
    let Some(weights) = weights(trial, prepared) else {
        tally.obstacle(format!(
            "the weights of {} shared intervals of nodes per cell are not known",
            trial.offer.shared_order
        ));
        return;
    };
    for (field, name) in trial.names.iter().enumerate() {
        // The pressure of an incompressible flow is no density of anything.
        if trial.case.equation == "incompressible" && name == "p" {
            continue;
        }
        for history in histories {
            let drift = Drift::of(history, field, &weights[field]);
            let allowed = tally::rounding(history.states.len(), trial.cell_count());
            tally.note(drift.relative, allowed, || WorstPlace {
                setting: trial.setting,
                run: history.label.clone(),
                field: Some(name.clone()),
                cell: None,
                step: Some(drift.step),
            });
        }
    }
}

/// The largest relative change of a sum in a run.
struct Drift {
    relative: f64,
    step: usize,
}

impl Drift {
    fn of(history: &History, field: usize, weights: &[f64]) -> Self {
        let sum = |fields: &Fields| compensated_sum(fields[field].iter().zip(weights).map(|(u, w)| u * w));
        let moduli = |fields: &Fields| compensated_sum(fields[field].iter().zip(weights).map(|(u, w)| (u * w).abs()));
        let before = sum(&history.states[0]);
        let (mut drift, mut scale) = (Self { relative: 0.0, step: 0 }, 0.0_f64);
        for (step, fields) in history.states.iter().enumerate() {
            scale = scale.max(moduli(fields));
            let change = (sum(fields) - before).abs();
            let relative = if change == 0.0 { 0.0 } else { change / scale };
            if relative > drift.relative || relative.is_nan() {
                drift = Self { relative, step };
            }
        }
        drift
    }
}

/// What each value of each field stands for in the sum; `None` where that is not known.
pub fn weights(trial: &Trial, prepared: &Prepared) -> Option<Fields> {
    let measures = || prepared.layout.fields.iter().map(|field| field.measures());
    if trial.offer.shared_order == 1 || prepared.layout.values == Values::CellNodes {
        return Some(measures().collect());
    }
    let along = shared_weights(trial.offer.shared_order)?;
    let factor = |index: usize| {
        let (mut rest, mut factor) = (index, 1.0);
        for n in &prepared.cellwise.cells {
            let length = n * trial.offer.shared_order;
            factor *= along[rest % length % trial.offer.shared_order];
            rest /= length;
        }
        factor
    };
    Some(measures().map(|field| field.iter().enumerate().map(|(index, w)| w * factor(index)).collect()).collect())
}

/// The integrals of the nodal functions of degree 2 and 3 over all cells that they live in, relative to equal shares: the closed Newton-Cotes weights, the
/// corner counted from both sides.
fn shared_weights(order: usize) -> Option<Vec<f64>> {
    match order {
        2 => Some(vec![2.0 / 3.0, 4.0 / 3.0]),
        3 => Some(vec![0.75, 1.125, 1.125]),
        _ => None,
    }
}

/// Where a violation comes from: a spike in each cell in turn, one step each. The cell whose content changes the sum most is named, and how many do.
///
/// # Errors
/// The scheme refused or failed.
pub fn locate(
    session: &mut Session,
    trial: &Trial,
    prepared: &Prepared,
    field: &str,
    tally: &mut Tally,
) -> Result<(), Stop> {
    let (Some(weights), Some(index)) = (weights(trial, prepared), trial.names.iter().position(|name| name == field))
    else {
        return Ok(());
    };
    let base = states::state(trial, prepared, Pattern::Smooth, Family::NonNegative, 1)?;
    let height = 0.1 * tally::size(&base[index..=index]);
    let mut change = |fields: Fields| {
        let history = run::follow(session, trial, "a spike".to_owned(), fields, 1);
        let sum = |fields: &Fields| compensated_sum(fields[index].iter().zip(&weights[index]).map(|(u, w)| u * w));
        history.states.get(1).map_or(f64::NAN, |after| sum(after) - sum(&history.states[0]))
    };
    let quiet = change(base.clone());
    let mut changes = Vec::with_capacity(trial.cell_count());
    for cell in 0..trial.cell_count() {
        let mut fields = base.clone();
        (0..prepared.cellwise.per_cell())
            .for_each(|value| fields[index][prepared.cellwise.index(cell, value)] += height);
        changes.push((change(fields) - quiet).abs());
    }
    let (worst, largest) =
        changes.iter().copied().enumerate().fold((0, 0.0), |best, (cell, c)| if c > best.1 { (cell, c) } else { best });
    let measure = weights[index].iter().sum::<f64>() / trial.cell_count() as f64;
    // Rounding of the sum itself is no trace of a cell.
    if largest <= 1e3 * f64::EPSILON * height * measure * trial.cell_count() as f64 {
        return Ok(());
    }
    let touched = changes.iter().filter(|change| **change > 0.01 * largest).count();
    if let Some(place) = tally.violation() {
        place.cell = Some(super::cell_of(&trial.case.grid.cells, worst));
    }
    let total = trial.cell_count();
    tally.remarks.push(format!("in one step the content of {touched} of {total} cells counts towards it"));
    Ok(())
}

#[cfg(test)]
mod tests {
    //! Trusted: integrals of the nodal functions of one cell in closed form.
    use super::*;

    #[test]
    fn shared_weights_are_those_of_simpson_and_of_the_three_eighths_rule() {
        // Shares of a cell of width 1 with p intervals: Simpson 1/6 4/6 1/6, three eighths 1/8 3/8 3/8 1/8; an equal share is 1/p.
        for (order, corner, inner) in [(2, 1.0 / 3.0, 2.0 / 3.0), (3, 0.25, 0.375)] {
            let weights = shared_weights(order).unwrap();
            assert!((weights[0] / order as f64 - corner).abs() < 4.0 * f64::EPSILON);
            assert!(weights[1..].iter().all(|w| (w / order as f64 - inner).abs() < 4.0 * f64::EPSILON));
        }
        assert_eq!(shared_weights(4), None);
    }

    #[test]
    fn a_drift_is_relative_to_the_moduli_and_tells_its_step() {
        let states = vec![vec![vec![1.0, -1.0]], vec![vec![1.0, -1.0]], vec![vec![1.5, -1.0]]];
        let history = History { label: String::new(), family: Family::Mixed, states, blew_up: None, stopped: None };
        let drift = Drift::of(&history, 0, &[2.0, 2.0]);
        assert_eq!((drift.relative, drift.step), (0.2, 2));
    }
}
