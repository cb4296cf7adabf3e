//! Damping, phase and group velocity of a symbol against the exact ones.
//!
//! A mode exp(i theta j) is multiplied by G in a step where the equation multiplies it by exp(-i omega dt). The numerical phase is
//! phi = -arg G, the exact one phi_e = Re(omega) dt; both are positive for a wave that moves towards larger x.

use num_complex::Complex64;
use std::f64::consts::{PI, TAU};

/// One wavenumber of a branch, as measured and as it should be.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Mode {
    /// k h.
    pub theta: f64,
    /// G.
    pub factor: Complex64,
    /// dG/dtheta, where known.
    pub derivative: Option<Complex64>,
    /// Complex omega dt of the equation.
    pub exact: Complex64,
    /// Re d(omega dt)/dtheta of the equation.
    pub exact_group: f64,
}

/// What a mode suffers.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Errors {
    /// |G| - |exp(-i omega dt)| in a step.
    pub damping: f64,
    /// phi - phi_e in a step, radians: positive for a wave that runs ahead. Followed continuously from theta = 0.
    pub phase: f64,
    /// |G|^n - |exp(-i omega dt)|^n over the n = 2 pi / |phi_e| steps of an exact period; `None` for a wave that does not move.
    pub damping_per_period: Option<f64>,
    /// Phase error over an exact period, radians; `None` for a wave that does not move.
    pub phase_per_period: Option<f64>,
    /// Numerical over exact phase speed, phi / phi_e; `None` for a wave that does not move.
    pub phase_speed_ratio: Option<f64>,
    /// Numerical over exact group speed, -Im(G'/G) / phi_e'; `None` without a derivative, at G = 0, and where nothing moves.
    pub group_speed_ratio: Option<f64>,
    /// i ln(G), the complex omega dt that the scheme gives to this mode.
    pub frequency: Complex64,
    /// Cells in a wavelength, 2 pi / |theta|; infinite for the mean.
    pub points_per_wavelength: f64,
}

/// Errors of the modes of one branch, which start at or next to theta = 0 and run in one direction.
///
/// The phase error is followed from mode to mode, so that it is right beyond pi (large Courant numbers) as long as it changes by less than
/// pi between neighbours. Modes with G = 0 have no phase; theirs is that of the one before.
pub fn errors(modes: &[Mode]) -> Vec<Errors> {
    let mut lead = 0.0;
    let mut found = Vec::with_capacity(modes.len());
    for mode in modes {
        let exact = exact_factor(mode);
        if mode.factor.norm() > 0.0 && exact.norm() > 0.0 {
            let principal = -(mode.factor * exact.conj()).arg();
            lead = principal + TAU * ((lead - principal) / TAU).round();
        }
        found.push(of_mode(mode, exact.norm(), lead));
    }
    found
}

fn exact_factor(mode: &Mode) -> Complex64 {
    (-Complex64::I * mode.exact).exp()
}

fn of_mode(mode: &Mode, exact_modulus: f64, lead: f64) -> Errors {
    let (modulus, exact_phase) = (mode.factor.norm(), mode.exact.re);
    let moves = exact_phase != 0.0;
    let steps = TAU / exact_phase.abs();
    let group = |d: Complex64| {
        let speed = -(d / mode.factor).im;
        (modulus > 0.0 && mode.exact_group != 0.0).then(|| speed / mode.exact_group)
    };
    Errors {
        damping: modulus - exact_modulus,
        phase: lead,
        damping_per_period: moves.then(|| modulus.powf(steps) - exact_modulus.powf(steps)),
        phase_per_period: moves.then_some(lead * steps),
        phase_speed_ratio: moves.then(|| (exact_phase + lead) / exact_phase),
        group_speed_ratio: mode.derivative.and_then(group),
        frequency: Complex64::new(exact_phase + lead, modulus.ln()),
        points_per_wavelength: TAU / mode.theta.abs(),
    }
}

/// Cells a wavelength needs for an error to stay within `tolerance`: from (theta, error) pairs with rising theta > 0.
///
/// The longest wave of the run is taken from which all longer ones stay within; between samples |error| is taken as linear in theta. `None`
/// where even the longest wave exceeds the tolerance, or an error before the crossing is not finite.
pub fn points_per_wavelength_for(curve: &[(f64, f64)], tolerance: f64) -> Option<f64> {
    let within = |e: f64| e.abs() <= tolerance;
    let first_beyond = curve.iter().position(|&(_, e)| !within(e));
    let theta = match first_beyond {
        Some(0) => return None,
        None => curve.last()?.0,
        Some(i) => {
            let [(t0, e0), (t1, e1)] = [curve[i - 1], curve[i]];
            let share = (tolerance - e0.abs()) / (e1.abs() - e0.abs());
            if share.is_finite() { t0 + share * (t1 - t0) } else { t0 }
        }
    };
    Some(TAU / theta)
}

/// Lele's resolving efficiency e_1: the share of (0, pi) over which |k'(theta) - theta| <= tolerance x theta, without a break from zero.
///
/// Lele (1992), J. Comput. Phys. 103:16-42. `modified` gives the (complex) modified wavenumber k' h at theta.
pub fn resolving_efficiency(modified: impl Fn(f64) -> Complex64, tolerance: f64) -> f64 {
    const SAMPLES: usize = 4000;
    let within = |theta: f64| (modified(theta) - theta).norm() <= tolerance * theta;
    let sample = |i: usize| PI * i as f64 / SAMPLES as f64;
    let Some(beyond) = (1..=SAMPLES).find(|&i| !within(sample(i))) else { return 1.0 };
    let (mut low, mut high) = (sample(beyond - 1), sample(beyond));
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if within(middle) { low = middle } else { high = middle }
    }
    low / PI
}

/// Modified wavenumber k' h of a semi-discrete scheme for u_t + a u_x = 0, from the eigenvalue of its rate: k' h = i lambda h / a.
pub fn modified_wavenumber(eigenvalue: Complex64, cell_size: f64, velocity: f64) -> Complex64 {
    Complex64::I * eigenvalue * (cell_size / velocity)
}

#[cfg(test)]
mod tests {
    //! Trusted: closed forms of phase and group speed: leapfrog and Crank-Nicolson after Trefethen (1982), SIAM Rev. 24:113-136;
    //! Lele's (1992) efficiencies, printed to two digits (from memory) and recomputed for this project with mpmath to six.
    use super::*;
    use crate::analysis::compare::agree;
    use crate::analysis::symbol::Stencil;

    fn advection(c: f64, theta: f64, factor: Complex64, derivative: Complex64) -> Mode {
        Mode { theta, factor, derivative: Some(derivative), exact: (c * theta).into(), exact_group: c }
    }

    #[test]
    fn leapfrog_and_crank_nicolson_after_trefethen() {
        for c in [0.4, 0.5, 0.8] {
            for theta in [PI / 8.0, PI / 4.0, PI / 2.0, 0.75 * PI] {
                let s = c * theta.sin();
                // Leapfrog's physical root exp(-i w), sin w = c sin(theta); dw/dtheta = c cos(theta) / cos(w).
                let w = s.asin();
                let g = Complex64::cis(-w);
                let found = errors(&[advection(c, theta, g, -Complex64::I * g * c * theta.cos() / w.cos())])[0];
                agree(found.phase_speed_ratio.unwrap(), w / (c * theta), 1e-14).unwrap();
                let group = theta.cos() / (1.0 - s * s).sqrt();
                agree(found.group_speed_ratio.unwrap(), group, 1e-14).unwrap();
                agree(found.damping, 0.0, 1e-15).unwrap();
                // Crank-Nicolson: 2 tan(w/2) = c sin(theta), group speed cos(theta) / (1 + c^2 sin^2(theta) / 4).
                let (top, bottom) = (Complex64::new(1.0, -0.5 * s), Complex64::new(1.0, 0.5 * s));
                let derivative = -Complex64::I * c * theta.cos() / (bottom * bottom);
                let found = errors(&[advection(c, theta, top / bottom, derivative)])[0];
                agree(found.group_speed_ratio.unwrap(), theta.cos() / (1.0 + 0.25 * s * s), 1e-14).unwrap();
            }
        }
        // Printed example, as remembered: leapfrog, c = 0.4, eight points a wavelength, group speed about 0.74.
        let (c, theta) = (0.4_f64, PI / 4.0);
        agree(theta.cos() / (1.0 - (c * theta.sin()).powi(2)).sqrt(), 0.737_209_78, 5e-9).unwrap();
    }

    #[test]
    fn phases_beyond_pi_do_not_wrap() {
        // An exact shift by three cells, Courant number 3: no error anywhere, although the phase runs to 3 pi.
        let modes = |c: f64, shift: i64, n: usize| -> Vec<Mode> {
            let stencil = Stencil::scalar_1d(&[(-shift, 1.0)]);
            let mode = |k: usize| {
                let theta = PI * k as f64 / n as f64;
                let jet = stencil.jet(theta);
                advection(c, theta, jet.value, jet.first)
            };
            (0..=n).map(mode).collect()
        };
        for e in &errors(&modes(3.0, 3, 8))[1..] {
            agree(e.phase, 0.0, 1e-14).unwrap();
            agree(e.phase_speed_ratio.unwrap(), 1.0, 1e-14).unwrap();
        }
        // A shift by five cells at Courant number 3 runs ahead by 2 theta, beyond pi for short waves.
        for (k, e) in errors(&modes(3.0, 5, 8)).iter().enumerate().skip(1) {
            agree(e.phase, 2.0 * PI * k as f64 / 8.0, 1e-13).unwrap();
            agree(e.phase_speed_ratio.unwrap(), 5.0 / 3.0, 1e-13).unwrap();
            agree(e.group_speed_ratio.unwrap(), 5.0 / 3.0, 1e-13).unwrap();
            agree(e.phase_per_period.unwrap(), TAU * 2.0 / 3.0, 1e-12).unwrap();
        }
    }

    #[test]
    fn damping_and_the_cases_without_a_value() {
        // Diffusion: exact factor exp(-r theta^2) does not move.
        let (r, theta): (f64, f64) = (0.3, 0.5);
        let factor = Complex64::from(1.0 - 2.0 * r * (1.0 - theta.cos()));
        let mode =
            Mode { theta, factor, derivative: None, exact: Complex64::new(0.0, -r * theta * theta), exact_group: 0.0 };
        let e = errors(&[mode])[0];
        agree(e.damping, factor.re - (-r * theta * theta).exp(), 1e-16).unwrap();
        assert_eq!((e.phase, e.phase_speed_ratio, e.group_speed_ratio, e.damping_per_period), (0.0, None, None, None));
        // Upwind at Courant number 1/2 kills the shortest wave, which then has no phase of its own.
        let dead = errors(&[advection(0.5, PI, Complex64::ZERO, Complex64::ONE)])[0];
        assert_eq!((dead.phase, dead.group_speed_ratio), (0.0, None));
        agree(dead.points_per_wavelength, 2.0, 1e-15).unwrap();
        // Damping over a period: (1/2)^n with n = 2 pi / phi_e.
        let e = errors(&[advection(0.5, 1.0, 0.9 * Complex64::cis(-0.5), Complex64::ONE)])[0];
        agree(e.damping_per_period.unwrap(), 0.9_f64.powf(4.0 * PI) - 1.0, 1e-14).unwrap();
    }

    #[test]
    fn points_for_a_given_error() {
        let curve: Vec<(f64, f64)> = (1..=100).map(|i| (0.01 * f64::from(i), -0.01 * f64::from(i))).collect();
        agree(points_per_wavelength_for(&curve, 0.055).unwrap(), TAU / 0.055, 1e-9).unwrap();
        agree(points_per_wavelength_for(&curve, 2.0).unwrap(), TAU, 1e-9).unwrap();
        assert_eq!(points_per_wavelength_for(&curve, 0.001), None);
        assert_eq!(points_per_wavelength_for(&[(0.1, f64::NAN)], 1.0), None);
        // A later return below the tolerance does not count.
        agree(points_per_wavelength_for(&[(0.1, 0.0), (0.2, 1.0), (0.3, 0.0)], 0.0).unwrap(), TAU / 0.1, 1e-9).unwrap();
    }

    #[test]
    fn resolving_efficiencies_of_lele() {
        let central = |a: [f64; 3], alpha: f64, beta: f64| {
            move |t: f64| {
                let above = a[0] * t.sin() + 0.5 * a[1] * (2.0 * t).sin() + a[2] / 3.0 * (3.0 * t).sin();
                Complex64::from(above / (1.0 + 2.0 * alpha * t.cos() + 2.0 * beta * (2.0 * t).cos()))
            }
        };
        for (name, k, expected) in [
            ("(a)", central([1.0, 0.0, 0.0], 0.0, 0.0), [0.250_409, 0.078_087, 0.024_660]),
            ("(b)", central([4.0 / 3.0, -1.0 / 3.0, 0.0], 0.0, 0.0), [0.443_938, 0.239_584, 0.133_166]),
            ("(c)", central([1.5, -0.6, 0.1], 0.0, 0.0), [0.543_312, 0.350_164, 0.233_406]),
            ("(d)", central([1.5, 0.0, 0.0], 0.25, 0.0), [0.593_976, 0.355_350, 0.204_797]),
            ("(e)", central([14.0 / 9.0, 1.0 / 9.0, 0.0], 1.0 / 3.0, 0.0), [0.701_475, 0.502_280, 0.351_498]),
            ("(f)", central([25.0 / 16.0, 0.2, -1.0 / 80.0], 0.375, 0.0), [0.754_523, 0.583_838, 0.445_923]),
            ("(g)", central([40.0 / 27.0, 25.0 / 54.0, 0.0], 4.0 / 9.0, 1.0 / 36.0), [0.779_127, 0.618_731, 0.482_367]),
            ("(h)", central([17.0 / 12.0, 101.0 / 150.0, 0.01], 0.5, 0.05), [0.817_727, 0.681_779, 0.561_225]),
            (
                "(i)",
                central([1.302_516_6, 0.993_55, 0.037_502_45], 0.577_143_9, 0.089_640_6),
                [0.900_947, 0.836_302, 0.792_826],
            ),
        ] {
            for (tolerance, expected) in [0.1, 0.01, 0.001].iter().zip(expected) {
                agree(resolving_efficiency(k, *tolerance), expected, 1e-6).map_err(|e| format!("{name}: {e}")).unwrap();
            }
        }
        agree(resolving_efficiency(Complex64::from, 1e-3), 1.0, 0.0).unwrap();
    }

    #[test]
    fn modified_wavenumber_of_upwind() {
        // Rate -a (1 - exp(-i theta)) / h has k' h = sin(theta) - i (1 - cos(theta)).
        let (a, h, t): (f64, f64, f64) = (-2.0, 0.1, 0.7);
        let eigenvalue = -a / h * (1.0 - Complex64::cis(-t));
        agree(modified_wavenumber(eigenvalue, h, a), Complex64::new(t.sin(), t.cos() - 1.0), 1e-14).unwrap();
    }
}
