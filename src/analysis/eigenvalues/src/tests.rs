//! Trusted: the eigenvalues of a circulant matrix are the discrete Fourier transform of its first column (closed form).

use super::*;
use std::f64::consts::TAU;

fn circulant(first_column: &[f64]) -> Vec<Complex64> {
    let n = first_column.len();
    (0..n * n).map(|at| Complex64::from(first_column[(n + at / n - at % n) % n])).collect()
}

fn transform(column: &[f64]) -> Vec<Complex64> {
    let n = column.len();
    (0..n)
        .map(|k| column.iter().enumerate().map(|(j, c)| c * Complex64::cis(-TAU * (j * k % n) as f64 / n as f64)).sum())
        .collect()
}

/// Largest distance from an expected value to the nearest found one, each found one used once.
fn mismatch(found: &[Complex64], expected: &[Complex64]) -> f64 {
    assert_eq!(found.len(), expected.len());
    let mut left = found.to_vec();
    let mut worst = 0.0_f64;
    for e in expected {
        let (at, d) = left
            .iter()
            .map(|f| (f - e).norm())
            .enumerate()
            .min_by(|a, b| a.1.total_cmp(&b.1))
            .expect("as many found as expected");
        left.swap_remove(at);
        worst = worst.max(d);
        assert!(d.is_finite());
    }
    worst
}

#[test]
fn cyclic_shifts_converge() {
    // First-order upwind at Courant number 1. Normal matrix: the eigenvalues are perturbed by no more than the backward error, about eps x n.
    for n in [3, 4, 8, 16, 64, 200] {
        let mut column = vec![0.0; n];
        column[1] = 1.0;
        let expected = transform(&column);
        let tolerance = 4.0 * f64::EPSILON * n as f64;
        let complex = eigenvalues(n, &circulant(&column)).unwrap();
        assert!(mismatch(&complex, &expected) < tolerance);
        let entries: Vec<f64> = circulant(&column).iter().map(|v| v.re).collect();
        assert!(mismatch(&eigenvalues_of_real(n, &entries).unwrap(), &expected) < tolerance);
        let pairs = eigenpairs(n, &circulant(&column)).unwrap();
        assert!(mismatch(&pairs.values, &expected) < tolerance);
    }
}

#[test]
fn vectors_satisfy_their_equation() {
    let n = 12;
    let a: Vec<Complex64> =
        (0..n * n).map(|k| Complex64::new((1.7 * k as f64).sin(), (0.9 * (k * k) as f64).cos())).collect();
    let pairs = eigenpairs(n, &a).unwrap();
    let norm = singular_values(n, &a).unwrap()[0];
    for (value, vector) in pairs.values.iter().zip(&pairs.vectors) {
        let residual: f64 = (0..n)
            .map(|i| {
                let row: Complex64 = (0..n).map(|j| a[i * n + j] * vector[j]).sum();
                (row - value * vector[i]).norm_sqr()
            })
            .sum::<f64>()
            .sqrt();
        assert!(residual < 10.0 * f64::EPSILON * n as f64 * norm, "{residual:e}");
    }
}

#[test]
fn hermitian_part_and_singular_values_of_a_jordan_block() {
    // 2 x 2 Jordan block with eigenvalue 0: Hermitian part has eigenvalues +-1/2, singular values 1 and 0.
    let a: Vec<Complex64> = [0.0, 1.0, 0.0, 0.0].map(Complex64::from).to_vec();
    let h = hermitian_part_eigenvalues(2, &a).unwrap();
    assert!((h[0] + 0.5).abs() < 1e-15 && (h[1] - 0.5).abs() < 1e-15);
    let s = singular_values(2, &a).unwrap();
    assert!((s[0] - 1.0).abs() < 1e-15 && s[1].abs() < 1e-15);
}

#[test]
fn bad_matrices_are_refused() {
    assert_eq!(eigenvalues(2, &[Complex64::from(1.0)]), Err(DecompositionError::Shape { n: 2, found: 1 }));
    let mut a = vec![Complex64::from(1.0); 9];
    a[5] = Complex64::from(f64::INFINITY);
    assert!(matches!(eigenvalues(3, &a), Err(DecompositionError::NotFinite { row: 1, column: 2, .. })));
    assert!(matches!(eigenvalues_of_real(1, &[f64::NAN]), Err(DecompositionError::NotFinite { .. })));
    assert!(eigenvalues(0, &[]).unwrap().is_empty());
}

#[test]
fn two_hundred_unknowns_take_no_noticeable_time() {
    // About 25 ms in an optimised build, which this crate has in every profile; a hundred times that means that it has not.
    let n = 200;
    let a: Vec<Complex64> =
        (0..n * n).map(|k| Complex64::new((1.3 * k as f64).sin(), (0.7 * k as f64).cos())).collect();
    let start = std::time::Instant::now();
    let values = eigenvalues(n, &a).unwrap();
    let taken = start.elapsed();
    println!("{n} x {n}: {taken:?}");
    // The trace is the sum of the eigenvalues.
    let trace: Complex64 = (0..n).map(|i| a[i * n + i]).sum();
    let norm = a.iter().map(Complex64::norm_sqr).sum::<f64>().sqrt();
    assert!((values.iter().sum::<Complex64>() - trace).norm() < f64::EPSILON * n as f64 * norm);
    assert!(taken.as_secs_f64() < 2.5, "{taken:?}");
}
