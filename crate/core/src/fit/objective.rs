use crate::forward::{LeadField, Local};
use crate::math::{Symmetric3, Vec3, centre, dot};

/// Residual variance of one map as a function of the dipole's position.
pub(super) struct Objective<'a> {
    field: &'a LeadField,
    /// Average-referenced, unit length.
    map: Vec<f64>,
    evaluations: usize,
}

/// Residual variance at a position with its exact derivatives.
#[derive(Clone, Copy, Debug)]
pub(super) struct Evaluation {
    pub residual_variance: f64,
    /// Best moment, for a map of unit length and a lead field on the unit sphere.
    pub moment: Vec3,
    pub gradient: Vec3,
    pub hessian: Symmetric3,
}

impl<'a> Objective<'a> {
    pub(super) fn new(field: &'a LeadField, map: Vec<f64>) -> Self {
        Self { field, map, evaluations: 0 }
    }

    pub(super) fn evaluations(&self) -> usize {
        self.evaluations
    }

    /// With A the average-referenced lead field, m = A⁺d, r = d − A m, Aⱼ = ∂A/∂pⱼ, vⱼ = Aⱼ m, wⱼ = Aⱼᵀ r and
    /// tⱼ = Aᵀ vⱼ − wⱼ, the residual F = |r|² / 2 has
    /// ∂F/∂pⱼ = −r·vⱼ and ∂²F/∂pⱼ∂pₖ = vⱼ·vₖ − tⱼᵀ (AᵀA)⁻¹ tₖ − r·(∂²A/∂pⱼ∂pₖ m).
    pub(super) fn evaluate(&mut self, position: Vec3) -> Evaluation {
        self.evaluations += 1;
        let local = self.field.local(position);
        let columns = self.columns(&local);
        let normal = Symmetric3::from_fn(|i, j| dot(&columns[i], &columns[j]));
        let right = Vec3([0, 1, 2].map(|i| dot(&columns[i], &self.map)));
        let Some(moment) = normal.solve(right) else {
            // No three independent maps from here: nothing is explained, nothing pulls.
            return Evaluation {
                residual_variance: 1.0,
                moment: Vec3::ZERO,
                gradient: Vec3::ZERO,
                hessian: Symmetric3::default(),
            };
        };
        let residual: Vec<f64> = (0..self.map.len())
            .map(|i| self.map[i] - (columns[0][i] * moment[0] + columns[1][i] * moment[1] + columns[2][i] * moment[2]))
            .collect();

        let Slopes { v, w, third } = self.slopes(&local, moment, &residual);
        let t: [Vec3; 3] = [0, 1, 2].map(|j| Vec3([0, 1, 2].map(|k| dot(&columns[k], &v[j]) - w.at(j, k))));
        let solved = t.map(|t| normal.solve(t).unwrap_or_default());
        Evaluation {
            residual_variance: dot(&residual, &residual),
            moment,
            gradient: w.apply(moment) * -2.0,
            hessian: Symmetric3::from_fn(|j, k| 2.0 * (dot(&v[j], &v[k]) - t[j].dot(solved[k]) - third.at(j, k))),
        }
    }

    /// The average-referenced lead field by columns.
    fn columns(&self, local: &Local) -> [Vec<f64>; 3] {
        let p = local.position;
        let mut columns = [0, 1, 2].map(|_| Vec::with_capacity(self.map.len()));
        for (index, e) in self.field.directions().iter().enumerate() {
            let t = local.terms(index, *e);
            for (axis, column) in columns.iter_mut().enumerate() {
                column.push(t.s * e[axis] + 2.0 * t.u * p[axis]);
            }
        }
        for column in &mut columns {
            centre(column);
        }
        columns
    }

    fn slopes(&self, local: &Local, m: Vec3, residual: &[f64]) -> Slopes {
        let p = local.position;
        let pm = p.dot(m);
        let mut v = [0, 1, 2].map(|_| Vec::with_capacity(residual.len()));
        // Sums over the electrodes of what stands before e eᵀ, e, and nothing, in Σ r ∂A/∂p and Σ r ∂²A/∂p² m.
        let (mut w_ee, mut w_e, mut w_pp, mut w_one) = ([0.0; 6], Vec3::ZERO, 0.0, 0.0);
        let (mut t_ee, mut t_e, mut t_pp, mut t_one) = ([0.0; 6], Vec3::ZERO, 0.0, 0.0);
        for (index, (&e, &r)) in self.field.directions().iter().zip(residual).enumerate() {
            let t = local.terms(index, e);
            let em = e.dot(m);
            let along_e = t.ss * em + 2.0 * t.us * pm;
            let along_p = 2.0 * t.us * em + 4.0 * t.uu * pm;
            for (axis, column) in v.iter_mut().enumerate() {
                column.push(along_e * e[axis] + along_p * p[axis] + 2.0 * t.u * m[axis]);
            }
            let outer = [e[0] * e[0], e[0] * e[1], e[0] * e[2], e[1] * e[1], e[1] * e[2], e[2] * e[2]];
            let (ee, third_ee) = (r * t.ss, r * (t.sss * em + 2.0 * t.uss * pm));
            for k in 0..6 {
                w_ee[k] += ee * outer[k];
                t_ee[k] += third_ee * outer[k];
            }
            w_e += e * (r * 2.0 * t.us);
            w_pp += r * 4.0 * t.uu;
            w_one += r * 2.0 * t.u;
            t_e += e * (r * (2.0 * t.uss * em + 4.0 * t.uus * pm));
            t_pp += r * (4.0 * t.uus * em + 8.0 * t.uuu * pm);
            t_one += r * along_p;
        }
        for column in &mut v {
            centre(column);
        }
        let packed = |k: &[f64; 6], i: usize, j: usize| k[[[0, 1, 2], [1, 3, 4], [2, 4, 5]][i][j]];
        let unit = |i: usize, j: usize| if i == j { 1.0 } else { 0.0 };
        let both = |a: Vec3, b: Vec3, i: usize, j: usize| a[i] * b[j] + a[j] * b[i];
        Slopes {
            v,
            w: Symmetric3::from_fn(|i, j| {
                packed(&w_ee, i, j) + both(w_e, p, i, j) + w_pp * p[i] * p[j] + w_one * unit(i, j)
            }),
            third: Symmetric3::from_fn(|i, j| {
                packed(&t_ee, i, j)
                    + both(t_e, p, i, j)
                    + t_pp * p[i] * p[j]
                    + both(w_e, m, i, j)
                    + w_pp * both(p, m, i, j)
                    + t_one * unit(i, j)
            }),
        }
    }
}

/// vⱼ = Aⱼ m by columns; W with rows wⱼ = Aⱼᵀ r; and r·(∂²A/∂pⱼ∂pₖ m).
struct Slopes {
    v: [Vec<f64>; 3],
    w: Symmetric3,
    third: Symmetric3,
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::head::Shells;

    #[test]
    fn derivatives_agree_with_differences() {
        let directions: Vec<Vec3> = (0..33)
            .map(|i| {
                let (z, angle) = (1.0 - 1.4 * (f64::from(i) + 0.5) / 33.0, 2.399 * f64::from(i));
                let r = (1.0 - z * z).sqrt();
                Vec3::new(r * libm::cos(angle), r * libm::sin(angle), z)
            })
            .collect();
        let mut map: Vec<f64> = (0..33).map(|i| libm::sin(f64::from(i * i))).collect();
        centre(&mut map);
        let length = dot(&map, &map).sqrt();
        map.iter_mut().for_each(|v| *v /= length);
        let field = LeadField::new(&Shells::standard(), 88.0, directions);
        let mut objective = Objective::new(&field, map);
        for p in [Vec3::ZERO, Vec3::new(0.2, -0.4, 0.3), Vec3::new(-0.5, 0.1, 0.65)] {
            let here = objective.evaluate(p);
            let h = 1e-5;
            for j in 0..3 {
                let mut step = [0.0; 3];
                step[j] = h;
                let (up, down) = (objective.evaluate(p + Vec3(step)), objective.evaluate(p - Vec3(step)));
                let slope = (up.residual_variance - down.residual_variance) / (2.0 * h);
                assert!((slope - here.gradient[j]).abs() < 1e-8, "{p:?} {j}: {slope} {}", here.gradient[j]);
                for k in 0..3 {
                    let bend = (up.gradient[k] - down.gradient[k]) / (2.0 * h);
                    let size = 1.0 + bend.abs();
                    assert!((bend - here.hessian.at(j, k)).abs() < 1e-7 * size, "{p:?} {j}{k}: {bend}");
                }
            }
        }
    }
}
