//! sin, cos, exp and log, branch-free, with the same bits on every processor.
//!
//! The polynomials and the argument reduction are those of fdlibm (Sun Microsystems, 1993), whose error stays below 1 ulp without
//! fused multiply-add. Only additions, multiplications, divisions and bit operations are used, each rounded by itself, so that
//! a compiler may put them into vectors of any width without changing a bit. Arguments outside the fast range go to
//! the scalar functions of `libm`, one by one, in blocks as well as alone.

#![expect(clippy::excessive_precision, reason = "the constants stand as they were published")]

/// The reduction by four parts of pi/2 is exact while the multiple has at most 20 bits.
const TRIGONOMETRIC_LIMIT: f64 = 1e6;
/// Beyond this, e^x leaves the normal range.
const EXPONENTIAL_LIMIT: f64 = 708.0;

/// 1.5 * 2^52: adding it rounds to an integer, whose low bits then are the low bits of the sum.
const ROUNDER: f64 = 6_755_399_441_055_744.0;

/// sin(x) within 1 ulp, x in radians.
pub fn sin(x: f64) -> f64 {
    if trigonometric_range(x) { sin_cos_inside(x).0 } else { libm::sin(x) }
}

/// cos(x) within 1 ulp, x in radians.
pub fn cos(x: f64) -> f64 {
    if trigonometric_range(x) { sin_cos_inside(x).1 } else { libm::cos(x) }
}

/// e^x within 1 ulp.
pub fn exp(x: f64) -> f64 {
    if exponential_range(x) { exp_inside(x) } else { libm::exp(x) }
}

/// Natural logarithm within 1 ulp; NaN below zero.
pub fn log(x: f64) -> f64 {
    if logarithmic_range(x) { log_inside(x) } else { libm::log(x) }
}

#[inline(always)]
pub(super) fn trigonometric_range(x: f64) -> bool {
    x.abs() < TRIGONOMETRIC_LIMIT
}

#[inline(always)]
pub(super) fn exponential_range(x: f64) -> bool {
    x.abs() < EXPONENTIAL_LIMIT
}

#[inline(always)]
pub(super) fn logarithmic_range(x: f64) -> bool {
    let (normal, finite) = (x >= f64::MIN_POSITIVE, x < f64::INFINITY);
    normal & finite
}

/// Sine and cosine together for |x| < 1e6.
#[inline(always)]
pub(super) fn sin_cos_inside(x: f64) -> (f64, f64) {
    let (quadrant, high, low) = reduced(x);
    let (sine, cosine) = (sine_kernel(high, low), cosine_kernel(high, low));
    // Odd quadrants exchange the two; the second bit of the quadrant is the sign.
    let odd = 0_u64.wrapping_sub(quadrant & 1);
    let (s, c) = (sine.to_bits(), cosine.to_bits());
    let sine_sign = (quadrant & 2) << 62;
    let cosine_sign = (quadrant.wrapping_add(1) & 2) << 62;
    let sine = f64::from_bits(((s & !odd) | (c & odd)) ^ sine_sign);
    let cosine = f64::from_bits(((c & !odd) | (s & odd)) ^ cosine_sign);
    // The reduction loses the sign of a zero.
    (if x == 0.0 { x } else { sine }, cosine)
}

/// x - n pi/2 as an unevaluated sum, with n modulo 4 in the low bits of the first result.
///
/// The first three parts of pi/2 have 33 bits each, so that their multiples are exact; the differences keep their rounding errors.
/// Below 1e6 no double comes closer to a multiple of pi/2 than about 2^-60, and the reduced argument then still has 60 good bits.
#[inline(always)]
fn reduced(x: f64) -> (u64, f64, f64) {
    const PART_1: f64 = 1.570_796_326_734_125_614_17;
    const PART_2: f64 = 6.077_100_506_303_965_976_60e-11;
    const PART_3: f64 = 2.022_266_248_711_166_455_80e-21;
    const PART_4: f64 = 8.478_427_660_368_899_569_97e-32;
    let shifted = x * std::f64::consts::FRAC_2_PI + ROUNDER;
    let n = shifted - ROUNDER;
    let first = x - n * PART_1;
    let (second, error_2) = difference(first, n * PART_2);
    let (third, error_3) = difference(second, n * PART_3);
    let rest = (error_2 + error_3) - n * PART_4;
    let high = third + rest;
    (shifted.to_bits(), high, (third - high) + rest)
}

/// a - b with its rounding error (Knuth's two-sum).
#[inline(always)]
fn difference(a: f64, b: f64) -> (f64, f64) {
    let result = a - b;
    let part = result - a;
    (result, (a - (result - part)) - (b + part))
}

#[inline(always)]
fn sine_kernel(x: f64, low: f64) -> f64 {
    const S1: f64 = -1.666_666_666_666_663_243_48e-01;
    const S2: f64 = 8.333_333_333_322_489_461_24e-03;
    const S3: f64 = -1.984_126_982_985_794_931_34e-04;
    const S4: f64 = 2.755_731_370_707_006_767_89e-06;
    const S5: f64 = -2.505_076_025_340_686_341_95e-08;
    const S6: f64 = 1.589_690_995_211_550_102_21e-10;
    let z = x * x;
    let w = z * z;
    let r = S2 + z * (S3 + z * S4) + z * w * (S5 + z * S6);
    let v = z * x;
    x - ((z * (0.5 * low - v * r) - low) - v * S1)
}

#[inline(always)]
fn cosine_kernel(x: f64, low: f64) -> f64 {
    const C1: f64 = 4.166_666_666_666_660_190_37e-02;
    const C2: f64 = -1.388_888_888_887_410_957_49e-03;
    const C3: f64 = 2.480_158_728_947_672_941_78e-05;
    const C4: f64 = -2.755_731_435_139_066_330_35e-07;
    const C5: f64 = 2.087_572_321_298_174_827_90e-09;
    const C6: f64 = -1.135_964_755_778_819_482_65e-11;
    let z = x * x;
    let w = z * z;
    let r = z * (C1 + z * (C2 + z * C3)) + w * w * (C4 + z * (C5 + z * C6));
    let half = 0.5 * z;
    let main = 1.0 - half;
    main + (((1.0 - main) - half) + (z * r - x * low))
}

/// e^x for |x| < 708.
#[inline(always)]
pub(super) fn exp_inside(x: f64) -> f64 {
    let (shifted, high, small) = exp_parts(x);
    let scaled = 1.0 - (small - high);
    // Adds n to the exponent; the shift drops everything of the rounder but its low bits.
    f64::from_bits(scaled.to_bits().wrapping_add(shifted.to_bits() << 52))
}

/// e^x = 2^n (1 + high - small), with n in the low bits of the first result.
#[inline(always)]
fn exp_parts(x: f64) -> (f64, f64, f64) {
    const LN2_HIGH: f64 = 6.931_471_803_691_238_164_90e-01;
    const LN2_LOW: f64 = 1.908_214_929_270_587_700_02e-10;
    const P1: f64 = 1.666_666_666_666_660_190_37e-01;
    const P2: f64 = -2.777_777_777_701_559_338_42e-03;
    const P3: f64 = 6.613_756_321_437_934_361_17e-05;
    const P4: f64 = -1.653_390_220_546_525_153_90e-06;
    const P5: f64 = 4.138_136_797_057_238_460_39e-08;
    let shifted = x * std::f64::consts::LOG2_E + ROUNDER;
    let n = shifted - ROUNDER;
    let (high, low) = (x - n * LN2_HIGH, n * LN2_LOW);
    let r = high - low;
    let square = r * r;
    let c = r - square * (P1 + square * (P2 + square * (P3 + square * (P4 + square * P5))));
    (shifted, high, low - (r * c) / (2.0 - c))
}

/// e^x for |x| < 708 as a sum of two, with an error below 1e-17 relative.
pub(super) fn exp_pair(x: f64) -> (f64, f64) {
    let (shifted, high, small) = exp_parts(x);
    let exponent = f64::from_bits((shifted.to_bits().wrapping_add(1023)) << 52);
    // 1 + high - small, with the errors of both additions.
    let sum = high - small;
    let lost = (high - sum) - small;
    let main = 1.0 + sum;
    let low = ((1.0 - main) + sum) + lost;
    (exponent * main, exponent * low)
}

/// ln(high + low) for normal positive numbers, |low| at most an ulp of high.
pub(super) fn log_sum(high: f64, low: f64) -> f64 {
    log_with(high, low / high)
}

/// ln x for normal positive x.
#[inline(always)]
pub(super) fn log_inside(x: f64) -> f64 {
    log_with(x, 0.0)
}

/// ln x + correction
#[inline(always)]
fn log_with(x: f64, correction: f64) -> f64 {
    const LN2_HIGH: f64 = 6.931_471_803_691_238_164_90e-01;
    const LN2_LOW: f64 = 1.908_214_929_270_587_700_02e-10;
    const L1: f64 = 6.666_666_666_666_735_130e-01;
    const L2: f64 = 3.999_999_999_940_941_908e-01;
    const L3: f64 = 2.857_142_874_366_239_149e-01;
    const L4: f64 = 2.222_219_843_214_978_396e-01;
    const L5: f64 = 1.818_357_216_161_805_012e-01;
    const L6: f64 = 1.531_383_769_920_937_332e-01;
    const L7: f64 = 1.479_819_860_511_658_591e-01;
    /// High word of sqrt(1/2): mantissas are taken from [sqrt(1/2), sqrt(2)).
    const ROOT_HALF: u64 = 0x3fe6_a09e_0000_0000;
    /// 2^52, whose low bits hold an integer; and 1023 more, the bias of exponents.
    const HOLDER: u64 = 0x4330_0000_0000_0000;
    const BIAS: f64 = 4_503_599_627_370_496.0 + 1023.0;
    let bits = x.to_bits().wrapping_add(0x3ff0_0000_0000_0000 - ROOT_HALF);
    let exponent = f64::from_bits(HOLDER | (bits >> 52)) - BIAS;
    let f = f64::from_bits((bits & 0x000f_ffff_ffff_ffff).wrapping_add(ROOT_HALF)) - 1.0;
    let half_square = 0.5 * f * f;
    let s = f / (2.0 + f);
    let z = s * s;
    let w = z * z;
    let even = w * (L2 + w * (L4 + w * L6));
    let odd = z * (L1 + w * (L3 + w * (L5 + w * L7)));
    s * (half_square + (odd + even)) + (exponent * LN2_LOW + correction) - half_square + f + exponent * LN2_HIGH
}

#[cfg(test)]
#[path = "kernels_tests.rs"]
mod tests;
