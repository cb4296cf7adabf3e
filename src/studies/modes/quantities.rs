//! What is read from an amplification factor: damping, phase and speeds against the exact ones.

use num_complex::Complex64;

use crate::analysis::eigen::modulus_excess;
use crate::record::{ModeRecord, finite};

/// One wave of one branch along one direction of wavevectors.
#[derive(Clone, Debug)]
pub struct Wave {
    /// k h for each direction.
    pub theta: Vec<f64>,
    /// Amplification factor in one step.
    pub factor: Complex64,
    /// dG/dtheta along the first direction, where it is known.
    pub derivative: Option<Complex64>,
    /// Exact angular frequency, in the convention exp(i (k x - omega t)); `None` for a branch that the equation does not have.
    pub omega: Option<Complex64>,
    /// Exact group speed along the first direction, d omega / dk.
    pub group_speed: Option<f64>,
    /// Share of the wave's energy that one step moves to other wavenumbers; 0 for a linear scheme.
    pub leaked: Option<f64>,
}

/// The records of the waves of one branch, in the order given: theta ascending through zero. `step` is dt, `width` is h.
///
/// The exact factor is E = exp(-i omega dt). The phase error is arg(G / E), followed continuously from theta = 0, where it is zero, so that large
/// Courant numbers do not wrap it; the phase-speed ratio is 1 - (phase error) / (Re omega dt), the group speed
/// Re(i G' / G) h / dt (Trefethen 1982, SIAM Review 24:113-136).
pub fn records(branch: &str, waves: &[Wave], step: f64, width: f64) -> Vec<ModeRecord> {
    let phase_errors = followed(waves, step);
    waves.iter().zip(phase_errors).map(|(wave, phase_error)| record(branch, wave, phase_error, step, width)).collect()
}

fn record(branch: &str, wave: &Wave, phase_error: Option<f64>, step: f64, width: f64) -> ModeRecord {
    let exact = wave.omega.map(|omega| exact_factor(omega, step));
    let turned = wave.omega.map(|omega| -omega.re * step).filter(|phase| *phase != 0.0);
    let group_speed = wave.derivative.map(|derivative| (Complex64::I * derivative / wave.factor).re * width / step);
    let group_ratio =
        group_speed.zip(wave.group_speed.filter(|speed| *speed != 0.0)).map(|(found, exact)| found / exact);
    let size = wave.theta.iter().map(|theta| theta * theta).sum::<f64>().sqrt();
    ModeRecord {
        theta: wave.theta.clone(),
        branch: branch.to_owned(),
        amplification: [wave.factor.re, wave.factor.im],
        exact: exact.map(|exact| [exact.re, exact.im]),
        modulus: wave.factor.norm(),
        exact_modulus: exact.map(|exact| exact.norm()),
        damping_error: wave.omega.and_then(|omega| finite(modulus_excess(wave.factor) - (omega.im * step).exp_m1())),
        phase_error: phase_error.and_then(finite),
        phase_speed_ratio: phase_error.zip(turned).and_then(|(error, phase)| finite(1.0 + error / phase)),
        group_speed_ratio: group_ratio.and_then(finite),
        points_per_wavelength: finite(2.0 * std::f64::consts::PI / size),
        leaked: wave.leaked,
    }
}

/// exp(-i omega dt).
pub fn exact_factor(omega: Complex64, step: f64) -> Complex64 {
    (-Complex64::I * omega * step).exp()
}

/// arg(G / E) of each wave, followed outwards from the wave nearest to theta = 0 in both directions.
fn followed(waves: &[Wave], step: f64) -> Vec<Option<f64>> {
    let raw: Vec<Option<f64>> = waves.iter().map(|wave| raw_phase_error(wave, step)).collect();
    let size = |wave: &Wave| wave.theta.iter().map(|theta| theta.abs()).sum::<f64>();
    let Some(centre) = (0..waves.len()).min_by(|a, b| size(&waves[*a]).total_cmp(&size(&waves[*b]))) else {
        return Vec::new();
    };
    let mut errors = raw;
    unwrap_along(&mut errors, centre..waves.len());
    unwrap_along(&mut errors, (0..=centre).rev());
    errors
}

fn raw_phase_error(wave: &Wave, step: f64) -> Option<f64> {
    let ratio = wave.factor / exact_factor(wave.omega?, step);
    (ratio.is_finite() && ratio.norm() > 0.0).then(|| ratio.arg())
}

/// Adds whole turns so that neighbours differ by at most half a turn.
fn unwrap_along(errors: &mut [Option<f64>], indices: impl Iterator<Item = usize>) {
    let turn = 2.0 * std::f64::consts::PI;
    let mut last: Option<f64> = None;
    for index in indices {
        let Some(error) = &mut errors[index] else { continue };
        if let Some(last) = last {
            *error += turn * ((last - *error) / turn).round();
        }
        last = Some(*error);
    }
}

#[cfg(test)]
mod tests {
    //! Trusted: closed forms. Leapfrog and Crank-Nicolson group speeds after Trefethen (1982), as recomputed in 8 digits.

    use super::*;
    use crate::analysis::compare::agree;

    fn wave(theta: f64, factor: Complex64, derivative: Option<Complex64>, courant: f64) -> Wave {
        let omega = Some(Complex64::new(courant * theta, 0.0));
        Wave { theta: vec![theta], factor, derivative, omega, group_speed: Some(courant), leaked: None }
    }

    /// Crank-Nicolson with central differences: G = (1 - i s / 2) / (1 + i s / 2), s = c sin(theta).
    fn crank_nicolson(theta: f64, c: f64) -> (Complex64, Complex64) {
        let half = Complex64::new(0.0, 0.5 * c * theta.sin());
        let rate = Complex64::new(0.0, 0.5 * c * theta.cos());
        let factor = (1.0 - half) / (1.0 + half);
        (factor, -2.0 * rate / ((1.0 + half) * (1.0 + half)))
    }

    #[test]
    fn phase_and_group_speed_of_crank_nicolson_are_the_published_ones() {
        // Step and width 1, so that omega = c theta. Published: phase 0.89111003 and group 0.6856793 at pi/4, c = 0.5.
        let theta = std::f64::consts::FRAC_PI_4;
        let (factor, derivative) = crank_nicolson(theta, 0.5);
        let record = &records(
            "u",
            &[wave(0.0, Complex64::ONE, None, 0.5), wave(theta, factor, Some(derivative), 0.5)],
            1.0,
            1.0,
        )[1];
        agree(record.phase_speed_ratio.unwrap(), 0.89111003, 5e-9).unwrap();
        agree(record.group_speed_ratio.unwrap(), 0.6856793, 5e-8).unwrap();
        agree(record.damping_error.unwrap(), 0.0, 4.0 * f64::EPSILON).unwrap();
    }

    #[test]
    fn phases_beyond_half_a_turn_are_followed() {
        // Crank-Nicolson at Courant number 6 turns the exact wave by 6 theta, far beyond pi; its own phase stays within pi.
        let c = 6.0;
        let thetas: Vec<f64> = (0..=200).map(|j| 3.0 * f64::from(j) / 200.0).collect();
        let waves: Vec<Wave> = thetas.iter().map(|theta| wave(*theta, crank_nicolson(*theta, c).0, None, c)).collect();
        for (theta, record) in thetas.iter().zip(records("u", &waves, 1.0, 1.0)).skip(1) {
            let published = 2.0 * (0.5 * c * theta.sin()).atan() / (c * theta);
            agree(record.phase_speed_ratio.unwrap(), published, 1e-13).unwrap();
        }
    }
}
