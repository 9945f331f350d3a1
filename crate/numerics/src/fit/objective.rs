use crate::forward::{Field, Potential, along};
use crate::math::lanes::{blocks, splat3, sum3};
use crate::math::{Lanes, Symmetric3, Vec3};

/// Residual variance of one map as a function of the dipole's position, in registers of one precision.
pub(super) struct Objective<'a, L> {
    field: &'a Field<L>,
    /// Average-referenced, unit length.
    map: Vec<L>,
    /// At the position evaluated last.
    potentials: Vec<Potential<L>>,
    residual: Vec<L>,
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

/// What a search descends on.
pub(super) trait Surface {
    /// `None` where the three columns of the lead field depend on each other.
    fn evaluate(&mut self, position: Vec3) -> Option<Evaluation>;
}

impl<L: Lanes> Surface for Objective<'_, L> {
    /// With A the average-referenced lead field, m = A⁺d, r = d − A m, Aⱼ = ∂A/∂pⱼ, vⱼ = Aⱼ m, wⱼ = Aⱼᵀ r and
    /// tⱼ = Aᵀ vⱼ − wⱼ, the residual F = |r|² / 2 has
    /// ∂F/∂pⱼ = −r·vⱼ and ∂²F/∂pⱼ∂pₖ = vⱼ·vₖ − tⱼᵀ (AᵀA)⁻¹ tₖ − r·(∂²A/∂pⱼ∂pₖ m).
    ///
    /// Means are taken out of sums, not of columns: Σ (a − ā)(b − b̄) = Σ a b − N ā b̄.
    fn evaluate(&mut self, position: Vec3) -> Option<Evaluation> {
        self.evaluations += 1;
        self.field.potentials::<true>(position, &mut self.potentials);
        let Normal { mean, matrix, right } = self.normal(position);
        let normal = matrix.factor()?;
        let moment = normal.solve(right);
        let at = Place::new(position, moment);
        let residual_variance = self.leave(&at, mean.dot(moment));
        let w = self.first(&at);
        let third = self.second(&at, &w);
        let (vv, av) = self.slopes(&at, mean);
        let (mut t, mut solved) = ([Vec3::ZERO; 3], [Vec3::ZERO; 3]);
        for j in 0..3 {
            t[j] = Vec3::new(av[0][j], av[1][j], av[2][j])
                - Vec3::new(w.matrix.at(j, 0), w.matrix.at(j, 1), w.matrix.at(j, 2));
            solved[j] = normal.solve(t[j]);
        }
        Some(Evaluation {
            residual_variance,
            moment,
            gradient: w.matrix.apply(moment) * -2.0,
            hessian: Symmetric3::from_fn(|j, k| 2.0 * (vv.at(j, k) - t[j].dot(solved[k]) - third.at(j, k))),
        })
    }
}

/// The normal equations: the mean of the lead field before it was referred to it, AᵀA and Aᵀd.
struct Normal {
    mean: Vec3,
    matrix: Symmetric3,
    right: Vec3,
}

/// A position with a moment, for all lanes.
struct Place<L> {
    position: Vec3,
    moment: Vec3,
    p: [L; 3],
    m: [L; 3],
    /// 2 p·m and 4 p·p.
    pm2: L,
    u4: L,
}

impl<L: Lanes> Place<L> {
    fn new(position: Vec3, moment: Vec3) -> Self {
        Self {
            position,
            moment,
            p: splat3(position),
            m: splat3(moment),
            pm2: L::splat(2.0 * position.dot(moment)),
            u4: L::splat(4.0 * position.dot(position)),
        }
    }
}

impl<'a, L: Lanes> Objective<'a, L> {
    /// Of an average-referenced map of unit length.
    pub(super) fn new(field: &'a Field<L>, map: &[f64]) -> Self {
        let map = blocks(map);
        Self { field, potentials: Vec::with_capacity(map.len()), residual: map.clone(), map, evaluations: 0 }
    }

    pub(super) fn evaluations(&self) -> usize {
        self.evaluations
    }

    /// Residual variance at a position and the best moment there, without derivatives.
    pub(super) fn value(&mut self, position: Vec3) -> Option<(f64, Vec3)> {
        self.field.potentials::<false>(position, &mut self.potentials);
        let Normal { mean, matrix, right } = self.normal(position);
        let moment = matrix.factor()?.solve(right);
        Some((self.leave(&Place::new(position, moment), mean.dot(moment)), moment))
    }

    #[inline(never)]
    fn normal(&self, position: Vec3) -> Normal {
        let p2 = splat3(position * 2.0);
        let (mut sum, mut squares, mut right) = ([L::default(); 3], [L::default(); 6], [L::default(); 3]);
        for ((e, t), &d) in self.field.blocks().iter().zip(&self.potentials).zip(&self.map) {
            let a = lead(e, t, &p2);
            for i in 0..3 {
                sum[i] += a[i];
                right[i] += a[i] * d;
            }
            add_squares(&mut squares, &a, &a);
        }
        let count = self.field.count() as f64;
        let mean = sum3(&sum) * (1.0 / count);
        Normal { mean, matrix: less_means(&squares, mean, count), right: sum3(&right) }
    }

    /// What the dipole leaves over, and the sum of its squares.
    #[inline(never)]
    fn leave(&mut self, at: &Place<L>, mean: f64) -> f64 {
        let mean = L::splat(mean);
        let mut squares = L::default();
        let blocks = self.field.blocks().iter().zip(&self.potentials);
        let end = self.map.len() - 1;
        for (i, ((e, t), (&d, residual))) in blocks.zip(self.map.iter().zip(&mut self.residual)).enumerate() {
            let mean = if i == end { mean * self.field.last() } else { mean };
            let r = d - (t.s * along(e, &at.m) + t.u * at.pm2) + mean;
            *residual = r;
            squares += r * r;
        }
        squares.sum()
    }

    /// W with rows wⱼ = Aⱼᵀ r.
    #[inline(never)]
    fn first(&self, at: &Place<L>) -> Weighed {
        let two = L::splat(2.0);
        let mut sums = Sums::default();
        for ((e, t), &r) in self.field.blocks().iter().zip(&self.potentials).zip(&self.residual) {
            let t = t.terms(at.u4, along(e, &at.p));
            let r2 = r * two;
            sums.add(e, r * t.ss, r2 * t.us, r2 * two * t.uu, r2 * t.u);
        }
        sums.weighed(at.position)
    }

    /// r·(∂²A/∂pⱼ∂pₖ m).
    #[inline(never)]
    fn second(&self, at: &Place<L>, first: &Weighed) -> Symmetric3 {
        let (two, four) = (L::splat(2.0), L::splat(4.0));
        let mut sums = Sums::default();
        for ((e, t), &r) in self.field.blocks().iter().zip(&self.potentials).zip(&self.residual) {
            let t = t.terms(at.u4, along(e, &at.p));
            let em = along(e, &at.m);
            let (rem2, rpm2) = (r * em * two, r * at.pm2);
            sums.add(
                e,
                r * t.sss * em + t.uss * rpm2,
                t.uss * rem2 + t.uus * two * rpm2,
                t.uus * two * rem2 + t.uuu * four * rpm2,
                t.us * rem2 + t.uu * two * rpm2,
            );
        }
        let bare = sums.weighed(at.position).matrix;
        let (p, m) = (at.position, at.moment);
        let both = |a: Vec3, b: Vec3, i: usize, j: usize| a[i] * b[j] + a[j] * b[i];
        Symmetric3::from_fn(|i, j| bare.at(i, j) + both(first.e, m, i, j) + first.pp * both(p, m, i, j))
    }

    /// vⱼ·vₖ and AₖᵀVⱼ, rows k.
    #[inline(never)]
    fn slopes(&self, at: &Place<L>, mean: Vec3) -> (Symmetric3, [[f64; 3]; 3]) {
        let two = L::splat(2.0);
        let p2 = splat3(at.position * 2.0);
        let (mut sum, mut squares, mut products) = ([L::default(); 3], [L::default(); 6], [[L::default(); 3]; 3]);
        for (e, t) in self.field.blocks().iter().zip(&self.potentials) {
            let a = lead(e, t, &p2);
            let t = t.terms(at.u4, along(e, &at.p));
            let em = along(e, &at.m);
            let along_e = t.ss * em + t.us * at.pm2;
            let along_p = (t.us * em + t.uu * at.pm2) * two;
            let along_m = t.u * two;
            let mut v = [L::default(); 3];
            for j in 0..3 {
                v[j] = along_e * e[j] + along_p * at.p[j] + along_m * at.m[j];
            }
            for j in 0..3 {
                sum[j] += v[j];
                for k in 0..3 {
                    products[k][j] += a[k] * v[j];
                }
            }
            add_squares(&mut squares, &v, &v);
        }
        let count = self.field.count() as f64;
        let v = sum3(&sum) * (1.0 / count);
        let mut av = [[0.0; 3]; 3];
        for k in 0..3 {
            for j in 0..3 {
                av[k][j] = products[k][j].sum() - count * mean[k] * v[j];
            }
        }
        (less_means(&squares, v, count), av)
    }
}

/// The lead field on the unit sphere, Φₛ e + 2Φᵤ p.
#[inline(always)]
fn lead<L: Lanes>(e: &[L; 3], t: &Potential<L>, p2: &[L; 3]) -> [L; 3] {
    [t.s * e[0] + t.u * p2[0], t.s * e[1] + t.u * p2[1], t.s * e[2] + t.u * p2[2]]
}

/// Adds a bᵀ, of which the upper triangle is kept.
#[inline(always)]
fn add_squares<L: Lanes>(sums: &mut [L; 6], a: &[L; 3], b: &[L; 3]) {
    sums[0] += a[0] * b[0];
    sums[1] += a[0] * b[1];
    sums[2] += a[0] * b[2];
    sums[3] += a[1] * b[1];
    sums[4] += a[1] * b[2];
    sums[5] += a[2] * b[2];
}

#[inline(always)]
fn symmetric<L: Lanes>(sums: &[L; 6]) -> [[f64; 3]; 3] {
    let [xx, xy, xz] = [sums[0].sum(), sums[1].sum(), sums[2].sum()];
    let [yy, yz, zz] = [sums[3].sum(), sums[4].sum(), sums[5].sum()];
    [[xx, xy, xz], [xy, yy, yz], [xz, yz, zz]]
}

fn less_means<L: Lanes>(squares: &[L; 6], mean: Vec3, count: f64) -> Symmetric3 {
    let squares = symmetric(squares);
    Symmetric3::from_fn(|i, j| squares[i][j] - count * mean[i] * mean[j])
}

/// The coefficients of Σ [α e eᵀ + β (e pᵀ + p eᵀ) + γ p pᵀ + δ 1], lane by lane.
#[derive(Default)]
struct Sums<L> {
    ee: [L; 6],
    e: [L; 3],
    pp: L,
    one: L,
}

/// Its sum, and two of the coefficients.
struct Weighed {
    matrix: Symmetric3,
    e: Vec3,
    pp: f64,
}

impl<L: Lanes> Sums<L> {
    #[inline(always)]
    fn add(&mut self, e: &[L; 3], ee: L, ep: L, pp: L, one: L) {
        add_squares(&mut self.ee, &[ee * e[0], ee * e[1], ee * e[2]], e);
        for axis in 0..3 {
            self.e[axis] += ep * e[axis];
        }
        self.pp += pp;
        self.one += one;
    }

    fn weighed(&self, p: Vec3) -> Weighed {
        let (ee, e) = (symmetric(&self.ee), sum3(&self.e));
        let (pp, one) = (self.pp.sum(), self.one.sum());
        let matrix = Symmetric3::from_fn(|i, j| {
            ee[i][j] + e[i] * p[j] + e[j] * p[i] + pp * p[i] * p[j] + if i == j { one } else { 0.0 }
        });
        Weighed { matrix, e, pp }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::forward::LeadField;
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
        let mut objective = Objective::new(field.field(), &map);
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
