//! Linear acoustics: p_t + V p_x + rho c^2 u_x = 0, u_t + V u_x + p_x / rho = 0.

use std::collections::BTreeMap;

use gridassay_scheme::{Case, CellRule, Fields, Harness, Nodes, Offer, Operation, Placement, Position, SchemeError};

use crate::one_step::OneStep;

/// First-order upwind flux splitting: F_{j+1/2} = A+ q_j + A- q_{j+1}, with A split by the signs of its eigenvalues V
/// + c and V - c. Stable for (|V| + c) dt / h <= 1.
///
/// Along the characteristic variables p + rho c u and p - rho c u it is the scalar upwind scheme at the Courant
/// numbers (V + c) dt / h and (V - c) dt / h. Source: Steger & Warming 1981, J. Comput. Phys. 40:263-293 (for linear
/// equations; Courant, Isaacson & Rees 1952).
#[derive(Clone, Debug, Default)]
pub struct AcousticsUpwind {
    medium: Medium,
    flux: Fields,
}

/// The medium and the grid.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Medium {
    /// Density rho.
    pub density: f64,
    /// Speed of sound c.
    pub sound_speed: f64,
    /// Mean flow V.
    pub velocity: f64,
    /// Width of a cell.
    pub spacing: f64,
}

impl Medium {
    /// That of a case; without a mean flow where the case has none.
    ///
    /// # Errors
    /// The case has no density or no speed of sound.
    pub fn of(case: &Case) -> Result<Self, SchemeError> {
        Ok(Self {
            density: case.scalar("density")?,
            sound_speed: case.scalar("sound_speed")?,
            velocity: case.scalar("velocity").unwrap_or(0.0),
            spacing: case.grid.spacing(0),
        })
    }

    /// The upwind flux between two states (p, u).
    fn upwind_flux(&self, left: [f64; 2], right: [f64; 2]) -> [f64; 2] {
        let impedance = self.density * self.sound_speed;
        let along = |speed: f64, sign: f64| {
            let [p, u] = if speed >= 0.0 { left } else { right };
            speed * 0.5 * (p + sign * impedance * u)
        };
        let with = along(self.velocity + self.sound_speed, 1.0);
        let against = along(self.velocity - self.sound_speed, -1.0);
        [with + against, (with - against) / impedance]
    }
}

fn acoustics_offer() -> Offer {
    let positive = [Some(f64::MIN_POSITIVE), None];
    let offer = Offer::new("acoustics", &[Operation::Advance]);
    let mut offer = offer.with_parameter("density", positive).with_parameter("sound_speed", positive);
    offer.fields = Some(vec!["p".to_owned(), "u".to_owned()]);
    offer.cells = CellRule { minimum: 3, multiple: 1 };
    offer
}

impl OneStep for AcousticsUpwind {
    fn name(&self) -> String {
        "acoustics-upwind".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        vec![acoustics_offer()]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.medium = Medium::of(case)?;
        self.flux = vec![vec![0.0; case.grid.cells[0]]; 2];
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
        let ratio = step / self.medium.spacing;
        let n = state[0].len();
        for j in 0..n {
            let next = (j + 1) % n;
            let flux = self.medium.upwind_flux([state[0][j], state[1][j]], [state[0][next], state[1][next]]);
            (self.flux[0][j], self.flux[1][j]) = (flux[0] * ratio, flux[1] * ratio);
        }
        for (u, flux) in state.iter_mut().zip(&self.flux) {
            crate::numerics::flux_form::subtract_divergence(flux, u);
        }
        Ok(())
    }
}

/// Pressure at centres and whole steps, velocity at faces and half a step later: p_j^{n+1} = p_j^n - rho c^2 dt/h
/// (u_{j+1/2} - u_{j-1/2})^{n+1/2}, then u_{j-1/2}^{n+3/2} = u_{j-1/2}^{n+1/2} - dt/(rho h) (p_j - p_{j-1})^{n+1}.
///
/// Second order; stable for C = c dt / h <= 1, exact at C = 1, without damping: sin(omega dt / 2) = C sin(theta / 2).
/// No mean flow. Source: Yee 1966, IEEE Trans. Antennas Propag. 14:302-307 (for Maxwell's equations).
#[derive(Clone, Debug, Default)]
pub struct AcousticsStaggered {
    medium: Medium,
}

impl OneStep for AcousticsStaggered {
    fn name(&self) -> String {
        "acoustics-staggered".to_owned()
    }

    fn offers(&self) -> Vec<Offer> {
        let mut offer = acoustics_offer().with_parameter("velocity", [Some(0.0), Some(0.0)]);
        let positions = [("p".to_owned(), Position::Centre), ("u".to_owned(), Position::XFace)];
        offer.placement = Placement::ByField(BTreeMap::from(positions));
        offer.time_offset = BTreeMap::from([("u".to_owned(), 0.5)]);
        vec![offer]
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.medium = Medium::of(case)?;
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
        let Medium { density, sound_speed, spacing, .. } = self.medium;
        let [p, u] = state else { return Err(SchemeError::Failed("two fields are needed".to_owned())) };
        let n = p.len();
        // Face j is the left one of cell j.
        let compression = density * sound_speed.powi(2) * step / spacing;
        for (j, p) in p.iter_mut().enumerate() {
            *p -= compression * (u[(j + 1) % n] - u[j]);
        }
        let acceleration = step / (density * spacing);
        for (j, u) in u.iter_mut().enumerate() {
            *u -= acceleration * (p[j] - p[(j + n - 1) % n]);
        }
        Ok(())
    }
}
