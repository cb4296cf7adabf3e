//! The rate of a semi-discrete scheme: its symbol, and the steps that time integrators could take with it.

use gridassay_scheme::Operation;

use super::cellwise::Cellwise;
use super::setting::{Numbers, Setting, admitted};
use super::{Stop, impulse, linearity};
use crate::analysis::eigen::eigenvalues;
use crate::analysis::integrators::by_name;
use crate::analysis::stability::{RateEigenvalue, RateSpectrum, Scan, StableRange};
use crate::analysis::symbol::{SampledSymbol, Stencil};
use crate::host::Session;
use crate::record::{Parameters, PredictedRange, StepNumber, WeakGrowth, finite};

/// Cells of the grid on which the symbol is read: the response of the usual compact differences decays to rounding within half of it.
const CELLS: usize = 160;

/// Rounding of a rate's coefficients, relative to the largest: differences, weights and a factor 1 / h.
const ROUNDING: f64 = 16.0 * f64::EPSILON;

/// The integrators that are tried where a scheme takes steps itself: each stability polynomial once.
pub const USUAL: [&str; 6] = ["rk1", "rk2", "rk3", "rk4", "ssp-rk3-four-stages", "low-storage-rk4"];

/// The rate of a scheme at every theta, in one dimension.
pub struct Rate {
    /// The setting that was asked for its rate.
    pub setting: Setting,
    /// The stencil as built, where the response is short.
    pub stencil: Option<Stencil>,
    /// The error of its coefficients, relative to the largest.
    pub noise: f64,
    spectrum: RateSpectrum,
}

impl Rate {
    /// Reads the symbol of the rate; `None` where the scheme offers no rate for this case, or one that is not linear and shift invariant.
    ///
    /// # Errors
    /// The scheme failed, or its eigenvalues could not be found.
    pub fn read(
        session: &mut Session,
        equation: &str,
        fixed: &Parameters,
        numbers: Numbers,
        seed: u64,
    ) -> Result<Option<Self>, Stop> {
        let cells = [admitted(session, equation, CELLS)];
        let setting = match Setting::asking_for(Operation::Rate, session, equation, fixed, &cells, numbers) {
            Err(Stop::NotOffered(_)) => return Ok(None),
            other => other?,
        };
        let nodes = setting.prepare(session)?;
        let cellwise = Cellwise::new(&setting.offer, nodes.as_ref(), &cells);
        let trial = linearity::trial(session, &setting, &cellwise, seed)?;
        if !trial.is_linear() {
            return Ok(None);
        }
        let noise = trial.superposition.max(trial.shift).max(ROUNDING);
        let responses = impulse::responses(session, &setting, &cellwise)?;
        let m = responses.components();
        let largest = (0..m * m).flat_map(|p| responses.response(p / m, p % m)).fold(0.0_f64, |a, b| a.max(b.abs()));
        let short = Stencil::from_responses(&responses, 0.0);
        let stencil = short.or_else(|| Stencil::from_responses(&responses, f64::EPSILON * largest));
        let spectrum = match stencil.clone() {
            Some(stencil) => RateSpectrum::from_stencil(stencil, noise).map_err(analysis)?,
            None => sampled(&SampledSymbol::from_responses(&responses), noise)?,
        };
        Ok(Some(Self { setting, stencil, noise, spectrum }))
    }

    /// The stable range with an integrator of [`crate::analysis::integrators::NAMES`]; the setting's step is that of number one.
    pub fn predict(&self, integrator: &str, scan_to: f64) -> Option<PredictedRange> {
        // The roots of multistep methods cost much more than a polynomial.
        let divisions = if integrator.starts_with("ab") { 50 } else { 100 };
        let scan = Scan { up_to: scan_to, divisions, ..Scan::default() };
        let set = self.spectrum.stable_set(&by_name(integrator)?, self.setting.step, scan);
        let (stable_up_to, weak_growth) = match set.range {
            StableRange::Unlimited => (None, None),
            StableRange::LimitedTo { limit, .. } => (Some(limit), None),
            StableRange::NoStableStep { growth } => (Some(0.0), growth.and_then(WeakGrowth::of)),
        };
        Some(PredictedRange { integrator: integrator.to_owned(), stable_up_to, weak_growth, is_the_measured: None })
    }
}

/// The number one of a kind, which makes a setting's step that of one unit.
pub fn one(number: StepNumber) -> Numbers {
    match number {
        StepNumber::Courant => Numbers { courant: Some(1.0), diffusion: None },
        StepNumber::DiffusionNumber => Numbers { courant: None, diffusion: Some(1.0) },
    }
}

fn analysis(error: impl std::fmt::Display) -> Stop {
    Stop::Analysis(error.to_string())
}

fn sampled(symbol: &SampledSymbol, noise: f64) -> Result<RateSpectrum, Stop> {
    let mut samples = Vec::new();
    for at in 0..symbol.grid().count() {
        let block = symbol.block(at);
        let uncertainty = 16.0 * block.size() as f64 * noise * block.frobenius_norm();
        let of = |value| RateEigenvalue { value, uncertainty };
        let all = eigenvalues(&block).map_err(analysis)?.into_iter().map(of).collect();
        samples.push((symbol.grid().theta(at)[0], all));
    }
    Ok(RateSpectrum::from_samples(samples))
}

impl WeakGrowth {
    /// The number at which the steps to tenfold growth are told.
    const TOLD_AT: f64 = 0.1;

    /// A law of growth as found; `None` where its figures are not finite.
    pub fn of(found: crate::analysis::stability::WeakGrowth) -> Option<Self> {
        Some(Self {
            power: finite(found.power)?,
            coefficient: finite(found.coefficient)?,
            steps_to_tenfold: finite(found.steps_until(10.0, Self::TOLD_AT))?,
        })
    }
}
