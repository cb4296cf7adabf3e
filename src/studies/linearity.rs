//! The trial before any Fourier study: is a step linear, the same at every position, and the same at every time?

use gridassay_scheme::{Advance, Fields, NoCallbacks, Operation};

use super::Stop;
use super::cellwise::Cellwise;
use super::jitter::Jitter;
use super::setting::Setting;
use crate::host::Session;
use crate::record::Linearity;

/// Deviations up to this still count as linear: an implicit part solved by iteration is linear only to within its tolerance. They are
/// stated as the uncertainty of G. A limiter or a nonlinear weight, tried with states of size one, deviates by far more.
const ALLOWED: f64 = 1e-6;

/// A state with its older levels.
pub type Levels = Vec<Fields>;

/// What the scheme makes of a state with its older levels (newest first) at time `time`: one step of `setting`, or its rate.
///
/// # Errors
/// The scheme refused or failed.
pub fn step(session: &mut Session, setting: &Setting, levels: &Levels, time: f64) -> Result<Levels, Stop> {
    if setting.operation == Operation::Rate {
        return Ok(vec![session.rate(time, &levels[0], &mut NoCallbacks)?]);
    }
    let mut state = levels[0].clone();
    let mut earlier = levels[1..].to_vec();
    let request = Advance { time, step: setting.step, steps: 1, state: &mut state, earlier: &mut earlier };
    session.advance(request, &mut NoCallbacks)?;
    let mut answer = vec![state];
    answer.append(&mut earlier);
    Ok(answer)
}

/// Tries whether one step is linear, shift invariant and independent of time. The case must be prepared.
///
/// # Errors
/// The scheme refused or failed.
pub fn trial(session: &mut Session, setting: &Setting, cellwise: &Cellwise, seed: u64) -> Result<Linearity, Stop> {
    let mut random = Jitter::new(seed);
    let (a, b) = (noise(&mut random, setting, cellwise), noise(&mut random, setting, cellwise));
    // Neither factors of one nor equal ones: a step that forgets a factor would pass.
    let (alpha, beta) = (0.73, -1.37);
    let sum = combine(&a, alpha, &b, beta);
    let (after_a, after_b) = (step(session, setting, &a, 0.0)?, step(session, setting, &b, 0.0)?);
    let after_sum = step(session, setting, &sum, 0.0)?;
    let superposition = deviation(&after_sum, &combine(&after_a, alpha, &after_b, beta));
    let mut shift_deviation = 0.0_f64;
    for axis in 0..setting.case.dimensions {
        let shift = 1 + setting.case.grid.cells[axis] / 3;
        let moved = shifted(&a, cellwise, axis, shift);
        let after = step(session, setting, &moved, 0.0)?;
        shift_deviation = larger(shift_deviation, deviation(&after, &shifted(&after_a, cellwise, axis, shift)));
    }
    let time = deviation(&step(session, setting, &a, 17.3)?, &after_a);
    Ok(Linearity { superposition, shift: shift_deviation, time, allowed: ALLOWED })
}

/// Random levels: uniform in [-1, 1).
pub fn noise(random: &mut Jitter, setting: &Setting, cellwise: &Cellwise) -> Levels {
    let field = |random: &mut Jitter| (0..cellwise.len()).map(|_| random.uniform()).collect();
    (0..setting.offer.levels).map(|_| setting.names.iter().map(|_| field(random)).collect()).collect()
}

fn combine(a: &Levels, alpha: f64, b: &Levels, beta: f64) -> Levels {
    let values = |(a, b): (&Vec<f64>, &Vec<f64>)| a.iter().zip(b).map(|(a, b)| alpha * a + beta * b).collect();
    a.iter().zip(b).map(|(a, b)| a.iter().zip(b).map(values).collect()).collect()
}

/// Every field moved up by `shift` cells in direction `axis`.
fn shifted(levels: &Levels, cellwise: &Cellwise, axis: usize, shift: usize) -> Levels {
    let field = |values: &Vec<f64>| cellwise.shifted(values, axis, shift);
    levels.iter().map(|fields| fields.iter().map(field).collect()).collect()
}

/// The largest difference, relative to the largest value; NaN where a value is not finite, so that no comparison passes.
fn deviation(found: &Levels, expected: &Levels) -> f64 {
    let pairs = || found.iter().zip(expected).flat_map(|(a, b)| a.iter().zip(b)).flat_map(|(a, b)| a.iter().zip(b));
    let size = pairs().map(|(_, b)| b.abs()).fold(0.0, larger);
    let difference = pairs().map(|(a, b)| (a - b).abs()).fold(0.0, larger);
    if difference == 0.0 { 0.0 } else { difference / size }
}

/// The larger of two, and NaN where either is: `f64::max` would drop it.
fn larger(a: f64, b: f64) -> f64 {
    if a.is_nan() || b.is_nan() { f64::NAN } else { a.max(b) }
}
