//! One rung of a ladder, run.

use gridassay_reference::problem::Problem;
use gridassay_scheme::{Advance, Fields, Harness, March, Operation};

use super::control::{self, Addition, Fault, GROUPS};
use super::ladder::Rung;
use super::semi_discrete::SemiDiscrete;
use crate::analysis::norms::{Measure, Norms as Measured};
use crate::claims::OrderRequest;
use crate::host::Session;
use crate::record::{Norms, Parameters, Refinement};
use crate::studies::callbacks::ProblemHarness;
use crate::studies::jitter::{Jitter, Shaken};
use crate::studies::layout::Layout;
use crate::studies::selection::{Need, choose};
use crate::studies::{Stop, case};

/// What one rung answered.
#[derive(Clone, Debug)]
pub struct Answer {
    /// The names of the fields, in order.
    pub names: Vec<String>,
    /// The operation that was used.
    pub operation: Operation,
    /// Where the values sit.
    pub layout: Layout,
    /// The scheme's state at the end.
    pub state: Fields,
    /// The exact state at the end, as the scheme holds it.
    pub exact: Fields,
    /// Wall time of the run that `state` came from, in seconds; `None` for a run with an added fault.
    pub seconds: Option<f64>,
    /// The state at the end from data changed in the last bit.
    pub shaken: Fields,
}

/// Operations that take the problem of a request to its end, the best first. Only `advance` has a step that can be refined by itself.
fn operations(request: &OrderRequest) -> Vec<Operation> {
    match request.operation {
        _ if request.problem.is_steady() => vec![Operation::Solve],
        Some(operation) => vec![operation],
        None if request.refine == Refinement::Time => vec![Operation::Advance],
        None => vec![Operation::Advance, Operation::March, Operation::Rate],
    }
}

/// What a run differs in from the plain one.
#[derive(Clone, Copy, Debug)]
pub enum Variation {
    /// It is made twice, the second time from data changed in the last bit by this seed.
    Shaken(u64),
    /// An error is added to what the scheme answers; it is made once.
    Fault(Fault),
}

/// Runs the problem of a request on a rung.
///
/// # Errors
/// No offer can take it, the scheme refused or failed, the solution cannot be evaluated.
pub fn run(session: &mut Session, request: &OrderRequest, rung: &Rung, variation: Variation) -> Result<Answer, Stop> {
    let problem = &request.problem;
    let case = case::of_problem(problem, &rung.cells);
    let parameters: &Parameters = problem.parameters();
    let need = Need {
        equation: &case.equation,
        dimensions: case.dimensions,
        operations: &operations(request),
        boundaries: &case::kinds(&case),
        source: case.source,
        coefficients: &case.coefficients,
        parameters,
        cells: &rung.cells,
        grid: case.grid.kind(),
    };
    let description = session.description().clone();
    let (offer, operation) = choose(&description, &need).map_err(Stop::NotOffered)?;
    let names = case::fields(offer, case.dimensions, Some(problem));
    let probe = Layout::new(offer, &case, &names, None).ok();
    let nodes = match &probe {
        // The layout is known before `prepare`, so `prepare` may already ask back.
        Some(layout) => {
            session.prepare(&case, &mut ProblemHarness::new(problem, layout, &names).map_err(Stop::Request)?)?
        }
        None => session.prepare(&case, &mut gridassay_scheme::NoCallbacks)?,
    };
    let layout = Layout::new(offer, &case, &names, nodes.as_ref()).map_err(Stop::Request)?;
    let mut harness = ProblemHarness::new(problem, &layout, &names).map_err(Stop::Request)?;
    let start = problem.start_time();
    let until = request.final_time;
    let offset = |name: &String| offer.time_offset.get(name).copied().unwrap_or(0.0);
    let at = |harness: &ProblemHarness, time: f64| staggered(harness, &names, time, rung.step.unwrap_or(0.0), &offset);
    let exact = if operation == Operation::Solve { harness.exact(0.0)? } else { at(&harness, until)? };
    let mut state = match operation {
        Operation::Solve => layout.lengths().iter().map(|length| vec![0.0; *length]).collect(),
        _ => at(&harness, start)?,
    };
    let mut earlier = (1..offer.levels)
        .map(|level| at(&harness, start - level as f64 * rung.step.unwrap_or(0.0)))
        .collect::<Result<Vec<_>, _>>()?;
    let run = Run { operation, start, until, rung, problem, layout: &layout };
    let (state, shaken, seconds) = match variation {
        Variation::Fault(fault) => {
            let fineness = control::fineness(request.refine, &rung.cells, rung.steps);
            let addition = Addition::new(fault, fineness, &layout, &exact);
            let state = run.with_addition(session, state, earlier, &addition, &mut harness)?;
            (state.clone(), state, None)
        }
        Variation::Shaken(seed) => {
            let (plain_state, plain_earlier) = (state.clone(), earlier.clone());
            let begun = std::time::Instant::now();
            let plain = run.carry_out(session, plain_state, plain_earlier, &mut harness)?;
            let seconds = begun.elapsed().as_secs_f64();
            let mut jitter = Jitter::new(seed);
            jitter.shake_fields(&mut state);
            earlier.iter_mut().for_each(|fields| jitter.shake_fields(fields));
            let shaken = run.carry_out(session, state, earlier, &mut Shaken { inner: &mut harness, jitter })?;
            (plain, shaken, Some(seconds))
        }
    };
    Ok(Answer { names, operation, layout, state, exact, seconds, shaken })
}

/// The exact state, each field at its own time where fields are staggered in time.
fn staggered(
    harness: &ProblemHarness,
    names: &[String],
    time: f64,
    step: f64,
    offset: &impl Fn(&String) -> f64,
) -> Result<Fields, Stop> {
    let mut state = harness.exact(time)?;
    for (index, name) in names.iter().enumerate() {
        let offset = offset(name);
        if offset != 0.0 {
            state[index] = harness.exact(time + offset * step)?.swap_remove(index);
        }
    }
    Ok(state)
}

struct Run<'a> {
    problem: &'a Problem,
    layout: &'a Layout,
    operation: Operation,
    start: f64,
    until: f64,
    rung: &'a Rung,
}

impl Run<'_> {
    fn carry_out(
        &self,
        session: &mut Session,
        mut state: Fields,
        mut earlier: Vec<Fields>,
        harness: &mut dyn Harness,
    ) -> Result<Fields, Stop> {
        match self.operation {
            Operation::Solve => return Ok(session.solve(&state, harness)?.state),
            Operation::Rate => return self.integrated(session, state, None, harness),
            Operation::March => {
                let request = March { time: self.start, until: self.until, state: &mut state, tolerance: None };
                session.march(request, harness)?;
            }
            _ => {
                let (step, steps) = (self.rung.step.unwrap_or(0.0), self.rung.steps.unwrap_or(0));
                let request = Advance { time: self.start, step, steps, state: &mut state, earlier: &mut earlier };
                session.advance(request, harness)?;
            }
        }
        Ok(state)
    }

    /// The same with an error added: after each group of steps the share that belongs to it, else at the end.
    fn with_addition(
        &self,
        session: &mut Session,
        state: Fields,
        earlier: Vec<Fields>,
        addition: &Addition,
        harness: &mut dyn Harness,
    ) -> Result<Fields, Stop> {
        let (Operation::Advance, Some(step), Some(steps)) = (self.operation, self.rung.step, self.rung.steps) else {
            return self.march_with_addition(session, state, earlier, addition, harness);
        };
        let (mut state, mut earlier) = (state, earlier);
        let groups = steps.min(GROUPS);
        for group in 0..groups {
            let (first, end) = (group * steps / groups, (group + 1) * steps / groups);
            let time = self.start + first as f64 * step;
            let request = Advance { time, step, steps: end - first, state: &mut state, earlier: &mut earlier };
            session.advance(request, harness)?;
            let share = (end - first) as f64 / steps as f64;
            // Older levels get the same: a difference between levels would excite a mode that no error of the scheme does.
            addition.add(share, &mut state);
            earlier.iter_mut().for_each(|level| addition.add(share, level));
        }
        Ok(state)
    }

    /// The scheme's rate, integrated in time by the harness.
    fn integrated(
        &self,
        session: &mut Session,
        state: Fields,
        addition: Option<&Addition>,
        harness: &mut dyn Harness,
    ) -> Result<Fields, Stop> {
        let addition = addition.map(|addition| (addition, self.until - self.start));
        let (problem, layout) = (self.problem, self.layout);
        SemiDiscrete { session, harness, problem, layout, addition }.run(self.start, self.until, state)
    }

    /// A march in as many parts as an advance; a steady answer all at once.
    fn march_with_addition(
        &self,
        session: &mut Session,
        mut state: Fields,
        earlier: Vec<Fields>,
        addition: &Addition,
        harness: &mut dyn Harness,
    ) -> Result<Fields, Stop> {
        if self.operation == Operation::Rate {
            return self.integrated(session, state, Some(addition), harness);
        }
        if self.operation != Operation::March {
            let mut state = self.carry_out(session, state, earlier, harness)?;
            addition.add(1.0, &mut state);
            return Ok(state);
        }
        let at = |group: usize| self.start + (self.until - self.start) * group as f64 / GROUPS as f64;
        for group in 0..GROUPS {
            let until = if group + 1 == GROUPS { self.until } else { at(group + 1) };
            let request = March { time: at(group), until, state: &mut state, tolerance: None };
            session.march(request, harness)?;
            addition.add(1.0 / GROUPS as f64, &mut state);
        }
        Ok(state)
    }
}

/// The norms of `a` - `b` of each field.
pub fn differences(layout: &Layout, a: &Fields, b: &Fields) -> Vec<Norms> {
    let field = |((layout, a), b): ((&crate::studies::layout::FieldLayout, &Vec<f64>), &Vec<f64>)| {
        let difference: Vec<f64> = a.iter().zip(b).map(|(a, b)| a - b).collect();
        norms_of(&difference, &layout.measures())
    };
    layout.fields.iter().zip(a).zip(b).map(field).collect()
}

/// The norms of a difference over cells with these measures; none where it is not finite.
pub fn norms_of(difference: &[f64], measures: &[f64]) -> Norms {
    match Measured::of(difference, Measure::PerCell(measures)) {
        Ok(norms) => Norms { l1: Some(norms.l1), l2: Some(norms.l2), linf: Some(norms.linf) },
        Err(_) => Norms::default(),
    }
}

/// The first sign that a state blew up, in words.
pub fn not_finite(names: &[String], state: &Fields) -> Option<String> {
    let field = names.iter().zip(state).find(|(_, values)| values.iter().any(|value| !value.is_finite()));
    field.map(|(name, _)| format!("`{name}` is not finite at the end of the run: the scheme blew up"))
}
