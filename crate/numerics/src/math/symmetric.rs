use super::Vec3;

/// A symmetric 3 × 3 matrix.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Symmetric3 {
    rows: [[f64; 3]; 3],
}

/// Eigenvalues in ascending order with their orthonormal eigenvectors.
#[derive(Clone, Copy, Debug)]
pub struct Eigen {
    /// Eigenvalues, ascending.
    pub values: [f64; 3],
    /// Eigenvectors, in the same order.
    pub vectors: [Vec3; 3],
}

impl Symmetric3 {
    /// From a function of row and column, asked for the upper triangle only.
    #[inline]
    pub fn from_fn(entry: impl Fn(usize, usize) -> f64) -> Self {
        let mut rows = [[0.0; 3]; 3];
        for i in 0..3 {
            for j in i..3 {
                rows[i][j] = entry(i, j);
                rows[j][i] = rows[i][j];
            }
        }
        Self { rows }
    }

    /// Entry in row `i` and column `j`.
    #[inline]
    pub fn at(&self, i: usize, j: usize) -> f64 {
        self.rows[i][j]
    }

    /// Matrix times vector.
    pub fn apply(&self, v: Vec3) -> Vec3 {
        let [x, y, z] = self.rows;
        Vec3::new(Vec3(x).dot(v), Vec3(y).dot(v), Vec3(z).dot(v))
    }

    /// Cholesky factors (Golub & Van Loan, Matrix Computations, §4.2); `None` unless A is positive definite.
    #[inline]
    pub fn factor(&self) -> Option<Factor3> {
        let a = &self.rows;
        let over_root = |value: f64| (value > 0.0 && value.is_finite()).then(|| 1.0 / value.sqrt());
        let d0 = over_root(a[0][0])?;
        let (l10, l20) = (a[1][0] * d0, a[2][0] * d0);
        let d1 = over_root(a[1][1] - l10 * l10)?;
        let l21 = (a[2][1] - l20 * l10) * d1;
        let d2 = over_root(a[2][2] - l20 * l20 - l21 * l21)?;
        Some(Factor3 { over_diagonal: [d0, d1, d2], below: [l10, l20, l21] })
    }

    /// Eigenvalues and eigenvectors by cyclic Jacobi rotations (Jacobi 1846; Golub & Van Loan, Matrix Computations, §8.5).
    pub fn eigen(&self) -> Eigen {
        // Scaled, so that squares stay within the range of numbers.
        let largest = self.rows.iter().flatten().fold(0.0f64, |most, value| most.max(value.abs()));
        let scale = if largest > 0.0 && largest.is_finite() { largest } else { 1.0 };
        let mut a = self.rows.map(|row| row.map(|value| value / scale));
        let mut v = [[1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]];
        for _ in 0..30 {
            let off = a[0][1] * a[0][1] + a[0][2] * a[0][2] + a[1][2] * a[1][2];
            let diagonal = a[0][0] * a[0][0] + a[1][1] * a[1][1] + a[2][2] * a[2][2];
            if off <= 1e-34 * diagonal || off == 0.0 {
                break;
            }
            for (p, q) in [(0, 1), (0, 2), (1, 2)] {
                if a[p][q] == 0.0 {
                    continue;
                }
                let theta = (a[q][q] - a[p][p]) / (2.0 * a[p][q]);
                let t = theta.signum() / (theta.abs() + (theta * theta + 1.0).sqrt());
                let c = 1.0 / (t * t + 1.0).sqrt();
                let s = t * c;
                for k in 0..3 {
                    (a[k][p], a[k][q]) = (c * a[k][p] - s * a[k][q], s * a[k][p] + c * a[k][q]);
                }
                for k in 0..3 {
                    (a[p][k], a[q][k]) = (c * a[p][k] - s * a[q][k], s * a[p][k] + c * a[q][k]);
                }
                for row in &mut v {
                    (row[p], row[q]) = (c * row[p] - s * row[q], s * row[p] + c * row[q]);
                }
            }
        }
        let mut order = [0, 1, 2];
        for (left, right) in [(0, 1), (1, 2), (0, 1)] {
            let [i, j] = [order[left], order[right]];
            if a[i][i].total_cmp(&a[j][j]).is_gt() {
                order.swap(left, right);
            }
        }
        Eigen { values: order.map(|i| a[i][i] * scale), vectors: order.map(|i| Vec3::new(v[0][i], v[1][i], v[2][i])) }
    }
}

/// The lower triangle L of A = L Lᵀ.
#[derive(Clone, Copy, Debug)]
pub struct Factor3 {
    over_diagonal: [f64; 3],
    below: [f64; 3],
}

impl Factor3 {
    /// Solves A x = b.
    #[inline]
    pub fn solve(&self, b: Vec3) -> Vec3 {
        let ([d0, d1, d2], [l10, l20, l21]) = (self.over_diagonal, self.below);
        let y0 = b[0] * d0;
        let y1 = (b[1] - l10 * y0) * d1;
        let y2 = (b[2] - l20 * y0 - l21 * y1) * d2;
        let x2 = y2 * d2;
        let x1 = (y1 - l21 * x2) * d1;
        Vec3::new((y0 - l10 * x1 - l20 * x2) * d0, x1, x2)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn eigen_rebuilds_the_matrix_and_solve_inverts_it() {
        let a = Symmetric3::from_fn(|i, j| [[4.0, 1.0, -0.5], [0.0, 3.0, 0.25], [0.0, 0.0, 2.0]][i][j]);
        let e = a.eigen();
        for i in 0..3 {
            let left = a.apply(e.vectors[i]);
            assert!((left - e.vectors[i] * e.values[i]).norm() < 1e-14);
        }
        assert!(e.values[0] <= e.values[1] && e.values[1] <= e.values[2]);
        let x = a.factor().unwrap().solve(Vec3::new(1.0, -2.0, 0.5));
        assert!((a.apply(x) - Vec3::new(1.0, -2.0, 0.5)).norm() < 1e-14);
        assert!(Symmetric3::default().factor().is_none());
    }
}
