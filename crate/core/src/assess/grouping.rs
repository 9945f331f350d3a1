use crate::math::{Hierarchy, Vec3, silhouettes, sort_by_number};
use core::ops::RangeInclusive;

/// Scalp radius of the head that dipoles of several people are put into, each scaled by the radius of its own.
pub const CANONICAL_RADIUS_MM: f64 = 88.0;

/// Numbers of groups that are compared.
const COMPARED: RangeInclusive<usize> = 2..=12;

/// Most groups that can be asked for.
pub const MOST_GROUPS: usize = 24;

/// Dipoles grouped by place and axis: Ward's hierarchy of points whose squared distance is that of the places in mm² and
/// `axis_mm`² sin² of the angle between the axes, which have no sign.
#[derive(Clone, Debug)]
pub struct Grouping {
    /// The mean silhouette for each number of groups.
    pub criterion: Vec<(usize, f64)>,
    /// Number of groups: as asked for, else where the mean silhouette is largest.
    pub count: usize,
    /// The group of each dipole, largest group first, those of one size in the order of their first dipoles.
    pub groups: Vec<usize>,
}

impl Grouping {
    /// Of dipoles with a place in mm in the canonical head and a unit axis.
    pub fn new(dipoles: &[(Vec3, Vec3)], axis_mm: f64, asked: Option<usize>) -> Self {
        // |u uᵀ − v vᵀ|² = 2 sin²; entries off the diagonal stand twice in the matrix.
        let weight = axis_mm * core::f64::consts::FRAC_1_SQRT_2;
        let twice = weight * core::f64::consts::SQRT_2;
        let points: Vec<[f64; 9]> = dipoles
            .iter()
            .map(|&(Vec3([x, y, z]), Vec3([u, v, w]))| {
                let (diagonal, off) = ([u * u, v * v, w * w], [u * v, u * w, v * w]);
                let ([a, b, c], [d, e, f]) = (diagonal.map(|one| weight * one), off.map(|one| twice * one));
                [x, y, z, a, b, c, d, e, f]
            })
            .collect();
        let hierarchy = Hierarchy::ward(&points);
        // With a group for each dipole there is nothing to compare.
        let numbers: Vec<usize> = COMPARED.filter(|number| *number < dipoles.len()).collect();
        let cuts: Vec<Vec<usize>> = numbers.iter().map(|number| hierarchy.cut(*number)).collect();
        let values = silhouettes(&points, &cuts);
        let criterion: Vec<(usize, f64)> =
            numbers.into_iter().zip(values).filter_map(|(number, value)| Some((number, value?))).collect();
        let best = criterion.iter().fold(None, |best: Option<(usize, f64)>, one| match best {
            Some((_, value)) if value >= one.1 => best,
            _ => Some(*one),
        });
        let count = asked.or(best.map(|(number, _)| number)).unwrap_or(1).min(dipoles.len());
        let groups = hierarchy.cut(count);
        let mut sizes: Vec<(usize, usize)> = (0..count).map(|group| (group, 0)).collect();
        groups.iter().for_each(|group| sizes[*group].1 += 1);
        sort_by_number(&mut sizes, |(_, size)| -(*size as f64));
        let mut place = vec![0; count];
        sizes.iter().enumerate().for_each(|(at, (group, _))| place[*group] = at);
        Self { criterion, count, groups: groups.into_iter().map(|group| place[group]).collect() }
    }
}
