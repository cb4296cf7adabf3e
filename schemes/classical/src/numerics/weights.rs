//! Weights of finite differences on arbitrary points.

/// Weights w\[m\]\[i\] of f(x_i) in the derivative of order m at `at`, for m from 0 to `highest`.
///
/// Exact for polynomials of degree below the number of points. Source: Fornberg 1988, Math. Comp. 51:699-706, the
/// algorithm of its section 2.
pub fn finite_difference_weights(at: f64, points: &[f64], highest: usize) -> Vec<Vec<f64>> {
    let mut w = vec![vec![0.0; points.len()]; highest + 1];
    w[0][0] = 1.0;
    let mut product = 1.0;
    for i in 1..points.len() {
        let mut differences = 1.0;
        let new_product = (0..i).map(|j| points[i] - points[j]).product::<f64>();
        for j in 0..i {
            let distance = points[i] - points[j];
            differences *= distance;
            if j + 1 == i {
                for m in (0..=highest.min(i)).rev() {
                    let lower = if m > 0 { m as f64 * w[m - 1][i - 1] } else { 0.0 };
                    w[m][i] = product * (lower - (points[i - 1] - at) * w[m][i - 1]) / differences;
                }
            }
            for m in (0..=highest.min(i)).rev() {
                let lower = if m > 0 { m as f64 * w[m - 1][j] } else { 0.0 };
                w[m][j] = ((points[i] - at) * w[m][j] - lower) / distance;
            }
        }
        product = new_product;
    }
    w
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn polynomials_are_differentiated_exactly() {
        let points: Vec<f64> = (0..7).map(|i| i as f64).collect();
        for at in [0.0, 1.0, 2.5] {
            let w = finite_difference_weights(at, &points, 2);
            for degree in 0..7_i32 {
                let f = |x: f64| x.powi(degree);
                let d = f64::from(degree);
                let exact = [
                    f(at),
                    if degree > 0 { d * at.powi(degree - 1) } else { 0.0 },
                    if degree > 1 { d * (d - 1.0) * at.powi(degree - 2) } else { 0.0 },
                ];
                for m in 0..3 {
                    let terms: Vec<f64> = points.iter().zip(&w[m]).map(|(x, w)| f(*x) * w).collect();
                    let size: f64 = terms.iter().map(|t| t.abs()).sum();
                    let error = (terms.iter().sum::<f64>() - exact[m]).abs();
                    // Weights carry a few roundings for each of the 7 points.
                    assert!(error <= 100.0 * f64::EPSILON * size.max(1.0), "{at} {degree} {m}: {error}");
                }
            }
        }
    }

    #[test]
    fn the_known_central_weights_come_out() {
        let w = finite_difference_weights(0.0, &[-2.0, -1.0, 0.0, 1.0, 2.0], 2);
        let twelfths = |row: [f64; 5]| row.map(|v| v / 12.0);
        for (m, known) in [(1, twelfths([1.0, -8.0, 0.0, 8.0, -1.0])), (2, twelfths([-1.0, 16.0, -30.0, 16.0, -1.0]))] {
            assert!(w[m].iter().zip(known).all(|(a, b)| (a - b).abs() < 10.0 * f64::EPSILON));
        }
    }
}
