//! The modes of a linear scheme, all from impulses.

use num_complex::Complex64;

use super::exact::Exact;
use crate::analysis::branches::{Branch, follow, pair_with_exact, shares};
use crate::analysis::dispersion::{Mode, errors};
use crate::analysis::matrix::Matrix;
use crate::analysis::symbol::{SampledSymbol, Stencil};
use crate::host::Session;
use crate::record::{ModeRecord, ModesRecord, StencilEntry, finite};
use crate::studies::cellwise::Cellwise;
use crate::studies::setting::Setting;
use crate::studies::{Stop, impulse};

/// The most coefficients of a stencil that are listed one by one.
const LISTED: usize = 64;

/// Wavenumbers over which branches are paired with exact ones: long waves, for which schemes are accurate.
const LONG_WAVES: usize = 6;

/// Measures G at every wavenumber of the grid.
///
/// # Errors
/// The scheme refused or failed, or its eigenvalues could not be found.
pub fn measure(
    session: &mut Session,
    setting: &Setting,
    cellwise: &Cellwise,
    offsets: &[f64],
    record: &mut ModesRecord,
) -> Result<(), Stop> {
    let responses = impulse::responses(session, setting, cellwise)?;
    let stencil = Stencil::from_responses(&responses, 0.0);
    record.stencil = stencil.as_ref().map(listed).unwrap_or_default();
    let symbol = SampledSymbol::from_responses(&responses);
    let line = Line { setting, exact: Exact::new(setting)?, symbol: &symbol, offsets };
    record.modes = match setting.case.dimensions {
        1 => line.along_one_direction(&SampledSymbol::derivative(&responses, 0))?,
        _ => line.everywhere()?,
    };
    if let Some(stencil) = stencil.as_ref().filter(|_| setting.case.dimensions > 1) {
        record.directions = super::directions::waves(setting, &line.exact, stencil)?;
        record.worst_directions = super::directions::worst(&record.directions);
    }
    record.modified_equation = super::modified::equation(setting, &line.exact, stencil.as_ref(), &record.modes);
    record.resolution = super::resolution::needed(setting, &line.exact, stencil.as_ref(), &record.modes)?;
    Ok(())
}

/// The coefficients one by one; empty where there are too many to read.
fn listed(stencil: &Stencil) -> Vec<StencilEntry> {
    let (m, dimensions) = (stencil.components(), stencil.dimensions());
    let of_block = |(offset, block): ([i64; 3], &[f64])| {
        let entry = |(index, coefficient): (usize, &f64)| StencilEntry {
            offset: offset[..dimensions].to_vec(),
            output: index / m,
            input: index % m,
            coefficient: *coefficient,
        };
        block.iter().enumerate().filter(|(_, coefficient)| **coefficient != 0.0).map(entry).collect::<Vec<_>>()
    };
    let entries: Vec<StencilEntry> = stencil.neighbours().flat_map(of_block).collect();
    if entries.len() > LISTED { Vec::new() } else { entries }
}

/// What the modes of one setting are read from.
struct Line<'a> {
    setting: &'a Setting,
    exact: Exact<'a>,
    symbol: &'a SampledSymbol,
    /// Where the values of a cell sit within it, as shares of the cell.
    offsets: &'a [f64],
}

impl Line<'_> {
    /// All wavenumbers of a 1-D grid, ascending in theta, branch by branch; phases are followed from theta = 0 in both directions.
    fn along_one_direction(&self, derivative: &SampledSymbol) -> Result<Vec<ModeRecord>, Stop> {
        let count = self.symbol.grid().count();
        let theta = |at: &usize| self.symbol.grid().theta(*at)[0];
        let mut upwards: Vec<usize> = (0..count).filter(|at| theta(at) >= 0.0).collect();
        upwards.sort_by(|a, b| theta(a).total_cmp(&theta(b)));
        let mut downwards: Vec<usize> = (0..count).filter(|at| theta(at) <= 0.0).collect();
        downwards.sort_by(|a, b| theta(b).total_cmp(&theta(a)));
        let mut modes = self.followed(&downwards, derivative)?;
        modes.retain(|mode| mode.theta[0] < 0.0);
        modes.extend(self.followed(&upwards, derivative)?);
        modes.sort_by(|a, b| a.branch.cmp(&b.branch).then(a.theta[0].total_cmp(&b.theta[0])));
        Ok(modes)
    }

    /// The branches through the wavenumbers `line`, which begins at theta = 0 and runs in one direction.
    fn followed(&self, line: &[usize], derivative: &SampledSymbol) -> Result<Vec<ModeRecord>, Stop> {
        let thetas: Vec<f64> = line.iter().map(|at| self.symbol.grid().theta(*at)[0]).collect();
        let blocks: Vec<Matrix> = line.iter().map(|at| self.symbol.block(*at)).collect();
        let mut branches = self.branches(&blocks)?;
        let exact: Vec<_> = thetas.iter().map(|theta| self.exact.branches(&[*theta])).collect::<Result<_, Stop>>()?;
        let factors: Vec<Vec<Complex64>> =
            (0..exact[0].len()).map(|e| exact.iter().map(|all| self.factor(all[e].omega)).collect()).collect();
        pair_with_exact(&mut branches, &factors, LONG_WAVES.min(thetas.len()));
        let mut records = Vec::new();
        let mut computational = 0;
        for (number, branch) in branches.iter().enumerate() {
            let name = match branch.exact {
                Some(e) => exact[0][e].name.clone(),
                None => {
                    computational += 1;
                    if branches.len() - exact[0].len() == 1 {
                        "computational".to_owned()
                    } else {
                        format!("computational {computational}")
                    }
                }
            };
            let modes = self.modes(line, &thetas, &branches, number, &exact, derivative)?;
            let share = |at: usize| self.share(&branches, number, at, thetas[at], &exact[at]);
            let of_branch = modes.iter().zip(errors(&modes)).enumerate();
            records.extend(of_branch.map(|(at, (mode, errors))| {
                mode_record(&name, &[mode.theta], mode.factor, branch.exact.map(|_| (mode.exact, errors)), share(at))
            }));
        }
        Ok(records)
    }

    /// The eigenvalue branches; of one component, the symbol itself.
    fn branches(&self, blocks: &[Matrix]) -> Result<Vec<Branch>, Stop> {
        if self.symbol.components() == 1 {
            let values = blocks.iter().map(|block| block.at(0, 0)).collect();
            return Ok(vec![Branch { values, vectors: vec![vec![Complex64::ONE]; blocks.len()], exact: None }]);
        }
        follow(blocks).map_err(|error| Stop::Analysis(error.to_string()))
    }

    fn factor(&self, omega: Complex64) -> Complex64 {
        (-Complex64::I * omega * self.setting.step).exp()
    }

    fn modes(
        &self,
        line: &[usize],
        thetas: &[f64],
        branches: &[Branch],
        number: usize,
        exact: &[Vec<gridassay_reference::equation::dispersion::Branch>],
        derivative: &SampledSymbol,
    ) -> Result<Vec<Mode>, Stop> {
        let branch = &branches[number];
        let mode = |(at, theta): (usize, &f64)| {
            let paired = branch.exact.map(|e| (exact[at][e].omega * self.setting.step, e));
            Ok(Mode {
                theta: *theta,
                factor: branch.values[at],
                derivative: eigenvalue_derivative(branches, number, at, &derivative.block(line[at])),
                exact: paired.map_or(Complex64::ZERO, |(omega, _)| omega),
                exact_group: paired.map_or(Ok(0.0), |(_, e)| self.exact.group(*theta, e))?,
            })
        };
        thetas.iter().enumerate().map(mode).collect()
    }

    /// The share of the branch in a wave that the equation would carry along, for one field: sampled at the values of a cell and at
    /// the older levels.
    fn share(
        &self,
        branches: &[Branch],
        number: usize,
        at: usize,
        theta: f64,
        exact: &[gridassay_reference::equation::dispersion::Branch],
    ) -> Option<f64> {
        if branches.len() < 2 || self.setting.names.len() != 1 {
            return None;
        }
        let back = 1.0 / self.factor(exact[0].omega);
        let level = |level: usize| {
            let older = back.powu(level as u32);
            self.offsets.iter().map(move |offset| older * Complex64::cis(theta * offset))
        };
        let state: Vec<Complex64> = (0..self.setting.offer.levels).flat_map(level).collect();
        shares(branches, at, &state).and_then(|shares| finite(shares[number]))
    }

    /// All wavevectors of a grid of two or three directions; of several components, the branch nearest to each exact one.
    fn everywhere(&self) -> Result<Vec<ModeRecord>, Stop> {
        let dimensions = self.setting.case.dimensions;
        let mut records = Vec::new();
        for at in 0..self.symbol.grid().count() {
            let theta = &self.symbol.grid().theta(at)[..dimensions];
            let mut branches = self.branches(&[self.symbol.block(at)])?;
            let exact = self.exact.branches(theta)?;
            let factors: Vec<Vec<Complex64>> = exact.iter().map(|branch| vec![self.factor(branch.omega)]).collect();
            pair_with_exact(&mut branches, &factors, 1);
            for branch in &branches {
                let Some(e) = branch.exact else { continue };
                let size = theta.iter().map(|theta| theta * theta).sum::<f64>().sqrt();
                let omega = exact[e].omega * self.setting.step;
                let factor = branch.values[0];
                let mode = Mode { theta: size, factor, derivative: None, exact: omega, exact_group: 0.0 };
                records.push(mode_record(&exact[e].name, theta, factor, Some((omega, errors(&[mode])[0])), None));
            }
        }
        Ok(records)
    }
}

/// The derivative of an eigenvalue: with the matrix X of eigenvectors, (X^-1 G' X) at the branch's place on the diagonal. `None` where the
/// eigenvectors are dependent.
fn eigenvalue_derivative(branches: &[Branch], number: usize, at: usize, derivative: &Matrix) -> Option<Complex64> {
    let m = branches.len();
    if m == 1 {
        return Some(derivative.at(0, 0));
    }
    let left = Matrix::from_fn(m, |row, column| branches[column].vectors[at][row]).inverse()?;
    let moved = derivative.apply(&branches[number].vectors[at]);
    let value: Complex64 = (0..m).map(|column| left.at(number, column) * moved[column]).sum();
    value.is_finite().then_some(value)
}

fn mode_record(
    branch: &str,
    theta: &[f64],
    factor: Complex64,
    exact: Option<(Complex64, crate::analysis::dispersion::Errors)>,
    share: Option<f64>,
) -> ModeRecord {
    let exact_factor = exact.map(|(omega, _)| (-Complex64::I * omega).exp());
    let errors = exact.map(|(_, errors)| errors);
    let size = theta.iter().map(|theta| theta * theta).sum::<f64>().sqrt();
    ModeRecord {
        theta: theta.to_vec(),
        branch: branch.to_owned(),
        amplification: [factor.re, factor.im],
        exact: exact_factor.map(|exact| [exact.re, exact.im]),
        modulus: factor.norm(),
        exact_modulus: exact_factor.map(|exact| exact.norm()),
        damping_error: errors.and_then(|errors| finite(errors.damping)),
        phase_error: errors.and_then(|errors| finite(errors.phase)),
        damping_error_per_period: errors.and_then(|errors| errors.damping_per_period).and_then(finite),
        phase_error_per_period: errors.and_then(|errors| errors.phase_per_period).and_then(finite),
        phase_speed_ratio: errors.and_then(|errors| errors.phase_speed_ratio).and_then(finite),
        group_speed_ratio: errors.and_then(|errors| errors.group_speed_ratio).and_then(finite),
        points_per_wavelength: finite(2.0 * std::f64::consts::PI / size),
        share,
        leaked: None,
    }
}

/// The record of a wave of a nonlinear scheme: its factor, and the share of energy that it loses to other wavenumbers.
pub fn scalar_records(branch: &str, modes: &[Mode], leaked: &[f64]) -> Vec<ModeRecord> {
    let record = |((mode, errors), leaked): ((&Mode, crate::analysis::dispersion::Errors), &f64)| ModeRecord {
        leaked: Some(*leaked),
        ..mode_record(branch, &[mode.theta], mode.factor, Some((mode.exact, errors)), None)
    };
    modes.iter().zip(errors(modes)).zip(leaked).map(record).collect()
}
