//! Several numbers at once in wide registers, with sums in a written order.

use wide::{f32x8, f64x4};

/// Four numbers that are computed with alike in wide registers. Lanes never mix, except in [`sum`] in a written order;
/// hence the width of the registers changes no bit.
pub type Lanes = f64x4;

/// Numbers side by side in [`Lanes`].
pub const WIDTH: usize = 4;

/// Numbers in blocks, the last one filled up with zeros.
pub fn blocks(values: &[f64]) -> Vec<Lanes> {
    let block = |chunk: &[f64]| Lanes::new(core::array::from_fn(|lane| chunk.get(lane).copied().unwrap_or(0.0)));
    values.chunks(WIDTH).map(block).collect()
}

/// The sum of the lanes.
#[inline]
pub fn sum(lanes: Lanes) -> f64 {
    let [a, b, c, d] = lanes.to_array();
    (a + b) + (c + d)
}

/// Scalar product of two equally long rows of blocks.
#[inline]
pub fn dot(a: &[Lanes], b: &[Lanes]) -> f64 {
    sum(a.iter().zip(b).fold(Lanes::ZERO, |sum, (x, y)| sum + *x * *y))
}

/// Eight numbers of single precision, for searches only.
pub type NarrowLanes = f32x8;

/// The same for [`NarrowLanes`].
pub fn narrow_blocks(values: &[f64]) -> Vec<NarrowLanes> {
    let lane = |value: Option<&f64>| value.map_or(0.0, |value| *value as f32);
    values.chunks(8).map(|chunk| NarrowLanes::new(core::array::from_fn(|k| lane(chunk.get(k))))).collect()
}

/// The same for [`NarrowLanes`].
#[inline]
pub fn narrow_dot(a: &[NarrowLanes], b: &[NarrowLanes]) -> f32 {
    let sum = a.iter().zip(b).fold(NarrowLanes::ZERO, |sum, (x, y)| sum + *x * *y);
    let [a, b, c, d, e, f, g, h] = sum.to_array();
    ((a + b) + (c + d)) + ((e + f) + (g + h))
}
