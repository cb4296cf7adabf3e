//! The modes of a linear scheme, all from impulses.

use std::f64::consts::PI;

use gridassay_reference::equation::Equation;
use gridassay_reference::equation::dispersion::{Branch, exact_branches};

use super::quantities::{Wave, records};
use crate::analysis::symbol::{ImpulseResponses, SampledSymbol, Stencil};
use crate::host::Session;
use crate::record::{ModesRecord, StencilEntry};
use crate::studies::cellwise::Cellwise;
use crate::studies::setting::Setting;
use crate::studies::{Stop, impulse};

/// The longest stencil that is listed coefficient by coefficient.
const LISTED: usize = 64;

/// Measures G at every wavenumber of the grid.
pub fn measure(
    session: &mut Session,
    setting: &Setting,
    cellwise: &Cellwise,
    record: &mut ModesRecord,
) -> Result<(), Stop> {
    let responses = impulse::responses(session, setting, cellwise)?;
    record.stencil = stencil(&responses);
    let symbol = SampledSymbol::from_responses(&responses);
    let derivative = SampledSymbol::derivative(&responses, 0);
    let exact = Exact::new(setting)?;
    let mut order: Vec<usize> = (0..symbol.grid().count()).collect();
    order.sort_by(|a, b| symbol.grid().theta(*a)[0].total_cmp(&symbol.grid().theta(*b)[0]));
    let wave = |at: &usize| {
        let theta = symbol.grid().theta(*at)[0];
        let branch = &exact.branches(&[theta])?[0];
        Ok(Wave {
            theta: vec![theta],
            factor: symbol.entry(0, 0)[*at],
            derivative: Some(derivative.entry(0, 0)[*at]),
            omega: Some(branch.omega),
            group_speed: exact.group_speed(theta, 0)?,
            leaked: None,
        })
    };
    let waves: Vec<Wave> = order.iter().map(wave).collect::<Result<_, Stop>>()?;
    record.modes = records("u", &waves, setting.step, setting.case.grid.spacing(0));
    Ok(())
}

/// The coefficients as built, where the response is short.
fn stencil(responses: &ImpulseResponses) -> Vec<StencilEntry> {
    let Some(stencil) = Stencil::from_responses(responses, 0.0) else { return Vec::new() };
    let m = stencil.components();
    let dimensions = stencil.dimensions();
    let entries: Vec<StencilEntry> = stencil
        .neighbours()
        .flat_map(|(offset, block)| {
            let entry = move |(index, coefficient): (usize, &f64)| StencilEntry {
                offset: offset[..dimensions].to_vec(),
                output: index / m,
                input: index % m,
                coefficient: *coefficient,
            };
            block.iter().enumerate().filter(|(_, coefficient)| **coefficient != 0.0).map(entry).collect::<Vec<_>>()
        })
        .collect();
    if entries.len() > LISTED { Vec::new() } else { entries }
}

/// The exact branches of a setting's equation by theta.
pub struct Exact<'a> {
    equation: Equation,
    setting: &'a Setting,
}

impl<'a> Exact<'a> {
    /// The branches of the equation of `setting`.
    ///
    /// # Errors
    /// The equation is none of the contract's.
    pub fn new(setting: &'a Setting) -> Result<Self, Stop> {
        let equation = Equation::named(&setting.case.equation).map_err(|error| Stop::Request(error.to_string()))?;
        Ok(Self { equation, setting })
    }

    /// The branches at k h = `theta`.
    ///
    /// # Errors
    /// The equation has no dispersion relation.
    pub fn branches(&self, theta: &[f64]) -> Result<Vec<Branch>, Stop> {
        let grid = &self.setting.case.grid;
        let wavevector: Vec<f64> = theta.iter().enumerate().map(|(axis, theta)| theta / grid.spacing(axis)).collect();
        exact_branches(&self.equation, &self.setting.parameters, &wavevector)
            .map_err(|error| Stop::Request(error.to_string()))
    }

    /// d Re(omega) / dk of branch `index` in 1-D. The dispersion relations are polynomials of degree three at most on either side of k = 0, for which
    /// differences at k and k + 2d, extrapolated, are exact but for rounding.
    ///
    /// # Errors
    /// As [`Exact::branches`].
    pub fn group_speed(&self, theta: f64, index: usize) -> Result<Option<f64>, Stop> {
        let omega = |theta: f64| -> Result<f64, Stop> { Ok(self.branches(&[theta])?[index].omega.re) };
        // One-sided towards larger |k|, so that the kink of |k| at zero is not crossed.
        let d = if theta < 0.0 { -PI / 8.0 } else { PI / 8.0 };
        let values = [omega(theta)?, omega(theta + d)?, omega(theta + 2.0 * d)?, omega(theta + 3.0 * d)?];
        let slope = (-11.0 * values[0] + 18.0 * values[1] - 9.0 * values[2] + 2.0 * values[3]) / (6.0 * d);
        Ok(Some(slope * self.setting.case.grid.spacing(0)))
    }
}
