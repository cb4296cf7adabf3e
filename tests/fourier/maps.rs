//! The plane of Courant and diffusion numbers.
//!
//! Trusted: closed forms. Central differences with explicit Euler: c^2 <= 2 r <= 1 (Hindmarsh, Gresho & Griffiths 1984, Int. J. Numer. Meth.
//! Fluids 4:853-897; the inequality from memory). Upwind advection with central diffusion: c + 2 r <= 1 (from memory).

use gridassay::claims::StabilityRequest;
use gridassay::host::Session;
use gridassay::record::{MapRow, Parameters, Study};
use gridassay::scheme::{Advance, Case, Description, Harness, Nodes, Offer, Operation, Scheme, SchemeError};
use gridassay::studies::stability;

use super::common::agree;

/// Explicit Euler with central diffusion, and with central or upwind advection.
struct Explicit {
    upwind: bool,
    velocity: f64,
    diffusivity: f64,
    spacing: f64,
}

impl Explicit {
    fn new(upwind: bool) -> Box<Self> {
        Box::new(Self { upwind, velocity: 0.0, diffusivity: 0.0, spacing: 1.0 })
    }
}

impl Scheme for Explicit {
    fn describe(&self) -> Description {
        Description::new("explicit", "1", vec![Offer::new("advection_diffusion", &[Operation::Advance])])
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        (self.velocity, self.diffusivity) = (case.vector("velocity")?[0], case.scalar("diffusivity")?);
        self.spacing = case.grid.spacing(0);
        Ok(None)
    }

    fn advance(&mut self, request: Advance<'_>, _: &mut dyn Harness) -> Result<(), SchemeError> {
        let c = self.velocity * request.step / self.spacing;
        let r = self.diffusivity * request.step / (self.spacing * self.spacing);
        let extra = if self.upwind { 0.5 * c.abs() } else { 0.0 };
        for _ in 0..request.steps {
            let old = request.state[0].clone();
            let n = old.len();
            for j in 0..n {
                let (before, after) = (old[(j + n - 1) % n], old[(j + 1) % n]);
                request.state[0][j] =
                    old[j] - 0.5 * c * (after - before) + (r + extra) * (after - 2.0 * old[j] + before);
            }
        }
        Ok(())
    }
}

fn map(upwind: bool) -> Vec<MapRow> {
    let request = StabilityRequest {
        equation: "advection_diffusion".to_owned(),
        parameters: Parameters::new(),
        number: None,
        held: None,
        scan_to: 2.0,
        integrator: None,
        map_to: Some(0.6),
    };
    let made = stability::run(&mut Session::in_process(Explicit::new(upwind)), &request, 7);
    assert_eq!(made.stopped, None);
    match made.study {
        Study::Stability(record) => record.map,
        _ => unreachable!("a study of stable steps was made"),
    }
}

#[test]
fn the_boundary_of_the_plane_is_the_closed_form() {
    for (upwind, limit) in [(false, (|r| (2.0 * r).sqrt()) as fn(f64) -> f64), (true, |r| 1.0 - 2.0 * r)] {
        let rows = map(upwind);
        assert!(rows.len() >= 20);
        for row in rows {
            let r = row.diffusion_number;
            let expected = if r > 0.5 { 0.0 } else { limit(r) };
            let found = row.stable.first().filter(|[from, _]| *from == 0.0).map_or(0.0, |[_, to]| *to);
            // At r = 0 and r = 1/2 the region ends, where rounding decides.
            if r > 1e-9 && (r - 0.5).abs() > 1e-9 {
                agree(&format!("upwind {upwind}, r = {r}"), found, expected, 1e-6);
            }
            assert!(row.stable.len() <= 1, "{row:?}");
        }
    }
}
