//! Steps taken by a scheme, one request a step where every state is looked at.

use gridassay_scheme::{Advance, Fields, Harness, NoCallbacks, Operation};

use super::states::{self, Family, Pattern};
use super::trial::{Prepared, Trial};
use super::{parameters, tally};
use crate::host::Session;
use crate::studies::Stop;

/// A state with its older levels and the time of the next step.
#[derive(Clone, Debug, PartialEq)]
pub struct Moving {
    /// One array a field.
    pub fields: Fields,
    /// The older levels, newest first.
    pub earlier: Vec<Fields>,
    /// The time.
    pub time: f64,
}

impl Moving {
    /// From rest: every older level is the state itself, which every invariant allows.
    pub fn new(trial: &Trial, fields: Fields) -> Self {
        let earlier = vec![fields.clone(); trial.offer.levels.saturating_sub(1)];
        Self { fields, earlier, time: 0.0 }
    }

    /// Takes `steps` steps in one request.
    ///
    /// # Errors
    /// The scheme refused or failed.
    pub fn take(
        &mut self,
        session: &mut Session,
        trial: &Trial,
        steps: usize,
        harness: &mut dyn Harness,
    ) -> Result<(), Stop> {
        let Self { fields, earlier, time } = self;
        if trial.operation == Operation::Advance {
            let request = Advance { time: *time, step: trial.step, steps, state: fields, earlier };
            session.advance(request, harness)?;
        } else {
            for done in 0..steps {
                ssprk3(session, *time + done as f64 * trial.step, trial.step, fields, harness)?;
            }
        }
        *time += steps as f64 * trial.step;
        Ok(())
    }

    /// Whether every value is finite.
    pub fn is_finite(&self) -> bool {
        tally::is_finite(&self.fields)
    }
}

/// One step through `rate`: a convex combination of Euler steps, which keeps what an Euler step keeps.
/// Source: Shu & Osher 1988, J. Comput. Phys. 77:439-471.
fn ssprk3(
    session: &mut Session,
    time: f64,
    step: f64,
    fields: &mut Fields,
    harness: &mut dyn Harness,
) -> Result<(), Stop> {
    let mut euler = |at: f64, from: &Fields| -> Result<Fields, Stop> {
        let rate = session.rate(at, from, harness)?;
        Ok(combine(1.0, from, step, &rate))
    };
    let first = euler(time, fields)?;
    let second = combine(0.75, fields, 0.25, &euler(time + step, &first)?);
    *fields = combine(1.0 / 3.0, fields, 2.0 / 3.0, &euler(time + 0.5 * step, &second)?);
    Ok(())
}

fn combine(alpha: f64, a: &Fields, beta: f64, b: &Fields) -> Fields {
    let field = |(a, b): (&Vec<f64>, &Vec<f64>)| a.iter().zip(b).map(|(a, b)| alpha * a + beta * b).collect();
    a.iter().zip(b).map(field).collect()
}

/// A run with its state before the first and after every step.
#[derive(Clone, Debug)]
pub struct History {
    /// What it began from.
    pub label: String,
    /// Which family the beginning is of.
    pub family: Family,
    /// The states, as far as they are finite.
    pub states: Vec<Fields>,
    /// The step after which a value was not finite.
    pub blew_up: Option<usize>,
    /// The scheme refused or failed at that step.
    pub stopped: Option<String>,
}

/// Takes `steps` steps from `fields`, a request a step.
pub fn follow(session: &mut Session, trial: &Trial, label: String, fields: Fields, steps: usize) -> History {
    follow_with(session, trial, label, fields, steps, &mut NoCallbacks)
}

/// The same, with someone to answer the scheme's questions.
pub fn follow_with(
    session: &mut Session,
    trial: &Trial,
    label: String,
    fields: Fields,
    steps: usize,
    harness: &mut dyn Harness,
) -> History {
    let mut moving = Moving::new(trial, fields);
    let states = vec![moving.fields.clone()];
    let mut history = History { label, family: Family::Mixed, states, blew_up: None, stopped: None };
    for step in 1..=steps {
        if let Err(stop) = moving.take(session, trial, 1, harness) {
            history.stopped = Some(format!("step {step} from {}: {stop}", history.label));
            break;
        }
        if !moving.is_finite() {
            history.blew_up = Some(step);
            break;
        }
        history.states.push(moving.fields.clone());
    }
    history
}

/// Runs from every pattern of both families. The case must be prepared.
///
/// # Errors
/// No state can be made for this scheme.
pub fn histories(
    session: &mut Session,
    trial: &Trial,
    prepared: &Prepared,
    families: &[Family],
    seed: u64,
) -> Result<Vec<History>, Stop> {
    let patterns: &[Pattern] = if trial.case.equation == "incompressible" { &[Pattern::Smooth] } else { &Pattern::ALL };
    let mut histories = Vec::new();
    for family in families {
        // Stronger states have faster signals: the Courant number is what stays.
        let fastest = |strength: f64| {
            parameters::speeds(&trial.case.equation, &trial.parameters, trial.case.dimensions, strength)
                .map_or(1.0, |speeds| speeds.into_iter().fold(0.0, f64::max))
        };
        let slower = fastest(1.0) / fastest(family.strength());
        let trial = Trial { step: if slower.is_finite() { trial.step * slower } else { trial.step }, ..trial.clone() };
        for pattern in patterns {
            let fields = states::state(&trial, prepared, *pattern, *family, seed + *pattern as u64)?;
            let background = match family {
                Family::Mixed => "",
                Family::NonNegative => " from zero upwards",
            };
            let label = format!("{}{background}", pattern.word());
            let mut history = follow(session, &trial, label, fields, trial.steps);
            history.family = *family;
            histories.push(history);
        }
    }
    Ok(histories)
}
