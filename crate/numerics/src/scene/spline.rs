use crate::math::{Cholesky, Vec3};
use core::f64::consts::PI;
use std::sync::LazyLock;

/// Spherical spline interpolation of order 4 (Perrin, Pernier, Bertrand & Echallier 1989, EEG Clin Neurophysiol
/// 72:184–187, corrigendum 76:565): V(e) = c₀ + Σ cᵢ g(e·eᵢ) with Σ cᵢ = 0.
#[derive(Clone, Debug)]
pub struct Spline {
    directions: Vec<Vec3>,
    factors: Cholesky,
    /// The solution for values of 1, which carries the constant c₀.
    ones: Vec<f64>,
}

/// Part of g(1) added to the diagonal: 512 electrodes still get their values to 10⁻⁴.
const RIDGE: f64 = 1e-13;

/// Terms of g: the next one is below 10⁻¹¹ of the first.
const TERMS: i32 = 60;

/// Steps of the table of g over −1 … 1.
const STEPS: usize = 4096;

impl Spline {
    /// Prepares the spline of electrodes in these unit directions; `None` if they cannot carry one.
    pub fn new(directions: Vec<Vec3>) -> Option<Self> {
        let [top, _] = kernel(1.0);
        // Electrodes that are very close may need more.
        let factors = [RIDGE, 1e3 * RIDGE, 1e6 * RIDGE].into_iter().find_map(|ridge| {
            Cholesky::new(directions.len(), |i, j| match i == j {
                true => top * (1.0 + ridge),
                false => kernel(directions[i].dot(directions[j]))[0],
            })
        })?;
        let ones = factors.solve(&vec![1.0; directions.len()]);
        Some(Self { directions, factors, ones })
    }

    /// Coefficients c₀, c₁, … of a map.
    pub fn coefficients(&self, map: &[f64]) -> (f64, Vec<f64>) {
        let free = self.factors.solve(map);
        let constant = free.iter().sum::<f64>() / self.ones.iter().sum::<f64>();
        (constant, free.iter().zip(&self.ones).map(|(c, one)| c - constant * one).collect())
    }

    /// Values of several maps, given by their coefficients, in one direction.
    pub fn values<const N: usize>(&self, coefficients: &[(f64, Vec<f64>); N], direction: Vec3) -> [f64; N] {
        let table = table();
        let mut values = core::array::from_fn(|k| coefficients[k].0);
        for (index, e) in self.directions.iter().enumerate() {
            let g = interpolated(table, direction.dot(*e));
            for (value, (_, c)) in values.iter_mut().zip(coefficients) {
                *value += c[index] * g;
            }
        }
        values
    }

    /// g of one direction for each electrode: what the coefficients c₁, c₂, … are multiplied by there.
    pub(super) fn kernels(&self, direction: Vec3) -> impl Iterator<Item = f64> {
        let table = table();
        self.directions.iter().map(move |e| interpolated(table, direction.dot(*e)))
    }
}

/// g and g′ times the step, at equal steps.
fn table() -> &'static [[f64; 2]; STEPS + 1] {
    static TABLE: LazyLock<Box<[[f64; 2]; STEPS + 1]>> = LazyLock::new(|| {
        let step = 2.0 / STEPS as f64;
        let mut table = Box::new([[0.0; 2]; STEPS + 1]);
        for (i, entry) in table.iter_mut().enumerate() {
            let [g, slope] = kernel(i as f64 * step - 1.0);
            *entry = [g, slope * step];
        }
        table
    });
    &TABLE
}

/// g from the table, by cubic Hermite interpolation.
#[inline]
fn interpolated(table: &[[f64; 2]; STEPS + 1], cosine: f64) -> f64 {
    let position = ((cosine + 1.0) * 0.5 * STEPS as f64).clamp(0.0, STEPS as f64);
    let index = (position as usize).min(STEPS - 1);
    let t = position - index as f64;
    let ([a, slope_a], [b, slope_b]) = (table[index], table[index + 1]);
    let rise = b - a;
    a + t * (slope_a + t * (3.0 * rise - 2.0 * slope_a - slope_b + t * (slope_a + slope_b - 2.0 * rise)))
}

/// g(x) = 1/(4π) Σₙ (2n + 1) / (n (n + 1))⁴ Pₙ(x) and its slope.
fn kernel(cosine: f64) -> [f64; 2] {
    let x = cosine.clamp(-1.0, 1.0);
    // P and P′ of degrees n − 1 and n.
    let (mut before, mut here) = ([1.0, 0.0], [x, 1.0]);
    let mut sum = [0.0; 2];
    for n in 1..=TERMS {
        let n = f64::from(n);
        let square = n * (n + 1.0) * n * (n + 1.0);
        let factor = (2.0 * n + 1.0) / (square * square);
        sum = [sum[0] + factor * here[0], sum[1] + factor * here[1]];
        let next = ((2.0 * n + 1.0) * x * here[0] - n * before[0]) / (n + 1.0);
        let slope = before[1] + (2.0 * n + 1.0) * here[0];
        (before, here) = (here, [next, slope]);
    }
    sum.map(|value| value / (4.0 * PI))
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
            assert!((kernel(x)[0] - g).abs() < 1e-12, "{x}");
        }
    }

    #[test]
    fn passes_through_the_values_of_noise() {
        for count in [19, 64, 128, 256, 512] {
            let directions: Vec<Vec3> = (0..count)
                .map(|i| {
                    let (z, angle) = (1.0 - 1.3 * (i as f64 + 0.5) / count as f64, 2.399_963 * i as f64);
                    let r = (1.0 - z * z).sqrt();
                    Vec3::new(r * libm::cos(angle), r * libm::sin(angle), z)
                })
                .collect();
            let map: Vec<f64> = (0..count).map(|i| 3.0 * libm::sin((i * i * 7 + i) as f64)).collect();
            let spline = Spline::new(directions.clone()).unwrap();
            let coefficients = [spline.coefficients(&map)];
            for (direction, value) in directions.iter().zip(&map) {
                let error = (spline.values(&coefficients, *direction)[0] - value).abs();
                assert!(error < 0.01, "{count}: {error}");
            }
        }
    }
}
