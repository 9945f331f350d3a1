use super::dot;

/// The numerical rank of vectors of equal length, whatever their scales: how many are needed until no other, scaled to unit
/// length, has more than `tolerance` that is not combined from them. Gram–Schmidt with pivoting (Golub & Van Loan, Matrix
/// Computations, §5.4).
pub fn rank(mut vectors: Vec<Vec<f64>>, tolerance: f64) -> usize {
    for vector in &mut vectors {
        // Scaled by the largest value first: squares of very large or small values would leave the range of numbers.
        let largest = vector.iter().fold(0.0f64, |most, value| most.max(value.abs()));
        if largest > 0.0 {
            vector.iter_mut().for_each(|value| *value /= largest);
            let length = dot(vector, vector).sqrt();
            vector.iter_mut().for_each(|value| *value /= length);
        }
    }
    let mut rank = 0;
    while let Some((at, square)) =
        vectors.iter().map(|vector| dot(vector, vector)).enumerate().max_by(|(_, a), (_, b)| a.total_cmp(b))
        && square > tolerance * tolerance
    {
        let mut pivot = vectors.swap_remove(at);
        pivot.iter_mut().for_each(|value| *value /= square.sqrt());
        for vector in &mut vectors {
            let along = dot(vector, &pivot);
            vector.iter_mut().zip(&pivot).for_each(|(value, p)| *value -= along * p);
        }
        rank += 1;
    }
    rank
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_others_combine_to_does_not_count() {
        let (a, b) = (vec![1.0, 2.0, -3.0, 0.5], vec![1e-9, 0.0, 2e-9, 5e-9]);
        let sum = a.iter().zip(&b).map(|(a, b)| 2.0 * a - 1e9 * b).collect::<Vec<_>>();
        assert_eq!(rank(vec![a.clone(), b.clone()], 1e-5), 2);
        assert_eq!(rank(vec![a.clone(), b.clone(), sum.clone()], 1e-5), 2);
        let off = sum.iter().enumerate().map(|(k, value)| value + if k == 1 { 1e-3 } else { 0.0 }).collect();
        assert_eq!(rank(vec![a, b, off], 1e-5), 3);
        assert_eq!(rank(vec![vec![0.0; 3]; 2], 1e-5), 0);
        assert_eq!(rank(Vec::new(), 1e-5), 0);
    }
}
