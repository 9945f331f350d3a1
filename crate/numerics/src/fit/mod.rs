//! The dipole that explains a map best: the global minimum of residual variance over all positions and moments.
//!
//! The moment is eliminated (variable projection; Golub & Pereyra 1973, SIAM J Numer Anal 10:413–432): at a position the
//! best moment solves a linear problem, so that only three coordinates are searched. A grid of positions gives separate
//! starts, Newton steps with exact derivatives refine them inside the ball of allowed sources, and the best one stands.

mod apart;
mod common;
mod grid;
mod objective;
mod pairs;
mod profile;
mod refine;
mod tangent;

use crate::forward::{Field, LeadField, along};
use crate::math::lanes::splat3;
use crate::math::{Lanes, Single, Vec3, centre, dot, mean};
pub use apart::LocalFitter;
pub use common::Common;
use grid::{Explained, Grid};
use objective::{Objective, Surface};
pub use pairs::{Arrangement, Pair, PairSearch};
pub use profile::Profile;
use refine::{DOUBLE, Precision, Region, SINGLE, least, refine};
pub use tangent::Tangent;

/// A fitted dipole, in head coordinates.
#[derive(Clone, Debug, PartialEq)]
pub struct Fit {
    /// Position in scalp radii from the centre.
    pub position: Vec3,
    /// Moment in nAm, if the map is in µV.
    pub moment: Vec3,
    /// Residual sum of squares over the sum of squares of the average-referenced map.
    pub residual_variance: f64,
    /// Whether the position lies on the boundary of the region of sources while the residual falls outwards.
    pub at_boundary: bool,
    /// Why the search ended.
    pub stopped: Stopped,
    /// Evaluations of the residual in all, those of the grid included.
    pub evaluations: usize,
}

impl Fit {
    /// The one with the lower residual; of equal ones, to rounding, the one that is a minimum.
    fn better(self, other: Self) -> Self {
        let gain = self.residual_variance - other.residual_variance;
        let unproven = |fit: &Self| fit.stopped == Stopped::IterationLimit;
        let close = gain.abs() <= DOUBLE.rounding && unproven(&self) != unproven(&other);
        let other_is_better = if close { unproven(&self) } else { gain > 0.0 };
        if other_is_better { other } else { self }
    }
}

/// Why a search ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Stopped {
    /// At a minimum inside the region of sources.
    Converged,
    /// At the best position on the boundary of that region; the residual still falls outwards.
    Boundary,
    /// After too many steps: the position is not a proven minimum.
    IterationLimit,
}

/// Fits maps of one set of electrodes in one head.
#[derive(Clone, Debug)]
pub struct Fitter {
    field: LeadField,
    rough: Field<Single>,
    grid: Grid,
}

/// Starts that are refined for each map.
const STARTS: usize = 5;

/// Least share of a start's residual variance that is left at the minimum it leads to, unless that is the best one.
const START_OVER_MINIMUM: f64 = 0.3;

/// Maps that share one pass over the grid.
pub const BATCH: usize = 16;

impl Fitter {
    /// Prepares the grid of lead fields.
    pub fn new(field: LeadField) -> Self {
        let grid = Grid::new(field.rough_images(), field.directions(), field.reach());
        Self { rough: field.rough(), field, grid }
    }

    /// The lead field that the fits use.
    pub fn field(&self) -> &LeadField {
        &self.field
    }

    /// The best dipole of a map: one value in µV for each electrode, whatever its reference. `None` for a map that is the
    /// same everywhere to rounding.
    ///
    /// # Panics
    /// If the map has another number of values than the lead field has electrodes.
    pub fn fit(&self, map: &[f64]) -> Option<Fit> {
        self.fit_batch(&[map]).pop().flatten()
    }

    /// The best dipoles of several maps; each result is the same as if fitted alone.
    ///
    /// # Panics
    /// If a map has another number of values than the lead field has electrodes.
    pub fn fit_batch(&self, maps: &[&[f64]]) -> Vec<Option<Fit>> {
        assert!(maps.iter().all(|map| map.len() == self.field.count()), "one value for each electrode");
        let prepared: Vec<Option<(Vec<f64>, f64)>> = maps.iter().map(|map| normalise(map)).collect();
        let fitted: Vec<&[f64]> = prepared.iter().flatten().map(|(map, _)| &map[..]).collect();
        let mut explained = self.grid.explained(&fitted).into_iter();
        let fits = prepared.into_iter().map(|map| {
            let ((map, size), explained) = (map?, explained.next()?);
            let best = self.search(&map, explained)?;
            Some(Fit { moment: best.moment * (size / self.field.scale()), ..best })
        });
        fits.collect()
    }

    fn search(&self, map: &[f64], explained: Explained) -> Option<Fit> {
        let mut rough = Objective::new(&self.rough, map);
        let mut exact = Objective::new(self.field.field(), map);
        let best = self.descend(&mut rough, &mut exact, explained)?;
        let evaluations = self.grid.count() + rough.evaluations() + exact.evaluations();
        Some(Fit { evaluations, ..best })
    }

    /// Refines the starts roughly, then with all digits what may be the best of them.
    fn descend(&self, surface: &mut dyn Surface, exact: &mut dyn Surface, mut explained: Explained) -> Option<Fit> {
        let region = Region { reach: self.field.reach(), step: self.grid.step() };
        let starts = self.grid.starts(&mut explained, STARTS);
        // Minima whose order the rough lead field may have wrong are not given up for one another.
        let slack = SINGLE.slack + 4.0 * self.field.rough_images().error_bound();
        let rough = Precision { slack, ..SINGLE };
        let mut minima: Vec<Fit> = Vec::with_capacity(STARTS);
        for start in &starts {
            // The grid is so dense that no minimum lies far below the points around it.
            if START_OVER_MINIMUM * start.left_over <= least(&minima) + slack {
                minima.extend(refine(surface, start.position, region, rough, &minima));
            }
        }
        let most = least(&minima) + slack;
        let near = minima.iter().filter(|minimum| minimum.residual_variance <= most).map(|minimum| minimum.position);
        let mut fits: Vec<Fit> = Vec::with_capacity(1);
        // Without a rough minimum the starts themselves.
        for position in near.chain(starts.iter().map(|start| start.position).filter(|_| minima.is_empty())) {
            fits.extend(refine(exact, position, region, DOUBLE, &fits));
        }
        fits.into_iter().reduce(Fit::better)
    }

    /// The minimum that a search from this position leads to, with the precision of searches for starts: where a simulated
    /// error moves a fit to, which is a thousand times as far as that precision. `None` for a map that is the same everywhere.
    pub fn follow(&self, map: &[f64], start: Vec3) -> Option<Fit> {
        let (map, size) = normalise(map)?;
        let region = Region { reach: self.field.reach(), step: self.grid.step() };
        let mut surface = Objective::new(&self.rough, &map);
        let fit = refine(&mut surface, start, region, SINGLE, &[])?;
        Some(Fit { moment: fit.moment * (size / self.field.scale()), evaluations: surface.evaluations(), ..fit })
    }

    /// The map of several dipoles, up to a factor, with the precision of a search: 10⁻³ of its largest value.
    pub fn rough_sum(&self, sources: impl Iterator<Item = (Vec3, Vec3)>) -> Vec<f64> {
        let mut potentials = Vec::new();
        let mut sum = vec![Single::default(); self.rough.blocks().len()];
        for (position, moment) in sources {
            self.rough.potentials::<false>(position, &mut potentials);
            let (m, radial) = (splat3(moment), <Single as Lanes>::splat(2.0 * position.dot(moment)));
            for ((sum, e), t) in sum.iter_mut().zip(self.rough.blocks()).zip(&potentials) {
                *sum += t.s * along(e, &m) + t.u * radial;
            }
        }
        let mut map = vec![0.0; self.field.count()];
        map.chunks_mut(<Single as Lanes>::WIDTH).zip(sum).for_each(|(values, sum)| sum.unpack(values));
        map
    }

    /// The potential of a dipole in µV, average-referenced.
    pub fn project(&self, position: Vec3, moment: Vec3) -> Vec<f64> {
        let mut map = potential(&self.field, position, moment);
        centre(&mut map);
        map
    }

    /// The potential of a dipole in µV at other places on the head, in these unit directions, referred to the mean of the
    /// electrodes fitted.
    pub fn project_elsewhere(&self, directions: Vec<Vec3>, position: Vec3, moment: Vec3) -> Vec<f64> {
        let reference = mean(&potential(&self.field, position, moment));
        let field = self.field.elsewhere(directions);
        potential(&field, position, moment).into_iter().map(|value| value - reference).collect()
    }
}

fn potential(field: &LeadField, position: Vec3, moment: Vec3) -> Vec<f64> {
    let rows = field.quick(position);
    rows.rows().into_iter().map(|r| Vec3::new(r[0], r[1], r[2]).dot(moment)).collect()
}

/// The average-referenced map with unit length, and its length; `None` for a map that is constant to rounding.
fn normalise(map: &[f64]) -> Option<(Vec<f64>, f64)> {
    let largest = map.iter().fold(0.0f64, |m, v| m.max(v.abs()));
    if !(largest > 0.0 && largest.is_finite()) {
        return None;
    }
    // Scaled first: squares of very large or small values would leave the range of numbers.
    let mut centred: Vec<f64> = map.iter().map(|v| v / largest).collect();
    centre(&mut centred);
    let length = dot(&centred, &centred).sqrt();
    // Also what is not a number.
    if length.is_nan() || length <= 1e-12 {
        return None;
    }
    centred.iter_mut().for_each(|v| *v /= length);
    Some((centred, length * largest))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::shells::Shells;

    #[test]
    fn alone_or_in_a_batch_the_bits_are_equal() {
        for electrodes in [23, 71] {
            let directions = (0..electrodes)
                .map(|i| {
                    let (z, angle) = (1.0 - 1.3 * (i as f64 + 0.5) / electrodes as f64, 2.4 * i as f64);
                    let ring = (1.0 - z * z).sqrt();
                    Vec3::new(ring * libm::cos(angle), ring * libm::sin(angle), z)
                })
                .collect();
            let fitter = Fitter::new(LeadField::new(&Shells::standard(), 88.0, directions));
            let mut maps: Vec<Vec<f64>> = (1..=BATCH + 5)
                .map(|k| (0..electrodes).map(|i| libm::sin((k * i * i) as f64) + (i % (k + 1)) as f64).collect())
                .collect();
            maps[3] = vec![7.0; electrodes];
            let together = fitter.fit_batch(&maps.iter().map(|map| &map[..]).collect::<Vec<_>>());
            for (index, (map, fit)) in maps.iter().zip(&together).enumerate() {
                assert_eq!(fitter.fit(map), *fit);
                assert_eq!(fit.is_none(), index == 3);
            }
            let maps: Vec<&[f64]> = maps.iter().map(|map| &map[..]).collect();
            let together = fitter.grid.explained(&maps);
            for (index, map) in maps.iter().enumerate() {
                assert!(fitter.grid.explained(&[map])[0] == together[index]);
            }
        }
    }
}
