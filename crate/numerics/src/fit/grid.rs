use crate::forward::LeadField;
use crate::math::Vec3;
use crate::math::lanes::{NarrowLanes, narrow_blocks, narrow_dot};
use ndarray::{Array2, ArrayView1};

/// Positions over the whole region of sources with the maps that a dipole at each can make.
#[derive(Clone, Debug)]
pub(super) struct Grid {
    points: Vec<Vec3>,
    /// Three orthonormal rows for each point, one after the other: the average-referenced maps of its dipoles. Single
    /// precision suffices to choose starts.
    basis: Vec<NarrowLanes>,
    /// Blocks of a row.
    width: usize,
    step: f64,
}

/// Steps from the centre to the boundary.
const LAYERS: usize = 6;

/// Starts keep this distance from each other, in grid steps.
const SEPARATION: f64 = 1.2;

impl Grid {
    pub(super) fn new(field: &LeadField) -> Self {
        let step = field.reach() / LAYERS as f64;
        let points = points(field.reach());
        let rows = points.iter().flat_map(|&point| orthonormal(&field.quick(point)));
        let basis = rows.flat_map(|row| narrow_blocks(&row)).collect();
        Self { points, basis, width: field.count().div_ceil(8), step }
    }

    pub(super) fn count(&self) -> usize {
        self.points.len()
    }

    /// Distance between neighbouring points, in scalp radii.
    pub(super) fn step(&self) -> f64 {
        self.step
    }

    /// Share of each map (unit length; columns of the result) that the best dipole at each point (rows) explains.
    pub(super) fn explained(&self, maps: &[&[f64]]) -> Array2<f32> {
        let maps: Vec<Vec<NarrowLanes>> = maps.iter().map(|map| narrow_blocks(map)).collect();
        let mut explained = Array2::zeros((self.points.len(), maps.len()));
        for (rows, mut out) in self.basis.chunks_exact(3 * self.width).zip(explained.rows_mut()) {
            for (map, share) in maps.iter().zip(&mut out) {
                for row in rows.chunks_exact(self.width) {
                    let product = narrow_dot(row, map);
                    *share += product * product;
                }
            }
        }
        explained
    }

    /// The best points, each away from those before it.
    pub(super) fn starts(&self, explained: ArrayView1<f32>, count: usize) -> Vec<Vec3> {
        let mut open: Vec<bool> = vec![true; self.points.len()];
        let mut starts = Vec::with_capacity(count);
        while starts.len() < count {
            let best = (0..self.points.len())
                .filter(|&i| open[i])
                .reduce(|best, i| if explained[i] > explained[best] { i } else { best });
            let Some(best) = best else { break };
            let start = self.points[best];
            for (open, &point) in open.iter_mut().zip(&self.points) {
                *open &= (point - start).norm() > SEPARATION * self.step;
            }
            starts.push(start);
        }
        starts
    }
}

/// Concentric layers of golden-angle spirals (Vogel 1979, Math Biosci 44:179–189), the outermost twice as dense: there the
/// maps change fastest.
fn points(reach: f64) -> Vec<Vec3> {
    let golden = core::f64::consts::PI * (3.0 - 5.0f64.sqrt());
    let mut points = vec![Vec3::ZERO];
    for layer in 1..=LAYERS {
        let density = if layer == LAYERS { 2.0 } else { 1.0 };
        let count = (density * 4.0 * core::f64::consts::PI * (layer * layer) as f64).round() as usize;
        let radius = reach * layer as f64 / LAYERS as f64;
        for i in 0..count {
            let z = 1.0 - 2.0 * (i as f64 + 0.5) / count as f64;
            let (ring, angle) = ((1.0 - z * z).sqrt(), golden * i as f64);
            points.push(Vec3::new(ring * libm::cos(angle), ring * libm::sin(angle), z) * radius);
        }
    }
    points
}

/// Orthonormal columns that span the average-referenced columns of a lead field (modified Gram–Schmidt).
fn orthonormal(field: &Array2<f64>) -> [Vec<f64>; 3] {
    let mut columns = [0, 1, 2].map(|axis| {
        let mut column = field.column(axis).to_vec();
        crate::math::centre(&mut column);
        column
    });
    let sizes = columns.each_ref().map(|column| crate::math::dot(column, column).sqrt());
    for k in 0..3 {
        let (done, rest) = columns.split_at_mut(k);
        let column = &mut rest[0];
        for other in done.iter() {
            let share = crate::math::dot(other, column);
            column.iter_mut().zip(other).for_each(|(v, o)| *v -= share * o);
        }
        let norm = crate::math::dot(column, column).sqrt();
        // What is left of a column that depends on the others is rounding.
        let independent = norm > 1e-12 * sizes[k];
        column.iter_mut().for_each(|v| *v = if independent { *v / norm } else { 0.0 });
    }
    columns
}
