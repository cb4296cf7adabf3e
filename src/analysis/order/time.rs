//! Order in time alone, from solutions on one grid with falling steps.
//!
//! Solutions of one time on one grid share their error in space, which cancels when neighbours are subtracted: with u(k) = u(0) + C k^p + ...
//! the norm of u(k_i) - u(k_{i+1}) is |C| (k_i^p - k_{i+1}^p). Divided by 1 - (k_{i+1}/k_i)^p this is |C| k_i^p, the error in time of step
//! k_i, and so a ladder of its own. With equal ratios the divisor is the same on every level and p is not needed; otherwise it is
//! solved for from the three finest steps.
//!
//! Such a study compares a scheme with itself: it sees no inconsistency, so space must be studied too.

use super::ladder::{Ladder, LadderError, Level};
use crate::analysis::norms::{Measure, NormError};

/// Why solutions give no ladder of differences.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum TimeError {
    /// Steps or floors do not form a ladder.
    #[error(transparent)]
    Ladder(#[from] LadderError),
    /// Two solutions cannot be compared.
    #[error("solutions {level} and {} cannot be compared: {source}", level + 1)]
    Norm {
        /// Index of the coarser solution, from zero.
        level: usize,
        /// Why their difference has no norm.
        source: NormError,
    },
    /// Solutions of different lengths.
    #[error("solution {level} has {found} values where {expected} were expected; all steps must run on one grid")]
    Length {
        /// Index of the solution, from zero.
        level: usize,
        /// Values found.
        found: usize,
        /// Values of the first solution.
        expected: usize,
    },
}

/// The ladder of errors in time from solutions at falling steps; it has one level fewer than there are steps.
///
/// `norm` is one of [`crate::analysis::norms`]; `floor` is the round-off of one solution in that norm (a difference has twice as much).
///
/// # Errors
/// Steps that do not fall, solutions of different lengths, or a difference without a norm.
pub fn ladder_of_differences(
    steps: &[f64],
    solutions: &[Vec<f64>],
    measure: Measure,
    norm: impl Fn(&[f64], Measure) -> Result<f64, NormError>,
    floor: f64,
) -> Result<Ladder, TimeError> {
    if steps.len() != solutions.len() {
        return Err(LadderError::Length { sizes: steps.len(), values: solutions.len() }.into());
    }
    let expected = solutions.first().map_or(0, Vec::len);
    if let Some(level) = solutions.iter().position(|s| s.len() != expected) {
        return Err(TimeError::Length { level, found: solutions[level].len(), expected });
    }
    let difference = |(level, pair): (usize, &[Vec<f64>])| {
        let error: Vec<f64> = pair[0].iter().zip(&pair[1]).map(|(a, b)| a - b).collect();
        match norm(&error, measure) {
            // A run that failed is one for the judgement to tell, not a reason to lose the others.
            Err(NormError::NotFinite { .. }) => Ok(f64::NAN),
            found => found.map_err(|source| TimeError::Norm { level, source }),
        }
    };
    let differences = solutions.windows(2).enumerate().map(difference).collect::<Result<Vec<_>, _>>()?;
    Ok(ladder_from_differences(steps, &differences, 2.0 * floor)?)
}

/// The same ladder from the norms of the differences between neighbouring solutions.
///
/// # Errors
/// Steps that do not fall, or not one difference fewer than steps.
///
/// ```
/// use gridassay::analysis::order::ladder_from_differences;
/// // Errors k^2 at steps 1, 1/2, 1/4, 1/8 have differences 3/4, 3/16, 3/64; the errors themselves come back.
/// let ladder = ladder_from_differences(&[1.0, 0.5, 0.25, 0.125], &[0.75, 0.1875, 0.046875], 0.0).unwrap();
/// assert!((ladder.levels()[1].error - 0.25).abs() < 1e-12);
/// ```
pub fn ladder_from_differences(steps: &[f64], differences: &[f64], floor: f64) -> Result<Ladder, LadderError> {
    if differences.len() + 1 != steps.len() {
        return Err(LadderError::Length { sizes: steps.len(), values: differences.len() + 1 });
    }
    // Validates the steps first, the last one included: it has no level of its own.
    Ladder::new(steps.iter().map(|&h| Level { h, error: 0.0, floor }).collect())?;
    let order = order_of_finest(steps, differences);
    let level = |(pair, &difference): (&[f64], &f64)| {
        let share = 1.0 - (pair[1] / pair[0]).powf(order);
        Level { h: pair[0], error: difference / share, floor: floor / share }
    };
    Ladder::new(steps.windows(2).zip(differences).map(level).collect())
}

/// Orders between which that of a method in time is looked for.
const ORDERS: (f64, f64) = (0.1, 12.0);

/// Order p for which the two finest differences fit: d_1 / d_2 = (k_1^p - k_2^p) / (k_2^p - k_3^p). One where they fit no order.
fn order_of_finest(steps: &[f64], differences: &[f64]) -> f64 {
    let ([.., k1, k2, k3], [.., d1, d2]) = (steps, differences) else { return 1.0 };
    let ratio = |p: f64| ((k1 / k2).powf(p) - 1.0) / (1.0 - (k3 / k2).powf(p));
    let (mut low, mut high) = ORDERS;
    if !(ratio(low) <= d1 / d2 && d1 / d2 <= ratio(high)) {
        return 1.0;
    }
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if ratio(middle) < d1 / d2 { low = middle } else { high = middle }
    }
    0.5 * (low + high)
}

#[cfg(test)]
mod tests {
    //! Trusted: y' = -y by Euler (1 - k)^n and by the trapezoidal rule, whose errors in time are known in closed form.
    use super::super::{Outcome, Settings, judge, observe};
    use super::*;
    use crate::analysis::norms::l2;

    /// A field whose every value decays; the same error in space on every step.
    fn solutions(counts: &[i32], factor: impl Fn(f64) -> f64) -> (Vec<f64>, Vec<Vec<f64>>) {
        let steps: Vec<f64> = counts.iter().map(|&n| 1.0 / f64::from(n)).collect();
        let field =
            |(&n, &k): (&i32, &f64)| (1..6).map(|j| f64::from(j) * factor(k).powi(n) + 0.1 / f64::from(j)).collect();
        let fields = counts.iter().zip(&steps).map(field).collect();
        (steps, fields)
    }

    fn outcome(counts: &[i32], factor: impl Fn(f64) -> f64, claim: f64) -> Outcome {
        let (steps, fields) = solutions(counts, factor);
        let ladder = ladder_of_differences(&steps, &fields, Measure::Equal, l2, 1e-16).unwrap();
        judge(&observe(&ladder, Settings::default()), claim, Settings::default()).outcome
    }

    #[test]
    fn orders_of_known_methods_with_equal_and_unequal_ratios() {
        let euler = |k: f64| 1.0 - k;
        let trapezoidal = |k: f64| (1.0 - 0.5 * k) / (1.0 + 0.5 * k);
        for counts in [&[10, 20, 40, 80, 160, 320][..], &[10, 15, 30, 45, 100, 150, 330]] {
            assert_eq!(outcome(counts, euler, 1.0), Outcome::Upheld, "{counts:?}");
            assert_eq!(outcome(counts, euler, 2.0), Outcome::Refuted, "{counts:?}");
            assert_eq!(outcome(counts, trapezoidal, 2.0), Outcome::Upheld, "{counts:?}");
            assert_eq!(outcome(counts, trapezoidal, 3.0), Outcome::Refuted, "{counts:?}");
        }
    }

    #[test]
    fn failed_and_mismatched_runs_are_told() {
        let (steps, mut fields) = solutions(&[10, 20, 40, 80], |k| 1.0 - k);
        fields[2][0] = f64::NAN;
        let ladder = ladder_of_differences(&steps, &fields, Measure::Equal, l2, 0.0).unwrap();
        assert_eq!(ladder.first_failed(), Some(1));
        fields[3].pop();
        let error = ladder_of_differences(&steps, &fields, Measure::Equal, l2, 0.0).unwrap_err();
        assert_eq!(error, TimeError::Length { level: 3, found: 4, expected: 5 });
        assert!(ladder_from_differences(&[1.0, 2.0], &[1.0], 0.0).is_err());
        assert!(ladder_from_differences(&[1.0, 0.5], &[], 0.0).is_err());
    }
}
