//! First-order shallow water in one dimension over a bed: with hydrostatic reconstruction, or with a centred slope of the bed beside an ordinary flux.

use gridassay::scheme::{Advance, Case, Description, Harness, Nodes, Offer, Operation, Scheme, SchemeError, Values};

pub struct Water {
    balanced: bool,
    gravity: f64,
    spacing: f64,
    varies: bool,
    bed: Vec<f64>,
}

impl Water {
    pub fn boxed(balanced: bool) -> Box<dyn Scheme> {
        Box::new(Self { balanced, gravity: 1.0, spacing: 1.0, varies: false, bed: Vec::new() })
    }

    fn flux(&self, left: [f64; 2], right: [f64; 2]) -> [f64; 2] {
        let physical = |[h, q]: [f64; 2]| [q, q * q / h + 0.5 * self.gravity * h * h];
        let speed = |[h, q]: [f64; 2]| (q / h).abs() + (self.gravity * h).sqrt();
        let (fl, fr, s) = (physical(left), physical(right), speed(left).max(speed(right)));
        [0, 1].map(|k| 0.5 * (fl[k] + fr[k]) - 0.5 * s * (right[k] - left[k]))
    }

    /// The flux as the left and as the right cell of a face feel it.
    ///
    /// Source: Audusse, Bouchut, Bristeau, Klein & Perthame 2004, SIAM J. Sci. Comput. 25:2050-2065.
    fn at_face(&self, left: [f64; 2], right: [f64; 2], beds: [f64; 2]) -> [[f64; 2]; 2] {
        if !self.balanced {
            return [self.flux(left, right); 2];
        }
        let top = beds[0].max(beds[1]);
        let cut = |[h, q]: [f64; 2], bed: f64| {
            let depth = (h + bed - top).max(0.0);
            [depth, q / h * depth]
        };
        let (l, r) = (cut(left, beds[0]), cut(right, beds[1]));
        let flux = self.flux(l, r);
        let lift = |h: f64, cut: f64| 0.5 * self.gravity * (h * h - cut * cut);
        [[flux[0], flux[1] + lift(left[0], l[0])], [flux[0], flux[1] + lift(right[0], r[0])]]
    }
}

impl Scheme for Water {
    fn describe(&self) -> Description {
        let mut offer = Offer::new("shallow_water", &[Operation::Advance]);
        offer.values = Values::CellAverage;
        offer.coefficients = vec!["bed".to_owned()];
        Description::new("water", "1", vec![offer])
    }

    fn prepare(&mut self, case: &Case, harness: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.gravity = case.scalar("gravity")?;
        self.spacing = case.grid.spacing(0);
        self.varies = !case.coefficients.is_empty();
        self.bed = vec![0.0; case.grid.cells[0]];
        if self.varies {
            self.bed = harness.coefficient("bed", 0.0, None)?.swap_remove(0);
        }
        Ok(None)
    }

    fn advance(&mut self, request: Advance<'_>, _: &mut dyn Harness) -> Result<(), SchemeError> {
        let [depth, discharge] = request.state else { return Err(SchemeError::Failed("two fields".to_owned())) };
        let n = depth.len();
        let ratio = request.step / self.spacing;
        for _ in 0..request.steps {
            let old: Vec<[f64; 2]> = depth.iter().zip(discharge.iter()).map(|(h, q)| [*h, *q]).collect();
            for j in 0..n {
                let up = (j + 1) % n;
                let [below, above] = self.at_face(old[j], old[up], [self.bed[j], self.bed[up]]);
                depth[j] -= ratio * below[0];
                discharge[j] -= ratio * below[1];
                depth[up] += ratio * above[0];
                discharge[up] += ratio * above[1];
            }
            if !self.balanced {
                for j in 0..n {
                    let slope = 0.5 * (self.bed[(j + 1) % n] - self.bed[(j + n - 1) % n]);
                    discharge[j] -= ratio * self.gravity * old[j][0] * slope;
                }
            }
        }
        Ok(())
    }
}
