use crate::forward::Images;
use crate::math::{Lanes, Single, Vec3};

/// Positions over the whole region of sources with the maps that a dipole at each can make.
#[derive(Clone, Debug)]
pub(super) struct Grid {
    points: Vec<Vec3>,
    /// Four points side by side: for each group and electrode the three orthonormal columns that span the
    /// average-referenced maps of the dipoles at each point. Single precision suffices to choose starts.
    basis: Vec<[Single; 3]>,
    electrodes: usize,
    /// For each point those that are no starts beside it.
    neighbours: Vec<Vec<u16>>,
    step: f64,
}

/// Steps from the centre to the boundary.
const LAYERS: usize = 6;

/// Starts keep this distance from each other, in grid steps.
const SEPARATION: f64 = 1.2;

/// Maps that the innermost loop takes together: what the registers hold.
const TOGETHER: usize = 3;

/// Points side by side.
const WIDTH: usize = <Single as Lanes>::WIDTH;

/// What the best dipole at each point explains of one map, group by group.
pub(super) type Explained = Vec<Single>;

impl Grid {
    pub(super) fn new(images: &Images<Single>, directions: &[Vec3], reach: f64) -> Self {
        let step = reach / LAYERS as f64;
        let points = points(reach);
        let basis = points.chunks(WIDTH).flat_map(|points| orthonormal(images, directions, points)).collect();
        let near = |a: Vec3, b: Vec3| (a - b).norm() <= SEPARATION * step;
        let beside = |a: Vec3| (0u16..).zip(&points).filter(move |&(_, &b)| near(a, b)).map(|(i, _)| i).collect();
        let neighbours = points.iter().map(|&a| beside(a)).collect();
        Self { points, basis, electrodes: directions.len(), neighbours, step }
    }

    pub(super) fn count(&self) -> usize {
        self.points.len()
    }

    /// Distance between neighbouring points, in scalp radii.
    pub(super) fn step(&self) -> f64 {
        self.step
    }

    /// What the best dipole at each point explains of each map (unit length).
    pub(super) fn explained(&self, maps: &[&[f64]]) -> Vec<Explained> {
        let groups = self.basis.len() / self.electrodes;
        let mut explained = vec![vec![Single::default(); groups]; maps.len()];
        let whole = maps.len() / TOGETHER * TOGETHER;
        let (triples, rest) = maps.split_at(whole);
        let triples: Vec<Vec<[f32; TOGETHER]>> = triples.chunks_exact(TOGETHER).map(side_by_side).collect();
        let rest: Vec<Vec<[f32; 1]>> = rest.chunks_exact(1).map(side_by_side).collect();
        for (group, basis) in self.basis.chunks_exact(self.electrodes).enumerate() {
            let mut outs = explained.iter_mut();
            let mut tell = |share: Single| {
                if let Some(out) = outs.next() {
                    out[group] = share;
                }
            };
            triples.iter().for_each(|maps| shares(basis, maps).into_iter().for_each(&mut tell));
            rest.iter().for_each(|maps| shares(basis, maps).into_iter().for_each(&mut tell));
        }
        explained
    }

    /// The best points, each away from those before it.
    pub(super) fn starts(&self, explained: &mut Explained, count: usize) -> Vec<Vec3> {
        let mut starts = Vec::with_capacity(count);
        while starts.len() < count {
            let best = explained.iter().fold(Single::default(), |best, share| best.fast_max(*share));
            let most = best.to_array().into_iter().fold(0.0f32, f32::max);
            let found = explained.iter().position(|share| share.to_array().contains(&most));
            let Some(group) = found.filter(|_| most > 0.0) else { break };
            let lane = explained[group].to_array().iter().position(|share| *share == most).unwrap_or(0);
            let index = group * WIDTH + lane;
            for &near in &self.neighbours[index] {
                let (group, lane) = (usize::from(near) / WIDTH, usize::from(near) % WIDTH);
                let mut lanes = explained[group].to_array();
                lanes[lane] = 0.0;
                explained[group] = Single::new(lanes);
            }
            starts.push(self.points[index]);
        }
        starts
    }
}

/// Values of several maps electrode by electrode.
fn side_by_side<const MAPS: usize>(maps: &[&[f64]]) -> Vec<[f32; MAPS]> {
    (0..maps[0].len()).map(|i| core::array::from_fn(|map| maps[map][i] as f32)).collect()
}

/// Σ (bᵢ·d)² over the three columns, for four points and a few maps at once. A function of its own, called often: browsers
/// compile a long loop inside one call badly.
#[inline(never)]
fn shares<const MAPS: usize>(basis: &[[Single; 3]], maps: &[[f32; MAPS]]) -> [Single; MAPS] {
    let mut products = [[Single::default(); 3]; MAPS];
    for ([x, y, z], values) in basis.iter().zip(maps) {
        for map in 0..MAPS {
            let value = Single::new([values[map]; 4]);
            products[map][0] += *x * value;
            products[map][1] += *y * value;
            products[map][2] += *z * value;
        }
    }
    products.map(|[x, y, z]| x * x + y * y + z * z)
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

/// Orthonormal columns that span the average-referenced columns of the lead field (modified Gram–Schmidt), at up to four
/// points side by side; zero where there are no more points.
fn orthonormal(images: &Images<Single>, directions: &[Vec3], points: &[Vec3]) -> Vec<[Single; 3]> {
    let p = [0, 1, 2].map(|axis| Single::pack(&points.iter().map(|p| p[axis]).collect::<Vec<_>>()));
    let present = Single::pack(&vec![1.0; points.len()]);
    let mut rows: Vec<[Single; 3]> =
        directions.iter().map(|&e| images.lead(e, &p).map(|lead| lead * present)).collect();
    for k in 0..3 {
        let sum = |rows: &[[Single; 3]], term: &dyn Fn(&[Single; 3]) -> Single| {
            rows.iter().fold(Single::default(), |sum, row| sum + term(row))
        };
        let mean = sum(&rows, &|row| row[k]) * <Single as Lanes>::splat(1.0 / directions.len() as f64);
        rows.iter_mut().for_each(|row| row[k] -= mean);
        let size = sum(&rows, &|row| row[k] * row[k]);
        for other in 0..k {
            let share = sum(&rows, &|row| row[other] * row[k]);
            rows.iter_mut().for_each(|row| row[k] -= share * row[other]);
        }
        let left = sum(&rows, &|row| row[k] * row[k]);
        // What is left of a column that depends on the others is rounding.
        let factor: [f32; 4] = core::array::from_fn(|lane| {
            let (size, left) = (size.to_array()[lane], left.to_array()[lane]);
            if left > 1e-10 * size { 1.0 / left.sqrt() } else { 0.0 }
        });
        rows.iter_mut().for_each(|row| row[k] *= Single::new(factor));
    }
    rows
}
