//! Several numbers at once in wide registers, with sums in a written order.

use super::Vec3;
use core::fmt::Debug;
use core::ops::{Add, AddAssign, Div, Mul, Neg, Sub};

/// Numbers of double precision: all that is answered.
pub type Double = wide::f64x2;

/// Numbers of single precision: for searches only.
pub type Single = wide::f32x4;

/// A register of numbers that are computed with alike. Lanes never mix, except in [`Lanes::sum`] in a written order;
/// hence what the machine makes of a register changes no bit.
pub trait Lanes:
    Copy
    + Debug
    + Default
    + Add<Output = Self>
    + AddAssign
    + Sub<Output = Self>
    + Mul<Output = Self>
    + Div<Output = Self>
    + Neg<Output = Self>
{
    /// Numbers side by side.
    const WIDTH: usize;

    /// The same number in every lane.
    fn splat(value: f64) -> Self;

    /// At most so many numbers as there are lanes; the rest are zero.
    fn pack(values: &[f64]) -> Self;

    /// Square roots, correctly rounded.
    fn sqrt(self) -> Self;

    /// The sum of the lanes.
    fn sum(self) -> f64;

    /// Writes the first lanes.
    fn unpack(self, values: &mut [f64]);
}

impl Lanes for Double {
    const WIDTH: usize = 2;

    #[inline(always)]
    fn splat(value: f64) -> Self {
        Self::new([value; 2])
    }

    fn pack(values: &[f64]) -> Self {
        Self::new(core::array::from_fn(|lane| values.get(lane).copied().unwrap_or(0.0)))
    }

    #[inline(always)]
    fn sqrt(self) -> Self {
        self.sqrt()
    }

    #[inline(always)]
    fn sum(self) -> f64 {
        let [a, b] = self.to_array();
        a + b
    }

    fn unpack(self, values: &mut [f64]) {
        values.iter_mut().zip(self.to_array()).for_each(|(value, lane)| *value = lane);
    }
}

impl Lanes for Single {
    const WIDTH: usize = 4;

    #[inline(always)]
    fn splat(value: f64) -> Self {
        Self::new([value as f32; 4])
    }

    fn pack(values: &[f64]) -> Self {
        Self::new(core::array::from_fn(|lane| values.get(lane).map_or(0.0, |value| *value as f32)))
    }

    #[inline(always)]
    fn sqrt(self) -> Self {
        self.sqrt()
    }

    #[inline(always)]
    fn sum(self) -> f64 {
        let [a, b, c, d] = self.to_array();
        f64::from((a + b) + (c + d))
    }

    fn unpack(self, values: &mut [f64]) {
        values.iter_mut().zip(self.to_array()).for_each(|(value, lane)| *value = f64::from(lane));
    }
}

/// A vector in every lane. Written out, as all that is called at each electrode: what takes a closure is not copied into its
/// caller in the browser's code.
#[inline(always)]
pub fn splat3<L: Lanes>(v: Vec3) -> [L; 3] {
    [L::splat(v[0]), L::splat(v[1]), L::splat(v[2])]
}

/// The sums of the lanes of three registers.
#[inline(always)]
pub fn sum3<L: Lanes>(lanes: &[L; 3]) -> Vec3 {
    Vec3::new(lanes[0].sum(), lanes[1].sum(), lanes[2].sum())
}

/// Numbers in blocks, the last one filled up with zeros.
pub fn blocks<L: Lanes>(values: &[f64]) -> Vec<L> {
    values.chunks(L::WIDTH).map(L::pack).collect()
}
