//! The worst of many runs, and what is allowed by rounding.

use crate::record::{Invariant, InvariantCheck, WorstPlace, finite};
use crate::studies::Stop;

/// Roundings of one step in one cell: a scheme of a few stages adds and multiplies some tens of values.
const ROUNDINGS: f64 = 16.0;

/// What rounding may do in `steps` steps on `cells` cells, relative to the size of the values: eps for each rounding of a step, and for each cell because a
/// sum, or an implicit part that is solved along a line, carries a rounding of every cell.
pub fn rounding(steps: usize, cells: usize) -> f64 {
    f64::EPSILON * steps as f64 * (ROUNDINGS + cells as f64)
}

/// Whether every value is finite.
pub fn is_finite(fields: &[Vec<f64>]) -> bool {
    fields.iter().flatten().all(|value| value.is_finite())
}

/// The largest modulus.
pub fn size(fields: &[Vec<f64>]) -> f64 {
    fields.iter().flatten().fold(0.0, |largest: f64, value| largest.max(value.abs()))
}

/// Where two states differ most: field, index, difference. NaN counts as the largest difference.
pub fn farthest(a: &[Vec<f64>], b: &[Vec<f64>]) -> (usize, usize, f64) {
    let mut worst = (0, 0, 0.0_f64);
    for (field, (a, b)) in a.iter().zip(b).enumerate() {
        for (index, (a, b)) in a.iter().zip(b).enumerate() {
            let difference = (a - b).abs();
            if difference.is_nan() {
                return (field, index, f64::NAN);
            }
            if difference > worst.2 {
                worst = (field, index, difference);
            }
        }
    }
    worst
}

/// Collects the figures of one invariant.
#[derive(Clone, Debug)]
pub struct Tally {
    invariant: Invariant,
    tolerance: f64,
    worst: Option<Worst>,
    runs: usize,
    obstacles: Vec<String>,
    /// What is added to the sentence.
    pub remarks: Vec<String>,
}

#[derive(Clone, Debug)]
struct Worst {
    measured: f64,
    allowed: f64,
    place: WorstPlace,
}

impl Worst {
    /// How many times what is allowed.
    fn excess(&self) -> f64 {
        if self.measured == 0.0 { 0.0 } else { self.measured / self.allowed }
    }
}

impl Tally {
    /// Nothing measured yet; relative figures up to `tolerance` are allowed in any case.
    pub fn new(invariant: Invariant, tolerance: f64) -> Self {
        Self { invariant, tolerance, worst: None, runs: 0, obstacles: Vec::new(), remarks: Vec::new() }
    }

    /// Takes the figure of a run.
    pub fn note(&mut self, measured: f64, allowed: f64, place: impl FnOnce() -> WorstPlace) {
        if !measured.is_finite() {
            let place = place();
            self.obstacle(format!("the figure of the run from {} is not finite", place.run));
            return;
        }
        self.runs += 1;
        let mut found = Worst { measured, allowed: allowed.max(self.tolerance), place: WorstPlace::default() };
        if self.worst.as_ref().is_none_or(|worst| found.excess() > worst.excess()) {
            found.place = place();
            self.worst = Some(found);
        }
    }

    /// Takes down what could not be tried.
    pub fn obstacle(&mut self, sentence: String) {
        if !self.obstacles.contains(&sentence) {
            self.obstacles.push(sentence);
        }
    }

    /// Takes down how a part of the check ended.
    pub fn ended(&mut self, outcome: Result<(), Stop>) {
        if let Err(stop) = outcome {
            self.obstacle(stop.to_string());
        }
    }

    /// The place of the worst figure, where it is more than allowed.
    pub fn violation(&mut self) -> Option<&mut WorstPlace> {
        self.worst.as_mut().filter(|worst| worst.excess() > 1.0).map(|worst| &mut worst.place)
    }

    /// The check as it stands in the record. It holds where everything that was tried stays within what is allowed and nothing that should have been tried could
    /// not be; it does not hold where anything is beyond.
    pub fn finish(self) -> InvariantCheck {
        let violated = self.worst.as_ref().is_some_and(|worst| worst.excess() > 1.0);
        let holds = match (violated, self.obstacles.is_empty() && self.runs > 0) {
            (true, _) => Some(false),
            (false, true) => Some(true),
            (false, false) => None,
        };
        InvariantCheck {
            invariant: self.invariant,
            holds,
            measured: self.worst.as_ref().and_then(|worst| finite(worst.measured)),
            allowed: self.worst.as_ref().and_then(|worst| finite(worst.allowed)),
            allowed_because: self.reason(),
            sentence: self.sentence(holds),
            runs: self.runs,
            worst: self.worst.filter(|worst| worst.measured > 0.0).map(|worst| worst.place),
        }
    }

    fn reason(&self) -> String {
        match &self.worst {
            None => "nothing was measured".to_owned(),
            Some(worst) if worst.allowed == 0.0 => {
                "none: the same question has the same answer to the last bit".to_owned()
            }
            Some(worst) if worst.allowed == self.tolerance => "the claimed tolerance".to_owned(),
            Some(_) => {
                "rounding: eps times the steps times (16 + cells), relative to the size of the values".to_owned()
            }
        }
    }

    fn sentence(&self, holds: Option<bool>) -> String {
        let figure = self.invariant.figure();
        let measured = self.worst.as_ref().map(|worst| {
            let (measured, allowed) = (worst.measured, worst.allowed);
            let at = if measured > 0.0 { describe(&worst.place) } else { String::new() };
            format!("the {figure} is {measured:.3e}{at}; {allowed:.1e} is allowed")
        });
        let runs = format!("over {} comparison(s)", self.runs);
        let mut parts = match (holds, measured) {
            (Some(true), Some(measured)) => vec![format!("held {runs}: {measured}")],
            (Some(false), Some(measured)) => vec![format!("violated: {measured}")],
            (_, Some(measured)) => vec![format!("could not be tried in full; {runs}, {measured}")],
            (_, None) => vec!["could not be tried".to_owned()],
        };
        parts.extend(self.remarks.iter().cloned());
        if holds.is_none() {
            parts.extend(self.obstacles.iter().cloned());
        }
        parts.join("; ")
    }
}

fn describe(place: &WorstPlace) -> String {
    let mut parts = Vec::new();
    if let Some(field) = &place.field {
        parts.push(format!(" in `{field}`"));
    }
    if let Some(cell) = &place.cell {
        let numbers: Vec<String> = cell.iter().map(usize::to_string).collect();
        parts.push(format!(" at cell {}", numbers.join(", ")));
    }
    if let Some(step) = place.step {
        parts.push(format!(" after {step} step(s)"));
    }
    parts.push(format!(" from {} (setting {})", place.run, place.setting));
    parts.concat()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn place() -> WorstPlace {
        WorstPlace { run: "noise".to_owned(), ..WorstPlace::default() }
    }

    #[test]
    fn the_worst_is_the_one_farthest_beyond_what_is_allowed_not_the_largest() {
        let mut tally = Tally::new(Invariant::Mirror, 0.0);
        tally.note(1e-3, 1e-2, place);
        tally.note(1e-9, 1e-12, place);
        let check = tally.finish();
        assert_eq!((check.holds, check.measured, check.runs), (Some(false), Some(1e-9), 2));
    }

    #[test]
    fn nothing_tried_and_nothing_finite_never_hold() {
        assert_eq!(Tally::new(Invariant::Mirror, 0.0).finish().holds, None);
        let mut tally = Tally::new(Invariant::Mirror, 0.0);
        tally.note(0.0, 1e-12, place);
        tally.note(f64::NAN, 1e-12, place);
        let check = tally.finish();
        assert_eq!(check.holds, None);
        assert!(check.sentence.contains("not finite"), "{}", check.sentence);
    }

    #[test]
    fn where_nothing_is_allowed_any_difference_counts_and_none_does_not() {
        let mut tally = Tally::new(Invariant::Repeatability, 0.0);
        tally.note(0.0, 0.0, place);
        assert_eq!(tally.clone().finish().holds, Some(true));
        tally.note(f64::MIN_POSITIVE, 0.0, place);
        assert_eq!(tally.finish().holds, Some(false));
    }

    #[test]
    fn a_difference_that_is_no_number_is_the_farthest() {
        assert!(farthest(&[vec![1.0, f64::NAN]], &[vec![9.0, 0.0]]).2.is_nan());
        assert_eq!(farthest(&[vec![1.0, 2.0]], &[vec![1.5, 4.0]]), (0, 1, 2.0));
    }
}
