use super::objective::{Evaluation, Objective};
use super::{Fit, Stopped};
use crate::math::{Symmetric3, Vec3};

/// Most steps of one refinement; four to ten are usual.
const MOST_STEPS: usize = 100;

/// Decreases of residual variance below this are rounding; there the gradient tells whether a step was good.
const ROUNDING: f64 = 1e-13;

/// Newton steps within a trust region (Conn, Gould & Toint, Trust-Region Methods, 2000, §7.3), inside the ball of radius
/// `reach`. On its surface, while the residual falls outwards, steps stay on the surface: with unit normal n the tangent
/// Hessian is that of the plane plus the multiplier −g·n over the radius. The surface is left as soon as the residual
/// falls inwards.
///
/// The search gives up, with `None`, where it comes upon a minimum that is known already.
pub(super) fn refine(objective: &mut Objective, start: Vec3, reach: f64, step: f64, known: &[Fit]) -> Option<Fit> {
    let mut position = within(start, reach);
    let mut here = objective.evaluate(position);
    let mut trust = step;
    let mut stopped = Stopped::IterationLimit;
    for _ in 0..MOST_STEPS {
        let (gradient, hessian) = reduced(position, &here, reach);
        let newton = trust_region_step(&hessian, gradient, trust);
        let target = within(position + newton, reach);
        let moved = target - position;
        let predicted = -(gradient.dot(moved) + 0.5 * moved.dot(hessian.apply(moved)));
        if moved.norm() <= 1e-10 * reach {
            stopped = Stopped::Converged;
            break;
        }
        let there = objective.evaluate(target);
        let gained = here.residual_variance - there.residual_variance;
        let better = if predicted.abs() > ROUNDING {
            gained > 0.0
        } else {
            reduced(target, &there, reach).0.norm() < gradient.norm() && gained > -ROUNDING
        };
        if !better || gained < 0.25 * predicted {
            trust = 0.25 * moved.norm();
        } else if gained > 0.75 * predicted && moved.norm() > 0.8 * trust {
            trust = (2.0 * trust).min(reach);
        }
        if better {
            (position, here) = (target, there);
            if known.iter().any(|minimum| leads_to(minimum, position, &here, step)) {
                return None;
            }
        } else if predicted.abs() <= ROUNDING {
            stopped = Stopped::Converged;
            break;
        }
    }
    if stopped == Stopped::Converged && pressed(position, &here, reach) {
        stopped = Stopped::Boundary;
    }
    Some(Fit { position, moment: here.moment, residual_variance: here.residual_variance, stopped, evaluations: 0 })
}

/// Whether a position is so near a known minimum, and no better, that the search can only end there.
fn leads_to(minimum: &Fit, position: Vec3, here: &Evaluation, step: f64) -> bool {
    /// In grid steps: about half a millimetre.
    const NEAR: f64 = 0.04;
    (position - minimum.position).norm() <= NEAR * step && here.residual_variance >= minimum.residual_variance
}

/// The nearest position inside the ball.
fn within(position: Vec3, reach: f64) -> Vec3 {
    let distance = position.norm();
    if distance > reach { position * (reach / distance) } else { position }
}

/// Whether the position lies on the surface and the residual falls outwards.
fn pressed(position: Vec3, here: &Evaluation, reach: f64) -> bool {
    position.norm() >= reach * (1.0 - 1e-12) && here.gradient.dot(position) < 0.0
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

/// The step that minimises g·δ + δᵀHδ / 2 within |δ| ≤ radius, from the eigenvalues of H (ibid.).
fn trust_region_step(hessian: &Symmetric3, gradient: Vec3, radius: f64) -> Vec3 {
    let eigen = hessian.eigen();
    let slopes = eigen.vectors.map(|v| v.dot(gradient));
    let step = |shift: f64| {
        (0..3).fold(Vec3::ZERO, |sum, i| {
            let curvature = eigen.values[i] + shift;
            if slopes[i] == 0.0 { sum } else { sum - eigen.vectors[i] * (slopes[i] / curvature) }
        })
    };
    if eigen.values[0] > 0.0 {
        let newton = step(0.0);
        if newton.norm() <= radius {
            return newton;
        }
    }
    let mut low = (-eigen.values[0]).max(0.0);
    let mut high = low + gradient.norm() / radius + f64::MIN_POSITIVE;
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if step(middle).norm() > radius { low = middle } else { high = middle }
    }
    let inner = step(high);
    // Hard case: no slope along the direction of most negative curvature; go along it to the edge.
    let room = radius * radius - inner.dot(inner);
    if eigen.values[0] < 0.0 && room > 1e-6 * radius * radius {
        return inner + eigen.vectors[0] * room.sqrt();
    }
    inner
}
