use crate::forward::{LeadField, Local, along};
use crate::math::lanes::{Lanes, blocks, dot, sum};
use crate::math::{Symmetric3, Vec3};

/// Residual variance of one map as a function of the dipole's position.
pub(super) struct Objective<'a> {
    field: &'a LeadField,
    /// Average-referenced, unit length.
    map: Vec<Lanes>,
    /// 1 for each electrode, 0 where the last block is filled up.
    present: Vec<Lanes>,
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
    /// Of an average-referenced map of unit length.
    pub(super) fn new(field: &'a LeadField, map: &[f64]) -> Self {
        Self { field, map: blocks(map), present: blocks(&vec![1.0; map.len()]), evaluations: 0 }
    }

    pub(super) fn evaluations(&self) -> usize {
        self.evaluations
    }

    /// With A the average-referenced lead field, m = A⁺d, r = d − A m, Aⱼ = ∂A/∂pⱼ, vⱼ = Aⱼ m, wⱼ = Aⱼᵀ r and
    /// tⱼ = Aᵀ vⱼ − wⱼ, the residual F = |r|² / 2 has
    /// ∂F/∂pⱼ = −r·vⱼ and ∂²F/∂pⱼ∂pₖ = vⱼ·vₖ − tⱼᵀ (AᵀA)⁻¹ tₖ − r·(∂²A/∂pⱼ∂pₖ m).
    ///
    /// `None` where the three columns of A depend on each other.
    pub(super) fn evaluate(&mut self, position: Vec3) -> Option<Evaluation> {
        self.evaluations += 1;
        let local = self.field.local(position);
        let columns = self.centred(local.leads());
        let normal = Symmetric3::from_fn(|i, j| dot(&columns[i], &columns[j]));
        let right = Vec3([0, 1, 2].map(|i| dot(&columns[i], &self.map)));
        let moment = normal.solve(right)?;
        let [x, y, z] = &columns;
        let residual: Vec<Lanes> = (0..self.map.len())
            .map(|i| self.map[i] - (x[i] * moment[0] + y[i] * moment[1] + z[i] * moment[2]))
            .collect();

        let Slopes { v, w, third } = self.slopes(&local, moment, &residual);
        let t: [Vec3; 3] = [0, 1, 2].map(|j| Vec3([0, 1, 2].map(|k| dot(&columns[k], &v[j]) - w.at(j, k))));
        let solved = t.map(|t| normal.solve(t).unwrap_or_default());
        Some(Evaluation {
            residual_variance: dot(&residual, &residual),
            moment,
            gradient: w.apply(moment) * -2.0,
            hessian: Symmetric3::from_fn(|j, k| 2.0 * (dot(&v[j], &v[k]) - t[j].dot(solved[k]) - third.at(j, k))),
        })
    }

    /// Three columns, each less its mean.
    fn centred(&self, blocks: impl Iterator<Item = [Lanes; 3]>) -> [Vec<Lanes>; 3] {
        let mut columns = [0, 1, 2].map(|_| Vec::with_capacity(self.map.len()));
        for (block, present) in blocks.zip(&self.present) {
            for (column, values) in columns.iter_mut().zip(block) {
                column.push(values * *present);
            }
        }
        for column in &mut columns {
            let mean = dot(column, &self.present) / self.field.count() as f64;
            column.iter_mut().zip(&self.present).for_each(|(values, present)| *values -= *present * mean);
        }
        columns
    }

    fn slopes(&self, local: &Local, m: Vec3, residual: &[Lanes]) -> Slopes {
        let p = local.position;
        let pm = p.dot(m);
        // Sums over the electrodes of what stands before e eᵀ, e, and nothing, in Σ r ∂A/∂p and Σ r ∂²A/∂p² m.
        let (mut w, mut third) = (Sums::default(), Sums::default());
        let v = self.centred(local.terms().zip(residual).map(|((e, t), &r)| {
            let em = along(e, m);
            let along_e = t.ss * em + t.us * (2.0 * pm);
            let along_p = t.us * em * 2.0 + t.uu * (4.0 * pm);
            w.add(e, r * t.ss, r * t.us * 2.0, r * t.uu * 4.0, r * t.u * 2.0);
            third.add(
                e,
                r * (t.sss * em + t.uss * (2.0 * pm)),
                r * (t.uss * em * 2.0 + t.uus * (4.0 * pm)),
                r * (t.uus * em * 4.0 + t.uuu * (8.0 * pm)),
                r * along_p,
            );
            [0, 1, 2].map(|axis| along_e * e[axis] + along_p * p[axis] + t.u * (2.0 * m[axis]))
        }));
        let first = w.matrix(p);
        let (w_e, w_pp) = (w.e(), sum(w.pp));
        let both = |a: Vec3, b: Vec3, i: usize, j: usize| a[i] * b[j] + a[j] * b[i];
        let bare = third.matrix(p);
        Slopes {
            v,
            w: first,
            third: Symmetric3::from_fn(|i, j| bare.at(i, j) + both(w_e, m, i, j) + w_pp * both(p, m, i, j)),
        }
    }
}

/// vⱼ = Aⱼ m by columns; W with rows wⱼ = Aⱼᵀ r; and r·(∂²A/∂pⱼ∂pₖ m).
struct Slopes {
    v: [Vec<Lanes>; 3],
    w: Symmetric3,
    third: Symmetric3,
}

/// The coefficients of Σ [α e eᵀ + β (e pᵀ + p eᵀ) + γ p pᵀ + δ 1], lane by lane.
#[derive(Default)]
struct Sums {
    ee: [Lanes; 6],
    e: [Lanes; 3],
    pp: Lanes,
    one: Lanes,
}

impl Sums {
    #[inline]
    fn add(&mut self, e: &[Lanes; 3], ee: Lanes, ep: Lanes, pp: Lanes, one: Lanes) {
        let scaled = e.map(|component| ee * component);
        for (k, (i, j)) in [(0, 0), (0, 1), (0, 2), (1, 1), (1, 2), (2, 2)].into_iter().enumerate() {
            self.ee[k] += scaled[i] * e[j];
        }
        for axis in 0..3 {
            self.e[axis] += ep * e[axis];
        }
        self.pp += pp;
        self.one += one;
    }

    fn e(&self) -> Vec3 {
        Vec3(self.e.map(sum))
    }

    fn matrix(&self, p: Vec3) -> Symmetric3 {
        let (e, pp, one) = (self.e(), sum(self.pp), sum(self.one));
        Symmetric3::from_fn(|i, j| {
            let ee = sum(self.ee[[[0, 1, 2], [1, 3, 4], [2, 4, 5]][i][j]]);
            ee + e[i] * p[j] + e[j] * p[i] + pp * p[i] * p[j] + if i == j { one } else { 0.0 }
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::math::{centre, dot};
    use crate::shells::Shells;

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
        let mut objective = Objective::new(&field, &map);
        for p in [Vec3::ZERO, Vec3::new(0.2, -0.4, 0.3), Vec3::new(-0.5, 0.1, 0.65)] {
            let here = objective.evaluate(p).unwrap();
            let h = 1e-5;
            for j in 0..3 {
                let mut step = [0.0; 3];
                step[j] = h;
                let (up, down) =
                    (objective.evaluate(p + Vec3(step)).unwrap(), objective.evaluate(p - Vec3(step)).unwrap());
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
