//! The largest growth in one step over all wavenumbers, as a function of the Courant or diffusion number.

use num_complex::Complex64;

use super::numbers;
use crate::analysis::eigen::{Excess, modulus_excess, spectral_excess};
use crate::analysis::matrix::Matrix;
use crate::analysis::powers::{Powers, powers};
use crate::analysis::stability::{StencilGrowth, Worst, worst_theta};
use crate::analysis::symbol::{ImpulseResponses, SampledSymbol, Stencil};
use crate::claims::StabilityRequest;
use crate::host::Session;
use crate::record::{Parameters, StepNumber, finite};
use crate::studies::cellwise::Cellwise;
use crate::studies::setting::{Setting, admitted};
use crate::studies::{Stop, impulse, linearity};

/// Cells of the grids on which impulses are run: the first holds any usual stencil; the others are asked where the response is not short, so that
/// more wavenumbers than one grid holds are tried. The worst theta of central differences is on a grid only when its cells divide by four.
const GRIDS: [usize; 4] = [96, 88, 92, 100];

/// Cells of the grid on which a response that does not end is tried, where it has not decayed on the first.
const WIDE: usize = 384;

/// Maxima over a grid that are followed between its wavenumbers: waves that neither grow nor decay, as the longest and the shortest of central
/// differences, are maxima below the limit too, and must not crowd out the one that grows next.
const REFINED: usize = 4;

/// Rounding of a stencil's coefficients by the scheme, relative to the largest: a step of several stages sums some dozens of terms.
const STEP_ROUNDING: f64 = 16.0 * f64::EPSILON;

/// Rounding of G by a step and a transform, relative to its size.
const ROUNDING: f64 = 256.0 * f64::EPSILON;

/// The growth of one scheme.
pub struct Growth<'a> {
    session: &'a mut Session,
    request: &'a StabilityRequest,
    number: StepNumber,
    cells: Vec<usize>,
    parameters: Parameters,
    not_linear: Option<String>,
    noise: f64,
    prepared: Option<(Setting, Cellwise)>,
    scanned: Vec<(f64, Option<f64>)>,
    refused_from: Option<f64>,
    used_all_grids: bool,
    is_wide: bool,
}

impl<'a> Growth<'a> {
    /// Tries linearity at a small step; the scheme's rounding noise is that of the trial.
    ///
    /// # Errors
    /// The scheme offers no such case, refused or failed.
    pub fn new(
        session: &'a mut Session,
        request: &'a StabilityRequest,
        number: StepNumber,
        seed: u64,
    ) -> Result<Self, Stop> {
        let cells = grids(session, &request.equation);
        // A generic small step: linearity is a property of the scheme, not of the step.
        let small = numbers(number, 0.0731_f64.min(0.5 * request.scan_to), request.held);
        let setting = Setting::new(session, &request.equation, &request.parameters, &cells[..1], small)?;
        let nodes = setting.prepare(session)?;
        let cellwise = Cellwise::new(&setting.offer, nodes.as_ref(), &cells[..1]);
        let trial = linearity::trial(session, &setting, &cellwise, seed)?;
        let noise = trial.superposition.max(trial.shift).max(STEP_ROUNDING);
        Ok(Self {
            session,
            request,
            number,
            cells,
            parameters: setting.parameters.clone(),
            not_linear: (!trial.is_linear()).then(|| trial.failing()),
            noise,
            prepared: Some((setting, cellwise)),
            scanned: Vec::new(),
            refused_from: None,
            used_all_grids: false,
            is_wide: false,
        })
    }

    /// The equation's parameters as used; one that follows from the numbers is that of the linearity trial.
    pub fn parameters(&self) -> Parameters {
        self.parameters.clone()
    }

    /// Why the scheme has no amplification factor, where it has none.
    pub fn not_linear(&self) -> Option<String> {
        self.not_linear.clone()
    }

    /// The grids that were used.
    pub fn cells(&self) -> Vec<usize> {
        let mut cells = if self.used_all_grids { self.cells.clone() } else { self.cells[..1].to_vec() };
        cells.extend(self.is_wide.then(|| admitted(self.session, &self.request.equation, WIDE)));
        cells
    }

    /// (number, largest modulus) as tried, ascending.
    pub fn scanned(&self) -> Vec<(f64, Option<f64>)> {
        let mut scanned = self.scanned.clone();
        scanned.sort_by(|a, b| a.0.total_cmp(&b.0));
        scanned.dedup_by(|a, b| a.0 == b.0);
        scanned
    }

    /// The smallest number that the scheme itself refused.
    pub fn refused_from(&self) -> Option<f64> {
        self.refused_from
    }

    /// The largest |G| - 1 at `value`; infinite where the scheme refuses the step or blows up within it.
    ///
    /// # Errors
    /// The scheme failed.
    pub fn excess(&mut self, value: f64) -> Result<Excess, Stop> {
        let unbounded = Excess { value: f64::INFINITY, uncertainty: 0.0 };
        match self.worst(value) {
            Ok(worst) => {
                self.scanned.push((value, finite(1.0 + worst.excess.value)));
                Ok(worst.excess)
            }
            Err(stop) if stop.is_step_refused() => {
                self.refused_from = Some(self.refused_from.map_or(value, |from| from.min(value)));
                Ok(unbounded)
            }
            Err(Stop::Analysis(_)) => {
                self.scanned.push((value, None));
                Ok(unbounded)
            }
            Err(stop) => Err(stop),
        }
    }

    /// k h of the mode that grows most at `value`; `None` where nothing grows or the scheme refuses.
    ///
    /// # Errors
    /// The scheme failed.
    pub fn worst_theta(&mut self, value: f64) -> Result<Option<f64>, Stop> {
        match self.worst(value) {
            Ok(worst) => Ok(finite(worst.theta.abs()).filter(|_| worst.excess.value > worst.excess.uncertainty)),
            Err(stop) if stop.is_step_refused() => Ok(None),
            Err(stop) => Err(stop),
        }
    }

    /// The power of n like which the powers of G(theta) grow at `value`, where an eigenvalue on the unit circle is defective.
    ///
    /// # Errors
    /// The scheme failed, or its eigenvalues could not be found.
    pub fn defect_at(&mut self, value: f64, theta: f64) -> Result<Option<f64>, Stop> {
        let responses = self.responses(self.cells[0], value)?;
        let Some(stencil) = Stencil::from_responses(&responses, 0.0).filter(|stencil| stencil.components() > 1) else {
            return Ok(None);
        };
        let found = powers(&stencil.symbol([theta, 0.0, 0.0]), self.noise);
        match found.map_err(|error| Stop::Analysis(error.to_string()))? {
            Powers::Defective { power } => Ok(finite(power)),
            Powers::Bounded { .. } | Powers::Exponential { .. } => Ok(None),
        }
    }

    fn worst(&mut self, value: f64) -> Result<Worst, Stop> {
        if !self.is_wide {
            let responses = self.responses(self.cells[0], value)?;
            if let Some(stencil) = Stencil::from_responses(&responses, 0.0) {
                return self.worst_of(&stencil);
            }
            if let Some((stencil, noise)) = self.decaying(&responses) {
                let both_signs = responses.components() > 1;
                return worst_theta(|theta| excess_of(&stencil.symbol([theta, 0.0, 0.0]), noise), both_signs);
            }
            self.is_wide = true;
        }
        let responses = self.responses(admitted(self.session, &self.request.equation, WIDE), value)?;
        if let Some((stencil, noise)) = self.decaying(&responses) {
            return refined(&SampledSymbol::from_responses(&responses), &stencil, noise);
        }
        self.used_all_grids = true;
        let mut worst = sampled(&SampledSymbol::from_responses(&responses), self.noise)?;
        for cells in self.cells.clone() {
            let other = sampled(&SampledSymbol::from_responses(&self.responses(cells, value)?), self.noise)?;
            if score(&other) > score(&worst) {
                worst = other;
            }
        }
        Ok(worst)
    }

    /// The stencil of a response that decays to rounding within half of the grid, as an implicit scheme's does, with the noise of its G.
    fn decaying(&self, responses: &ImpulseResponses) -> Option<(Stencil, f64)> {
        let m = responses.components();
        let largest = (0..m * m).flat_map(|p| responses.response(p / m, p % m)).fold(0.0_f64, |a, b| a.max(b.abs()));
        let stencil = Stencil::from_responses(responses, f64::EPSILON * largest)?;
        let noise = (self.noise * largest).max(ROUNDING * largest).max(stencil.dropped());
        Some((stencil, noise))
    }

    fn worst_of(&self, stencil: &Stencil) -> Result<Worst, Stop> {
        match StencilGrowth::new(stencil, self.noise) {
            Some(growth) => Ok(growth.worst()),
            None => worst_theta(|theta| excess_of(&stencil.symbol([theta, 0.0, 0.0]), self.noise), true),
        }
    }

    /// Impulse responses on `cells` at `value`; the scheme is asked to prepare only where the case differs from the last.
    fn responses(&mut self, cells: usize, value: f64) -> Result<ImpulseResponses, Stop> {
        let numbers = numbers(self.number, value, self.request.held);
        let (equation, fixed) = (&self.request.equation, &self.request.parameters);
        let setting = Setting::new(self.session, equation, fixed, &[cells], numbers)?;
        let same = self.prepared.as_ref().is_some_and(|(before, _)| before.case == setting.case);
        let cellwise = match (&self.prepared, same) {
            (Some((_, cellwise)), true) => cellwise.clone(),
            _ => {
                let nodes = setting.prepare(self.session)?;
                Cellwise::new(&setting.offer, nodes.as_ref(), &[cells])
            }
        };
        let responses = impulse::responses(self.session, &setting, &cellwise)?;
        self.prepared = Some((setting, cellwise));
        Ok(responses)
    }
}

/// Grids close to the wanted ones that the scheme admits.
fn grids(session: &Session, equation: &str) -> Vec<usize> {
    let mut grids: Vec<usize> = GRIDS.iter().map(|cells| admitted(session, equation, *cells)).collect();
    grids.dedup();
    grids
}

/// The spectral radius of a block less one; `noise` is the uncertainty of its entries.
fn excess_of(block: &Matrix, noise: f64) -> Result<Excess, Stop> {
    match block.size() {
        1 => Ok(scalar_excess(block.at(0, 0), noise)),
        _ => spectral_excess(block, noise).map_err(|error| Stop::Analysis(error.to_string())),
    }
}

fn scalar_excess(factor: Complex64, noise: f64) -> Excess {
    Excess { value: modulus_excess(factor), uncertainty: noise.max(ROUNDING * factor.norm()) }
}

/// Growth beyond its uncertainty.
fn score(worst: &Worst) -> f64 {
    worst.excess.value - worst.excess.uncertainty
}

/// The excess at every wavenumber of a grid, by rising theta.
fn all(symbol: &SampledSymbol, noise: f64) -> Result<Vec<Worst>, Stop> {
    let at = |at: usize| {
        let excess = excess_of(&symbol.block(at), noise)?;
        Ok(Worst { theta: symbol.grid().theta(at)[0], excess })
    };
    let mut all: Vec<Worst> = (0..symbol.grid().count()).map(at).collect::<Result<_, Stop>>()?;
    all.sort_by(|a, b| a.theta.total_cmp(&b.theta));
    Ok(all)
}

/// The worst wavenumber of a grid. NaN is growth.
pub(super) fn sampled(symbol: &SampledSymbol, noise: f64) -> Result<Worst, Stop> {
    let all = all(symbol, noise)?;
    let not_finite = all.iter().find(|worst| score(worst).is_nan()).copied();
    let largest = || all.iter().copied().max_by(|a, b| score(a).total_cmp(&score(b)));
    not_finite.or_else(largest).ok_or_else(|| Stop::Analysis("a grid without cells has no modes".to_owned()))
}

/// The worst wavenumber of all: the largest maxima over the grid, followed between its wavenumbers by golden-section search.
fn refined(symbol: &SampledSymbol, stencil: &Stencil, noise: f64) -> Result<Worst, Stop> {
    // The coefficients are real, so that -theta behaves as theta does.
    let mut all = all(symbol, noise)?;
    all.retain(|worst| worst.theta >= 0.0);
    let last = all.len() - 1;
    let mut worst = sampled(symbol, noise)?;
    let is_peak = |i: &usize| {
        let (before, own, after) = (score(&all[i.max(&1) - 1]), score(&all[*i]), score(&all[(i + 1).min(last)]));
        own >= before && own >= after && (own > before || own > after)
    };
    let mut peaks: Vec<usize> = (0..=last).filter(is_peak).collect();
    peaks.sort_by(|a, b| score(&all[*b]).total_cmp(&score(&all[*a])));
    for peak in peaks.into_iter().take(REFINED) {
        let (mut low, mut high) = (all[peak.max(1) - 1].theta, all[(peak + 1).min(last)].theta);
        let share = 0.5 * (5.0_f64.sqrt() - 1.0);
        let at = |theta: f64| -> Result<Worst, Stop> {
            Ok(Worst { theta, excess: excess_of(&stencil.symbol([theta, 0.0, 0.0]), noise)? })
        };
        let (mut left, mut right) = (at(high - share * (high - low))?, at(low + share * (high - low))?);
        // A maximum is flat: theta to 1e-6 of the bracket gives its height to 1e-12.
        for _ in 0..28 {
            worst = [left, right].into_iter().fold(worst, |a, b| if score(&b) > score(&a) { b } else { a });
            if score(&left) >= score(&right) {
                (high, right) = (right.theta, left);
                left = at(high - share * (high - low))?;
            } else {
                (low, left) = (left.theta, right);
                right = at(low + share * (high - low))?;
            }
        }
    }
    Ok(worst)
}
