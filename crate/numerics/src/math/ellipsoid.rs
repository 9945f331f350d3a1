use super::{Symmetric3, Vec3};

/// Points about a centre: their second moments about it, and the ellipsoid of that shape that holds a share of them.
#[derive(Clone, Copy, Debug)]
pub struct Ellipsoid {
    /// The centre.
    pub centre: Vec3,
    /// C: the mean of (x − c)(x − c)ᵀ.
    pub covariance: Symmetric3,
    /// s: the ellipsoid is (x − c)ᵀ C⁻¹ (x − c) ≤ s².
    pub scale: f64,
}

impl Ellipsoid {
    /// About a centre, of the shape that the points have, holding this share of them; `None` for no points. Points in a plane,
    /// and points that are all at the centre, have a little thickness.
    pub fn holding(points: &[Vec3], centre: Vec3, share: f64) -> Option<Self> {
        let moment = |i: usize, j: usize| points.iter().map(|p| (*p - centre)[i] * (*p - centre)[j]).sum::<f64>();
        let count = points.len() as f64;
        let flat = Symmetric3::from_fn(|i, j| moment(i, j) / count);
        let thickness = 1e-9 * (flat.at(0, 0) + flat.at(1, 1) + flat.at(2, 2)) + 1e-14;
        let covariance = Symmetric3::from_fn(|i, j| flat.at(i, j) + if i == j { thickness } else { 0.0 });
        let factor = covariance.factor()?;
        let mut squares: Vec<f64> = points.iter().map(|&p| (p - centre).dot(factor.solve(p - centre))).collect();
        let last = squares.len().checked_sub(1)?;
        // The place of a quantile of the next point, not of these (Weibull 1939).
        let at = (libm::ceil(share * (count + 1.0)) as usize).saturating_sub(1).min(last);
        Some(Self { centre, covariance, scale: super::select(&mut squares, at).sqrt() })
    }

    /// Lengths and directions of the semi-axes, longest first.
    pub fn axes(&self) -> [(f64, Vec3); 3] {
        let eigen = self.covariance.eigen();
        [2, 1, 0].map(|i| (self.scale * eigen.values[i].max(0.0).sqrt(), eigen.vectors[i]))
    }

    /// Its volume, in the cube of the points' unit.
    pub fn volume(&self) -> f64 {
        self.axes().iter().fold(4.0 / 3.0 * core::f64::consts::PI, |product, (axis, _)| product * axis)
    }

    /// Whether a point lies in it.
    pub fn holds(&self, point: Vec3) -> bool {
        let off = point - self.centre;
        self.covariance.factor().is_some_and(|factor| off.dot(factor.solve(off)) <= self.scale * self.scale)
    }
}
