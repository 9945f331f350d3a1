//! Residual variance over the whole brain, and a dipole that is placed by hand.

use super::Study;
use crate::fit::{Fit, Stopped};
use crate::math::Vec3;
use crate::report::{FittedMap, Landscape, Probe, Slice, slice_words};
use crate::scene::contours;

/// Rows and columns of a slice: two millimetres and a half from one to the next. Values stand in the middle of their squares,
/// as contour lines and pictures have it.
const SIZE: usize = 65;

/// Share of simulated maps whose true place lies within the first level.
const LEVEL: f64 = 0.95;

/// The horizontal and the vertical axis of each view, and the axis that it looks along.
const VIEWS: [(&str, (usize, f64), usize, usize); 3] =
    [("above", (0, 1.0), 1, 2), ("behind", (0, 1.0), 2, 1), ("left", (1, -1.0), 2, 0)];

impl Study {
    /// Residual variance in three slices through a place, in scalp radii and canonical axes, or through the best one; `None`
    /// for a map that cannot be fitted.
    pub fn landscape(&self, index: usize, map: &FittedMap, at: Option<Vec3>) -> Option<Landscape> {
        let (values, fit) = self.fit_of(index)?;
        let at = self.inside(at.unwrap_or(fit.position));
        let level = self.level(&fit, &self.fitter.tangent(&fit), LEVEL);
        let (levels, sentence) = Landscape::levels(map, level);
        let brain = self.shells.brain_ratio();
        let lines: Vec<f64> = levels.iter().map(|level| level.rv).collect();
        let slices = VIEWS.map(|(view, (across, sign), up, along)| {
            let place = |step: usize| brain * ((2 * step + 1) as f64 / SIZE as f64 - 1.0);
            let positions = (0..SIZE * SIZE).map(|pixel| {
                let mut position = [0.0; 3];
                position[across] = sign * place(pixel % SIZE);
                position[up] = -place(pixel / SIZE);
                position[along] = at[along];
                Vec3(position)
            });
            let rv = self.fitter.landscape(&values, positions);
            let inside = rv.iter().filter(|rv| !rv.is_nan());
            let least = inside.clone().fold(f64::INFINITY, |least, rv| least.min(*rv));
            let count = inside.clone().count().max(1);
            let within = inside.filter(|rv| **rv <= lines[0]).count();
            let mut contours = contours(&rv, SIZE, &lines);
            contours.iter_mut().flat_map(|line| line.points.iter_mut().flatten()).for_each(|part| *part *= brain);
            Slice {
                view,
                contours,
                alt: slice_words(view, within as f64 / count as f64, least),
                rv: rv.into_iter().map(|rv| rv as f32).collect(),
            }
        });
        Some(Landscape { at, best: fit.position, size: SIZE, brain, slices, levels, sentence })
    }

    /// The map with its dipole placed by hand: the moment leaves the least over. With what is told of it; `None` for a map
    /// that cannot be fitted.
    pub fn probe(&self, index: usize, best: &FittedMap, at: Vec3) -> Option<(Probe, FittedMap)> {
        let values = self.values(index).ok()?;
        let at = self.inside(at);
        let (residual_variance, moment) = self.fitter.held(&values, at)?;
        let by_hand = Fit {
            position: at,
            moment,
            residual_variance,
            at_boundary: false,
            stopped: Stopped::Converged,
            evaluations: 1,
        };
        let map = self.fitted(index, &values, &by_hand);
        Some((Probe::new(&map, best, at), map))
    }

    /// The nearest place that a source may have; what is no place is the centre.
    fn inside(&self, at: Vec3) -> Vec3 {
        let (reach, distance) = (self.fitter.field().reach(), at.norm());
        match distance {
            d if d.is_finite() && d <= reach => at,
            d if d.is_finite() => at * (reach / d),
            _ => Vec3::ZERO,
        }
    }
}
