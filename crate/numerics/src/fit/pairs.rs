//! Two dipoles that explain a map together.

use super::tangent::take_out;
use super::{Fitter, normalise};
use crate::forward::LeadField;
use crate::math::{Cholesky, Vec3, centre, dot};

/// How two dipoles lie to each other. Their moments are free.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Arrangement {
    /// At places that are each other's image in the plane x = 0.
    Mirrored,
    /// Anywhere.
    Free,
}

impl Arrangement {
    /// Numbers that a fit of it determines.
    pub fn parameters(self) -> usize {
        match self {
            Self::Mirrored => 9,
            Self::Free => 12,
        }
    }
}

/// Two fitted dipoles, in head coordinates.
#[derive(Clone, Debug, PartialEq)]
pub struct Pair {
    /// Positions in scalp radii from the centre.
    pub positions: [Vec3; 2],
    /// Moments in nAm, if the map is in µV.
    pub moments: [Vec3; 2],
    /// Residual sum of squares over the sum of squares of the average-referenced map.
    pub residual_variance: f64,
    /// Lengths of the two maps over that of their sum, added: 1 where they do not work against each other.
    pub opposition: f64,
}

/// Starts for pairs in one head with one set of electrodes: coarse positions, and what each two of them explain together.
#[derive(Clone, Debug)]
pub struct PairSearch {
    spots: Vec<Spot>,
    /// Of each two spots that are far enough from each other: their places in the list, and what they have in common.
    couples: Vec<(usize, usize, Crossing)>,
    /// Of spots on the right, with their mirror images.
    mirrored: Vec<(Spot, Spot, Crossing)>,
}

/// A position, and orthonormal columns that span the average-referenced maps of the dipoles there.
#[derive(Clone, Debug)]
struct Spot {
    position: Vec3,
    basis: [Vec<f64>; 3],
}

/// What the columns of two spots have in common: C = B₁ᵀB₂, and L⁻¹ of LLᵀ = 1 − CᵀC.
#[derive(Clone, Debug)]
struct Crossing {
    common: [[f64; 3]; 3],
    inverse: [[f64; 3]; 3],
}

/// Shells of coarse positions: distance from the centre in reaches, and how many.
const SHELLS: [(f64, usize); 4] = [(0.0, 1), (0.38, 12), (0.68, 36), (0.93, 72)];

/// Two sources nearer than this, in reaches, are no start.
const NEAREST: f64 = 0.25;

/// Two pairs whose positions are all nearer than this, in reaches, are one start.
const ALIKE: f64 = 0.35;

/// Pairs that are refined, beside the one that holds the single dipole.
const STARTS: usize = 3;

/// Most steps of a refinement.
const MOST_STEPS: usize = 60;

/// Where a refinement ends: by how much of itself the residual falls in two steps that follow each other.
const SETTLED: f64 = 1e-6;

impl PairSearch {
    /// For the head and the electrodes of a fitter.
    pub fn new(fitter: &Fitter) -> Self {
        let field = fitter.field();
        let golden = core::f64::consts::PI * (3.0 - 5.0f64.sqrt());
        let mut spots = Vec::new();
        for (distance, count) in SHELLS {
            for i in 0..count {
                let z = 1.0 - (2.0 * i as f64 + 1.0) / count as f64;
                let (ring, angle) = ((1.0 - z * z).sqrt(), golden * i as f64);
                let direction = Vec3::new(ring * libm::cos(angle), ring * libm::sin(angle), z);
                spots.push(Spot::new(field, direction * (distance * field.reach())));
            }
        }
        let mut couples = Vec::with_capacity(spots.len() * spots.len() / 2);
        for (i, one) in spots.iter().enumerate() {
            let others = spots[..i].iter().enumerate().filter(|(_, other)| one.apart(other.position, field));
            couples.extend(others.map(|(j, other)| (i, j, Crossing::new(one, other))));
        }
        let right = spots.iter().filter(|spot| spot.position[0] > 0.0 && spot.apart(image(spot.position), field));
        let mirrored = right.map(|spot| {
            let left = Spot::new(field, image(spot.position));
            let crossing = Crossing::new(spot, &left);
            (spot.clone(), left, crossing)
        });
        let mirrored = mirrored.collect();
        Self { spots, couples, mirrored }
    }

    /// The pair that explains a map best; `single` is where one dipole explains it best. `None` for a map that is the same
    /// everywhere.
    pub fn fit(&self, fitter: &Fitter, map: &[f64], arrangement: Arrangement, single: Vec3) -> Option<Pair> {
        let (map, size) = normalise(map)?;
        let field = fitter.field();
        let starts = match arrangement {
            Arrangement::Mirrored => self.mirrored_starts(&map, field.reach()),
            Arrangement::Free => self.free_starts(&map, field, single),
        };
        let refined = starts.into_iter().filter_map(|start| refine(field, &map, arrangement, start));
        let (positions, best) = refined.reduce(|a, b| if b.1.left < a.1.left { b } else { a })?;
        let moments = [0, 1].map(|k| Vec3::new(best.moments[3 * k], best.moments[3 * k + 1], best.moments[3 * k + 2]));
        let length = |k: usize| {
            let part = fitter.project(positions[k], moments[k]);
            dot(&part, &part).sqrt()
        };
        // The map has length 1, and what is left over is perpendicular to what is explained.
        let opposition = (length(0) + length(1)) / (1.0 - best.left).max(1e-12).sqrt();
        let moments = moments.map(|moment| moment * size);
        Some(Pair { positions, moments, residual_variance: best.left, opposition })
    }

    fn free_starts(&self, map: &[f64], field: &LeadField, single: Vec3) -> Vec<[Vec3; 2]> {
        let shares: Vec<[f64; 3]> = self.spots.iter().map(|spot| spot.shares(map)).collect();
        let at = |i: usize| self.spots[i].position;
        let found =
            self.couples.iter().map(|(i, j, common)| (common.explained(&shares[*i], &shares[*j]), [at(*i), at(*j)]));
        let mut starts = distinct(found.collect(), field.reach());
        // The single dipole, and what explains most of what it leaves.
        let here = Spot::new(field, single);
        let own = here.shares(map);
        let others = self.spots.iter().zip(&shares).filter(|(spot, _)| spot.apart(single, field));
        let beside = others.map(|(spot, share)| (Crossing::new(&here, spot).explained(&own, share), spot.position));
        let best = beside.reduce(|a, b| if b.0 > a.0 { b } else { a });
        starts.extend(best.map(|(_, position)| [single, position]));
        starts
    }

    fn mirrored_starts(&self, map: &[f64], reach: f64) -> Vec<[Vec3; 2]> {
        let found = self.mirrored.iter().map(|(right, left, common)| {
            (common.explained(&right.shares(map), &left.shares(map)), [right.position, left.position])
        });
        distinct(found.collect(), reach)
    }
}

impl Spot {
    fn new(field: &LeadField, position: Vec3) -> Self {
        let rows = field.quick(position);
        let mut basis: [Vec<f64>; 3] = Default::default();
        for axis in 0..3 {
            let mut column = rows.column(axis).to_vec();
            centre(&mut column);
            let before = dot(&column, &column);
            take_out(&mut column, &basis[..axis]);
            take_out(&mut column, &basis[..axis]);
            let length = dot(&column, &column);
            // What is left of a column that depends on the others is rounding.
            let factor = if length > 1e-20 * before { 1.0 / length.sqrt() } else { 0.0 };
            column.iter_mut().for_each(|value| *value *= factor);
            basis[axis] = column;
        }
        Self { position, basis }
    }

    fn shares(&self, map: &[f64]) -> [f64; 3] {
        [0, 1, 2].map(|i| dot(&self.basis[i], map))
    }

    fn apart(&self, position: Vec3, field: &LeadField) -> bool {
        (self.position - position).norm() > NEAREST * field.reach()
    }
}

impl Crossing {
    fn new(one: &Spot, other: &Spot) -> Self {
        let common = [0, 1, 2].map(|i| [0, 1, 2].map(|j| dot(&one.basis[i], &other.basis[j])));
        let entry = |i: usize, j: usize| {
            let overlap: f64 = (0..3).map(|k| common[k][i] * common[k][j]).sum();
            // Never quite singular, so that near spots are no start instead of an error.
            if i == j { 1.0 + 1e-9 - overlap } else { -overlap }
        };
        let mut inverse = [[0.0; 3]; 3];
        if let Some(factor) = Cholesky::new(3, entry) {
            // L⁻ᵀ eᵢ is row i of L⁻¹.
            for (i, row) in inverse.iter_mut().enumerate() {
                let unit = [0, 1, 2].map(|j| if i == j { 1.0 } else { 0.0 });
                row.copy_from_slice(&factor.spread(&unit));
            }
        }
        Self { common, inverse }
    }

    /// What both explain of a map together, by what the columns of each have of it: |a|² + |L⁻¹(b − Cᵀa)|².
    #[inline(always)]
    fn explained(&self, a: &[f64; 3], b: &[f64; 3]) -> f64 {
        let c = &self.common;
        let left = [0, 1, 2].map(|j| b[j] - c[0][j] * a[0] - c[1][j] * a[1] - c[2][j] * a[2]);
        let more = self.inverse.map(|row| row[0] * left[0] + row[1] * left[1] + row[2] * left[2]);
        a[0] * a[0] + a[1] * a[1] + a[2] * a[2] + more[0] * more[0] + more[1] * more[1] + more[2] * more[2]
    }
}

/// The image in the plane x = 0.
fn image(position: Vec3) -> Vec3 {
    Vec3::new(-position[0], position[1], position[2])
}

/// The best pairs, each with a position away from those of every pair before it.
fn distinct(mut found: Vec<(f64, [Vec3; 2])>, reach: f64) -> Vec<[Vec3; 2]> {
    let alike = |a: &[Vec3; 2], b: &[Vec3; 2]| {
        let near = |i: usize, j: usize| (a[i] - b[j]).norm() <= ALIKE * reach;
        (near(0, 0) && near(1, 1)) || (near(0, 1) && near(1, 0))
    };
    let mut starts = Vec::with_capacity(STARTS + 1);
    while starts.len() < STARTS {
        let best = found.iter().copied().reduce(|a, b| if b.0 > a.0 { b } else { a });
        let Some((_, pair)) = best else { break };
        starts.push(pair);
        found.retain(|(_, other)| !alike(&pair, other));
    }
    starts
}

/// The best moments of two dipoles at given places.
struct Explained {
    /// Residual sum of squares of a map of unit length.
    left: f64,
    residual: Vec<f64>,
    /// Orthonormal, average-referenced.
    basis: Vec<Vec<f64>>,
    /// In nAm for a map in µV of unit length.
    moments: [f64; 6],
}

/// `None` where the six columns of the lead field depend on each other.
fn explain(field: &LeadField, map: &[f64], positions: [Vec3; 2]) -> Option<Explained> {
    let mut basis: Vec<Vec<f64>> = Vec::with_capacity(6);
    let mut triangle = [[0.0; 6]; 6];
    for (k, position) in positions.into_iter().enumerate() {
        let rows = field.quick(position);
        for axis in 0..3 {
            let mut column = rows.column(axis).to_vec();
            centre(&mut column);
            let before = dot(&column, &column);
            for (i, one) in basis.iter().enumerate() {
                let share = dot(one, &column);
                triangle[i][3 * k + axis] = share;
                column.iter_mut().zip(one).for_each(|(value, one)| *value -= share * one);
            }
            let length = dot(&column, &column);
            if length.is_nan() || length <= 1e-14 * before {
                return None;
            }
            triangle[basis.len()][3 * k + axis] = length.sqrt();
            column.iter_mut().for_each(|value| *value /= length.sqrt());
            basis.push(column);
        }
    }
    let mut residual = map.to_vec();
    let mut moments = [0.0; 6];
    for (i, one) in basis.iter().enumerate() {
        moments[i] = dot(one, &residual);
        residual.iter_mut().zip(one).for_each(|(value, one)| *value -= moments[i] * one);
    }
    for i in (0..6).rev() {
        let known: f64 = (i + 1..6).map(|j| triangle[i][j] * moments[j]).sum();
        moments[i] = (moments[i] - known) / triangle[i][i];
    }
    Some(Explained { left: dot(&residual, &residual), residual, basis, moments })
}

/// Levenberg–Marquardt steps (Marquardt 1963, J Soc Indust Appl Math 11:431–441) of the positions with the moments
/// eliminated, with Kaufman's derivative of the residual (Kaufman 1975, BIT 15:49–57): −P (∂A/∂p) m, P taking out what the
/// lead field explains. Positions stay in the ball of allowed sources; on its surface, while the residual falls outwards,
/// they move along it.
fn refine(
    field: &LeadField,
    map: &[f64],
    arrangement: Arrangement,
    start: [Vec3; 2],
) -> Option<([Vec3; 2], Explained)> {
    let reach = field.reach();
    let free = if arrangement == Arrangement::Mirrored { 3 } else { 6 };
    let mut positions = start;
    let mut here = explain(field, map, positions)?;
    let (mut damping, mut settled) = (1e-2, 0);
    for _ in 0..MOST_STEPS {
        let slopes = slopes(field, arrangement, positions, &here, reach);
        let right: Vec<f64> = slopes.iter().map(|slope| dot(slope, &here.residual)).collect();
        let products: Vec<Vec<f64>> =
            slopes.iter().enumerate().map(|(i, a)| slopes[..=i].iter().map(|b| dot(a, b)).collect()).collect();
        let usual = (0..free).map(|i| products[i][i]).sum::<f64>() / free as f64;
        let mut better = None;
        while better.is_none() && damping < 1e8 {
            let entry = |i: usize, j: usize| products[i][j] + if i == j { damping * (usual + 1e-300) } else { 0.0 };
            let step = Cholesky::new(free, entry)?.solve(&right);
            let target = moved(positions, &step, arrangement, reach);
            better = explain(field, map, target).filter(|there| there.left < here.left).map(|there| (target, there));
            damping *= if better.is_some() { 0.2 } else { 8.0 };
        }
        let Some((target, there)) = better else { break };
        settled = if here.left - there.left <= SETTLED * here.left { settled + 1 } else { 0 };
        (positions, here) = (target, there);
        if settled == 2 {
            break;
        }
    }
    Some((positions, here))
}

fn moved(positions: [Vec3; 2], step: &[f64], arrangement: Arrangement, reach: f64) -> [Vec3; 2] {
    let within = |p: Vec3| if p.norm() > reach { p * (reach / p.norm()) } else { p };
    let by = |k: usize| Vec3::new(step[3 * k], step[3 * k + 1], step[3 * k + 2]);
    let first = within(positions[0] + by(0));
    match arrangement {
        // On the other side of the plane the two only change their names.
        Arrangement::Mirrored => [first, image(first)],
        Arrangement::Free => [first, within(positions[1] + by(1))],
    }
}

/// P (∂A/∂p) m for each coordinate that is free; without the part outwards where the surface holds a position.
fn slopes(
    field: &LeadField,
    arrangement: Arrangement,
    positions: [Vec3; 2],
    here: &Explained,
    reach: f64,
) -> Vec<Vec<f64>> {
    let mut slopes: Vec<Vec<f64>> = Vec::with_capacity(6);
    for (k, position) in positions.into_iter().enumerate() {
        let gradient = field.gradient(position);
        let m = Vec3::new(here.moments[3 * k], here.moments[3 * k + 1], here.moments[3 * k + 2]);
        // From the rows (xx, xy, xz, yy, yz, zz).
        slopes.extend([[0, 1, 2], [1, 3, 4], [2, 4, 5]].map(|places| -> Vec<f64> {
            gradient.rows().into_iter().map(|row| Vec3(places.map(|place| row[place])).dot(m)).collect()
        }));
    }
    if arrangement == Arrangement::Mirrored {
        let images = slopes.split_off(3);
        for (axis, (slope, other)) in slopes.iter_mut().zip(images).enumerate() {
            let sign = if axis == 0 { -1.0 } else { 1.0 };
            slope.iter_mut().zip(other).for_each(|(value, other)| *value += sign * other);
        }
    }
    for slope in &mut slopes {
        centre(slope);
        take_out(slope, &here.basis);
    }
    for (own, position) in slopes.chunks_mut(3).zip(positions) {
        let Some(outwards) = position.unit().filter(|_| position.norm() >= reach * (1.0 - 1e-10)) else { continue };
        let down = Vec3([0, 1, 2].map(|axis| dot(&own[axis], &here.residual)));
        if down.dot(outwards) > 0.0 {
            let radial: Vec<f64> =
                (0..own[0].len()).map(|i| (0..3).map(|axis| own[axis][i] * outwards[axis]).sum()).collect();
            for axis in 0..3 {
                own[axis].iter_mut().zip(&radial).for_each(|(value, radial)| *value -= outwards[axis] * radial);
            }
        }
    }
    slopes
}
