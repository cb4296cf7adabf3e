//! Small dense complex matrices, stored by rows.

use num_complex::Complex64;
use std::ops::Mul;

/// A square complex matrix. Entry (i, j) stands at `i * size + j`.
#[derive(Debug, Clone, PartialEq)]
pub struct Matrix {
    size: usize,
    entries: Vec<Complex64>,
}

impl Matrix {
    /// A matrix from its rows; `None` where the count of entries is not `size` squared.
    pub fn from_rows(size: usize, entries: Vec<Complex64>) -> Option<Self> {
        (entries.len() == size * size).then_some(Matrix { size, entries })
    }

    /// The matrix whose entry (i, j) is `entry(i, j)`.
    pub fn from_fn(size: usize, entry: impl Fn(usize, usize) -> Complex64) -> Self {
        let entries = (0..size * size).map(|at| entry(at / size, at % size)).collect();
        Matrix { size, entries }
    }

    /// The 1 x 1 matrix.
    pub fn scalar(value: Complex64) -> Self {
        Matrix { size: 1, entries: vec![value] }
    }

    /// The identity.
    pub fn identity(size: usize) -> Self {
        Matrix::from_fn(size, |i, j| if i == j { Complex64::ONE } else { Complex64::ZERO })
    }

    /// Rows, and columns.
    pub fn size(&self) -> usize {
        self.size
    }

    /// All entries by rows.
    pub fn entries(&self) -> &[Complex64] {
        &self.entries
    }

    /// Entry (row, column). Panics where either is not below the size.
    pub fn at(&self, row: usize, column: usize) -> Complex64 {
        assert!(column < self.size, "column {column} of a matrix of size {}", self.size);
        self.entries[row * self.size + column]
    }

    /// Frobenius norm: root of the sum of squared moduli. NaN where an entry is NaN.
    pub fn frobenius_norm(&self) -> f64 {
        self.entries.iter().map(Complex64::norm_sqr).sum::<f64>().sqrt()
    }

    /// Product with a vector. Panics where the lengths differ.
    pub fn apply(&self, vector: &[Complex64]) -> Vec<Complex64> {
        assert_eq!(vector.len(), self.size, "a matrix acts on vectors of its own size");
        self.entries.chunks(self.size).map(|row| row.iter().zip(vector).map(|(a, x)| a * x).sum()).collect()
    }

    /// Inverse by Gauss-Jordan elimination with row pivoting; `None` where a pivot is zero or not finite.
    pub fn inverse(&self) -> Option<Matrix> {
        let n = self.size;
        let (mut a, mut b) = (self.clone(), Matrix::identity(n));
        for k in 0..n {
            let pivot = (k..n).max_by(|&i, &j| a.at(i, k).norm().total_cmp(&a.at(j, k).norm()))?;
            let size = a.at(pivot, k).norm();
            if !(size.is_finite() && size > 0.0) {
                return None;
            }
            a.swap_rows(k, pivot);
            b.swap_rows(k, pivot);
            let scale = a.at(k, k).inv();
            a.scale_row(k, scale);
            b.scale_row(k, scale);
            for i in (0..n).filter(|&i| i != k) {
                let factor = a.at(i, k);
                a.subtract_row(i, k, factor);
                b.subtract_row(i, k, factor);
            }
        }
        Some(b)
    }

    fn swap_rows(&mut self, i: usize, j: usize) {
        for column in 0..self.size {
            self.entries.swap(i * self.size + column, j * self.size + column);
        }
    }

    fn scale_row(&mut self, i: usize, factor: Complex64) {
        self.entries[i * self.size..(i + 1) * self.size].iter_mut().for_each(|x| *x *= factor);
    }

    fn subtract_row(&mut self, from: usize, what: usize, factor: Complex64) {
        for column in 0..self.size {
            let x = self.at(what, column);
            self.entries[from * self.size + column] -= factor * x;
        }
    }
}

impl Mul for &Matrix {
    type Output = Matrix;

    /// Matrix product. Panics where the sizes differ.
    fn mul(self, other: &Matrix) -> Matrix {
        assert_eq!(self.size, other.size, "only matrices of one size are multiplied");
        Matrix::from_fn(self.size, |i, j| (0..self.size).map(|k| self.at(i, k) * other.at(k, j)).sum())
    }
}

#[cfg(test)]
mod tests {
    //! Trusted: A times its inverse is the identity.
    use super::*;
    use crate::analysis::compare::all_agree;

    #[test]
    fn an_inverse_undoes_its_matrix() {
        let a =
            Matrix::from_fn(6, |i, j| Complex64::new(((i * j) as f64 + 0.3).sin(), (i as f64 - 1.7 * j as f64).cos()));
        let inverse = a.inverse().unwrap();
        let tolerance = 10.0 * 6.0 * f64::EPSILON * a.frobenius_norm() * inverse.frobenius_norm();
        all_agree((&a * &inverse).entries(), Matrix::identity(6).entries(), tolerance).unwrap();
        assert!(Matrix::from_fn(3, |_, _| Complex64::ONE).inverse().is_none());
        assert!(Matrix::scalar(Complex64::new(f64::NAN, 0.0)).inverse().is_none());
    }

    #[test]
    fn a_wrong_count_of_entries_is_no_matrix() {
        assert!(Matrix::from_rows(2, vec![Complex64::ONE; 3]).is_none());
        assert_eq!(Matrix::from_rows(1, vec![Complex64::I]), Some(Matrix::scalar(Complex64::I)));
    }
}
