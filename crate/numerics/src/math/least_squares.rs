use super::dot;

/// Solves min |A x − b| by Householder reflections (Golub & Van Loan, Matrix Computations, §5.3).
///
/// `columns` holds A by columns, each as long as `b`. Columns are scaled to unit length first, so that they may differ
/// by many orders of magnitude. A column that depends on those before it to the last digits gets the coefficient 0.
pub fn least_squares(mut columns: Vec<Vec<f64>>, mut b: Vec<f64>) -> Vec<f64> {
    let count = columns.len();
    let scales: Vec<f64> = columns.iter().map(|column| dot(column, column).sqrt()).collect();
    for (column, scale) in columns.iter_mut().zip(&scales) {
        if *scale > 0.0 {
            column.iter_mut().for_each(|value| *value /= scale);
        }
    }
    for k in 0..count.min(b.len()) {
        let (done, rest) = columns.split_at_mut(k + 1);
        let pivot = &mut done[k];
        let norm = dot(&pivot[k..], &pivot[k..]).sqrt();
        if norm <= 1e-15 {
            pivot[k] = 0.0;
            continue;
        }
        let head = if pivot[k] > 0.0 { -norm } else { norm };
        let mut reflector = pivot[k..].to_vec();
        reflector[0] -= head;
        let half = dot(&reflector, &reflector) / 2.0;
        for column in rest.iter_mut().chain([&mut b]) {
            let factor = dot(&reflector, &column[k..]) / half;
            for (value, r) in column[k..].iter_mut().zip(&reflector) {
                *value -= factor * r;
            }
        }
        pivot[k] = head;
    }
    let mut x = vec![0.0; count];
    for k in (0..count.min(b.len())).rev() {
        let known: f64 = (k + 1..count).map(|j| columns[j][k] * x[j]).sum();
        let pivot = columns[k][k];
        x[k] = if pivot == 0.0 { 0.0 } else { (b[k] - known) / pivot };
    }
    for (value, scale) in x.iter_mut().zip(&scales) {
        if *scale > 0.0 {
            *value /= scale;
        }
    }
    x
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn recovers_a_line_and_leaves_an_orthogonal_residual() {
        let t: Vec<f64> = (0..9).map(f64::from).collect();
        let b: Vec<f64> = t.iter().map(|t| 2.0 - 0.5 * t + if *t == 4.0 { 0.3 } else { 0.0 }).collect();
        let columns = vec![vec![1.0; 9], t.iter().map(|t| t * 1e9).collect()];
        let x = least_squares(columns.clone(), b.clone());
        let residual: Vec<f64> = (0..9).map(|i| b[i] - x[0] - x[1] * columns[1][i]).collect();
        assert!(dot(&residual, &columns[0]).abs() < 1e-13);
        assert!(dot(&residual, &t).abs() < 1e-13);
        assert!((x[1] * 1e9 + 0.5).abs() < 1e-12);
    }
}
