//! Lax-Wendroff differences for u_t + a u_x = 0 on a periodic grid.

use gridassay_scheme::{
    Advance, Case, CellRule, Description, Harness, Nodes, Offer, Operation, Scheme, SchemeError, export_scheme,
};

#[derive(Default)]
struct LaxWendroff {
    velocity: f64,
    spacing: f64,
}

impl Scheme for LaxWendroff {
    fn describe(&self) -> Description {
        let cells = CellRule { minimum: 3, multiple: 1 };
        let offer = Offer { cells, ..Offer::new("advection", &[Operation::Advance]) };
        Description::new("lax-wendroff in Rust", "1.0", vec![offer])
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.velocity = case.vector("velocity")?[0];
        self.spacing = case.grid.spacing(0);
        Ok(None)
    }

    fn advance(&mut self, request: Advance<'_>, _: &mut dyn Harness) -> Result<(), SchemeError> {
        let c = self.velocity * request.step / self.spacing;
        let u = &mut request.state[0];
        let n = u.len();
        for _ in 0..request.steps {
            // Through the lower face of each cell.
            let flux: Vec<f64> = (0..n)
                .map(|j| (u[j], u[(j + n - 1) % n]))
                .map(|(right, left)| 0.5 * c * (right + left) - 0.5 * c * c * (right - left))
                .collect();
            (0..n).for_each(|j| u[j] -= flux[(j + 1) % n] - flux[j]);
        }
        Ok(())
    }
}

export_scheme!(LaxWendroff::default());
