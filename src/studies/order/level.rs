//! One rung of a ladder, run.

use gridassay_reference::problem::Problem;
use gridassay_scheme::{Advance, Fields, Harness, March, Operation};

use super::ladder::Rung;
use crate::analysis::norms::{Measure, Norms as Measured};
use crate::host::Session;
use crate::record::{Norms, Parameters};
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
    /// Wall time of the run that `state` came from, in seconds.
    pub seconds: f64,
    /// The state at the end from data changed in the last bit.
    pub shaken: Fields,
}

/// Operations that take a problem to its end, the best first.
const IN_TIME: [Operation; 2] = [Operation::Advance, Operation::March];

/// Runs `problem` on a rung, twice: as it stands, and from data changed in the last bit.
///
/// # Errors
/// No offer can take it, the scheme refused or failed, the solution cannot be evaluated.
pub fn run(session: &mut Session, problem: &Problem, rung: &Rung, until: f64, seed: u64) -> Result<Answer, Stop> {
    let case = case::of_problem(problem, &rung.cells);
    let parameters: &Parameters = problem.parameters();
    let need = Need {
        equation: &case.equation,
        dimensions: case.dimensions,
        operations: if problem.is_steady() { &[Operation::Solve] } else { &IN_TIME },
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
    let harness = ProblemHarness::new(problem, &layout, &names).map_err(Stop::Request)?;
    let start = problem.start_time();
    let offset = |name: &String| offer.time_offset.get(name).copied().unwrap_or(0.0);
    let at = |harness: &ProblemHarness, time: f64| staggered(harness, &names, time, rung.step.unwrap_or(0.0), &offset);
    let exact = if operation == Operation::Solve { harness.exact(0.0)? } else { at(&harness, until)? };
    let initial = match operation {
        Operation::Solve => layout.lengths().iter().map(|length| vec![0.0; *length]).collect(),
        _ => at(&harness, start)?,
    };
    let earlier = (1..offer.levels)
        .map(|level| at(&harness, start - level as f64 * rung.step.unwrap_or(0.0)))
        .collect::<Result<Vec<_>, _>>()?;
    let run = Run { operation, start, until, rung };
    let mut plain = harness;
    let (plain_initial, plain_earlier) = (initial.clone(), earlier.clone());
    let begun = std::time::Instant::now();
    let state = run.carry_out(session, plain_initial, plain_earlier, &mut plain)?;
    let seconds = begun.elapsed().as_secs_f64();
    let mut jitter = Jitter::new(seed);
    let (mut initial, mut earlier) = (initial, earlier);
    jitter.shake_fields(&mut initial);
    earlier.iter_mut().for_each(|fields| jitter.shake_fields(fields));
    let shaken = run.carry_out(session, initial, earlier, &mut Shaken { inner: &mut plain, jitter })?;
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
}

/// The norms of `a` - `b` of each field.
pub fn differences(layout: &Layout, a: &Fields, b: &Fields) -> Vec<Norms> {
    let field = |((layout, a), b): ((&crate::studies::layout::FieldLayout, &Vec<f64>), &Vec<f64>)| {
        let difference: Vec<f64> = a.iter().zip(b).map(|(a, b)| a - b).collect();
        match Measured::of(&difference, Measure::PerCell(&layout.measures())) {
            Ok(norms) => Norms { l1: Some(norms.l1), l2: Some(norms.l2), linf: Some(norms.linf) },
            Err(_) => Norms::default(),
        }
    };
    layout.fields.iter().zip(a).zip(b).map(field).collect()
}

/// The first sign that a state blew up, in words.
pub fn not_finite(names: &[String], state: &Fields) -> Option<String> {
    let field = names.iter().zip(state).find(|(_, values)| values.iter().any(|value| !value.is_finite()));
    field.map(|(name, _)| format!("`{name}` is not finite at the end of the run: the scheme blew up"))
}
