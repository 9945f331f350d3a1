use super::{Vec3, dot, normal_above, sort_by_number};

/// Moran's I of the residuals of a regression: whether neighbours are left over alike.
///
/// I = (N / S₀) eᵀWe / eᵀe with W 1 for neighbours, else 0, and S₀ = ΣW. For independent normal errors behind a projection
/// M = 1 − QQᵀ of rank N − k the mean of I is (N / S₀) tr(MW) / (N − k), that of its square
/// (N / S₀)² (2 tr(MWMW) + tr(MW)²) / ((N − k)(N − k + 2))
/// (Moran 1950, Biometrika 37:17–23; Cliff & Ord 1981, Spatial Processes, §8.3; W is symmetric here).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Autocorrelation {
    /// I.
    pub moran: f64,
    /// Its expectation for independent errors.
    pub expected: f64,
    /// How many standard deviations it lies above that.
    pub z: f64,
    /// Chance of so high a value for independent errors, by the normal approximation.
    pub p: f64,
}

impl Autocorrelation {
    /// Of a residual, with an orthonormal basis of what was fitted, the constant included; `neighbours` are pairs. `None`
    /// where nothing is left over or no two are neighbours.
    pub fn new(residual: &[f64], basis: &[Vec<f64>], neighbours: &[[usize; 2]]) -> Option<Self> {
        let (count, fitted) = (residual.len() as f64, basis.len() as f64);
        let weights = 2.0 * neighbours.len() as f64;
        let squares = dot(residual, residual);
        let free = count - fitted;
        if !(squares > 0.0 && weights > 0.0 && free > 0.0) {
            return None;
        }
        let weighted = |values: &[f64]| {
            let mut sums = vec![0.0; values.len()];
            for &[i, j] in neighbours {
                sums[i] += values[j];
                sums[j] += values[i];
            }
            sums
        };
        let scale = count / weights;
        let moran = scale * dot(residual, &weighted(residual)) / squares;
        let images: Vec<Vec<f64>> = basis.iter().map(|column| weighted(column)).collect();
        // tr(MW) = −Σ qᵀWq, W having no diagonal; tr(MWMW) = tr(W²) − 2 Σ |Wq|² + Σ (qᵀWq')².
        let own: f64 = basis.iter().zip(&images).map(|(column, image)| dot(column, image)).sum();
        let lengths: f64 = images.iter().map(|image| dot(image, image)).sum();
        let crossed: f64 =
            basis.iter().flat_map(|column| images.iter().map(move |image| dot(column, image))).map(|p| p * p).sum();
        let product = weights - 2.0 * lengths + crossed;
        let expected = -scale * own / free;
        let second = scale * scale * (2.0 * product + own * own) / (free * (free + 2.0));
        let variance = second - expected * expected;
        if variance.is_nan() || variance <= 0.0 {
            return None;
        }
        let z = (moran - expected) / variance.sqrt();
        Some(Self { moran, expected, z, p: normal_above(z) })
    }
}

/// Pairs of points of which either is among the `nearest` nearest of the other.
pub fn neighbours(points: &[Vec3], nearest: usize) -> Vec<[usize; 2]> {
    let mut pairs = std::collections::BTreeSet::new();
    for (i, point) in points.iter().enumerate() {
        let mut others: Vec<(f64, usize)> = points
            .iter()
            .enumerate()
            .filter(|(j, _)| *j != i)
            .map(|(j, other)| ((*other - *point).norm(), j))
            .collect();
        sort_by_number(&mut others, |other| other.0);
        pairs.extend(others.iter().take(nearest).map(|&(_, j)| [i.min(j), i.max(j)]));
    }
    pairs.into_iter().collect()
}
