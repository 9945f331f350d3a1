//! Chance for the tests, from a seed: the same numbers in every run.
use inward_core::Vec3;
use rand::{RngExt, SeedableRng};
use rand_pcg::Pcg64;

/// A source of chance.
pub struct Draw(Pcg64);

impl Draw {
    /// Starts from a seed.
    pub fn from(seed: u64) -> Self {
        Self(Pcg64::seed_from_u64(seed))
    }

    /// Evenly distributed between two limits.
    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.0.random::<f64>()
    }

    /// One of the numbers below `count`.
    pub fn below(&mut self, count: usize) -> usize {
        self.0.random_range(0..count)
    }

    /// Normally distributed, mean 0, deviation 1 (Box & Muller 1958).
    pub fn normal(&mut self) -> f64 {
        let radius = (-2.0 * (1.0 - self.0.random::<f64>()).ln()).sqrt();
        radius * (std::f64::consts::TAU * self.0.random::<f64>()).cos()
    }

    /// So many normal numbers.
    pub fn noise(&mut self, count: usize) -> Vec<f64> {
        (0..count).map(|_| self.normal()).collect()
    }

    /// A unit vector, all directions alike.
    pub fn direction(&mut self) -> Vec3 {
        let v = Vec3::new(self.normal(), self.normal(), self.normal());
        v * (1.0 / v.norm())
    }

    /// A position with this range of distances from the centre, above the neck.
    pub fn position(&mut self, low: f64, high: f64) -> Vec3 {
        loop {
            let direction = self.direction();
            if direction[2] > -0.4 {
                return direction * self.between(low, high);
            }
        }
    }

    /// A rotation about the origin.
    pub fn rotation(&mut self) -> impl Fn(Vec3) -> Vec3 + use<> {
        // The images of the axes.
        let x = self.direction();
        let z = x.cross(self.direction());
        let z = z * (1.0 / z.norm());
        let y = z.cross(x);
        move |p| x * p[0] + y * p[1] + z * p[2]
    }

    /// The numbers below `count` in chance order.
    pub fn order(&mut self, count: usize) -> Vec<usize> {
        let mut order: Vec<usize> = (0..count).collect();
        for i in (1..count).rev() {
            order.swap(i, self.0.random_range(0..=i));
        }
        order
    }
}
