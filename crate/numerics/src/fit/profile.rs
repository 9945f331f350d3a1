use super::objective::{Objective, Surface};
use super::{Fit, Fitter, normalise};
use crate::math::Vec3;

/// Positions from which a dipole, its moment chosen anew at each, leaves little more than the best one: along rays from the
/// fit, as far as the residual variance stays below a limit.
#[derive(Clone, Debug)]
pub struct Profile {
    /// Where each ray leaves the region, in scalp radii.
    pub ends: Vec<Vec3>,
    /// Its volume in cubic scalp radii: each ray stands for an equal solid angle.
    pub volume: f64,
    /// Whether some ray reaches the boundary of the sources first.
    pub reaches_boundary: bool,
}

impl Fitter {
    /// The region around a fit of this map where the residual variance is at most `limit`, by so many rays.
    pub fn profile(&self, map: &[f64], fit: &Fit, limit: f64, rays: usize) -> Option<Profile> {
        let (map, _) = normalise(map)?;
        let mut surface = Objective::new(self.field.field(), &map);
        let reach = self.field.reach();
        let centre = fit.position * (reach / fit.position.norm().max(reach));
        let golden = core::f64::consts::PI * (3.0 - 5.0f64.sqrt());
        let mut profile = Profile { ends: Vec::with_capacity(rays), volume: 0.0, reaches_boundary: false };
        for ray in 0..rays {
            let z = 1.0 - (2.0 * ray as f64 + 1.0) / rays as f64;
            let (ring, angle) = ((1.0 - z * z).sqrt(), golden * ray as f64);
            let direction = Vec3::new(ring * libm::cos(angle), ring * libm::sin(angle), z);
            let along = centre.dot(direction);
            let farthest = ((along * along + reach * reach - centre.dot(centre)).max(0.0)).sqrt() - along;
            let length = crossing(&mut surface, centre, direction, limit, farthest);
            profile.reaches_boundary |= length >= farthest && farthest > 1e-9;
            profile.ends.push(centre + direction * length);
            profile.volume += 4.0 / 3.0 * core::f64::consts::PI / rays as f64 * length * length * length;
        }
        Some(profile)
    }
}

/// How far along a ray the residual variance stays at most `limit`, to a thousandth.
fn crossing(surface: &mut dyn Surface, centre: Vec3, direction: Vec3, limit: f64, farthest: f64) -> f64 {
    // Above the limit, and how steeply that rises; what cannot be evaluated is above.
    let mut excess = |length: f64| match surface.evaluate(centre + direction * length) {
        Some(there) => (there.residual_variance - limit, there.gradient.dot(direction)),
        None => (f64::INFINITY, 0.0),
    };
    const FIRST: f64 = 0.02;
    let (mut low, mut high) = (0.0, FIRST.min(farthest));
    let mut at_high = excess(high);
    while at_high.0 <= 0.0 {
        if high >= farthest {
            return farthest;
        }
        low = high;
        high = (2.0 * high).min(farthest);
        at_high = excess(high);
    }
    // Newton's method kept between the bounds.
    let mut length = high - at_high.0 / at_high.1;
    for _ in 0..60 {
        if high - low <= 1e-3 * high {
            break;
        }
        if !(length > low && length < high) {
            length = 0.5 * (low + high);
        }
        let (over, slope) = excess(length);
        if over > 0.0 {
            high = length
        } else {
            low = length
        }
        let next = length - over / slope;
        if (next - length).abs() <= 2e-4 * length {
            return next;
        }
        length = next;
    }
    low
}
