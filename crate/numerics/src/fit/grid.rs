use crate::forward::Images;
use crate::math::lanes::splat3;
use crate::math::{Lanes, Single, Vec3, order};

/// Positions over the whole region of sources with the maps that a dipole at each can make.
#[derive(Clone, Debug)]
pub(super) struct Grid {
    points: Vec<Vec3>,
    /// The same, side by side.
    groups: Vec<[Single; 3]>,
    /// Four points side by side: for each group and electrode the three orthonormal columns that span the
    /// average-referenced maps of the dipoles at each point. Single precision suffices to choose starts.
    basis: Vec<[Single; 3]>,
    electrodes: usize,
    step: f64,
}

/// Steps from the centre to the boundary.
pub(super) const LAYERS: usize = 6;

/// Starts keep this distance from each other, in grid steps.
pub(super) const SEPARATION: f64 = 1.2;

/// Maps that the innermost loop takes together: what the registers hold.
const TOGETHER: usize = 3;

/// Points side by side.
const WIDTH: usize = <Single as Lanes>::WIDTH;

/// What the best dipole at each point explains of one map, group by group.
pub(super) type Explained = Vec<Single>;

/// Where a search begins, and the residual variance there.
#[derive(Clone, Copy, Debug)]
pub(super) struct Start {
    pub position: Vec3,
    pub left_over: f64,
}

impl Grid {
    pub(super) fn new(images: &Images<Single>, directions: &[Vec3], reach: f64) -> Self {
        let step = reach / LAYERS as f64;
        let points = points(reach);
        let basis = points.chunks(WIDTH).flat_map(|points| orthonormal(images, directions, points)).collect();
        let groups = points.chunks(WIDTH).map(side_by_side).collect();
        Self { points, groups, basis, electrodes: directions.len(), step }
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
        let triples: Vec<Vec<[f32; TOGETHER]>> = triples.chunks_exact(TOGETHER).map(by_electrode).collect();
        let rest: Vec<Vec<[f32; 1]>> = rest.chunks_exact(1).map(by_electrode).collect();
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
    pub(super) fn starts(&self, explained: &mut Explained, count: usize) -> Vec<Start> {
        let mut starts: Vec<Start> = Vec::with_capacity(count);
        while starts.len() < count {
            let most = match starts.last() {
                Some(start) => self.most_away(explained, start.position),
                None => explained.iter().fold(Single::ZERO, |most, share| most.fast_max(*share)),
            };
            let most = most.to_array().into_iter().fold(0.0f32, f32::max);
            let found = explained.iter().position(|share| share.to_array().contains(&most));
            let Some(group) = found.filter(|_| most > 0.0) else { break };
            let lane = explained[group].to_array().iter().position(|share| *share == most).unwrap_or(0);
            starts.push(Start { position: self.points[group * WIDTH + lane], left_over: 1.0 - f64::from(most) });
        }
        starts
    }

    /// Points that explain more than any within the distance of starts from each other: the best one of each basin, best
    /// first.
    pub(super) fn peaks(&self, explained: &Explained) -> Vec<Vec3> {
        let shares: Vec<f32> = explained.iter().flat_map(|shares| shares.to_array()).take(self.points.len()).collect();
        let order = order(shares.len(), &|a, b| shares[b].total_cmp(&shares[a]));
        let apart = SEPARATION * self.step;
        let at = |rank: usize| self.points[order[rank]];
        let is_peak = |rank: &usize| (0..*rank).all(|better| (at(better) - at(*rank)).norm() > apart);
        (0..order.len()).filter(is_peak).map(at).collect()
    }

    /// Strikes out the points near a start; the largest of the others in each lane.
    #[inline(never)]
    fn most_away(&self, explained: &mut Explained, start: Vec3) -> Single {
        let start = splat3::<Single>(start);
        let apart = SEPARATION * self.step;
        let apart = <Single as Lanes>::splat(apart * apart);
        let mut most = Single::ZERO;
        for (share, point) in explained.iter_mut().zip(&self.groups) {
            let [x, y, z] = [point[0] - start[0], point[1] - start[1], point[2] - start[2]];
            *share &= (x * x + y * y + z * z).simd_gt(apart);
            most = most.fast_max(*share);
        }
        most
    }
}

/// Values of several maps electrode by electrode.
fn by_electrode<const MAPS: usize>(maps: &[&[f64]]) -> Vec<[f32; MAPS]> {
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
    let mut shares = [Single::default(); MAPS];
    for (share, [x, y, z]) in shares.iter_mut().zip(&products) {
        *share = *x * *x + *y * *y + *z * *z;
    }
    shares
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

/// Up to four points side by side.
fn side_by_side(points: &[Vec3]) -> [Single; 3] {
    [0, 1, 2].map(|axis| Single::pack(&points.iter().map(|p| p[axis]).collect::<Vec<_>>()))
}

/// Orthonormal columns that span the average-referenced columns of the lead field (Gram–Schmidt), at up to four
/// points side by side; zero where there are no more points.
fn orthonormal(images: &Images<Single>, directions: &[Vec3], points: &[Vec3]) -> Vec<[Single; 3]> {
    let p = side_by_side(points);
    let present = Single::pack(&vec![1.0; points.len()]);
    let mut rows: Vec<[Single; 3]> =
        directions.iter().map(|&e| images.lead(e, &p).map(|lead| lead * present)).collect();
    let over_count = <Single as Lanes>::splat(1.0 / directions.len() as f64);
    let mean = rows.iter().fold([Single::ZERO; 3], |sum, row| add(sum, *row)).map(|sum| sum * over_count);
    for k in 0..3 {
        let mut size = Single::ZERO;
        let mut shares = [Single::ZERO; 2];
        for row in &mut rows {
            row[k] -= mean[k];
            size += row[k] * row[k];
            for (j, share) in shares.iter_mut().enumerate().take(k) {
                *share += row[j] * row[k];
            }
        }
        let mut left = Single::ZERO;
        for row in &mut rows {
            for (j, share) in shares.iter().enumerate().take(k) {
                row[k] -= *share * row[j];
            }
            left += row[k] * row[k];
        }
        // What is left of a column that depends on the others is rounding.
        let factor = (Single::ONE / left.sqrt()) & left.simd_gt(size * <Single as Lanes>::splat(1e-10));
        rows.iter_mut().for_each(|row| row[k] *= factor);
    }
    rows
}

fn add(a: [Single; 3], b: [Single; 3]) -> [Single; 3] {
    [a[0] + b[0], a[1] + b[1], a[2] + b[2]]
}
