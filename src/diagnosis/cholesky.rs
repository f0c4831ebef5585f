//! Cholesky factors of a small symmetric matrix. Written here for its fixed order of operations: library kernels choose theirs
//! by the processor, and a report must not differ between machines.

use crate::quantity::math;

/// L of L·Lᵀ = A, lower triangle by rows.
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
                let sum: f64 = dot(&row[..j], &up[..j]);
                row[j] = (row[j] - sum) / up[j];
            }
            let pivot = row[i] - dot(&row[..i], &row[..i]);
            if !(pivot > 0.0) {
                return None;
            }
            log += math::ln(pivot);
            row[i] = pivot.sqrt();
        }
        Some(log)
    }

    /// Solves L·x = b in place: |x|² is then bᵀ·A⁻¹·b.
    pub fn solve_lower(&self, x: &mut [f64]) {
        let m = self.m;
        for i in 0..m {
            let row = &self.l[i * m..][..=i];
            x[i] = (x[i] - dot(&row[..i], &x[..i])) / row[i];
        }
    }

    /// Solves A·x = b in place.
    pub fn solve(&self, x: &mut [f64]) {
        let m = self.m;
        self.solve_lower(x);
        for i in (0..m).rev() {
            let row = &self.l[i * m..][..=i];
            x[i] /= row[i];
            let value = x[i];
            for (y, l) in x[..i].iter_mut().zip(row) {
                *y -= l * value;
            }
        }
    }
}

/// Inner product in four running sums.
fn dot(a: &[f64], b: &[f64]) -> f64 {
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
