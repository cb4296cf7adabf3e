//! Hyperbolic functions, their inverses and atan2 within 1 ulp, where the usual algorithms lose up to 2.
//!
//! Intermediate values are unevaluated sums of two f64 (Dekker 1971, Numer. Math. 18:224-242; Knuth's two-sum), without fused
//! multiply-add, so that the bits are the same on every processor. Small arguments are summed as Taylor series, of which the
//! leading term is exact.

#![expect(clippy::excessive_precision, reason = "the constants stand as they were published")]

use super::kernels::{exp_pair, log_sum};

/// A sum high + low with |low| at most half an ulp of high.
type Pair = (f64, f64);

/// Below this the Taylor series of all six functions are short.
const SMALL: f64 = 0.3;
/// Beyond this, e^-x no longer matters, or e^x overflows soon.
const LARGE: f64 = 700.0;

pub(super) fn cosh(x: f64) -> f64 {
    if x.is_nan() || x.abs() > LARGE {
        return libm::cosh(x);
    }
    let (grown, shrunk) = growth(x.abs());
    let (high, low) = two_sum(grown.0, shrunk.0);
    0.5 * (high + (low + grown.1 + shrunk.1))
}

pub(super) fn sinh(x: f64) -> f64 {
    if x.is_nan() || x.abs() > LARGE {
        return libm::sinh(x);
    }
    if x.abs() < SMALL {
        return x + x * series(x * x, 7, |n| 1.0 / ((2 * n) * (2 * n + 1)) as f64);
    }
    let difference = hyperbolic_difference(x.abs());
    (0.5 * (difference.0 + difference.1)).copysign(x)
}

pub(super) fn tanh(x: f64) -> f64 {
    if x.is_nan() || x.abs() > 22.0 {
        return libm::tanh(x);
    }
    if x.abs() < SMALL {
        let sine = x * series(x * x, 7, |n| 1.0 / ((2 * n) * (2 * n + 1)) as f64);
        let cosine = series(x * x, 7, |n| 1.0 / ((2 * n - 1) * (2 * n)) as f64);
        return x + (sine - x * cosine) / (1.0 + cosine);
    }
    let (grown, shrunk) = growth(x.abs());
    let (high, low) = two_sum(grown.0, shrunk.0);
    let (high, low) = quotient(hyperbolic_difference(x.abs()), (high, low + grown.1 + shrunk.1));
    (high + low).copysign(x)
}

pub(super) fn asinh(x: f64) -> f64 {
    let size = x.abs();
    if size.is_nan() || size.is_infinite() {
        return x;
    }
    if size < SMALL {
        return x + x * series(-x * x, 16, |n| ((2 * n - 1) * (2 * n - 1)) as f64 / ((2 * n) * (2 * n + 1)) as f64);
    }
    log_of_sum_with_root(size, 1.0).copysign(x)
}

pub(super) fn acosh(x: f64) -> f64 {
    if x.is_nan() || x <= 1.0 || x.is_infinite() {
        return libm::acosh(x);
    }
    log_of_sum_with_root(x, -1.0)
}

pub(super) fn atanh(x: f64) -> f64 {
    let size = x.abs();
    if size.is_nan() || size >= 1.0 {
        return libm::atanh(x);
    }
    if size < SMALL {
        return x + x * series(x * x, 16, |n| (2 * n - 1) as f64 / (2 * n + 1) as f64);
    }
    let (high, low) = quotient(two_sum(1.0, size), two_sum(1.0, -size));
    (0.5 * log_sum(high, low)).copysign(x)
}

/// The angle of (x, y) in (-pi, pi].
pub(super) fn atan2(y: f64, x: f64) -> f64 {
    let (above, right) = (y.abs(), x.abs());
    let ordinary = |a: f64| a > 1e-150 && a < 1e150;
    if !ordinary(above) || !ordinary(right) {
        return libm::atan2(y, x);
    }
    const PI: Pair = (std::f64::consts::PI, 1.224_646_799_147_353_207_2e-16);
    let mut angle = atan_below_one(quotient((above.min(right), 0.0), (above.max(right), 0.0)));
    if above > right {
        angle = less((0.5 * PI.0, 0.5 * PI.1), angle);
    }
    if x < 0.0 {
        angle = less(PI, angle);
    }
    (angle.0 + angle.1).copysign(y)
}

/// The arc tangent of a number in [0, 1], with fdlibm's polynomial.
fn atan_below_one(q: Pair) -> Pair {
    const COEFFICIENTS: [f64; 11] = [
        3.333_333_333_333_293_180_27e-01,
        -1.999_999_999_987_648_324_76e-01,
        1.428_571_427_250_346_637_11e-01,
        -1.111_111_040_546_235_578_80e-01,
        9.090_887_133_436_506_561_96e-02,
        -7.691_876_205_044_829_994_95e-02,
        6.661_073_137_387_531_206_69e-02,
        -5.833_570_133_790_573_486_45e-02,
        4.976_877_994_615_932_360_17e-02,
        -3.653_157_274_421_691_552_70e-02,
        1.628_582_011_536_578_236_23e-02,
    ];
    let one = (1.0, 0.0);
    // atan q = atan b + atan((q - b)/(1 + b q)), with b of 0, 1/2 or 1.
    let (base, reduced): (Pair, Pair) = match q.0 {
        small if small < 0.4375 => ((0.0, 0.0), q),
        middle if middle < 0.6875 => {
            let base = (4.636_476_090_008_060_935_15e-01, 2.269_877_745_296_168_709_24e-17);
            (base, quotient(less((2.0 * q.0, 2.0 * q.1), one), plus((2.0, 0.0), q)))
        }
        _ => {
            let base = (std::f64::consts::FRAC_PI_4, 3.061_616_997_868_383_017_93e-17);
            (base, quotient(less(q, one), plus(one, q)))
        }
    };
    let z = reduced.0 * reduced.0;
    let polynomial = COEFFICIENTS.iter().rev().fold(0.0, |sum, coefficient| coefficient + z * sum);
    plus(base, (reduced.0, reduced.1 - reduced.0 * (z * polynomial)))
}

/// ln(x + sqrt(x^2 + sign)) for x > 0.
fn log_of_sum_with_root(x: f64, sign: f64) -> f64 {
    if x > 1e9 {
        return log_sum(x, 0.0) + std::f64::consts::LN_2;
    }
    let square = two_product(x, x);
    let (high, low) = two_sum(square.0, sign);
    let low = low + square.1;
    let root = (high + low).sqrt();
    let back = two_product(root, root);
    let correction = (((high - back.0) - back.1) + low) / (2.0 * root);
    let (high, low) = two_sum(x, root);
    log_sum(high, low + correction)
}

/// e^x and e^-x for 0 <= x <= 700.
fn growth(x: f64) -> (Pair, Pair) {
    let grown = exp_pair(x);
    (grown, quotient((1.0, 0.0), grown))
}

/// e^x - e^-x
fn hyperbolic_difference(x: f64) -> Pair {
    let (grown, shrunk) = growth(x);
    less(grown, shrunk)
}

/// Sum of term(1) + term(2) + ..., where each term is the one before times `square` times `ratio(n)`, from 1.
fn series(square: f64, terms: usize, ratio: impl Fn(usize) -> f64) -> f64 {
    // By Horner's rule from the smallest term: a rounding error then counts by the size of the tail that it is in.
    (1..=terms).rev().fold(0.0, |tail, n| square * ratio(n) * (1.0 + tail))
}

fn two_sum(a: f64, b: f64) -> Pair {
    let sum = a + b;
    let part = sum - a;
    (sum, (a - (sum - part)) + (b - part))
}

fn two_product(a: f64, b: f64) -> Pair {
    let split = |a: f64| {
        let scaled = 134_217_729.0 * a; // 2^27 + 1
        let high = scaled - (scaled - a);
        (high, a - high)
    };
    let ((a_high, a_low), (b_high, b_low)) = (split(a), split(b));
    let product = a * b;
    (product, a_low * b_low - (((product - a_high * b_high) - a_low * b_high) - a_high * b_low))
}

fn plus(a: Pair, b: Pair) -> Pair {
    let (high, low) = two_sum(a.0, b.0);
    two_sum(high, low + a.1 + b.1)
}

fn less(a: Pair, b: Pair) -> Pair {
    plus(a, (-b.0, -b.1))
}

fn quotient(a: Pair, b: Pair) -> Pair {
    let high = a.0 / b.0;
    let back = two_product(high, b.0);
    (high, (((a.0 - back.0) - back.1) + a.1 - high * b.1) / b.0)
}
