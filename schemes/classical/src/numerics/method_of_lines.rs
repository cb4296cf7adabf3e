//! A semi-discrete space operator and a Runge-Kutta method, put together.

use gridassay_scheme::{Case, Fields, Harness, Nodes, Offer, SchemeError, Solution};

use crate::numerics::boundary_rates::{BoundaryRates, Prescribed, StageValues};
use crate::numerics::runge_kutta::{Tableau, add_scaled};
use crate::one_step::OneStep;

/// A discretisation in space: what `rate` answers.
pub trait Space: Send {
    /// First part of the scheme's name; the Runge-Kutta method's is the second.
    fn name(&self) -> String;

    /// What is offered, with its operations.
    fn offers(&self) -> Vec<Offer>;

    /// Gets ready for a case within the offers.
    ///
    /// # Errors
    /// A case that cannot be set up.
    fn prepare(&mut self, case: &Case) -> Result<Option<Nodes>, SchemeError>;

    /// Writes the right-hand side without the source into `rate`, whose arrays are as long as those of the state.
    ///
    /// # Errors
    /// A callback that failed.
    fn rate(
        &mut self,
        time: f64,
        state: &[Vec<f64>],
        rate: &mut [Vec<f64>],
        harness: &mut dyn Harness,
    ) -> Result<(), SchemeError>;

    /// The values that boundary data prescribe in the case at hand.
    fn prescribed(&self) -> &[Prescribed] {
        &[]
    }

    /// The steady solution.
    ///
    /// # Errors
    /// A callback that failed, a singular problem, or no such operation.
    fn solve(&mut self, _guess: &[Vec<f64>], _harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        Err(crate::one_step::not_offered(gridassay_scheme::Operation::Solve))
    }
}

/// A space operator with a Runge-Kutta method. Sources are asked at the stages' times.
pub struct MethodOfLines<S> {
    /// The discretisation in space.
    pub space: S,
    /// The discretisation in time.
    pub tableau: Tableau,
    /// How prescribed values enter the stages.
    pub stage_values: StageValues,
    /// The scheme's name, where it is not made of the names of both parts.
    pub name: Option<&'static str>,
    source: bool,
    stage: Fields,
    slopes: Vec<Fields>,
}

impl<S: Space> MethodOfLines<S> {
    /// The two put together.
    pub fn new(space: S, tableau: Tableau) -> Self {
        let stage_values = StageValues::default();
        Self { space, tableau, stage_values, name: None, source: false, stage: Vec::new(), slopes: Vec::new() }
    }

    /// The same under a name of its own.
    pub fn named(mut self, name: &'static str) -> Self {
        self.name = Some(name);
        self
    }

    /// Makes the work arrays as long as those of the state; does nothing from the second step on.
    fn fit_work_arrays(&mut self, state: &[Vec<f64>]) {
        let fits = self.stage.len() == state.len() && self.stage.iter().zip(state).all(|(a, b)| a.len() == b.len());
        if !fits || self.slopes.len() != self.tableau.stages() {
            self.stage = state.to_vec();
            self.slopes = vec![state.to_vec(); self.tableau.stages()];
        }
    }

    fn stage_rate(&mut self, i: usize, time: f64, harness: &mut dyn Harness) -> Result<(), SchemeError> {
        self.space.rate(time, &self.stage, &mut self.slopes[i], harness)?;
        if self.source {
            add_scaled(&mut self.slopes[i], 1.0, &harness.source(time, None)?);
        }
        Ok(())
    }
}

impl<S: Space> OneStep for MethodOfLines<S> {
    fn name(&self) -> String {
        self.name.map_or_else(|| format!("{}-{}", self.space.name(), self.tableau.name), str::to_owned)
    }

    fn offers(&self) -> Vec<Offer> {
        self.space.offers()
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.source = case.source;
        self.stage.clear();
        self.space.prepare(case)
    }

    fn step(
        &mut self,
        time: f64,
        step: f64,
        state: &mut [Vec<f64>],
        _earlier: &mut [Fields],
        harness: &mut dyn Harness,
    ) -> Result<(), SchemeError> {
        self.fit_work_arrays(state);
        let tableau = self.tableau;
        let nodes: Vec<Prescribed> = self.space.prescribed().to_vec();
        let boundary = nodes
            .iter()
            .map(|node| BoundaryRates::new(*node, &tableau, (time, step), self.source, harness))
            .collect::<Result<Vec<_>, _>>()?;
        for i in 0..tableau.stages() {
            let stage_time = time + tableau.c[i] * step;
            for (stage, u) in self.stage.iter_mut().zip(state.iter()) {
                stage.copy_from_slice(u);
            }
            for (a, slope) in tableau.a[i].iter().zip(&self.slopes) {
                add_scaled(&mut self.stage, a * step, slope);
            }
            if self.stage_values == StageValues::AtStageTime {
                for node in &nodes {
                    self.stage[node.field][node.index] =
                        harness.boundary(stage_time, node.side, 0)?.value[node.field][0];
                }
            }
            self.stage_rate(i, stage_time, harness)?;
            for BoundaryRates { node, rates, .. } in &boundary {
                self.slopes[i][node.field][node.index] = rates[i];
            }
        }
        for (b, slope) in tableau.b.iter().zip(&self.slopes) {
            add_scaled(state, b * step, slope);
        }
        for BoundaryRates { node, end, .. } in boundary {
            state[node.field][node.index] = end;
        }
        Ok(())
    }

    fn rate(&mut self, time: f64, state: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Fields, SchemeError> {
        let mut rate = state.to_vec();
        self.space.rate(time, state, &mut rate, harness)?;
        if self.source {
            add_scaled(&mut rate, 1.0, &harness.source(time, None)?);
        }
        Ok(rate)
    }

    fn solve(&mut self, guess: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        self.space.solve(guess, harness)
    }
}
