//! Prescribed values in the stages of a Runge-Kutta method, without loss of order.
//!
//! A Runge-Kutta stage is not the solution at the stage's time: it differs from it at second order in the step.
//! Setting a stage's boundary value to g(t + c_i dt) therefore costs order (Carpenter, Gottlieb, Abarbanel & Don
//! 1995, SIAM J. Sci. Comput. 16:1241-1252). What the stage would be is known, though: for u_t = L u + s with L
//! linear, and w = g' - s at the boundary,
//!
//!   k_i = s(t + c_i dt) + w + c_i dt w' + (A c)_i dt^2 w'' + (A^2 c)_i dt^3 w''' + ...
//!
//! where A is the tableau. The derivatives of g and s at t come from polynomials through their values within the
//! step, which the harness is asked for. Exact up to the fourth order for linear equations, up to the third for
//! others.

use gridassay_scheme::{Harness, SchemeError, Side};

use crate::numerics::runge_kutta::Tableau;
use crate::numerics::weights::finite_difference_weights;

/// A value of the state that the boundary data prescribe.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Prescribed {
    /// The side that it sits on.
    pub side: Side,
    /// Which field.
    pub field: usize,
    /// Which value of the field.
    pub index: usize,
    /// Its coordinate.
    pub position: f64,
}

/// Parts of a step at which the boundary value is sampled: five values give four derivatives to the accuracy that is
/// needed.
const SAMPLES: [f64; 5] = [0.0, 0.25, 0.5, 0.75, 1.0];

/// How prescribed values enter the stages.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum StageValues {
    /// As the method itself would have them, from the derivatives of the data.
    #[default]
    Consistent,
    /// The data at the stage's time: simple, common, and of lower order.
    AtStageTime,
}

/// The rates of one prescribed value, stage by stage, and its value at the end of the step.
pub struct BoundaryRates {
    /// Which value.
    pub node: Prescribed,
    /// k_i for each stage.
    pub rates: Vec<f64>,
    /// The data at the end of the step.
    pub end: f64,
}

impl BoundaryRates {
    /// Asks the harness for the data within the step from `time` to `time + step`.
    ///
    /// # Errors
    /// A callback that failed.
    pub fn new(
        node: Prescribed,
        tableau: &Tableau,
        (time, step): (f64, f64),
        with_source: bool,
        harness: &mut dyn Harness,
    ) -> Result<Self, SchemeError> {
        let mut data = [0.0; 5];
        let mut source = [0.0; 5];
        for ((part, g), s) in SAMPLES.iter().zip(&mut data).zip(&mut source) {
            let at = time + part * step;
            *g = harness.boundary(at, node.side, 0)?.value[node.field][0];
            if with_source {
                *s = harness.source(at, Some(&[vec![node.position]]))?[node.field][0];
            }
        }
        let derivatives = finite_difference_weights(0.0, &SAMPLES, 4);
        // Times step^(order - 1): w[m] = step^m d^m/dt^m (g' - s).
        let derivative = |values: &[f64; 5], order: usize| -> f64 {
            derivatives[order].iter().zip(values).map(|(w, v)| w * v).sum()
        };
        let w: Vec<f64> = (0..4).map(|m| derivative(&data, m + 1) / step - derivative(&source, m)).collect();
        let powers = tableau.powers_of_a();
        let at_stage = stage_interpolation(tableau);
        let rates = (0..tableau.stages())
            .map(|i| {
                let s: f64 = at_stage[i].iter().zip(&source).map(|(l, s)| l * s).sum();
                s + (0..4).map(|m| powers[m][i] * w[m]).sum::<f64>()
            })
            .collect();
        Ok(Self { node, rates, end: data[4] })
    }
}

/// Interpolation from the samples to the time of each stage.
fn stage_interpolation(tableau: &Tableau) -> Vec<Vec<f64>> {
    tableau.c.iter().map(|c| finite_difference_weights(*c, &SAMPLES, 0).remove(0)).collect()
}
