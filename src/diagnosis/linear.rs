//! Small dense linear algebra. Written here for its fixed order of operations: library kernels choose theirs by the processor, and
//! a report must not differ between machines.

use crate::quantity::math;

/// Inner product in four running sums.
pub(super) fn dot(a: &[f64], b: &[f64]) -> f64 {
    let mut sums = [0.0; 4];
    let (a4, b4) = (a.chunks_exact(4), b.chunks_exact(4));
    let rest: f64 = a4.remainder().iter().zip(b4.remainder()).map(|(x, y)| x * y).sum();
    for (x, y) in a4.zip(b4) {
        for k in 0..4 {
            sums[k] += x[k] * y[k];
        }
    }
    (sums[0] + sums[1]) + (sums[2] + sums[3]) + rest
}

/// Adds a multiple of a row.
pub(super) fn add(to: &mut [f64], row: &[f64], factor: f64) {
    for (t, x) in to.iter_mut().zip(row) {
        *t += factor * x;
    }
}

/// Square of the length.
pub(super) fn norm(z: &[f64]) -> f64 {
    dot(z, z)
}

/// Cholesky factors L·Lᵀ of a symmetric matrix, lower triangle by rows.
#[derive(Clone, Debug, Default)]
pub(super) struct Cholesky {
    l: Vec<f64>,
    m: usize,
}

impl Cholesky {
    /// Factors A + a·1, A given by its lower triangle, and returns ln det. `None` where it is not positive definite.
    pub fn factor(&mut self, products: &[f64], a: f64) -> Option<f64> {
        let m = products.len().isqrt();
        self.m = m;
        self.l.clear();
        self.l.extend_from_slice(products);
        let mut log = 0.0;
        for i in 0..m {
            self.l[i * m + i] += a;
            let (above, rest) = self.l.split_at_mut(i * m);
            let row = &mut rest[..m];
            for j in 0..i {
                let up = &above[j * m..][..=j];
                row[j] = (row[j] - dot(&row[..j], &up[..j])) / up[j];
            }
            let pivot = row[i] - dot(&row[..i], &row[..i]);
            if pivot.is_nan() || pivot <= 0.0 {
                return None;
            }
            log += math::ln(pivot);
            row[i] = pivot.sqrt();
        }
        Some(log)
    }

    /// Solves L·x = b in place: |x|² is then bᵀ·A⁻¹·b.
    pub fn solve_lower(&self, x: &mut [f64]) {
        for i in 0..self.m {
            let row = &self.l[i * self.m..][..=i];
            x[i] = (x[i] - dot(&row[..i], &x[..i])) / row[i];
        }
    }

    /// Solves A·x = b in place.
    pub fn solve(&self, x: &mut [f64]) {
        self.solve_lower(x);
        for i in (0..self.m).rev() {
            let row = &self.l[i * self.m..][..=i];
            x[i] /= row[i];
            let value = x[i];
            add(&mut x[..i], row, -value);
        }
    }

    /// A⁻¹ₖₖ.
    pub fn inverse_diagonal(&self, k: usize) -> f64 {
        let mut unit = vec![0.0; self.m];
        unit[k] = 1.0;
        self.solve_lower(&mut unit);
        norm(&unit)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A = [[4, 2], [2, 3]] has L = [[2, 0], [1, √2]], det 8, and A·(1, 2) = (8, 8); worked by hand.
    #[test]
    fn factors_and_solves_a_matrix_worked_by_hand() {
        let mut c = Cholesky::default();
        let log = c.factor(&[4.0, 0.0, 2.0, 3.0], 0.0).unwrap();
        assert!((log - math::ln(8.0)).abs() < 1e-12);
        let mut x = [8.0, 8.0];
        c.solve(&mut x);
        assert!((x[0] - 1.0).abs() < 1e-12 && (x[1] - 2.0).abs() < 1e-12);
        assert!((c.inverse_diagonal(0) - 3.0 / 8.0).abs() < 1e-12);
    }

    #[test]
    fn a_matrix_that_is_not_positive_definite_has_no_factors() {
        assert_eq!(Cholesky::default().factor(&[1.0, 0.0, 2.0, 1.0], 0.0), None);
    }
}
