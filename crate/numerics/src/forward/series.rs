use super::potential::Potential;
use crate::math::Lanes;
use crate::shells::Shells;

/// The infinite series of Legendre terms of a layered sphere.
///
/// Φ(u, s) = Σₙ gₙ Hₙ(u, s), where Hₙ = |p|ⁿ Pₙ(s / |p|) is a polynomial in u and s, and gₙ carries the potential from
/// the innermost shell to the scalp (de Munck & Peters 1993, IEEE TBME 40:1166–1174; Zhang 1995, Phys Med Biol
/// 40:335–349). On the unit sphere a homogeneous head has gₙ = (2n + 1) / n.
///
/// The terms needed at a position come from a bound of what is left out. The inequality n²T² + T′² ≤ n² max T² for
/// trigonometric polynomials of degree n (Bernstein & Szegő) gives |∇Hₙ| ≤ n |p|ⁿ⁻¹, hence term n is at most
/// fₙ (2n + 1) |p|ⁿ⁻¹ with fₙ = n gₙ / (2n + 1).
#[derive(Clone, Debug)]
pub struct Series {
    /// gₙ for n = 1, 2, …; index 0 is unused.
    gains: Vec<f64>,
    /// maxₘ≥ₙ fₘ.
    envelope: Vec<f64>,
}

/// No position within reach needs more terms: 0.98⁴⁰⁰⁰ < 10⁻³⁴.
const MOST_TERMS: usize = 4000;

/// What the cut series may lack, relative to the sum of the bounds of all terms.
const TAIL: f64 = 1e-14;

impl Series {
    /// The gains of these shells.
    pub fn new(shells: &Shells) -> Self {
        let gains: Vec<f64> = (0..=MOST_TERMS).map(|n| if n == 0 { 0.0 } else { gain(n as f64, shells) }).collect();
        let mut envelope = vec![0.0; gains.len()];
        let mut most: f64 = 0.0;
        for n in (1..gains.len()).rev() {
            most = most.max(gains[n].abs() * n as f64 / (2 * n + 1) as f64);
            envelope[n] = most;
        }
        Self { gains, envelope }
    }

    /// gₙ for n = 1, 2, …
    pub fn gains(&self) -> &[f64] {
        &self.gains[1..]
    }

    /// Number of terms needed at this distance from the centre, in scalp radii, for the lead field (`order` 0) or its
    /// first or second derivatives; each derivative brings at most a factor n / |p|.
    pub fn terms(&self, distance: f64, order: usize) -> usize {
        // |p| to the power n − 1 − order, but no negative one.
        let mut power = 1.0;
        let mut sum = 0.0;
        for n in 1..MOST_TERMS {
            let bound = |n: usize, power: f64| {
                let growth = (0..order).fold((2 * n + 1) as f64, |product, _| product * n as f64);
                self.envelope[n] * growth * power
            };
            sum += bound(n, power);
            if n > order {
                power *= distance;
            }
            // The terms after n shrink at least by this factor each.
            let ratio = (n + 2) as f64 / (n + 1) as f64;
            let shrink = (0..=order).fold(distance, |product, _| product * ratio);
            if n > order && shrink < 1.0 && bound(n + 1, power) / (1.0 - shrink) <= TAIL * sum {
                return n;
            }
        }
        MOST_TERMS
    }

    /// Derivatives of Φ with the given number of terms.
    ///
    /// With Dₙ, Eₙ, Fₙ the first three derivatives of Hₙ by s, the derivative by u of each is −½ of the next one of
    /// degree n − 1, for example ∂Hₙ/∂u = −½ Dₙ₋₁; and Dₙ = u Dₙ₋₂ + (2n − 1) Hₙ₋₁, likewise Eₙ and Fₙ.
    pub(super) fn potential<L: Lanes>(&self, terms: usize, u: L, s: L) -> Potential<L> {
        let zero = L::default();
        let mut sum = Potential::default();
        // [degree n − 1, degree n − 2] of H, D, E, F; F once more for n − 3.
        let (mut h, mut d, mut e, mut f) = ([L::splat(1.0), zero], [zero; 2], [zero; 2], [zero; 2]);
        let mut f3 = zero;
        for (n, &gain) in self.gains.iter().enumerate().skip(1).take(terms) {
            let n = n as f64;
            let odd = L::splat(2.0 * n - 1.0);
            let next_h = (s * h[0] * odd - h[1] * (L::splat(n - 1.0) * u)) / L::splat(n);
            let next_d = d[1] * u + h[0] * odd;
            let next_e = e[1] * u + d[0] * odd;
            let next_f = f[1] * u + e[0] * odd;
            let [gain, half, quarter, eighth] = [1.0, -0.5, 0.25, -0.125].map(|share| L::splat(share * gain));
            sum.s += next_d * gain;
            sum.u += d[0] * half;
            sum.us += e[0] * half;
            sum.uu += e[1] * quarter;
            sum.uus += f[1] * quarter;
            sum.uuu += f3 * eighth;
            (h, d, e) = ([next_h, h[0]], [next_d, d[0]], [next_e, e[0]]);
            f3 = f[1];
            f = [next_f, f[0]];
        }
        sum
    }
}

/// gₙ of one degree: potential v and radial current j, both continuous, are carried inwards from v = 1, j = 0 on the
/// scalp. Each step leaves out the common factor (inner / outer radius)^−(n+1), which cancels at the end.
pub(super) fn gain(n: f64, shells: &Shells) -> f64 {
    let specs = shells.specs();
    let (mut v, mut j) = (1.0, 0.0);
    for pair in specs.windows(2).rev() {
        let (inner, outer) = (&pair[0], &pair[1]);
        let slope = j * outer.ratio / outer.conductivity;
        let growing = ((n + 1.0) * v + slope) / (2.0 * n + 1.0);
        // v = growing + decaying and slope = n growing − (n + 1) decaying; inwards the growing part changes by this much.
        let change = growing * libm::expm1((2.0 * n + 1.0) * libm::log(inner.ratio / outer.ratio));
        v += change;
        j = outer.conductivity / inner.ratio * (slope + n * change);
    }
    let innermost = &specs[0];
    (2.0 * n + 1.0) / (n * v - innermost.ratio * j / innermost.conductivity)
}
