use super::dot;

/// Lower triangle L of a symmetric positive definite matrix A = L Lᵀ (Golub & Van Loan, Matrix Computations, §4.2).
#[derive(Clone, Debug)]
pub struct Cholesky {
    rows: Vec<Vec<f64>>,
}

impl Cholesky {
    /// Factors the matrix with these entries, asked for on and below the diagonal; `None` unless positive definite.
    pub fn new(size: usize, entry: impl Fn(usize, usize) -> f64) -> Option<Self> {
        let mut rows: Vec<Vec<f64>> = Vec::with_capacity(size);
        for i in 0..size {
            let mut row = Vec::with_capacity(i + 1);
            for (j, other) in rows.iter().enumerate() {
                row.push((entry(i, j) - dot(&row[..j], &other[..j])) / other[j]);
            }
            let square = entry(i, i) - dot(&row, &row);
            if square.is_nan() || square <= 0.0 {
                return None;
            }
            row.push(square.sqrt());
            rows.push(row);
        }
        Some(Self { rows })
    }

    /// L⁻ᵀ z: of the covariance A⁻¹ if z is of independent numbers of unit variance.
    pub fn spread(&self, z: &[f64]) -> Vec<f64> {
        let mut x = z.to_vec();
        for (i, row) in self.rows.iter().enumerate().rev() {
            x[i] /= row[i];
            let value = x[i];
            x[..i].iter_mut().zip(row).for_each(|(x, l)| *x -= l * value);
        }
        x
    }

    /// Solves A x = b.
    pub fn solve(&self, b: &[f64]) -> Vec<f64> {
        let mut x = b.to_vec();
        for (i, row) in self.rows.iter().enumerate() {
            x[i] = (x[i] - dot(&row[..i], &x[..i])) / row[i];
        }
        self.spread(&x)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn solves_and_refuses() {
        // The Hilbert matrix of order 5 and its inverse's first column (Choi 1983, Am Math Mon 90:301–312).
        let hilbert = Cholesky::new(5, |i, j| 1.0 / (i + j + 1) as f64).unwrap();
        let column = hilbert.solve(&[1.0, 0.0, 0.0, 0.0, 0.0]);
        for (x, exact) in column.iter().zip([25.0, -300.0, 1050.0, -1400.0, 630.0]) {
            assert!((x - exact).abs() < 1e-8, "{x} {exact}");
        }
        assert!(Cholesky::new(2, |i, j| if i == j { 1.0 } else { 2.0 }).is_none());
    }
}
