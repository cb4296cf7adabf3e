//! First-order upwind differences for u_t + a u_x = S, a >= 0: periodic, or inflow prescribed on the left. The same arithmetic, in
//! the same order, as upwind.py and upwind.c.

use gridassay_scheme::{
    Advance, BoundaryKind, Case, Description, Fields, Harness, Nodes, Offer, Operation, Scheme, SchemeError, Side,
};

/// The scheme with its case.
#[derive(Default)]
pub struct Upwind {
    velocity: f64,
    length: f64,
    periodic: bool,
    source: bool,
}

impl Scheme for Upwind {
    fn describe(&self) -> Description {
        let offer = Offer {
            boundaries: vec![BoundaryKind::Periodic, BoundaryKind::Value, BoundaryKind::None],
            source: true,
            ..Offer::new("advection", &[Operation::Advance, Operation::Rate])
        };
        Description::new("upwind", "1.0", vec![offer.with_parameter("velocity", [Some(0.0), None])])
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.velocity = case.vector("velocity")?[0];
        self.length = case.grid.upper[0] - case.grid.lower[0];
        self.periodic = case.is_periodic(0);
        self.source = case.source;
        Ok(None)
    }

    fn advance(&mut self, request: Advance<'_>, harness: &mut dyn Harness) -> Result<(), SchemeError> {
        for n in 0..request.steps {
            let rate = self.rate(request.time + n as f64 * request.step, request.state, harness)?;
            request.state[0].iter_mut().zip(&rate[0]).for_each(|(value, rate)| *value += request.step * rate);
        }
        Ok(())
    }

    fn rate(&mut self, time: f64, state: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Fields, SchemeError> {
        let u = &state[0];
        let spacing = self.length / u.len() as f64;
        let inflow = match self.periodic {
            true => u[u.len() - 1],
            false => harness.boundary(time, Side::XLower, 0)?.value[0][0],
        };
        let left = |j: usize| if j == 0 { inflow } else { u[j - 1] };
        let mut rate: Vec<f64> = (0..u.len()).map(|j| -(self.velocity * ((u[j] - left(j)) / spacing))).collect();
        if self.source {
            let source = harness.source(time, None)?;
            rate.iter_mut().zip(&source[0]).for_each(|(rate, source)| *rate += source);
        }
        Ok(vec![rate])
    }
}
