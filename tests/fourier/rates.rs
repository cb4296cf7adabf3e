//! Semi-discrete schemes: modified wavenumbers, what they resolve, and the steps that integrators can take with them.
//!
//! Trusted: closed forms; Lele (1992), J. Comput. Phys. 103:16-42 (printed to two digits, from memory; recomputed to six); constants of
//! Ainsworth (2004), J. Comput. Phys. 198:106-130, re-derived as exact rationals; the approximate dispersion relation of WENO5 recomputed for
//! this project on 1009 nodes.

use gridassay::claims::ModesRequest;
use gridassay::host::Session;
use gridassay::record::{RateMode, SemiDiscrete};
use gridassay::scheme::{Case, Description, Fields, Harness, Nodes, Offer, Operation, Scheme, SchemeError};
use gridassay::studies::modes;

use super::common::{agree, at_courant, classical, modes_of, modes_record, stability_of};

fn rate_of(scheme: &str, request: &ModesRequest) -> SemiDiscrete {
    modes_of(classical(scheme), request).semi_discrete.unwrap_or_else(|| panic!("{scheme} offers its rate"))
}

#[test]
fn central_and_compact_differences_resolve_what_lele_says() {
    for (name, largest, efficiencies) in [
        ("central2-rk4", 1.0, [0.250_409, 0.078_087, 0.024_660]),
        ("central4-rk4", 1.372_221_979_8, [0.443_938, 0.239_584, 0.133_166]),
        ("central6-rk4", 1.585_978_396_3, [0.543_312, 0.350_164, 0.233_406]),
        ("pade4-rk4", 3.0_f64.sqrt(), [0.593_976, 0.355_350, 0.204_797]),
        ("compact6-rk4", 1.989_441_485_4, [0.701_475, 0.502_280, 0.351_498]),
    ] {
        let found = rate_of(name, &at_courant("advection", &[960], 0.5));
        // On 960 cells the largest one is met to the square of the spacing in theta.
        agree(name, found.largest_modified_wavenumber.unwrap(), largest, 3e-5);
        for ((within, share), expected) in found.resolving_efficiency.iter().zip(efficiencies) {
            agree(&format!("{name} within {within}"), *share, expected, 1e-6);
        }
        let damping = found.modes.iter().map(|mode| mode.modified_wavenumber.unwrap()[1].abs()).fold(0.0, f64::max);
        assert!(damping <= 1e-13, "{name} damps: {damping:e}");
    }
}

#[test]
fn biased_differences_have_their_closed_forms() {
    for (name, real, damping) in [
        ("upwind1-rk1", (|t: f64| t.sin()) as fn(f64) -> f64, (|t: f64| 1.0 - t.cos()) as fn(f64) -> f64),
        ("upwind3-rk3", |t| (8.0 * t.sin() - (2.0 * t).sin()) / 6.0, |t| (3.0 - 4.0 * t.cos() + (2.0 * t).cos()) / 6.0),
        (
            "upwind5-rk4",
            |t| 1.5 * t.sin() - 0.3 * (2.0 * t).sin() + (3.0 * t).sin() / 30.0,
            |t| (10.0 - 15.0 * t.cos() + 6.0 * (2.0 * t).cos() - (3.0 * t).cos()) / 30.0,
        ),
    ] {
        let found = rate_of(name, &at_courant("advection", &[64], 0.5));
        assert_eq!(found.modes.len(), 64);
        for RateMode { theta, modified_wavenumber, .. } in &found.modes {
            let [re, im] = modified_wavenumber.unwrap();
            agree(name, re, real(*theta), 1e-12);
            agree(name, im, -damping(*theta), 1e-12);
        }
    }
}

/// Order 2p + 2 in phase and 2p + 1 in damping (Hu & Atkins 2002, J. Comput. Phys. 182:516-545): for real k
/// omega h / a = theta + B theta^(2p+3) - i A theta^(2p+2) + ...
#[test]
fn discontinuous_galerkin_has_the_orders_and_constants_of_its_phase_and_damping() {
    let constants = [(1, 1.0 / 72.0, 1.0 / 270.0), (2, 1.0 / 7200.0, 1.0 / 42_000.0)];
    for (degree, a, b) in constants {
        let found = rate_of(&format!("dg-p{degree}"), &at_courant("advection", &[24], 0.1));
        let physical = |wave: i32| {
            let theta = std::f64::consts::TAU * f64::from(wave) / 24.0;
            let is = |mode: &&RateMode| mode.exact_rate.is_some() && (mode.theta - theta).abs() < 1e-9;
            let [re, im] = found.modes.iter().find(is).unwrap().modified_wavenumber.unwrap();
            (theta, re - theta, im)
        };
        let ((coarse, phase_2, damping_2), (fine, phase_1, damping_1)) = (physical(2), physical(1));
        let order = |big: f64, small: f64| (big / small).abs().log2();
        let (p, damping, phase) = (f64::from(degree), order(damping_2, damping_1), order(phase_2, phase_1));
        // Relative orders, one below those of omega h itself.
        agree(&format!("p = {degree}: order in damping"), damping - 1.0, 2.0 * p + 1.0, 0.05);
        agree(&format!("p = {degree}: order in phase"), phase - 1.0, 2.0 * p + 2.0, 0.1);
        assert!(coarse > fine);
        let leading = (-damping_1 / fine.powi(2 * degree + 2) / a, phase_1 / fine.powi(2 * degree + 3) / b);
        agree(&format!("p = {degree}: constant of damping"), leading.0, 1.0, 0.02);
        agree(&format!("p = {degree}: constant of phase"), leading.1, 1.0, 0.03);
    }
}

/// (theta, Re k'h, Im k'h) of WENO5 (Jiang & Shu 1996, weights with eps = 1e-6) by the approximate dispersion relation of Pirozzoli (2006), J.
/// Comput. Phys. 219:489-497: 1009 nodes, a prime, so that every wave meets all phases; recomputed, no printed table being at hand.
const WENO5: [(f64, f64, f64); 7] = [
    (0.498_171, 0.497_864, -0.001_233),
    (0.784_620, 0.779_511, -0.012_936),
    (1.046_160, 1.017_078, -0.050_186),
    (1.257_882, 1.168_659, -0.116_368),
    (1.569_240, 1.318_425, -0.371_078),
    (2.092_319, 1.044_897, -1.042_579),
    (2.615_399, 0.215_900, -1.323_517),
];

#[test]
fn weno5_has_the_approximate_dispersion_relation_of_its_rate() {
    let found = rate_of("weno5-rk4", &at_courant("advection", &[1009], 0.1));
    assert!(!found.linear);
    for (theta, re, im) in WENO5 {
        let mode = found.modes.iter().find(|mode| (mode.theta - theta).abs() < 2e-6).expect("that wave is on the grid");
        let [found_re, found_im] = mode.modified_wavenumber.unwrap();
        agree(&format!("Re at {theta}"), found_re, re, 2e-6);
        agree(&format!("Im at {theta}"), found_im, im, 2e-6);
    }
    // At long waves it tends to the linear fifth-order upwind difference, at short ones it leaves it.
    let linear = rate_of("upwind5-rk4", &at_courant("advection", &[1009], 0.1));
    let apart = |theta: f64| {
        let at = |all: &SemiDiscrete| {
            let nearest = |a: &&RateMode, b: &&RateMode| (a.theta - theta).abs().total_cmp(&(b.theta - theta).abs());
            all.modes.iter().min_by(nearest).unwrap().modified_wavenumber.unwrap()
        };
        let ([a, b], [c, d]) = (at(&found), at(&linear));
        (a - c).hypot(b - d)
    };
    assert!(apart(0.06) < 1e-6 && apart(1.57) > 0.1, "{:e}, {:e}", apart(0.06), apart(1.57));
    // A wave of cosine shape feeds others: what leaks is told.
    assert!(found.modes.iter().any(|mode| mode.leaked.unwrap() > 1e-3));
}

#[test]
fn the_linear_twin_comes_out_the_same_one_wave_at_a_time() {
    let request = at_courant("advection", &[101], 0.4);
    let one_by_one = ModesRequest { mode_by_mode: true, ..request.clone() };
    let (at_once, by_wave) =
        (modes_of(classical("upwind5-rk4"), &request), modes_of(classical("upwind5-rk4"), &one_by_one));
    assert_eq!((at_once.linear, by_wave.linear), (Some(true), Some(false)));
    for mode in &by_wave.modes {
        let twin = at_once.modes.iter().find(|other| (other.theta[0] - mode.theta[0]).abs() < 1e-9).unwrap();
        agree("Re G", mode.amplification[0], twin.amplification[0], 1e-12);
        agree("Im G", mode.amplification[1], twin.amplification[1], 1e-12);
        assert!(mode.leaked.unwrap() < 1e-24, "a linear scheme feeds no other wave");
    }
    let (at_once, by_wave) = (at_once.semi_discrete.unwrap(), by_wave.semi_discrete.unwrap());
    for mode in &by_wave.modes {
        let twin = at_once.modes.iter().find(|other| (other.theta - mode.theta).abs() < 1e-9).unwrap();
        let (found, expected) = (mode.modified_wavenumber.unwrap(), twin.modified_wavenumber.unwrap());
        agree("Re k'h", found[0], expected[0], 1e-12);
        agree("Im k'h", found[1], expected[1], 1e-12);
    }
}

/// A scheme that offers nothing but its rate: second-order central differences.
#[derive(Default)]
struct RateAlone {
    factor: f64,
}

impl Scheme for RateAlone {
    fn describe(&self) -> Description {
        Description::new("rate-alone", "1", vec![Offer::new("advection", &[Operation::Rate])])
    }

    fn prepare(&mut self, case: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
        self.factor = 0.5 * case.vector("velocity")?[0] / case.grid.spacing(0);
        Ok(None)
    }

    fn rate(&mut self, _: f64, state: &[Vec<f64>], _: &mut dyn Harness) -> Result<Fields, SchemeError> {
        let u = &state[0];
        let n = u.len();
        Ok(vec![(0..n).map(|j| self.factor * (u[(j + n - 1) % n] - u[(j + 1) % n])).collect()])
    }
}

#[test]
fn a_scheme_that_offers_its_rate_alone_is_tried_with_every_integrator() {
    let request = at_courant("advection", &[64], 0.5);
    let made = modes::run(&mut Session::in_process(Box::<RateAlone>::default()), &request, None, 7);
    assert_eq!(made.stopped, None);
    let record = modes_record(made);
    assert!(record.modes.is_empty());
    let found = record.semi_discrete.unwrap();
    let range = |name: &str| found.predicted.iter().find(|range| range.integrator == name).unwrap();
    for (name, limit) in [
        ("rk1", 0.0),
        ("rk2", 0.0),
        ("rk3", 3.0_f64.sqrt()),
        ("ssp-rk3", 3.0_f64.sqrt()),
        ("low-storage-rk3", 3.0_f64.sqrt()),
        ("rk4", 8.0_f64.sqrt()),
        ("rk5", 0.0),
        ("rk6", 0.0),
        ("rk7", 1.764_421_32),
        ("ab2", 0.0),
        // Durran (1991), Mon. Wea. Rev. 119:702-720 (0.7236, from memory); in closed form 12 / (5 sqrt 11).
        ("ab3", 12.0 / (5.0 * 11.0_f64.sqrt())),
        ("ab4", 0.429_987_08),
    ] {
        agree(name, range(name).stable_up_to.unwrap(), limit, 1e-6);
    }
    for (name, power) in [("rk2", 4.0), ("ab2", 4.0), ("rk5", 6.0), ("rk6", 8.0)] {
        agree(name, range(name).weak_growth.unwrap().power, power, 0.05);
    }
}

#[test]
fn the_prediction_is_held_against_the_measured_range() {
    for (name, own, others) in [
        ("central4-rk4", "rk4", ["rk3", "rk1"]),
        ("upwind3-rk2", "rk2", ["rk3", "rk4"]),
        ("upwind5-rk3", "rk3", ["rk2", "rk4"]),
    ] {
        let record = stability_of(classical(name), "advection", 4.0);
        let is = |integrator: &str| {
            let range = record.predicted.iter().find(|range| range.integrator == integrator).unwrap();
            range.is_the_measured.unwrap()
        };
        assert!(is(own) && others.iter().all(|other| !is(other)), "{name}: {:?}", record.predicted);
    }
}
