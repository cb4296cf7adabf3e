//! A harness that knows an exact solution in one dimension.

use gridassay_scheme::{BoundaryData, Case, Fields, Harness, SchemeError, Side};

/// A smooth solution with its derivatives in closed form: sin(k x - w t + phase) + exp(x / 2 - s t).
#[derive(Clone, Copy, Debug)]
pub struct Smooth {
    pub wavenumber: f64,
    pub frequency: f64,
    pub decay: f64,
    pub exponential: f64,
}

impl Smooth {
    pub const GENERIC: Self = Self { wavenumber: 2.3, frequency: 1.9, decay: 0.6, exponential: 1.0 };

    fn phase(&self, x: f64, t: f64) -> f64 {
        self.wavenumber * x - self.frequency * t + 0.7
    }

    fn tail(&self, x: f64, t: f64) -> f64 {
        self.exponential * (0.5 * x - self.decay * t).exp()
    }

    pub fn value(&self, x: f64, t: f64) -> f64 {
        self.phase(x, t).sin() + self.tail(x, t)
    }

    pub fn in_time(&self, x: f64, t: f64) -> f64 {
        -self.frequency * self.phase(x, t).cos() - self.decay * self.tail(x, t)
    }

    pub fn in_space(&self, x: f64, t: f64) -> f64 {
        self.wavenumber * self.phase(x, t).cos() + 0.5 * self.tail(x, t)
    }

    pub fn curvature(&self, x: f64, t: f64) -> f64 {
        -self.wavenumber.powi(2) * self.phase(x, t).sin() + 0.25 * self.tail(x, t)
    }
}

/// Answers for u_t + a u_x (or u u_x) = nu u_xx + S at the positions given.
pub struct ExactHarness {
    pub solution: Smooth,
    pub velocity: f64,
    /// u u_x in place of a u_x.
    pub burgers: bool,
    pub diffusivity: f64,
    /// Without the time derivative.
    pub steady: bool,
    pub positions: Vec<f64>,
    pub ends: [f64; 2],
}

impl ExactHarness {
    pub fn new(case: &Case, solution: Smooth, positions: Vec<f64>) -> Self {
        let parameter = |name: &str| case.scalar(name).unwrap_or(0.0);
        let burgers = case.equation == "burgers";
        let diffusivity = if burgers { parameter("viscosity") } else { parameter("diffusivity") };
        let ends = [case.grid.lower[0], case.grid.upper[0]];
        let velocity = if case.equation == "diffusion" { 0.0 } else { parameter("velocity") };
        Self { solution, velocity, burgers, diffusivity, steady: false, positions, ends }
    }

    fn source_at(&self, x: f64, t: f64) -> f64 {
        let s = self.solution;
        let speed = if self.burgers { s.value(x, t) } else { self.velocity };
        let change = if self.steady { 0.0 } else { s.in_time(x, t) };
        change + speed * s.in_space(x, t) - self.diffusivity * s.curvature(x, t)
    }
}

impl Harness for ExactHarness {
    fn source(&mut self, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let points = points.map_or(&self.positions, |p| &p[0]);
        Ok(vec![points.iter().map(|x| self.source_at(*x, time)).collect()])
    }

    fn boundary(&mut self, time: f64, side: Side, _: usize) -> Result<BoundaryData, SchemeError> {
        let x = self.ends[usize::from(side.is_upper())];
        let outward = if side.is_upper() { 1.0 } else { -1.0 };
        Ok(BoundaryData {
            value: vec![vec![self.solution.value(x, time)]],
            gradient: vec![vec![outward * self.solution.in_space(x, time)]],
            ghost: Vec::new(),
        })
    }

    fn coefficient(&mut self, name: &str, _: f64, _: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        Err(SchemeError::Failed(format!("`{name}` does not vary")))
    }
}
