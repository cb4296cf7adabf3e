//! Stable steps of a semi-discrete scheme u' = L u with a time integrator, from the eigenvalues of its symbol.
//!
//! A step dt is stable where z = lambda(theta) dt lies in the integrator's stability region for every theta. At long waves damping and
//! growth are both tiny, and decide together whether there is a stable step at all; so the damping of a one-component stencil is summed as a
//! polynomial in w = 4 sin^2(theta/2) whose coefficients that vanish by consistency are exactly zero.

use super::search::{Scan, StableSet, search};
use super::trigonometric::chebyshev;
use crate::analysis::eigen::{DecompositionError, Excess, eigenvalues};
use crate::analysis::integrators::Integrator;
use crate::analysis::symbol::Stencil;
use num_complex::Complex64;
use std::convert::Infallible;
use std::f64::consts::PI;

/// An eigenvalue of the rate at some theta, with the bound on the error of its real part.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RateEigenvalue {
    /// lambda, per unit of time.
    pub value: Complex64,
    /// Bound on the error of its real part.
    pub uncertainty: f64,
}

/// The symbol of a one-component, one-dimensional rate at any theta.
#[derive(Debug, Clone, PartialEq)]
pub struct RateSymbol {
    /// Coefficients of cos(k theta), k = 0, 1, ...: damping.
    even: Vec<f64>,
    /// Coefficients of sin(k theta), k = 0, 1, ...: dispersion.
    odd: Vec<f64>,
    /// Damping as a polynomial in w; empty where the stencil is too wide to keep its digits.
    polynomial: Vec<f64>,
    /// Bounds on the errors of the coefficients of the polynomial that are not zero.
    errors: Vec<f64>,
    /// Bound on the error of the cosine series.
    series_error: f64,
}

/// Widest reach whose polynomial in w keeps its digits.
const WIDEST: usize = 12;
/// Largest w at which the polynomial is used; at larger ones its terms cancel, and the series does not.
const LONG: f64 = 0.25;

impl RateSymbol {
    /// The symbol of a stencil; `None` unless it has one component in one dimension.
    ///
    /// `relative_noise` is the error of the coefficients relative to the largest, at least eps.
    pub fn from_stencil(stencil: &Stencil, relative_noise: f64) -> Option<Self> {
        if stencil.components() != 1 || stencil.dimensions() != 1 {
            return None;
        }
        let reach = stencil.neighbours().map(|(d, _)| d[0].unsigned_abs() as usize).max()?;
        let (mut even, mut odd, mut largest) = (vec![0.0; reach + 1], vec![0.0; reach + 1], 0.0_f64);
        for (offset, c) in stencil.neighbours() {
            let k = offset[0].unsigned_abs() as usize;
            even[k] += c[0];
            odd[k] += c[0] * offset[0].signum() as f64;
            largest = largest.max(c[0].abs());
        }
        let noise = 8.0 * relative_noise.max(f64::EPSILON) * largest;
        // A scheme without damping has none at all, not some of the size of rounding. The sum of the coefficients cancels by consistency
        // and is seen to in the polynomial.
        if even[1..].iter().all(|e| e.abs() <= noise) && even[0].abs() <= noise {
            even.fill(0.0);
        }
        let (polynomial, errors) = if reach <= WIDEST { in_w(&even, noise) } else { (Vec::new(), Vec::new()) };
        let series_error = if even.iter().all(|e| *e == 0.0) { 0.0 } else { noise * (reach + 1) as f64 };
        Some(RateSymbol { even, odd, polynomial, errors, series_error })
    }

    /// lambda(theta).
    pub fn at(&self, theta: f64) -> RateEigenvalue {
        let w = 4.0 * (0.5 * theta).sin().powi(2);
        let sum = |q: &[f64]| q.iter().rev().fold(0.0, |sum, q| sum * w + q);
        let (damping, uncertainty) = if w <= LONG && !self.polynomial.is_empty() {
            (sum(&self.polynomial), sum(&self.errors))
        } else {
            let terms = self.even.iter().enumerate().map(|(k, e)| e * (k as f64 * theta).cos());
            (terms.sum(), self.series_error)
        };
        let turning: f64 = self.odd.iter().enumerate().map(|(k, o)| o * (k as f64 * theta).sin()).sum();
        RateEigenvalue { value: Complex64::new(damping, turning), uncertainty }
    }
}

/// A cosine series as a polynomial in w = 4 sin^2(theta/2), with coefficients within rounding set to zero, and the errors of the others.
fn in_w(even: &[f64], noise: f64) -> (Vec<f64>, Vec<f64>) {
    let (mut q, mut sizes) = (vec![0.0; even.len()], vec![0.0; even.len()]);
    for (k, e) in even.iter().enumerate() {
        for (n, c) in chebyshev(k).into_iter().enumerate() {
            q[n] += e * c;
            sizes[n] += noise * c.abs();
        }
    }
    for (q, size) in q.iter_mut().zip(&mut sizes) {
        if q.abs() <= *size {
            (*q, *size) = (0.0, 0.0);
        }
    }
    (q, sizes)
}

/// Equal divisions of [0, pi]; a multiple of 12, so that pi, pi/2, pi/3 and pi/4 are among them.
const DIVISIONS: usize = 480;
/// Halvings below the first division: growth that begins at long waves is seen down to theta of about 1e-6.
const HALVINGS: usize = 12;
/// Maxima of the samples that are refined.
const REFINED: usize = 4;

/// The eigenvalues of a rate at all theta in [0, pi]; those of a real scheme at -theta are their conjugates, and grow alike.
pub struct RateSpectrum {
    samples: Vec<(f64, Vec<RateEigenvalue>)>,
    anywhere: Option<Anywhere>,
}

type Anywhere = Box<dyn Fn(f64) -> Vec<RateEigenvalue>>;

impl RateSpectrum {
    /// The spectrum of a 1-D stencil, at any theta.
    ///
    /// # Errors
    /// A block that is not finite, or whose eigenvalues do not converge.
    pub fn from_stencil(stencil: Stencil, relative_noise: f64) -> Result<Self, DecompositionError> {
        let anywhere: Anywhere = match RateSymbol::from_stencil(&stencil, relative_noise) {
            Some(symbol) => Box::new(move |theta| vec![symbol.at(theta)]),
            None => {
                eigenvalues(&stencil.symbol([1.0, 0.0, 0.0]))?;
                Box::new(move |theta| of_block(&stencil, theta, relative_noise))
            }
        };
        let mut thetas: Vec<f64> = (0..=DIVISIONS).map(|i| PI * i as f64 / DIVISIONS as f64).collect();
        let first = thetas[1];
        thetas.splice(1..1, (1..=HALVINGS).rev().map(|i| first * 0.5_f64.powi(i as i32)));
        let samples = thetas.into_iter().map(|theta| (theta, anywhere(theta))).collect();
        Ok(RateSpectrum { samples, anywhere: Some(anywhere) })
    }

    /// The spectrum at the wavenumbers of grids alone, (theta, eigenvalues), for a rate whose response is not short.
    pub fn from_samples(samples: Vec<(f64, Vec<RateEigenvalue>)>) -> Self {
        RateSpectrum { samples, anywhere: None }
    }

    /// The largest growth in a step `step` of `integrator` over all theta.
    pub fn excess(&self, integrator: &Integrator, step: f64) -> Excess {
        let of =
            |all: &[RateEigenvalue]| all.iter().map(|lambda| growth(integrator, lambda, step)).fold(NOTHING, larger);
        let sampled: Vec<Excess> = self.samples.iter().map(|(_, all)| of(all)).collect();
        let worst = sampled.iter().copied().fold(NOTHING, larger);
        let Some(anywhere) = &self.anywhere else { return worst };
        let score = |e: &Excess| e.value - e.uncertainty;
        let last = sampled.len() - 1;
        let is_peak = |&i: &usize| {
            let (before, after) = (score(&sampled[i.max(1) - 1]), score(&sampled[(i + 1).min(last)]));
            let own = score(&sampled[i]);
            own >= before && own >= after && (own > before || own > after)
        };
        let mut peaks: Vec<usize> = (0..=last).filter(is_peak).collect();
        peaks.sort_by(|a, b| score(&sampled[*b]).total_cmp(&score(&sampled[*a])));
        let refined = peaks.iter().take(REFINED).map(|i| {
            let ends = (self.samples[i.max(&1) - 1].0, self.samples[(i + 1).min(last)].0);
            golden(|theta| of(&anywhere(theta)), ends)
        });
        refined.fold(worst, larger)
    }

    /// The steps that are stable with `integrator`; s in the scan means the step s x `step_of_one`.
    pub fn stable_set(&self, integrator: &Integrator, step_of_one: f64, scan: Scan) -> StableSet {
        let Ok(set) = search(|s| Ok::<_, Infallible>(self.excess(integrator, s * step_of_one)), scan);
        set
    }
}

const NOTHING: Excess = Excess { value: -1.0, uncertainty: 0.0 };

/// The larger excess beyond uncertainty; NaN is growth.
fn larger(a: Excess, b: Excess) -> Excess {
    if a.value.is_nan() || b.value.is_nan() {
        return Excess { value: f64::INFINITY, uncertainty: 0.0 };
    }
    if b.value - b.uncertainty > a.value - a.uncertainty { b } else { a }
}

fn growth(integrator: &Integrator, lambda: &RateEigenvalue, step: f64) -> Excess {
    let excess = integrator.excess(lambda.value * step);
    // |R'| is about one within a stability region, and below two at its edge for the integrators in use.
    Excess { value: excess.value, uncertainty: excess.uncertainty + 2.0 * lambda.uncertainty * step }
}

fn of_block(stencil: &Stencil, theta: f64, relative_noise: f64) -> Vec<RateEigenvalue> {
    let block = stencil.symbol([theta, 0.0, 0.0]);
    let uncertainty = 16.0 * block.size() as f64 * relative_noise.max(f64::EPSILON) * block.frobenius_norm();
    let failed = || vec![Complex64::new(f64::NAN, 0.0)];
    let all = eigenvalues(&block).unwrap_or_else(|_| failed());
    all.into_iter().map(|value| RateEigenvalue { value, uncertainty }).collect()
}

fn golden(excess: impl Fn(f64) -> Excess, (mut low, mut high): (f64, f64)) -> Excess {
    let share = 0.5 * (5.0_f64.sqrt() - 1.0);
    let score = |e: &Excess| e.value - e.uncertainty;
    let at = |low: f64, high: f64| (high - share * (high - low), low + share * (high - low));
    let (mut left, mut right) = (excess(at(low, high).0), excess(at(low, high).1));
    let mut worst = larger(left, right);
    // A maximum is flat: theta to 1e-6 of the bracket gives its height to 1e-12.
    for _ in 0..30 {
        if score(&left) >= score(&right) {
            (high, right) = (at(low, high).1, left);
            left = excess(at(low, high).0);
            worst = larger(worst, left);
        } else {
            (low, left) = (at(low, high).0, right);
            right = excess(at(low, high).1);
            worst = larger(worst, right);
        }
    }
    worst
}

#[cfg(test)]
mod tests {
    //! Trusted: closed forms of the symbols; limits of [`super::super::semi_discrete_tests`], which use analytic symbols instead of stencils.
    use super::*;
    use crate::analysis::compare::agree;
    use crate::analysis::integrators::by_name;
    use crate::analysis::stability::StableRange;

    fn limit(neighbours: &[(i64, f64)], name: &str) -> f64 {
        let spectrum = RateSpectrum::from_stencil(Stencil::scalar_1d(neighbours), f64::EPSILON).unwrap();
        match spectrum.stable_set(&by_name(name).unwrap(), 1.0, Scan::default()).range {
            StableRange::LimitedTo { limit, .. } => limit,
            StableRange::NoStableStep { .. } => 0.0,
            StableRange::Unlimited => f64::INFINITY,
        }
    }

    #[test]
    fn the_symbol_keeps_the_damping_of_long_waves() {
        // Biased third order: damping 4/3 sin^4(theta/2), which is 8e-18 at theta = 1e-4.
        let upwind3 = Stencil::scalar_1d(&[(-2, -1.0 / 6.0), (-1, 1.0), (0, -0.5), (1, -1.0 / 3.0)]);
        let symbol = RateSymbol::from_stencil(&upwind3, f64::EPSILON).unwrap();
        for theta in [1e-4_f64, 0.1, 1.0, 3.0] {
            let expected = -4.0 / 3.0 * (0.5 * theta).sin().powi(4);
            agree(symbol.at(theta).value.re / expected, 1.0, 1e-12).unwrap();
            agree(symbol.at(theta).value.im, -(8.0 * theta.sin() - (2.0 * theta).sin()) / 6.0, 1e-15).unwrap();
        }
    }

    #[test]
    fn limits_of_stencils_with_integrators() {
        let upwind1 = [(-1, 1.0), (0, -1.0)];
        let central2 = [(-1, 0.5), (1, -0.5)];
        let upwind3 = [(-2, -1.0 / 6.0), (-1, 1.0), (0, -0.5), (1, -1.0 / 3.0)];
        for (name, expected) in [("rk1", 1.0), ("rk4", 1.392_646_781_702_641), ("ab2", 0.5), ("ab3", 3.0 / 11.0)] {
            agree(limit(&upwind1, name), expected, 1e-6).map_err(|e| format!("upwind, {name}: {e}")).unwrap();
        }
        let ab3 = 12.0 / (5.0 * 11.0_f64.sqrt());
        for (name, expected) in
            [("rk1", 0.0), ("rk2", 0.0), ("ssp-rk3", 3.0_f64.sqrt()), ("rk5", 0.0), ("ab2", 0.0), ("ab3", ab3)]
        {
            agree(limit(&central2, name), expected, 1e-6).map_err(|e| format!("central, {name}: {e}")).unwrap();
        }
        for (name, expected) in
            [("rk1", 0.0), ("rk2", (2.0_f64 / 3.0).cbrt()), ("rk3", 1.625_890_666), ("ab3", 0.396_517_92)]
        {
            agree(limit(&upwind3, name), expected, 1e-6).map_err(|e| format!("upwind 3, {name}: {e}")).unwrap();
        }
    }
}
