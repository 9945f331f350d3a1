//! Minima beside the best one, and fits that begin at a known place: in heads, and with electrodes, that are met once.

use super::objective::Objective;
use super::refine::{DOUBLE, Region, SINGLE, refine};
use super::{Fit, Fitter, grid, normalise};
use crate::forward::LeadField;
use crate::math::Vec3;

/// Peaks of the grid from which separate minima are looked for.
const STARTS: usize = 12;

impl Fitter {
    /// The best minimum of a map that lies apart from its fit, by the distance that starts keep from each other at least.
    /// `None` if none of the grid's twelve best peaks leads to one.
    pub fn second(&self, map: &[f64], fit: &Fit) -> Option<Fit> {
        let (map, size) = normalise(map)?;
        let region = Region { reach: self.field.reach(), step: self.grid.step() };
        let apart = |other: &Fit| (other.position - fit.position).norm() > grid::SEPARATION * region.step;
        let explained = self.grid.explained(&[&map]).pop()?;
        let mut rough = Objective::new(&self.rough, &map);
        let minima = self.grid.peaks(&explained).into_iter().take(STARTS);
        let minima = minima.filter_map(|start| refine(&mut rough, start, region, SINGLE, &[])).filter(apart);
        let least = |a: Fit, b: Fit| if b.residual_variance < a.residual_variance { b } else { a };
        let found = minima.reduce(least)?;
        let mut exact = Objective::new(self.field.field(), &map);
        let second = refine(&mut exact, found.position, region, DOUBLE, &[]).filter(apart)?;
        Some(Fit {
            moment: second.moment * (size / self.field.scale()),
            evaluations: rough.evaluations() + exact.evaluations(),
            ..second
        })
    }

    /// The best dipole with its position held: residual variance and moment in nAm.
    pub fn held(&self, map: &[f64], position: Vec3) -> Option<(f64, Vec3)> {
        let (map, size) = normalise(map)?;
        let (left, moment) = Objective::new(self.field.field(), &map).value(position)?;
        Some((left, moment * (size / self.field.scale())))
    }

    /// The residual variance of the best dipole at each of many positions; not a number beyond the region of sources.
    pub fn landscape(&self, map: &[f64], positions: impl Iterator<Item = Vec3>) -> Vec<f64> {
        let Some((map, _)) = normalise(map) else { return positions.map(|_| f64::NAN).collect() };
        let mut surface = Objective::new(self.field.field(), &map);
        let reach = self.field.reach();
        // A place that was moved onto the boundary is beyond it by rounding.
        let inside = |position: &Vec3| position.norm() <= reach * (1.0 + 1e-12);
        let mut value = |position| surface.value(position).map(|(left, _)| left);
        positions.map(|position| Some(position).filter(inside).and_then(&mut value).unwrap_or(f64::NAN)).collect()
    }
}

/// Fits without a grid: the best of the minima that given starts lead to.
#[derive(Clone, Debug)]
pub struct LocalFitter {
    field: LeadField,
    region: Region,
}

impl LocalFitter {
    /// Of these electrodes in this head.
    pub fn new(field: LeadField) -> Self {
        let reach = field.reach();
        Self { field, region: Region { reach, step: reach / grid::LAYERS as f64 } }
    }

    /// From these starts, in scalp radii; `None` for a map that is the same everywhere.
    ///
    /// # Panics
    /// If the map has another number of values than there are electrodes.
    pub fn fit(&self, map: &[f64], starts: &[Vec3]) -> Option<Fit> {
        assert!(map.len() == self.field.count(), "one value for each electrode");
        let (map, size) = normalise(map)?;
        let mut surface = Objective::new(self.field.field(), &map);
        let mut minima: Vec<Fit> = Vec::with_capacity(starts.len());
        for &start in starts {
            minima.extend(refine(&mut surface, start, self.region, DOUBLE, &minima));
        }
        let best = minima.into_iter().reduce(Fit::better)?;
        let evaluations = surface.evaluations();
        Some(Fit { moment: best.moment * (size / self.field.scale()), evaluations, ..best })
    }
}
