//! Norms of an error over cells, weighted by cell measure and normalised by the total measure.
//!
//! With measures w_j > 0 (length, area or volume of cell j) and W = sum w_j:
//! L1 = (1/W) sum w_j |e_j|, L2 = sqrt((1/W) sum w_j e_j^2), Linf = max |e_j|.
//! Equal cells therefore need no measure, and a constant error has the same value in all three norms. The norms rise in this order:
//! L1 <= L2 <= Linf.

/// Measures of the cells over which an error is taken.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Measure<'a> {
    /// All cells are equal.
    Equal,
    /// One positive length, area or volume a cell.
    PerCell(&'a [f64]),
}

/// Why an array has no norm.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NormError {
    /// No cells at all.
    #[error("the error has no entries, so it has no norm; give at least one cell")]
    Empty,
    /// A NaN or an infinity among the errors.
    #[error("the error of cell {cell} is {value}; look for the first step at which the solution stops being finite")]
    NotFinite {
        /// Index of the first such cell.
        cell: usize,
        /// Its value.
        value: f64,
    },
    /// The count of measures differs from that of the errors.
    #[error("{errors} errors were given with {measures} cell measures; give one measure a cell")]
    Length {
        /// Errors given.
        errors: usize,
        /// Measures given.
        measures: usize,
    },
    /// A measure that is no positive number.
    #[error("the measure of cell {cell} is {value}; a length, area or volume must be positive and finite")]
    BadMeasure {
        /// Index of the first such cell.
        cell: usize,
        /// Its value.
        value: f64,
    },
}

/// The three norms of one error.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Norms {
    /// Mean of the absolute value.
    pub l1: f64,
    /// Root of the mean square.
    pub l2: f64,
    /// Largest absolute value.
    pub linf: f64,
}

impl Norms {
    /// All three norms of an error.
    ///
    /// # Errors
    /// An empty error, an entry that is not finite, measures of another length or not positive.
    ///
    /// ```
    /// use gridassay::analysis::norms::{Measure, Norms};
    /// let n = Norms::of(&[3.0, -4.0], Measure::Equal).unwrap();
    /// assert_eq!((n.l1, n.l2, n.linf), (3.5, 12.5_f64.sqrt(), 4.0));
    /// ```
    pub fn of(error: &[f64], measure: Measure) -> Result<Self, NormError> {
        Ok(Norms { l1: l1(error, measure)?, l2: l2(error, measure)?, linf: linf(error, measure)? })
    }
}

/// Mean of |e| over the cells, weighted by their measure.
///
/// # Errors
/// See [`Norms::of`].
pub fn l1(error: &[f64], measure: Measure) -> Result<f64, NormError> {
    let largest = linf(error, measure)?;
    if largest == 0.0 {
        return Ok(0.0);
    }
    Ok(largest * weighted_mean(error, measure, |e| (e / largest).abs()))
}

/// Root of the mean of e^2 over the cells, weighted by their measure.
///
/// # Errors
/// See [`Norms::of`].
pub fn l2(error: &[f64], measure: Measure) -> Result<f64, NormError> {
    let largest = linf(error, measure)?;
    if largest == 0.0 {
        return Ok(0.0);
    }
    // Scaled by the largest entry: squares of 1e-170 or of 1e170 would leave the range of f64.
    Ok(largest * weighted_mean(error, measure, |e| (e / largest).powi(2)).sqrt())
}

/// Largest |e| over the cells.
///
/// # Errors
/// See [`Norms::of`].
pub fn linf(error: &[f64], measure: Measure) -> Result<f64, NormError> {
    check(error, measure)?;
    Ok(error.iter().fold(0.0, |largest, e| largest.max(e.abs())))
}

fn check(error: &[f64], measure: Measure) -> Result<(), NormError> {
    if error.is_empty() {
        return Err(NormError::Empty);
    }
    // f64::max drops NaN, so entries are tried one by one before any maximum is taken.
    if let Some(cell) = error.iter().position(|e| !e.is_finite()) {
        return Err(NormError::NotFinite { cell, value: error[cell] });
    }
    let Measure::PerCell(w) = measure else { return Ok(()) };
    if w.len() != error.len() {
        return Err(NormError::Length { errors: error.len(), measures: w.len() });
    }
    match w.iter().position(|w| !(w.is_finite() && *w > 0.0)) {
        Some(cell) => Err(NormError::BadMeasure { cell, value: w[cell] }),
        None => Ok(()),
    }
}

fn weighted_mean(error: &[f64], measure: Measure, f: impl Fn(f64) -> f64) -> f64 {
    match measure {
        Measure::Equal => compensated_sum(error.iter().map(|&e| f(e))) / error.len() as f64,
        Measure::PerCell(w) => {
            let largest = w.iter().fold(0.0, |l: f64, w| l.max(*w));
            let total = compensated_sum(w.iter().map(|w| w / largest));
            compensated_sum(error.iter().zip(w).map(|(&e, w)| w / largest * f(e))) / total
        }
    }
}

/// Sum with the lost low-order part carried along (Neumaier 1974), so that its error does not grow with the number of cells.
pub fn compensated_sum(terms: impl Iterator<Item = f64>) -> f64 {
    let (mut sum, mut lost) = (0.0_f64, 0.0);
    for term in terms {
        let next = sum + term;
        lost += if sum.abs() >= term.abs() { (sum - next) + term } else { (term - next) + sum };
        sum = next;
    }
    sum + lost
}

#[cfg(test)]
mod tests {
    //! Trusted: norms of a constant, of a single spike, and integrals of x over [0, 1], all closed forms.
    use super::*;
    use crate::analysis::compare::agree;

    #[test]
    fn a_constant_error_has_the_same_value_in_every_norm() {
        let w: Vec<f64> = (1..=7).map(|j| 0.1 * f64::from(j)).collect();
        for measure in [Measure::Equal, Measure::PerCell(&w)] {
            let n = Norms::of(&[-0.3; 7], measure).unwrap();
            for value in [n.l1, n.l2, n.linf] {
                agree(value, 0.3, 2.0 * f64::EPSILON).unwrap();
            }
        }
    }

    #[test]
    fn a_spike_tells_the_weights() {
        // Cell 2 holds 3/10 of the measure: L1 = 0.3 * 2, L2 = sqrt(0.3) * 2, Linf = 2. On equal cells: a third.
        let w = [0.5, 0.2, 0.3];
        let e = [0.0, 0.0, -2.0];
        let n = Norms::of(&e, Measure::PerCell(&w)).unwrap();
        agree(n.l1, 0.6, 4.0 * f64::EPSILON).unwrap();
        agree(n.l2, 2.0 * 0.3_f64.sqrt(), 4.0 * f64::EPSILON).unwrap();
        agree(n.linf, 2.0, 0.0).unwrap();
        let n = Norms::of(&e, Measure::Equal).unwrap();
        agree(n.l1, 2.0 / 3.0, 4.0 * f64::EPSILON).unwrap();
        agree(n.l2, 2.0 / 3.0_f64.sqrt(), 4.0 * f64::EPSILON).unwrap();
    }

    #[test]
    fn sizes_at_the_ends_of_the_range_keep_their_digits() {
        for size in [1e-300, 1e-170, 1e170, 1e300] {
            let n = Norms::of(&[3.0 * size, 4.0 * size], Measure::Equal).unwrap();
            agree(n.l1 / size, 3.5, 1e-14).unwrap();
            agree(n.l2 / size, 12.5_f64.sqrt(), 1e-14).unwrap();
        }
        assert_eq!(Norms::of(&[0.0, -0.0], Measure::Equal), Ok(Norms { l1: 0.0, l2: 0.0, linf: 0.0 }));
    }

    #[test]
    fn a_million_cells_lose_nothing() {
        // Mean of x^2 at the centres of n cells of [0, 1] is 1/3 - 1/(12 n^2).
        let n = 1_000_000;
        let e: Vec<f64> = (0..n).map(|j| (f64::from(j) + 0.5) / f64::from(n)).collect();
        let mean_square = l2(&e, Measure::Equal).unwrap().powi(2);
        agree(mean_square, 1.0 / 3.0 - 1.0 / (12.0 * f64::from(n).powi(2)), 8.0 * f64::EPSILON).unwrap();
        agree(l1(&e, Measure::Equal).unwrap(), 0.5, 4.0 * f64::EPSILON).unwrap();
    }

    #[test]
    fn what_is_not_finite_is_refused_wherever_it_stands() {
        for cell in 0..3 {
            for value in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
                let mut e = [1.0; 3];
                e[cell] = value;
                for norm in [l1, l2, linf] {
                    assert!(matches!(norm(&e, Measure::Equal), Err(NormError::NotFinite { cell: c, .. }) if c == cell));
                }
            }
        }
        assert_eq!(l2(&[], Measure::Equal), Err(NormError::Empty));
        let length = NormError::Length { errors: 2, measures: 1 };
        assert_eq!(linf(&[1.0, 2.0], Measure::PerCell(&[1.0])), Err(length));
        let bad = NormError::BadMeasure { cell: 1, value: 0.0 };
        assert_eq!(l1(&[1.0, 2.0], Measure::PerCell(&[1.0, 0.0])), Err(bad));
    }
}
