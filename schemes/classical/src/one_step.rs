//! What all schemes share: the loop over steps, the check of a case against the offers, the answer before any case.

use gridassay_scheme::{
    Advance, Case, Description, Fields, Harness, Nodes, Offer, Operation, Scheme, SchemeError, Solution,
};

/// A scheme as one step; [`Repeated`] makes a [`Scheme`] of it.
///
/// `start` is called once before each run of steps, with their size: the place for factorisations.
pub trait OneStep: Send {
    /// The scheme's name.
    fn name(&self) -> String;

    /// What the scheme offers.
    fn offers(&self) -> Vec<Offer>;

    /// Gets ready for a case that lies within the offers.
    ///
    /// # Errors
    /// A case that cannot be set up.
    fn prepare(&mut self, case: &Case, harness: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError>;

    /// Gets ready for steps of this size.
    ///
    /// # Errors
    /// A step outside what the scheme allows.
    fn start(&mut self, _step: f64) -> Result<(), SchemeError> {
        Ok(())
    }

    /// One step from `time` to `time + step`, in place.
    ///
    /// # Errors
    /// A callback that failed, or a computation that could not be done.
    fn step(
        &mut self,
        time: f64,
        step: f64,
        state: &mut [Vec<f64>],
        earlier: &mut [Fields],
        harness: &mut dyn Harness,
    ) -> Result<(), SchemeError>;

    /// The semi-discrete right-hand side.
    ///
    /// # Errors
    /// A callback that failed, or no such operation.
    fn rate(&mut self, _time: f64, _state: &[Vec<f64>], _harness: &mut dyn Harness) -> Result<Fields, SchemeError> {
        Err(not_offered(Operation::Rate))
    }

    /// The steady solution.
    ///
    /// # Errors
    /// A callback that failed, a singular problem, or no such operation.
    fn solve(&mut self, _guess: &[Vec<f64>], _harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        Err(not_offered(Operation::Solve))
    }
}

/// The refusal of an operation that is not offered.
pub fn not_offered(operation: Operation) -> SchemeError {
    SchemeError::NotOffered(format!("operation `{}`", operation.name()))
}

/// A [`OneStep`] as a [`Scheme`].
pub struct Repeated<T> {
    one_step: T,
    prepared: bool,
}

impl<T: OneStep> Repeated<T> {
    /// The scheme that repeats `one_step`.
    pub fn new(one_step: T) -> Self {
        Self { one_step, prepared: false }
    }

    fn ready(&mut self) -> Result<&mut T, SchemeError> {
        if self.prepared { Ok(&mut self.one_step) } else { Err(SchemeError::NotPrepared) }
    }
}

impl<T: OneStep> Scheme for Repeated<T> {
    fn describe(&self) -> Description {
        Description::new(self.one_step.name(), env!("CARGO_PKG_VERSION"), self.one_step.offers())
    }

    fn prepare(&mut self, case: &Case, harness: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.prepared = false;
        if !self.one_step.offers().iter().any(|offer| admits(offer, case)) {
            return Err(SchemeError::NotOffered(format!(
                "no offer of {} takes {} with this grid, these boundaries and these parameters",
                self.one_step.name(),
                case.equation
            )));
        }
        let nodes = self.one_step.prepare(case, harness)?;
        self.prepared = true;
        Ok(nodes)
    }

    fn advance(&mut self, request: Advance<'_>, harness: &mut dyn Harness) -> Result<(), SchemeError> {
        let Advance { time, step, steps, state, earlier } = request;
        let one_step = self.ready()?;
        one_step.start(step)?;
        for done in 0..steps {
            // Not summed up step by step: the times of a long run stay exact to rounding.
            one_step.step(time + done as f64 * step, step, state, earlier, harness)?;
        }
        Ok(())
    }

    fn rate(&mut self, time: f64, state: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Fields, SchemeError> {
        self.ready()?.rate(time, state, harness)
    }

    fn solve(&mut self, guess: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        self.ready()?.solve(guess, harness)
    }
}

/// Whether the case lies within the offer, whatever the operation.
fn admits(offer: &Offer, case: &Case) -> bool {
    let kinds_taken = case.boundaries.iter().flatten().all(|side| match side {
        gridassay_scheme::SideKinds::Same(kind) => offer.boundaries.contains(kind),
        gridassay_scheme::SideKinds::ByField(table) => table.values().all(|kind| offer.boundaries.contains(kind)),
    });
    offer.equation == case.equation
        && offer.dimensions.contains(&case.dimensions)
        && kinds_taken
        && (offer.source || !case.source)
        && case.coefficients.iter().all(|name| offer.coefficients.contains(name))
        && offer.grids.contains(&case.grid.kind())
        && case.grid.cells.iter().all(|cells| offer.cells.admits(*cells))
        && offer
            .parameters
            .iter()
            .all(|(name, range)| case.parameters.get(name).is_none_or(|parameter| range.admits(parameter.components())))
}
