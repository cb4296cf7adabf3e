//! The modes of a scheme's rate in one dimension, from impulses; of a nonlinear rate, one wave at a time.

use gridassay_scheme::Operation;
use num_complex::Complex64;

use super::exact::Exact;
use super::nonlinear;
use crate::analysis::branches::{Branch, follow, pair_with_exact};
use crate::analysis::dispersion::resolving_efficiency;
use crate::analysis::integrators;
use crate::analysis::matrix::Matrix;
use crate::analysis::stability::RateSymbol;
use crate::analysis::symbol::SampledSymbol;
use crate::claims::ModesRequest;
use crate::host::Session;
use crate::record::{RateMode, SemiDiscrete, StepNumber};
use crate::studies::cellwise::Cellwise;
use crate::studies::semi_discrete::{Rate, one};
use crate::studies::setting::{Numbers, Setting};
use crate::studies::{Stop, impulse, linearity};

/// Wavenumbers over which branches are paired with exact ones.
const LONG_WAVES: usize = 6;

/// The relative errors at which the resolving efficiency is told, as in Lele's table.
const TOLERANCES: [f64; 3] = [0.1, 0.01, 0.001];

/// How far the ranges of integrators are scanned.
const SCAN_TO: f64 = 4.0;

/// Measures the modes of the rate; `None` where the scheme offers none for this case. Ranges with integrators are predicted where
/// `with_ranges` is set.
///
/// # Errors
/// The scheme failed.
pub fn measure(
    session: &mut Session,
    request: &ModesRequest,
    seed: u64,
    with_ranges: bool,
) -> Result<Option<SemiDiscrete>, Stop> {
    let numbers = Numbers { courant: request.courant, diffusion: request.diffusion_number };
    let (equation, fixed, cells) = (&request.equation, &request.parameters, &request.cells);
    let setting = match Setting::asking_for(Operation::Rate, session, equation, fixed, cells, numbers) {
        Err(Stop::NotOffered(_)) => return Ok(None),
        other => other?,
    };
    if cells.len() != 1 {
        return Ok(None);
    }
    let nodes = setting.prepare(session)?;
    let cellwise = Cellwise::new(&setting.offer, nodes.as_ref(), cells);
    let linear = linearity::trial(session, &setting, &cellwise, seed)?.is_linear() && !request.mode_by_mode;
    let mut found = SemiDiscrete { linear, ..SemiDiscrete::default() };
    let exact = Exact::new(&setting)?;
    found.modes = if linear {
        let symbol = SampledSymbol::from_responses(&impulse::responses(session, &setting, &cellwise)?);
        from_symbol(&symbol, &setting, &exact)?
    } else if setting.names.len() == 1 && cellwise.per_direction == 1 {
        wave_by_wave(session, &setting, &exact)?
    } else {
        Vec::new()
    };
    let real_parts = found.modes.iter().filter_map(|mode| Some(mode.modified_wavenumber?[0]));
    found.largest_modified_wavenumber = real_parts.fold(None, |a: Option<f64>, b| Some(a.map_or(b, |a| a.max(b))));
    if linear {
        symbol_at_large(session, request, seed, with_ranges, &setting, &mut found)?;
    }
    Ok(Some(found))
}

/// Resolving efficiency and predicted ranges, from the symbol at any theta.
fn symbol_at_large(
    session: &mut Session,
    request: &ModesRequest,
    seed: u64,
    with_ranges: bool,
    setting: &Setting,
    found: &mut SemiDiscrete,
) -> Result<(), Stop> {
    let number = if setting.numbers.courant.is_some() { StepNumber::Courant } else { StepNumber::DiffusionNumber };
    // Where both numbers were given the diffusivity follows from them, and stands among the setting's parameters.
    let parameters = if request.courant.is_some() && request.diffusion_number.is_some() {
        &setting.parameters
    } else {
        &request.parameters
    };
    let Some(rate) = Rate::read(session, &request.equation, parameters, one(number), seed)? else { return Ok(()) };
    let symbol = rate.stencil.as_ref().and_then(|stencil| RateSymbol::from_stencil(stencil, rate.noise));
    if let (Some(symbol), Some(scale)) = (symbol, advective_scale(&rate.setting)) {
        let modified = |theta: f64| Complex64::I * symbol.at(theta).value * scale;
        found.resolving_efficiency =
            TOLERANCES.iter().map(|within| (*within, resolving_efficiency(modified, *within))).collect();
    }
    if with_ranges {
        found.number = Some(number);
        found.predicted = integrators::NAMES.iter().filter_map(|name| rate.predict(name, SCAN_TO)).collect();
    }
    Ok(())
}

/// h / a where a scalar is carried along and nothing else happens to it.
fn advective_scale(setting: &Setting) -> Option<f64> {
    let velocity = setting.parameters.get("velocity")?[0];
    let spreads = setting.parameters.get("diffusivity").is_some_and(|nu| nu[0] != 0.0);
    (setting.names.len() == 1 && velocity != 0.0 && !spreads).then(|| setting.case.grid.spacing(0) / velocity)
}

fn from_symbol(symbol: &SampledSymbol, setting: &Setting, exact: &Exact<'_>) -> Result<Vec<RateMode>, Stop> {
    let count = symbol.grid().count();
    let theta = |at: usize| symbol.grid().theta(at)[0];
    let mut modes = Vec::new();
    for sign in [-1.0, 1.0] {
        let mut line: Vec<usize> = (0..count).filter(|at| sign * theta(*at) >= 0.0).collect();
        line.sort_by(|a, b| (sign * theta(*a)).total_cmp(&(sign * theta(*b))));
        let blocks: Vec<Matrix> = line.iter().map(|at| symbol.block(*at)).collect();
        let thetas: Vec<f64> = line.iter().map(|at| theta(*at)).collect();
        let mut branches = if symbol.components() == 1 {
            let values = blocks.iter().map(|block| block.at(0, 0)).collect();
            vec![Branch { values, vectors: vec![vec![Complex64::ONE]; blocks.len()], exact: None }]
        } else {
            follow(&blocks).map_err(|error| Stop::Analysis(error.to_string()))?
        };
        let due: Vec<_> = thetas.iter().map(|theta| exact.branches(&[*theta])).collect::<Result<_, Stop>>()?;
        let rates: Vec<Vec<Complex64>> =
            (0..due[0].len()).map(|e| due.iter().map(|all| -Complex64::I * all[e].omega).collect()).collect();
        pair_with_exact(&mut branches, &rates, LONG_WAVES.min(thetas.len()));
        let mut computational = 0;
        for branch in &branches {
            computational += usize::from(branch.exact.is_none());
            let name =
                branch.exact.map_or_else(|| format!("computational {computational}"), |e| due[0][e].name.clone());
            let kept = (0..thetas.len()).filter(|at| sign > 0.0 || thetas[*at] < 0.0);
            modes.extend(kept.map(|at| {
                rate_mode(setting, thetas[at], &name, branch.values[at], branch.exact.map(|e| rates[e][at]), None)
            }));
        }
    }
    modes.sort_by(|a, b| a.branch.cmp(&b.branch).then(a.theta.total_cmp(&b.theta)));
    Ok(modes)
}

fn wave_by_wave(session: &mut Session, setting: &Setting, exact: &Exact<'_>) -> Result<Vec<RateMode>, Stop> {
    let cells = setting.case.grid.cells[0];
    let mut modes = Vec::new();
    for wave in 0..=cells / 2 {
        let theta = 2.0 * std::f64::consts::PI * wave as f64 / cells as f64;
        let (rate, leaked) = nonlinear::response(session, setting, cells, wave, nonlinear::AMPLITUDE)?;
        let due = -Complex64::I * exact.branches(&[theta])?[0].omega;
        modes.push(rate_mode(setting, theta, &setting.names[0], rate, Some(due), Some(leaked)));
    }
    Ok(modes)
}

fn rate_mode(
    setting: &Setting,
    theta: f64,
    branch: &str,
    rate: Complex64,
    exact: Option<Complex64>,
    leaked: Option<f64>,
) -> RateMode {
    let h = setting.case.grid.spacing(0);
    let diffusivity = setting.parameters.get("diffusivity").map(|nu| nu[0]).filter(|nu| *nu > 0.0);
    let modified = match (advective_scale(setting), diffusivity) {
        _ if exact.is_none() => None,
        (Some(scale), _) => Some(Complex64::I * rate * scale),
        (None, Some(nu)) if setting.case.equation == "diffusion" => Some((-rate * (h * h / nu)).sqrt()),
        _ => None,
    };
    let parts = |z: Complex64| [z.re, z.im];
    RateMode {
        theta,
        branch: branch.to_owned(),
        rate: parts(rate),
        exact_rate: exact.map(parts),
        modified_wavenumber: modified.filter(|k| k.is_finite()).map(parts),
        leaked,
    }
}
