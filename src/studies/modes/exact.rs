//! What the equation itself does to a mode of the setting.

use std::f64::consts::PI;

use gridassay_reference::equation::Equation;
use gridassay_reference::equation::dispersion::{Branch, exact_branches};

use crate::studies::Stop;
use crate::studies::setting::Setting;

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

    /// The branches at k h = `theta`, omega in rad per unit of time.
    ///
    /// # Errors
    /// The equation has no dispersion relation.
    pub fn branches(&self, theta: &[f64]) -> Result<Vec<Branch>, Stop> {
        let grid = &self.setting.case.grid;
        let wavevector: Vec<f64> = theta.iter().enumerate().map(|(axis, theta)| theta / grid.spacing(axis)).collect();
        exact_branches(&self.equation, &self.setting.parameters, &wavevector)
            .map_err(|error| Stop::Request(error.to_string()))
    }

    /// Re d(omega dt) / dtheta of branch `index` in 1-D. The dispersion relations are polynomials of degree three at most on either side of
    /// k = 0, for which four one-sided values give the slope exactly but for rounding.
    ///
    /// # Errors
    /// As [`Exact::branches`].
    pub fn group(&self, theta: f64, index: usize) -> Result<f64, Stop> {
        // Towards larger |k|, so that the kink of |k| at zero is not crossed.
        let d = if theta < 0.0 { -PI / 8.0 } else { PI / 8.0 };
        let phase =
            |theta: f64| -> Result<f64, Stop> { Ok(self.branches(&[theta])?[index].omega.re * self.setting.step) };
        let values = [phase(theta)?, phase(theta + d)?, phase(theta + 2.0 * d)?, phase(theta + 3.0 * d)?];
        Ok((-11.0 * values[0] + 18.0 * values[1] - 9.0 * values[2] + 2.0 * values[3]) / (6.0 * d))
    }

    /// Re d(omega dt) / dtheta in direction `axis` of branch `index`, by central differences of fourth order over 0.01: exact for polynomials
    /// up to the fourth degree, and to about 1e-9 for waves of sound.
    ///
    /// # Errors
    /// As [`Exact::branches`].
    pub fn slope(&self, theta: &[f64], axis: usize, index: usize) -> Result<f64, Stop> {
        const D: f64 = 0.01;
        let phase = |shift: f64| -> Result<f64, Stop> {
            let mut moved = theta.to_vec();
            moved[axis] += shift * D;
            Ok(self.branches(&moved)?[index].omega.re * self.setting.step)
        };
        Ok((8.0 * (phase(1.0)? - phase(-1.0)?) - (phase(2.0)? - phase(-2.0)?)) / (12.0 * D))
    }

    /// The coefficients of (i theta)^n in -i omega dt of a scalar equation in 1-D: what the logarithm of G should be.
    pub fn series(&self) -> Vec<f64> {
        let parameter = |name: &str| self.setting.parameters.get(name).map_or(0.0, |values| values[0]);
        let (step, h) = (self.setting.step, self.setting.case.grid.spacing(0));
        let terms = [0.0, -parameter("velocity") * step / h, parameter("diffusivity") * step / (h * h)];
        let dispersion = -parameter("dispersion") * step / h.powi(3);
        [terms.as_slice(), &[dispersion]].concat()
    }
}
