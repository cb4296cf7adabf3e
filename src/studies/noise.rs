//! A long run from noise: does it stay bounded or not? It needs no linearity, and holds the spectrum's answer against the scheme itself.

use gridassay_scheme::{Advance, NoCallbacks};

use super::Stop;
use super::cellwise::Cellwise;
use super::jitter::Jitter;
use super::linearity;
use super::setting::Setting;
use crate::host::Session;

/// Largest value at the end over largest value at the beginning of `steps` steps from noise; infinite or NaN where the run blew up.
/// The case must be prepared.
///
/// # Errors
/// The scheme refused or failed.
pub fn growth(
    session: &mut Session,
    setting: &Setting,
    cellwise: &Cellwise,
    steps: usize,
    seed: u64,
) -> Result<f64, Stop> {
    let mut levels = linearity::noise(&mut Jitter::new(seed), setting, cellwise);
    let before = largest(&levels[0]);
    let mut state = levels.remove(0);
    let request = Advance { time: 0.0, step: setting.step, steps, state: &mut state, earlier: &mut levels };
    session.advance(request, &mut NoCallbacks)?;
    Ok(largest(&state) / before)
}

/// The largest modulus; NaN where any value is NaN, which `f64::max` would drop.
fn largest(fields: &[Vec<f64>]) -> f64 {
    let larger = |a: f64, b: &f64| if a.is_nan() || b.is_nan() { f64::NAN } else { a.max(b.abs()) };
    fields.iter().flatten().fold(0.0, larger)
}
