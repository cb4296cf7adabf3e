//! Systems, several time levels and several directions: all branches against closed forms, at every wavevector.

use gridassay::claims::ModesRequest;
use gridassay::scheme::{Advance, Case, Description, Harness, Nodes, Offer, Operation, Scheme, SchemeError};
use gridassay_classical::numerics::tridiagonal::Cyclic;
use num_complex::Complex64;

use super::common::{I, at_courant, classical, modes_of, parameters, worst};

/// Rounding of a step and of the transform of a response, whose entries are of size one, through an eigenvalue of condition near one.
const TOLERANCE: f64 = 1e-12;

#[test]
fn leapfrog_has_its_physical_and_its_computational_root() {
    for c in [0.1, 0.5, 0.9] {
        let record = modes_of(classical("leapfrog"), &at_courant("advection", &[64], c));
        let roots = |theta: &[f64]| {
            let s = c * theta[0].sin();
            let root = Complex64::from((1.0 - s * s).sqrt());
            vec![-I * s + root, -I * s - root]
        };
        let found = worst(&record, roots);
        assert!(found <= TOLERANCE, "c = {c}: {found:e}");
        // The computational root is told from the physical one: only that one has an exact partner.
        let named = |name: &str| record.modes.iter().filter(|mode| mode.branch == name).count();
        assert_eq!(named("computational"), 64);
        assert!(record.modes.iter().all(|mode| (mode.branch == "computational") == mode.exact.is_none()));
        // Data that the equation would carry along excite almost nothing but the physical root of a long wave.
        let share = |physical: bool| {
            let of = record.modes.iter().filter(|mode| mode.exact.is_some() == physical && mode.theta[0] > 0.0);
            let longest = of.min_by(|a, b| a.theta[0].total_cmp(&b.theta[0])).unwrap();
            longest.share.expect("one field has shares")
        };
        assert!(share(false) < 1e-6 && share(true) > 0.999_999, "c = {c}: {} and {}", share(true), share(false));
    }
}

#[test]
fn acoustics_with_upwind_splitting_is_scalar_upwind_along_each_characteristic() {
    for velocity in [0.0, 0.31, -0.31] {
        let courant = 0.8;
        let request = ModesRequest {
            parameters: parameters(&[("velocity", &[velocity]), ("density", &[1.7]), ("sound_speed", &[0.9])]),
            ..at_courant("acoustics", &[48], courant)
        };
        let record = modes_of(classical("acoustics-upwind"), &request);
        let unit = courant / (0.9 + f64::abs(velocity));
        let upwind = |speed: f64, theta: f64| {
            let c = speed * unit;
            1.0 - c.abs() * (1.0 - theta.cos()) - I * c * theta.sin()
        };
        // theta = pi is its own mirror image, where the two are told apart by how they were followed.
        let found = worst(&record, |theta| vec![upwind(velocity + 0.9, theta[0]), upwind(velocity - 0.9, theta[0])]);
        assert!(found <= TOLERANCE, "V = {velocity}: {found:e}");
        for mode in record.modes.iter().filter(|mode| mode.theta[0].abs() > 1e-9) {
            // omega = V k +- c |k|: the upper sign runs along the wavevector.
            let along = if mode.branch == "acoustic +" { 0.9 } else { -0.9 };
            let speed = velocity + along * mode.theta[0].signum();
            let expected = upwind(speed, mode.theta[0]);
            let [re, im] = mode.amplification;
            let off = (Complex64::new(re, im) - expected).norm();
            assert!(off <= TOLERANCE, "{} at {}: {off:e}", mode.branch, mode.theta[0]);
        }
    }
}

#[test]
fn the_staggered_wave_scheme_has_no_damping_and_its_own_dispersion() {
    for courant in [0.3, 0.7, 0.95] {
        let record = modes_of(classical("acoustics-staggered"), &at_courant("acoustics", &[64], courant));
        // sin(omega dt / 2) = C sin(theta / 2) (Yee 1966), one wave each way.
        let closed = |theta: &[f64]| {
            let phase = 2.0 * (courant * (0.5 * theta[0]).sin()).asin();
            vec![Complex64::cis(-phase), Complex64::cis(phase)]
        };
        // At theta = 0 both roots meet at one, where a perturbation eps moves them by its root; next to it by eps / theta.
        let found = worst(&record, |theta| if theta[0] == 0.0 { vec![Complex64::ONE; 2] } else { closed(theta) });
        assert!(found <= 4.0 * f64::EPSILON.sqrt(), "C = {courant}: {found:e}");
        let away = record.modes.iter().filter(|mode| mode.theta[0].abs() > 0.05);
        for mode in away {
            assert!((mode.modulus - 1.0).abs() <= TOLERANCE, "{mode:?}");
            let [re, im] = mode.amplification;
            let expected = closed(&mode.theta);
            let off = expected.iter().map(|e| (e - Complex64::new(re, im)).norm()).fold(f64::INFINITY, f64::min);
            assert!(off <= TOLERANCE, "{off:e}: {mode:?}");
        }
    }
}

/// Courant numbers in each direction of a record of advection.
fn courants(record: &gridassay::record::ModesRecord) -> Vec<f64> {
    // The periodic box of Fourier studies is 1.7 x 1.3 x 2.1.
    let velocity = &record.parameters["velocity"];
    let spacing = |axis: usize| [1.7, 1.3, 2.1][axis] / record.cells[axis] as f64;
    (0..record.cells.len()).map(|axis| velocity[axis] * record.step / spacing(axis)).collect()
}

#[test]
fn upwind_and_lax_wendroff_in_the_plane_and_upwind_in_space() {
    for signs in [[1.0, 1.0], [-1.0, 1.0], [1.0, -1.0], [-1.0, -1.0]] {
        let request = ModesRequest {
            parameters: parameters(&[("velocity", &[0.83 * signs[0], 0.59 * signs[1]])]),
            ..at_courant("advection", &[24, 20], 0.4)
        };
        let record = modes_of(classical("upwind-2d"), &request);
        let c = courants(&record);
        let along = |c: f64, t: f64| c.abs() * (1.0 - t.cos()) + I * c * t.sin();
        let found = worst(&record, |t| vec![1.0 - along(c[0], t[0]) - along(c[1], t[1])]);
        assert!(found <= TOLERANCE, "upwind, {signs:?}: {found:e}");
        let record = modes_of(classical("lax-wendroff-2d"), &request);
        // Lax & Wendroff 1964, with the mixed derivative.
        let found = worst(&record, |t| {
            let first = I * (c[0] * t[0].sin() + c[1] * t[1].sin());
            let second = c[0] * c[0] * (1.0 - t[0].cos()) + c[1] * c[1] * (1.0 - t[1].cos());
            vec![1.0 - first - second - c[0] * c[1] * t[0].sin() * t[1].sin()]
        });
        assert!(found <= TOLERANCE, "Lax-Wendroff, {signs:?}: {found:e}");
    }
    let record = modes_of(classical("upwind-3d"), &at_courant("advection", &[8, 10, 6], 0.3));
    let c = courants(&record);
    let along = |c: f64, t: f64| c.abs() * (1.0 - t.cos()) + I * c * t.sin();
    let found = worst(&record, |t| vec![1.0 - (0..3).map(|d| along(c[d], t[d])).sum::<Complex64>()]);
    assert!(found <= TOLERANCE, "in space: {found:e}");
}

/// Crank-Nicolson with the fourth-order compact difference (1/4, 1, 1/4) u' = 3/4 (u_{j+1} - u_{j-1}) / h (Lele 1992, scheme (d)):
/// (A + c/2 B) u_new = (A - c/2 B) u with A = [1/4, 1, 1/4] and B = 3/4 [-1, 0, 1].
#[derive(Default)]
struct CompactCrankNicolson {
    velocity: f64,
    spacing: f64,
}

impl Scheme for CompactCrankNicolson {
    fn describe(&self) -> Description {
        Description::new("compact-crank-nicolson", "1", vec![Offer::new("advection", &[Operation::Advance])])
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        (self.velocity, self.spacing) = (case.vector("velocity")?[0], case.grid.spacing(0));
        Ok(None)
    }

    fn advance(&mut self, request: Advance<'_>, _: &mut dyn Harness) -> Result<(), SchemeError> {
        let b = 0.375 * self.velocity * request.step / self.spacing;
        let u = &mut request.state[0];
        let n = u.len();
        let matrix = Cyclic::new(n, 0.25 - b, 1.0, 0.25 + b);
        for _ in 0..request.steps {
            let right = |j: usize| (0.25 + b) * u[(j + n - 1) % n] + u[j] + (0.25 - b) * u[(j + 1) % n];
            let mut new: Vec<f64> = (0..n).map(right).collect();
            matrix.solve(&mut new);
            u.copy_from_slice(&new);
        }
        Ok(())
    }
}

#[test]
fn crank_nicolson_with_compact_differences() {
    for c in [0.4, 1.7] {
        let record = modes_of(Box::<CompactCrankNicolson>::default(), &at_courant("advection", &[64], c));
        let closed = |theta: &[f64]| {
            let half = 0.5 * I * c * 3.0 * theta[0].sin() / (2.0 + theta[0].cos());
            vec![(1.0 - half) / (1.0 + half)]
        };
        let found = worst(&record, closed);
        assert!(found <= TOLERANCE, "c = {c}: {found:e}");
        // Second order by its time step, although the difference in space is of order four.
        assert_eq!(record.modified_equation.unwrap().formal_order, Some(2));
    }
}

#[test]
fn a_wrong_block_is_seen() {
    // The check itself: one per cent in a Courant number, exchanged directions, and a lost mixed derivative must show.
    let record = modes_of(classical("lax-wendroff-2d"), &at_courant("advection", &[24, 20], 0.4));
    let c = courants(&record);
    let without_mixed = worst(&record, |t| {
        let first = I * (c[0] * t[0].sin() + c[1] * t[1].sin());
        vec![1.0 - first - c[0] * c[0] * (1.0 - t[0].cos()) - c[1] * c[1] * (1.0 - t[1].cos())]
    });
    assert!(without_mixed > 1e-2, "{without_mixed:e}");
    let record = modes_of(classical("leapfrog"), &at_courant("advection", &[64], 0.5));
    let off = worst(&record, |t| {
        let s = 0.505 * t[0].sin();
        let root = Complex64::from((1.0 - s * s).sqrt());
        vec![-I * s + root, -I * s - root]
    });
    assert!(off > 1e-3, "{off:e}");
}
