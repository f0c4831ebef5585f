//! Plane geometry of the six voltages of a four-wire, three-phase system.
//!
//! Voltages of one frequency are distances in a plane: four conductors are four points, six voltages the distances between them.
//! Six numbers that fit no four points in a plane were not read together, or one is misread. (Phasors with different harmonics
//! fit only nearly.) The condition is that the Cayley–Menger determinant of the four points is zero.

use crate::quantity::{Volts, math};

/// The six voltages of a four-wire system.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SixVoltages {
    /// L1-N, L2-N, L3-N.
    pub to_neutral: [Volts; 3],
    /// L1-L2, L2-L3, L3-L1.
    pub between: [Volts; 3],
}

/// How far six voltages are from any that fit a plane.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Misfit {
    /// Signed distance to the nearest fitting six, to first order.
    pub volts: Volts,
    /// Change of `volts` with each voltage: L1-N, L2-N, L3-N, L1-L2, L2-L3, L3-L1. Their squares add to 1.
    pub weights: [f64; 6],
}

impl Misfit {
    /// Standard uncertainty of the misfit from independent ones of the six voltages. A gain error they have in common cancels
    /// (the determinant is homogeneous), so counts alone belong here.
    #[must_use]
    pub fn standard(&self, of_each: [Volts; 6]) -> Volts {
        Volts(self.weights.iter().zip(of_each).map(|(w, u)| (w * u.0) * (w * u.0)).sum::<f64>().sqrt())
    }
}

/// The Gram matrix of the three line phasors about the neutral: entries from lengths by the law of cosines.
fn gram(six: &SixVoltages) -> [[f64; 3]; 3] {
    let square = |v: Volts| v.0 * v.0;
    let [a, b, c] = six.to_neutral.map(square);
    let [ab, bc, ca] = six.between.map(square);
    let (gab, gbc, gca) = ((a + b - ab) / 2.0, (b + c - bc) / 2.0, (c + a - ca) / 2.0);
    [[a, gab, gca], [gab, b, gbc], [gca, gbc, c]]
}

/// Cofactors of a symmetric 3×3 matrix.
fn cofactors(m: &[[f64; 3]; 3]) -> [[f64; 3]; 3] {
    let minor = |i: usize, j: usize| {
        let (r, s) = ((i + 1) % 3, (i + 2) % 3);
        let (p, q) = ((j + 1) % 3, (j + 2) % 3);
        m[r][p] * m[s][q] - m[r][q] * m[s][p]
    };
    [0, 1, 2].map(|i| [0, 1, 2].map(|j| minor(i, j)))
}

/// Cayley–Menger determinant of the four points: 288 times the squared volume of the body they would span; zero in a plane,
/// below zero where no such body exists. In V⁶.
#[must_use]
pub fn cayley_menger(six: &SixVoltages) -> f64 {
    let g = gram(six);
    let c = cofactors(&g);
    8.0 * (g[0][0] * c[0][0] + g[0][1] * c[0][1] + g[0][2] * c[0][2])
}

/// Distance of six voltages from the plane condition, in volts: the determinant over the length of its gradient. `None` where the
/// gradient vanishes (the neutral on a line conductor, all points on one line) or a voltage is not finite.
#[must_use]
pub fn misfit(six: &SixVoltages) -> Option<Misfit> {
    let c = cofactors(&gram(six));
    let [a, b, n] = six.to_neutral;
    let [ab, bc, ca] = six.between;
    // With D = det G: ∂D/∂(Vᵢ²) is the sum of row i of the cofactors, ∂D/∂(Vᵢⱼ²) is −Cᵢⱼ; and d(V²) = 2·V·dV.
    let row = |i: usize| c[i][0] + c[i][1] + c[i][2];
    let gradient = [
        8.0 * row(0) * 2.0 * a.0,
        8.0 * row(1) * 2.0 * b.0,
        8.0 * row(2) * 2.0 * n.0,
        8.0 * -c[0][1] * 2.0 * ab.0,
        8.0 * -c[1][2] * 2.0 * bc.0,
        8.0 * -c[2][0] * 2.0 * ca.0,
    ];
    let length = gradient.iter().map(|g| g * g).sum::<f64>().sqrt();
    let scale = six.between.iter().chain(&six.to_neutral).map(|v| v.0.abs()).fold(0.0, f64::max);
    // The gradient has the fifth power of a voltage.
    let least = 1e-6 * scale * scale * scale * scale * scale;
    if !length.is_finite() || length <= least {
        return None;
    }
    Some(Misfit { volts: Volts(cayley_menger(six) / length), weights: gradient.map(|g| g / length) })
}

/// The triangle of the line conductors, in volts about its centroid, L1 on the positive first axis, L2 below it; and the neutral
/// in it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Triangle {
    /// L1, L2, L3.
    pub corners: [(f64, f64); 3],
    /// The neutral.
    pub neutral: (f64, f64),
}

impl Triangle {
    /// How far the neutral is from the centroid, where it sits on a sound wye with balanced supply.
    #[must_use]
    pub fn shift(&self) -> Volts {
        Volts(math::hypot(self.neutral.0, self.neutral.1))
    }

    /// The neutral as shares of the three corners, which add to 1 (barycentric coordinates); all positive inside.
    #[must_use]
    pub fn shares(&self) -> [f64; 3] {
        let cross = |p: (f64, f64), q: (f64, f64), r: (f64, f64)| (q.0 - p.0) * (r.1 - p.1) - (q.1 - p.1) * (r.0 - p.0);
        let [a, b, c] = self.corners;
        let whole = cross(a, b, c);
        [cross(self.neutral, b, c) / whole, cross(a, self.neutral, c) / whole, cross(a, b, self.neutral) / whole]
    }

    /// The neutral lies within the triangle or on its edge: loads alone, without a high leg, cannot take it out.
    #[must_use]
    pub fn is_inside(&self) -> bool {
        self.shares().iter().all(|s| *s >= -1e-9)
    }
}

/// Places the line conductors by their three voltages and the neutral by its three, in the sense of least squared misfit of the
/// squared distances. `None` where the three line voltages form no triangle.
#[must_use]
pub fn triangle(six: &SixVoltages) -> Option<Triangle> {
    let [ab, bc, ca] = six.between.map(|v| v.0);
    // L1 at the origin, L2 on the first axis, L3 above it.
    let x = (ab * ab + ca * ca - bc * bc) / (2.0 * ab);
    let height = ca * ca - x * x;
    if !(ab > 0.0 && height.is_finite() && height > 1e-9 * ca * ca) {
        return None;
    }
    let y = height.sqrt();
    let [na, nb, nc] = six.to_neutral.map(|v| v.0 * v.0);
    // Differences of the three circle equations are linear in the neutral's place.
    let nx = (na - nb + ab * ab) / (2.0 * ab);
    let ny = (na - nc + ca * ca - 2.0 * x * nx) / (2.0 * y);
    let centre = ((ab + x) / 3.0, y / 3.0);
    let l1 = (-centre.0, -centre.1);
    let length = math::hypot(l1.0, l1.1);
    let (cos, sin) = (l1.0 / length, l1.1 / length);
    // Turn about the centroid so that L1 comes to the positive first axis, and mirror: L2 follows L1 clockwise (1-2-3 rotation).
    let place = |p: (f64, f64)| {
        let (px, py) = (p.0 - centre.0, p.1 - centre.1);
        (px * cos + py * sin, -(py * cos - px * sin))
    };
    Some(Triangle { corners: [place((0.0, 0.0)), place((ab, 0.0)), place((x, y))], neutral: place((nx, ny)) })
}
