use super::field::along;
use super::potential::Potential;
use super::{MAX_ECCENTRICITY, Series};
use crate::math::lanes::splat3;
use crate::math::{Lanes, Vec3, least_squares};
use crate::shells::Shells;

/// A layered sphere's lead field by a few image sources.
///
/// In a homogeneous sphere Φ has a closed form, Σ (2 + 1/n) Hₙ = 2/D − ln(1 − s + D) + const with D = √(1 − 2s + u)
/// (Wilson & Bayley 1950; Frank 1952). Its two parts taken at scaled positions μⱼ p, each with a strength of its own,
/// approximate the gains of a layered sphere as gₙ ≈ Σⱼ μⱼⁿ⁻¹ (αⱼ + βⱼ / n). The idea is that of equivalent dipoles
/// (Berg & Scherg 1994, EEG Clin Neurophysiol 90:58–64); here the places μⱼ are fixed and both strengths of each are
/// free, so that the problem is linear and cannot stick.
///
/// The error of the lead field is bounded, not sampled: with |∇Hₙ| ≤ n |p|ⁿ⁻¹ (see [`Series`]) it is at most
/// Σₙ |gₙ − approximation| n |p|ⁿ⁻¹. Its derivatives, which only steer the search, have no bound of their own.
#[derive(Clone, Debug)]
pub struct Images<L> {
    images: Vec<Image<L>>,
    error_bound: f64,
}

/// An image: its place and the factors of its strengths α and β in each derivative of Φ.
///
/// Φ holds α/μ · 1/D and −β/μ · ln E at μp; each derivative by s brings μ, each by u brings μ² and −½.
#[derive(Clone, Copy, Debug)]
struct Image<L> {
    mu: L,
    mu2: L,
    s: [L; 2],
    u: [L; 2],
    us: [L; 2],
    uu: [L; 2],
    uus: [L; 2],
    uuu: [L; 2],
}

impl<L: Lanes> Image<L> {
    fn new(mu: f64, alpha: f64, beta: f64) -> Self {
        let factors = |factor: f64, odd: f64| [L::splat(factor * odd * alpha), L::splat(factor * beta)];
        let by_u = -0.5 * mu;
        Self {
            mu: L::splat(mu),
            mu2: L::splat(mu * mu),
            s: factors(1.0, 1.0),
            u: factors(by_u, 1.0),
            us: factors(by_u * mu, 3.0),
            uu: factors(by_u * by_u * mu, 3.0),
            uus: factors(by_u * by_u * mu * mu, 15.0),
            uuu: factors(by_u * by_u * by_u * mu * mu, 15.0),
        }
    }
}

impl<L: Lanes> Images<L> {
    /// The first of these numbers of images whose error bound for all sources up to [`MAX_ECCENTRICITY`] is at most
    /// `tolerance`, else `most`.
    pub(super) fn new(shells: &Shells, series: &Series, numbers: &[usize], most: usize, tolerance: f64) -> Self {
        let reach = MAX_ECCENTRICITY * shells.brain_ratio();
        let terms = series.terms(reach, 0);
        let gains = &series.gains()[..terms];
        let weights = weights(gains, reach);
        let solve = |count: usize| Self::solve(count, gains, &weights, reach);
        let found = numbers.iter().map(|&count| solve(count)).find(|images| images.error_bound <= tolerance);
        found.unwrap_or_else(|| solve(most))
    }

    /// Largest possible error, whatever the position, moment and place on the scalp, over the largest value on the scalp of a
    /// radial dipole at the same position.
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
        let weigh = |column: &[f64], by_degree: bool| -> Vec<f64> {
            let scale = |i: usize| if by_degree { weights[i] / (i + 1) as f64 } else { weights[i] };
            column.iter().enumerate().map(|(i, value)| value * scale(i)).collect()
        };
        let columns = powers.iter().map(|c| weigh(c, false)).chain(powers.iter().map(|c| weigh(c, true))).collect();
        let strengths = least_squares(columns, weigh(gains, false));
        let (alphas, betas) = strengths.split_at(count);
        let images = (0..count).map(|j| Image::new(places[j], alphas[j], betas[j])).collect();
        let lacks: Vec<f64> = gains
            .iter()
            .enumerate()
            .map(|(i, gain)| {
                let degree = (i + 1) as f64;
                let sum: f64 = (0..count).map(|j| powers[j][i] * (alphas[j] + betas[j] / degree)).sum();
                gain - sum
            })
            .collect();
        // Both bounds grow with the distance: between two distances the lack is at most that at the farther one, the
        // value at least that at the nearer one.
        let at_centre = (lacks[0] / gains[0]).abs();
        let nearer = core::iter::once(0.0).chain(distances(reach));
        let between = nearer.zip(distances(reach)).map(|(near, far)| bound(&lacks, far) / bound(gains, near));
        let beyond: f64 =
            (0..count).map(|j| (alphas[j].abs() + betas[j].abs()) * tail(gains.len(), places[j] * reach)).sum();
        let error_bound = between.fold(at_centre, f64::max) + beyond / bound(gains, reach);
        Self { images, error_bound }
    }

    /// The lead field of one electrode, on the unit sphere, for several positions side by side.
    #[inline(never)]
    pub(crate) fn lead(&self, direction: Vec3, p: &[L; 3]) -> [L; 3] {
        let e = splat3(direction);
        let t = self.potential::<false>(along(p, p), along(&e, p));
        let twice_u = t.u + t.u;
        [t.s * e[0] + twice_u * p[0], t.s * e[1] + twice_u * p[1], t.s * e[2] + twice_u * p[2]]
    }

    /// Derivatives of Φ, from those of a = 1/D and −ln E with E = 1/b = 1 − s + D; the first ones only unless `HIGHER`.
    #[inline(always)]
    pub(super) fn potential<const HIGHER: bool>(&self, u: L, s: L) -> Potential<L> {
        let mut sum = Potential::default();
        let one = L::splat(1.0);
        for image in &self.images {
            let s = s * image.mu;
            let rest = one - s;
            let d = (rest - s + image.mu2 * u).sqrt();
            let e = rest + d;
            // One division for both.
            let ab = one / (d * e);
            let (a, b) = (ab * e, ab * d);
            let a2 = a * a;
            let a3 = a2 * a;
            sum.s += a3 * image.s[0] + (b + ab) * image.s[1];
            sum.u += a3 * image.u[0] + ab * image.u[1];
            if !HIGHER {
                continue;
            }
            let (a5, ab2, a2b2) = (a3 * a2, ab * b, ab * ab);
            let even = a2 * ab + a2b2;
            sum.us += a5 * image.us[0] + (even + ab2) * image.us[1];
            sum.uu += a5 * image.uu[0] + even * image.uu[1];
            let (a7, a5b_a4b2, a3b3) = (a5 * a2, even * a2, a2b2 * ab);
            let both = a5b_a4b2 + a5b_a4b2 + a5b_a4b2 + a3b3 + a3b3;
            let a2b3 = a2b2 * b;
            sum.uus += a7 * image.uus[0] + (both + a2 * ab2 + a2b3 + a2b3) * image.uus[1];
            sum.uuu += a7 * image.uuu[0] + both * image.uuu[1];
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
    (1..=DISTANCES).map(move |k| reach * f64::from(k) / f64::from(DISTANCES))
}

/// Enough that the largest value differs by a few percent from one distance to the next.
const DISTANCES: i32 = 300;

/// Σ n xⁿ⁻¹ over all n after the first `terms`.
fn tail(terms: usize, x: f64) -> f64 {
    let n = terms as f64;
    libm::pow(x, n) * (n + 1.0 - n * x) / ((1.0 - x) * (1.0 - x))
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
