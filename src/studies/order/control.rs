//! The control of a refinement study: the scheme as it is, with an error of a known order and size added to what it answers.
//!
//! A study that does not refute the scheme with an error of order p - 1 could not have seen such an error in the scheme itself. With L
//! the extent of the domain in x (where the step alone is refined: the whole time, and the step for h), the error that is added to
//! each field over the whole run is
//!
//! size x (h / L)^order x (size of the solution) x g(x),
//!
//! with g a smooth periodic function of position of modulus about one whose mean is not zero, so that neither symmetry nor damping
//! removes it. It is added in equal parts after each of a few groups of steps, to the rate while that is integrated, or to the steady
//! answer.

use std::f64::consts::TAU;

use gridassay_scheme::Fields;

use super::{by_field, ladder, level};
use crate::claims::OrderRequest;
use crate::host::Session;
use crate::record::{Norms, OrderRecord, Refinement};
use crate::studies::Stop;
use crate::studies::layout::{FieldLayout, Layout};

/// Groups of steps after which the error is added: few, so that a scheme in another process is not asked for every step by itself.
pub(super) const GROUPS: usize = 8;

/// An error to add.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Fault {
    /// The power of h / L with which it falls.
    pub order: f64,
    /// Its size at h = L, relative to the solution.
    pub size: f64,
}

impl Fault {
    /// Its relative size where h / L is `fineness`.
    pub fn relative(&self, fineness: f64) -> f64 {
        self.size * fineness.powf(self.order)
    }
}

/// What a fault adds to the fields of one level over the whole run.
#[derive(Clone, Debug)]
pub(super) struct Addition {
    fields: Fields,
}

impl Addition {
    /// The error on a layout, on whose level h / L is `fineness`; `exact` is the exact solution there, by which its size is set.
    pub fn new(fault: Fault, fineness: f64, layout: &Layout, exact: &Fields) -> Self {
        let zeros: Fields = exact.iter().map(|field| vec![0.0; field.len()]).collect();
        let sizes = level::differences(layout, exact, &zeros);
        // A field that is zero at the end has no size of its own: the error is then taken against one.
        let size = |norms: &Norms| norms.l2.filter(|size| *size > 0.0).unwrap_or(1.0);
        let field = |(layout, norms): (&FieldLayout, &Norms)| {
            let amount = fault.relative(fineness) * size(norms);
            shape(layout).into_iter().map(|g| amount * g).collect()
        };
        Self { fields: layout.fields.iter().zip(&sizes).map(field).collect() }
    }

    /// Adds this share of the whole to a state.
    pub fn add(&self, share: f64, state: &mut Fields) {
        for (field, error) in state.iter_mut().zip(&self.fields) {
            field.iter_mut().zip(error).for_each(|(value, error)| *value += share * error);
        }
    }
}

/// The smooth function g at the values of a field: the mean over the directions of a few generic harmonics about a mean.
fn shape(layout: &FieldLayout) -> Vec<f64> {
    let points = layout.points();
    let ends: Vec<(f64, f64)> = layout.lower.iter().zip(&layout.upper).map(|(low, high)| extent(low, high)).collect();
    let along = |axis: usize, index: usize| {
        let (lower, width) = ends[axis];
        let xi = TAU * (points[axis][index] - lower) / width;
        let phase = 0.7 + axis as f64;
        0.5 + 0.6 * (xi + phase).sin() + 0.3 * (2.0 * xi + 1.9 + phase).cos()
    };
    let dimensions = points.len();
    let at = |index: usize| (0..dimensions).map(|axis| along(axis, index)).sum::<f64>() / dimensions as f64;
    (0..layout.len()).map(at).collect()
}

/// Where a direction begins and how wide it is.
fn extent(lower: &[f64], upper: &[f64]) -> (f64, f64) {
    let low = lower.iter().copied().fold(f64::INFINITY, f64::min);
    let high = upper.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    (low, high - low)
}

/// h / L on a level: what a fault's power is a power of.
pub fn fineness(refine: Refinement, cells: &[usize], steps: Option<usize>) -> f64 {
    match (refine, steps) {
        (Refinement::Time, Some(steps)) => 1.0 / steps as f64,
        _ => 1.0 / cells[0] as f64,
    }
}

/// The ladder of `plain` again, on the scheme with `fault` added. Round-off floors are those of the plain ladder.
///
/// # Errors
/// As the plain study.
pub fn run(
    session: &mut Session,
    request: &OrderRequest,
    plain: &OrderRecord,
    fault: Fault,
) -> Result<OrderRecord, Stop> {
    let mut record = OrderRecord { levels: Vec::new(), observed: Default::default(), ..plain.clone() };
    let mut before: Option<level::Answer> = None;
    for planned in &plain.levels {
        let rung = ladder::Rung { cells: planned.cells.clone(), step: planned.step, steps: planned.steps };
        let answer = level::run(session, request, &rung, level::Variation::Fault(fault))?;
        let mut level = planned.clone();
        level.places.clear();
        level.functionals.clear();
        level.errors = by_field(&answer.names, level::differences(&answer.layout, &answer.state, &answer.exact));
        if request.refine == Refinement::Time {
            level.errors.clear();
            if let (Some(before), Some(last)) = (&before, record.levels.last_mut()) {
                let differences = level::differences(&answer.layout, &before.state, &answer.state);
                last.errors = by_field(&answer.names, differences);
            }
        }
        record.levels.push(level);
        before = Some(answer);
    }
    Ok(record)
}

#[cfg(test)]
mod tests {
    //! Trusted: the formula in the module's documentation, with the norm of the fields from the audited norms.
    use gridassay_scheme::{Grid, Offer, Operation};

    use super::*;
    use crate::analysis::compare::agree;
    use crate::record::Parameters;
    use crate::studies::case;

    fn layout(cells: &[usize]) -> Layout {
        let corners = [vec![-0.3, 0.2], vec![1.7, 0.9]].map(|corner| corner[..cells.len()].to_vec());
        let case = case::periodic("advection", &Parameters::new(), Grid::uniform(cells, &corners[0], &corners[1]));
        Layout::new(&Offer::new("advection", &[Operation::Advance]), &case, &["u".to_owned()], None).unwrap()
    }

    fn added(cells: &[usize], fault: Fault, parts: usize) -> f64 {
        let layout = layout(cells);
        let exact = vec![layout.fields[0].points()[0].iter().map(|x| 3.0 + x).collect::<Vec<f64>>()];
        let addition = Addition::new(fault, 1.0 / cells[0] as f64, &layout, &exact);
        let mut state = exact.clone();
        (0..parts).for_each(|_| addition.add(1.0 / parts as f64, &mut state));
        level::differences(&layout, &state, &exact)[0].l2.unwrap()
    }

    #[test]
    fn an_added_error_falls_with_its_own_order_and_grows_with_its_size() {
        for cells in [[40, 30], [80, 60]] {
            for order in [0.0, 1.0, 3.0] {
                let one = Fault { order, size: 0.01 };
                let fine = added(&cells.map(|n| 2 * n), one, 8);
                // The samples of the same smooth function: the norms differ by the rule's own error alone.
                agree(added(&cells, one, 8) / fine, 2.0_f64.powf(order), 1e-3 * 2.0_f64.powf(order)).unwrap();
                let ten = Fault { order, size: 0.1 };
                // The state is about 4: adding to it rounds by eps of that, a share of eps x 4 / error of what was added.
                let rounding = 160.0 * f64::EPSILON * 4.0 / added(&cells, one, 1);
                agree(added(&cells, ten, 3) / added(&cells, one, 1), 10.0, rounding).unwrap();
            }
        }
    }

    #[test]
    fn the_added_error_is_of_the_size_of_the_solution_at_size_one_and_order_zero() {
        let layout = layout(&[64]);
        let g = shape(&layout.fields[0]);
        let largest = g.iter().fold(0.0_f64, |m, v| m.max(v.abs()));
        let mean = g.iter().sum::<f64>() / 64.0;
        assert!((0.8..1.5).contains(&largest), "{largest}");
        // Whole periods of the harmonics leave the mean.
        agree(mean, 0.5, 1e-14).unwrap();
    }
}
