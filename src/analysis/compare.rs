//! The one comparison of floating-point numbers: absolute, and failing on NaN and infinity.

use num_complex::Complex64;

/// A number that has a distance to another one.
pub trait Comparable: Copy {
    /// |self - other|; NaN or infinity where either is not finite.
    fn distance(self, other: Self) -> f64;
    /// The value as a complex number, for messages.
    fn as_complex(self) -> Complex64;
}

impl Comparable for f64 {
    fn distance(self, other: Self) -> f64 {
        (self - other).abs()
    }
    fn as_complex(self) -> Complex64 {
        self.into()
    }
}

impl Comparable for Complex64 {
    fn distance(self, other: Self) -> f64 {
        (self - other).norm()
    }
    fn as_complex(self) -> Complex64 {
        self
    }
}

/// Two values that do not agree.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum Mismatch {
    /// The values differ by more than the tolerance, or one of them is not finite.
    #[error(
        "value {index} is {found} where {expected} was expected: they differ by {distance:e}, and {tolerance:e} is allowed"
    )]
    Value {
        /// Place in the arrays, from zero; zero for single values.
        index: usize,
        /// The value that was found.
        found: Complex64,
        /// The value that was expected.
        expected: Complex64,
        /// |found - expected|; NaN where either is not finite.
        distance: f64,
        /// The allowed distance.
        tolerance: f64,
    },
    /// The arrays have different lengths.
    #[error("{found} values were found where {expected} were expected; compare arrays of equal length")]
    Length {
        /// Values found.
        found: usize,
        /// Values expected.
        expected: usize,
    },
}

/// Distance |found - expected| where it is at most `tolerance`.
///
/// # Errors
/// [`Mismatch::Value`] where the distance is larger, or where either value or the tolerance is NaN or infinite.
///
/// ```
/// use gridassay::analysis::compare::agree;
/// assert!(agree(1.0, 1.0 + 1e-16, 1e-15).is_ok());
/// assert!(agree(f64::NAN, f64::NAN, 1e-15).is_err());
/// assert!(agree(f64::INFINITY, f64::INFINITY, f64::INFINITY).is_err());
/// ```
pub fn agree<T: Comparable>(found: T, expected: T, tolerance: f64) -> Result<f64, Mismatch> {
    agree_at(0, found, expected, tolerance)
}

/// Largest distance between the entries of two arrays where every one is at most `tolerance`.
///
/// # Errors
/// The first entry that does not agree (see [`agree`]), or arrays of different lengths.
pub fn all_agree<T: Comparable>(found: &[T], expected: &[T], tolerance: f64) -> Result<f64, Mismatch> {
    if found.len() != expected.len() {
        return Err(Mismatch::Length { found: found.len(), expected: expected.len() });
    }
    let pairs = found.iter().zip(expected).enumerate();
    pairs.map(|(index, (&f, &e))| agree_at(index, f, e, tolerance)).try_fold(0.0, |worst: f64, d| Ok(worst.max(d?)))
}

fn agree_at<T: Comparable>(index: usize, found: T, expected: T, tolerance: f64) -> Result<f64, Mismatch> {
    let distance = found.distance(expected);
    // Written so that NaN on either side of `<=` is a failure; an infinite tolerance would let an infinite distance pass.
    if distance.is_finite() && tolerance.is_finite() && distance <= tolerance {
        return Ok(distance);
    }
    let (found, expected) = (found.as_complex(), expected.as_complex());
    Err(Mismatch::Value { index, found, expected, distance, tolerance })
}

#[cfg(test)]
mod tests {
    //! Each test states a case that must fail beside one that must pass.
    use super::*;

    #[test]
    fn the_sign_of_the_difference_does_not_matter() {
        for (found, expected) in [(1.0, 3.0), (3.0, 1.0)] {
            assert!(agree(found, expected, 1.9).is_err());
            assert_eq!(agree(found, expected, 2.0), Ok(2.0));
        }
    }

    #[test]
    fn nothing_that_is_not_finite_agrees() {
        let wrong = [f64::NAN, f64::INFINITY, f64::NEG_INFINITY];
        for value in wrong {
            assert!(agree(value, value, 1.0).is_err());
            assert!(agree(value, 1.0, f64::MAX).is_err());
            assert!(agree(1.0, value, f64::MAX).is_err());
            assert!(agree(1.0, 1.0, value).is_err());
            assert!(agree(Complex64::new(0.0, value), Complex64::new(0.0, value), 1.0).is_err());
        }
    }

    #[test]
    fn arrays_tell_the_first_place_and_never_hide_a_nan_behind_a_maximum() {
        let expected = [0.0, 1.0, 2.0];
        assert_eq!(all_agree(&[0.0, 1.5, 2.0], &expected, 0.5), Ok(0.5));
        let error = all_agree(&[0.0, f64::NAN, 9.0], &expected, 0.5).unwrap_err();
        assert!(matches!(error, Mismatch::Value { index: 1, .. }));
        assert_eq!(all_agree(&[0.0], &expected, 0.5), Err(Mismatch::Length { found: 1, expected: 3 }));
        let message = all_agree(&[0.0, 1.0, 2.5], &expected, 0.25).unwrap_err().to_string();
        assert_eq!(message, "value 2 is 2.5+0i where 2+0i was expected: they differ by 5e-1, and 2.5e-1 is allowed");
    }
}
