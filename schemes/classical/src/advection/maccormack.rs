//! MacCormack's predictor and corrector.

use gridassay_scheme::{Case, Fields, Harness, Nodes, Offer, Operation, SchemeError};

use crate::advection::one_step::periodic_advection;
use crate::one_step::OneStep;

/// A forward difference, then the mean with a backward difference of the prediction. For linear advection the
/// Lax-Wendroff scheme: second order; stable for |c| <= 1.
///
/// u*_j = u_j - c (u_{j+1} - u_j); u_j^{n+1} = (u_j + u*_j - c (u*_j - u*_{j-1})) / 2. G = 1 - c^2 (1 - cos theta) -
/// i c sin theta. Source: MacCormack 1969, AIAA paper 69-354.
#[derive(Clone, Debug, Default)]
pub struct MacCormack {
    velocity: f64,
    spacing: f64,
    predicted: Vec<f64>,
}

impl OneStep for MacCormack {
    fn name(&self) -> String {
        "maccormack".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        vec![periodic_advection(&[Operation::Advance], 3)]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.velocity = case.scalar("velocity")?;
        self.spacing = case.grid.spacing(0);
        self.predicted = vec![0.0; case.grid.cells[0]];
        Ok(None)
    }

    fn step(
        &mut self,
        _time: f64,
        step: f64,
        state: &mut [Vec<f64>],
        _earlier: &mut [Fields],
        _harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        let courant = self.velocity * step / self.spacing;
        let u = &mut state[0];
        let n = u.len();
        for (predicted, pair) in self.predicted.iter_mut().zip(u.windows(2)) {
            *predicted = pair[0] - courant * (pair[1] - pair[0]);
        }
        self.predicted[n - 1] = u[n - 1] - courant * (u[0] - u[n - 1]);
        let mut left = self.predicted[n - 1];
        for (value, predicted) in u.iter_mut().zip(&self.predicted) {
            *value += 0.5 * ((predicted - *value) - courant * (predicted - left));
            left = *predicted;
        }
        Ok(())
    }
}
