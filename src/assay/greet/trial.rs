//! One combination tried: an answer, the same answer again, the questions that belong to it.

use gridassay_scheme::conversation::MessageError;
use gridassay_scheme::{Advance, BoundaryKind, Fields, March, NoCallbacks, Operation, SchemeError};

use super::Step;
use super::combinations::Combination;
use super::listener::{Listener, state};
use crate::host::{FaultKind, HostError, Session};
use crate::studies::layout::Layout;

/// Relative difference between two steps at once and one after the other that rounding explains: a few operations per value, each of one rounding.
const ROUNDING: f64 = 1e-10;
/// The time of the first state: not zero, so that a forgotten time shows.
const TIME: f64 = 0.23;

/// A combination with the conversation in which it is tried.
pub struct Trial<'a> {
    session: &'a mut Session,
    combination: &'a Combination,
    steps: Vec<Step>,
}

/// The bits of an answer.
pub type Bits = Vec<Vec<u64>>;

impl<'a> Trial<'a> {
    /// Nothing asked yet.
    pub fn new(session: &'a mut Session, combination: &'a Combination) -> Self {
        Self { session, combination, steps: Vec::new() }
    }

    /// What there is to say, and the bits of the answer where there is one.
    pub fn run(mut self) -> (Vec<Step>, Option<Bits>) {
        let answer = self.tried();
        match answer {
            Ok(bits) => (self.steps, Some(bits)),
            Err(error) => {
                let step = explained(self.combination, &error);
                self.steps.push(step);
                (self.steps, None)
            }
        }
    }

    fn tried(&mut self) -> Result<Bits, HostError> {
        let Combination { offer, names, case, operation } = self.combination;
        let early = Layout::new(offer, case, names, None).ok();
        let mut listener = Listener::new(case, names, early.as_ref());
        let nodes = match &early {
            Some(_) => self.session.prepare(case, &mut listener)?,
            None => self.session.prepare(case, &mut NoCallbacks)?,
        };
        let layout = Layout::new(offer, case, names, nodes.as_ref()).map_err(SchemeError::Failed)?;
        let mut hears = Listener::new(case, names, Some(&layout));
        (hears.source, hears.boundary) = (listener.source, listener.boundary);
        hears.coefficients.clone_from(&listener.coefficients);
        let first = self.ask(&layout, 2, &mut hears)?;
        if first.iter().flatten().any(|value| !value.is_finite()) {
            let mend =
                "a scheme that blows up is measured as such; look at the step and the boundaries if that is not meant";
            self.steps.push(Step::note(format!("{}: the answer is not finite", self.combination), mend));
        }
        self.check_questions(&hears);
        let again = self.ask(&layout, 2, &mut hears)?;
        self.same(&first, &again, "asked the same twice, it answers differently");
        self.session.prepare(case, &mut hears)?;
        let prepared = self.ask(&layout, 2, &mut hears)?;
        self.same(&first, &prepared, "asked the same after another `prepare`, it answers differently");
        if *operation == Operation::Advance && offer.levels == 1 {
            self.check_steps(&layout, &first, &mut hears)?;
        }
        Ok(bits(&first))
    }

    /// The answer of the operation; where it is `advance`, after `steps` steps.
    fn ask(&mut self, layout: &Layout, steps: usize, hears: &mut Listener<'_>) -> Result<Fields, HostError> {
        let Combination { offer, names, operation, .. } = self.combination;
        let mut fields = state(names, layout);
        let step = self.step();
        match operation {
            Operation::Advance => {
                let mut earlier: Vec<Fields> = (1..offer.levels).map(|_| fields.clone()).collect();
                let request = Advance { time: TIME, step, steps, state: &mut fields, earlier: &mut earlier };
                self.session.advance(request, hears)?;
                fields.extend(earlier.into_iter().flatten());
                Ok(fields)
            }
            Operation::March => {
                let request = March { time: TIME, until: TIME + 2.0 * step, state: &mut fields, tolerance: None };
                self.session.march(request, hears)?;
                Ok(fields)
            }
            Operation::Rate => self.session.rate(TIME, &fields, hears),
            Operation::Solve => {
                fields.iter_mut().flatten().for_each(|value| *value = 0.0);
                Ok(self.session.solve(&fields, hears)?.state)
            }
        }
    }

    /// Small against every limit of explicit schemes on so coarse a grid.
    fn step(&self) -> f64 {
        let grid = &self.combination.case.grid;
        (0..grid.dimensions()).map(|axis| grid.spacing(axis)).fold(f64::INFINITY, f64::min).powi(3)
    }

    fn same(&mut self, first: &Fields, second: &Fields, what: &str) {
        if bits(first) != bits(second) {
            let mend = "let an answer depend on the request and the last `prepare` alone: no state kept between requests, no unset memory, no random \
                        numbers, no sums in an order that threads choose";
            self.steps.push(Step::wrong(format!("{}: {what}", self.combination), mend));
        }
    }

    fn check_questions(&mut self, hears: &Listener<'_>) {
        let case = &self.combination.case;
        if case.source && !hears.source {
            let mend = "ask `source` at each stage's time and add it, or leave `source` out of the offer";
            self.steps.push(Step::wrong(format!("{}: it never asks for the source term", self.combination), mend));
        }
        let prescribed = |kind: BoundaryKind| matches!(kind, BoundaryKind::Value | BoundaryKind::Gradient);
        let kinds = case.boundaries.iter().flatten().map(|side| side.of(""));
        if kinds.clone().any(prescribed) && !hears.boundary {
            let mend = "ask `boundary` for the side at each stage's time, or leave this kind out of the offer";
            self.steps.push(Step::note(format!("{}: it never asks for boundary data", self.combination), mend));
        }
        for name in case.coefficients.iter().filter(|name| !hears.coefficients.contains(*name)) {
            let mend = "ask `coefficient` for it, or leave it out of `coefficients`";
            self.steps.push(Step::wrong(format!("{}: it never asks for `{name}`", self.combination), mend));
        }
    }

    /// Two steps in one request are one step and another, to rounding.
    fn check_steps(&mut self, layout: &Layout, both: &Fields, hears: &mut Listener<'_>) -> Result<(), HostError> {
        let step = self.step();
        let mut fields = self.ask(layout, 1, hears)?;
        let request = Advance { time: TIME + step, step, steps: 1, state: &mut fields, earlier: &mut [] };
        self.session.advance(request, hears)?;
        let size = both.iter().flatten().fold(0.0, |size: f64, value| size.max(value.abs()));
        let pairs = both.iter().flatten().zip(fields.iter().flatten());
        let apart = pairs.map(|(a, b)| (a - b).abs()).fold(0.0, f64::max);
        if size.is_finite() && (apart.is_nan() || apart > ROUNDING * size) {
            let text =
                format!("{}: two steps in one request and one after the other differ by {apart:.1e}", self.combination);
            let mend = "take `steps` steps of exactly `step`, the stages of step n at `time` + n `step`";
            self.steps.push(Step::wrong(text, mend));
        }
        Ok(())
    }
}

fn bits(fields: &Fields) -> Bits {
    // All values that are not finite count as one: text has one word for them.
    let bits = |value: &f64| if value.is_finite() { value.to_bits() } else { f64::NAN.to_bits() };
    fields.iter().map(|field| field.iter().map(bits).collect()).collect()
}

/// An error with what can be done about it.
fn explained(combination: &Combination, error: &HostError) -> Step {
    let text = format!("{combination}: {error}");
    match error {
        HostError::Refused(SchemeError::NotOffered(_)) => Step::wrong(
            text,
            "take what you offer, or leave it out of the offer: it was asked inside what `describe` answers",
        ),
        HostError::Refused(SchemeError::StepRefused(_)) => {
            Step::note(text, "the harness takes it as a bound that the scheme sets itself")
        }
        HostError::Refused(_) => {
            Step::note(text, "if this case makes no sense for the scheme, narrow the offer; else mend the computation")
        }
        HostError::Fault(fault) => Step::wrong(text, mend(&fault.kind)),
        _ => Step::wrong(text, "see the sentence"),
    }
}

fn mend(kind: &FaultKind) -> &'static str {
    match kind {
        FaultKind::Message(MessageError::WrongLength { .. }) => {
            "answer as many values of each field as the question holds; where cells meet, periodic ends count once"
        }
        FaultKind::Message(_) => {
            "compare the answer with the page on the conversation: gridassay starter conversation DIR"
        }
        FaultKind::BadQuestion { .. } => {
            "compare the question with the page on the conversation: gridassay starter conversation DIR"
        }
        FaultKind::Exited { .. } => "answer an error object instead of leaving: catch exceptions around each request",
        FaultKind::Signalled { .. } | FaultKind::Panicked { .. } => {
            "run the scheme by hand on a small case, in a debugger"
        }
        FaultKind::TimedOut { .. } => "flush stdout after each line; see whether the computation ends at all",
        _ => "see the sentence",
    }
}
