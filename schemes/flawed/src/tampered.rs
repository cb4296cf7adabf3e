//! A right scheme behind a wrong hand: what it is told, what it is answered, or what it gives back is altered.

use gridassay_scheme::{
    Advance, BoundaryData, Case, Description, Fields, Harness, Nodes, Scheme, SchemeError, Side, Solution,
};

/// When a callback is asked, within which step.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Moment {
    /// The time that the scheme asks for.
    pub asked: f64,
    /// The time at the start of the step.
    pub start: f64,
    /// The size of the step; 0 outside of `advance`.
    pub step: f64,
}

/// Alters the state after a step; the state before the step comes first.
pub type AnswerSlip = fn(&Fields, &mut [Vec<f64>]);

/// A scheme with alterations; those that are not set alter nothing.
pub struct Tampered {
    scheme: Box<dyn Scheme>,
    name: Option<&'static str>,
    slips: Slips,
    case: Option<Case>,
}

#[derive(Clone, Copy, Default)]
struct Slips {
    case: Option<fn(&mut Case)>,
    nodes: Option<fn(&mut Nodes)>,
    step: Option<fn(f64, &Case) -> f64>,
    steps: Option<fn(usize) -> usize>,
    answer: Option<AnswerSlip>,
    stale_level: bool,
    source_time: Option<fn(Moment) -> f64>,
    source: Option<fn(&Case, &mut Fields)>,
    boundary_time: Option<fn(Moment) -> f64>,
    boundary: Option<fn(Side, &mut BoundaryData)>,
}

impl Slips {
    /// Whether a request has to be taken apart, so that each step is seen.
    fn need_single_steps(&self) -> bool {
        self.answer.is_some() || self.stale_level || self.source_time.is_some() || self.boundary_time.is_some()
    }
}

impl Tampered {
    /// A scheme without alterations so far.
    pub fn new(scheme: Box<dyn Scheme>) -> Self {
        Self { scheme, name: None, slips: Slips::default(), case: None }
    }

    /// The classical scheme of that name.
    ///
    /// # Panics
    /// There is none.
    pub fn classical(name: &str) -> Self {
        Self::new(gridassay_classical::scheme(name).expect("a classical scheme"))
    }

    /// Under another name.
    pub fn named(mut self, name: &'static str) -> Self {
        self.name = Some(name);
        self
    }

    /// The case is altered before it is prepared.
    pub fn case(mut self, slip: fn(&mut Case)) -> Self {
        self.slips.case = Some(slip);
        self
    }

    /// The nodes of a cell are altered before they are told.
    pub fn nodes(mut self, slip: fn(&mut Nodes)) -> Self {
        self.slips.nodes = Some(slip);
        self
    }

    /// Another size of step is taken.
    pub fn step(mut self, slip: fn(f64, &Case) -> f64) -> Self {
        self.slips.step = Some(slip);
        self
    }

    /// Another number of steps is taken.
    pub fn steps(mut self, slip: fn(usize) -> usize) -> Self {
        self.slips.steps = Some(slip);
        self
    }

    /// The state is altered after each step; the slip sees the state before it too.
    pub fn answer(mut self, slip: AnswerSlip) -> Self {
        self.slips.answer = Some(slip);
        self
    }

    /// The older level is given back as it came.
    pub fn stale_level(mut self) -> Self {
        self.slips.stale_level = true;
        self
    }

    /// The source is taken at another time.
    pub fn source_time(mut self, slip: fn(Moment) -> f64) -> Self {
        self.slips.source_time = Some(slip);
        self
    }

    /// The source's values are altered.
    pub fn source(mut self, slip: fn(&Case, &mut Fields)) -> Self {
        self.slips.source = Some(slip);
        self
    }

    /// Boundary data are taken at another time.
    pub fn boundary_time(mut self, slip: fn(Moment) -> f64) -> Self {
        self.slips.boundary_time = Some(slip);
        self
    }

    /// Boundary data are altered.
    pub fn boundary(mut self, slip: fn(Side, &mut BoundaryData)) -> Self {
        self.slips.boundary = Some(slip);
        self
    }

    /// The scheme in a box.
    pub fn boxed(self) -> Box<dyn Scheme> {
        Box::new(self)
    }
}

/// The harness as the altered scheme sees it.
struct AlteredHarness<'a> {
    harness: &'a mut dyn Harness,
    slips: Slips,
    case: &'a Case,
    start: f64,
    step: f64,
}

impl AlteredHarness<'_> {
    fn moment(&self, asked: f64) -> Moment {
        Moment { asked, start: self.start, step: self.step }
    }
}

impl Harness for AlteredHarness<'_> {
    fn source(&mut self, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        let time = self.slips.source_time.map_or(time, |slip| slip(self.moment(time)));
        let mut source = self.harness.source(time, points)?;
        if let (Some(slip), None) = (self.slips.source, points) {
            slip(self.case, &mut source);
        }
        Ok(source)
    }

    fn boundary(&mut self, time: f64, side: Side, layers: usize) -> Result<BoundaryData, SchemeError> {
        let time = self.slips.boundary_time.map_or(time, |slip| slip(self.moment(time)));
        let mut data = self.harness.boundary(time, side, layers)?;
        if let Some(slip) = self.slips.boundary {
            slip(side, &mut data);
        }
        Ok(data)
    }

    fn coefficient(&mut self, name: &str, time: f64, points: Option<&[Vec<f64>]>) -> Result<Fields, SchemeError> {
        self.harness.coefficient(name, time, points)
    }
}

impl Scheme for Tampered {
    fn describe(&self) -> Description {
        let mut description = self.scheme.describe();
        if let Some(name) = self.name {
            description.name = name.to_owned();
        }
        description
    }

    fn prepare(&mut self, case: &Case, harness: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        let mut altered = case.clone();
        if let Some(slip) = self.slips.case {
            slip(&mut altered);
        }
        let mut nodes = self.scheme.prepare(&altered, harness)?;
        if let (Some(slip), Some(nodes)) = (self.slips.nodes, &mut nodes) {
            slip(nodes);
        }
        self.case = Some(case.clone());
        Ok(nodes)
    }

    fn advance(&mut self, request: Advance<'_>, harness: &mut dyn Harness) -> Result<(), SchemeError> {
        let Advance { time, step, steps, state, earlier } = request;
        let Some(case) = &self.case else { return Err(SchemeError::NotPrepared) };
        let slips = self.slips;
        let step = slips.step.map_or(step, |slip| slip(step, case));
        let steps = slips.steps.map_or(steps, |slip| slip(steps));
        if !slips.need_single_steps() {
            let harness = &mut AlteredHarness { harness, slips, case, start: time, step };
            return self.scheme.advance(Advance { time, step, steps, state, earlier }, harness);
        }
        for done in 0..steps {
            let start = time + done as f64 * step;
            let before = (state.to_vec(), earlier.to_vec());
            let harness = &mut AlteredHarness { harness, slips, case, start, step };
            let one = Advance { time: start, step, steps: 1, state, earlier };
            self.scheme.advance(one, harness)?;
            if let Some(slip) = slips.answer {
                slip(&before.0, state);
            }
            if slips.stale_level {
                earlier.clone_from_slice(&before.1);
            }
        }
        Ok(())
    }

    fn rate(&mut self, time: f64, state: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Fields, SchemeError> {
        let Some(case) = &self.case else { return Err(SchemeError::NotPrepared) };
        let harness = &mut AlteredHarness { harness, slips: self.slips, case, start: time, step: 0.0 };
        self.scheme.rate(time, state, harness)
    }

    fn solve(&mut self, guess: &[Vec<f64>], harness: &mut dyn Harness) -> Result<Solution, SchemeError> {
        let Some(case) = &self.case else { return Err(SchemeError::NotPrepared) };
        let harness = &mut AlteredHarness { harness, slips: self.slips, case, start: 0.0, step: 0.0 };
        self.scheme.solve(guess, harness)
    }
}
