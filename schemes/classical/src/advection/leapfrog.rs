//! The leapfrog scheme with central differences.

use gridassay_scheme::{Case, Fields, Harness, Nodes, Offer, Operation, SchemeError};

use crate::advection::one_step::periodic_advection;
use crate::one_step::OneStep;

/// u_j^{n+1} = u_j^{n-1} - c (u_{j+1}^n - u_{j-1}^n). Second order, two time levels; stable for |c| < 1, without
/// damping.
///
/// G^2 + 2 i c sin(theta) G - 1 = 0: the physical and the computational root, G = -i c sin theta +- sqrt(1 - c^2
/// sin^2 theta). Source: Courant, Friedrichs & Lewy 1928, Math. Ann. 100:32-74.
#[derive(Clone, Debug, Default)]
pub struct Leapfrog {
    velocity: f64,
    spacing: f64,
}

impl OneStep for Leapfrog {
    fn name(&self) -> String {
        "leapfrog".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        let mut offer = periodic_advection(&[Operation::Advance], 3);
        offer.levels = 2;
        vec![offer]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.velocity = case.scalar("velocity")?;
        self.spacing = case.grid.spacing(0);
        Ok(None)
    }

    fn step(
        &mut self,
        _time: f64,
        step: f64,
        state: &mut [Vec<f64>],
        earlier: &mut [Fields],
        _harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        let courant = self.velocity * step / self.spacing;
        leap(&state[0], &mut earlier[0][0], |[left, _, right], _| -courant * (right - left));
        std::mem::swap(&mut state[0], &mut earlier[0][0]);
        Ok(())
    }
}

/// Adds to each older value what `change` makes of the newer one with its neighbours, and of the older value itself.
pub fn leap(newer: &[f64], older: &mut [f64], change: impl Fn([f64; 3], f64) -> f64) {
    let n = newer.len();
    for (old, window) in older[1..].iter_mut().zip(newer.windows(3)) {
        *old += change([window[0], window[1], window[2]], *old);
    }
    older[0] += change([newer[n - 1], newer[0], newer[1]], older[0]);
    older[n - 1] += change([newer[n - 2], newer[n - 1], newer[0]], older[n - 1]);
}
