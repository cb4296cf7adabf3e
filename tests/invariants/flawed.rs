//! Small first-order schemes, right or with one mistake: the negative controls of the study.

use gridassay::scheme::{
    Advance, Case, Description, GridKind, Harness, Nodes, Offer, Operation, Scheme, SchemeError, Values,
};

/// What is wrong.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Mistake {
    /// Nothing.
    None,
    /// The flux through the upper face of cell 11 is one per cent too large, for both cells beside it.
    WrongFace,
    /// The same, but only for the cell below the face.
    TornFace,
    /// A part in 10^5 of the state of the request before is added.
    Stale,
    /// A request of several steps takes one too many.
    OneStepTooMany,
    /// Every step leaves the answer one cell too far up.
    Offset,
    /// The flux form is left for u u_x, upwind.
    Advective,
    /// The width in x is used in y.
    WidthOfX,
}

/// Upwind for advection in one or two dimensions, and for Burgers' equation (positive and negative speeds).
pub struct Upwind {
    mistake: Mistake,
    equation: &'static str,
    velocity: Vec<f64>,
    cells: Vec<usize>,
    spacing: Vec<f64>,
    before: Option<Vec<f64>>,
}

impl Upwind {
    pub fn boxed(equation: &'static str, mistake: Mistake) -> Box<dyn Scheme> {
        let (velocity, cells, spacing) = (Vec::new(), Vec::new(), Vec::new());
        Box::new(Self { mistake, equation, velocity, cells, spacing, before: None })
    }

    fn flux(&self, axis: usize, left: f64, right: f64) -> f64 {
        match self.equation {
            "burgers" => (0.5 * left.max(0.0).powi(2)).max(0.5 * right.min(0.0).powi(2)),
            _ => self.velocity[axis] * if self.velocity[axis] > 0.0 { left } else { right },
        }
    }

    fn one_step(&self, step: f64, u: &mut [f64]) {
        let old = u.to_vec();
        let mut stride = 1;
        for (axis, n) in self.cells.iter().copied().enumerate() {
            let width = self.spacing[if self.mistake == Mistake::WidthOfX { 0 } else { axis }];
            for j in 0..old.len() {
                let along = j / stride % n;
                let up = j - along * stride + (along + 1) % n * stride;
                if self.mistake == Mistake::Advective {
                    let down = j - along * stride + (along + n - 1) % n * stride;
                    let slope = if old[j] > 0.0 { old[j] - old[down] } else { old[up] - old[j] };
                    u[j] -= step / width * old[j] * slope;
                    continue;
                }
                let flux = step / width * self.flux(axis, old[j], old[up]);
                let wrong = if along == 11 && axis == 0 { 1.01 } else { 1.0 };
                u[j] -= flux * if matches!(self.mistake, Mistake::WrongFace | Mistake::TornFace) { wrong } else { 1.0 };
                u[up] += flux * if self.mistake == Mistake::WrongFace { wrong } else { 1.0 };
            }
            stride *= n;
        }
        if self.mistake == Mistake::Offset {
            u.rotate_right(1);
        }
    }
}

impl Scheme for Upwind {
    fn describe(&self) -> Description {
        let mut offer = Offer::new(self.equation, &[Operation::Advance]);
        if self.equation == "burgers" {
            offer = offer.with_parameter("viscosity", [Some(0.0), Some(0.0)]);
        } else {
            offer.dimensions = vec![1, 2];
        }
        offer.values = Values::CellAverage;
        Description::new("upwind", "1", vec![offer])
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.velocity = case.vector("velocity").unwrap_or_default().to_vec();
        self.cells.clone_from(&case.grid.cells);
        self.spacing = (0..case.dimensions).map(|axis| case.grid.spacing(axis)).collect();
        Ok(None)
    }

    fn advance(&mut self, request: Advance<'_>, _: &mut dyn Harness) -> Result<(), SchemeError> {
        let u = &mut request.state[0];
        let steps = request.steps + usize::from(self.mistake == Mistake::OneStepTooMany && request.steps > 1);
        for _ in 0..steps {
            self.one_step(request.step, u);
        }
        let stale = self.before.replace(u.clone()).filter(|old| self.mistake == Mistake::Stale && old.len() == u.len());
        if let Some(old) = stale {
            u.iter_mut().zip(old).for_each(|(u, old)| *u += 1e-5 * old);
        }
        Ok(())
    }
}

/// Upwind advection on a mapped grid in two dimensions; `straight`: the lengths of the x faces are taken as on a straight grid.
pub struct Mapped {
    straight: bool,
    case: Option<Case>,
}

impl Mapped {
    pub fn boxed(straight: bool) -> Box<dyn Scheme> {
        Box::new(Self { straight, case: None })
    }
}

impl Scheme for Mapped {
    fn describe(&self) -> Description {
        let mut offer = Offer::new("advection", &[Operation::Advance]);
        offer.dimensions = vec![2];
        offer.values = Values::CellAverage;
        offer.grids = vec![GridKind::Uniform, GridKind::Mapped];
        Description::new("mapped", "1", vec![offer])
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.case = Some(case.clone());
        Ok(None)
    }

    fn advance(&mut self, request: Advance<'_>, _: &mut dyn Harness) -> Result<(), SchemeError> {
        let case = self.case.as_ref().ok_or(SchemeError::NotPrepared)?;
        let (grid, a) = (&case.grid, case.vector("velocity")?);
        let (nx, ny) = (grid.cells[0], grid.cells[1]);
        let corner = |i: usize, j: usize| match &grid.vertices {
            Some(vertices) => [vertices[0][i + (nx + 1) * j], vertices[1][i + (nx + 1) * j]],
            None => [grid.edge(0, i), grid.edge(1, j)],
        };
        for _ in 0..request.steps {
            let old = request.state[0].clone();
            for j in 0..ny {
                for i in 0..nx {
                    let [p, q, r, s] = [corner(i, j), corner(i + 1, j), corner(i + 1, j + 1), corner(i, j + 1)];
                    let area = 0.5 * ((r[0] - p[0]) * (s[1] - q[1]) - (s[0] - q[0]) * (r[1] - p[1]));
                    // Outwards through the lower, right, upper and left face: the integral of the velocity along its normal.
                    let faces = [(p, q, 0, ny - 1), (q, r, 1, 0), (r, s, 0, 1), (s, p, nx - 1, 0)];
                    for (number, (from, to, di, dj)) in faces.into_iter().enumerate() {
                        let through = match number {
                            1 if self.straight => a[0] * grid.spacing(1),
                            3 if self.straight => -a[0] * grid.spacing(1),
                            _ => a[0] * (to[1] - from[1]) - a[1] * (to[0] - from[0]),
                        };
                        let beside = (i + di) % nx + nx * ((j + dj) % ny);
                        let upwind = if through > 0.0 { old[i + nx * j] } else { old[beside] };
                        request.state[0][i + nx * j] -= request.step / area * through * upwind;
                    }
                }
            }
        }
        Ok(())
    }
}
