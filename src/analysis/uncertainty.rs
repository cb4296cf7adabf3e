//! Uncertainty of values without an exact solution: apparent order, extrapolated value and grid convergence index.
//!
//! The procedure of Celik, Ghia, Roache, Freitas, Coleman & Raad (2008), ASME J. Fluids Eng. 130(7):078001. With cell sizes
//! h_1 < h_2 < h_3, ratios r_21 = h_2/h_1 and r_32 = h_3/h_2, and differences e_21 = phi_2 - phi_1 and e_32 = phi_3 - phi_2:
//!
//! p = |ln|e_32/e_21| + q(p)| / ln r_21, q(p) = ln((r_21^p - s) / (r_32^p - s)), s = sign(e_32/e_21),
//! phi_ext = (r_21^p phi_1 - phi_2) / (r_21^p - 1), GCI_21 = 1.25 |(phi_1 - phi_2)/phi_1| / (r_21^p - 1).

/// How three values converge.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Convergence {
    /// Differences shrink and keep their sign.
    Monotone,
    /// Differences change their sign: the index bounds an oscillation, and the apparent order means little.
    Oscillatory,
    /// Differences do not shrink as the grid is refined: there is no order, and no index.
    Diverging,
    /// The two finest values differ by no more than round-off: converged, or not changed by the grid at all.
    Stalled,
}

/// What three grids say about one quantity.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct GridConvergence {
    /// How the values converge.
    pub convergence: Convergence,
    /// Apparent order p; `None` where diverging or stalled.
    pub order: Option<f64>,
    /// Extrapolated value from the two finest grids; `None` without an order.
    pub extrapolated: Option<f64>,
    /// Approximate relative error |(phi_1 - phi_2) / phi_1|; `None` where phi_1 is zero.
    pub approximate_error: Option<f64>,
    /// Extrapolated relative error |(phi_ext - phi_1) / phi_ext|; `None` without an order or where phi_ext is zero.
    pub extrapolated_error: Option<f64>,
    /// Grid convergence index of the finest grid, relative; `None` without an order or where phi_1 is zero.
    pub fine_index: Option<f64>,
    /// Grid convergence index of the middle grid, relative; `None` without an order or where phi_2 is zero.
    pub coarse_index: Option<f64>,
}

/// Why three values have no grid convergence.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum UncertaintyError {
    /// Cell sizes that are not positive or do not rise.
    #[error("cell sizes {sizes:?} were given; three positive sizes from fine to coarse are needed")]
    Sizes {
        /// Sizes as given.
        sizes: [f64; 3],
    },
    /// A value that is not finite.
    #[error("value {index} is {value}; all three values must be finite")]
    NotFinite {
        /// Index from the finest grid on, from zero.
        index: usize,
        /// The value.
        value: f64,
    },
}

/// Safety factor for three grids (Roache 1998).
const SAFETY: f64 = 1.25;
/// Differences of this many eps of the values are round-off.
const ROUND_OFF: f64 = 16.0;

/// Grid convergence of one quantity on three grids, fine to coarse.
///
/// # Errors
/// Sizes that do not rise, values that are not finite.
///
/// ```
/// use gridassay::analysis::uncertainty::grid_convergence;
/// // Values 1 + h^2 on h = 1, 2, 4 extrapolate to 1 with order 2.
/// let found = grid_convergence([1.0, 2.0, 4.0], [2.0, 5.0, 17.0]).unwrap();
/// assert!((found.order.unwrap() - 2.0).abs() < 1e-12 && (found.extrapolated.unwrap() - 1.0).abs() < 1e-12);
/// ```
pub fn grid_convergence(sizes: [f64; 3], values: [f64; 3]) -> Result<GridConvergence, UncertaintyError> {
    let rising = sizes[0] > 0.0 && sizes[0] < sizes[1] && sizes[1] < sizes[2] && sizes[2].is_finite();
    if !rising {
        return Err(UncertaintyError::Sizes { sizes });
    }
    if let Some(index) = values.iter().position(|v| !v.is_finite()) {
        return Err(UncertaintyError::NotFinite { index, value: values[index] });
    }
    let (r21, r32) = (sizes[1] / sizes[0], sizes[2] / sizes[1]);
    let (e21, e32) = (values[1] - values[0], values[2] - values[1]);
    let scale = values.iter().fold(0.0_f64, |s, v| s.max(v.abs()));
    let relative = |e: f64, of: f64| (of != 0.0).then(|| (e / of).abs());
    let none = |convergence| GridConvergence {
        convergence,
        order: None,
        extrapolated: None,
        approximate_error: relative(e21, values[0]),
        extrapolated_error: None,
        fine_index: None,
        coarse_index: None,
    };
    if e21.abs() <= ROUND_OFF * f64::EPSILON * scale {
        return Ok(none(Convergence::Stalled));
    }
    let Some(order) = apparent_order(e32 / e21, r21, r32) else { return Ok(none(Convergence::Diverging)) };
    let (fine, coarse) = (r21.powf(order) - 1.0, r32.powf(order) - 1.0);
    let extrapolated = values[0] - e21 / fine;
    Ok(GridConvergence {
        convergence: if e32 / e21 < 0.0 { Convergence::Oscillatory } else { Convergence::Monotone },
        order: Some(order),
        extrapolated: Some(extrapolated),
        extrapolated_error: relative(extrapolated - values[0], extrapolated),
        fine_index: relative(e21, values[0]).map(|e| SAFETY * e / fine),
        coarse_index: relative(e32, values[1]).map(|e| SAFETY * e / coarse),
        ..none(Convergence::Monotone)
    })
}

/// Largest order that is looked for.
const HIGHEST_ORDER: f64 = 50.0;

/// The positive p with |e32/e21| (r21^p - s) = r21^p (r32^p - s), the equation above without its absolute value; `None` where there is none.
fn apparent_order(ratio: f64, r21: f64, r32: f64) -> Option<f64> {
    let s = ratio.signum();
    // Rises with p; solved by bisection, since the fixed-point iteration need not converge for small ratios.
    let f = |p: f64| p * r21.ln() + ((r32.powf(p) - s) / (r21.powf(p) - s)).ln() - ratio.abs().ln();
    let (mut low, mut high) = (1e-9, HIGHEST_ORDER);
    if !(f(low) < 0.0 && f(high) > 0.0) {
        return None;
    }
    for _ in 0..100 {
        let middle = 0.5 * (low + high);
        if f(middle) < 0.0 { low = middle } else { high = middle }
    }
    Some(0.5 * (low + high))
}

#[cfg(test)]
mod tests {
    //! Trusted: the worked examples of Celik et al. (2008), printed digits from memory, and of J. W. Slater's tutorial on grid convergence
    //! (NPARC Alliance; text values, double precision: p = 1.786170, f(0) = 0.97130, indices 0.103083 and 0.356249 per cent).
    use super::*;
    use crate::analysis::compare::agree;

    /// Cell sizes of plane grids from their cell counts.
    fn plane(counts: [f64; 3]) -> [f64; 3] {
        counts.map(|n| n.sqrt().recip())
    }

    #[test]
    fn worked_examples_of_celik_and_others() {
        let wide = plane([18_000.0, 4_500.0, 980.0]);
        for (sizes, values, kind, printed) in [
            (
                plane([18_000.0, 8_000.0, 4_500.0]),
                [6.063, 5.972, 5.863],
                Convergence::Monotone,
                [1.53, 6.1685, 1.5, 1.7, 2.2],
            ),
            (wide, [10.788, 10.725, 10.605], Convergence::Monotone, [0.75, 10.8801, 0.6, 0.85, 1.1]),
            (wide, [6.0042, 5.9624, 6.0909], Convergence::Oscillatory, [1.51, 6.0269, 0.7, 0.4, 0.5]),
        ] {
            let found = grid_convergence(sizes, values).unwrap();
            assert_eq!(found.convergence, kind);
            // Half a unit of the last printed digit. The extrapolated error of the second example is remembered as 0.9; the data give 0.847.
            agree(found.order.unwrap(), printed[0], 0.005).unwrap();
            agree(found.extrapolated.unwrap(), printed[1], 5e-5).unwrap();
            let percent = [found.approximate_error, found.extrapolated_error, found.fine_index];
            for (found, printed) in percent.iter().zip(&printed[2..]) {
                agree(100.0 * found.unwrap(), *printed, 0.05).unwrap();
            }
        }
    }

    #[test]
    fn the_tutorial_example() {
        let found = grid_convergence([1.0, 2.0, 4.0], [0.97050, 0.96854, 0.96178]).unwrap();
        agree(found.order.unwrap(), 1.786_170, 5e-7).unwrap();
        agree(found.extrapolated.unwrap(), 0.971_30, 5e-6).unwrap();
        agree(100.0 * found.fine_index.unwrap(), 0.103_083, 5e-7).unwrap();
        agree(100.0 * found.coarse_index.unwrap(), 0.356_249, 5e-7).unwrap();
    }

    #[test]
    fn known_expansions_come_back_for_any_ratio() {
        for (p, sizes) in [(1.0, [1.0, 1.3, 2.0]), (2.0, [0.1, 0.25, 0.3]), (3.5, [1.0, 2.0, 3.0])] {
            let found = grid_convergence(sizes, sizes.map(|h: f64| 7.0 - 2.0 * h.powf(p))).unwrap();
            agree(found.order.unwrap(), p, 1e-9).unwrap();
            agree(found.extrapolated.unwrap(), 7.0, 1e-9).unwrap();
        }
    }

    #[test]
    fn what_does_not_converge_is_told() {
        let kind = |values| grid_convergence([1.0, 2.0, 4.0], values).unwrap();
        assert_eq!(kind([1.0, 2.0, 2.5]).convergence, Convergence::Diverging);
        assert_eq!(kind([1.0, 2.0, 1.5]).convergence, Convergence::Diverging);
        assert_eq!(kind([1.0, 1.0, 2.0]).convergence, Convergence::Stalled);
        assert_eq!(kind([1.0, 2.0, 2.0]).fine_index, None);
        assert_eq!(kind([0.0, 1.0, 5.0]).fine_index, None);
        assert!(matches!(grid_convergence([1.0, 1.0, 2.0], [0.0; 3]), Err(UncertaintyError::Sizes { .. })));
        let nan = grid_convergence([1.0, 2.0, 3.0], [1.0, f64::NAN, 2.0]);
        assert!(matches!(nan, Err(UncertaintyError::NotFinite { index: 1, .. })));
    }
}
