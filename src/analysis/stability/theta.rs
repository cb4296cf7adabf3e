//! The worst wavenumber of all.

use crate::analysis::eigen::Excess;
use std::f64::consts::PI;

/// The wavenumber with the largest growth.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Worst {
    /// k h in [0, pi], or in [-pi, pi] where both signs were asked for.
    pub theta: f64,
    /// Growth there.
    pub excess: Excess,
}

/// Equal divisions of [0, pi]; a multiple of 12, so that pi, pi/2, pi/3 and pi/4 are among them.
const DIVISIONS: usize = 960;
/// Halvings below the first division: growth that begins at long waves is seen down to theta of about 1e-6.
const HALVINGS: usize = 12;
/// Maxima of the samples that are refined.
const REFINED: usize = 8;

/// The largest of `excess(theta)` over all theta in [0, pi], and over [-pi, pi] where `both_signs` is set (complex coefficients).
///
/// Sampled on a fine grid with 0, pi/2 and pi among its points, with long waves sampled ever more closely; the largest local maxima are
/// refined by golden-section search.
///
/// # Errors
/// The first error that `excess` returns.
pub fn worst_theta<E>(mut excess: impl FnMut(f64) -> Result<Excess, E>, both_signs: bool) -> Result<Worst, E> {
    let mut thetas: Vec<f64> = (0..=DIVISIONS).map(|i| PI * i as f64 / DIVISIONS as f64).collect();
    let first = thetas[1];
    let long = (1..=HALVINGS).rev().map(|i| first * 0.5_f64.powi(i as i32));
    thetas.splice(1..1, long);
    if both_signs {
        let negative: Vec<f64> = thetas.iter().skip(1).rev().map(|t| -t).collect();
        thetas.splice(0..0, negative);
    }
    let samples: Vec<Excess> = thetas.iter().map(|&t| excess(t)).collect::<Result<_, E>>()?;
    let at = |i: usize| Worst { theta: thetas[i], excess: samples[i] };
    // A NaN is growth: it is neither above nor below a neighbour, so it is looked for by itself.
    if let Some(i) = samples.iter().position(|e| e.value.is_nan()) {
        return Ok(at(i));
    }
    let mut worst = at(0);
    (1..samples.len()).for_each(|i| worst = larger(worst, at(i)));
    // Two roots that meet on the unit circle part from it like a square root, over a stretch of theta that no sample may hit. Where they
    // come close, their uncertainty has a maximum, so its peaks are followed too.
    for key in [score as fn(&Excess) -> f64, closeness] {
        for i in peaks(&samples, key) {
            let ends = (thetas[i.saturating_sub(1)], thetas[(i + 1).min(thetas.len() - 1)]);
            worst = larger(worst, golden_section(&mut excess, ends, key)?);
        }
    }
    Ok(worst)
}

/// Growth beyond its uncertainty.
fn score(e: &Excess) -> f64 {
    e.value - e.uncertainty
}

/// Uncertainty beyond what rounding gives to well-separated roots.
fn closeness(e: &Excess) -> f64 {
    e.uncertainty.max(64.0 * f64::EPSILON)
}

fn larger(a: Worst, b: Worst) -> Worst {
    if score(&b.excess) > score(&a.excess) { b } else { a }
}

/// Indices of the largest local maxima; a constant has none.
fn peaks(samples: &[Excess], key: fn(&Excess) -> f64) -> Vec<usize> {
    let keys: Vec<f64> = samples.iter().map(key).collect();
    let last = keys.len() - 1;
    let (before, after) = (|i: usize| keys[i.max(1) - 1], |i: usize| keys[(i + 1).min(last)]);
    let is_peak =
        |&i: &usize| keys[i] >= before(i) && keys[i] >= after(i) && (keys[i] > before(i) || keys[i] > after(i));
    let mut peaks: Vec<usize> = (0..=last).filter(is_peak).collect();
    peaks.sort_by(|&i, &j| keys[j].total_cmp(&keys[i]));
    peaks.truncate(REFINED);
    peaks
}

fn golden_section<E>(
    excess: &mut impl FnMut(f64) -> Result<Excess, E>,
    (mut low, mut high): (f64, f64),
    key: fn(&Excess) -> f64,
) -> Result<Worst, E> {
    let share = 0.5 * (5.0_f64.sqrt() - 1.0);
    let mut sample = |theta: f64| excess(theta).map(|excess| Worst { theta, excess });
    let mut left = sample(high - share * (high - low))?;
    let mut right = sample(low + share * (high - low))?;
    let mut worst = larger(left, right);
    // A maximum is flat: theta to 1e-8 of the bracket gives its height to 1e-16.
    for _ in 0..40 {
        if key(&left.excess) >= key(&right.excess) {
            (high, right) = (right.theta, left);
            left = sample(high - share * (high - low))?;
            worst = larger(worst, left);
        } else {
            (low, left) = (left.theta, right);
            right = sample(low + share * (high - low))?;
            worst = larger(worst, right);
        }
    }
    Ok(worst)
}
