//! Maps whose sources are known, in heads that are not as modelled: made by the tests' own series.
use crate::{Draw, Electrodes, PlainSeries};
use inward_core::Vec3;
use inward_core::math::{centre, dot};

/// Radius of the brain in scalp radii.
pub const BRAIN: f64 = 79.0 / 88.0;

/// Electrodes on heads as they may be.
pub struct Truth {
    /// Where the electrodes should be.
    pub electrodes: Electrodes,
    /// Heads with skull ratios from 15 to 40.
    pub heads: Vec<PlainSeries>,
}

impl Truth {
    /// Twelve heads.
    pub fn new(electrodes: Electrodes) -> Self {
        let ratios = (0..12).map(|k| 15.0 * (40.0f64 / 15.0).powf((f64::from(k) + 0.5) / 12.0));
        let head = |ratio: f64| {
            PlainSeries::new(&[(BRAIN, 0.33), (81.0 / 88.0, 1.79), (85.0 / 88.0, 0.33 / ratio), (1.0, 0.33)], 88.0)
        };
        Self { electrodes, heads: ratios.map(head).collect() }
    }

    /// Electrodes off by 5 mm along the scalp (root mean square).
    pub fn misplaced(&self, draw: &mut Draw) -> Vec<Vec3> {
        let moved = |e: &Vec3| {
            let step = Vec3::new(draw.normal(), draw.normal(), draw.normal()) * (5.0 / 88.0 / 2f64.sqrt());
            (*e + step - *e * e.dot(step)).unit().unwrap()
        };
        self.electrodes.directions.iter().map(moved).collect()
    }

    /// The average-referenced map of a dipole in the head of this number.
    pub fn map(&self, head: usize, electrodes: &[Vec3], position: Vec3, moment: Vec3) -> Vec<f64> {
        let mut map: Vec<f64> =
            self.heads[head].lead(position, electrodes, 1e-7).iter().map(|row| row.dot(moment)).collect();
        centre(&mut map);
        map
    }

    /// Noise of 30 weak sources in the same head, of unit length.
    pub fn background(&self, head: usize, electrodes: &[Vec3], draw: &mut Draw) -> Vec<f64> {
        let mut sum = vec![0.0; electrodes.len()];
        for _ in 0..30 {
            let map = self.map(head, electrodes, source(draw), draw.direction());
            sum.iter_mut().zip(map).for_each(|(sum, value)| *sum += value);
        }
        unit(sum)
    }
}

/// A position in scalp radii, even in the upper part of the brain up to eccentricity 0.9.
pub fn source(draw: &mut Draw) -> Vec3 {
    loop {
        let p = Vec3::new(draw.between(-0.9, 0.9), draw.between(-0.9, 0.9), draw.between(-0.9, 0.9));
        if p.norm() <= 0.9 && p[2] >= -0.5 + 0.25 * p[1] {
            return p * BRAIN;
        }
    }
}

/// Of unit length.
pub fn unit(mut map: Vec<f64>) -> Vec<f64> {
    let length = dot(&map, &map).sqrt();
    map.iter_mut().for_each(|value| *value /= length);
    map
}

/// Noise of unit length, so many decibels under the map.
pub fn add(map: &mut [f64], noise: &[f64], decibels: f64) {
    let size = (dot(map, map) * 10f64.powf(-decibels / 10.0)).sqrt();
    map.iter_mut().zip(noise).for_each(|(value, noise)| *value += size * noise);
}
