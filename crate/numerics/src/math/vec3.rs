use core::ops::{Add, AddAssign, Index, Mul, Neg, Sub};

/// A vector in space; which frame and unit is said where it is used.
#[derive(Clone, Copy, Debug, Default, PartialEq, serde::Serialize, serde::Deserialize)]
#[serde(from = "[f64; 3]", into = "[f64; 3]")]
pub struct Vec3(pub [f64; 3]);

impl Vec3 {
    /// The origin.
    pub const ZERO: Self = Self([0.0; 3]);

    /// From components.
    pub const fn new(x: f64, y: f64, z: f64) -> Self {
        Self([x, y, z])
    }

    /// Scalar product.
    #[inline]
    pub fn dot(self, other: Self) -> f64 {
        self.0[0] * other.0[0] + self.0[1] * other.0[1] + self.0[2] * other.0[2]
    }

    /// Vector product.
    pub fn cross(self, other: Self) -> Self {
        let ([a, b, c], [x, y, z]) = (self.0, other.0);
        Self([b * z - c * y, c * x - a * z, a * y - b * x])
    }

    /// Euclidean length.
    #[inline]
    pub fn norm(self) -> f64 {
        self.dot(self).sqrt()
    }

    /// The unit vector of the same direction; `None` for the zero vector.
    pub fn unit(self) -> Option<Self> {
        let norm = self.norm();
        (norm > 0.0).then(|| self * (1.0 / norm))
    }

    /// Whether all components are finite.
    pub fn is_finite(self) -> bool {
        self.0.iter().all(|c| c.is_finite())
    }
}

impl From<[f64; 3]> for Vec3 {
    fn from(components: [f64; 3]) -> Self {
        Self(components)
    }
}
impl From<Vec3> for [f64; 3] {
    fn from(vector: Vec3) -> Self {
        vector.0
    }
}
impl Add for Vec3 {
    type Output = Self;
    #[inline]
    fn add(self, other: Self) -> Self {
        Self([self.0[0] + other.0[0], self.0[1] + other.0[1], self.0[2] + other.0[2]])
    }
}
impl AddAssign for Vec3 {
    fn add_assign(&mut self, other: Self) {
        *self = *self + other;
    }
}
impl Sub for Vec3 {
    type Output = Self;
    #[inline]
    fn sub(self, other: Self) -> Self {
        Self([self.0[0] - other.0[0], self.0[1] - other.0[1], self.0[2] - other.0[2]])
    }
}
impl Neg for Vec3 {
    type Output = Self;
    #[inline]
    fn neg(self) -> Self {
        Self([-self.0[0], -self.0[1], -self.0[2]])
    }
}
impl Mul<f64> for Vec3 {
    type Output = Self;
    #[inline]
    fn mul(self, factor: f64) -> Self {
        Self([self.0[0] * factor, self.0[1] * factor, self.0[2] * factor])
    }
}
impl Index<usize> for Vec3 {
    type Output = f64;
    #[inline]
    fn index(&self, index: usize) -> &f64 {
        &self.0[index]
    }
}
