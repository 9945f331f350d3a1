use super::series::gain;
use crate::math::lanes::blocks;
use crate::math::{Double, Lanes, Vec3};
use crate::shells::Shells;

/// The series of a head that is drawn for one simulation only, where an approximation by images would cost more than it
/// saves: the lead field alone, cut off where the power of the distance falls below 10⁻⁷.
#[derive(Clone, Debug)]
pub struct CutSeries {
    /// gₙ for n = 1, 2, …, with the factors of the recurrence of Hₙ.
    terms: Vec<Term>,
}

#[derive(Clone, Copy, Debug)]
struct Term {
    gain: f64,
    odd: f64,
    a: f64,
    b: f64,
}

/// What a cut series may lack of |p|ⁿ: a simulated map needs no more digits than a recording has.
const CUT: f64 = 1e-7;

/// Blocks of electrodes that are computed side by side: each step of the recurrence waits for the one before.
const SIDE: usize = 4;

impl CutSeries {
    /// For sources up to this distance from the centre, in scalp radii.
    pub fn new(shells: &Shells, farthest: f64) -> Self {
        let term =
            |n: f64| Term { gain: gain(n, shells), odd: 2.0 * n - 1.0, a: (2.0 * n - 1.0) / n, b: (n - 1.0) / n };
        Self { terms: (1..=needed(farthest)).map(|n| term(n as f64)).collect() }
    }

    /// The map of a dipole on the unit sphere with κ = 1 (see [`super::LeadField`]), as it is without a reference.
    ///
    /// L·m = Φₛ (e·m) + 2Φᵤ (p·m), where Φₛ = Σ gₙ Dₙ and 2Φᵤ = −Σ gₙ Dₙ₋₁ with Dₙ as in [`super::Series`].
    pub fn map(&self, directions: &[Vec3], position: Vec3, moment: Vec3) -> Vec<f64> {
        let terms = &self.terms[..needed(position.norm()).min(self.terms.len())];
        let u = Double::splat(position.dot(position));
        let radial = Double::splat(position.dot(moment));
        let along = |v: Vec3| blocks::<Double>(&directions.iter().map(|e| e.dot(v)).collect::<Vec<_>>());
        let (mut s, mut em) = (along(position), along(moment));
        s.resize(s.len().next_multiple_of(SIDE), Double::default());
        em.resize(s.len(), Double::default());
        let mut map = vec![0.0; s.len() * Double::WIDTH];
        let groups = s.chunks_exact(SIDE).zip(em.chunks_exact(SIDE)).zip(map.chunks_exact_mut(SIDE * Double::WIDTH));
        for ((s, em), values) in groups {
            let s = core::array::from_fn(|i| s[i]);
            let [by_s, by_u] = derivatives(terms, u, &s);
            for (i, values) in values.chunks_exact_mut(Double::WIDTH).enumerate() {
                (by_s[i] * em[i] - by_u[i] * radial).unpack(values);
            }
        }
        map.truncate(directions.len());
        map
    }
}

/// Φₛ and −2Φᵤ.
#[inline(never)]
fn derivatives(terms: &[Term], u: Double, s: &[Double; SIDE]) -> [[Double; SIDE]; 2] {
    let zero = [Double::default(); SIDE];
    let (mut by_s, mut by_u) = (zero, zero);
    let (mut h, mut h_before) = ([Double::splat(1.0); SIDE], zero);
    let (mut d, mut d_before) = (zero, zero);
    for term in terms {
        let [gain, odd, a, b] = [term.gain, term.odd, term.a, term.b].map(Double::splat);
        let ub = u * b;
        for i in 0..SIDE {
            let next_h = s[i] * a * h[i] - ub * h_before[i];
            let next_d = u * d_before[i] + odd * h[i];
            by_s[i] += gain * next_d;
            by_u[i] += gain * d[i];
            (h_before[i], h[i]) = (h[i], next_h);
            (d_before[i], d[i]) = (d[i], next_d);
        }
    }
    [by_s, by_u]
}

/// Terms until |p|ⁿ falls below [`CUT`], and a few more.
fn needed(distance: f64) -> usize {
    8 + if distance > 1e-3 { libm::ceil(libm::log(CUT) / libm::log(distance.min(0.99))) as usize } else { 0 }
}

#[cfg(test)]
mod tests {
    use super::super::LeadField;
    use super::*;

    #[test]
    fn it_is_the_lead_field_but_for_a_few_digits() {
        let directions: Vec<Vec3> = (0..21)
            .map(|i| {
                let (z, angle) = (1.0 - (f64::from(i) + 0.5) / 12.0, 2.4 * f64::from(i));
                let ring = (1.0 - z * z).sqrt();
                Vec3::new(ring * libm::cos(angle), ring * libm::sin(angle), z)
            })
            .collect();
        let shells = Shells::standard();
        let field = LeadField::new(&shells, 88.0, directions.clone());
        let series = CutSeries::new(&shells, field.reach());
        let moment = Vec3::new(3.0, -4.0, 12.0);
        for position in [Vec3::ZERO, Vec3::new(0.1, -0.3, 0.2), Vec3::new(0.0, 0.0, 0.8), Vec3::new(0.5, 0.5, -0.52)] {
            let exact = field.exact(position);
            let cut = series.map(&directions, position, moment);
            let most = exact.iter().fold(0.0f64, |most, v| most.max(v.abs())) * moment.norm();
            for (row, value) in exact.rows().into_iter().zip(cut) {
                let value = value * field.scale();
                let right = Vec3::new(row[0], row[1], row[2]).dot(moment);
                assert!((right - value).abs() <= 2e-5 * most, "{position:?}: {right} {value}");
            }
        }
    }
}
