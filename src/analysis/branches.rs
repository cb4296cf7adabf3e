//! Eigenvalue branches of a block symbol, followed continuously in theta and paired with exact ones.

use super::eigen::{DecompositionError, eigenpairs};
use super::matrix::Matrix;
use num_complex::Complex64;

/// One branch: an eigenvalue as a continuous function of theta.
#[derive(Debug, Clone, PartialEq)]
pub struct Branch {
    /// The eigenvalue at each theta that was given.
    pub values: Vec<Complex64>,
    /// Its eigenvector there, of unit length.
    pub vectors: Vec<Vec<Complex64>>,
    /// Index of the exact branch that it follows, where it follows one.
    pub exact: Option<usize>,
}

/// The branches of blocks G(theta) at neighbouring theta.
///
/// From one theta to the next an eigenvalue goes to the one that is nearest to the straight continuation of its branch and whose
/// eigenvector is most nearly parallel, so that branches cross instead of repelling each other. Steps in theta must be small against the
/// distance in which eigenvectors turn.
///
/// # Errors
/// A block that is not finite, or whose eigenvalues do not converge.
pub fn follow(blocks: &[Matrix]) -> Result<Vec<Branch>, DecompositionError> {
    let mut branches: Vec<Branch> = Vec::new();
    for block in blocks {
        let pairs = eigenpairs(block)?;
        if branches.is_empty() {
            let start = |(&value, vector): (&Complex64, &Vec<Complex64>)| Branch {
                values: vec![value],
                vectors: vec![vector.clone()],
                exact: None,
            };
            branches = pairs.values.iter().zip(&pairs.vectors).map(start).collect();
            continue;
        }
        let scale = block.frobenius_norm().max(f64::MIN_POSITIVE);
        let cost = |b: usize, k: usize| {
            let branch = &branches[b];
            let distance = (pairs.values[k] - continuation(&branch.values)).norm() / scale;
            let overlap = inner(&branch.vectors[branch.vectors.len() - 1], &pairs.vectors[k]).norm();
            distance + (1.0 - overlap)
        };
        for (b, k) in assign(branches.len(), pairs.values.len(), cost) {
            branches[b].values.push(pairs.values[k]);
            branches[b].vectors.push(pairs.vectors[k].clone());
        }
    }
    Ok(branches)
}

/// Pairs branches with exact ones: `exact[e][i]` is the exact factor of branch e at theta i.
///
/// The pairing minimises the sum of |eigenvalue - exact factor| over the first `long_waves` values, where schemes are accurate; at theta = 0
/// itself several branches may coincide. Branches beyond the number of exact ones stay unpaired: computational roots.
pub fn pair_with_exact(branches: &mut [Branch], exact: &[Vec<Complex64>], long_waves: usize) {
    let cost = |b: usize, e: usize| -> f64 {
        let branch: &Branch = &branches[b];
        branch.values.iter().zip(&exact[e]).take(long_waves).map(|(v, x)| (v - x).norm()).sum()
    };
    for (b, e) in assign(branches.len(), exact.len(), cost) {
        branches[b].exact = Some(e);
    }
}

/// Shares of the branches in an initial state at one theta: |a_k|^2 / sum |a|^2, with the state = sum of a_k x_k and unit eigenvectors x_k.
///
/// `None` where the eigenvectors are dependent (a defective block) or the state is zero.
pub fn shares(branches: &[Branch], at: usize, state: &[Complex64]) -> Option<Vec<f64>> {
    let vectors = Matrix::from_fn(state.len(), |i, k| branches[k].vectors[at][i]);
    let amplitudes = vectors.inverse()?.apply(state);
    let total: f64 = amplitudes.iter().map(Complex64::norm_sqr).sum();
    (total > 0.0 && total.is_finite()).then(|| amplitudes.iter().map(|a| a.norm_sqr() / total).collect())
}

fn continuation(values: &[Complex64]) -> Complex64 {
    match values {
        [.., before, last] => 2.0 * last - before,
        _ => values[values.len() - 1],
    }
}

fn inner(a: &[Complex64], b: &[Complex64]) -> Complex64 {
    a.iter().zip(b).map(|(a, b)| a.conj() * b).sum()
}

/// Pairs rows with columns so that the sum of costs is least: greedy, then improved by exchanges of two until none helps.
fn assign(rows: usize, columns: usize, cost: impl Fn(usize, usize) -> f64) -> Vec<(usize, usize)> {
    let costs: Vec<Vec<f64>> = (0..rows).map(|r| (0..columns).map(|c| cost(r, c)).collect()).collect();
    let mut all: Vec<(usize, usize)> = (0..rows).flat_map(|r| (0..columns).map(move |c| (r, c))).collect();
    all.sort_by(|a, b| costs[a.0][a.1].total_cmp(&costs[b.0][b.1]));
    let (mut of_row, mut taken) = (vec![None; rows], vec![false; columns]);
    for (r, c) in all {
        if of_row[r].is_none() && !taken[c] {
            (of_row[r], taken[c]) = (Some(c), true);
        }
    }
    let at = |r: usize, c: Option<usize>| c.map_or(0.0, |c| costs[r][c]);
    let mut improved = true;
    while improved {
        improved = false;
        for r in 0..rows {
            for q in r + 1..rows {
                let now = at(r, of_row[r]) + at(q, of_row[q]);
                // By more than rounding, so that equal sums are not exchanged for ever.
                if at(r, of_row[q]) + at(q, of_row[r]) < now - 1e-14 * now.abs() {
                    of_row.swap(r, q);
                    improved = true;
                }
            }
        }
    }
    of_row.into_iter().enumerate().filter_map(|(r, c)| c.map(|c| (r, c))).collect()
}

#[cfg(test)]
mod tests {
    //! Trusted: roots of leapfrog and of acoustics with upwind flux splitting in closed form.
    use super::*;
    use crate::analysis::compare::agree;
    use std::f64::consts::PI;

    fn thetas(n: usize) -> Vec<f64> {
        (0..=n).map(|k| PI * k as f64 / n as f64).collect()
    }

    #[test]
    fn physical_and_computational_root_of_leapfrog() {
        let c = 0.9;
        let leapfrog = |t: &f64| {
            let corner = Complex64::new(0.0, -2.0 * c * t.sin());
            Matrix::from_rows(2, vec![corner, Complex64::ONE, Complex64::ONE, Complex64::ZERO]).unwrap()
        };
        let thetas = thetas(64);
        let mut branches = follow(&thetas.iter().map(leapfrog).collect::<Vec<_>>()).unwrap();
        let exact: Vec<Complex64> = thetas.iter().map(|t| Complex64::cis(-c * t)).collect();
        pair_with_exact(&mut branches, &[exact], 8);
        for branch in &branches {
            // -i s + sqrt(1 - s^2) is physical, -i s - sqrt(1 - s^2) computational.
            let sign = if branch.exact == Some(0) { 1.0 } else { -1.0 };
            for (t, value) in thetas.iter().zip(&branch.values) {
                let s = c * t.sin();
                agree(*value, Complex64::new(sign * (1.0 - s * s).sqrt(), -s), 1e-14).unwrap();
            }
        }
        assert_eq!(branches.iter().filter(|b| b.exact.is_some()).count(), 1);
        // Started from the exact solution at both levels, long waves carry nearly everything in the physical root.
        let state = [Complex64::ONE, Complex64::cis(c * thetas[2])];
        let shares = shares(&branches, 2, &state).unwrap();
        let physical = branches.iter().position(|b| b.exact.is_some()).unwrap();
        assert!(shares[physical] > 0.999_99 && (shares.iter().sum::<f64>() - 1.0).abs() < 1e-14);
    }

    #[test]
    fn crossing_branches_keep_their_identity() {
        // Two decoupled modes, turned by a fixed rotation, whose values cross at theta = pi/2; and a third that stays away.
        let (cosine, sine) = (0.6, 0.8);
        let turn = [[cosine, -sine, 0.0], [sine, cosine, 0.0], [0.0, 0.0, 1.0]];
        let values = |t: f64| [t.cos(), -t.cos(), 2.0];
        let block = |t: &f64| {
            let v = values(*t);
            Matrix::from_fn(3, |i, j| (0..3).map(|k| turn[i][k] * v[k] * turn[j][k]).sum::<f64>().into())
        };
        let thetas = thetas(41);
        let mut branches = follow(&thetas.iter().map(block).collect::<Vec<_>>()).unwrap();
        let exact: Vec<Vec<Complex64>> =
            (0..3).map(|k| thetas.iter().map(|t| values(*t)[k].into()).collect()).collect();
        pair_with_exact(&mut branches, &exact, 5);
        for branch in &branches {
            let expected = &exact[branch.exact.unwrap()];
            for (value, expected) in branch.values.iter().zip(expected) {
                agree(*value, *expected, 1e-14).unwrap();
            }
        }
    }

    #[test]
    fn acoustics_with_upwind_fluxes_has_two_sound_waves() {
        // p_t + K u_x = 0, u_t + p_x / rho = 0 in characteristic form: G = 1 - c (1 - exp(-+ i theta)) for the wave to the right and left.
        let (c, impedance) = (0.7, 3.0);
        let block = |t: &f64| {
            let (right, left) = (1.0 - c * (1.0 - Complex64::cis(-t)), 1.0 - c * (1.0 - Complex64::cis(*t)));
            let (mean, half) = (0.5 * (right + left), 0.5 * (right - left));
            Matrix::from_rows(2, vec![mean, half * impedance, half / impedance, mean]).unwrap()
        };
        // At theta = 0 the block is the identity and says nothing about branches: start next to it.
        let thetas = &thetas(40)[1..];
        let mut branches = follow(&thetas.iter().map(block).collect::<Vec<_>>()).unwrap();
        let exact = [-c, c].map(|c| thetas.iter().map(|t| Complex64::cis(c * t)).collect::<Vec<_>>());
        pair_with_exact(&mut branches, &exact, 4);
        for branch in &branches {
            let sign = if branch.exact == Some(0) { -1.0 } else { 1.0 };
            for (t, value) in thetas.iter().zip(&branch.values) {
                agree(*value, 1.0 - c * (1.0 - Complex64::cis(sign * t)), 1e-14).unwrap();
            }
        }
    }

    /// Rate of the discontinuous Galerkin method of degree N with upwind flux for u_t + u_x = 0 and h = 1, in Legendre coefficients:
    /// (2n + 1) (sum over m of a_m (D_nm - 1) + (-1)^n exp(-i theta) sum of a_m), D_nm = 2 where n - m is positive and odd.
    fn discontinuous_galerkin(degree: usize, theta: f64) -> Matrix {
        Matrix::from_fn(degree + 1, |n, m| {
            let inner = if n > m && (n - m) % 2 == 1 { 2.0 } else { 0.0 };
            let sign = if n.is_multiple_of(2) { 1.0 } else { -1.0 };
            (2 * n + 1) as f64 * (inner - 1.0 + sign * Complex64::cis(-theta))
        })
    }

    #[test]
    fn physical_branch_of_discontinuous_galerkin() {
        // i lambda = theta + B theta^(2N+3) - i A theta^(2N+2): orders after Hu & Atkins (2002), J. Comput. Phys. 182:516-545, and Ainsworth
        // (2004), J. Comput. Phys. 198:106-130; A = (N!/(2N+1)!)^2 / 2 and B = 2 A (N+1) / ((2N+1)(2N+3)), re-derived with SymPy.
        for (degree, a, b) in [(1, 72.0, 270.0), (2, 7200.0, 42_000.0), (3, 1_411_200.0, 11_113_200.0)] {
            let thetas: Vec<f64> = (1..=60).map(|k| 0.02 * f64::from(k)).collect();
            let blocks: Vec<Matrix> = thetas.iter().map(|&t| discontinuous_galerkin(degree, t)).collect();
            let mut branches = follow(&blocks).unwrap();
            let exact: Vec<Complex64> = thetas.iter().map(|t| Complex64::new(0.0, -t)).collect();
            pair_with_exact(&mut branches, &[exact], 5);
            let physical = branches.iter().find(|b| b.exact == Some(0)).unwrap();
            for at in [9, 14, 19] {
                let (t, n) = (thetas[at], 2 * degree as i32);
                let error = Complex64::I * physical.values[at] - t;
                // The next terms are smaller by about t^2; rounding is that of the other eigenvalues, of size up to 20.
                let rounding = 200.0 * f64::EPSILON;
                agree(error.im, -t.powi(n + 2) / a, 0.3 * t * t * t.powi(n + 2) / a + rounding).unwrap();
                agree(error.re, t.powi(n + 3) / b, 0.3 * t * t * t.powi(n + 3) / b + rounding).unwrap();
            }
        }
    }
}
