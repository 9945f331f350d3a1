//! The layered sphere once more, in the plainest form, as a measure for the engine's evaluation.
use inward_core::Vec3;

/// Potentials on the scalp by the series of Legendre terms (de Munck & Peters 1993; Zhang 1995), in spherical
/// components: V = 1/(4πσ₁R²) Σ gₙ bⁿ⁻¹ [n q_r Pₙ(c) + Pₙ′(c) (q·e − q_r c)], b the distance over the scalp radius.
pub struct PlainSeries {
    gains: Vec<f64>,
    scale: f64,
}

impl PlainSeries {
    /// Shells as (outer radius over the scalp's, S/m), innermost first, on a head of this radius in mm.
    pub fn new(shells: &[(f64, f64)], radius_mm: f64) -> Self {
        // Further ones leave the range of numbers, long after their terms have become nothing.
        let gains = (1..=1500).map(|n| gain(f64::from(n), shells)).take_while(|g| g.is_finite() && *g > 0.0).collect();
        Self { gains, scale: 1e3 / (4.0 * std::f64::consts::PI * shells[0].1 * radius_mm * radius_mm) }
    }

    /// The default head.
    pub fn standard() -> Self {
        Self::new(&[(79.0 / 88.0, 0.33), (81.0 / 88.0, 1.79), (85.0 / 88.0, 0.0132), (1.0, 0.33)], 88.0)
    }

    /// µV per nAm along x, y, z at electrodes in these unit directions; `position` in scalp radii. Terms smaller than
    /// `tolerance`, relative to the first, are left out.
    pub fn lead(&self, position: Vec3, electrodes: &[Vec3], tolerance: f64) -> Vec<Vec3> {
        let distance = position.norm();
        if distance < 1e-12 {
            return electrodes.iter().map(|&e| e * (self.scale * self.gains[0])).collect();
        }
        let axis = position * (1.0 / distance);
        let cosines: Vec<f64> = electrodes.iter().map(|e| e.dot(axis)).collect();
        let count = electrodes.len();
        let (mut p0, mut p1) = (vec![1.0; count], cosines.clone());
        let (mut d0, mut d1) = (vec![0.0; count], vec![1.0; count]);
        let (mut radial, mut tangential) = (vec![0.0; count], vec![0.0; count]);
        let mut power = 1.0;
        for (index, gain) in self.gains.iter().enumerate() {
            let n = (index + 1) as f64;
            let weight = gain * power;
            for i in 0..count {
                radial[i] += weight * n * p1[i];
                tangential[i] += weight * d1[i];
                let p2 = ((2.0 * n + 1.0) * cosines[i] * p1[i] - n * p0[i]) / (n + 1.0);
                let d2 = d0[i] + (2.0 * n + 1.0) * p1[i];
                (p0[i], p1[i], d0[i], d1[i]) = (p1[i], p2, d1[i], d2);
            }
            power *= distance;
            // |Pₙ′| is at most n²; what follows is a geometric sum.
            if n > 3.0 && weight.abs() * n * n < tolerance * (1.0 - distance) * self.gains[0] {
                break;
            }
        }
        (0..count)
            .map(|i| (axis * (radial[i] - cosines[i] * tangential[i]) + electrodes[i] * tangential[i]) * self.scale)
            .collect()
    }
}

/// gₙ: (v, j) carried inward from (1, 0) on the scalp, radii over the scalp's.
fn gain(n: f64, shells: &[(f64, f64)]) -> f64 {
    let (mut v, mut j) = (1.0, 0.0);
    for pair in shells.windows(2).rev() {
        let ((inner, _), (outer, sigma)) = (pair[0], pair[1]);
        let slope = j * outer / sigma;
        let (a, b) = (((n + 1.0) * v + slope) / (2.0 * n + 1.0), (n * v - slope) / (2.0 * n + 1.0));
        let t = inner / outer;
        let (up, down) = (a * t.powf(n), b * t.powf(-n - 1.0));
        v = up + down;
        j = sigma / inner * (n * up - (n + 1.0) * down);
    }
    let (r1, sigma) = shells[0];
    (2.0 * n + 1.0) * r1.powf(-n - 2.0) / (n * v / r1 - j / sigma)
}
