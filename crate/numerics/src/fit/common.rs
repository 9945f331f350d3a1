//! One position for several maps, each with a moment of its own: a source that stays where it is while its moment changes.

use super::objective::{Evaluation, Objective, Surface};
use super::{BATCH, Fit, Fitter, normalise};
use crate::math::{Lanes, Single, Symmetric3, Vec3};

/// The position that explains several maps best, in head coordinates.
#[derive(Clone, Debug, PartialEq)]
pub struct Common {
    /// The position, the pooled residual variance Σ |dₜ − L mₜ|² / Σ |dₜ|² and how the search ended; its moment is zero.
    pub fit: Fit,
    /// The moment of each map in nAm, if the maps are in µV; zero for a map that is constant to rounding.
    pub moments: Vec<Vec3>,
    /// The residual variance of each map; not a number for a map that is constant to rounding.
    pub residual_variances: Vec<f64>,
}

/// The pooled residual variance of several maps as a function of the one position: the sum of theirs, weighted by their
/// squares.
struct Pooled<'a, L>(Vec<(Objective<'a, L>, f64)>);

impl<L: Lanes> Surface for Pooled<'_, L> {
    fn evaluate(&mut self, position: Vec3) -> Option<Evaluation> {
        let (mut residual_variance, mut gradient, mut hessian) = (0.0, Vec3::ZERO, Symmetric3::default());
        for (objective, weight) in &mut self.0 {
            let one = objective.evaluate(position)?;
            residual_variance += *weight * one.residual_variance;
            gradient += one.gradient * *weight;
            let sum = hessian;
            hessian = Symmetric3::from_fn(|i, j| sum.at(i, j) + *weight * one.hessian.at(i, j));
        }
        Some(Evaluation { residual_variance, moment: Vec3::ZERO, gradient, hessian })
    }
}

impl Fitter {
    /// The position that leaves least of several maps together: the global minimum of the pooled residual variance, searched
    /// like that of one map from where the sum of what is explained is largest. `None` if every map is constant to rounding.
    ///
    /// # Panics
    /// If a map has another number of values than the lead field has electrodes.
    pub fn fit_common(&self, maps: &[&[f64]]) -> Option<Common> {
        assert!(maps.iter().all(|map| map.len() == self.field.count()), "one value for each electrode");
        let prepared: Vec<Option<(Vec<f64>, f64)>> = maps.iter().map(|map| normalise(map)).collect();
        let largest = prepared.iter().flatten().fold(0.0f64, |most, (_, size)| most.max(*size));
        let told = || prepared.iter().flatten().map(|(map, size)| (map.as_slice(), size / largest));
        let sum: f64 = told().map(|(_, size)| size * size).sum();
        let weighted: Vec<(&[f64], f64)> = told().map(|(map, size)| (map, size * size / sum)).collect();
        let mut explained = Vec::new();
        for batch in weighted.chunks(BATCH) {
            let maps: Vec<&[f64]> = batch.iter().map(|(map, _)| *map).collect();
            for (shares, (_, weight)) in self.grid.explained(&maps).into_iter().zip(batch) {
                let weight = <Single as Lanes>::splat(*weight);
                explained.resize(shares.len(), Single::default());
                explained.iter_mut().zip(shares).for_each(|(sum, share)| *sum += weight * share);
            }
        }
        let mut rough = Pooled(weighted.iter().map(|(map, w)| (Objective::new(&self.rough, map), *w)).collect());
        let mut exact = Pooled(weighted.iter().map(|(map, w)| (Objective::new(self.field.field(), map), *w)).collect());
        let fit = self.descend(&mut rough, &mut exact, explained)?;
        let evaluations = |objectives: usize| objectives / weighted.len();
        let spent = rough.0.iter().map(|(one, _)| one.evaluations()).sum::<usize>();
        let spent = spent + exact.0.iter().map(|(one, _)| one.evaluations()).sum::<usize>();
        let mut ends = exact.0.iter_mut().map(|(objective, _)| objective.evaluate(fit.position));
        let (mut moments, mut residual_variances) = (Vec::new(), Vec::new());
        for map in &prepared {
            let end = map.as_ref().and_then(|(_, size)| Some((ends.next()??, size)));
            moments.push(end.map_or(Vec3::ZERO, |(end, size)| end.moment * (size / self.field.scale())));
            residual_variances.push(end.map_or(f64::NAN, |(end, _)| end.residual_variance));
        }
        let evaluations = self.grid.count() + evaluations(spent);
        Some(Common { fit: Fit { evaluations, ..fit }, moments, residual_variances })
    }
}
