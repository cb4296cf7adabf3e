//! What is trusted: `libm`'s scalar functions, whose error is below 1 ulp by another route for exp and log; the live comparison with
//! 40-digit values stands in the tests folder. Here: special values, the seams between fast and slow ranges, and gross mistakes.

use super::*;

fn ulps(a: f64, b: f64) -> f64 {
    if a == b { 0.0 } else { (a - b).abs() / (f64::from_bits(b.abs().to_bits() + 1) - b.abs()) }
}

#[test]
fn kernels_stay_within_two_ulps_of_the_scalar_library() {
    // Two functions that are each within 1 ulp of the truth differ by less than 2.
    let mut state = 1_u64;
    let mut random = || {
        state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (state >> 11) as f64 / (1_u64 << 53) as f64
    };
    for _ in 0..200_000 {
        let scale = 10_f64.powf(8.0 * random() - 2.0);
        let x = (2.0 * random() - 1.0) * scale;
        assert!(ulps(sin(x), libm::sin(x)) < 2.0, "sin({x:e})");
        assert!(ulps(cos(x), libm::cos(x)) < 2.0, "cos({x:e})");
        let y = (2.0 * random() - 1.0) * 720.0;
        assert!(ulps(exp(y), libm::exp(y)) < 2.0, "exp({y:e})");
        let z = 10_f64.powf(600.0 * random() - 300.0);
        assert!(ulps(log(z), libm::log(z)) < 2.0, "log({z:e})");
        let near_one = 1.0 + (random() - 0.5) * 1e-3;
        assert!(ulps(log(near_one), libm::log(near_one)) < 2.0, "log({near_one:e})");
    }
}

#[test]
fn multiples_of_a_quarter_turn_are_reduced_to_full_precision() {
    for n in (1..600_000_i64).step_by(997) {
        let x = n as f64 * std::f64::consts::FRAC_PI_2;
        assert!(ulps(sin(x), libm::sin(x)) < 2.0 && ulps(cos(x), libm::cos(x)) < 2.0, "{n} quarter turns");
    }
}

#[test]
fn special_values() {
    assert_eq!(sin(-0.0).to_bits(), (-0.0_f64).to_bits());
    assert_eq!((cos(0.0), exp(0.0), exp(-0.0), log(1.0)), (1.0, 1.0, 1.0, 0.0));
    for function in [sin, cos, exp, log] {
        assert!(function(f64::NAN).is_nan());
    }
    assert!(sin(f64::INFINITY).is_nan() && log(-1.0).is_nan());
    assert_eq!((exp(f64::INFINITY), exp(f64::NEG_INFINITY), exp(800.0)), (f64::INFINITY, 0.0, f64::INFINITY));
    assert_eq!((log(0.0), log(f64::INFINITY)), (f64::NEG_INFINITY, f64::INFINITY));
    // A famous large argument: sin(10^22), by Ng (1992) -0.8522008497671888...
    assert_eq!(sin(1e22), -0.852_200_849_767_188_8);
}
