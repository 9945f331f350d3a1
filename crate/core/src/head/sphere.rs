use crate::math::{Symmetric3, Vec3, least_squares, mean};

/// A sphere: the scalp of the head model.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sphere {
    /// Centre, in the frame and unit of the points.
    pub centre: Vec3,
    /// Radius, in the unit of the points.
    pub radius: f64,
}

/// A sphere with the deviations of the points from it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SphereFit {
    /// The sphere.
    pub sphere: Sphere,
    /// Root of the mean squared radial deviation.
    pub rms: f64,
    /// Largest absolute radial deviation.
    pub max: f64,
}

impl Sphere {
    /// The sphere that minimises Σ(|pᵢ − c| − R)², found from the algebraic solution, with R eliminated as the mean
    /// distance (geometric fit; Gander, Golub & Strebel 1994, BIT 34:558–578).
    ///
    /// `None` for fewer than four points, points in one plane, or where no minimum is found.
    pub fn fit(points: &[Vec3]) -> Option<SphereFit> {
        let spread = spread(points);
        if points.len() < 4 || spread.values[0] <= 1e-9 * spread.values[2] {
            return None;
        }
        let middle = centroid(points);
        let scale = spread.values[2].sqrt();
        let local: Vec<Vec3> = points.iter().map(|&p| (p - middle) * (1.0 / scale)).collect();

        // |p|² = 2 c·p + (R² − |c|²) is linear in c and the bracket.
        let column = |axis: usize| local.iter().map(|p| 2.0 * p[axis]).collect::<Vec<_>>();
        let start = least_squares(
            vec![column(0), column(1), column(2), vec![1.0; local.len()]],
            local.iter().map(|p| p.dot(*p)).collect(),
        );
        let centre = descend(&local, Vec3::new(start[0], start[1], start[2]))?;
        let centre = middle + centre * scale;
        let radius = mean(&points.iter().map(|&p| (p - centre).norm()).collect::<Vec<_>>());
        Some(Self { centre, radius }.deviations(points))
    }

    /// Whether it is about the origin with radius 1, to 5 %: directions rather than positions.
    pub fn is_unit(&self) -> bool {
        (self.radius - 1.0).abs() <= 0.05 && self.centre.norm() <= 0.05
    }

    /// This sphere with the deviations of the points from it.
    pub fn deviations(self, points: &[Vec3]) -> SphereFit {
        let deviations: Vec<f64> = points.iter().map(|&p| (p - self.centre).norm() - self.radius).collect();
        let squares: Vec<f64> = deviations.iter().map(|d| d * d).collect();
        SphereFit {
            sphere: self,
            rms: mean(&squares).sqrt(),
            max: deviations.iter().fold(0.0, |max: f64, d| max.max(d.abs())),
        }
    }
}

/// Gauss–Newton steps, damped while they do not lower the cost (Levenberg 1944, Q Appl Math 2:164–168); `None` unless they
/// come to rest.
fn descend(points: &[Vec3], start: Vec3) -> Option<Vec3> {
    let cost = |centre: Vec3| {
        let distances: Vec<f64> = points.iter().map(|&p| (p - centre).norm()).collect();
        let radius = mean(&distances);
        distances.iter().map(|d| (d - radius) * (d - radius)).sum::<f64>()
    };
    let mut centre = start;
    let mut damping = 0.0;
    for _ in 0..200 {
        let arms: Vec<Vec3> = points.iter().map(|&p| p - centre).collect();
        let distances: Vec<f64> = arms.iter().map(|a| a.norm()).collect();
        let radius = mean(&distances);
        let units: Vec<Vec3> = arms.iter().map(|a| a.unit().unwrap_or_default()).collect();
        let mean_unit = centroid(&units);
        let slopes: Vec<Vec3> = units.iter().map(|&u| u - mean_unit).collect();
        let unit = |i: usize, j: usize| if i == j { damping } else { 0.0 };
        let normal = Symmetric3::from_fn(|i, j| slopes.iter().map(|s| s[i] * s[j]).sum::<f64>() + unit(i, j));
        let right = slopes.iter().zip(&distances).fold(Vec3::ZERO, |sum, (&s, d)| sum + s * (d - radius));
        let step = normal.factor()?.solve(right);
        if step.norm() <= 1e-13 * (1.0 + centre.norm()) {
            // At rest only if it is not the damping that holds it.
            return (right.norm() <= 1e-9 * points.len() as f64).then_some(centre);
        }
        if cost(centre + step) <= cost(centre) {
            centre += step;
            damping *= 0.1;
        } else {
            damping = (10.0 * damping).max(1e-3 * points.len() as f64);
        }
    }
    None
}

/// Mean of points.
fn centroid(points: &[Vec3]) -> Vec3 {
    let sum = points.iter().fold(Vec3::ZERO, |sum, &p| sum + p);
    sum * (1.0 / points.len().max(1) as f64)
}

/// Eigenvalues of the scatter of points about their mean: one zero means a plane, two a line.
pub(crate) fn spread(points: &[Vec3]) -> crate::math::Eigen {
    let middle = centroid(points);
    Symmetric3::from_fn(|i, j| points.iter().map(|&p| (p - middle)[i] * (p - middle)[j]).sum()).eigen()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn finds_the_sphere_of_a_cap_and_refuses_a_plane() {
        let cap: Vec<Vec3> = (0..40)
            .map(|i| {
                let (z, angle) = (0.2 + 0.8 * f64::from(i) / 40.0, 2.4 * f64::from(i));
                let r = (1.0 - z * z).sqrt();
                Vec3::new(3.0 + 90.0 * r * libm::cos(angle), -7.0 + 90.0 * r * libm::sin(angle), 40.0 + 90.0 * z)
            })
            .collect();
        let fit = Sphere::fit(&cap).unwrap();
        assert!((fit.sphere.centre - Vec3::new(3.0, -7.0, 40.0)).norm() < 1e-9);
        assert!((fit.sphere.radius - 90.0).abs() < 1e-9 && fit.max < 1e-9);
        let plane: Vec<Vec3> = cap.iter().map(|p| Vec3::new(p[0], p[1], 1.0)).collect();
        assert!(Sphere::fit(&plane).is_none());
    }
}
