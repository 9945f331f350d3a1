use super::objective::{Evaluation, Surface};
use super::{Fit, Stopped};
use crate::math::{Symmetric3, Vec3};

/// Most steps of one refinement; two to ten are usual.
const MOST_STEPS: usize = 100;

/// Largest gradient of residual variance, per scalp radius, at a minimum; fits end four orders below.
const STATIONARY: f64 = 1e-6;

/// How far digits reach.
#[derive(Clone, Copy, Debug)]
pub(super) struct Precision {
    /// Decreases of residual variance below this are rounding; there the gradient tells whether a step was good.
    pub rounding: f64,
    /// Steps below this, in reaches, end the search.
    pub step: f64,
    /// Minima that lie at most this much above the best one are wanted too.
    pub slack: f64,
}

/// Of what is answered.
pub(super) const DOUBLE: Precision = Precision { rounding: 1e-13, step: 1e-10, slack: 1e-9 };

/// Of searches for starts.
pub(super) const SINGLE: Precision = Precision { rounding: 3e-7, step: 1e-3, slack: 1e-4 };

/// The ball of allowed positions, and the distance of the starts in it.
#[derive(Clone, Copy, Debug)]
pub(super) struct Region {
    pub reach: f64,
    pub step: f64,
}

/// Newton steps within a trust region (Conn, Gould & Toint, Trust-Region Methods, 2000, §7.3), inside the ball of radius
/// `reach`. On its surface, while the residual falls outwards, steps stay on the surface: with unit normal n the tangent
/// Hessian is that of the plane plus the multiplier −g·n over the radius. The surface is left as soon as the residual
/// falls inwards.
///
/// The search gives up, with `None`, where it comes upon a minimum that is known already or cannot reach a better one than
/// those, or if no dipole at the start has a map of its own.
pub(super) fn refine(
    surface: &mut dyn Surface,
    start: Vec3,
    region: Region,
    precision: Precision,
    known: &[Fit],
) -> Option<Fit> {
    let reach = region.reach;
    let mut position = within(start, reach);
    let mut here = surface.evaluate(position)?;
    let mut trust = region.step;
    let mut converged = false;
    for _ in 0..MOST_STEPS {
        let (gradient, hessian) = reduced(position, &here, reach);
        let target = within(position + trust_region_step(&hessian, gradient, trust), reach);
        let moved = target - position;
        let predicted = -(gradient.dot(moved) + 0.5 * moved.dot(hessian.apply(moved)));
        if moved.norm() <= precision.step * reach {
            converged = true;
            break;
        }
        let expected = here.residual_variance - predicted;
        if here.residual_variance - HOPE * predicted > least(known) + precision.slack {
            return None;
        }
        if known.iter().any(|minimum| is_basin_of(minimum, position, target, expected, predicted)) {
            return None;
        }
        let there = surface.evaluate(target);
        let gained = there.map_or(f64::NEG_INFINITY, |there| here.residual_variance - there.residual_variance);
        let rounding = predicted.abs() <= precision.rounding;
        let better = there.filter(|there| match rounding {
            false => gained > 0.0,
            true => gained > -precision.rounding && reduced(target, there, reach).0.norm() < gradient.norm(),
        });
        if better.is_none() || gained < 0.25 * predicted {
            trust = 0.25 * moved.norm();
        } else if gained > 0.75 * predicted && moved.norm() > 0.8 * trust {
            trust = (2.0 * trust).min(reach);
        }
        if let Some(there) = better {
            (position, here) = (target, there);
            if known.iter().any(|minimum| leads_to(minimum, position, &here, region.step)) {
                return None;
            }
        } else if rounding {
            converged = true;
            break;
        }
    }
    let at_boundary = pressed(position, &here, reach);
    let stopped = match converged && reduced(position, &here, reach).0.norm() <= STATIONARY {
        false => Stopped::IterationLimit,
        true if at_boundary => Stopped::Boundary,
        true => Stopped::Converged,
    };
    let Evaluation { residual_variance, moment, .. } = here;
    Some(Fit { position, moment, residual_variance, at_boundary, stopped, evaluations: 0 })
}

/// Whether a position is so near a known minimum, and no better, that the search can only end there.
fn leads_to(minimum: &Fit, position: Vec3, here: &Evaluation, step: f64) -> bool {
    /// In grid steps: about half a millimetre.
    const NEAR: f64 = 0.04;
    (position - minimum.position).norm() <= NEAR * step && here.residual_variance >= minimum.residual_variance
}

/// A search is hopeless if so many times the decrease that its next step promises does not bring it down to the best known
/// minimum. With 1.5 none of 13,500 mixed maps was missed, with 1 (and the other limits widened) three.
const HOPE: f64 = 3.0;

/// The least residual variance of these minima.
pub(super) fn least(minima: &[Fit]) -> f64 {
    minima.iter().fold(f64::INFINITY, |least, minimum| least.min(minimum.residual_variance))
}

/// Whether the next step goes to a known minimum, as far as its aim and the expected residual tell.
fn is_basin_of(minimum: &Fit, position: Vec3, target: Vec3, expected: f64, predicted: f64) -> bool {
    let (off, before) = ((target - minimum.position).norm(), (position - minimum.position).norm());
    off <= 0.3 * before && (expected - minimum.residual_variance).abs() <= 0.7 * predicted
}

/// The nearest position inside the ball.
fn within(position: Vec3, reach: f64) -> Vec3 {
    let distance = position.norm();
    if distance > reach { position * (reach / distance) } else { position }
}

/// Whether the position lies on the surface and the residual falls outwards.
fn pressed(position: Vec3, here: &Evaluation, reach: f64) -> bool {
    position.norm() >= reach * (1.0 - 1e-10) && here.gradient.dot(position) < 0.0
}

/// Gradient and Hessian, those along the surface where the surface holds the position.
fn reduced(position: Vec3, here: &Evaluation, reach: f64) -> (Vec3, Symmetric3) {
    if !pressed(position, here, reach) {
        return (here.gradient, here.hessian);
    }
    let n = position * (1.0 / position.norm());
    let outward = here.gradient.dot(n);
    let hn = here.hessian.apply(n);
    let nhn = n.dot(hn);
    let unit = |i: usize, j: usize| if i == j { 1.0 } else { 0.0 };
    // P H P − (g·n / reach) P, and 1 along n, where the gradient has no part left.
    let tangent = Symmetric3::from_fn(|i, j| {
        let plane = unit(i, j) - n[i] * n[j];
        here.hessian.at(i, j) - n[i] * hn[j] - hn[i] * n[j] + nhn * n[i] * n[j] - outward / reach * plane + n[i] * n[j]
    });
    (here.gradient - n * outward, tangent)
}

/// The step that minimises g·δ + δᵀHδ / 2 within |δ| ≤ radius.
fn trust_region_step(hessian: &Symmetric3, gradient: Vec3, radius: f64) -> Vec3 {
    let newton = hessian.factor().map(|factor| factor.solve(-gradient));
    newton.filter(|step| step.norm() <= radius).unwrap_or_else(|| step_to_edge(hessian, gradient, radius))
}

/// The same by the eigenvalues λ₀ ≤ λ₁ ≤ λ₂ of H (ibid.), where the edge may hold the step.
///
/// On the edge it solves (H + νI) δ = −g for the ν ≥ 0 above −λ₀ that gives |δ| = radius. What is searched is
/// t = ν + λ₀ > 0, so that no λᵢ + ν = (λᵢ − λ₀) + t is lost to rounding.
fn step_to_edge(hessian: &Symmetric3, gradient: Vec3, radius: f64) -> Vec3 {
    let eigen = hessian.eigen();
    let lowest = eigen.values[0];
    let size = gradient.norm();
    // Slopes at rounding level would turn the step by chance.
    let slopes = eigen.vectors.map(|v| v.dot(gradient)).map(|s| if s.abs() <= 1e-14 * size { 0.0 } else { s });
    let step = |t: f64| {
        (0..3)
            .filter(|&i| slopes[i] != 0.0)
            .fold(Vec3::ZERO, |sum, i| sum - eigen.vectors[i] * (slopes[i] / (eigen.values[i] - lowest + t)))
    };
    let least = lowest.max(0.0);
    if least > 0.0 || slopes.iter().zip(eigen.values).all(|(slope, value)| *slope == 0.0 || value > lowest) {
        let inner = step(least);
        let room = radius * radius - inner.dot(inner);
        if room >= 0.0 {
            // Hard case: no slope along the direction of most negative curvature; go along it to the edge.
            return if lowest < 0.0 { inner + eigen.vectors[0] * room.sqrt() } else { inner };
        }
    }
    // Newton's method for 1 / |δ| = 1 / radius, which is nearly linear in t, kept between two bounds.
    let (mut low, mut high) = (least, least + size / radius);
    let mut t = high;
    for _ in 0..100 {
        let parts: [f64; 3] = core::array::from_fn(|i| match slopes[i] {
            0.0 => 0.0,
            slope => slope / (eigen.values[i] - lowest + t),
        });
        let length2: f64 = parts.iter().map(|part| part * part).sum();
        let length = length2.sqrt();
        if length > radius {
            low = t
        } else {
            high = t
        }
        if (length - radius).abs() <= 1e-12 * radius {
            break;
        }
        // −½ d|δ|² / dt
        let falls: f64 =
            (0..3).filter(|&i| parts[i] != 0.0).map(|i| parts[i] * parts[i] / (eigen.values[i] - lowest + t)).sum();
        let next = t + (length / radius - 1.0) * length2 / falls;
        t = if next > low && next < high { next } else { 0.5 * (low + high) };
    }
    step(t)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn steps_are_finite_reach_the_edge_and_beat_their_neighbours() {
        let value = |h: &Symmetric3, g: Vec3, d: Vec3| g.dot(d) + 0.5 * d.dot(h.apply(d));
        let diagonal = |a: f64, b: f64, c: f64| Symmetric3::from_fn(|i, j| if i == j { [a, b, c][i] } else { 0.0 });
        let radius = 0.1;
        for (hessian, gradient) in [
            (diagonal(-1.0, 1.0, 1.0), Vec3::new(1e-20, 0.05, 0.0)),
            (diagonal(-1.0, 1.0, 1.0), Vec3::new(1e-12, 0.05, 0.0)),
            (diagonal(-1.0, -1.0, 1.0), Vec3::new(0.0, 0.0, 0.01)),
            (diagonal(-1.0, 2.0, 3.0), Vec3::new(0.3, 0.4, -0.2)),
            (diagonal(1e-3, 2.0, 3.0), Vec3::new(0.3, 0.4, -0.2)),
            (diagonal(-1.0, 1.0, 2.0), Vec3::ZERO),
        ] {
            let step = trust_region_step(&hessian, gradient, radius);
            assert!(step.is_finite() && (step.norm() - radius).abs() < 1e-9, "{step:?}");
            for k in 0..500 {
                let (z, angle) = (1.0 - (f64::from(k) + 0.5) / 250.0, 2.4 * f64::from(k));
                let ring = (1.0 - z * z).sqrt();
                let other = Vec3::new(ring * libm::cos(angle), ring * libm::sin(angle), z) * radius;
                assert!(value(&hessian, gradient, step) <= value(&hessian, gradient, other) + 1e-15);
            }
        }
        let newton = trust_region_step(&diagonal(2.0, 4.0, 8.0), Vec3::new(0.02, 0.0, -0.08), radius);
        assert!((newton - Vec3::new(-0.01, 0.0, 0.01)).norm() < 1e-16);
    }
}
