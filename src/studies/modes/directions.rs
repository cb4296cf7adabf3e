//! Waves in every direction, evaluated from the stencil, in two and three dimensions.

use std::f64::consts::{PI, TAU};

use num_complex::Complex64;

use super::exact::Exact;
use crate::analysis::branches::{Branch, follow, pair_with_exact};
use crate::analysis::dispersion::{Mode, errors};
use crate::analysis::matrix::Matrix;
use crate::analysis::symbol::Stencil;
use crate::record::{DirectedQuantity, DirectionRecord, WorstDirection, finite};
use crate::studies::Stop;
use crate::studies::setting::Setting;

/// Wavelengths that are looked at, over the largest cell width.
const POINTS: [f64; 4] = [4.0, 8.0, 16.0, 32.0];

/// Directions in the plane: every five degrees, so that axes, diagonals and generic ones are among them.
const IN_THE_PLANE: usize = 72;

/// Directions in space.
const IN_SPACE: usize = 200;

/// Waves between the mean and the wave asked about, along which phases and branches are followed.
const ALONG: usize = 16;

/// All waves, branch by branch.
///
/// # Errors
/// The equation has no dispersion relation, or eigenvalues could not be found.
pub fn waves(setting: &Setting, exact: &Exact<'_>, stencil: &Stencil) -> Result<Vec<DirectionRecord>, Stop> {
    let mut all = Vec::new();
    for points in POINTS {
        let mut of_wavelength = Vec::new();
        for direction in directions(setting.case.dimensions) {
            of_wavelength.extend(Ray { setting, exact, stencil, points, direction: &direction }.waves()?);
        }
        let fastest = of_wavelength.iter().map(|(_, speed, _)| speed.abs()).fold(0.0, f64::max);
        all.extend(of_wavelength.into_iter().map(|(mut record, speed, lead)| {
            record.phase_speed_error = (fastest > 0.0).then(|| lead * speed.signum() / fastest).and_then(finite);
            record
        }));
    }
    all.sort_by(|a, b| a.branch.cmp(&b.branch));
    Ok(all)
}

/// The direction of the largest error, for each branch, quantity and wavelength.
pub fn worst(waves: &[DirectionRecord]) -> Vec<WorstDirection> {
    let mut branches: Vec<&str> = waves.iter().map(|wave| wave.branch.as_str()).collect();
    branches.dedup();
    let mut found = Vec::new();
    for branch in branches {
        for quantity in DirectedQuantity::ALL {
            for points in POINTS {
                let own = waves.iter().filter(|w| w.branch == branch && w.points_per_wavelength == points);
                let errors = own.filter_map(|wave| Some((quantity.error(wave)?, wave)));
                let largest = errors.max_by(|a, b| a.0.abs().total_cmp(&b.0.abs()));
                found.extend(largest.map(|(error, wave)| WorstDirection {
                    branch: branch.to_owned(),
                    quantity,
                    points_per_wavelength: points,
                    direction: wave.direction.clone(),
                    error,
                }));
            }
        }
    }
    found
}

/// Unit vectors: evenly round the circle; in space on a spiral that covers the sphere evenly (Fibonacci's; common practice), with the axes.
fn directions(dimensions: usize) -> Vec<Vec<f64>> {
    if dimensions == 2 {
        let angle = |i: usize| TAU * i as f64 / IN_THE_PLANE as f64;
        return (0..IN_THE_PLANE).map(|i| vec![angle(i).cos(), angle(i).sin()]).collect();
    }
    let golden = PI * (3.0 - 5.0_f64.sqrt());
    let spiral = (0..IN_SPACE).map(|i| {
        let z = 1.0 - (2.0 * i as f64 + 1.0) / IN_SPACE as f64;
        let radius = (1.0 - z * z).sqrt();
        vec![radius * (golden * i as f64).cos(), radius * (golden * i as f64).sin(), z]
    });
    let axis = |d: usize| (0..3).map(|e| f64::from(u8::from(d == e))).collect();
    (0..3).map(axis).chain(spiral).collect()
}

/// The waves from the mean to one wavelength in one direction.
struct Ray<'a> {
    setting: &'a Setting,
    exact: &'a Exact<'a>,
    stencil: &'a Stencil,
    points: f64,
    direction: &'a [f64],
}

impl Ray<'_> {
    /// For each branch its record, its exact phase in a step and its phase error in a step, at the end of the ray.
    fn waves(&self) -> Result<Vec<(DirectionRecord, f64, f64)>, Stop> {
        let thetas: Vec<Vec<f64>> = (0..=ALONG).map(|i| self.theta(i as f64 / ALONG as f64)).collect();
        let blocks: Vec<Matrix> = thetas.iter().map(|theta| self.stencil.symbol(padded(theta))).collect();
        let mut branches = if self.stencil.components() == 1 {
            let values = blocks.iter().map(|block| block.at(0, 0)).collect();
            vec![Branch { values, vectors: vec![vec![Complex64::ONE]; blocks.len()], exact: None }]
        } else {
            follow(&blocks).map_err(|error| Stop::Analysis(error.to_string()))?
        };
        let step = self.setting.step;
        let due: Vec<_> = thetas.iter().map(|theta| self.exact.branches(theta)).collect::<Result<_, Stop>>()?;
        let factor = |omega: Complex64| (-Complex64::I * omega * step).exp();
        let factors: Vec<Vec<Complex64>> =
            (0..due[0].len()).map(|e| due.iter().map(|all| factor(all[e].omega)).collect()).collect();
        pair_with_exact(&mut branches, &factors, thetas.len());
        let mut waves = Vec::new();
        for branch in &branches {
            let Some(e) = branch.exact else { continue };
            let mode = |i: usize| Mode {
                theta: i as f64 / ALONG as f64,
                factor: branch.values[i],
                derivative: None,
                exact: due[i][e].omega * step,
                exact_group: 0.0,
            };
            let modes: Vec<Mode> = (0..=ALONG).map(mode).collect();
            let errors = errors(&modes)[ALONG];
            let modulus = branch.values[ALONG].norm();
            let record = DirectionRecord {
                branch: due[ALONG][e].name.clone(),
                points_per_wavelength: self.points,
                direction: self.direction.to_vec(),
                modulus,
                damping_error: errors.damping,
                phase_speed_ratio: errors.phase_speed_ratio.and_then(finite),
                phase_speed_error: None,
                group_speed_ratio: self.group_speed_ratio(&thetas[ALONG], branches.len())?,
            };
            waves.push((record, due[ALONG][e].omega.re * step, errors.phase));
        }
        Ok(waves)
    }

    /// k h in each direction at a share of the way.
    fn theta(&self, share: f64) -> Vec<f64> {
        let grid = &self.setting.case.grid;
        let widths: Vec<f64> = (0..self.direction.len()).map(|axis| grid.spacing(axis)).collect();
        let wavenumber = TAU / (self.points * widths.iter().copied().fold(0.0, f64::max));
        self.direction.iter().zip(widths).map(|(d, h)| share * wavenumber * d * h).collect()
    }

    /// |d(i ln G)/dk| over |d omega/dk|, of a scalar scheme.
    fn group_speed_ratio(&self, theta: &[f64], branches: usize) -> Result<Option<f64>, Stop> {
        if branches != 1 {
            return Ok(None);
        }
        let factor = self.stencil.symbol(padded(theta)).at(0, 0);
        let (mut numerical, mut exact) = (0.0, 0.0);
        for axis in 0..theta.len() {
            let h = self.setting.case.grid.spacing(axis);
            let slope = self.stencil.derivative(padded(theta), axis).at(0, 0);
            numerical += (h * (slope / factor).im).powi(2);
            exact += (h * self.exact.slope(theta, axis, 0)?).powi(2);
        }
        Ok((exact > 0.0).then(|| (numerical / exact).sqrt()).and_then(finite))
    }
}

fn padded(theta: &[f64]) -> [f64; 3] {
    let mut all = [0.0; 3];
    all[..theta.len()].copy_from_slice(theta);
    all
}
