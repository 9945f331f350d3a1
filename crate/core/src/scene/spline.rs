use crate::math::{Cholesky, Vec3};
use core::f64::consts::PI;

/// Spherical spline interpolation of order 4 (Perrin, Pernier, Bertrand & Echallier 1989, EEG Clin Neurophysiol
/// 72:184–187, corrigendum 76:565): V(e) = c₀ + Σ cᵢ g(e·eᵢ) with Σ cᵢ = 0.
#[derive(Clone, Debug)]
pub struct Spline {
    directions: Vec<Vec3>,
    factors: Cholesky,
    /// The solution for values of 1, which carries the constant c₀.
    ones: Vec<f64>,
    table: Vec<f64>,
}

/// Part of g(1) added to the diagonal: far below what is seen, enough for electrodes that are very close.
const RIDGE: f64 = 1e-7;

/// Terms of g: the next one is below 10⁻¹² of the first.
const TERMS: i32 = 60;

/// Steps of the table of g over −1 … 1.
const STEPS: usize = 4096;

impl Spline {
    /// Prepares the spline of electrodes in these unit directions; `None` if they cannot carry one.
    pub fn new(directions: Vec<Vec3>) -> Option<Self> {
        let table: Vec<f64> = (0..=STEPS).map(|i| spline_kernel(2.0 * i as f64 / STEPS as f64 - 1.0)).collect();
        let ridge = RIDGE * spline_kernel(1.0);
        let factors = Cholesky::new(directions.len(), |i, j| {
            let cosine = if i == j { 1.0 } else { directions[i].dot(directions[j]) };
            spline_kernel(cosine) + if i == j { ridge } else { 0.0 }
        })?;
        let ones = factors.solve(&vec![1.0; directions.len()]);
        Some(Self { directions, factors, ones, table })
    }

    /// Coefficients c₀, c₁, … of a map.
    pub fn coefficients(&self, map: &[f64]) -> (f64, Vec<f64>) {
        let free = self.factors.solve(map);
        let constant = free.iter().sum::<f64>() / self.ones.iter().sum::<f64>();
        (constant, free.iter().zip(&self.ones).map(|(c, one)| c - constant * one).collect())
    }

    /// Values of several maps, given by their coefficients, in one direction.
    pub fn values<const N: usize>(&self, coefficients: &[(f64, Vec<f64>); N], direction: Vec3) -> [f64; N] {
        let mut values = core::array::from_fn(|k| coefficients[k].0);
        for (index, e) in self.directions.iter().enumerate() {
            let g = self.kernel(direction.dot(*e));
            for (value, (_, c)) in values.iter_mut().zip(coefficients) {
                *value += c[index] * g;
            }
        }
        values
    }

    /// g from the table, linearly interpolated.
    fn kernel(&self, cosine: f64) -> f64 {
        let position = ((cosine + 1.0) * 0.5 * STEPS as f64).clamp(0.0, STEPS as f64);
        let index = (position as usize).min(STEPS - 1);
        let part = position - index as f64;
        self.table[index] * (1.0 - part) + self.table[index + 1] * part
    }
}

/// g(x) = 1/(4π) Σₙ (2n + 1) / (n (n + 1))⁴ Pₙ(x).
pub fn spline_kernel(cosine: f64) -> f64 {
    let x = cosine.clamp(-1.0, 1.0);
    let (mut before, mut here, mut sum) = (1.0, x, 0.0);
    for n in 1..=TERMS {
        let n = f64::from(n);
        let square = n * (n + 1.0) * n * (n + 1.0);
        sum += (2.0 * n + 1.0) / (square * square) * here;
        (before, here) = (here, ((2.0 * n + 1.0) * x * here - n * before) / (n + 1.0));
    }
    sum / (4.0 * PI)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn kernel_equals_high_precision_sums() {
        // Computed with 40 digits from the formula of Perrin et al. 1989.
        let known = [
            (1.0, 0.015260761698568),
            (0.5, 0.0074091856385513),
            (0.0, -0.00015191969904),
            (-0.5, -0.0074883218480659),
            (-1.0, -0.014636986154202),
        ];
        for (x, g) in known {
            assert!((spline_kernel(x) - g).abs() < 1e-12, "{x}");
        }
    }

    #[test]
    fn passes_through_the_values() {
        let directions: Vec<Vec3> = (0..40)
            .map(|i| {
                let (z, angle) = (1.0 - 1.3 * (f64::from(i) + 0.5) / 40.0, 2.4 * f64::from(i));
                let r = (1.0 - z * z).sqrt();
                Vec3::new(r * libm::cos(angle), r * libm::sin(angle), z)
            })
            .collect();
        let map: Vec<f64> = directions.iter().map(|d| 3.0 + d[0] - 2.0 * d[1] * d[2]).collect();
        let spline = Spline::new(directions.clone()).unwrap();
        let coefficients = [spline.coefficients(&map)];
        for (direction, value) in directions.iter().zip(&map) {
            assert!((spline.values(&coefficients, *direction)[0] - value).abs() < 1e-3);
        }
    }
}
