//! Small dense blocks: the conductors of one node.

/// A square block.
pub(super) type Block<const N: usize> = [[f64; N]; N];

/// The unit block.
pub(super) fn unit<const N: usize>() -> Block<N> {
    let mut one = [[0.0; N]; N];
    add_unit(&mut one);
    one
}

/// Adds the unit block.
pub(super) fn add_unit<const N: usize>(a: &mut Block<N>) {
    for (k, row) in a.iter_mut().enumerate() {
        row[k] += 1.0;
    }
}

/// aᵀ.
pub(super) fn transposed<const N: usize>(a: &Block<N>) -> Block<N> {
    std::array::from_fn(|i| std::array::from_fn(|j| a[j][i]))
}

/// Inverse by Gauss–Jordan elimination; not finite where a pivot vanishes.
///
/// Without pivoting: 1 + Z·D is dominated by its diagonal while the loads are passive, and a search for the largest entry would
/// prefer the badly scaled row of an open conductor.
pub(super) fn inverse<const N: usize>(mut a: Block<N>) -> Block<N> {
    let mut out = unit::<N>();
    for column in 0..N {
        let scale = 1.0 / a[column][column];
        for k in 0..N {
            a[column][k] *= scale;
            out[column][k] *= scale;
        }
        for row in 0..N {
            let factor = a[row][column];
            if row != column && factor != 0.0 {
                for k in 0..N {
                    a[row][k] -= factor * a[column][k];
                    out[row][k] -= factor * out[column][k];
                }
            }
        }
    }
    out
}

/// a·b.
pub(super) fn product<const N: usize>(a: &Block<N>, b: &Block<N>) -> Block<N> {
    let mut out = [[0.0; N]; N];
    for i in 0..N {
        for k in 0..N {
            let factor = a[i][k];
            for j in 0..N {
                out[i][j] += factor * b[k][j];
            }
        }
    }
    out
}

/// a·x.
pub(super) fn apply<const N: usize>(a: &Block<N>, x: &[f64; N]) -> [f64; N] {
    let mut out = [0.0; N];
    for i in 0..N {
        for j in 0..N {
            out[i] += a[i][j] * x[j];
        }
    }
    out
}

/// aᵀ·x.
pub(super) fn apply_transposed<const N: usize>(a: &Block<N>, x: &[f64; N]) -> [f64; N] {
    let mut out = [0.0; N];
    for i in 0..N {
        for j in 0..N {
            out[j] += a[i][j] * x[i];
        }
    }
    out
}

/// a + b.
pub(super) fn sum<const N: usize>(a: &[f64; N], b: &[f64; N]) -> [f64; N] {
    std::array::from_fn(|i| a[i] + b[i])
}

/// a − b.
pub(super) fn difference<const N: usize>(a: &[f64; N], b: &[f64; N]) -> [f64; N] {
    std::array::from_fn(|i| a[i] - b[i])
}

/// Inner product.
pub(super) fn dot<const N: usize>(a: &[f64; N], b: &[f64; N]) -> f64 {
    a.iter().zip(b).map(|(x, y)| x * y).sum()
}

/// Adds k·part to the rows from `at` on.
pub(super) fn add_part<const N: usize, const PARTS: usize>(to: &mut [f64; N], at: usize, k: f64, part: &[f64; PARTS]) {
    for (row, x) in to[at..].iter_mut().zip(part) {
        *row += k * x;
    }
}
