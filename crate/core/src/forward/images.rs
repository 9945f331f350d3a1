use super::potential::{LANES, Potential};
use super::{MAX_ECCENTRICITY, QUICK_TOLERANCE, Series};
use crate::head::Shells;
use crate::math::least_squares;

/// A layered sphere's lead field by a few image sources.
///
/// In a homogeneous sphere Φ has a closed form, Σ (2 + 1/n) Hₙ = 2/D − ln(1 − s + D) + const with D = √(1 − 2s + u)
/// (Wilson & Bayley 1950; Frank 1952). Its two parts taken at scaled positions μⱼ p, each with a strength of its own,
/// approximate the gains of a layered sphere as gₙ ≈ Σⱼ μⱼⁿ⁻¹ (αⱼ + βⱼ / n). The idea is that of equivalent dipoles
/// (Berg & Scherg 1994, EEG Clin Neurophysiol 90:58–64); here the places μⱼ are fixed and both strengths of each are
/// free, so that the problem is linear and cannot stick.
///
/// The error is bounded, not sampled: by Bernstein's inequality it is at most Σₙ |gₙ − approximation| n |p|ⁿ⁻¹.
#[derive(Clone, Debug)]
pub struct Images {
    images: Vec<Image>,
    error_bound: f64,
}

#[derive(Clone, Copy, Debug)]
struct Image {
    mu: f64,
    alpha: f64,
    beta: f64,
}

impl Images {
    /// As few images as keep the error bound under [`QUICK_TOLERANCE`] for all sources up to [`MAX_ECCENTRICITY`];
    /// `None` where sixteen do not suffice.
    pub fn new(shells: &Shells, series: &Series) -> Option<Self> {
        let reach = MAX_ECCENTRICITY * shells.brain_ratio();
        let terms = series.terms(reach, 0);
        let gains = &series.gains()[..terms];
        let weights = weights(gains, reach);
        [1, 8, 10, 12, 14, 16]
            .into_iter()
            .map(|count| Self::solve(count, gains, &weights, reach))
            .find(|images| images.error_bound <= QUICK_TOLERANCE)
    }

    /// Largest possible error over the largest possible value, whatever the position, moment and electrode.
    pub fn error_bound(&self) -> f64 {
        self.error_bound
    }

    /// Number of images.
    pub fn count(&self) -> usize {
        self.images.len()
    }

    fn solve(count: usize, gains: &[f64], weights: &[f64], reach: f64) -> Self {
        let places: Vec<f64> = (0..count).map(|j| place(j, count)).collect();
        let powers: Vec<Vec<f64>> = places.iter().map(|&mu| powers(mu).take(gains.len()).collect()).collect();
        let weigh = |column: &Vec<f64>, by_degree: bool| -> Vec<f64> {
            let scale = |i: usize| if by_degree { weights[i] / (i + 1) as f64 } else { weights[i] };
            column.iter().enumerate().map(|(i, value)| value * scale(i)).collect()
        };
        let columns = powers.iter().map(|c| weigh(c, false)).chain(powers.iter().map(|c| weigh(c, true))).collect();
        let strengths = least_squares(columns, weigh(&gains.to_vec(), false));
        let images: Vec<Image> =
            (0..count).map(|j| Image { mu: places[j], alpha: strengths[j], beta: strengths[count + j] }).collect();
        let lacks: Vec<f64> = gains
            .iter()
            .enumerate()
            .map(|(i, gain)| {
                let degree = (i + 1) as f64;
                let sum: f64 = images
                    .iter()
                    .zip(&powers)
                    .map(|(image, power)| power[i] * (image.alpha + image.beta / degree))
                    .sum();
                gain - sum
            })
            .collect();
        let error_bound = distances(reach).map(|r| bound(&lacks, r) / bound(gains, r)).fold(0.0, f64::max);
        Self { images, error_bound }
    }

    /// Derivatives of Φ, from those of 1/D and −ln E with E = 1 − s + D; the first ones only unless `HIGHER`.
    pub(super) fn potential<const HIGHER: bool>(&self, u: f64, s: &[f64; LANES]) -> Potential {
        let mut sum = Potential::default();
        for image in &self.images {
            let Image { mu, alpha, beta } = *image;
            // Φ holds α/μ · 1/D and −β/μ · ln E at μp; each derivative by s brings μ, each by u brings μ².
            let (mu2, mu3, mu4, mu5) = (mu * mu, mu * mu * mu, mu * mu * mu * mu, mu * mu * mu * mu * mu);
            let u = u * mu2;
            for lane in 0..LANES {
                let s = s[lane] * mu;
                let d = (1.0 - 2.0 * s + u).sqrt();
                let a = 1.0 / d;
                let b = 1.0 / (1.0 - s + d);
                let (a2, ab) = (a * a, a * b);
                let a3 = a2 * a;
                sum.s[lane] += alpha * a3 + beta * (b + ab);
                sum.u[lane] -= 0.5 * mu * (alpha * a3 + beta * ab);
                if !HIGHER {
                    continue;
                }
                let (a5, b2, ab2) = (a3 * a2, b * b, ab * b);
                sum.us[lane] -= 0.5 * mu2 * (alpha * 3.0 * a5 + beta * (a3 * b + ab2 + ab2 * a));
                sum.uu[lane] += 0.25 * mu3 * (alpha * 3.0 * a5 + beta * (a3 * b + ab * ab));
                sum.uus[lane] += 0.25
                    * mu4
                    * (alpha * 15.0 * a5 * a2
                        + beta * (3.0 * a5 * b + a3 * b2 + 3.0 * a2 * ab * ab + 2.0 * (ab * ab2 + ab2 * ab * a)));
                sum.uuu[lane] -= 0.125
                    * mu5
                    * (alpha * 15.0 * a5 * a2 + beta * (3.0 * a5 * b + 3.0 * a2 * ab * ab + 2.0 * ab * ab * ab));
            }
        }
        sum
    }
}

/// Places of the images, dense towards the scalp; the powers were chosen for the smallest worst error over eleven heads.
fn place(index: usize, count: usize) -> f64 {
    if count == 1 {
        return 1.0;
    }
    let (reach, power) = if count <= 10 { (0.85, 2.0) } else { (0.9, 1.75) };
    1.0 - reach * libm::pow(index as f64 / (count - 1) as f64, power)
}

/// Distances from the centre, in scalp radii, at which errors are weighed.
fn distances(reach: f64) -> impl Iterator<Item = f64> {
    (1..=50).map(move |k| reach * libm::pow(f64::from(k) / 50.0, 0.5))
}

/// Σ |gₙ| n rⁿ⁻¹: the largest value that a lead field with these gains can take at distance r.
fn bound(gains: &[f64], r: f64) -> f64 {
    gains.iter().zip(powers(r)).enumerate().map(|(i, (gain, power))| gain.abs() * (i + 1) as f64 * power).sum()
}

/// How much an error of each gain matters where it matters most.
fn weights(gains: &[f64], reach: f64) -> Vec<f64> {
    let mut weights = vec![0.0f64; gains.len()];
    for r in distances(reach) {
        let whole = bound(gains, r);
        for (i, (weight, power)) in weights.iter_mut().zip(powers(r)).enumerate() {
            *weight = weight.max((i + 1) as f64 * power / whole);
        }
    }
    weights
}

/// 1, x, x², …
fn powers(x: f64) -> impl Iterator<Item = f64> {
    core::iter::successors(Some(1.0), move |power| Some(power * x))
}
