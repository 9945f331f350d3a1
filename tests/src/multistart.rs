//! A slow and plain search for the best dipole, as a measure for the engine's quick one.
//!
//! A dense grid, the moment by least squares at each point, then steps along the axes from the best separate points,
//! halved until nothing improves. It shares neither formulas nor code with the engine.
use crate::series::PlainSeries;
use inward_core::Vec3;

const STEP: f64 = 0.07;
const SEEDS: usize = 10;
const FINALISTS: usize = 4;

/// Series terms that change a residual variance by less than this are left out.
const TOLERANCE: f64 = 1e-10;

/// The search, prepared for one set of electrodes.
pub struct MultiStart {
    series: PlainSeries,
    electrodes: Vec<Vec3>,
    reach: f64,
    grid: Vec<(Vec3, [Vec<f64>; 3])>,
}

impl MultiStart {
    /// Lays the grid within `reach` scalp radii, with more points on the outermost sphere.
    pub fn new(series: PlainSeries, electrodes: Vec<Vec3>, reach: f64) -> Self {
        let mut search = Self { series, electrodes, reach, grid: Vec::new() };
        let steps = (reach / STEP).ceil() as i32;
        let axis = || (-steps..=steps).map(|k| f64::from(k) * STEP);
        let inside = axis()
            .flat_map(|x| axis().flat_map(move |y| axis().map(move |z| Vec3::new(x, y, z))))
            .filter(|p| p.norm() < reach);
        let shell = crate::electrodes::Electrodes::spread(1500, -1.0).directions;
        let points: Vec<Vec3> = inside.chain(shell.into_iter().map(|e| e * reach)).collect();
        search.grid = points.into_iter().map(|p| (p, search.basis(p))).collect();
        search
    }

    /// The smallest residual variance found and where, in scalp radii.
    pub fn best(&self, map: &[f64]) -> (f64, Vec3) {
        let map = unit(map);
        self.least(&|basis| left_over(basis, &map))
    }

    /// The smallest pooled residual variance of several maps with one position, and where.
    pub fn best_common(&self, maps: &[&[f64]]) -> (f64, Vec3) {
        let power = |map: &[f64]| inner(&centred(map), &centred(map));
        let all: f64 = maps.iter().map(|map| power(map)).sum();
        let weighted: Vec<(Vec<f64>, f64)> = maps.iter().map(|map| (unit(map), power(map) / all)).collect();
        self.least(&|basis| weighted.iter().map(|(map, weight)| weight * left_over(basis, map)).sum())
    }

    fn least(&self, left: &dyn Fn(&[Vec<f64>; 3]) -> f64) -> (f64, Vec3) {
        let mut seeds: Vec<(f64, Vec3)> = self.grid.iter().map(|(p, basis)| (left(basis), *p)).collect();
        seeds.sort_by(|a, b| a.0.total_cmp(&b.0));
        let mut apart: Vec<(f64, Vec3)> = Vec::new();
        for seed in seeds {
            if apart.len() < SEEDS && apart.iter().all(|other| (seed.1 - other.1).norm() > 1.6 * STEP) {
                apart.push(seed);
            }
        }
        let mut near: Vec<(f64, Vec3)> =
            apart.into_iter().map(|seed| self.descend(seed, STEP / 2.0, 4e-3, left)).collect();
        near.sort_by(|a, b| a.0.total_cmp(&b.0));
        near.truncate(FINALISTS);
        let ends = near.into_iter().map(|seed| self.descend(seed, 2e-3, 5e-5, left));
        ends.min_by(|a, b| a.0.total_cmp(&b.0)).expect("there are seeds")
    }

    /// Residual variance with the best moment at a position.
    pub fn residual_variance(&self, position: Vec3, map: &[f64]) -> f64 {
        left_over(&self.basis(position), &unit(map))
    }

    fn descend(&self, start: (f64, Vec3), step: f64, end: f64, left: &dyn Fn(&[Vec<f64>; 3]) -> f64) -> (f64, Vec3) {
        let (mut value, mut position) = start;
        let mut step = step;
        let mut last = Vec3::ZERO;
        while step > end {
            let mut moved = false;
            // The last successful move first: valleys are followed.
            let axes = [0, 1, 2].map(|axis| Vec3(std::array::from_fn(|i| if i == axis { step } else { 0.0 })));
            for offset in [last, axes[0], axes[0] * -1.0, axes[1], axes[1] * -1.0, axes[2], axes[2] * -1.0] {
                if offset == Vec3::ZERO {
                    continue;
                }
                let next = self.within(position + offset);
                let reached = left(&self.basis(next));
                if reached < value {
                    (last, position, value, moved) = (next - position, next, reached, true);
                }
            }
            if !moved {
                step /= 2.0;
                last = Vec3::ZERO;
            }
        }
        (value, position)
    }

    fn within(&self, position: Vec3) -> Vec3 {
        let distance = position.norm();
        if distance > self.reach { position * (self.reach / distance) } else { position }
    }

    /// Orthonormal columns that span the average-referenced lead field.
    fn basis(&self, position: Vec3) -> [Vec<f64>; 3] {
        let rows = self.series.lead(position, &self.electrodes, TOLERANCE);
        let mut columns: [Vec<f64>; 3] =
            std::array::from_fn(|axis| centred(&rows.iter().map(|row| row[axis]).collect::<Vec<_>>()));
        for k in 0..3 {
            for _ in 0..2 {
                for other in 0..k {
                    let (before, after) = columns.split_at_mut(k);
                    let share = inner(&before[other], &after[0]);
                    after[0].iter_mut().zip(&before[other]).for_each(|(a, b)| *a -= share * b);
                }
            }
            let size = inner(&columns[k], &columns[k]).sqrt();
            columns[k].iter_mut().for_each(|value| *value /= size);
        }
        columns
    }
}

fn inner(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

fn centred(values: &[f64]) -> Vec<f64> {
    let mean = values.iter().sum::<f64>() / values.len() as f64;
    values.iter().map(|v| v - mean).collect()
}

fn unit(map: &[f64]) -> Vec<f64> {
    let map = centred(map);
    let size = inner(&map, &map).sqrt();
    map.iter().map(|v| v / size).collect()
}

fn left_over(basis: &[Vec<f64>; 3], map: &[f64]) -> f64 {
    let shares: Vec<f64> = basis.iter().map(|column| inner(column, map)).collect();
    // Summed from what is left, not as one minus the rest: small values keep their digits.
    map.iter()
        .enumerate()
        .map(|(i, v)| v - shares[0] * basis[0][i] - shares[1] * basis[1][i] - shares[2] * basis[2][i])
        .map(|rest| rest * rest)
        .sum()
}
