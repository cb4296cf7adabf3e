//! Exact numbers inside expressions: fractions while they fit, f64 beyond.
//!
//! `0.1` is kept as 1/10 and `gamma - 1` with gamma = 1.4 becomes 2/5, not 0.3999999999999999: a constant that is folded
//! symbolically costs no rounding. Numerator and denominator stay within 2^53, so that the one division in
//! [`Number::to_f64`] is correctly rounded, and every literal comes back as the f64 that was written.

use std::cmp::Ordering;

const LIMIT: i128 = 1 << 53;

/// A number: a reduced fraction with a positive denominator, or an f64 where no small fraction exists.
#[derive(Clone, Copy, Debug)]
pub enum Number {
    /// Numerator and denominator, both within 2^53, reduced, denominator positive.
    Fraction(i64, i64),
    /// Any other value.
    Real(f64),
}

impl Number {
    /// 0
    pub const ZERO: Number = Number::Fraction(0, 1);
    /// 1
    pub const ONE: Number = Number::Fraction(1, 1);
    /// -1
    pub const MINUS_ONE: Number = Number::Fraction(-1, 1);
    /// 1/2
    pub const HALF: Number = Number::Fraction(1, 2);

    /// The fraction `numerator / denominator`, or an f64 where it does not fit.
    pub fn fraction(numerator: i128, denominator: i128) -> Number {
        if denominator == 0 {
            return Number::Real(numerator as f64 / 0.0);
        }
        let divisor = greatest_common_divisor(numerator.unsigned_abs(), denominator.unsigned_abs()).max(1) as i128;
        let sign = if denominator < 0 { -1 } else { 1 };
        let (n, d) = (sign * numerator / divisor, sign * denominator / divisor);
        if n.abs() <= LIMIT && d <= LIMIT {
            Number::Fraction(n as i64, d as i64)
        } else {
            Number::Real(n as f64 / d as f64)
        }
    }

    /// The number that the decimal text of `value` stands for: 1.4 becomes 7/5.
    pub fn from_f64(value: f64) -> Number {
        if !value.is_finite() {
            return Number::Real(value);
        }
        Number::from_decimal(&format!("{value:e}")).unwrap_or(Number::Real(value))
    }

    /// Reads decimal text such as `12`, `.5`, `1.25e-3`. `None` where it is not a number.
    pub fn from_decimal(text: &str) -> Option<Number> {
        let value: f64 = text.parse().ok()?;
        let (mantissa, exponent) = match text.split_once(['e', 'E']) {
            Some((mantissa, exponent)) => (mantissa, exponent.parse::<i32>().ok()?),
            None => (text, 0),
        };
        let (whole, fractional) = mantissa.split_once('.').unwrap_or((mantissa, ""));
        let digits = format!("{whole}{fractional}");
        let shift = exponent - fractional.len() as i32;
        let exact = (digits.len() <= 18 && shift.abs() <= 18).then(|| {
            let digits = digits.parse::<i128>().ok()?;
            let scale = 10_i128.pow(shift.unsigned_abs());
            Some(if shift < 0 { Number::fraction(digits, scale) } else { Number::fraction(digits * scale, 1) })
        });
        // The f64 is the meaning of the literal; the fraction is kept only where it is the same f64.
        match exact.flatten() {
            Some(number @ Number::Fraction(..)) if number.to_f64() == value => Some(number),
            _ => Some(Number::Real(value)),
        }
    }

    /// The nearest f64.
    pub fn to_f64(self) -> f64 {
        match self {
            Number::Fraction(n, d) => n as f64 / d as f64,
            Number::Real(value) => value,
        }
    }

    /// The value as a small integer, if it is one.
    pub fn as_integer(self) -> Option<i64> {
        match self {
            Number::Fraction(n, 1) => Some(n),
            _ => None,
        }
    }

    /// Whether this is zero.
    pub fn is_zero(self) -> bool {
        self.to_f64() == 0.0
    }

    /// Whether this is exactly 1.
    pub fn is_one(self) -> bool {
        matches!(self, Number::Fraction(1, 1))
    }

    /// Whether this is below zero.
    pub fn is_negative(self) -> bool {
        self.to_f64() < 0.0
    }

    /// Sum.
    pub fn plus(self, other: Number) -> Number {
        match (self, other) {
            (Number::Fraction(a, b), Number::Fraction(c, d)) => {
                Number::fraction(a as i128 * d as i128 + c as i128 * b as i128, b as i128 * d as i128)
            }
            _ => Number::Real(self.to_f64() + other.to_f64()),
        }
    }

    /// Product.
    pub fn times(self, other: Number) -> Number {
        match (self, other) {
            (Number::Fraction(a, b), Number::Fraction(c, d)) => {
                Number::fraction(a as i128 * c as i128, b as i128 * d as i128)
            }
            _ => Number::Real(self.to_f64() * other.to_f64()),
        }
    }

    /// The negative.
    pub fn negated(self) -> Number {
        match self {
            Number::Fraction(n, d) => Number::Fraction(-n, d),
            Number::Real(value) => Number::Real(-value),
        }
    }

    /// `self ^ exponent` where the result is exact (integers, perfect roots) or where either side is an f64 anyway; `None` for a
    /// root that has to stay symbolic, such as sqrt(2).
    pub fn power(self, exponent: Number) -> Option<Number> {
        match (self, exponent) {
            (Number::Fraction(n, d), Number::Fraction(e, 1)) => {
                let size = u32::try_from(e.unsigned_abs()).ok()?;
                let exact = (n as i128).checked_pow(size).zip((d as i128).checked_pow(size));
                Some(match exact {
                    Some((n, d)) if e >= 0 => Number::fraction(n, d),
                    Some((n, d)) => Number::fraction(d, n),
                    None => Number::Real(self.to_f64().powf(exponent.to_f64())),
                })
            }
            (Number::Fraction(n, d), Number::Fraction(e, 2)) if n >= 0 => {
                let (root_n, root_d) = (n.isqrt(), d.isqrt());
                let perfect = root_n * root_n == n && root_d * root_d == d;
                perfect.then(|| Number::Fraction(root_n, root_d).power(Number::Fraction(e, 1))).flatten()
            }
            (Number::Fraction(..), Number::Fraction(..)) => None,
            _ => Some(Number::Real(self.to_f64().powf(exponent.to_f64()))),
        }
    }

    /// Total order by value.
    pub fn order(self, other: Number) -> Ordering {
        self.to_f64().total_cmp(&other.to_f64())
    }

    pub(crate) fn bits(self) -> [u64; 2] {
        match self {
            Number::Fraction(n, d) => [n as u64, d as u64],
            Number::Real(value) => [value.to_bits(), 0],
        }
    }
}

impl PartialEq for Number {
    fn eq(&self, other: &Number) -> bool {
        self.bits() == other.bits()
    }
}

fn greatest_common_divisor(a: u128, b: u128) -> u128 {
    if b == 0 { a } else { greatest_common_divisor(b, a % b) }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_literal_is_the_f64_that_was_written() {
        for text in
            ["0.1", "1.4", "287", "6.02214076e23", "1e-300", "0.30000000000000004", "123456789.123456789", ".5", "1."]
        {
            assert_eq!(Number::from_decimal(text).unwrap().to_f64(), text.parse::<f64>().unwrap(), "{text}");
        }
        for value in [0.1, 1.0 / 3.0, 2f64.sqrt(), 1e22, -0.7, 5e-324, f64::MAX] {
            assert_eq!(Number::from_f64(value).to_f64(), value);
        }
    }

    #[test]
    fn folding_constants_is_exact() {
        let gamma = Number::from_f64(1.4);
        assert_eq!(gamma.plus(Number::MINUS_ONE), Number::Fraction(2, 5));
        assert_eq!(Number::from_f64(2.25).power(Number::HALF), Some(Number::Fraction(3, 2)));
        assert_eq!(Number::Fraction(2, 1).power(Number::HALF), None);
        assert_eq!(Number::Fraction(2, 3).power(Number::Fraction(-2, 1)), Some(Number::Fraction(9, 4)));
    }
}
