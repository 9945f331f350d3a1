use rand_pcg::Pcg32;
use rand_pcg::rand_core::Rng;

/// The mean of values that were drawn independently, with an interval by the bootstrap: the values are drawn again with
/// replacement, and the interval lies between two percentiles of the means that result. With few values the usual
/// percentiles give intervals that are too narrow; these are expanded as Hesterberg 2015, Am Stat 69:371–386, says:
/// α/2 is replaced by Φ(−√(n/(n−1)) t), t being the 1 − α/2 quantile of Student's distribution with n − 1 degrees of freedom.
#[derive(Clone, Debug)]
pub struct Resampler {
    count: usize,
    /// How often each value is drawn, `count` entries for each draw.
    times: Vec<f64>,
    level: f64,
}

impl Resampler {
    /// For so many values, by draws that a seed determines.
    pub fn new(count: usize, draws: usize, seed: u32) -> Self {
        let mut chance = Pcg32::new(u64::from(seed), 1);
        let mut times = vec![0.0; count * draws];
        for draw in times.chunks_exact_mut(count.max(1)) {
            for _ in 0..count {
                // The high half of the product is even to within 2⁻³² (Lemire 2019, ACM Trans Model Comput Simul 29:3).
                let index = (u64::from(chance.next_u32()) * count as u64) >> 32;
                draw[index as usize] += 1.0;
            }
        }
        Self { count, times, level: expanded(count) }
    }

    /// The interval of nominally 95 % for the mean of these values.
    ///
    /// # Panics
    /// If there are other than the number of values that it was made for, or none.
    pub fn interval(&self, values: &[f64]) -> [f64; 2] {
        assert_eq!(values.len(), self.count);
        let mean = |draw: &[f64]| super::dot(draw, values) / self.count as f64;
        let mut means: Vec<f64> = self.times.chunks_exact(self.count).map(mean).collect();
        let last = means.len() - 1;
        let at = ((self.level * means.len() as f64) as usize).min(last / 2);
        [at, last - at].map(|at| select(&mut means, at))
    }
}

/// The value that stands at this place in ascending order (Hoare 1961, Commun ACM 4:321–322); reorders the values, none of
/// which may be not a number.
///
/// # Panics
/// If there is no such place.
pub fn select(values: &mut [f64], at: usize) -> f64 {
    let (mut first, mut last) = (0, values.len() - 1);
    while first < last {
        let pivot = values[first + (last - first) / 2];
        let (mut i, mut j) = (first, last);
        loop {
            while values[i] < pivot {
                i += 1;
            }
            while values[j] > pivot {
                j -= 1;
            }
            if i >= j {
                break;
            }
            values.swap(i, j);
            i += 1;
            j -= 1;
        }
        // What stands up to j is at most the pivot, what stands from j + 1 on at least.
        if at <= j { last = j } else { first = j + 1 }
    }
    values[at]
}

/// The expanded level for α = 0.05.
fn expanded(count: usize) -> f64 {
    let n = count as f64;
    let deviations = (n / (n - 1.0)).sqrt() * student(n - 1.0);
    0.5 * libm::erfc(deviations * core::f64::consts::FRAC_1_SQRT_2)
}

/// The quantile 0.975 of Student's distribution, from the normal one by the expansion of Abramowitz & Stegun 1964, 26.7.5:
/// 0.03 % short with 4 degrees of freedom, less with more.
fn student(freedom: f64) -> f64 {
    const X: f64 = 1.959_963_984_540_054;
    const X2: f64 = X * X;
    let terms = [
        X * (X2 + 1.0) / 4.0,
        X * ((5.0 * X2 + 16.0) * X2 + 3.0) / 96.0,
        X * (((3.0 * X2 + 19.0) * X2 + 17.0) * X2 - 15.0) / 384.0,
        X * ((((79.0 * X2 + 776.0) * X2 + 1482.0) * X2 - 1920.0) * X2 - 945.0) / 92160.0,
    ];
    X + terms.iter().rev().fold(0.0, |sum, term| (sum + term) / freedom)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn quantiles_are_those_of_tables() {
        // Student's t, 0.975: SciPy 1.17 `stats.t.ppf`.
        for (freedom, quantile) in [(4.0, 2.776445105), (5.0, 2.570581836), (12.0, 2.178812830), (30.0, 2.042272456)] {
            assert!((student(freedom) / quantile - 1.0).abs() < 4e-4, "{freedom}");
        }
        // The same with `stats.norm.cdf`.
        assert!((expanded(13) - 0.011671).abs() < 2e-6, "{}", expanded(13));
        assert!((expanded(20) - 0.015881).abs() < 2e-6, "{}", expanded(20));
    }

    #[test]
    fn selection_finds_what_sorting_finds() {
        let mut chance = Pcg32::new(3, 1);
        for count in 1..60 {
            for kinds in [2, 5, 1000] {
                let values: Vec<f64> = (0..count).map(|_| f64::from(chance.next_u32() % kinds)).collect();
                let mut sorted = values.clone();
                sorted.sort_by(f64::total_cmp);
                for (at, value) in sorted.iter().enumerate() {
                    assert_eq!(select(&mut values.clone(), at), *value, "{values:?} {at}");
                    assert_eq!(select(&mut sorted.clone(), at), *value);
                }
            }
        }
    }

    #[test]
    fn the_interval_lies_about_the_mean_and_is_wider_than_plain_percentiles() {
        let values: Vec<f64> = (0..13).map(|k| f64::from(k * k % 7)).collect();
        let mean = values.iter().sum::<f64>() / 13.0;
        let resampler = Resampler::new(13, 4000, 5);
        let [low, high] = resampler.interval(&values);
        assert!(low < mean && mean < high);
        assert_eq!(Resampler::new(13, 4000, 5).interval(&values), [low, high]);
        assert_ne!(Resampler::new(13, 4000, 6).interval(&values), [low, high]);
        let plain = Resampler { level: 0.025, ..resampler };
        let [inner_low, inner_high] = plain.interval(&values);
        assert!(low < inner_low && inner_high < high);
        assert_eq!(Resampler::new(6, 2000, 1).interval(&[0.25; 6]), [0.25; 2]);
    }
}
